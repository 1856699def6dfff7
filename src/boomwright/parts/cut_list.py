"""The cut list: every conductor with its count, length, tolerance and material."""

from __future__ import annotations

from collections import Counter
from typing import TYPE_CHECKING

from boomwright.data.tables import general_tolerance_mm
from boomwright.design.centreline import developed_length_mm
from boomwright.pieces import Expectation, Part, Piece, Probe, TablePiece

if TYPE_CHECKING:
    from boomwright.plan.plan import Plan

FILE = "bench/cut-list.csv"
SHORTEST_MM, LONGEST_FINE_MM, LONGEST_MM = 0.5, 2000.0, 4000.0
COLUMNS = ("tag", "count", "length_mm", "tolerance_mm", "diameter_mm", "material", "note")


class CutListPart(Part):
    """What to cut from bar and wire."""

    name = "cut-list"
    purpose = "what to cut from bar and wire: tag, count, length with tolerance (ISO 2768 fine), material"
    processes = ("bench",)

    def build(self, plan: Plan) -> tuple[Piece, ...]:
        """One table."""
        return (TablePiece("cut-list", "bench", COLUMNS, _rows(plan)),)

    def expect(self, plan: Plan) -> tuple[Expectation, ...]:
        """The lengths and counts as the file tells them."""
        rows = _rows(plan)
        found = [Expectation(FILE, "number of rows", len(rows), 0.0, "rows", Probe("row_count"))]
        for index, row in enumerate(rows):
            for column in ("count", "length_mm", "diameter_mm"):
                value = float(row[COLUMNS.index(column)])
                probe = Probe("cell", {"row": index, "column": column})
                found.append(Expectation(FILE, f"{row[0]} {column}", value, 1e-9, "mm", probe))
        return tuple(found)


def _rows(plan: Plan) -> tuple[tuple[str, ...], ...]:
    design = plan.design
    rows = []
    like = Counter((r.length_mm, r.diameter_mm, r.material) for r in design.rods)
    for kind, count in like.items():
        tags = [r.tag for r in design.rods if (r.length_mm, r.diameter_mm, r.material) == kind]
        rows.append(_row(" ".join(tags), count, kind, "tip to tip, flat ends, edges broken 0.2"))
    driven = design.driven
    kind = (developed_length_mm(driven), driven.diameter_mm, driven.material)
    if driven.form == "straight":
        half = (kind[0] / 2.0, *kind[1:])
        rows.append(_row("DE", 2, half, "two halves, flat ends, edges broken 0.2"))
    else:
        rows.append(_row("DE", 1, kind, "developed length before bending, along the centreline"))
    return tuple(rows)


def _row(tag: str, count: int, kind: tuple[float, float, str], note: str) -> tuple[str, ...]:
    length, diameter, material = kind
    return (tag, str(count), f"{length:.2f}", _tolerance(length), f"{diameter:g}", material, note)


def _tolerance(length_mm: float) -> str:
    """ISO 2768 fine where that table reaches (to 2 m), medium beyond it (to 4 m), else none."""
    if not SHORTEST_MM <= length_mm <= LONGEST_MM:
        return ""
    return f"{general_tolerance_mm(length_mm, 'fine' if length_mm <= LONGEST_FINE_MM else 'medium'):g}"
