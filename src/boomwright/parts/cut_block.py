"""The cut block, printed: saw a rod against its stop, the blade led square by a slot at the exact length."""

from __future__ import annotations

from functools import partial
from typing import TYPE_CHECKING

from boomwright.parts.feet import expect_foot
from boomwright.parts.printed import chamfered_plate, expect_extent, label_tools, printed_piece
from boomwright.parts.solids import Shape, box, cut, cylinder, prism_along_x
from boomwright.pieces import Expectation, Part, Piece, Probe
from boomwright.plan.compensation import Offsets, drawn_apex_mm, printer_offsets
from boomwright.plan.cut_block import FLOOR_MM, SCREW_MM, CutBlock, CutBlockPlan, plan_cut_block

if TYPE_CHECKING:
    from boomwright.plan.plan import Plan

ALLOWED_MM = 0.01


class CutBlockPart(Part):
    """Trough, stop and saw slots."""

    name = "cut-block"
    purpose = "saws rods to length: the rod lies in the trough against the stop, the slot leads the blade square"
    processes = ("print",)
    left_out_when = "no straight rod to cut, or a bed too short for any block"

    def left_out(self, plan: Plan) -> str | None:
        """Nothing straight to cut."""
        return plan_cut_block(plan.design, plan.shop)[0].left_out

    def build(self, plan: Plan) -> tuple[Piece, ...]:
        """The blocks: one or more with slots, and two for a board where rods are longer than the bed."""
        blocks, _ = plan_cut_block(plan.design, plan.shop)
        offsets = printer_offsets(plan.shop.printer)
        pieces = []
        for number, block in enumerate(blocks.blocks, 1):
            drawn = offsets if block.screws else Offsets(outline_growth_mm=offsets.outline_growth_mm)
            pieces.append(printed_piece(f"{self.name}-{number}", partial(_shape, blocks, block), drawn))
        return tuple(pieces)

    def expect(self, plan: Plan) -> tuple[Expectation, ...]:
        """The stop's distance from every slot, the slots' width, the trough's depth; the outer sizes."""
        blocks, _ = plan_cut_block(plan.design, plan.shop)
        found = list[Expectation]()
        for number, block in enumerate(blocks.blocks, 1):
            stem = f"print/{self.name}-{number}"
            for suffix, growth in (("step", 0.0), ("stl", plan.shop.printer.outline_growth_mm)):
                found += _expect(blocks, block, f"{stem}.{suffix}", growth)
            size = (block.x_mm[1] - block.x_mm[0], 2.0 * blocks.outer_half_mm, blocks.top_mm)
            found += [*expect_extent(f"{stem}.step", size), expect_foot(f"{self.name}-{number}")]
        return tuple(found)


def _expect(blocks: CutBlockPlan, block: CutBlock, file: str, growth_mm: float) -> list[Expectation]:
    found = list[Expectation]()

    def free(what: str, value: float, at: tuple[float, float, float], along: tuple[int, int, int], side: str) -> None:
        probe = Probe("free_mm", {"at": at, "along": along, "side": side})
        found.append(Expectation(file, what, value, ALLOWED_MM, "mm", probe))

    high, beside = blocks.top_mm - 0.3, blocks.mouth_half_mm + 0.5
    for slot in block.slots:
        middle = slot.length_mm + blocks.slot_mm / 2.0
        free(f"{slot.tags} slot width", blocks.slot_mm + 2.0 * growth_mm, (middle, beside, high), (1, 0, 0), "both")
        if block.has_stop:
            # From the slot along the trough back to the stop, and back across the slot's own half.
            reach = middle + growth_mm
            free(f"{slot.tags} stop from the slot's middle", reach, (middle, 0.0, high), (-1, 0, 0), "ahead")
        else:
            near = blocks.slot_mm / 2.0 + growth_mm
            free(f"{slot.tags} slot's wall from its middle", near, (middle, beside, high), (-1, 0, 0), "ahead")
    depth = blocks.top_mm - drawn_apex_mm(blocks.apex_mm, growth_mm)
    at = (block.x_mm[1] - 3.0, 0.0, blocks.top_mm)
    free("trough depth", depth, at, (0, 0, -1), "ahead")
    return found


def _shape(blocks: CutBlockPlan, block: CutBlock, offsets: Offsets) -> Shape:
    import shapely

    g, (x0, x1), outer = offsets.outline_growth_mm, block.x_mm, blocks.outer_half_mm
    body = chamfered_plate(shapely.box(x0, -outer, x1, outer), blocks.top_mm, g)
    apex = drawn_apex_mm(blocks.apex_mm, g)
    mouth = blocks.top_mm + 1.0 - apex
    begin = -g if block.has_stop else x0 - 1.0
    tools: list[Shape] = [
        prism_along_x([(mouth, blocks.top_mm + 1.0), (0.0, apex), (-mouth, blocks.top_mm + 1.0)], (begin, x1 + 1.0))
    ]
    for slot in block.slots:
        x = (slot.length_mm - g, slot.length_mm + blocks.slot_mm + g)
        tools.append(box(x, (-outer - 1.0, outer + 1.0), (FLOOR_MM / 2.0, blocks.top_mm + 1.0)))
    radius = (SCREW_MM + offsets.hole_shrink_mm) / 2.0
    tools += [cylinder((x, y, -1.0), (0, 0, 1), radius, blocks.top_mm + 2.0) for x, y in block.screws]
    return cut(body, tools + label_tools(block.labels))
