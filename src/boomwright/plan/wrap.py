"""The wrap template: a paper strip round the boom, at true scale, with a line for every seat, over as many pages.

x runs along the strip as along the boom; the strip's middle line lies on the boom's top. All in millimetres.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import lru_cache

from boomwright.design.model import Boom, Design, Seat
from boomwright.plan.seat import plan_seat
from boomwright.plan.size import Size

PAGE_MM = (297.0, 210.0)
"""A4, long side along the boom (ISO 216)."""

MARGIN_MM = 10.0
"""What a desktop printer leaves white (common practice)."""

OVERLAP_MM = 15.0
"""Strip that two neighbouring pages both show: where they are glued."""

HEAD_MM, FOOT_MM = 30.0, 32.0
"""Room for the words above the strip and for check bar and match marks below it."""

CHECK_BAR_MM = 100.0


@dataclass(frozen=True)
class WrapLine:
    """A seat's line across the strip, and whether a hole is drilled at the boom's sides there."""

    tag: str
    at_mm: float
    is_hole: bool


@dataclass(frozen=True)
class WrapPage:
    """The part of the boom [mm] that a page shows."""

    start_mm: float
    end_mm: float


@dataclass(frozen=True)
class WrapPlan:
    """The strip and its pages.

    girth_mm   round the boom once
    strip_mm   width of the paper strip: the girth, or what a page takes
    folds_mm   fold lines of a square boom, from the middle line
    """

    start_mm: float
    end_mm: float
    girth_mm: float
    strip_mm: float
    folds_mm: tuple[float, ...]
    lines: tuple[WrapLine, ...]
    pages: tuple[WrapPage, ...]

    @property
    def wraps(self) -> bool:
        """Whether the strip goes all the way round."""
        return self.strip_mm == self.girth_mm


@lru_cache(maxsize=8)
def plan_wrap(design: Design, boom: Boom, seat: Seat) -> tuple[WrapPlan, tuple[Size, ...]]:
    """The template of a design's seats, and its sizes with their origins."""
    seats, _, _ = plan_seat(design, boom, seat)
    lines = [WrapLine(g.tag, g.at_mm, False) for g in seats.grooves] + [
        WrapLine(h.tag, h.at_mm, True) for h in seats.holes
    ]
    round_ = boom.section == "round"
    girth = math.pi * boom.width_mm if round_ else 4.0 * boom.width_mm
    strip = min(girth, PAGE_MM[1] - 2.0 * MARGIN_MM - HEAD_MM - FOOT_MM)
    half = boom.width_mm / 2.0
    folds = () if round_ else tuple(v for v in (-3.0 * half, -half, half, 3.0 * half) if abs(v) < strip / 2.0)
    pages = _pages(seats.start_mm, seats.end_mm)
    plan = WrapPlan(seats.start_mm, seats.end_mm, girth, strip, folds, tuple(lines), pages)
    way = f"pi x boom {boom.width_mm:g}" if round_ else f"4 x boom {boom.width_mm:g}"
    rest = "" if plan.wraps else f", of which a page takes {strip:g}"
    sizes = (
        Size("wrap.girth_mm", girth, "mm", way + rest),
        Size("wrap.pages", len(pages), "", f"A4, neighbours share {OVERLAP_MM:g} mm of the strip"),
    )
    return plan, sizes


def _pages(start_mm: float, end_mm: float) -> tuple[WrapPage, ...]:
    room = PAGE_MM[0] - 2.0 * MARGIN_MM
    pages = [WrapPage(start_mm, min(end_mm, start_mm + room))]
    while pages[-1].end_mm < end_mm - 1e-9:
        begin = pages[-1].end_mm - OVERLAP_MM
        pages.append(WrapPage(begin, min(end_mm, begin + room)))
    return tuple(pages)
