"""The printed cradle: holds every conductor of the datum plane level, square and centred while the adhesive cures."""

from __future__ import annotations

from functools import cache
from typing import TYPE_CHECKING

from boomwright.parts.cradle_expect import expect_section, expect_together
from boomwright.parts.cradle_solid import bored, solid_shape
from boomwright.parts.palette import PRINTED
from boomwright.parts.solids import Shape, place
from boomwright.pieces import Body, Expectation, Part, Piece, SolidPiece
from boomwright.plan.compensation import NOMINAL, Offsets, printer_offsets
from boomwright.plan.cradle import cradle_left_out
from boomwright.plan.cradle_model import Section

if TYPE_CHECKING:
    from boomwright.plan.plan import Plan


class CradlePart(Part):
    """The cradle, in as many pieces as the bed asks for."""

    name = "cradle"
    purpose = "holds all rods on the datum plane, square and centred, while the adhesive cures"
    processes = ("print",)
    left_out_when = "no conductor lies on the datum plane: no rods, and the driven element is upright or a loop"

    def left_out(self, plan: Plan) -> str | None:
        """Without a conductor on the datum plane there is nothing to hold."""
        return cradle_left_out(plan.design)

    def build(self, plan: Plan) -> tuple[Piece, ...]:
        """Every piece, nominal and as drawn for this printer."""
        return tuple(_piece(plan, section) for section in plan.cradle.sections)

    def expect(self, plan: Plan) -> tuple[Expectation, ...]:
        """Of every piece what it holds and keeps clear of; of all together the joints' play and no overlap."""
        found: list[Expectation] = []
        for section in plan.cradle.sections:
            found += expect_section(plan, section, drawn_offsets(plan, section))
        return (*found, *expect_together(plan))


def drawn_offsets(plan: Plan, section: Section) -> Offsets:
    """What the printer changes in a section: its outlines, and its bores where it has any."""
    offsets = printer_offsets(plan.shop.printer)
    return Offsets(offsets.outline_growth_mm, offsets.hole_shrink_mm if section.bores else 0.0)


def _piece(plan: Plan, section: Section) -> SolidPiece:
    cradle, drawn = plan.cradle, drawn_offsets(plan, section)

    @cache
    def solid(growth_mm: float) -> Shape:
        return solid_shape(section, cradle.axis_height_mm, plan.shop.printer.press_clearance_mm, growth_mm)

    def body(offsets: Offsets) -> Body:
        shape = bored(solid(offsets.outline_growth_mm), section, offsets)
        # Turning about x is its own inverse: the same frame takes the cradle into the design.
        return Body(section.stem, place(shape, cradle.frame), PRINTED)

    printed = (body(drawn),) if drawn else None
    taken = {"outline_growth_mm": drawn.outline_growth_mm, "hole_shrink_mm": drawn.hole_shrink_mm}
    return SolidPiece(section.stem, "print", (body(NOMINAL),), cradle.frame_of(section), printed, taken)
