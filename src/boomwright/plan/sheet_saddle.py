"""Where the boom is carried in the laser-cut cradle, and by what: saddles of sheet that stand across. Millimetres."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from itertools import pairwise

from boomwright.design.model import Boom, Design
from boomwright.plan.seat import SeatPlan
from boomwright.plan.sheet_plate import LeftOutError, Span, free_spans
from boomwright.shop.profile import Shop

ROOT_2 = math.sqrt(2.0)
MOST_SADDLE_SPAN_MM = 300.0
SADDLE_FROM_END_MM, SADDLE_FROM_ROD_MM = 4.0, 20.0
BESIDE_WINDOW_MM = 4.0
FAR_MM = 20.0
"""A saddle this far beyond the rails' ends gets its own sleeper, and the rails run on to it."""

CHEEK_MM, LEAST_CHEEK_MM = 2.4, 0.8
TIE_SLOT_MM = (2.0, 4.2)

RAIL_BEYOND_MM = 6.0
"""Rail beyond its outermost notch, less where a saddle stands there."""

LEAST_BEYOND_MM = 3.0
APART_MM = 0.5
"""Between a saddle and a rail or stop beside it."""


@dataclass(frozen=True)
class SaddleLine:
    """A saddle's place along x, half its width, and half its channel's width at the top."""

    x_mm: Span
    half_mm: float
    channel_half_mm: float
    low_mm: float
    top_mm: float


def saddle_places(design: Design, shop: Shop, seat: SeatPlan, has_window: bool) -> list[Span]:
    """x of each saddle: near both ends of the boom, and between conductors wherever the way between is long."""
    relief, t, driven = shop.cradle.relief_mm, shop.laser.sheet_mm, design.driven
    kept = [(b.at_mm - b.half_x_mm - relief, b.at_mm + b.half_x_mm + relief) for b in seat.bond_lines]
    half = driven.outer_diameter_mm / 2.0 + relief
    # The base has a window under what is fitted later: a saddle stands on the sheet beside it.
    half += BESIDE_WINDOW_MM if has_window else 0.0
    kept.append((driven.at_mm - half, driven.at_mm + half))
    free = free_spans((seat.start_mm, seat.end_mm), kept)
    first, last = free[0], free[-1]
    for room, bare, end in ((first, kept, "tail"), (last, kept, "nose")):
        reached = room[0] > seat.start_mm if end == "tail" else room[1] < seat.end_mm
        if reached or room[1] - room[0] < t or not bare:
            raise LeftOutError(f"the boom's {end} leaves no room for a saddle of {t:g} mm sheet clear of the adhesive")
    places = [_near(first, t, at_end=False), _near(last, t, at_end=True)]
    rooms = [f for f in free[1:-1] if f[1] - f[0] >= t]
    while True:
        places.sort()
        wide = [(a, b) for a, b in pairwise(places) if b[0] - a[1] > MOST_SADDLE_SPAN_MM]
        choices = []
        for a, b in wide:
            target = (a[1] + b[0]) / 2.0
            for low, high in rooms:
                at = min(max(target, low + t / 2.0), high - t / 2.0)
                if a[1] + t < at < b[0] - t:
                    choices.append((abs(at - target), at))
        if not choices:
            return places
        _, at = min(choices)
        places.append((at - t / 2.0, at + t / 2.0))


def _near(room: Span, t: float, at_end: bool) -> Span:
    """A saddle in the free end of the boom: off the end, but not far from the rods."""
    long = room[1] - room[0] - t
    away = min(long - min(SADDLE_FROM_END_MM, long / 2.0), SADDLE_FROM_ROD_MM)
    low = room[0] + away if at_end else room[1] - away - t
    return low, low + t


def stand_saddles(
    given: tuple[Boom, Shop, SeatPlan],
    height_mm: float,
    places: list[Span],
    rails: tuple[float, Span],
    stops: Sequence[tuple[Span, float]],
) -> tuple[tuple[SaddleLine, ...], Span]:
    """The saddles, and x of the rails' ends: a wide saddle stands beyond them, one between the rails is narrow.

    rails   |y| of their inner faces, and x of the outermost notches' edges
    stops   x and least |y| of each: a saddle beside them stands between them
    """
    inner, notches = rails
    rail_x = _reaching((notches[0] - RAIL_BEYOND_MM, notches[1] + RAIL_BEYOND_MM), places)
    found = []
    for x in places:
        beside = [y for span, y in stops if span[0] - APART_MM < x[1] and x[0] < span[1] + APART_MM]
        most = min(beside, default=math.inf) - APART_MM
        wide = _saddle(given, height_mm, x, most)
        if wide.half_mm > inner - APART_MM:
            within = rail_x[0] <= x[0] and x[1] <= rail_x[1]
            if not within and x[1] <= notches[0] - LEAST_BEYOND_MM:
                rail_x = (max(rail_x[0], x[1] + APART_MM), rail_x[1])
            elif not within and x[0] >= notches[1] + LEAST_BEYOND_MM:
                rail_x = (rail_x[0], min(rail_x[1], x[0] - APART_MM))
            else:
                wide = _saddle(given, height_mm, x, min(most, inner - APART_MM))
        found.append(wide)
    return tuple(found), rail_x


def _reaching(rail_x_mm: Span, saddles: list[Span]) -> Span:
    """The rails' ends, drawn out to saddles that stand far beyond the outermost notches."""
    low, high = rail_x_mm
    first, last = saddles[0], saddles[-1]
    return (
        first[0] - 8.0 if first[1] < low - FAR_MM else low,
        last[1] + 8.0 if last[0] > high + FAR_MM else high,
    )


def _saddle(given: tuple[Boom, Shop, SeatPlan], height_mm: float, x_mm: Span, most_half_mm: float) -> SaddleLine:
    """A V for a round boom, a flat channel for a square one; narrow where it stands between the rails."""
    boom, shop, seat = given
    half = seat.half_width_mm
    if boom.section == "round":
        axis = height_mm - seat.axis_mm
        low = axis - half * ROOT_2
        channel = half / ROOT_2 + max(1.0, half / 6.0)
        channel = min(channel, most_half_mm - LEAST_CHEEK_MM)
        if channel < half / ROOT_2 + 0.3:
            raise LeftOutError("rails or stops stand too close to the boom for a saddle between them")
        top = low + channel
    else:
        low, channel = height_mm - seat.top_mm, half + shop.printer.slide_clearance_mm
        top = low + min(half, 4.0)
        if channel + LEAST_CHEEK_MM > most_half_mm:
            return SaddleLine(x_mm, most_half_mm, 0.0, low, low)
    outer = min(channel + CHEEK_MM + TIE_SLOT_MM[0] + CHEEK_MM, most_half_mm)
    return SaddleLine(x_mm, outer, channel, low, top)
