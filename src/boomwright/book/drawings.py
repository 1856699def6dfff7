"""The drawings: where each picture stands and what to take from it."""

from __future__ import annotations

from boomwright.book.content import Block, Chapter, Figure, Paragraph, Picture
from boomwright.book.run import Run
from boomwright.book.words import mm


def drawing_words(run: Run, what: str) -> tuple[Paragraph, ...]:
    """Where to find the drawing of something (`boom`, `rods`); nothing where none was made."""
    if not run.has("drawings"):
        return ()
    return (Paragraph(f"Its sheet is in the chapter of drawings, and at full size in bench/drawing-{what}.dxf."),)


def chapter(run: Run) -> Chapter:
    """Boom, rods, cradle, mould and former."""
    seat = run.plan.seat
    blocks: list[Block] = [
        Paragraph(
            "All lengths are in millimetres. Places count from the datum, x growing toward the front; the boom "
            f"reaches from {mm(seat.start_mm)} to {mm(seat.end_mm)}. Lengths without a tolerance of their own: fine "
            "general tolerance."
        ),
        Paragraph("The same sheets lie in bench/: one DXF each at true size, all of them in one PDF at their scale."),
        Figure(Picture.BOOM_DRAWING, "Boom: every seat from one datum, with width and depth."),
        Figure(Picture.ROD_TABLE, "Rods: tag, length, diameter, place."),
        Figure(Picture.DRIVEN_DRAWING, "Driven element."),
        Figure(Picture.CRADLE_DRAWING, "Cradle: every axis at one height above the table."),
        Figure(Picture.MOULD_DRAWING, "Mould of the feed point."),
        Figure(Picture.FORMER_DRAWING, "Former or jig of the driven element."),
    ]
    return Chapter("Drawings", "drawings", tuple(blocks))
