"""The boom's sheet: side view and plan with every seat from one datum, a section through a seat, the seats' sizes."""

from __future__ import annotations

import math
from collections.abc import Sequence
from itertools import groupby
from typing import TYPE_CHECKING

from boomwright.plan.drawing_marks import Block, Point, shown
from boomwright.plan.drawing_sheet import detail_scale, notes_block, scale_words, table_block
from boomwright.plan.drawing_view import View
from boomwright.plan.seat import Groove, SeatPlan

if TYPE_CHECKING:
    from boomwright.plan.plan import Plan

DETAIL_MM = 34.0
SEAT_HEAD = ("groove", "radius", "depth")
HOLE_HEAD = ("hole", "bore")
POCKET_HEAD = ("pocket", "along", "across")


def boom_blocks(plan: Plan, scale: float) -> Sequence[Block]:
    """What stands on the boom's sheet at a scale; the first block is true to it."""
    seat = plan.seat
    blocks = [_views(plan, scale), _section(plan)]
    if seat.grooves:
        blocks.append(_profile(plan))
    blocks += seat_tables(plan)
    return [*blocks, notes_block(_notes(plan))]


def seats(seat: SeatPlan) -> list[tuple[str, float]]:
    """Tag and place of every seat."""
    return [(g.tag, g.at_mm) for g in seat.grooves] + [(h.tag, h.at_mm) for h in seat.holes]


def seat_tables(plan: Plan) -> list[Block]:
    """Sizes of grooves, pockets and holes; seats of one size share a row."""
    seat, found = plan.seat, []
    if seat.grooves:
        kinds = {(shown(g.radius_mm), shown(g.depth_mm)): "" for g in seat.grooves}
        rows = [(tags_of(plan, kind), *kind) for kind in kinds]
        found.append(table_block(SEAT_HEAD, rows, 12))
    pockets = [g for g in seat.grooves if g.pocket]
    if pockets:
        sizes = [(g.tag, shown(2.0 * g.pocket.half_x_mm), shown(2.0 * g.pocket.half_y_mm)) for g in pockets if g.pocket]
        found.append(table_block(POCKET_HEAD, sizes))
    if seat.holes:
        bores = {shown(h.diameter_mm): "" for h in seat.holes}
        found.append(table_block(HOLE_HEAD, [(in_short(_holes(seat, bore)), bore) for bore in bores], 12))
    return found


def _holes(seat: SeatPlan, bore: str) -> list[str]:
    return [h.tag for h in seat.holes if shown(h.diameter_mm) == bore]


def tags_of(plan: Plan, kind: tuple[str, str]) -> str:
    """The grooves of a radius and depth as drawn."""
    return in_short([g.tag for g in plan.seat.grooves if (shown(g.radius_mm), shown(g.depth_mm)) == kind])


def in_short(tags: Sequence[str]) -> str:
    """Tags in a row, runs of directors as `D2-D5`."""
    numbered = [(int(tag[1:]) if tag[0] == "D" and tag[1:].isdigit() else None, tag) for tag in tags]
    words = []
    for _, group in groupby(enumerate(numbered), key=lambda one: None if one[1][0] is None else one[1][0] - one[0]):
        run = [tag for _, (_, tag) in group]
        words += [f"{run[0]}-{run[-1]}"] if len(run) > 2 and run[0][1:].isdigit() else run
    return ", ".join(words)


def _views(plan: Plan, scale: float) -> Block:
    """Side view with running dimensions above it; plan view below it, as the first angle has it."""
    seat, half = plan.seat, plan.seat.half_width_mm
    side = View(scale)
    side.run(_side_outline(seat), closed=True)
    mark = max(1.5, 3.0 / scale * 0.5)
    side.run([(seat.start_mm - mark, seat.axis_mm), (seat.end_mm + mark, seat.axis_mm)], "CENTRE")
    if plan.boom.wall_mm > 0.0:
        inner = half - plan.boom.wall_mm
        for z in (seat.axis_mm - inner, seat.axis_mm + inner):
            side.run([(seat.start_mm, z), (seat.end_mm, z)], "HIDDEN")
    for hole in seat.holes:
        side.circle((hole.at_mm, 0.0), hole.diameter_mm / 2.0, cross=False)
        side.run([(hole.at_mm, seat.bottom_mm - mark), (hole.at_mm, seat.top_mm + mark)], "CENTRE")
    marks = [("boom start", "END", seat.start_mm), *((f"{t} at", t, x) for t, x in seats(seat))]
    marks.append(("boom end", "END", seat.end_mm))
    side.running(marks, seat.top_mm, side.at((0.0, seat.top_mm))[1] + 7.0)
    below = View(scale, (0.0, side.at((0.0, seat.bottom_mm))[1] - 9.0 - half * scale))
    _plan_view(plan, below)
    low = below.at((0.0, -half))[1] - 9.0
    below.straight("boom length", "x", ((seat.start_mm, -half), (seat.end_mm, -half)), low)
    below.write("PLAN (seen from above)", (below.at((seat.start_mm, 0.0))[0], low - 6.0))
    side.take(below)
    return side.block()


def _side_outline(seat: SeatPlan) -> list[tuple[float, ...]]:
    """The boom from the side: its grooves are open at the top."""
    top, points = seat.top_mm, list[tuple[float, ...]]()
    points += [(seat.start_mm, top), (seat.start_mm, seat.bottom_mm), (seat.end_mm, seat.bottom_mm), (seat.end_mm, top)]
    for groove in sorted(seat.grooves, key=lambda g: -g.at_mm):
        x, r = groove.at_mm, groove.radius_mm
        points += [(x + r, top), (x + r, 0.0, -1.0), (x - r, 0.0), (x - r, top)]
    return points


def _plan_view(plan: Plan, view: View) -> None:
    seat, half = plan.seat, plan.seat.half_width_mm
    mark = 3.0 / view.scale
    view.rectangle((seat.start_mm, seat.end_mm), (-half, half))
    view.run([(seat.start_mm - mark, 0.0), (seat.end_mm + mark, 0.0)], "CENTRE")
    for groove in seat.grooves:
        for side in (1.0, -1.0):
            x, y = groove.at_mm + side * groove.radius_mm, _reach(plan, 0.0)
            pocket = min(groove.pocket.half_y_mm, half) if groove.pocket else 0.0
            for sign in (1.0, -1.0):
                view.run([(x, sign * pocket), (x, sign * y)])
                if groove.pocket:
                    far = groove.at_mm + side * groove.pocket.half_x_mm
                    view.run([(x, sign * pocket), (far, sign * pocket), (far, 0.0)])
                view.run([(groove.at_mm + side * u, sign * v) for u, v in _mouth(plan, groove)])
        view.run([(groove.at_mm, -half - mark), (groove.at_mm, half + mark)], "CENTRE")
    for hole in seat.holes:
        r = hole.diameter_mm / 2.0
        for x in (hole.at_mm - r, hole.at_mm + r):
            view.run([(x, -half), (x, half)], "HIDDEN")
        view.run([(hole.at_mm, -half - mark), (hole.at_mm, half + mark)], "CENTRE")


def _reach(plan: Plan, z_mm: float) -> float:
    """Half the boom's width at a height [mm]."""
    half = plan.seat.half_width_mm
    if plan.boom.section == "square":
        return half
    return math.sqrt(max(half**2 - (z_mm - plan.seat.axis_mm) ** 2, 0.0))


def _mouth(plan: Plan, groove: Groove) -> list[Point]:
    """Half of the line where the groove's round bottom leaves the boom's side, from its middle: (from axis, y)."""
    r = groove.radius_mm
    steps = [r * math.sin(math.pi / 2.0 * i / 8.0) for i in range(9)]
    return [(u, _reach(plan, -math.sqrt(max(r**2 - u**2, 0.0)))) for u in steps]


def _section(plan: Plan) -> Block:
    """The boom cut across, through a seat: its width, the seat's depth or height, the wall."""
    seat, half, boom = plan.seat, plan.seat.half_width_mm, plan.boom
    view = View(detail_scale(2.0 * half, DETAIL_MM))
    floor = -seat.grooves[0].radius_mm if seat.grooves else seat.top_mm
    axis, rim = seat.axis_mm, _reach(plan, floor)
    if boom.section == "square":
        outer: list[Point] = [(-half, floor), (-half, seat.bottom_mm), (half, seat.bottom_mm), (half, floor)]
        view.run(outer, closed=True)
    elif seat.grooves:
        start = math.atan2(floor - axis, -rim) % (2.0 * math.pi)
        sweep = math.atan2(floor - axis, rim) % (2.0 * math.pi) - start
        sweep += 2.0 * math.pi if sweep <= 0.0 else 0.0
        outer = [
            (half * math.cos(start + sweep * i / 72.0), axis + half * math.sin(start + sweep * i / 72.0))
            for i in range(73)
        ]
        view.run(
            [
                (-rim, floor, math.tan(sweep / 8.0)),
                (*_on(axis, half, start + sweep / 2.0), math.tan(sweep / 8.0)),
                (rim, floor),
            ],
            closed=True,
        )
    else:
        outer = [_on(axis, half, 2.0 * math.pi * i / 72.0) for i in range(72)]
        view.circle((0.0, axis), half, cross=False)
    if floor < seat.top_mm and boom.section == "round":
        for sign in (1.0, -1.0):
            view.run([(sign * _reach(plan, z), z) for z in _levels(floor, seat.top_mm)])
    elif floor < seat.top_mm:
        view.run([(-half, floor), (-half, seat.top_mm), (half, seat.top_mm), (half, floor)])
    _inside(plan, view, outer)
    more = half + 2.5 / view.scale
    view.run([(-more, axis), (more, axis)], "CENTRE")
    view.run([(0.0, axis - more), (0.0, axis + more)], "CENTRE")
    left, right = view.at((-half, 0.0))[0], view.at((half, 0.0))[0]
    low = view.at((0.0, seat.bottom_mm))[1] - 8.0
    view.straight("boom width", "x", ((-half, axis), (half, axis)), low, "Ø" if boom.section == "round" else "")
    if boom.section == "square":
        view.straight("boom height", "y", ((-half, seat.bottom_mm), (-half, seat.top_mm)), left - 14.0)
    if seat.grooves:
        ends = ((0.0, floor), (0.0, seat.top_mm))
        view.straight(f"{seat.grooves[0].tag} groove depth", "y", ends, right + 8.0)
    if seat.holes:
        view.straight("hole axis below top", "y", ((half, 0.0), (0.0, seat.top_mm)), right + 8.0)
    if boom.wall_mm > 0.0:
        view.straight("boom wall", "y", ((0.0, seat.bottom_mm), (0.0, seat.bottom_mm + boom.wall_mm)), left - 5.0)
    tag = seats(seat)[0][0] if seats(seat) else ""
    words = f"SECTION AT {tag} ({scale_words(view.scale)})" if tag else f"SECTION ({scale_words(view.scale)})"
    view.write(words, (view.at((0.0, 0.0))[0], low - 7.0), middle=True)
    return view.block()


def _on(axis: float, radius: float, angle: float) -> Point:
    return radius * math.cos(angle), axis + radius * math.sin(angle)


def _levels(low: float, high: float) -> list[float]:
    """Heights from low to high, closer toward the top of a round boom."""
    return [low + (high - low) * math.sin(math.pi / 2.0 * i / 24.0) for i in range(25)]


def _inside(plan: Plan, view: View, outer: list[Point]) -> None:
    """Bore and hole of the section, and the hatching round them."""
    seat, boom, half, holes = plan.seat, plan.boom, plan.seat.half_width_mm, list[list[Point]]()
    inner = half - boom.wall_mm
    if boom.wall_mm > 0.0 and boom.section == "round":
        holes.append([_on(seat.axis_mm, inner, 2.0 * math.pi * i / 72.0) for i in range(72)])
        view.circle((0.0, seat.axis_mm), inner, cross=False)
    elif boom.wall_mm > 0.0:
        holes.append([(-inner, -inner), (inner, -inner), (inner, inner), (-inner, inner)])
        holes[0] = [(x, z + seat.axis_mm) for x, z in holes[0]]
        view.run(holes[0], closed=True)
    if seat.holes:
        r = seat.holes[0].diameter_mm / 2.0
        y = _reach(plan, r)
        spans = [(-y, -inner), (inner, y)] if boom.wall_mm > 0.0 else [(-y, y)]
        for low, high in spans:
            for z in (-r, r):
                view.run([(low, z), (high, z)])
            holes.append([(low, -r), (high, -r), (high, r), (low, r)])
    floor = max(z for _, z in outer)
    view.hatch(outer, [[(y, min(z, floor)) for y, z in hole] for hole in holes])


def _profile(plan: Plan) -> Block:
    """A groove seen along the rod, enlarged: its round bottom, its width, its depth."""
    seat = plan.seat
    groove = seat.grooves[0]
    r, top = groove.radius_mm, seat.top_mm
    view = View(detail_scale(4.0 * r, DETAIL_MM))
    side, base = 2.0 * r, -2.0 * r
    points = [(-side, top), (-r, top), (-r, 0.0, 1.0), (r, 0.0), (r, top), (side, top)]
    view.run(points)
    round_bottom = [(r * math.cos(a), r * math.sin(a)) for a in (math.pi + math.pi * i / 24.0 for i in range(25))]
    view.hatch([(-side, top), (-r, top), *round_bottom, (r, top), (side, top), (side, base), (-side, base)])
    view.run([(-side - 2.0 / view.scale, 0.0), (side + 2.0 / view.scale, 0.0)], "CENTRE")
    view.run([(0.0, base), (0.0, top + 2.0 / view.scale)], "CENTRE")
    right, low, up = view.at((side, 0.0))[0], view.at((0.0, base))[1], view.at((0.0, top))[1]
    view.straight(f"{groove.tag} groove width", "x", ((-r, top), (r, top)), up + 6.0)
    view.straight(f"{groove.tag} datum below top", "y", ((side, 0.0), (side, top)), right + 7.0)
    view.radius(f"{groove.tag} groove radius", (0.0, 0.0), r, -40.0, 6.0 + r * view.scale)
    words = f"GROOVE {groove.tag} ({scale_words(view.scale)})"
    view.write(words, (view.at((0.0, 0.0))[0], low - 6.0), middle=True)
    return view.block()


def _notes(plan: Plan) -> list[str]:
    at_zero = [tag for tag, x in seats(plan.seat) if x == 0.0]
    where = f" = axis of {at_zero[0]}" if at_zero else ""
    lines = [f"DATUM: x = 0{where}; FORWARD is to the right, toward the directors."]
    if plan.seat.grooves:
        lines.append("Grooves: straight through the boom, round bottom on the datum plane (the rods' axes),")
        lines.append("walls straight up to the top. Depth is measured from the boom's top line.")
    if plan.seat.holes:
        lines.append("Holes: straight through, square to the boom, axes on the datum plane.")
    return lines
