"""The groove guide, printed: clamps on the boom and leads a file, ball mill or drill at every seat."""

from __future__ import annotations

import math
from functools import partial
from typing import TYPE_CHECKING

from boomwright.parts.feet import CHAMFER_MM, expect_foot
from boomwright.parts.printed import chamfered_plate, expect_extent, label_tools, printed_piece
from boomwright.parts.solids import Shape, box, cut, cylinder, prism_along_y, unite
from boomwright.pieces import Expectation, Part, Piece, Probe
from boomwright.plan.compensation import Offsets, printer_offsets
from boomwright.plan.guide import END_STOP_MM, GuideCut, GuidePlan, GuideSection, guide_labels, plan_guide

if TYPE_CHECKING:
    from boomwright.plan.plan import Plan

ALLOWED_MM = 0.015


class GrooveGuide(Part):
    """The guide, in as many sections as the bed asks for."""

    name = "groove-guide"
    purpose = "clamps on the boom with ties: a slot over every groove to file or mill along, a bore at every hole"
    processes = ("print",)
    left_out_when = "the boom has no seats, or the bed is too short for a section over one seat"

    def left_out(self, plan: Plan) -> str | None:
        """No seats, or a bed too short for one."""
        return plan_guide(plan.design, plan.boom, plan.wished_seat, plan.shop)[0].left_out

    def build(self, plan: Plan) -> tuple[Piece, ...]:
        """One piece a section, roof on the bed."""
        guide, _ = plan_guide(plan.design, plan.boom, plan.wished_seat, plan.shop)
        offsets = _offsets(plan, guide)
        return tuple(
            printed_piece(f"{self.name}-{number}", partial(_shape, guide, number), offsets)
            for number in range(1, len(guide.sections) + 1)
        )

    def expect(self, plan: Plan) -> tuple[Expectation, ...]:
        """Place and width of every slot or bore, the boom's channel, the wall at its end; the outer sizes."""
        guide, _ = plan_guide(plan.design, plan.boom, plan.wished_seat, plan.shop)
        offsets, found = _offsets(plan, guide), list[Expectation]()
        for number, section in enumerate(guide.sections, 1):
            stem = f"print/{self.name}-{number}"
            for suffix, drawn in (("step", Offsets()), ("stl", offsets)):
                found += _expect(guide, section, f"{stem}.{suffix}", drawn)
            size = (section.end_mm - section.start_mm, 2.0 * guide.outer_half_mm, guide.top_mm)
            found += [*expect_extent(f"{stem}.step", size), expect_foot(f"{self.name}-{number}")]
        return tuple(found)


def _offsets(plan: Plan, guide: GuidePlan) -> Offsets:
    """Bores shrink; slots and the boom's channel are outlines."""
    drawn = printer_offsets(plan.shop.printer)
    bored = any(c.depth_mm == 0.0 for section in guide.sections for c in section.cuts)
    return Offsets(drawn.outline_growth_mm, drawn.hole_shrink_mm if bored else 0.0)


def _expect(guide: GuidePlan, section: GuideSection, file: str, drawn: Offsets) -> list[Expectation]:
    g, found = drawn.outline_growth_mm, list[Expectation]()

    def free(what: str, value: float, at: tuple[float, float, float], along: tuple[int, int, int], side: str) -> None:
        probe = Probe("free_mm", {"at": at, "along": along, "side": side})
        found.append(Expectation(file, what, value, ALLOWED_MM, "mm", probe))

    for one in section.cuts:
        x, half = one.at_mm - section.start_mm, one.width_mm / 2.0
        wide = half + (g if one.depth_mm else drawn.hole_shrink_mm / 2.0)
        word = "slot" if one.depth_mm else "bore"
        at = (x, 0.0, guide.roof_mm / 2.0)
        free(f"{one.tag} {word}, rear wall from its middle", wide, at, (-1, 0, 0), "ahead")
        free(f"{one.tag} {word}, front wall from its middle", wide, at, (1, 0, 0), "ahead")
        if one.depth_mm:
            point = guide.roof_mm + _point_mm(one) + g
            at = (x, guide.outer_half_mm - 2.0, guide.roof_mm)
            free(f"{one.tag} slot, end of its point above the roof", point - guide.roof_mm, at, (0, 0, 1), "ahead")
    x = section.end_mm - section.start_mm - 2.0
    at = (x, 0.0, (guide.roof_mm + guide.top_mm) / 2.0)
    free("boom's channel", 2.0 * (guide.inner_half_mm + g), at, (0, 1, 0), "both")
    if section.has_stop and section.cuts:
        first = section.cuts[0]
        reach = first.at_mm - guide.boom_start_mm
        at = (first.at_mm - section.start_mm, 0.0, guide.roof_mm + 1.0)
        free(f"boom's end from the middle of {first.tag}", reach + g, at, (-1, 0, 0), "ahead")
    return found


def _point_mm(one: GuideCut) -> float:
    """Depth under the boom's top of the point in which a file of the groove's width comes to rest at the groove's."""
    r = one.width_mm / 2.0
    return one.depth_mm - r + math.sqrt(2.0) * r


def _shape(guide: GuidePlan, number: int, offsets: Offsets) -> Shape:
    import shapely

    section = guide.sections[number - 1]
    g, length, outer = offsets.outline_growth_mm, section.end_mm - section.start_mm, guide.outer_half_mm
    body = chamfered_plate(shapely.box(0.0, -outer, length, outer), guide.roof_mm, g)
    low, x = 0.5 * guide.roof_mm, (g, length - g)
    added = [box(x, (guide.inner_half_mm + g, outer - g), (low, guide.top_mm))]
    added.append(box(x, (g - outer, -guide.inner_half_mm - g), (low, guide.top_mm)))
    if section.has_stop:
        inside = guide.inner_half_mm + 1.0
        added.append(box((g, END_STOP_MM - g), (-inside, inside), (low, guide.top_mm)))
    tools = [_tool(guide, one, one.at_mm - section.start_mm, offsets) for one in section.cuts]
    return cut(unite(body, added), tools + label_tools(guide_labels(guide, number)))


def _tool(guide: GuidePlan, one: GuideCut, x_mm: float, offsets: Offsets) -> Shape:
    """A slot through roof and cheeks that ends in a point of 90 degrees (printed without support), or a bore.

    Both are wider at the bed, where the first layers squeeze inward and the tool goes in.
    """
    import cadquery as cq

    if one.depth_mm == 0.0:
        radius = (one.width_mm + offsets.hole_shrink_mm) / 2.0
        bore = cylinder((x_mm, 0.0, -1.0), (0, 0, 1), radius, guide.roof_mm + 2.0)
        mouth = cq.Solid.makeCone(
            radius + 2.0 * CHAMFER_MM, radius, 2.0 * CHAMFER_MM, cq.Vector(x_mm, 0.0, -CHAMFER_MM)
        )
        return unite(bore, [mouth])
    half, reach = one.width_mm / 2.0 + offsets.outline_growth_mm, guide.outer_half_mm + 1.0
    point = guide.roof_mm + _point_mm(one) + offsets.outline_growth_mm
    outline = [
        (x_mm - half, CHAMFER_MM),
        (x_mm - half - 2.0 * CHAMFER_MM, -CHAMFER_MM),
        (x_mm + half + 2.0 * CHAMFER_MM, -CHAMFER_MM),
        (x_mm + half, CHAMFER_MM),
        (x_mm + half, point - half),
        (x_mm, point),
        (x_mm - half, point - half),
    ]
    return prism_along_y(outline, (-reach, reach))
