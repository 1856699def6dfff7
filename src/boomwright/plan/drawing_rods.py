"""The rods' sheet: a table of all of them and one drawn, with its length and diameter."""

from __future__ import annotations

from collections import Counter
from collections.abc import Sequence
from typing import TYPE_CHECKING

from boomwright.data.tables import general_tolerance_mm
from boomwright.design.model import Rod
from boomwright.plan.drawing_boom import in_short
from boomwright.plan.drawing_marks import Block, shown
from boomwright.plan.drawing_sheet import detail_scale, notes_block, scale_words, table_block
from boomwright.plan.drawing_view import View

if TYPE_CHECKING:
    from boomwright.plan.plan import Plan

ROD_HEAD = ("tag", "at x", "length", "tolerance", "dia.", "material", "coat")
COUNT_HEAD = ("count", "length each", "dia. each", "tags")
END_MM = 14.0
LONGEST_FINE_MM, LONGEST_MM, SHORTEST_MM = 2000.0, 4000.0, 0.5


def rod_blocks(plan: Plan, scale: float) -> Sequence[Block]:
    """What stands on the rods' sheet at a scale."""
    rods = plan.design.rods
    rows = [
        (
            r.tag,
            shown(r.at_mm),
            shown(r.length_mm),
            tolerance(r.length_mm),
            shown(r.diameter_mm),
            r.material,
            shown(r.coat_mm) if r.coat_mm else "-",
        )
        for r in rods
    ]
    lines = [
        "Lengths are tip to tip, bare ends. Ends flat and square to the axis, edges broken 0.2.",
        "Axis straight within the rod's tolerance; mark the tag at the middle.",
    ]
    return [_typical(typical(plan), scale), table_block(ROD_HEAD, rows, 32), _counts(rods), notes_block(lines)]


def typical(plan: Plan) -> Rod:
    """The rod that is drawn: the longest."""
    return max(plan.design.rods, key=lambda rod: rod.length_mm)


def tolerance(length_mm: float) -> str:
    """ISO 2768 fine where that table reaches (to 2 m), medium beyond it (to 4 m), else none."""
    if not SHORTEST_MM <= length_mm <= LONGEST_MM:
        return "-"
    return f"±{general_tolerance_mm(length_mm, 'fine' if length_mm <= LONGEST_FINE_MM else 'medium'):g}"


def _counts(rods: Sequence[Rod]) -> Block:
    like = Counter((shown(r.length_mm), shown(r.diameter_mm)) for r in rods)
    rows = []
    for kind, count in like.items():
        tags = in_short([r.tag for r in rods if (shown(r.length_mm), shown(r.diameter_mm)) == kind])
        rows.append((str(count), *kind, tags))
    return table_block(COUNT_HEAD, rows, 32)


def _typical(rod: Rod, scale: float) -> Block:
    """The rod lying along the sheet, its end beside it enlarged."""
    view, half, r = View(scale), rod.length_mm / 2.0, rod.diameter_mm / 2.0
    view.rectangle((-half, half), (-r, r))
    more = half + 3.0 / scale
    view.run([(-more, 0.0), (more, 0.0)], "CENTRE")
    low = view.at((0.0, -r))[1] - 9.0
    view.straight(f"{rod.tag} length", "x", ((-half, -r), (half, -r)), low)
    view.write(f"ROD {rod.tag}, the others alike", (view.at((0.0, 0.0))[0], low - 7.0), middle=True)
    detail = detail_scale(rod.diameter_mm, END_MM)
    end = View(detail, (view.at((half, 0.0))[0] + 22.0, 0.0))
    end.circle((0.0, 0.0), r)
    end.diameter(f"{rod.tag} diameter", (0.0, 0.0), r, 45.0)
    end.write(f"END ({scale_words(detail)})", (end.origin[0], low - 7.0), middle=True)
    view.take(end)
    return view.block()
