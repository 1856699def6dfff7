"""The former: posts, channel, stop and marks by which a driven element is bent, or the jig that saws a straight one.

In the former's own frame: x along the rods (the design's y), y across the element from the fed conductor on, z up
from the bed; the middle of the feed gap stands at x = 0, the fed conductor's axis at y = 0. All in millimetres.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import lru_cache

from boomwright.data.lettering import text_width_mm
from boomwright.design.centreline import Run, developed_length_mm, trace
from boomwright.design.model import Design, Driven
from boomwright.plan.label import Label
from boomwright.plan.size import Size
from boomwright.shop.profile import Shop

Point = tuple[float, float]
Span = tuple[float, float]

BASE_MM = 4.0
OVER_MM = 2.0
"""Posts stand this much higher than the wire."""

WALL_MM = 3.0
LEAST_WALL_MM = 1.2
MARGIN_MM = 16.0
TEXT_MM = 4.0
KEEPER_MM = 8.0
"""Least length of the wall that holds the wire beside the stop."""

CORNER_MM = 40.0
"""Straight run that a former of one bend guides."""

JIG_FLOOR_MM, JIG_WALL_MM, JIG_END_MM = 6.0, 8.0, 6.0
SLOT_FLOOR_MM = 3.0


@dataclass(frozen=True)
class Bend:
    """One bend: where the wire's axis enters it, the unit vector from there to the post's middle, and its figures.

    mark_mm   along the wire from its first end to the bend's start
    post_mm   radius of the post
    turn_deg  how far the wire is bent round the post; springing back leaves the bend's own angle
    """

    start: Point
    inward: Point
    mark_mm: float
    post_mm: float
    turn_deg: float

    def middle(self, wire_mm: float) -> Point:
        """Centre of the post for a wire of this diameter."""
        reach = self.post_mm + wire_mm / 2.0
        return self.start[0] + reach * self.inward[0], self.start[1] + reach * self.inward[1]


@dataclass(frozen=True)
class FormerPlan:
    """The former of a bent element, or (without bends) the jig of a straight one.

    An element wound past a whole turn rides on its own beginning: its post is higher by the wire.

    size       the plate's spans in x and y, top of the base
    walls      the channel's walls as (x, y) rectangles: the outer first, then the inner if there is room
    leg_mm     length of the straight run from the stop to the first bend
    is_corner  one post for every bend in turn, because the whole element is larger than the bed
    closed     jig: whether both ends of the rod meet a stop
    """

    x_mm: Span
    y_mm: Span
    wire_mm: float
    gap_mm: float
    channel_mm: float
    bends: tuple[Bend, ...] = ()
    posts: tuple[Bend, ...] = ()
    walls: tuple[tuple[Span, Span], ...] = ()
    leg_mm: float = 0.0
    labels: tuple[Label, ...] = ()
    is_corner: bool = False
    closed: bool = False
    left_out: str | None = None

    @property
    def post_top_mm(self) -> float:
        """Top of the posts above the bed [mm]."""
        layers = 1 + any(bend.turn_deg > 360.0 for bend in self.posts)
        return BASE_MM + layers * self.wire_mm + OVER_MM


@lru_cache(maxsize=8)
def plan_former(design: Design, shop: Shop) -> tuple[FormerPlan, tuple[Size, ...]]:
    """The former of a design's driven element on this shop's bed, and its sizes with their origins."""
    driven = design.driven
    if driven.form == "straight":
        return _plan_jig(driven, shop)
    springback = shop.former.springback_percent / 100.0
    bends, outline, leg = _bends(driven, springback)
    sizes = _sizes(driven, bends, shop)
    whole = _whole(driven, shop, bends, (outline, leg))
    if _fits(whole, shop):
        return whole, sizes
    one = _corner(whole, driven)
    if driven.shape != "circle" and _fits(one, shop):
        return one, sizes
    size = 2.0 * bends[0].post_mm
    why = f"a disc of {size:.4g} mm is larger than the bed: bend the loop round a drum or a board of that size"
    return FormerPlan((0.0, 0.0), (0.0, 0.0), driven.diameter_mm, driven.gap_mm, 0.0, left_out=why), sizes


def _flat(driven: Driven, run: Run) -> tuple[Point, Point]:
    """Start and end of a run in the former's frame."""
    lowest = min(r.start[2] for r in trace(driven)[0])
    axis = 0 if driven.form == "folded" and driven.plane == "flat" else 2
    zero = driven.at_mm if axis == 0 else lowest if driven.form == "loop" else 0.0
    (a, b) = (run.start, run.end)
    return (a[1], a[axis] - zero), (b[1], b[axis] - zero)


def _bends(driven: Driven, springback: float) -> tuple[tuple[Bend, ...], list[Point], float]:
    """The bends in order from the stop, corner points of the element, and the straight run before the first bend."""
    runs = trace(driven)[0]
    bends, points, at, arc = list[Bend](), list[Point](), 0.0, None
    wire = driven.diameter_mm
    for run in runs:
        start, end = _flat(driven, run)
        points += [start, end]
        if run.middle is not None:
            inside = run.radius_mm - wire / 2.0
            post = inside * (1.0 - springback)
            turn = math.degrees(run.angle_rad) * run.radius_mm / (post + wire / 2.0)
            if arc is None:
                bends.append(Bend(start, _inward(start, end, run), at, post, turn))
            else:
                last = bends.pop()
                bends.append(Bend(last.start, last.inward, last.mark_mm, post, last.turn_deg + turn))
        arc = run.middle
        at += run.length_mm
    leg = bends[0].mark_mm
    return tuple(bends), points, leg


def _inward(start: Point, end: Point, run: Run) -> Point:
    """Unit vector from an arc's start to its centre; every element is bent to the left, counter-clockwise."""
    chord = math.atan2(end[1] - start[1], end[0] - start[0])
    angle = chord - run.angle_rad / 2.0 + math.pi / 2.0
    return math.cos(angle), math.sin(angle)


def _sizes(driven: Driven, bends: tuple[Bend, ...], shop: Shop) -> tuple[Size, ...]:
    percent = shop.former.springback_percent
    length = developed_length_mm(driven)
    edge = "its edge nearer the stop lies on the engraved line"
    sizes = [Size("former.developed_mm", length, "mm", "along the centreline, from the stop to the other end")]
    for number, bend in enumerate(bends, 1):
        inside = bend.post_mm / (1.0 - percent / 100.0)
        origin = f"inside radius {inside:g} less spring-back {percent:g} %"
        sizes.append(Size(f"former.bend.{number}.post_mm", bend.post_mm, "mm", origin))
        words = f"from the stop's end to the start of bend {number}; {edge}"
        sizes.append(Size(f"former.bend.{number}.mark_mm", bend.mark_mm, "mm", words))
        sizes.append(Size(f"former.bend.{number}.turn_deg", bend.turn_deg, "deg", "over-bent: it springs back"))
    return tuple(sizes)


def _whole(driven: Driven, shop: Shop, bends: tuple[Bend, ...], laid: tuple[list[Point], float]) -> FormerPlan:
    points, leg = laid
    wire, slide = driven.diameter_mm, shop.printer.slide_clearance_mm
    reach = max(bend.post_mm for bend in bends) + wire if driven.shape == "circle" else 0.0
    middle = bends[0].middle(wire)
    xs = [p[0] for p in points] + ([middle[0] - reach, middle[0] + reach] if reach else [])
    ys = [p[1] for p in points] + ([middle[1] + reach] if reach else [])
    margin = MARGIN_MM + (8.0 if driven.shape == "square" else 0.0)
    x = (min(xs) - margin, max(xs) + margin)
    y = (min(ys) - margin, max(ys) + margin)
    beside, start = wire / 2.0 + slide, driven.gap_mm / 2.0
    walls: list[tuple[Span, Span]] = [((0.0, start + max(leg - 1.0, KEEPER_MM)), (-beside - WALL_MM, -beside))]
    room = max(p[1] for p in points) / 2.0 - beside - 0.5
    inner = start + leg - bends[0].post_mm - 1.0
    if inner - start >= LEAST_WALL_MM and room >= LEAST_WALL_MM:
        walls.append(((start, inner), (beside, beside + min(WALL_MM, room))))
    labels = [*_marks(bends, wire, slide, (x, y)), _name(driven, x, y[0] + 1.5)]
    channel = wire + 2.0 * slide
    return FormerPlan(x, y, wire, driven.gap_mm, channel, bends, bends, tuple(walls), leg, tuple(labels))


def _marks(bends: tuple[Bend, ...], wire_mm: float, slide_mm: float, plate: tuple[Span, Span]) -> list[Label]:
    """Each bend's distance from the stop, beside the line at its start."""
    labels, off = [], wire_mm / 2.0 + slide_mm + WALL_MM + 1.5
    for bend in bends:
        text = f"{bend.mark_mm:.1f}"
        width = text_width_mm(text, TEXT_MM)
        x, y = (p - off * n for p, n in zip(bend.start, bend.inward, strict=True))
        x -= width / 2.0 + bend.inward[0] * width / 2.0
        y -= TEXT_MM / 2.0 + bend.inward[1] * TEXT_MM / 2.0
        x = min(max(x, plate[0][0] + 1.0), plate[0][1] - 1.0 - width)
        labels.append(Label(text, x, y, TEXT_MM, BASE_MM))
    return labels


def _name(driven: Driven, x_mm: Span, y_mm: float) -> Label:
    """The wire's whole length, at the plate's left end on this baseline."""
    text = f"={developed_length_mm(driven):.1f}"
    room = x_mm[1] - x_mm[0] - 2.0
    height = min(TEXT_MM, TEXT_MM * room / text_width_mm(text, TEXT_MM))
    return Label(text, x_mm[0] + 1.5, y_mm, height, BASE_MM)


def _corner(whole: FormerPlan, driven: Driven) -> FormerPlan:
    """One post with a channel before it: every bend is made on it in turn, by its mark."""
    bend, wire = whole.bends[0], whole.wire_mm
    edge, foot = bend.start
    reach = 2.0 * (bend.post_mm + wire)
    x = (edge - CORNER_MM - 2.0, edge + bend.post_mm + wire + MARGIN_MM)
    y = (foot - MARGIN_MM, foot + reach + MARGIN_MM)
    beside = whole.channel_mm / 2.0
    outer = ((edge - CORNER_MM, edge - 1.0), (foot - beside - WALL_MM, foot - beside))
    inner = ((edge - CORNER_MM, edge - bend.post_mm - 1.0), (foot + beside, foot + beside + WALL_MM))
    walls = (outer, inner) if inner[0][1] - inner[0][0] >= LEAST_WALL_MM else (outer,)
    slide = (whole.channel_mm - wire) / 2.0
    labels = (*_marks((bend,), wire, slide, (x, y)), _name(driven, x, y[1] - TEXT_MM - 1.5))
    gap, channel = whole.gap_mm, whole.channel_mm
    return FormerPlan(x, y, wire, gap, channel, whole.bends, (bend,), walls, CORNER_MM, labels, is_corner=True)


def _fits(plan: FormerPlan, shop: Shop) -> bool:
    sides = sorted(high - low for low, high in (plan.x_mm, plan.y_mm))
    return all(side <= room for side, room in zip(sides, sorted(shop.printer.bed_mm[:2]), strict=True))


def _plan_jig(driven: Driven, shop: Shop) -> tuple[FormerPlan, tuple[Size, ...]]:
    """A trough with a cross slot as wide as the gap: sawing along both its walls leaves exactly the gap."""
    assert driven.length_mm is not None
    slide, bed = shop.printer.slide_clearance_mm, max(shop.printer.bed_mm[:2])
    channel = driven.diameter_mm + 2.0 * slide
    half = driven.length_mm / 2.0 + slide + JIG_END_MM
    closed = 2.0 * half <= bed
    half = half if closed else min(bed / 2.0, max(driven.gap_mm, CORNER_MM) + CORNER_MM)
    y = channel / 2.0 + JIG_WALL_MM
    top = JIG_FLOOR_MM + driven.diameter_mm
    text = f"GAP {driven.gap_mm:g}"
    wide = half - driven.gap_mm / 2.0 - 2.0
    height = min(TEXT_MM, TEXT_MM * wide / text_width_mm(text, TEXT_MM))
    label = Label(text, driven.gap_mm / 2.0 + 1.0, channel / 2.0 + 2.0, height, top)
    sizes = [Size("former.gap_mm", driven.gap_mm, "mm", "the cross slot: saw along both walls, they leave the gap")]
    words = "the rod lies between two stops, tip to tip + 2 x slide clearance"
    if closed:
        sizes.append(Size("former.length_mm", driven.length_mm + 2.0 * slide, "mm", words))
    plan = FormerPlan(
        (-half, half), (-y, y), driven.diameter_mm, driven.gap_mm, channel, labels=(label,), closed=closed
    )
    return plan, tuple(sizes)
