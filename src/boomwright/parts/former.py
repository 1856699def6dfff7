"""The former, printed: posts and a channel to bend the driven element by, or a sawing jig for a straight one."""

from __future__ import annotations

from functools import partial
from typing import TYPE_CHECKING

from boomwright.parts.feet import expect_foot
from boomwright.parts.printed import chamfered_plate, expect_extent, label_tools, printed_piece
from boomwright.parts.solids import Shape, box, cut, cylinder, unite
from boomwright.pieces import Expectation, Part, Piece, Probe
from boomwright.plan.compensation import Offsets, printer_offsets
from boomwright.plan.former import (
    BASE_MM,
    JIG_END_MM,
    JIG_FLOOR_MM,
    OVER_MM,
    SLOT_FLOOR_MM,
    WALL_MM,
    Bend,
    FormerPlan,
    plan_former,
)
from boomwright.plan.label import DEPTH_MM, STROKE_MM

if TYPE_CHECKING:
    from boomwright.plan.plan import Plan

ALLOWED_MM = 0.015
"""A chord of the mesh (0.01) and rounding."""

ASIDE_MM = 1.0


class FormerPart(Part):
    """The bending former, or the sawing jig."""

    name = "former"
    purpose = "bends the driven element to size by posts and marks; for a straight one, saws the feed gap"
    processes = ("print",)
    left_out_when = "the driven element is a round loop larger than the bed"

    def left_out(self, plan: Plan) -> str | None:
        """A round loop larger than the bed."""
        return plan_former(plan.design, plan.shop)[0].left_out

    def build(self, plan: Plan) -> tuple[Piece, ...]:
        """One plate. Posts and walls are outlines: only the growth moves them."""
        former, _ = plan_former(plan.design, plan.shop)
        drawn = Offsets(outline_growth_mm=printer_offsets(plan.shop.printer).outline_growth_mm)
        draw = partial(_former if former.bends else _jig, former)
        return (printed_piece(self.name, draw, drawn),)

    def expect(self, plan: Plan) -> tuple[Expectation, ...]:
        """Posts, channel and stop, in STEP and with the printer's growth in STL; the outer sizes."""
        former, _ = plan_former(plan.design, plan.shop)
        found = list[Expectation]()
        for suffix, growth in (("step", 0.0), ("stl", plan.shop.printer.outline_growth_mm)):
            file = f"print/{self.name}.{suffix}"
            found += _expect_bent(former, file, growth) if former.bends else _expect_jig(former, file, growth)
        sides = [high - low for low, high in (former.x_mm, former.y_mm)]
        return (*found, *expect_extent(f"print/{self.name}.step", sides), expect_foot(self.name))


def _height(former: FormerPlan) -> float:
    """Of the wire's axis above the bed [mm]."""
    return BASE_MM + former.wire_mm / 2.0


def _near(file: str, what: str, value: float, probe: Probe) -> Expectation:
    return Expectation(file, what, value, ALLOWED_MM, "mm", probe)


def _expect_bent(former: FormerPlan, file: str, growth_mm: float) -> list[Expectation]:
    z, r, found = _height(former), former.wire_mm / 2.0, list[Expectation]()
    for number, bend in enumerate(former.posts, 1):
        (x, y), (nx, ny) = bend.start, bend.inward
        far = 2.0 * bend.post_mm + r + ASIDE_MM
        near, off = {"at": (x, y, z), "along": (nx, ny, 0.0), "side": "ahead"}, r
        if former.leg_mm <= ASIDE_MM:
            # The bend begins at the stop itself: the post's place is seen from the side.
            middle, off = bend.middle(former.wire_mm), ASIDE_MM
            near |= {"at": (middle[0] + bend.post_mm + off, middle[1], z), "along": (-1.0, 0.0, 0.0)}
        # Above the channel's walls, so that nothing but posts stands in the way.
        back = {"at": (x + far * nx, y + far * ny, z + r + OVER_MM / 2.0), "along": (-nx, -ny, 0.0), "side": "ahead"}
        found.append(_near(file, f"post {number} beside the wire", off + growth_mm, Probe("free_mm", near)))
        found.append(_near(file, f"post {number} on its far side", ASIDE_MM + growth_mm, Probe("free_mm", back)))
    if len(former.walls) > 1:
        (x0, x1), _ = former.walls[1]
        foot = former.posts[0].start[1]
        probe = Probe("free_mm", {"at": ((x0 + x1) / 2.0, foot, z), "along": (0.0, 1.0, 0.0)})
        found.append(_near(file, "channel width", former.channel_mm + 2.0 * growth_mm, probe))
    if not former.is_corner:
        for side in (1.0, -1.0):
            at = (side * (former.gap_mm / 2.0 + ASIDE_MM / 2.0), 0.0, z)
            probe = Probe("free_mm", {"at": at, "along": (-side, 0.0, 0.0), "side": "ahead"})
            word = "stop" if side > 0.0 else "gap feeler's other face"
            found.append(_near(file, word, ASIDE_MM / 2.0 + growth_mm, probe))
    return found


def _expect_jig(former: FormerPlan, file: str, growth_mm: float) -> list[Expectation]:
    beside = former.channel_mm / 2.0 + 1.0
    slot = Probe("free_mm", {"at": (0.0, beside, JIG_FLOOR_MM - 1.0), "along": (1.0, 0.0, 0.0)})
    z = JIG_FLOOR_MM + former.wire_mm / 2.0
    away = (former.x_mm[1] + former.gap_mm / 2.0) / 2.0
    across = Probe("free_mm", {"at": (away, 0.0, z), "along": (0.0, 1.0, 0.0)})
    found = [
        _near(file, "gap slot width", former.gap_mm + 2.0 * growth_mm, slot),
        _near(file, "channel width", former.channel_mm + 2.0 * growth_mm, across),
    ]
    if former.closed:
        between = former.x_mm[1] - former.x_mm[0] - 2.0 * JIG_END_MM
        probe = Probe("free_mm", {"at": (away, 0.0, z), "along": (1.0, 0.0, 0.0)})
        found.append(_near(file, "stop to stop", between + 2.0 * growth_mm, probe))
    return found


def _drawn(span: tuple[float, float], growth_mm: float) -> tuple[float, float]:
    return span[0] + growth_mm, span[1] - growth_mm


def _former(former: FormerPlan, offsets: Offsets) -> Shape:
    import shapely

    g, r = offsets.outline_growth_mm, former.wire_mm / 2.0
    (x0, x1), (y0, y1) = former.x_mm, former.y_mm
    body = chamfered_plate(shapely.box(x0, y0, x1, y1), BASE_MM, g)
    foot, low = 0.5 * BASE_MM, BASE_MM + former.wire_mm
    added = [box(_drawn(x, g), _drawn(y, g), (foot, low)) for x, y in former.walls]
    if not former.is_corner:
        gap = (-former.gap_mm / 2.0, former.gap_mm / 2.0)
        added.append(box(_drawn(gap, g), _drawn((-former.channel_mm / 2.0 - WALL_MM, 0.5 * r), g), (foot, low)))
    added += [_post(bend, former, g) for bend in former.posts]
    tools = label_tools(former.labels)
    tools += [_mark(bend, former.wire_mm) for bend in former.posts if former.leg_mm > ASIDE_MM]
    return cut(unite(body, added), tools)


def _post(bend: Bend, former: FormerPlan, growth_mm: float) -> Shape:
    x, y = bend.middle(former.wire_mm)
    foot, top = 0.5 * BASE_MM, former.post_top_mm
    return cylinder((x, y, foot), (0, 0, 1), bend.post_mm - growth_mm, top - foot)


def _mark(bend: Bend, wire_mm: float) -> Shape:
    """A line across the wire's place at the start of a bend."""
    (x, y), (nx, ny) = bend.start, bend.inward
    low, high, half = wire_mm / 2.0, wire_mm / 2.0 + WALL_MM + 1.0, STROKE_MM / 2.0
    xs, ys = sorted((x - high * nx, x + low * nx)), sorted((y - high * ny, y + low * ny))
    if abs(nx) < abs(ny):
        xs = [x - half, x + half]
    else:
        ys = [y - half, y + half]
    return box((xs[0], xs[1]), (ys[0], ys[1]), (BASE_MM - DEPTH_MM, BASE_MM + 0.01))


def _jig(former: FormerPlan, offsets: Offsets) -> Shape:
    import shapely

    g, half = offsets.outline_growth_mm, former.channel_mm / 2.0
    (x0, x1), (y0, y1) = former.x_mm, former.y_mm
    top = JIG_FLOOR_MM + former.wire_mm
    body = chamfered_plate(shapely.box(x0, y0, x1, y1), top, g)
    end = JIG_END_MM if former.closed else -1.0
    tools = [
        box((x0 + end - g, x1 - end + g), (-half - g, half + g), (JIG_FLOOR_MM, top + 1.0)),
        box((-former.gap_mm / 2.0 - g, former.gap_mm / 2.0 + g), (y0 - 1.0, y1 + 1.0), (SLOT_FLOOR_MM, top + 1.0)),
    ]
    return cut(body, tools + label_tools(former.labels))
