"""The stock plan: which bar of the shelf, or which bar to buy, every rod and the driven element is cut from."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from functools import lru_cache

from boomwright.data.tables import IDEAL
from boomwright.design.centreline import developed_length_mm
from boomwright.design.model import Design
from boomwright.errors import Fault
from boomwright.plan.size import Size
from boomwright.shop.profile import Shop
from boomwright.shop.stock import Blank, CutBar, Cutting, cut_bars

STANDARD_BARS_MM = (1000.0, 2000.0)
"""Bars a metal dealer cuts for anyone (common practice); for longer pieces whole metres."""


@dataclass(frozen=True)
class StockGroup:
    """Everything cut from one material and diameter; `bought` when the bars are not from the shelf."""

    material: str
    diameter_mm: float
    cutting: Cutting
    bought: bool

    @property
    def words(self) -> str:
        """Material and diameter as messages name them."""
        return f"{self.material} {self.diameter_mm:g} mm"


@dataclass(frozen=True)
class StockPlan:
    """The groups, in the order of material and diameter."""

    groups: tuple[StockGroup, ...]

    @property
    def bars(self) -> tuple[tuple[StockGroup, CutBar], ...]:
        """Every bar that is cut, with its group, in the order of the bench."""
        return tuple((group, bar) for group in self.groups for bar in group.cutting.bars)


@lru_cache(maxsize=8)
def plan_stock(design: Design, shop: Shop) -> tuple[StockPlan, tuple[Size, ...], tuple[Fault, ...]]:
    """Bars and pieces of a design, the sizes with their origins, and what the shelf lacks."""
    groups, sizes, faults = [], list[Size](), list[Fault]()
    for (material, diameter_mm), blanks in sorted(_blanks(design).items()):
        if shop.stock:
            bars = [b for b in shop.stock if b.material == material and abs(b.diameter_mm - diameter_mm) < 1e-9]
            shelf = [(b.length_mm, b.count) for b in bars]
        else:
            shelf = [(_standard_mm(blanks, shop), len(blanks))]
        group = StockGroup(material, diameter_mm, cut_bars(blanks, shelf, shop.saw), not shop.stock)
        groups.append(group)
        if group.cutting.missing:
            faults.append(_shortfall(group, shelf, shop))
        sizes += _sizes(group, shop)
    return StockPlan(tuple(groups)), tuple(sizes), tuple(faults)


def _blanks(design: Design) -> dict[tuple[str, float], list[Blank]]:
    """What is cut of each material and diameter: rods, and the driven element's wire or its two halves.

    A perfect conductor is a figure of the calculation: nobody sells it.
    """
    found: dict[tuple[str, float], list[Blank]] = {}
    for rod in design.rods:
        found.setdefault((rod.material, rod.diameter_mm), []).append(Blank(rod.tag, rod.length_mm))
    driven = design.driven
    pieces = 2 if driven.form == "straight" else 1
    one = Blank("DE", developed_length_mm(driven) / pieces)
    found.setdefault((driven.material, driven.diameter_mm), []).extend([one] * pieces)
    return {key: blanks for key, blanks in found.items() if key[0] != IDEAL}


def _standard_mm(blanks: Sequence[Blank], shop: Shop) -> float:
    """The shortest bar on sale that takes the longest of the pieces [mm]."""
    longest = max(b.length_mm for b in blanks) + 2.0 * shop.saw.dress_mm
    fitting = [length for length in STANDARD_BARS_MM if longest <= length]
    return fitting[0] if fitting else math.ceil(longest / 1000.0) * 1000.0


def _shortfall(group: StockGroup, shelf: list[tuple[float, int]], shop: Shop) -> Fault:
    missing = group.cutting.missing
    bar_mm = _standard_mm(missing, shop)
    to_buy = len(cut_bars(missing, [(bar_mm, len(missing))], shop.saw).bars)
    held = ", ".join(f"{count} of {length:g} mm" for length, count in shelf) or "none"
    words = ", ".join(f"{b.tag} {b.length_mm:.4g} mm" for b in missing)
    return Fault(
        "stock",
        f"{group.words}: the shelf ({held}) leaves no bar for {words}",
        f"buy {to_buy} of {bar_mm:g} mm and add them, or leave [[stock]] out to buy everything",
    )


def _sizes(group: StockGroup, shop: Shop) -> list[Size]:
    cutting, key = group.cutting, f"stock.{group.material}.{group.diameter_mm:g}"
    pieces = sum(len(bar.pieces) for bar in cutting.bars)
    source = "to buy (common bar lengths)" if group.bought else "from the shelf"
    best = "proven the fewest, and of as few the shortest" if cutting.proven else "the fewest found, not proven"
    kerf = f"saw kerf {shop.saw.kerf_mm:g} and dressing 2 x {shop.saw.dress_mm:g} a piece"
    used = sum(bar.length_mm for bar in cutting.bars)
    offcuts = ", ".join(f"{bar.offcut_mm:.1f}" for bar in cutting.bars)
    return [
        Size(f"{key}.bars", len(cutting.bars), "", f"{pieces} pieces, {kerf}; {source}; {best}"),
        Size(f"{key}.length_mm", used, "mm", f"all bars together; offcuts {offcuts}"),
    ]
