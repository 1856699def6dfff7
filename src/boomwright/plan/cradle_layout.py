"""What stands where on the cradle's base, and each section with all that belongs to it."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace

from boomwright.errors import Fault
from boomwright.plan.cradle_labels import name_plate, number_label, stop_labels
from boomwright.plan.cradle_model import (
    Bearer,
    Block,
    Ground,
    Rectangle,
    Saddle,
    Section,
    Span,
    Stop,
    mirrored,
)
from boomwright.plan.joint import BORE_FROM_FACE_MM, Dovetail
from boomwright.plan.label import Label
from boomwright.plan.outrigger import INSIDE_RAIL_MM, Group, arm_labels
from boomwright.plan.rails import Limit, plan_bearers, plan_rails, plan_stops
from boomwright.plan.saddle import end_spans, free_spans, make_saddles
from boomwright.plan.sections import BACK_MM, Splice
from boomwright.plan.size import Size

SIDES = (1, -1)
REAR_BAR_MM = 8.0
LEAST_BEARER_MM = 1.0
TIE_MARGIN_MM = 2.0


@dataclass(frozen=True)
class Layout:
    """What stands on the base, before it is parted."""

    rails: Span | None
    bearers: tuple[Bearer, ...]
    stops: tuple[Stop, ...]
    saddles: tuple[Saddle, ...]
    groups: tuple[Group, ...] = ()

    @property
    def strip_mm(self) -> Span:
        """|y| of the strips under the bearers [mm]."""
        return self.rails or (self.bearers[0].y_mm[0], max(b.y_mm[1] for b in self.bearers))

    @property
    def reach_mm(self) -> float:
        """|y| that the beams under the saddles reach [mm]."""
        return max([self.strip_mm[1], *(s.tie_y_mm[1] + TIE_MARGIN_MM for s in self.saddles)])

    @property
    def ends_mm(self) -> Span:
        """x of the rear and the front end of strips and beams [mm]."""
        spans = [b.x_mm for b in self.bearers] + [s.beam_mm for s in self.saddles] + [g.x_mm for g in self.groups]
        return min(low for low, _ in spans), max(high for _, high in spans)


@dataclass(frozen=True)
class Arm:
    """Where a group's outriggers hold on to the cradle, with their numbers at +y and -y."""

    group: Group
    numbers: tuple[int, int]


@dataclass(frozen=True)
class Part:
    """What a section is to be: its number, its x without tenons, its joints (None: neither), the name plate's words."""

    number: int
    x_mm: Span
    splice: Splice | None = None
    words: tuple[str, ...] = ()
    first: bool = True
    last: bool = True


def lay_out(ground: Ground, limit: Limit, groups: tuple[Group, ...]) -> tuple[Layout, list[Size], list[Fault]]:
    """Rails, stops that no outrigger carries, and the saddles at the boom's ends."""
    rails, sizes, faults = plan_rails(ground, limit)
    spans, saddle_faults = end_spans(ground, free_spans(ground))
    carried = {h.tag for g in groups for h in g.held}
    stops = tuple(s for s in plan_stops(ground) if s.tag not in carried)
    saddles = make_saddles(ground, rails, spans)
    return Layout(rails, plan_bearers(ground, rails, limit), stops, saddles, groups), sizes, faults + saddle_faults


def make_section(layout: Layout, part: Part, arms: Sequence[Arm] = ()) -> Section:
    """One section along x, with what stands between its ends."""
    low, high = part.x_mm
    stops = tuple(s for s in layout.stops if low < sum(s.x_mm) / 2.0 < high)
    own = Layout(
        layout.rails,
        tuple(_clipped(layout.bearers, part.x_mm)),
        stops,
        tuple(s for s in layout.saddles if low < s.middle_mm < high),
    )
    mine = [arm for arm in arms if low < sum(arm.group.x_mm) / 2.0 < high]
    base = [*_plates(layout, own, part), *(plate for arm in mine for plate in _arm_plates(layout, arm))]
    labels = [*stop_labels(stops), *_arm_labels(layout, mine)]
    if part.words:
        plate, words = name_plate(("FORWARD", *part.words), low, layout.reach_mm)
        base.append(plate)
        labels += words
    tenons, sockets, bores = _dovetails(part, mine)
    if part.splice and not part.first:
        labels.append(number_label(part.number, low + part.splice.front_mm - 1.0 - 3.0))
    section = Section(
        f"cradle-{part.number}",
        tuple(base),
        tenons,
        sockets,
        bores,
        own.bearers,
        tuple(_stop_blocks(stops)),
        own.saddles,
        tuple(labels),
    )
    return replace(section, shift_mm=(-section.plan_extent_mm[0][0], 0.0)) if part.splice else section


def _clipped(bearers: tuple[Bearer, ...], x_mm: Span) -> Iterator[Bearer]:
    for bearer in bearers:
        low, high = max(bearer.x_mm[0], x_mm[0]), min(bearer.x_mm[1], x_mm[1])
        if high - low >= LEAST_BEARER_MM:
            inside = tuple(n for n in bearer.notches if low < n.at_mm < high)
            yield Bearer((low, high), bearer.y_mm, inside)


def _plates(layout: Layout, own: Layout, part: Part) -> Iterator[Rectangle]:
    """The rectangles of the base: strips under the bearers, arms to the stops, beams under saddles and joints."""
    reach, strip, (low, high) = layout.reach_mm, layout.strip_mm, part.x_mm
    across = (-strip[1], strip[1])
    for saddle in own.saddles:
        yield saddle.beam_mm, (-reach, reach)
    if part.first and not any(saddle.beam_mm[0] <= low for saddle in own.saddles):
        yield (low, low + REAR_BAR_MM), across
    if part.splice and not part.first:
        yield (low, low + part.splice.front_mm), across
    if part.splice and not part.last:
        yield (high - BACK_MM, high), across
    for side in SIDES:
        yield part.x_mm, mirrored(strip, side)
        for stop in own.stops:
            yield stop.x_mm, mirrored((strip[0], stop.y_mm[1]), side)
        for bearer in own.bearers:
            yield bearer.x_mm, mirrored(bearer.y_mm, side)


def _arm_plates(layout: Layout, arm: Arm) -> Iterator[Rectangle]:
    inner = max(0.0, layout.strip_mm[0] - INSIDE_RAIL_MM)
    for side in SIDES:
        yield arm.group.x_mm, mirrored((inner, arm.group.face_mm), side)


def _arm_labels(layout: Layout, arms: Sequence[Arm]) -> Iterator[Label]:
    inside = layout.strip_mm[0] - INSIDE_RAIL_MM
    if all(inside > saddle.outer_half_mm for saddle in layout.saddles):
        for arm in arms:
            yield from arm_labels(arm.group, layout.strip_mm[0], arm.numbers)


def _dovetails(
    part: Part, arms: Sequence[Arm]
) -> tuple[tuple[Dovetail, ...], tuple[Dovetail, ...], tuple[tuple[float, float], ...]]:
    """Tenons, sockets and bores of a section: joints along x, and the sockets of its outriggers."""
    low, high = part.x_mm
    tenons = part.splice.dovetails(high) if part.splice and not part.last else ()
    sockets = part.splice.dovetails(low) if part.splice and not part.first else ()
    outward = tuple(d for arm in arms for side in SIDES for d in arm.group.tenons(arm.group.face_mm, side))
    bores = tuple((high - BORE_FROM_FACE_MM, d.at_mm[1]) for d in tenons)
    return tenons, sockets + outward, bores


def _stop_blocks(stops: Sequence[Stop]) -> Iterator[Block]:
    for stop in stops:
        for side in SIDES:
            yield Block(stop.tag, "stop", stop.x_mm, mirrored(stop.y_mm, side), stop.top_mm)
