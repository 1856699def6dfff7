"""A design for a band: from published arrays to the best that our solver finds and a workshop can cut."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np

from boomwright.design.model import Design, Form, Spec
from boomwright.design.rules import check_design
from boomwright.errors import Fault, InputFault
from boomwright.prediction import Prediction, predict
from boomwright.rf.arrays import Floats
from boomwright.rf.conductors import Rod as Wire
from boomwright.search.draft import (
    Frame,
    bounds_of,
    family_of,
    frame_of,
    least_distance_mm,
    trial_design,
)
from boomwright.search.family import Family
from boomwright.search.limits import Gaps, build_faults, least_gaps
from boomwright.search.optimise import Aim, Array, optimise
from boomwright.search.published import DIAMETER_WL, published_gain_dbi, start_of
from boomwright.search.reactance import length_of_reactance_m, own_impedance_ohm
from boomwright.search.refine import refine
from boomwright.search.request import Request, check_request
from boomwright.search.stock import Stock, Wish, choose_stock
from boomwright.shop.profile import Shop
from boomwright.spec import Shortfall
from boomwright.units import hz_from_mhz, m_from_mm

MARGIN = 0.04
"""Share of (VSWR - 1) that is kept back while searching: between the frequencies solved it is a little higher."""

RATIO_MARGIN_DB = 0.3
ROD_PITCH_WL = 0.21
"""Mean distance of directors with which an array begins to gain nothing from more of them."""

FREE_PITCH_WL = 0.3
SPREAD_GAPS, SPREAD_LENGTHS = 0.25, 0.015
STEPS = 120
FEW_STEPS = 60
MANY_CONDUCTORS = 16
Progress = Callable[[str], None]


@dataclass(frozen=True)
class Proposal:
    """What `propose` found.

    design      as cut, its spec the wishes or what was reached
    prediction  of that design over its band
    start       where it came from, in words
    table_dbi   gain of the published array of this boom at one frequency, solved alike [dBi]
    limits      what keeps it from being better, in words
    unbuilt     why this shop could not make parts of it, empty when it can
    seed        of the starts
    """

    design: Design
    prediction: Prediction
    start: str
    table_dbi: float
    limits: tuple[str, ...]
    unbuilt: tuple[Fault, ...]
    seed: int

    @property
    def shortfalls(self) -> tuple[Shortfall, ...]:
        """What of the wishes is not met over the band."""
        return self.prediction.shortfalls

    @property
    def summary(self) -> str:
        """What was found, in a few lines."""
        design, rods = self.design, len(self.design.rods)
        lines = [
            f"{rods} rods and a {design.driven.form} driven element on {design.rods[-1].at_mm:g} mm",
            self.prediction.band_line,
            f"published array of this boom at one frequency: {self.table_dbi:.2f} dBi",
            *(f"limit: {limit}" for limit in self.limits),
            *(f"this shop cannot make it as it stands: {fault}" for fault in self.unbuilt),
        ]
        return "\n".join(lines)


@dataclass(frozen=True)
class _Candidate:
    frame: Frame
    family: Family
    array: Array


def propose(request: Request, shop: Shop | None = None, progress: Progress = lambda step: None) -> Proposal:
    """Find a design.

    request   what is wanted
    shop      whose machines and shelf it must suit, None = the built-in shop
    progress  called with a word or two before each step

    The same request, shop and version give the same design. Raises InputFault with everything wrong in a request.
    """
    check_request(request)
    shop = shop or Shop()
    boom_mm = request.boom_mm or _free_boom_mm(request)
    aim = Aim(
        request.ohm,
        1.0 + (1.0 - MARGIN) * (request.vswr_max - 1.0),
        None if request.front_to_back_min_db is None else request.front_to_back_min_db + RATIO_MARGIN_DB,
    )
    forms: tuple[Form, ...] = (request.driven,) if request.driven else ("folded", "straight")
    best = _best(request, shop, (forms, boom_mm), aim, progress)
    progress("solving in full")
    fixed_m = m_from_mm(request.boom_mm) if request.boom_mm else None
    design, array = refine(best.frame, best.family, best.array, aim, fixed_m)
    prediction = predict(design)
    design = replace(design, spec=_spec(request, prediction))
    check_design(design)
    prediction = replace(prediction, design=design)
    limits = _limits(best, array, aim, prediction)
    words, unbuilt = _start_words(best, array), build_faults(design, shop)
    table_dbi = published_gain_dbi(float(array.places_m[-1]) / m_from_mm(request.wavelength_mm))
    return Proposal(design, prediction, words, table_dbi, limits, unbuilt, request.seed)


def _free_boom_mm(request: Request) -> float:
    assert request.rods is not None
    return (0.2 + FREE_PITCH_WL * max(request.rods - 1, 0)) * request.wavelength_mm


def _frame(request: Request, shop: Shop, boom_mm: float, driven: tuple[Form, float]) -> Frame:
    wish = Wish(request.centre_mhz, boom_mm, request.rod_mm, request.reflector_mm, request.boom_width_mm)
    stock = choose_stock(wish, driven[0], driven[1], shop)
    _refuse_thin_boom(stock)
    gaps = least_gaps(stock, request.wavelength_mm, lambda a, b: trial_design(request, stock, (a, b)), shop)
    _refuse_crowd(request, gaps)
    return frame_of(request, stock, gaps)


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
    """Numbers of directors worth trying."""
    if request.rods is not None:
        return (request.rods - 1,)
    wave = request.wavelength_mm
    usual = max(1, round((boom_mm / wave - 0.2) / ROD_PITCH_WL) + 1)
    room = 1 + math.floor((boom_mm - gaps.behind_mm - gaps.ahead_mm) / gaps.between_mm + 1e-9)
    counts = (usual, usual + 1, usual + 2) if usual < MANY_CONDUCTORS else (usual,)
    return tuple(dict.fromkeys(max(1, min(count, room, 63)) for count in counts))


def _best(
    request: Request, shop: Shop, wanted: tuple[tuple[Form, ...], float], aim: Aim, progress: Progress
) -> _Candidate:
    """The best array over forms of the driven element, numbers of directors and starts."""
    forms, boom_mm = wanted
    variants = [(form, spacing) for form in forms for spacing in ((0.035, 0.05) if form == "folded" else (0.0,))]
    found: list[_Candidate] = []
    families: dict[tuple[Form, float], tuple[Frame, Family]] = {}
    relative: Family | None = None
    most_mm = boom_mm if request.boom_mm else 1.5 * boom_mm
    for variant in variants:
        progress(f"trying a {variant[0]} driven element")
        frame = _frame(request, shop, boom_mm, variant)
        if any(frame.stock == other.stock for other, _ in families.values()):
            continue
        if relative is not None and not _shares(frame, next(iter(families.values()))[0]):
            relative = None
        relative = family_of(frame, most_mm, relative)
        families[variant] = frame, relative
        count = _directors(request, frame.gaps, boom_mm)[0]
        found += [_run(frame, relative, aim, (boom_mm, count, number)) for number in range(2)]
    found.sort(key=lambda each: -each.array.merit_db)
    leader = found[0]
    frame, family = leader.frame, leader.family
    counts = _directors(request, frame.gaps, boom_mm)
    for count in counts:
        progress(f"trying {count} directors")
        found += [_run(frame, family, aim, (boom_mm, count, number)) for number in (2, 3, 4)]
    found.sort(key=lambda each: -each.array.merit_db)
    return found[0]


def _shares(frame: Frame, other: Frame) -> bool:
    """Whether two frames have rods and least distance in common, so that their tables can be shared."""
    one, two = frame.stock, other.stock
    rods = (one.reflector_mm, one.director_mm) == (two.reflector_mm, two.director_mm)
    near = least_distance_mm(frame.gaps, one) >= least_distance_mm(other.gaps, two) - 1e-9
    return rods and near and frame.resonant_m[::2] == other.resonant_m[::2]


def _run(frame: Frame, family: Family, aim: Aim, what: tuple[float, int, int]) -> _Candidate:
    """One search: boom [mm], number of directors, number of the start (0 = the table's, else varied at random)."""
    boom_mm, directors, number = what
    request = frame.request
    fixed = boom_mm if request.boom_mm else None
    lengths, places = _start(frame, boom_mm, directors)
    if number:
        random = np.random.default_rng([request.seed, directors, number])
        lengths = lengths * np.exp(SPREAD_LENGTHS * random.standard_normal(len(lengths)))
        gaps = np.diff(places) * np.exp(SPREAD_GAPS * random.standard_normal(len(lengths) - 1))
        places = np.concatenate([[0.0], np.cumsum(gaps * (places[-1] / gaps.sum()))])
    bounds = bounds_of(frame, family, directors + 2, fixed)
    steps = STEPS if directors + 2 <= MANY_CONDUCTORS else FEW_STEPS
    return _Candidate(frame, family, optimise(family, (lengths, places), bounds, aim, steps))


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


_KNOWN: dict[tuple[float, float, float, float], float] = {}


def _as_reactive_m(length_m: float, diameter_m: float, new_diameter_m: float, frequency_hz: float) -> float:
    """Length [m] of a rod of another diameter [m] with the own reactance of this one."""
    key = (round(length_m, 9), diameter_m, new_diameter_m, frequency_hz)
    if key not in _KNOWN:
        reactance = own_impedance_ohm(Wire("D1", 0.0, length_m, diameter_m / 2.0), frequency_hz).imag
        _KNOWN[key] = length_of_reactance_m(Wire("D1", 0.0, 1.0, new_diameter_m / 2.0), reactance, frequency_hz)
    return _KNOWN[key]


def _spec(request: Request, prediction: Prediction) -> Spec:
    """The wishes; where there is none, what was reached, rounded down."""
    inside = list(prediction.in_band)
    gain = float(prediction.sweep.gain_dbi[inside].min())
    ratio = float(prediction.sweep.front_to_back_db[inside].min())
    gain_min = math.floor(10.0 * gain - 0.2) / 10.0 if request.gain_min_dbi is None else request.gain_min_dbi
    ratio_min = request.front_to_back_min_db
    if ratio_min is None and ratio > 1.5:
        ratio_min = float(math.floor(ratio - 0.5))
    return Spec(gain_min, ratio_min, request.vswr_max)


def _start_words(best: _Candidate, array: Array) -> str:
    frame = best.frame
    boom_wl = float(array.places_m[-1]) / m_from_mm(frame.request.wavelength_mm)
    source = start_of(boom_wl, max(1, len(array.lengths_m) - 2)).source
    return f"{source}; rods of {frame.stock.director_mm:g} mm with the reactance of the published ones"


def _limits(best: _Candidate, array: Array, aim: Aim, prediction: Prediction) -> tuple[str, ...]:
    """The bounds that the design lies on."""
    frame, words = best.frame, []
    gaps_mm, least = np.diff(array.places_m) * 1e3, frame.gaps
    near = 1.5 * frame.stock.step_mm
    names = ["reflector to driven element", "driven element to D1", *["director to director"] * len(gaps_mm)]
    limits = [least.behind_mm, least.ahead_mm, *[least.between_mm] * len(gaps_mm)]
    why = [*least.why, *[least.why[2]] * len(gaps_mm)]
    for name, gap, limit, reason in zip(names, gaps_mm, limits, why, strict=False):
        line = f"{name} at its least distance of {limit:.4g} mm ({reason})"
        if gap <= limit + near and line not in words:
            words.append(line)
    inside = list(prediction.in_band)
    if prediction.sweep.vswr[inside].max() > 1.0 + 0.8 * (frame.request.vswr_max - 1.0):
        words.append(f"VSWR {frame.request.vswr_max:g} over the whole band: a laxer one would allow more gain")
    ratio_db = prediction.sweep.front_to_back_db[inside].min()
    if aim.front_to_back_least_db is not None and ratio_db < aim.front_to_back_least_db + 1.0:
        words.append(f"front-to-back {frame.request.front_to_back_min_db:g} dB over the whole band")
    if frame.request.boom_mm is not None:
        words.append(f"boom of {frame.request.boom_mm:g} mm")
    return tuple(words)
