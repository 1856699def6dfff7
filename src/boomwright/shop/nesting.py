"""Nesting: which part is cut from which sheet, and where, so that few sheets are used. Millimetres."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

from boomwright.shop.profile import Laser

Extent = tuple[float, float]

PART_GAP_MM = 1.0
"""Room between two parts and at the sheet's edge, besides two kerfs (product rule)."""

UNITS_PER_MM = 1000
"""Places are whole thousandths; sizes are rounded up to them, so that nothing comes nearer than it may."""


@dataclass(frozen=True)
class Place:
    """Where a part lies: number of the sheet (from 0), its drawn rectangle's lower left corner, turned a quarter."""

    sheet: int
    x_mm: float
    y_mm: float
    turned: bool


def sheet_margin_mm(laser: Laser) -> float:
    """Least room [mm] between two drawn contours, and between a drawn contour and the sheet's edge."""
    return 2.0 * laser.kerf_mm + PART_GAP_MM


def sheet_room_mm(laser: Laser) -> Extent:
    """The largest part as cut that a sheet takes [mm]: its size less the margins and half a kerf all round."""
    lost = 2.0 * sheet_margin_mm(laser) + laser.kerf_mm
    return laser.sheet_size_mm[0] - lost, laser.sheet_size_mm[1] - lost


def fits_sheet(size_mm: Extent, laser: Laser) -> bool:
    """Whether a part of this size as cut [mm] fits the sheet, either way round."""
    room = sheet_room_mm(laser)
    return any(x <= room[0] + 1e-9 and y <= room[1] + 1e-9 for x, y in (size_mm, size_mm[::-1]))


def longest_mm(width_mm: float, laser: Laser) -> float:
    """The longest part of this width that the sheet takes, as cut [mm]; 0 where it takes none."""
    room = sheet_room_mm(laser)
    return max((a for a, b in (room, room[::-1]) if width_mm <= b + 1e-9), default=0.0)


def nest(sizes_mm: Sequence[Extent], laser: Laser, turn: bool = True) -> tuple[Place, ...]:
    """A place for every part, in the order of the parts.

    sizes_mm  sizes (x, y) of the parts as cut [mm], each one such that `fits_sheet` holds
    turn      whether parts that fit as they are may be turned too

    Contours are drawn half a kerf outside the parts; drawn rectangles keep `sheet_margin_mm` from each other and from
    the sheet's edge. Of several ways to pack, the first of those with the fewest sheets. Raises ValueError for a part
    that fits no sheet.
    """
    if not all(fits_sheet(size, laser) for size in sizes_mm):
        raise ValueError("a part is larger than the sheet")
    gap, room = sheet_margin_mm(laser), sheet_room_mm(laser)
    turn = turn or any(x > room[0] + 1e-9 or y > room[1] + 1e-9 for x, y in sizes_mm)
    padded = [tuple(_up(side + laser.kerf_mm + gap) for side in size) for size in sizes_mm]
    bin_size = tuple(math.floor(round((side - gap) * UNITS_PER_MM, 3)) for side in laser.sheet_size_mm)
    best: list[Any] = []
    for algorithm in _algorithms():
        packed = _pack(padded, bin_size, algorithm, turn)
        if len(packed) == len(padded) and (not best or _sheets(packed) < _sheets(best)):
            best = packed
    places: list[Place | None] = [None] * len(padded)
    for sheet, x, y, width, _, index in best:
        turned = width != padded[index][0]
        places[index] = Place(sheet, x / UNITS_PER_MM + gap, y / UNITS_PER_MM + gap, turned)
    return tuple(place for place in places if place is not None)


def _up(length_mm: float) -> int:
    return math.ceil(round(length_mm * UNITS_PER_MM, 3))


def _sheets(packed: Sequence[Any]) -> int:
    return 1 + max(int(row[0]) for row in packed)


def _algorithms() -> tuple[Any, ...]:
    from rectpack import MaxRectsBaf, MaxRectsBl, MaxRectsBssf

    return MaxRectsBssf, MaxRectsBaf, MaxRectsBl


def _pack(padded: Sequence[tuple[int, ...]], bin_size: tuple[int, ...], algorithm: Any, turn: bool) -> list[Any]:
    """Rows of (sheet, x, y, width, height, index), the large parts first."""
    from rectpack import SORT_LSIDE, PackingBin, PackingMode, newPacker

    packer = newPacker(PackingMode.Offline, PackingBin.BBF, algorithm, SORT_LSIDE, rotation=turn)
    packer.add_bin(*bin_size, count=len(padded))
    for index, (width, height) in enumerate(padded):
        packer.add_rect(width, height, rid=index)
    packer.pack()
    return sorted(packer.rect_list())
