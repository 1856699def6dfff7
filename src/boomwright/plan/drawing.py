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
from boomwright.plan.drawing_sheet import A2_MM, A3_MM, A4_MM, Sheet, Title, lay_sheet
from boomwright.plan.former import plan_former

if TYPE_CHECKING:
    from boomwright.plan.plan import Plan

LEAST_A4_SCALE = 0.5
"""A4 is taken where every sheet finds room on it at half its size or better."""

PREFIX = "drawing-"
FINE, MEDIUM = "ISO 2768-f", "ISO 2768-mK"


@dataclass(frozen=True)
class Kind:
    """A kind of sheet: its name in files, in words, what the thing is made of, how exact, and what makes its blocks."""

    stem: str
    what: str
    material: str
    tolerance: str
    blocks: Callable[[Plan, float], Sequence[Block]]


def plan_drawings(plan: Plan) -> tuple[Sheet, ...]:
    """The sheets, all of one size: boom, rods, driven element, cradle, mould, former, those that the design has."""
    found: tuple[Sheet, ...] = ()
    for size_mm, least in ((A4_MM, LEAST_A4_SCALE), (A3_MM, 0.0), (A2_MM, 0.0)):
        sheets = [_sheet(plan, size_mm, kind) for kind in _kinds(plan)]
        found = tuple(sheet for sheet in sheets if sheet is not None)
        if len(found) == len(sheets) and all(sheet.scale >= least for sheet in found):
            break
    return tuple(replace(sheet, number=i, count=len(found)) for i, sheet in enumerate(found, 1))


def _kinds(plan: Plan) -> list[Kind]:
    """What is drawn of this design on this shop's machines."""
    design, printed = plan.design, plan.shop.printer.material
    kinds = [Kind("boom", "Boom", plan.boom.material, MEDIUM, boom_blocks)]
    if design.rods:
        rods = ", ".join(dict.fromkeys(rod.material for rod in design.rods))
        kinds.append(Kind("rods", "Rods", rods, FINE, rod_blocks))
    kinds.append(Kind("driven", "Driven element", design.driven.material, FINE, driven_blocks))
    if plan.laid is not None and "cradle" not in _faulty(plan):
        kinds.append(Kind("cradle", "Cradle", printed, MEDIUM, cradle_blocks))
    if "mould" not in _faulty(plan):
        kinds.append(Kind("mould", "Feed-point mould", printed, MEDIUM, mould_blocks))
    if plan_former(design, plan.shop)[0].left_out is None:
        kinds.append(Kind("former", "Former", printed, MEDIUM, former_blocks))
    return kinds


def _faulty(plan: Plan) -> set[str]:
    return {name for name, faults in plan.faults.items() if faults}


def _sheet(plan: Plan, size_mm: tuple[float, float], kind: Kind) -> Sheet | None:
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
    return lay_sheet(title, size_mm, partial(kind.blocks, plan))
