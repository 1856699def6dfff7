"""The drawings: where each picture stands and what to take from it."""

from __future__ import annotations

from boomwright.book.content import Block, Chapter, Figure, Paragraph, Picture
from boomwright.book.run import Run
from boomwright.book.words import mm


def chapter(run: Run) -> Chapter:
    """Boom, rods, cradle, mould and former."""
    seat = run.plan.seat
    blocks: list[Block] = [
        Paragraph(
            "All lengths are in millimetres. Places count from the datum, x growing toward the front; the boom "
            f"reaches from {mm(seat.start_mm)} to {mm(seat.end_mm)}. Lengths without a tolerance of their own: fine "
            "general tolerance."
        ),
        Figure(Picture.BOOM_DRAWING, "Boom: every seat from one datum, with width and depth."),
    ]
    if run.design.rods:
        blocks.append(Figure(Picture.ROD_TABLE, "Rods: tag, length, diameter, place."))
    if run.has("cradle"):
        height = mm(run.axis_height_mm)
        blocks.append(Figure(Picture.CRADLE, f"Cradle: every axis {height} above the table."))
    if run.has_resin:
        x, y, z = (mm(high - low) for low, high in run.plan.mould.block)
        blocks.append(Figure(Picture.MOULD_CLOSED, f"Mould, closed: {x} along the boom, {y} along the rods, {z} high."))
    if run.has("former"):
        blocks.append(Figure(Picture.FORMER, "Former or jig of the driven element."))
    return Chapter("Drawings", "drawings", tuple(blocks))
