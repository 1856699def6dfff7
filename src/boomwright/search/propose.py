"""A design for a band: from published arrays to the best that our solver finds and a workshop can cut."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace

import numpy as np

from boomwright.design.model import Design, Spec
from boomwright.design.rules import check_design
from boomwright.errors import Fault
from boomwright.prediction import Prediction, predict, sweep_frequencies_mhz
from boomwright.search.limits import build_faults
from boomwright.search.optimise import Aim, Array
from boomwright.search.published import published_gain_dbi, start_of
from boomwright.search.refine import refine
from boomwright.search.request import Request, check_request
from boomwright.search.tries import Candidate, Progress, Task, best_candidate
from boomwright.shop.profile import Shop
from boomwright.spec import Shortfall
from boomwright.units import m_from_mm

MARGIN = 0.004
"""Share of (VSWR - 1) that is kept back while searching: between the frequencies solved it is a little higher."""

RATIO_MARGIN_DB = 0.1
RETRIES = 2
UNUSED = 0.03
"""Share of (VSWR - 1) that may be left unused before another turn is worth its time."""


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


def propose(request: Request, shop: Shop | None = None, progress: Progress = lambda step: None) -> Proposal:
    """Find a design.

    request   what is wanted
    shop      whose machines and shelf it must suit, None = the built-in shop
    progress  called with a word or two before each step

    The same request, shop and version give the same design. Raises InputFault with everything wrong in a request.
    """
    check_request(request)
    shop = shop or Shop()
    task = Task(request, shop, _aim(request, MARGIN))
    best = best_candidate(task, progress)
    progress("solving in full")
    design, array, prediction = _as_cut(request, best)
    design = replace(design, spec=_spec(request, prediction))
    check_design(design)
    prediction = replace(prediction, design=design)
    limits = _limits(best, array, prediction)
    words, unbuilt = _start_words(best, array), build_faults(design, shop)
    table_dbi = published_gain_dbi(float(array.places_m[-1]) / m_from_mm(request.wavelength_mm))
    return Proposal(design, prediction, words, table_dbi, limits, unbuilt, request.seed)


def _aim(request: Request, margin: float) -> Aim:
    """What the search keeps: the wishes with a margin, a share of VSWR - 1."""
    wished, spare_db = request.front_to_back_min_db, RATIO_MARGIN_DB * margin / MARGIN
    vswr = 1.0 + (1.0 - margin) * (request.vswr_max - 1.0)
    return Aim(request.ohm, vswr, None if wished is None else wished + spare_db)


def _as_cut(request: Request, best: Candidate) -> tuple[Design, Array, Prediction]:
    """The design in whole steps and its prediction; again with another margin where a wish fails or much is unused."""
    margin, array, corrected = MARGIN, best.array, None
    found: list[tuple[float, Design, Array, Prediction]] = []
    for _ in range(1 + RETRIES):
        design, array, corrected = refine(best.frame, best.family, array, _aim(request, margin), corrected)
        prediction = predict(design, _checked_mhz(design))
        over = _over(request, prediction)
        found.append((over, design, array, prediction))
        if -UNUSED <= over <= 0.0 or over > 0.5 or (over < 0.0 and len(found) > 1):
            break
        margin += over + 2.0 * len(found) * MARGIN
    _, design, array, prediction = min(found, key=lambda each: (max(each[0], 0.0), -_least_gain_dbi(each[3])))
    return design, array, prediction


def _least_gain_dbi(prediction: Prediction) -> float:
    return float(prediction.sweep.gain_dbi[list(prediction.in_band)].min())


def _checked_mhz(design: Design) -> tuple[float, ...]:
    """The frequencies of `predict` that lie in the band, and its highest, which decides the mesh [MHz]."""
    band, every = design.band, sweep_frequencies_mhz(design)
    return (*(value for value in every if band.low_mhz <= value <= band.high_mhz), every[-1])


def _over(request: Request, prediction: Prediction) -> float:
    """By how much the wishes are missed: share of VSWR - 1, or decibels of front-to-back; at most 0 = kept."""
    inside = list(prediction.in_band)
    over = float(prediction.sweep.vswr[inside].max() - request.vswr_max) / (request.vswr_max - 1.0)
    if request.front_to_back_min_db is not None:
        ratio = float(prediction.sweep.front_to_back_db[inside].min())
        over = max(over, request.front_to_back_min_db - ratio)
    return over


def _spec(request: Request, prediction: Prediction) -> Spec:
    """The wishes; where there is none, what was reached, rounded down."""
    inside = list(prediction.in_band)
    gain = _least_gain_dbi(prediction)
    ratio = float(prediction.sweep.front_to_back_db[inside].min())
    gain_min = math.floor(10.0 * gain - 0.2) / 10.0 if request.gain_min_dbi is None else request.gain_min_dbi
    ratio_min = request.front_to_back_min_db
    if ratio_min is None and ratio > 1.5:
        ratio_min = float(math.floor(ratio - 0.5))
    return Spec(gain_min, ratio_min, request.vswr_max)


def _start_words(best: Candidate, array: Array) -> str:
    frame = best.frame
    boom_wl = float(array.places_m[-1]) / m_from_mm(frame.request.wavelength_mm)
    source = start_of(boom_wl, max(1, len(array.lengths_m) - 2)).source
    return f"{source}; rods of {frame.stock.director_mm:g} mm with the reactance of the published ones"


def _limits(best: Candidate, array: Array, prediction: Prediction) -> tuple[str, ...]:
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
    wished_db = frame.request.front_to_back_min_db
    if wished_db is not None and ratio_db < wished_db + 1.0:
        words.append(f"front-to-back {wished_db:g} dB over the whole band")
    if frame.request.boom_mm is not None:
        words.append(f"boom of {frame.request.boom_mm:g} mm")
    return tuple(words)
