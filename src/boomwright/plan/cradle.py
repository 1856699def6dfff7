"""The printed cradle: where its notches, stops and saddles stand so that every axis comes to lie on one plane.

All sizes are in the cradle's own frame: x as the design's, z up from the bed. The antenna lies in it upside down,
turned about x, so the datum plane is at `axis_height_mm` and the boom's grooves look down.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from itertools import pairwise

from boomwright.data.lettering import strokes, text_width_mm
from boomwright.design.centreline import straight_half_mm
from boomwright.design.model import Boom, Design
from boomwright.errors import Fault
from boomwright.plan.frame import Matrix, turned_about_x
from boomwright.plan.notch import notch_apex_height_mm
from boomwright.plan.seat import SeatPlan
from boomwright.plan.size import Size
from boomwright.shop.profile import Shop

Span = tuple[float, float]
Polyline = tuple[tuple[float, float], ...]

BASE_MM = 4.0
CHAMFER_MM = 0.4
TIP_MARGIN_MM = 1.0
LEAST_RAIL_MM = 2.0
LEAST_HOLD_MM = 1.5
STOP_MM = 4.0
NOTCH_WALL_MM = 1.2
SADDLE_MM = 10.0
LEAST_SADDLE_MM = 2.0
SADDLE_WALL_MM = 2.4
BEAM_MM = 10.0
TIE_SLOT_MM = (4.2, 2.0)
TIE_GROOVE_DEPTH_MM = 2.5
FLOOR_MM = 1.2
NOTCH_OVER_BASE_MM = 0.5
"""How far the lowest V stays above the base, so that it stays whole when it is drawn lower for a printer that grows."""
MOST_SADDLE_SPAN_MM = 250.0
TAG_HEIGHT_MM, LEAST_TAG_HEIGHT_MM = 2.8, 1.8
NAME_HEIGHT_MM = 3.0
LINE_PITCH = 1.6
ROOT_2 = math.sqrt(2.0)


@dataclass(frozen=True)
class Held:
    """A conductor that lies in the cradle: how far its straight part and its tip reach from the middle plane [mm]."""

    tag: str
    path: str
    at_mm: float
    radius_mm: float
    reach_mm: float
    tip_mm: float


@dataclass(frozen=True)
class Notch:
    """A 90° V across a bearer, its apex at this height."""

    tag: str
    at_mm: float
    radius_mm: float
    apex_mm: float


@dataclass(frozen=True)
class Bearer:
    """A wall along x with V notches, once at +y and once at -y: a rail (all conductors) or a trough (one)."""

    x_mm: Span
    y_mm: Span
    notches: tuple[Notch, ...]


@dataclass(frozen=True)
class Stop:
    """The end wall of a conductor's pocket, once at +y and once at -y."""

    tag: str
    x_mm: Span
    y_mm: Span
    top_mm: float


@dataclass(frozen=True)
class Saddle:
    """Carries the boom: a V for a round one (low = apex), a flat channel for a square one (low = floor)."""

    x_mm: Span
    low_mm: float
    top_mm: float
    channel_half_mm: float
    outer_half_mm: float
    tie_y_mm: Span

    @property
    def middle_mm(self) -> float:
        """x of its middle [mm]."""
        return sum(self.x_mm) / 2.0


@dataclass(frozen=True)
class Engraving:
    """Strokes cut into a top face."""

    lines: tuple[Polyline, ...]
    top_mm: float
    width_mm: float = 0.5
    depth_mm: float = 0.6


@dataclass(frozen=True)
class CradlePlan:
    """The cradle in one piece. `base` are the rectangles (x, y) whose union is the base plate; `rails` is where the
    rails stand in |y|, None where end pockets over the full width hold the rods.
    """

    axis_height_mm: float
    held: tuple[Held, ...]
    rails: Span | None
    bearers: tuple[Bearer, ...]
    stops: tuple[Stop, ...]
    saddles: tuple[Saddle, ...]
    base: tuple[tuple[Span, Span], ...]
    engravings: tuple[Engraving, ...]
    relief_mm: float
    frame: Matrix

    @property
    def extent_mm(self) -> tuple[Span, Span, Span]:
        """Outer x, y and z of the whole piece [mm]."""
        xs = [value for x, _ in self.base for value in x]
        ys = [value for _, y in self.base for value in y]
        tops = [s.top_mm for s in self.stops] + [s.top_mm for s in self.saddles] + [self.axis_height_mm]
        return (min(xs), max(xs)), (min(ys), max(ys)), (0.0, max(tops))


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
    height, sizes = _axis_height(boom, shop, seat, held)
    rails, bearer_sizes, faults = _rails(shop, seat, held)
    bearers = _bearers(design, shop, seat, held, (rails, height))
    saddles, saddle_faults = _saddles(design, boom, shop, seat, (height, rails))
    faults += saddle_faults
    stops = _stops(shop, held, height)
    plates = _plates(rails, bearers, stops, saddles)
    name_plate, engravings = _labels(design, stops, plates)
    base = (*plates, name_plate)
    frame = turned_about_x(height)
    plan = CradlePlan(height, held, rails, bearers, stops, saddles, base, engravings, shop.cradle.relief_mm, frame)
    faults += _bed_faults(plan, shop)
    return plan, sizes + bearer_sizes, faults


def _axis_height(boom: Boom, shop: Shop, seat: SeatPlan, held: tuple[Held, ...]) -> tuple[float, list[Size]]:
    over_tie = max(TIE_GROOVE_DEPTH_MM + FLOOR_MM, BASE_MM + NOTCH_OVER_BASE_MM)
    saddle = seat.top_mm + over_tie + ((ROOT_2 - 1.0) * seat.half_width_mm if boom.section == "round" else 0.0)
    needs = {
        f"base {BASE_MM:g} + relief {shop.cradle.relief_mm:g} + boom's line {seat.top_mm:g} under the axes": (
            BASE_MM + shop.cradle.relief_mm + seat.top_mm
        ),
        f"base and tie groove {over_tie:g} under the saddles": saddle,
        f"base and tie groove {over_tie:g} under the deepest notch": over_tie + ROOT_2 * max(h.radius_mm for h in held),
    }
    reason = max(needs, key=lambda words: needs[words])
    height = math.ceil(needs[reason] * 2.0 - 1e-9) / 2.0
    sizes = [Size("cradle.axis_height_mm", height, "mm", f"{reason}, rounded up to half a millimetre")]
    for h in held:
        apex = notch_apex_height_mm(height, 2.0 * h.radius_mm)
        origin = f"axis height {height:g} - radius {h.radius_mm:g} x root 2"
        sizes.append(Size(f"cradle.notch.{h.tag}.apex_mm", apex, "mm", origin))
    return height, sizes


def _rails(shop: Shop, seat: SeatPlan, held: tuple[Held, ...]) -> tuple[Span | None, list[Size], list[Fault]]:
    """Where the rails stand in |y|, or None where only end pockets over the full width can hold the shortest rod."""
    inner = seat.half_width_mm + shop.cradle.relief_mm
    shortest = min(held, key=lambda h: h.reach_mm)
    outer = shortest.reach_mm - TIP_MARGIN_MM
    if outer - LEAST_RAIL_MM >= inner - 1e-9:
        rail = min(shop.cradle.rail_mm, outer - inner)
        wish = shop.cradle.rail_mm
        narrowed = "" if rail == wish else f", narrowed from {wish:g} to clear the adhesive"
        origin = f"two rails: {shortest.tag} reaches {shortest.reach_mm:g}, less {TIP_MARGIN_MM:g} at its tip"
        sizes = [
            Size("cradle.rail.outer_mm", outer, "mm", origin),
            Size("cradle.rail.thickness_mm", rail, "mm", "shop's rail thickness" + narrowed),
        ]
        return (outer - rail, outer), sizes, []
    origin = f"end pockets over the full width: {shortest.tag} is too short for rails outside the relief"
    hold = shortest.reach_mm - inner
    faults = []
    if hold < LEAST_HOLD_MM:
        found = (
            f"{shortest.tag} reaches {shortest.reach_mm:g} mm from the middle, boom and relief take {inner:g} of it: "
            f"{hold:.3g} is left to hold it by, at least {LEAST_HOLD_MM:g} is needed"
        )
        fix = "use a narrower boom, or a smaller cradle.relief_mm in the shop file"
        faults.append(Fault(f"{shortest.path}.length_mm", found, fix))
    return None, [Size("cradle.pocket.inner_mm", inner, "mm", origin)], faults


def _bearers(
    design: Design, shop: Shop, seat: SeatPlan, held: tuple[Held, ...], laid: tuple[Span | None, float]
) -> tuple[Bearer, ...]:
    rails, height_mm = laid
    inner = seat.half_width_mm + shop.cradle.relief_mm
    notches = tuple(
        Notch(h.tag, h.at_mm, h.radius_mm, notch_apex_height_mm(height_mm, 2.0 * h.radius_mm)) for h in held
    )
    if rails is None:
        return tuple(_with_notch(_trough(held, i, (inner, h.reach_mm)), notches) for i, h in enumerate(held))
    low = min(n.at_mm - n.radius_mm * ROOT_2 for n in notches) - SADDLE_WALL_MM
    high = max(n.at_mm + n.radius_mm * ROOT_2 for n in notches) + SADDLE_WALL_MM
    bearers = [Bearer((low, high), rails, notches)]
    if design.driven.form == "straight":
        troughs = [_trough(held, i, (inner, h.tip_mm)) for i, h in enumerate(held) if h.tag == "DE"]
        bearers += [_with_notch(b, notches) for b in troughs]
    return tuple(bearers)


def _trough(held: tuple[Held, ...], index: int, y_mm: Span) -> Bearer:
    h = held[index]
    wish = h.radius_mm * ROOT_2 + NOTCH_WALL_MM
    return Bearer(_between_neighbours(held, index, wish, 0.0), y_mm, ())


def _with_notch(bearer: Bearer, notches: tuple[Notch, ...]) -> Bearer:
    inside = tuple(n for n in notches if bearer.x_mm[0] < n.at_mm < bearer.x_mm[1])
    return Bearer(bearer.x_mm, bearer.y_mm, inside)


def _between_neighbours(held: tuple[Held, ...], index: int, wish_mm: float, apart_mm: float) -> Span:
    """`wish_mm` to both sides of a conductor, at most half-way to its neighbours less half of `apart_mm`."""
    at = held[index].at_mm
    low = at - held[index - 1].at_mm if index > 0 else math.inf
    high = held[index + 1].at_mm - at if index + 1 < len(held) else math.inf
    return at - min(wish_mm, (low - apart_mm) / 2.0), at + min(wish_mm, (high - apart_mm) / 2.0)


def _stops(shop: Shop, held: tuple[Held, ...], height_mm: float) -> tuple[Stop, ...]:
    stops = []
    for index, h in enumerate(held):
        if h.tag == "DE-front":
            continue
        wish = max(h.radius_mm + 2.0, text_width_mm(h.tag, TAG_HEIGHT_MM) / 2.0 + 0.8)
        low, high = _between_neighbours(held, index, wish, 0.8)
        if index + 1 < len(held) and held[index + 1].tag == "DE-front":
            high = _between_neighbours(held, index + 1, wish, 0.8)[1]
        inner = h.tip_mm + shop.printer.slide_clearance_mm
        stops.append(Stop(h.tag, (low, high), (inner, inner + STOP_MM), height_mm + h.radius_mm / 2.0))
    return tuple(stops)


def _saddles(
    design: Design, boom: Boom, shop: Shop, seat: SeatPlan, laid: tuple[float, Span | None]
) -> tuple[tuple[Saddle, ...], list[Fault]]:
    height, rails = laid
    spans, faults = _saddle_spans(design, shop, seat)
    axis = height - seat.axis_mm
    half = seat.half_width_mm
    if boom.section == "round":
        low, top = axis - half * ROOT_2, axis - half / ROOT_2 + max(1.0, half / 6.0)
        channel = top - low
    else:
        low = height - seat.top_mm
        top, channel = low + min(half, 4.0), half + shop.printer.slide_clearance_mm
    outer = channel + SADDLE_WALL_MM
    tie = outer + 0.8
    if rails is not None and tie + TIE_SLOT_MM[1] + 0.8 > rails[0]:
        tie = max(tie, rails[1] + 0.8)
    tie_y = (tie, tie + TIE_SLOT_MM[1])
    return tuple(Saddle(span, low, top, channel, outer, tie_y) for span in spans), faults


def _saddle_spans(design: Design, shop: Shop, seat: SeatPlan) -> tuple[list[Span], list[Fault]]:
    """Where the boom can be carried: at both ends and wherever the way between is long."""
    relief = shop.cradle.relief_mm
    kept = [(b.at_mm - b.half_x_mm - relief, b.at_mm + b.half_x_mm + relief) for b in seat.bond_lines]
    driven = design.driven
    if driven.form == "loop" or driven.plane == "upright":
        window = driven.outer_diameter_mm / 2.0 + relief
        kept.append((driven.at_mm - window, driven.at_mm + window))
    kept.sort()
    edges = [(-math.inf, seat.start_mm), *kept, (seat.end_mm, math.inf)]
    free = [(a[1], b[0]) for a, b in pairwise(edges) if b[0] - a[1] >= LEAST_SADDLE_MM]
    if len(free) < 2:
        need = max(b.half_x_mm for b in seat.bond_lines) + relief + LEAST_SADDLE_MM
        found = "leaves no room for a saddle under the boom clear of the adhesive"
        key = "boom.tail_mm" if not free or free[0][0] > seat.start_mm else "boom.nose_mm"
        return [], [Fault(key, found, f"give it at least {need:.3g} mm")]
    first, last = free[0], free[-1]
    spans = [(max(first[0], first[1] - SADDLE_MM), first[1]), (last[0], min(last[1], last[0] + SADDLE_MM))]
    middles = [(sum(f) / 2.0, f) for f in free[1:-1]]
    while True:
        spans.sort()
        wide = [(a, b) for a, b in pairwise(spans) if b[0] - a[1] > MOST_SADDLE_SPAN_MM]
        choices = [(abs(m - (a[1] + b[0]) / 2.0), m, f) for a, b in wide for m, f in middles if a[1] < m < b[0]]
        if not choices:
            return spans, []
        _, middle, room = min(choices)
        half = min(SADDLE_MM, room[1] - room[0]) / 2.0
        spans.append((middle - half, middle + half))


def _plates(
    rails: Span | None, bearers: tuple[Bearer, ...], stops: tuple[Stop, ...], saddles: tuple[Saddle, ...]
) -> tuple[tuple[Span, Span], ...]:
    """The rectangles of the base: strips under the bearers, arms to the stops, beams under the saddles."""
    beams = [(s.middle_mm - BEAM_MM / 2.0, s.middle_mm + BEAM_MM / 2.0) for s in saddles]
    ends = (
        min([*(b.x_mm[0] for b in bearers), *(x[0] for x in beams)]),
        max([*(b.x_mm[1] for b in bearers), *(x[1] for x in beams)]),
    )
    strip = rails or (bearers[0].y_mm[0], max(b.y_mm[1] for b in bearers))
    reach = max([strip[1], *(s.tie_y_mm[1] + 2.0 for s in saddles)])
    plates: list[tuple[Span, Span]] = [(x, (-reach, reach)) for x in beams]
    for side in (1.0, -1.0):
        plates.append((ends, _mirror(strip, side)))
        plates += [(s.x_mm, _mirror((strip[0], s.y_mm[1]), side)) for s in stops]
        plates += [(b.x_mm, _mirror(b.y_mm, side)) for b in bearers]
    return tuple(plates)


def _mirror(y_mm: Span, side: float) -> Span:
    low, high = sorted((side * y_mm[0], side * y_mm[1]))
    return low, high


def _labels(
    design: Design, stops: tuple[Stop, ...], plates: tuple[tuple[Span, Span], ...]
) -> tuple[tuple[Span, Span], tuple[Engraving, ...]]:
    """Tags on the stops; arrow, FORWARD and the name on a plate behind the rearmost beam."""
    engravings = []
    for stop in stops:
        room = stop.x_mm[1] - stop.x_mm[0] - 1.2
        tag_height = min(TAG_HEIGHT_MM, TAG_HEIGHT_MM * room / text_width_mm(stop.tag, TAG_HEIGHT_MM))
        if tag_height < LEAST_TAG_HEIGHT_MM:
            continue
        start = sum(stop.x_mm) / 2.0 - text_width_mm(stop.tag, tag_height) / 2.0
        for side in (1.0, -1.0):
            base_line = side * sum(stop.y_mm) / 2.0 - tag_height / 2.0
            lines = strokes(stop.tag, tag_height)
            placed = tuple(tuple((start + u, base_line + v) for u, v in line) for line in lines)
            engravings.append(Engraving(placed, stop.top_mm))
    rear = min(x[0] for x, _ in plates)
    reach = plates[0][1][1]
    words = ["^", *_wrapped("FORWARD", 2.0 * reach - 3.0), *_wrapped(design.name, 2.0 * reach - 3.0)]
    half = min(reach, max(text_width_mm(word, NAME_HEIGHT_MM) for word in words) / 2.0 + 1.5)
    pitch = LINE_PITCH * NAME_HEIGHT_MM
    depth = pitch * len(words) + 1.5
    for row, word in enumerate(words):
        foot = rear - pitch * (row + 1)
        left = text_width_mm(word, NAME_HEIGHT_MM) / 2.0
        lines = _arrow(NAME_HEIGHT_MM) if word == "^" else strokes(word, NAME_HEIGHT_MM)
        offset = 0.0 if word == "^" else left
        placed = tuple(tuple((foot + v, offset - u) for u, v in line) for line in lines)
        engravings.append(Engraving(placed, BASE_MM))
    return ((rear - depth, rear), (-half, half)), tuple(engravings)


def _arrow(height_mm: float) -> list[list[tuple[float, float]]]:
    """An arrow that points along +v, its middle at u = 0."""
    h = height_mm
    return [[(0.0, 0.0), (0.0, h)], [(-0.4 * h, 0.6 * h), (0.0, h), (0.4 * h, 0.6 * h)]]


def _wrapped(text: str, width_mm: float) -> list[str]:
    """Text in lines no wider than `width_mm` (one character a line at least)."""
    lines = [""]
    for letter in text:
        if lines[-1] and text_width_mm(lines[-1] + letter, NAME_HEIGHT_MM) > width_mm:
            lines.append("")
        lines[-1] += letter
    return lines


def _bed_faults(plan: CradlePlan, shop: Shop) -> list[Fault]:
    x, y, z = (high - low for low, high in plan.extent_mm)
    bed_x, bed_y, bed_z = shop.printer.bed_mm
    turned = max(x - bed_y, y - bed_x) < max(x - bed_x, y - bed_y)
    over_x, over_y = (x - bed_y, y - bed_x) if turned else (x - bed_x, y - bed_y)
    over = [("length", over_x), ("width", over_y), ("height", z - bed_z)]
    too_much = [f"{value:.1f} mm too {what}" for what, value in over if value > 1e-9]
    if not too_much:
        return []
    words = ", ".join(t.replace("length", "long").replace("width", "wide").replace("height", "high") for t in too_much)
    return [
        Fault(
            "printer.bed_mm",
            f"the cradle is {x:.1f} x {y:.1f} x {z:.1f} mm: {words} for the bed of {bed_x:g} x {bed_y:g} x {bed_z:g}",
            "use a printer with a larger bed, shorten boom or rods, or name the other parts with --only",
        )
    ]
