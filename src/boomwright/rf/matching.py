"""Which match to use: every candidate swept with the antenna's own impedance, and cut a little wrong."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from itertools import product

import numpy as np

from boomwright.rf.arrays import Complexes, Floats
from boomwright.rf.feed import vswr
from boomwright.rf.line import (
    ENDINGS,
    Line,
    Match,
    quarter_wave_sections,
    series_sections,
    shunt_stubs,
    transformed_ohm,
)

NEAR_ENOUGH = 0.06
"""A quarter-wave section of a line at hand is tried when its impedance is within this share of the one asked for."""

SHORTEST_CUTS = 16.0
"""A section shorter than so many cutting errors is not cut with any sense (common practice)."""

WORTH_WHILE = 0.9
"""A match is worth its joints when it brings the VSWR's excess over 1 below this share of what it is without."""


@dataclass(frozen=True)
class Task:
    """What is to be matched.

    frequency_hz  ascending [Hz], (F,)
    load_ohm      the antenna's impedance there, balun included [ohm], (F,)
    band_hz       low, centre, high [Hz]
    cable         the line that is to run matched
    lines         other lines at hand
    vswr_most     what is wanted in the whole band, above 1
    cut_m         how far a cut may be off [m]
    """

    frequency_hz: Floats
    load_ohm: Complexes
    band_hz: tuple[float, float, float]
    cable: Line
    lines: tuple[Line, ...]
    vswr_most: float
    cut_m: float


@dataclass(frozen=True)
class Rating:
    """A match swept.

    match       None = the cable straight on the antenna
    vswr        over the task's frequencies, (F,)
    vswr_most   the worst in the band
    span_hz     round the band's centre, where the VSWR is as wanted [Hz]; None when it is not there
    vswr_cut    the worst in the band with every section off by the cut, whichever way is worst
    meets       whether it is as wanted in the whole band, cuts included
    """

    match: Match | None
    vswr: tuple[float, ...]
    vswr_most: float
    span_hz: tuple[float, float] | None
    vswr_cut: float
    meets: bool


@dataclass(frozen=True)
class Advice:
    """What to do: the rating to build (its match None = nothing), the plain cable's, all others best first, and why."""

    chosen: Rating
    plain: Rating
    others: tuple[Rating, ...]
    why: str


def advise(task: Task) -> Advice:
    """Find the match to build for a task; none where the cable alone does, or where none helps."""
    plain = rate(task, None)
    rated = sorted((rate(task, match) for match in candidates(task)), key=_rank)
    if plain.vswr_most <= task.vswr_most:
        why = f"VSWR is {plain.vswr_most:.2f} or less over the band without a match: none is needed"
        return Advice(plain, plain, tuple(rated), why)
    if not rated:
        why = "no match can be cut: its sections would be shorter than the shop's cuts are true"
        return Advice(plain, plain, (), why)
    best = rated[0]
    if best.vswr_cut - 1.0 > WORTH_WHILE * (plain.vswr_most - 1.0):
        why = f"cut {1e3 * task.cut_m:.2g} mm wrong, the best match leaves VSWR {best.vswr_cut:.2f}: change the driven"
        return Advice(plain, plain, tuple(rated), f"{why} element instead")
    words = "holds over the band" if best.meets else "is the best, but does not hold over the whole band"
    why = f"VSWR is up to {plain.vswr_most:.2f} without; this {words} with the cuts as true as the shop's"
    return Advice(best, plain, tuple(rated[1:]), why)


def candidates(task: Task) -> tuple[Match, ...]:
    """Every match of the closed forms at the band's centre that can be cut."""
    centre_hz = task.band_hz[1]
    load = complex(_at(task, centre_hz))
    found = [match for line in task.lines for match in series_sections(load, centre_hz, task.cable, line)]
    found += [match for ending in ENDINGS for match in shunt_stubs(load, centre_hz, task.cable, ending)]
    for match in quarter_wave_sections(load, centre_hz, task.cable):
        wanted = match.sections[-1]
        for line in task.lines:
            if abs(line.impedance_ohm / wanted.line.impedance_ohm - 1.0) <= NEAR_ENOUGH:
                length_m = wanted.length_m * line.velocity_factor / wanted.line.velocity_factor
                section = replace(wanted, line=line, length_m=length_m)
                found.append(replace(match, sections=(*match.sections[:-1], section)))
    least_m = SHORTEST_CUTS * task.cut_m
    return tuple(match for match in found if match.sections and min(s.length_m for s in match.sections) >= least_m)


def rate(task: Task, match: Match | None) -> Rating:
    """Sweep a match (None = the cable alone) with the antenna's own impedance, then with every cut off both ways."""
    ratios = _vswr(task, match)
    grid, low, high = task.frequency_hz, task.band_hz[0], task.band_hz[2]
    inside = (grid >= low - 1.0) & (grid <= high + 1.0)
    most = float(ratios[inside].max())
    worst = most
    if match is not None:
        for signs in product((-1.0, 1.0), repeat=len(match.sections)):
            sections = tuple(
                replace(section, length_m=section.length_m + sign * task.cut_m)
                for section, sign in zip(match.sections, signs, strict=True)
            )
            worst = max(worst, float(_vswr(task, replace(match, sections=sections))[inside].max()))
    span = _span(grid, ratios, task.band_hz[1], task.vswr_most)
    return Rating(match, tuple(ratios.tolist()), most, span, worst, worst <= task.vswr_most)


def _vswr(task: Task, match: Match | None) -> Floats:
    sections = match.sections if match is not None else ()
    seen = transformed_ohm(sections, task.frequency_hz, task.load_ohm)
    return np.array([vswr(complex(z), task.cable.impedance_ohm) for z in seen])


def _at(task: Task, at_hz: float) -> complex:
    real = float(np.interp(at_hz, task.frequency_hz, task.load_ohm.real))
    return complex(real, float(np.interp(at_hz, task.frequency_hz, task.load_ohm.imag)))


def _span(grid_hz: Floats, ratios: Floats, centre_hz: float, most: float) -> tuple[float, float] | None:
    """The stretch round the centre where the ratio is at most `most`; its ends between grid points by a straight line.

    An end of the sweep is an end of the stretch where the ratio is still low there.
    """
    if float(np.interp(centre_hz, grid_hz, ratios)) > most:
        return None
    ends = []
    for outward in (grid_hz <= centre_hz, grid_hz >= centre_hz):
        places, values = grid_hz[outward], ratios[outward]
        if places[-1] <= centre_hz:
            places, values = places[::-1], values[::-1]
        end, before = float(places[-1]), (centre_hz, float(np.interp(centre_hz, grid_hz, ratios)))
        for place, value in zip(places.tolist(), values.tolist(), strict=True):
            if value > most:
                share = (most - before[1]) / (value - before[1])
                end = before[0] + share * (place - before[0])
                break
            before = (place, value)
        ends.append(end)
    return ends[0], ends[1]


def _rank(rating: Rating) -> tuple[bool, float, float]:
    """Those that hold first, the more forgiving before the shorter; a hundredth in VSWR is no difference."""
    length_m = rating.match.length_m if rating.match is not None else math.inf
    return not rating.meets, round(rating.vswr_cut, 2), length_m
