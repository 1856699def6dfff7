"""Which array to take: forms of the driven element, numbers of directors and starts, tried in a fixed order."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass, replace
from functools import lru_cache

import numpy as np

from boomwright.design.model import Form
from boomwright.errors import Fault, InputFault
from boomwright.rf.arrays import Floats
from boomwright.rf.conductors import Rod as Wire
from boomwright.search.draft import Frame, bounds_of, family_of, frame_of, least_distance_mm, trial_design
from boomwright.search.family import Family
from boomwright.search.limits import Gaps, least_gaps
from boomwright.search.optimise import Aim, Array, optimise
from boomwright.search.published import DIAMETER_WL, published_gain_dbi, start_of
from boomwright.search.reactance import length_of_reactance_m, own_impedance_ohm
from boomwright.search.request import Request
from boomwright.search.stock import Stock, Wish, choose_stock
from boomwright.shop.profile import Shop
from boomwright.units import hz_from_mhz, m_from_mm

ROD_PITCH_WL = 0.21
"""Mean distance of directors with which an array begins to gain little from more of them."""

FREE_PITCH_WL = 0.3
FREE_LENGTH = 1.6
"""An array without a boom given may become so much longer than it is expected to."""

COMFORT_WL = 0.07
"""Directors nearer than this add little and must be placed finely: they come nearer only where it is needed."""

SPREAD_GAPS, SPREAD_LENGTHS = 0.25, 0.015
STEPS, FEW_STEPS = 120, 60
MANY_CONDUCTORS = 18
MOST_DIRECTORS = 63
SPACINGS_WL = (0.042, 0.055)
"""Of a folded element: the second suits thin rods in wide bands."""

COMFORTABLE_DB = 0.12
"""Gain over the published array's at which the search ends early."""

WORTH_A_ROD_DB, LEAST_WORTH_DB = 0.04, 0.01
"""Gain that a rod more must bring: above the target, and below it, where every bit counts."""

Progress = Callable[[str], None]
Variant = tuple[Form, float]


@dataclass(frozen=True)
class Candidate:
    """An array that was found, and what it is made of."""

    frame: Frame
    family: Family
    array: Array

    @property
    def rods(self) -> int:
        """Number of reflector and directors."""
        return len(self.array.lengths_m) - 1


@dataclass(frozen=True)
class Task:
    """What is sought: request, shop, and what to keep over the band."""

    request: Request
    shop: Shop
    aim: Aim

    @property
    def boom_mm(self) -> float:
        """Length of the array [mm], or about how long it will be."""
        request = self.request
        if request.boom_mm is not None:
            return request.boom_mm
        assert request.rods is not None
        return (0.2 + FREE_PITCH_WL * max(request.rods - 1, 0)) * request.wavelength_mm

    @property
    def target_dbi(self) -> float:
        """Gain at which the search may end early: above what is wished and above the published array's [dBi].

        Without a boom there is no published array to compare with: the search does not end early.
        """
        if self.request.boom_mm is None:
            return math.inf
        published = published_gain_dbi(self.boom_mm / self.request.wavelength_mm)
        return max(published, self.request.gain_min_dbi or -math.inf) + COMFORTABLE_DB


def best_candidate(task: Task, progress: Progress) -> Candidate:
    """The best array; of arrays that are nearly as good the one with the fewest rods."""
    request = task.request
    forms: tuple[Form, ...] = (request.driven,) if request.driven else ("folded", "straight")
    variants = [(form, wl) for form in forms for wl in (SPACINGS_WL if form == "folded" else (0.0,))]
    families: list[tuple[Frame, Family]] = []
    found: list[Candidate] = []
    for variant in variants:
        progress(f"tabulating a {variant[0]} driven element")
        made = _made(task, variant, families)
        if made is None:
            continue
        families.append(made)
        counts = _directors(request, made[0].gaps, task.boom_mm)
        found.append(_run(task, (_at_ease(made[0]), made[1]), (counts[min(1, len(counts) - 1)], 0)))
        if found[-1].array.merit_db >= task.target_dbi:
            break
    leaders = sorted(range(len(families)), key=lambda n: (-found[n].array.merit_db, n))
    frame, family = families[leaders[0]]
    counts = _directors(request, frame.gaps, task.boom_mm)
    if _best(found).array.merit_db >= task.target_dbi:
        for count in counts[:2]:
            progress(f"trying {count} directors")
            found.append(_run(task, (_at_ease(frame), family), (count, 1)))
        return _fewest(found, task.target_dbi)
    for count in counts[-3:]:
        progress(f"trying {count} directors, closer together")
        found.append(_run(task, (frame, family), (count, 0)))
    for leader, count in zip(leaders, (_best(found).rods - 1, counts[-1]), strict=False):
        found.append(_run(task, families[leader], (count, 2)))
    return _fewest(found, task.target_dbi)


def _best(found: list[Candidate]) -> Candidate:
    return max(found, key=lambda each: each.array.merit_db)


def _fewest(found: list[Candidate], target_dbi: float) -> Candidate:
    """The best; or one with fewer rods that loses little by it."""
    best = _best(found)
    for each in sorted(found, key=lambda each: (each.rods, -each.array.merit_db)):
        lost = best.array.merit_db - each.array.merit_db
        worth = WORTH_A_ROD_DB if each.array.merit_db >= target_dbi else LEAST_WORTH_DB
        if lost <= worth * (best.rods - each.rods):
            return each
    return best


def _at_ease(frame: Frame) -> Frame:
    """The same frame with directors kept apart, where the boom allows it."""
    ease = COMFORT_WL * frame.request.wavelength_mm
    gaps = frame.gaps
    apart = replace(gaps, between_mm=max(gaps.between_mm, ease), ahead_mm=max(gaps.ahead_mm, ease))
    return replace(frame, gaps=apart)


def _made(task: Task, variant: Variant, others: list[tuple[Frame, Family]]) -> tuple[Frame, Family] | None:
    """The frame and the tables of a variant of the driven element; None if its stock comes out as that of another."""
    frame = _frame(task, variant)
    if any(frame.stock == other.stock for other, _ in others):
        return None
    relative = next((family for other, family in others if _shares(frame, other)), None)
    most_mm = task.boom_mm * (1.0 if task.request.boom_mm else FREE_LENGTH)
    return frame, family_of(frame, most_mm, relative)


def _frame(task: Task, variant: Variant) -> Frame:
    request, shop, boom_mm = task.request, task.shop, task.boom_mm
    width = (request.high_mhz - request.low_mhz) / request.centre_mhz
    wish = Wish(request.centre_mhz, boom_mm, width, request.rod_mm, request.reflector_mm, request.boom_width_mm)
    stock = choose_stock(wish, *variant, shop)
    _refuse_thin_boom(stock)
    gaps = least_gaps(stock, request.wavelength_mm, lambda a, b: trial_design(request, stock, (a, b)), shop)
    _refuse_crowd(request, gaps)
    return frame_of(request, stock, gaps, boom_mm)


def _refuse_thin_boom(stock: Stock) -> None:
    thickest = max(stock.reflector_mm, stock.director_mm, stock.driven.outer_diameter_mm)
    least = 2.0 * (thickest + stock.seat.glue_gap_mm)
    if stock.boom.width_mm < least:
        found = f"{stock.boom.width_mm:g} holds no groove for a conductor of {thickest:g} mm"
        raise InputFault([Fault("--boom-width-mm", found, f"give at least {math.ceil(10.0 * least) / 10.0:g} mm")])


def _refuse_crowd(request: Request, gaps: Gaps) -> None:
    if request.boom_mm is None:
        return
    count = (request.rods or 2) + 1
    least = gaps.behind_mm + (gaps.ahead_mm if count > 2 else 0.0) + gaps.between_mm * max(count - 3, 0)
    if request.boom_mm < least:
        found = f"{request.boom_mm:g} is too short for {count - 1} rods and a driven element"
        fix = f"give at least {math.ceil(10.0 * least) / 10.0:g} mm, fewer or thinner rods"
        raise InputFault([Fault("--boom-mm", found, fix)])


def _directors(request: Request, gaps: Gaps, boom_mm: float) -> tuple[int, ...]:
    """Numbers of directors worth trying, fewest first."""
    if request.rods is not None:
        return (request.rods - 1,)
    usual = max(1, round((boom_mm / request.wavelength_mm - 0.2) / ROD_PITCH_WL))
    room = 1 + math.floor((boom_mm - gaps.behind_mm - gaps.ahead_mm) / gaps.between_mm + 1e-9)
    counts = range(usual, usual + 5) if usual < MANY_CONDUCTORS else range(usual, usual + 1)
    return tuple(dict.fromkeys(max(1, min(count, room, MOST_DIRECTORS)) for count in counts))


def _shares(frame: Frame, other: Frame) -> bool:
    """Whether two frames have rods and least distance in common, so that their tables can be shared."""
    one, two = frame.stock, other.stock
    rods = (one.reflector_mm, one.director_mm) == (two.reflector_mm, two.director_mm)
    near = least_distance_mm(frame.gaps, one) >= least_distance_mm(other.gaps, two) - 1e-9
    return rods and near and frame.resonant_m[::2] == other.resonant_m[::2]


def _run(task: Task, made: tuple[Frame, Family], which: tuple[int, int]) -> Candidate:
    """One search: number of directors, number of the start (0 = the table's, else varied at random)."""
    (frame, family), (directors, number), request = made, which, task.request
    lengths, places = _start(frame, task.boom_mm, directors)
    if number:
        random = np.random.default_rng([request.seed, directors, number])
        lengths = lengths * np.exp(SPREAD_LENGTHS * random.standard_normal(len(lengths)))
        gaps = np.diff(places) * np.exp(SPREAD_GAPS * random.standard_normal(len(lengths) - 1))
        places = np.concatenate([[0.0], np.cumsum(gaps * (places[-1] / gaps.sum()))])
    bounds = bounds_of(frame, family, directors + 2, request.boom_mm)
    steps = STEPS if directors + 2 <= MANY_CONDUCTORS else FEW_STEPS
    return Candidate(frame, family, optimise(family, (lengths, places), bounds, task.aim, steps))


def _start(frame: Frame, boom_mm: float, directors: int) -> tuple[Floats, Floats]:
    """The table's array at this boom: lengths and places (N,) [m], its rods made as reactive as the table's."""
    request, wave_m = frame.request, m_from_mm(frame.request.wavelength_mm)
    start = start_of(boom_mm / request.wavelength_mm, directors)
    centre_hz = hz_from_mhz(request.centre_mhz)
    diameters = [frame.stock.reflector_mm] + [frame.stock.director_mm] * directors
    lengths = [
        _as_reactive_m(length * wave_m, DIAMETER_WL * wave_m, m_from_mm(diameter), centre_hz)
        for length, diameter in zip(start.lengths_wl, diameters, strict=True)
    ]
    lengths.insert(1, frame.resonant_m[1] * (1.1 if frame.stock.driven.form == "loop" else 1.0))
    places = start.places_wl * wave_m
    places[2:] += m_from_mm(frame.stock.spacing_mm) * np.linspace(1.0, 0.0, directors) if directors > 1 else 0.0
    return np.array(lengths), places


@lru_cache(maxsize=512)
def _as_reactive_m(length_m: float, diameter_m: float, new_diameter_m: float, frequency_hz: float) -> float:
    """Length [m] of a rod of another diameter [m] with the own reactance of this one."""
    reactance = own_impedance_ohm(Wire("D1", 0.0, length_m, diameter_m / 2.0), frequency_hz).imag
    return length_of_reactance_m(Wire("D1", 0.0, 1.0, new_diameter_m / 2.0), reactance, frequency_hz)
