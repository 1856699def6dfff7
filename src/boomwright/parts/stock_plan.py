"""The stock plan as a table for the bench: a row for every piece in sawing order, and one for every offcut."""

from __future__ import annotations

from collections import Counter
from typing import TYPE_CHECKING

from boomwright.pieces import Expectation, Part, Piece, Probe, TablePiece
from boomwright.plan.stock import plan_stock

if TYPE_CHECKING:
    from boomwright.plan.plan import Plan

FILE = "bench/stock-plan.csv"
OFFCUT = "offcut"
COLUMNS = ("bar", "material", "diameter_mm", "bar_length_mm", "source", "tag", "length_mm", "saw_at_mm", "takes_mm")
LENGTH_ALLOWED_MM = 0.005
"""The table gives hundredths."""


class StockPlanPart(Part):
    """Bars and what is cut from them."""

    name = "stock-plan"
    purpose = "which bar each rod is cut from: where to saw, kerf and dressing counted, and the offcuts"
    processes = ("bench",)
    left_out_when = "every conductor is a perfect one, which no shelf holds"

    def left_out(self, plan: Plan) -> str | None:
        """Nothing that could be bought."""
        if plan_stock(plan.design, plan.shop)[0].groups:
            return None
        return "every conductor is a perfect one, which no shelf holds: name their materials"

    def build(self, plan: Plan) -> tuple[Piece, ...]:
        """One table."""
        return (TablePiece("stock-plan", "bench", COLUMNS, _rows(plan)),)

    def expect(self, plan: Plan) -> tuple[Expectation, ...]:
        """Every conductor cut to length as often as needed, and every bar's pieces and offcut as long as the bar."""
        stock, _, _ = plan_stock(plan.design, plan.shop)
        found = []
        wanted = Counter[str]()
        for _, bar in stock.bars:
            for sawn in bar.pieces:
                wanted[sawn.blank.tag] += 1
        lengths = {rod.tag: rod.length_mm for rod in plan.design.rods}
        for tag, count in wanted.items():
            length = lengths.get(tag) or next(
                s.blank.length_mm for _, bar in stock.bars for s in bar.pieces if s.blank.tag == tag
            )
            probe = Probe("column_sum", {"column": "length_mm", "where": {"tag": tag}})
            what = f"{tag} finished length, {count} piece{'s' * (count > 1)}"
            found.append(Expectation(FILE, what, count * length, count * LENGTH_ALLOWED_MM, "mm", probe))
        for number, (_, bar) in enumerate(stock.bars, 1):
            probe = Probe("column_sum", {"column": "takes_mm", "where": {"bar": str(number)}})
            allowed = (len(bar.pieces) + 1) * LENGTH_ALLOWED_MM
            found.append(Expectation(FILE, f"bar {number} used up", bar.length_mm, allowed, "mm", probe))
        rows = sum(len(bar.pieces) + 1 for _, bar in stock.bars)
        return (*found, Expectation(FILE, "number of rows", rows, 0.0, "rows", Probe("row_count")))


def _rows(plan: Plan) -> tuple[tuple[str, ...], ...]:
    stock, _, _ = plan_stock(plan.design, plan.shop)
    rows = []
    for number, (group, bar) in enumerate(stock.bars, 1):
        source = "buy" if group.bought else "shelf"
        head = (str(number), group.material, f"{group.diameter_mm:g}", f"{bar.length_mm:g}", source)
        for sawn in bar.pieces:
            cut_mm = min(sawn.end_mm + plan.shop.saw.kerf_mm, bar.length_mm)
            figures = (sawn.blank.length_mm, sawn.end_mm, cut_mm - sawn.start_mm)
            rows.append((*head, sawn.blank.tag, *(f"{value:.2f}" for value in figures)))
        rows.append((*head, OFFCUT, f"{bar.offcut_mm:.2f}", "", f"{bar.offcut_mm:.2f}"))
    return tuple(rows)
