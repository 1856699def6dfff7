"""What the analyser should show: the predicted return loss over the sweep, with limits by how true the shop works."""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import lru_cache

import numpy as np

from boomwright.book.run import Run
from boomwright.design.model import Design
from boomwright.rf.arrays import Floats
from boomwright.rf.feed import reflection
from boomwright.rf.sensitivity import Dimension, Sensitivity, sensitivities
from boomwright.rf.solve import Model
from boomwright.rf.wires import FED_TAG, wires_of
from boomwright.shop.profile import Accuracy
from boomwright.units import MM_PER_M, hz_from_mhz, m_from_mm

DEVIATIONS = 2.0
"""Limits stand at so many standard deviations of the whole antenna's error, to every side of the chart."""

DEEPEST_DB = 40.0
"""An analyser of this price tells no more: deeper is written as this (common practice)."""

NARROW = 0.01
"""Over a band narrower than this share of its centre the spread is taken as at the centre: it changes by less than the
shop's accuracies are known."""

ROUND = np.linspace(0.0, 2.0 * math.pi, 181)


@dataclass(frozen=True)
class Reading:
    """One frequency: impedance behind the balun [ohm], VSWR, return loss, and its limits [dB]."""

    frequency_mhz: float
    impedance_ohm: complex
    vswr: float
    return_loss_db: float
    low_db: float
    high_db: float


@dataclass(frozen=True)
class Effect:
    """What a millimetre more of one dimension does at the band's centre, behind the balun."""

    tag: str
    dimension: Dimension
    impedance_ohm_mm: complex
    return_loss_db_mm: float
    gain_db_mm: float
    allowed_mm: float


def readings(run: Run) -> tuple[Reading, ...]:
    """The expected reading at every frequency of the sweep.

    First-order sensitivities at the band's edges and centre give the spread of the impedance, with the shop's
    accuracies taken as independent; between them it is interpolated, beyond them kept. It is carried into the chart of
    reflections, where the nearest and the farthest point of its ellipse are the limits.
    """
    ohm = run.design.feed.system_ohm
    marks, spreads = _spreads(run.design, run.shop.accuracy)
    found = []
    for f, z in zip(run.prediction.frequency_mhz, run.cable_ohm.tolist(), strict=True):
        covariance = np.array([[np.interp(f, marks, spreads[:, i, j]) for j in (0, 1)] for i in (0, 1)])
        low, high = _reflections(z, ohm, covariance / run.divides**2)
        size = abs(reflection(z, ohm))
        loss = _loss_db(size)
        found.append(Reading(f, z, (1.0 + size) / max(1.0 - size, 1e-12), loss, _loss_db(high), _loss_db(low)))
    return tuple(found)


def effects(run: Run) -> tuple[Effect, ...]:
    """What a millimetre of each length, place and diameter does, the most harmful at this shop's accuracy first."""
    ohm, z = run.design.feed.system_ohm, run.feed_ohm / run.divides
    middle = _middle(run.design)
    accuracy = _accuracy_m(run.shop.accuracy)
    gamma = reflection(z, ohm)
    found = []
    for each in middle:
        if each.dimension == "height_m":
            continue
        change = each.impedance_ohm_m / run.divides / MM_PER_M
        off = 2.0 * ohm / (z + ohm) ** 2 * change
        along = (off * gamma.conjugate()).real / max(abs(gamma), 1e-9)
        loss = -20.0 / math.log(10.0) * along / max(abs(gamma), 1e-9)
        allowed = accuracy[each.dimension] * MM_PER_M
        found.append(Effect(each.tag, each.dimension, change, loss, each.gain_db_m / MM_PER_M, allowed))
    return tuple(sorted(found, key=lambda e: -abs(e.impedance_ohm_mm) * e.allowed_mm))


def gain_spread_db(run: Run) -> float:
    """One standard deviation of the gain at the band's centre [dB], first order."""
    accuracy = _accuracy_m(run.shop.accuracy)
    return math.sqrt(sum((e.gain_db_m * accuracy[e.dimension]) ** 2 for e in _middle(run.design)))


def driven_mm_per_mhz(run: Run) -> float | None:
    """Length of the driven element that moves the reactance as far as one megahertz does [mm/MHz], at the centre.

    Positive: longer reads lower. None where length hardly moves the reactance, or moves it the wrong way round.
    """
    length = next(e for e in _middle(run.design) if (e.tag, e.dimension) == (FED_TAG, "length_m"))
    sweep, i = run.prediction.sweep, run.prediction.middle
    reach = slice(max(i - 1, 0), i + 2)
    slope_ohm_mhz = float(np.polyfit(run.prediction.frequency_mhz[reach], sweep.impedance_ohm.imag[reach], 1)[0])
    per_mm = length.impedance_ohm_m.imag / MM_PER_M
    if slope_ohm_mhz <= 0.0 or per_mm <= 0.0:
        return None
    return slope_ohm_mhz / per_mm


def _spreads(design: Design, accuracy: Accuracy) -> tuple[list[float], Floats]:
    """Frequencies [MHz], (M,), and the covariance of resistance and reactance there [ohm²], (M, 2, 2)."""
    allowed, found = _accuracy_m(accuracy), []
    for each in _sensitivities(design):
        covariance = np.zeros((2, 2))
        for one in each:
            change = one.impedance_ohm_m * allowed[one.dimension]
            part = np.array([change.real, change.imag])
            covariance += np.outer(part, part)
        found.append(covariance)
    return _marks_mhz(design), np.array(found)


@lru_cache(maxsize=4)
def _sensitivities(design: Design) -> tuple[tuple[Sensitivity, ...], ...]:
    """At each of the marks."""
    model = Model(wires_of(design), hz_from_mhz(design.band.high_mhz))
    return tuple(sensitivities(model, hz_from_mhz(f))[1] for f in _marks_mhz(design))


def _marks_mhz(design: Design) -> list[float]:
    """Lower edge, centre and upper edge of the band; of a narrow band the centre alone [MHz]."""
    band = design.band
    if band.high_mhz - band.low_mhz <= NARROW * band.centre_mhz:
        return [band.centre_mhz]
    return [band.low_mhz, band.centre_mhz, band.high_mhz]


def _middle(design: Design) -> tuple[Sensitivity, ...]:
    """At the band's centre."""
    found = _sensitivities(design)
    return found[len(found) // 2]


def _accuracy_m(accuracy: Accuracy) -> dict[Dimension, float]:
    return {
        "length_m": m_from_mm(accuracy.length_mm),
        "at_m": m_from_mm(accuracy.position_mm),
        "height_m": m_from_mm(accuracy.height_mm),
        "diameter_m": m_from_mm(accuracy.diameter_mm),
    }


def _reflections(z_ohm: complex, system_ohm: float, covariance: Floats) -> tuple[float, float]:
    """Least and largest size of the reflection within the ellipse round an impedance."""
    values, axes = np.linalg.eigh(covariance)
    half = DEVIATIONS * np.sqrt(np.maximum(values, 0.0))
    edge = (axes * half) @ np.array([np.cos(ROUND), np.sin(ROUND)])
    # To first order, as the spread itself: a straight map of the ellipse from impedance to reflection.
    slope = 2.0 * system_ohm / (z_ohm + system_ohm) ** 2
    middle = reflection(z_ohm, system_ohm)
    points = middle + slope * (edge[0] + 1j * edge[1])
    turned = np.angle((points - 0.0)[1:] / points[:-1]).sum() if np.all(np.abs(points) > 0.0) else 0.0
    least = 0.0 if abs(turned) > math.pi else float(np.abs(points).min())
    return least, min(float(np.abs(points).max()), 1.0)


def _loss_db(size: float) -> float:
    return min(-20.0 * math.log10(max(size, 1e-12)), DEEPEST_DB) + 0.0
