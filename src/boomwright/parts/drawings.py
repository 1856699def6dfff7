"""The drawings: every sheet as DXF at true size and as SVG, all of them in one PDF at their scale."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

from boomwright.parts.drawn_sizes import drawn_cells, drawn_sizes
from boomwright.pieces import (
    Contour,
    Dimension,
    DrawingPiece,
    Expectation,
    Lettering,
    Mark,
    Page,
    PagesPiece,
    Part,
    PicturePiece,
    Piece,
    Probe,
)
from boomwright.plan.drawing import plan_drawings
from boomwright.plan.drawing_marks import Point, Stroke, Words
from boomwright.plan.drawing_sheet import Sheet
from boomwright.plots.drawing import draw_sheet

if TYPE_CHECKING:
    from boomwright.plan.plan import Plan

PDF_FILE = "bench/drawings.pdf"
TEXT_ALLOWED_MM = 0.0051
"""Half the last decimal that a drawing shows."""

LENGTH_ALLOWED_MM = 0.002


class DrawingsPart(Part):
    """Dimensioned drawings of boom, rods, driven element, cradle, mould and former."""

    name = "drawings"
    purpose = "dimensioned drawings to ISO 128 and 129 of boom, rods, driven element, cradle, mould and former"
    processes = ("bench",)

    def build(self, plan: Plan) -> tuple[Piece, ...]:
        """A DXF and an SVG for each sheet, one PDF of all."""
        sheets = plan_drawings(plan)
        pieces: list[Piece] = []
        for sheet in sheets:
            pieces.append(_drawing(sheet))
            pieces.append(PicturePiece(sheet.title.stem, "bench", draw_sheet(sheet)))
        title = f"drawings: {plan.design.title or plan.design.name}"
        pages = tuple(_page(sheet) for sheet in sheets)
        return (*pieces, PagesPiece("drawings", "bench", title, sheets[0].size_mm, pages))

    def expect(self, plan: Plan) -> tuple[Expectation, ...]:
        """Every dimension's number and length, every table's sizes; PDF and SVG show the same as the DXF."""
        sheets = plan_drawings(plan)
        found = [Expectation(PDF_FILE, "number of sheets", len(sheets), 0.0, "sheets", Probe("page_count"))]
        for page, sheet in enumerate(sheets):
            file, sizes = f"bench/{sheet.title.stem}.dxf", drawn_sizes(plan, sheet.title.stem)
            count = Probe("dimension_count")
            found.append(Expectation(file, "number of dimensions", len(sizes), 0.0, "dimensions", count))
            for name, value in sizes.items():
                arguments = {"name": name}
                text, length = Probe("dimension_text", arguments), Probe("dimension_length", arguments)
                found.append(Expectation(file, f"{name} as written", value, TEXT_ALLOWED_MM, "mm", text))
                found.append(Expectation(file, f"{name} as drawn", value, LENGTH_ALLOWED_MM, "mm", length))
            for cell in drawn_cells(plan, sheet.title.stem):
                probe = Probe("table_cell", {"key": cell.key, "row": cell.row, "column": cell.column})
                what = f"{cell.row} {cell.column} in the table"
                found.append(Expectation(file, what, cell.value, cell.allowed, cell.unit, probe))
            for other, at in ((PDF_FILE, {"page": page}), (f"bench/{sheet.title.stem}.svg", {})):
                what = f"what differs from {sheet.title.stem}.dxf"
                found.append(Expectation(other, what, 0.0, 0.0, "", Probe("mismatch", at, (file,))))
        return tuple(found)


def _drawing(sheet: Sheet) -> DrawingPiece:
    """The sheet at true size: the main view's zero at the origin, the frame scaled up or down round it."""
    (x, y), scale = sheet.origin, sheet.scale

    def true(point: Point) -> Point:
        return (point[0] - x) / scale, (point[1] - y) / scale

    def sized(words: Words) -> Words:
        at = true((words.x_mm, words.y_mm))
        return replace(words, x_mm=at[0], y_mm=at[1], height_mm=words.height_mm / scale)

    def drawn(stroke: Stroke) -> Stroke:
        return replace(stroke, vertices=tuple((*true((u, v)), bulge) for u, v, bulge in stroke.vertices))

    def measured(one: Dimension) -> Dimension:
        return replace(
            one,
            ends=(true(one.ends[0]), true(one.ends[1])),
            line=(true(one.line[0]), true(one.line[1])),
            strokes=tuple(drawn(stroke) for stroke in one.strokes),
            words=sized(one.words),
        )

    marks = [Mark(Contour(s.vertices, s.closed), s.layer) for s in map(drawn, sheet.strokes)]
    lettering = tuple(_lettering(sized(words)) for words in sheet.words)
    dimensions = tuple(measured(one) for one in sheet.dimensions)
    return DrawingPiece(sheet.title.stem, "bench", tuple(marks), lettering, dimensions=dimensions, paper_scale=scale)


def _page(sheet: Sheet) -> Page:
    """The sheet as it is on paper, arcs as chords."""
    marks = []
    for stroke in sheet.strokes:
        vertices = tuple((u, v, 0.0) for u, v in stroke.points)
        marks.append(Mark(Contour(vertices, closed=False), stroke.layer))
    return Page(tuple(marks), tuple(_lettering(words) for words in sheet.words), sheet.dimensions)


def _lettering(words: Words) -> Lettering:
    return Lettering(words.text, words.x_mm, words.y_mm, words.height_mm, "TEXT", words.upright)
