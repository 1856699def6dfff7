"""The length gauge: plates with a go and a no-go slot for every distinct rod length."""

from __future__ import annotations

from functools import partial
from typing import TYPE_CHECKING

from boomwright.parts.feet import expect_foot
from boomwright.parts.printed import chamfered_plate, expect_extent, label_tools, printed_piece
from boomwright.parts.solids import Shape, box, cut, cylinder
from boomwright.pieces import Expectation, Part, Piece, Probe
from boomwright.plan.compensation import Offsets, printer_offsets
from boomwright.plan.gauge import END_MM, PUSH_MM, GaugePlate, plan_gauge

if TYPE_CHECKING:
    from boomwright.plan.plan import Plan

SLOT_ALLOWED_MM = 0.01
NICK_MM = 2.0
"""Radius of the half-round nick in the edge beside a no-go slot: felt as well as seen."""


class LengthGauge(Part):
    """Go and no-go slots, printed."""

    name = "length-gauge"
    purpose = "shows whether a rod is cut to length: it drops into its go slot and not into the one with the nick"
    processes = ("print",)
    left_out_when = "no straight rod to check, or every rod longer than the bed: the plan then says to use a steel rule"

    def left_out(self, plan: Plan) -> str | None:
        """Nothing straight to check, or every rod longer than the bed."""
        return plan_gauge(plan.design, plan.shop)[0].left_out

    def build(self, plan: Plan) -> tuple[Piece, ...]:
        """The plates. A slot's ends are side faces: only the outline growth moves them."""
        gauge, _ = plan_gauge(plan.design, plan.shop)
        drawn = Offsets(outline_growth_mm=printer_offsets(plan.shop.printer).outline_growth_mm)
        return tuple(
            printed_piece(f"{self.name}-{number}", partial(_shape, plate), drawn)
            for number, plate in enumerate(gauge.plates, 1)
        )

    def expect(self, plan: Plan) -> tuple[Expectation, ...]:
        """The length of every slot in STEP and, with the printer's growth, in STL; its width; the outer sizes."""
        gauge, _ = plan_gauge(plan.design, plan.shop)
        growth, found = plan.shop.printer.outline_growth_mm, list[Expectation]()
        for number, plate in enumerate(gauge.plates, 1):
            stem = f"print/{self.name}-{number}"
            for slot in plate.slots:
                # A tenth of the way along: beside the opening in the middle, and over the floor.
                at = (END_MM + slot.length_mm / 10.0, slot.y_mm, plate.size_mm[2] - 0.1)
                word = "go" if slot.is_go else "no-go"
                for suffix, moved in (("step", 0.0), ("stl", 2.0 * growth)):
                    for along, what, size in (
                        ((1.0, 0.0, 0.0), "length", slot.length_mm),
                        ((0.0, 1.0, 0.0), "width", slot.width_mm),
                    ):
                        probe = Probe("free_mm", {"at": at, "along": along})
                        words = f"{slot.tags} {word} slot {what}"
                        found.append(Expectation(f"{stem}.{suffix}", words, size + moved, SLOT_ALLOWED_MM, "mm", probe))
            found += [*expect_extent(f"{stem}.step", plate.size_mm), expect_foot(f"{self.name}-{number}")]
        return tuple(found)


def _shape(plate: GaugePlate, offsets: Offsets) -> Shape:
    import shapely

    g, (length, width, top) = offsets.outline_growth_mm, plate.size_mm
    body = chamfered_plate(shapely.box(0.0, 0.0, length, width), top, g)
    tools: list[Shape] = []
    for slot in plate.slots:
        y = (slot.y_mm - slot.width_mm / 2.0 - g, slot.y_mm + slot.width_mm / 2.0 + g)
        tools.append(box((END_MM - g, END_MM + slot.length_mm + g), y, (slot.floor_mm, top + 1.0)))
        if not slot.is_go:
            tools.append(cylinder((0.0, slot.y_mm, -1.0), (0, 0, 1), NICK_MM + g, top + 2.0))
        push, middle = min(PUSH_MM, slot.length_mm / 3.0) / 2.0 + g, END_MM + slot.length_mm / 2.0
        tools.append(box((middle - push, middle + push), y, (-1.0, slot.floor_mm + 0.5)))
    return cut(body, tools + label_tools(plate.labels))
