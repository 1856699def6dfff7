"""The drawings of a plan: which sheets there are, their size and scale."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from typing import TYPE_CHECKING

from boomwright import __version__
from boomwright.plan.drawing_boom import boom_blocks
from boomwright.plan.drawing_cradle import cradle_blocks
from boomwright.plan.drawing_driven import driven_blocks
from boomwright.plan.drawing_former import former_blocks
from boomwright.plan.drawing_marks import Block
from boomwright.plan.drawing_mould import mould_blocks
from boomwright.plan.drawing_rods import rod_blocks
from boomwright.plan.drawing_sheet import A3_MM, A4_MM, Sheet, Title, lay_sheet
from boomwright.plan.former import plan_former

if TYPE_CHECKING:
    from boomwright.plan.plan import Plan

LEAST_A4_SCALE = 0.5
"""A4 is taken where every sheet finds room on it at half its size or better."""

PREFIX = "drawing-"
FINE, MEDIUM = "ISO 2768-f", "ISO 2768-mK"


def plan_drawings(plan: Plan) -> tuple[Sheet, ...]:
    """The sheets, all of one size: boom, rods, driven element, cradle, mould, former, those that the design has."""
    small = _sheets(plan, A4_MM)
    sheets = small if all(sheet.scale >= LEAST_A4_SCALE for sheet in small) else _sheets(plan, A3_MM)
    return tuple(replace(sheet, number=i, count=len(sheets)) for i, sheet in enumerate(sheets, 1))


def _sheets(plan: Plan, size_mm: tuple[float, float]) -> list[Sheet]:
    design, printed = plan.design, plan.shop.printer.material
    rods = ", ".join(dict.fromkeys(rod.material for rod in design.rods))
    found = [_sheet(plan, size_mm, ("boom", "Boom", plan.boom.material, MEDIUM), 0)]
    if design.rods:
        found.append(_sheet(plan, size_mm, ("rods", "Rods", rods, FINE), 1))
    found.append(_sheet(plan, size_mm, ("driven", "Driven element", design.driven.material, FINE), 2))
    if plan.laid is not None and "cradle" not in _faulty(plan):
        found.append(_sheet(plan, size_mm, ("cradle", "Cradle", printed, MEDIUM), 3))
    if "mould" not in _faulty(plan):
        found.append(_sheet(plan, size_mm, ("mould", "Feed-point mould", printed, MEDIUM), 4))
    if plan_former(design, plan.shop)[0].left_out is None:
        found.append(_sheet(plan, size_mm, ("former", "Former", printed, MEDIUM), 5))
    return found


def _faulty(plan: Plan) -> set[str]:
    return {name for name, faults in plan.faults.items() if faults}


def _sheet(plan: Plan, size_mm: tuple[float, float], words: tuple[str, str, str, str], index: int) -> Sheet:
    makers = (boom_blocks, rod_blocks, driven_blocks, cradle_blocks, mould_blocks, former_blocks)
    stem, what, material, tolerance = words
    design = plan.design
    title = Title(
        f"{PREFIX}{stem}",
        f"{what}: {design.title or design.name}",
        design.name,
        f"{design.name}-{stem}",
        material,
        f"boomwright {__version__}",
        tolerance,
    )

    def build(scale: float) -> Sequence[Block]:
        return makers[index](plan, scale)

    return lay_sheet(title, size_mm, build)
