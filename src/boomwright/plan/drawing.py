"""The drawings of a plan: which sheets there are, their size and scale."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace
from functools import partial
from typing import TYPE_CHECKING

from boomwright import __version__
from boomwright.plan.drawing_boom import boom_blocks
from boomwright.plan.drawing_cradle import cradle_blocks
from boomwright.plan.drawing_driven import driven_blocks
from boomwright.plan.drawing_former import former_blocks
from boomwright.plan.drawing_marks import Block
from boomwright.plan.drawing_mould import mould_blocks
from boomwright.plan.drawing_rods import rod_blocks
from boomwright.plan.drawing_sheet import A2_MM, A3_MM, A4_MM, SCALES, Sheet, Title, lay_sheet
from boomwright.plan.former import plan_former

if TYPE_CHECKING:
    from boomwright.plan.plan import Plan

LEAST_A4_SCALE = 0.5
"""A4 is taken where every sheet finds room on it at half its size or better."""

PREFIX = "drawing-"
FINE, MEDIUM = "ISO 2768-f", "ISO 2768-mK"


@dataclass(frozen=True)
class Kind:
    """A kind of sheet: its name in files, in words, what the thing is made of, how exact, and what makes its blocks.

    longest_mm  the thing's longest side along the sheet
    """

    stem: str
    what: str
    material: str
    tolerance: str
    longest_mm: float
    blocks: Callable[[Plan, float], Sequence[Block]]


def plan_drawings(plan: Plan) -> tuple[Sheet, ...]:
    """The sheets, all of one size: boom, rods, driven element, cradle, mould, former, those that the design has."""
    found: list[Sheet] = []
    kinds = _kinds(plan)
    for size_mm, least in ((A4_MM, LEAST_A4_SCALE), (A3_MM, 0.0), (A2_MM, 0.0)):
        found = []
        for kind in kinds:
            # What is longer than the sheet at a scale need not be laid out to see that it does not fit.
            scales = [scale for scale in SCALES if scale >= least and scale * kind.longest_mm < size_mm[0]]
            sheet = _sheet(plan, size_mm, kind, scales)
            if sheet is None:
                break
            found.append(sheet)
        if len(found) == len(kinds):
            break
    return tuple(replace(sheet, number=i, count=len(found)) for i, sheet in enumerate(found, 1))


def _kinds(plan: Plan) -> list[Kind]:
    """What is drawn of this design on this shop's machines."""
    design, printed = plan.design, plan.shop.printer.material
    kinds = [Kind("boom", "Boom", plan.boom.material, MEDIUM, plan.seat.end_mm - plan.seat.start_mm, boom_blocks)]
    if design.rods:
        rods = ", ".join(dict.fromkeys(rod.material for rod in design.rods))
        kinds.append(Kind("rods", "Rods", rods, FINE, max(rod.length_mm for rod in design.rods), rod_blocks))
    kinds.append(
        Kind("driven", "Driven element", design.driven.material, FINE, design.driven.length_mm or 0.0, driven_blocks)
    )
    if plan.laid is not None and "cradle" not in _faulty(plan):
        kinds.append(Kind("cradle", "Cradle", printed, MEDIUM, _length(plan.laid.extent_mm[0]), cradle_blocks))
    if "mould" not in _faulty(plan):
        kinds.append(Kind("mould", "Feed-point mould", printed, MEDIUM, _length(plan.mould.block[1]), mould_blocks))
    former, _ = plan_former(design, plan.shop)
    if former.left_out is None:
        kinds.append(Kind("former", "Former", printed, MEDIUM, _length(former.x_mm), former_blocks))
    return kinds


def _length(span_mm: tuple[float, float]) -> float:
    return span_mm[1] - span_mm[0]


def _faulty(plan: Plan) -> set[str]:
    return {name for name, faults in plan.faults.items() if faults}


def _sheet(plan: Plan, size_mm: tuple[float, float], kind: Kind, scales: Sequence[float]) -> Sheet | None:
    design = plan.design
    title = Title(
        f"{PREFIX}{kind.stem}",
        f"{kind.what}: {design.title or design.name}",
        design.name,
        f"{design.name}-{kind.stem}",
        kind.material,
        f"boomwright {__version__}",
        kind.tolerance,
    )
    return lay_sheet(title, size_mm, partial(kind.blocks, plan), scales)
