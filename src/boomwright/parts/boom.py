"""The boom: the bar with a groove or a hole for every conductor that crosses it, as solid and as plan view."""

from __future__ import annotations

import math
from itertools import pairwise
from typing import TYPE_CHECKING

from boomwright.parts.contour import rectangle
from boomwright.parts.palette import colour_of
from boomwright.parts.solids import Shape, box, cut, cylinder
from boomwright.pieces import (
    Body,
    Contour,
    DrawingPiece,
    Expectation,
    Lettering,
    Mark,
    Part,
    Piece,
    Probe,
    SolidPiece,
)
from boomwright.plan.seat import Groove, SeatPlan

if TYPE_CHECKING:
    from boomwright.plan.plan import Plan

CHECK_BAR_MM = 100.0
DATUM_ARM_MM = 5.0
OVERRUN_MM = 1.0
PLACE_ALLOWED_MM = 0.002
LINE_ALLOWED_MM = 0.005


class BoomPart(Part):
    """The boom, grooved or drilled."""

    name = "boom"
    purpose = "the bar that carries the rods, with a groove or a hole for each"
    processes = ("cnc",)

    def build(self, plan: Plan) -> tuple[Piece, ...]:
        """STEP of the boom and a plan view of its seats."""
        body = Body("boom", boom_shape(plan), colour_of(plan.boom.material))
        return (SolidPiece("boom", "cnc", (body,)), _drawing(plan))

    def expect(self, plan: Plan) -> tuple[Expectation, ...]:
        """Every seat's place, size and depth, in the boom's own file and in its plan view."""
        found = list(expect_seats(plan, "cnc/boom.step"))
        seat = plan.seat
        for quantity, value in (("min_x_mm", seat.start_mm), ("max_x_mm", seat.end_mm), ("max_z_mm", seat.top_mm)):
            found.append(_near("cnc/boom.step", f"boom {quantity[:5]}", value, Probe("extent", {"quantity": quantity})))
        for tag, at_mm in [(g.tag, g.at_mm) for g in seat.grooves] + [(h.tag, h.at_mm) for h in seat.holes]:
            probe = Probe("line_at", {"x_mm": at_mm, "layer": "CENTRE"})
            found.append(Expectation("cnc/boom.dxf", f"{tag} centre line", at_mm, LINE_ALLOWED_MM, "mm", probe))
        return tuple(found)


def boom_shape(plan: Plan) -> Shape:
    """The boom as a solid in the design's frame."""
    boom, seat = plan.boom, plan.seat
    length = seat.end_mm - seat.start_mm
    tools: list[Shape] = []
    if boom.section == "round":
        start = (seat.start_mm, 0.0, seat.axis_mm)
        body: Shape = cylinder(start, (1, 0, 0), seat.half_width_mm, length)
        if boom.wall_mm > 0.0:
            tools.append(cylinder(start, (1, 0, 0), seat.half_width_mm - boom.wall_mm, length))
    else:
        body = _bar(seat, 0.0)
        if boom.wall_mm > 0.0:
            tools.append(_bar(seat, boom.wall_mm))
    for groove in seat.grooves:
        tools.append(_groove_tool(groove, seat))
        if groove.pocket:
            half = groove.pocket
            x = (groove.at_mm - half.half_x_mm, groove.at_mm + half.half_x_mm)
            y = (-half.half_y_mm, half.half_y_mm)
            tools.append(box(x, y, (-groove.radius_mm, seat.top_mm + OVERRUN_MM)))
    reach = seat.half_width_mm + OVERRUN_MM
    tools += [cylinder((h.at_mm, -reach, 0.0), (0, 1, 0), h.diameter_mm / 2.0, 2.0 * reach) for h in seat.holes]
    return cut(body, tools)


def expect_seats(plan: Plan, file: str) -> tuple[Expectation, ...]:
    """What a file that holds the boom must show of its grooves and holes."""
    found = []
    for groove in plan.seat.grooves:
        sizes = {"at_mm": groove.at_mm, "radius_mm": groove.radius_mm, "height_mm": 0.0, "depth_mm": groove.depth_mm}
        for quantity, value in sizes.items():
            probe = Probe("groove", {"name": "boom", "at_mm": groove.at_mm, "quantity": quantity})
            found.append(_near(file, f"{groove.tag} groove {quantity.removesuffix('_mm')}", value, probe))
    for hole in plan.seat.holes:
        for quantity, value in {"at_mm": hole.at_mm, "diameter_mm": hole.diameter_mm, "height_mm": 0.0}.items():
            probe = Probe("hole", {"name": "boom", "at_mm": hole.at_mm, "quantity": quantity})
            found.append(_near(file, f"{hole.tag} hole {quantity.removesuffix('_mm')}", value, probe))
    return tuple(found)


def _near(file: str, what: str, value: float, probe: Probe) -> Expectation:
    return Expectation(file, what, value, PLACE_ALLOWED_MM, "mm", probe)


def _bar(seat: SeatPlan, inset_mm: float) -> Shape:
    half = seat.half_width_mm - inset_mm
    return box((seat.start_mm, seat.end_mm), (-half, half), (seat.axis_mm - half, seat.axis_mm + half))


def _groove_tool(groove: Groove, seat: SeatPlan) -> Shape:
    """Round bottom about the datum plane, straight walls up past the boom's top line, straight through in y."""
    import cadquery as cq

    y, r, x = -seat.half_width_mm - OVERRUN_MM, groove.radius_mm, groove.at_mm
    top = seat.top_mm + OVERRUN_MM
    corners = [cq.Vector(x + r, y, 0), cq.Vector(x + r, y, top), cq.Vector(x - r, y, top), cq.Vector(x - r, y, 0)]
    edges = [cq.Edge.makeLine(a, b) for a, b in pairwise(corners)]
    edges.append(cq.Edge.makeThreePointArc(corners[3], cq.Vector(x, y, -r), corners[0]))
    return cq.Solid.extrudeLinear(cq.Wire.assembleEdges(edges), [], cq.Vector(0, -2.0 * y, 0))


def _drawing(plan: Plan) -> DrawingPiece:
    seat, half = plan.seat, plan.seat.half_width_mm
    marks = [Mark(rectangle((seat.start_mm, seat.end_mm), (-half, half)), "OUTLINE")]
    seats = [(g.at_mm, g.radius_mm, f"GROOVE-DEPTH-{g.depth_mm:.2f}") for g in seat.grooves]
    seats += [(h.at_mm, h.diameter_mm / 2.0, f"HOLE-DIAMETER-{h.diameter_mm:.2f}") for h in seat.holes]
    for at_mm, r, layer in seats:
        marks.append(Mark(rectangle((at_mm - r, at_mm + r), (-half, half)), layer))
        marks.append(Mark(Contour(((at_mm, -half - 2.0, 0.0), (at_mm, half + 2.0, 0.0)), closed=False), "CENTRE"))
    for groove in seat.grooves:
        if groove.pocket:
            y = min(groove.pocket.half_y_mm, half)
            x = (groove.at_mm - groove.pocket.half_x_mm, groove.at_mm + groove.pocket.half_x_mm)
            marks.append(Mark(rectangle(x, (-y, y)), f"POCKET-DEPTH-{groove.depth_mm:.2f}"))
    arm = DATUM_ARM_MM
    marks.append(Mark(Contour(((-arm, 0.0, 0.0), (arm, 0.0, 0.0)), closed=False), "DATUM"))
    marks.append(Mark(Contour(((0.0, -arm, 0.0), (0.0, arm, 0.0)), closed=False), "DATUM"))
    bar_y = -math.ceil(half + 8.0)
    marks.append(Mark(Contour(((0.0, bar_y, 0.0), (CHECK_BAR_MM, bar_y, 0.0)), closed=False), "CHECK-BAR"))
    notes = [Lettering(f"check bar {CHECK_BAR_MM:g} mm", 0.0, bar_y - 4.0, 2.5, "CHECK-BAR")]
    for tag, at_mm in [(g.tag, g.at_mm) for g in seat.grooves] + [(h.tag, h.at_mm) for h in seat.holes]:
        notes.append(Lettering(tag, at_mm - 1.0, half + 3.0, 2.5, "CENTRE"))
    return DrawingPiece("boom", "cnc", tuple(marks), tuple(notes))
