"""The printed cradle: what it holds, and the pieces it is printed in.

In one piece where the bed takes it; else in sections along x, and where the conductors are wider than the bed, with
outriggers along y that carry their ends. All sizes are in the cradle's own frame, see `cradle_model`.
"""

from __future__ import annotations

from dataclasses import replace
from itertools import pairwise

from boomwright.design.centreline import straight_half_mm
from boomwright.design.model import Boom, Design
from boomwright.errors import Fault
from boomwright.plan.cradle_budget import budget_faults, budget_sizes
from boomwright.plan.cradle_labels import name_plate
from boomwright.plan.cradle_layout import Arm, Layout, Part, lay_out, make_section
from boomwright.plan.cradle_model import CradlePlan, Ground, Held, Section, Span
from boomwright.plan.joint import Joint, flank_play_mm, joint_box
from boomwright.plan.outrigger import Group, plan_groups, plan_outriggers, socket_depth_mm
from boomwright.plan.rails import UNLIMITED, Limit, plan_axis_height, plan_stops
from boomwright.plan.saddle import TIE_SLOT_MM, all_spans, clipped, free_spans, make_saddles
from boomwright.plan.seat import SeatPlan
from boomwright.plan.sections import Splice, Spread, choose_cuts, inner_span, plan_splice, where
from boomwright.plan.size import Size
from boomwright.shop.profile import Shop

__all__ = ["CradlePlan", "Held", "cradle_left_out", "held_conductors", "plan_cradle"]

LARGER_BED = "use a printer with a larger bed, shorten boom or rods, or name the other parts with --only"
MOST_SECTIONS = 99


def held_conductors(design: Design) -> tuple[Held, ...]:
    """The conductors that lie in the cradle, in order along the boom: rods, and a straight or flat folded element."""
    found = [
        Held(r.tag, f"rod[{r.file_index}]", r.at_mm, r.outer_diameter_mm / 2.0, r.length_mm / 2.0, r.length_mm / 2.0)
        for r in design.rods
    ]
    driven = design.driven
    if driven.form == "straight" or (driven.form == "folded" and driven.plane == "flat"):
        assert driven.length_mm is not None
        reach, tip, r = straight_half_mm(driven), driven.length_mm / 2.0, driven.outer_diameter_mm / 2.0
        found.append(Held("DE", "driven", driven.at_mm, r, reach, tip))
        if driven.form == "folded":
            assert driven.spacing_mm is not None
            found.append(Held("DE-front", "driven", driven.at_mm + driven.spacing_mm, r, reach, tip))
    return tuple(sorted(found, key=lambda h: h.at_mm))


def cradle_left_out(design: Design) -> str | None:
    """Why a design has no cradle, or None."""
    if held_conductors(design):
        return None
    return "no conductor lies on the datum plane: the driven element is fitted to the boom by its mould"


def plan_cradle(design: Design, boom: Boom, shop: Shop, seat: SeatPlan) -> tuple[CradlePlan, list[Size], list[Fault]]:
    """The cradle for a design that has conductors on the datum plane, its sizes, and what stands against it."""
    held = held_conductors(design)
    height, sizes = plan_axis_height(boom, shop, seat, held)
    ground = Ground(design, boom, shop, seat, held, height)
    whole, whole_sizes, faults = _in_one(ground)
    if faults or _overrun_mm(whole, whole.sections[0], shop) <= 1e-9:
        return whole, sizes + whole_sizes, faults
    _, (low_y, high_y), (_, top) = whole.extent_mm
    if top > shop.printer.bed_mm[2]:
        found = f"the cradle is {top:.1f} mm high, the printer builds {shop.printer.bed_mm[2]:g}"
        return whole, sizes + whole_sizes, [Fault("printer.bed_mm", found, "use a printer that builds higher")]
    ways = [_in_sections(ground, bed) for bed in _beds(shop, high_y - low_y)]
    sound = [way for way in ways if not way[2]]
    cradle, more, faults = min(sound, key=_preference) if sound else ways[0]
    return cradle, sizes + more, faults


def _preference(way: tuple[CradlePlan, list[Size], list[Fault]]) -> tuple[float, int]:
    """Rails far apart first, then few pieces."""
    cradle = way[0]
    return -(cradle.rails[1] if cradle.rails else 0.0), len(cradle.sections)


def _beds(shop: Shop, width_mm: float) -> list[Span]:
    """The ways to lay sections on the bed, as its (x, y): those that take the whole width, or else both, wide first."""
    x, y, _ = shop.printer.bed_mm
    ways = list(dict.fromkeys([(x, y), (y, x)]))
    return [way for way in ways if width_mm <= way[1] + 1e-9] or sorted(ways, key=lambda way: -way[1])


def _overrun_mm(cradle: CradlePlan, section: Section, shop: Shop) -> float:
    """How far a section overruns the bed, either way round [mm]; 0 or less when it fits."""
    (x0, x1), (y0, y1) = section.plan_extent_mm
    bed_x, bed_y, bed_z = shop.printer.bed_mm
    x, y = x1 - x0, y1 - y0
    return max(cradle.top_of(section) - bed_z, min(max(x - bed_x, y - bed_y), max(x - bed_y, y - bed_x)))


def _in_one(ground: Ground) -> tuple[CradlePlan, list[Size], list[Fault]]:
    layout, sizes, faults = lay_out(ground, UNLIMITED, ())
    if not faults:
        layout = _with_saddles(ground, layout, all_spans([s.x_mm for s in layout.saddles], free_spans(ground)[1:-1]))
    section = make_section(layout, Part(1, layout.ends_mm, words=(ground.design.name,)))
    return _plan(ground, layout, (section,)), sizes, faults


def _with_saddles(ground: Ground, layout: Layout, spans: list[Span]) -> Layout:
    return replace(layout, saddles=make_saddles(ground, layout.rails, spans))


def _plan(ground: Ground, layout: Layout, sections: tuple[Section, ...], joints: tuple[Joint, ...] = ()) -> CradlePlan:
    held, relief = ground.held, ground.shop.cradle.relief_mm
    return CradlePlan(
        ground.height_mm, held, layout.rails, layout.bearers, layout.stops, layout.saddles, sections, relief, joints
    )


def _in_sections(ground: Ground, bed_mm: Span) -> tuple[CradlePlan, list[Size], list[Fault]]:
    """The cradle parted for a bed of this x and y."""
    clearance = ground.shop.printer.press_clearance_mm
    groups = plan_groups(ground, plan_stops(ground), bed_mm[1])
    layout, sizes, faults = _laid_out(ground, groups, bed_mm[1])
    splice = plan_splice(layout.strip_mm[0], clearance)
    cuts = _cuts(ground, layout, splice, bed_mm[0]) if splice is not None and not faults else None
    if splice is None or cuts is None:
        return _plan(ground, layout, ()), sizes, faults or [_no_cut(ground)]
    outriggers, chains, faults = plan_outriggers(ground, groups, lambda group: _stem_at(cuts, group.held[0].at_mm))
    if faults:
        return _plan(ground, layout, ()), sizes, faults
    layout, sections = _parted(ground, layout, splice, cuts, outriggers)
    play = flank_play_mm(clearance)
    joints = tuple(Joint(a.stem, b.stem, (1, 0), joint_box(a.tenons), play) for a, b in pairwise(sections))
    cradle = _plan(ground, layout, (*sections, *outriggers), (*joints, *chains))
    over = [s for s in cradle.sections if _overrun_mm(cradle, s, ground.shop) > 1e-9]
    faults = [_no_cut(ground)] if over else budget_faults(cradle, ground.shop)
    sizes += budget_sizes(cradle, ground.shop, [(cut, where(ground, cut)) for cut in cuts])
    return cradle, sizes, faults


def _laid_out(ground: Ground, groups: tuple[Group, ...], bed_mm: float) -> tuple[Layout, list[Size], list[Fault]]:
    """Everything before it is parted; slots for ties that stand past the rails keep clear of outriggers' sockets."""
    if not groups:
        return lay_out(ground, UNLIMITED, groups)
    outer = min(g.face_mm for g in groups) - socket_depth_mm(ground.shop.printer.press_clearance_mm)
    laid = lay_out(ground, Limit(outer, bed_mm), groups)
    rails = laid[0].rails
    if rails is not None and any(s.tie_y_mm[0] > rails[1] for s in laid[0].saddles):
        return lay_out(ground, Limit(outer - TIE_SLOT_MM[1], bed_mm), groups)
    return laid


def _stem_at(cuts: tuple[float, ...], x_mm: float) -> str:
    return f"cradle-{1 + sum(cut < x_mm for cut in cuts)}"


def _words(ground: Ground, sections: int) -> tuple[str, ...]:
    return ground.design.name, f"1/{sections}"


def _cuts(ground: Ground, layout: Layout, splice: Splice, room_mm: float) -> tuple[float, ...] | None:
    rear, front = layout.ends_mm
    (rear, _), _ = name_plate(("FORWARD", *_words(ground, MOST_SECTIONS)), rear, layout.reach_mm)[0]
    troughs = layout.bearers[1:] if layout.rails else ()
    free = tuple(free_spans(ground))
    spread = Spread((rear, front), layout.stops, troughs, layout.groups, layout.saddles, free)
    return choose_cuts(ground, spread, splice, room_mm)


def _parted(
    ground: Ground, layout: Layout, splice: Splice, cuts: tuple[float, ...], outriggers: tuple[Section, ...]
) -> tuple[Layout, tuple[Section, ...]]:
    """The sections, and the layout with the saddles that they ask for."""
    edges = list(pairwise((layout.ends_mm[0], *cuts, layout.ends_mm[1])))
    last = len(edges)
    parts = [
        Part(i, edge, splice, _words(ground, last) if i == 1 else (), i == 1, i == last)
        for i, edge in enumerate(edges, 1)
    ]
    inner = [inner_span(part.x_mm, splice, part.first, part.last) for part in parts]
    free = free_spans(ground)
    rooms = [room for span in inner for room in clipped(free, span)]
    layout = _with_saddles(ground, layout, all_spans([s.x_mm for s in layout.saddles], rooms, inner))
    arms = [Arm(group, _numbers(group, outriggers)) for group in layout.groups]
    return layout, tuple(make_section(layout, part, arms) for part in parts)


def _numbers(group: Group, outriggers: tuple[Section, ...]) -> tuple[int, int]:
    """The numbers of a group's first outriggers, at +y and at -y."""
    found = [
        next(i for i, s in enumerate(outriggers, 1) if s.side == side and s.serves[0] == group.held[0].tag)
        for side in (1, -1)
    ]
    return found[0], found[1]


def _no_cut(ground: Ground) -> Fault:
    x, y, _ = ground.shop.printer.bed_mm
    found = (
        f"the cradle cannot be parted for a bed of {x:g} x {y:g}: no section of it would hold rods, saddle and joint"
    )
    return Fault("printer.bed_mm", found, LARGER_BED)
