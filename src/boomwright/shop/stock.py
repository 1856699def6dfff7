"""Cutting bars: which piece comes from which bar, so that the fewest bars and then the least length are used."""

from __future__ import annotations

import math
from collections import Counter
from collections.abc import Sequence
from dataclasses import dataclass

from boomwright.shop.patterns import pack
from boomwright.shop.profile import Saw

UNITS_PER_MM = 10
"""Lengths are compared as whole tenths, pieces rounded up, bars down: finer than any saw, and quick to search."""


@dataclass(frozen=True)
class Blank:
    """A piece to be cut: its tag and finished length [mm]."""

    tag: str
    length_mm: float


@dataclass(frozen=True)
class Sawn:
    """A piece on a bar: where its blank starts and ends, from the bar's first end [mm]; dressing included."""

    blank: Blank
    start_mm: float
    end_mm: float


@dataclass(frozen=True)
class CutBar:
    """One bar: its length [mm], its pieces in sawing order (the longest first), and what is left [mm]."""

    length_mm: float
    pieces: tuple[Sawn, ...]
    offcut_mm: float


@dataclass(frozen=True)
class Cutting:
    """How pieces are cut from bars.

    bars     bars that are cut, in order
    proven   whether no fewer, and of as few no shorter, bars can do
    missing  pieces for which the shelf has no room; without any, all are cut
    """

    bars: tuple[CutBar, ...]
    proven: bool
    missing: tuple[Blank, ...] = ()


def cut_bars(blanks: Sequence[Blank], shelf: Sequence[tuple[float, int]], saw: Saw) -> Cutting:
    """The fewest bars, then the least total length of bars, from which all blanks can be cut.

    blanks  pieces to be cut, up to a hundred or so; lengths above 0 [mm]
    shelf   bars there are: (length [mm], count), all above 0
    saw     kerf of one cut, and what is left at each end of a piece for dressing it square [mm]

    Every piece takes its length, twice the dressing and one kerf; the last kerf of a bar may fall beside the bar.
    Returns the cutting; where the shelf is too small, what cannot be cut stands in `missing`.
    """
    pieces = sorted(blanks, key=lambda b: (-b.length_mm, b.tag))
    needs = [math.ceil(round((_rough_mm(b, saw) + saw.kerf_mm) * UNITS_PER_MM, 6)) for b in pieces]
    rooms = Counter[int]()
    lengths_mm: dict[int, float] = {}
    for length_mm, count in shelf:
        room = math.floor(round((length_mm + saw.kerf_mm) * UNITS_PER_MM, 6))
        rooms[room] += min(count, len(pieces))
        lengths_mm[room] = length_mm
    packing = pack(needs, rooms)
    bars = [_cut(lengths_mm[room], [pieces[i] for i in members], saw) for room, members in packing.bars]
    return Cutting(tuple(bars), packing.proven, tuple(pieces[i] for i in packing.missing))


def _rough_mm(blank: Blank, saw: Saw) -> float:
    return blank.length_mm + 2.0 * saw.dress_mm


def _cut(length_mm: float, pieces: Sequence[Blank], saw: Saw) -> CutBar:
    at, sawn = 0.0, list[Sawn]()
    for blank in pieces:
        end = at + _rough_mm(blank, saw)
        sawn.append(Sawn(blank, at, end))
        at = end + saw.kerf_mm
    return CutBar(length_mm, tuple(sawn), max(0.0, length_mm - at))
