"""The best array of a family: worst gain over the band as high as it gets while match and front-to-back keep bounds.

Minimax in epigraph form for sequential quadratic programming with exact slopes: raise t under gain(f) >= t at every
frequency. A bound that cannot be kept is let go by the least amount (an exact penalty), so that there is always a best.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any, Protocol

import numpy as np
from scipy.optimize import minimize

from boomwright.rf.arrays import Floats
from boomwright.search.family import Figures

MATCH_PENALTY_DB = 30.0
"""What one unit of |reflection|^2 beyond its bound costs in gain."""

STRICT_PENALTY_DB = 150.0
"""The same where arrays are compared: a bound is not traded for a hundredth of a decibel."""

RATIO_PENALTY = 3.0
"""What one decibel of front-to-back short of its bound costs in gain."""

LENGTH_UNIT_WL, GAP_UNIT_WL = 0.01, 0.04
"""Changes that move the gain by about a decibel: in these units the first steps are neither wild nor timid."""

TOLERANCE_DB = 2e-5


class Solves(Protocol):
    """What an array is judged by: a family, or one that is corrected."""

    @property
    def wavenumbers(self) -> Floats:
        """Where it solves [rad/m], (F,)."""

    def figures(self, lengths_m: Floats, places_m: Floats) -> Figures:
        """Figures of an array."""


@dataclass(frozen=True)
class Bounds:
    """What lengths and gaps may be, in metres; N conductors.

    length_m  (N, 2) least and most
    gap_m     (N - 1, 2) distances of neighbours' places, least and most
    boom_m    sum of the gaps, None = free
    """

    length_m: Floats
    gap_m: Floats
    boom_m: float | None


@dataclass(frozen=True)
class Aim:
    """What the array must keep at every frequency.

    system_ohm            for the match
    vswr_most             greatest standing wave ratio
    front_to_back_least_db  None = no bound
    """

    system_ohm: float
    vswr_most: float
    front_to_back_least_db: float | None = None

    @property
    def reflection_most(self) -> float:
        """Square of the largest reflection."""
        return ((self.vswr_most - 1.0) / (self.vswr_most + 1.0)) ** 2

    def merit_db(self, found: Figures) -> float:
        """Worst gain, less the penalties for what is not kept [dB]."""
        merit = float(found.gain_dbi.min())
        merit -= STRICT_PENALTY_DB * max(0.0, float(_mismatch(found, self.system_ohm)[0].max()) - self.reflection_most)
        if self.front_to_back_least_db is not None:
            merit -= RATIO_PENALTY * max(0.0, self.front_to_back_least_db - float(found.front_to_back_db.min()))
        return merit


@dataclass(frozen=True)
class Array:
    """Lengths and places (N,) [m] of an array, the first at 0, and its merit [dB]."""

    lengths_m: Floats
    places_m: Floats
    merit_db: float


def optimise(family: Solves, start: tuple[Floats, Floats], bounds: Bounds, aim: Aim, steps: int = 100) -> Array:
    """The best array near a start: lengths (N,) and places (N,) [m].

    steps  most iterations
    """
    return _Search(family, bounds, aim, len(start[0])).run(start, steps)


def _mismatch(found: Figures, system_ohm: float) -> tuple[Floats, Floats]:
    """|reflection|^2 (F,) and its slopes (F, 2 N)."""
    impedance = found.impedance_ohm
    reflection = (impedance - system_ohm) / (impedance + system_ohm)
    slopes = found.impedance_slopes * (2.0 * system_ohm / (impedance + system_ohm) ** 2)[:, None]
    return np.abs(reflection) ** 2, 2.0 * (reflection.conj()[:, None] * slopes).real


class _Search:
    """Variables: lengths and gaps in units that move the gain about alike, then t [dB], then what is let go."""

    def __init__(self, family: Solves, bounds: Bounds, aim: Aim, count: int) -> None:
        self.family, self.bounds, self.aim, self.count = family, bounds, aim, count
        wavelength_m = 2.0 * np.pi / float(family.wavenumbers.mean())
        self.sizes = 2 * count - 1
        self.units_m = wavelength_m * np.array([LENGTH_UNIT_WL] * count + [GAP_UNIT_WL] * (count - 1))
        gaps = np.zeros((count, count - 1))
        for place in range(1, count):
            gaps[place, :place] = 1.0
        # Slopes to lengths and places become slopes to lengths and gaps.
        self.chain = np.zeros((2 * count, self.sizes))
        self.chain[:count, :count] = np.eye(count)
        self.chain[count:, count:] = gaps
        self.chain *= self.units_m
        self._seen: tuple[bytes, Figures] | None = None

    def run(self, start: tuple[Floats, Floats], steps: int) -> Array:
        lengths, gaps = start[0], np.diff(start[1])
        sizes = np.concatenate([lengths, gaps]) / self.units_m
        low, high = np.concatenate([self.bounds.length_m, self.bounds.gap_m]).T / self.units_m
        sizes = np.clip(sizes, low, high)
        gain = float(self._figures(sizes).gain_dbi.min())
        first = np.concatenate([sizes, [gain, 0.0]])
        limits = [*zip(low, high, strict=True), (-100.0, 100.0), (0.0, None)]
        constraints: list[Any] = [{"type": "ineq", "fun": self._margins, "jac": self._margin_slopes}]
        if self.bounds.boom_m is not None:
            across = np.zeros(len(first))
            across[self.count : self.sizes] = 1.0
            whole = self.bounds.boom_m / self.units_m[-1]
            constraints.append({"type": "eq", "fun": lambda x: x @ across - whole, "jac": lambda x: across})
        cost = np.zeros(len(first))
        cost[-2], cost[-1] = -1.0, MATCH_PENALTY_DB
        best: Array | None = None

        def watch(x: Floats) -> None:
            nonlocal best
            array = self._array(x[: self.sizes])
            if self._sums(x) and (best is None or array.merit_db > best.merit_db):
                best = array

        settings: dict[str, Any] = {
            "jac": lambda x: cost,
            "bounds": limits,
            "constraints": constraints,
            "method": "SLSQP",
            "callback": watch,
            "options": {"maxiter": steps, "ftol": TOLERANCE_DB},
        }
        watch(minimize(self._height, first, **settings).x)
        return best or self._array(sizes)

    def _height(self, x: Floats) -> float:
        return MATCH_PENALTY_DB * float(x[-1]) - float(x[-2])

    def _sums(self, x: Floats) -> bool:
        boom_m = self.bounds.boom_m
        return (
            boom_m is None or abs(float(x[self.count : self.sizes].sum()) * self.units_m[-1] - boom_m) < 1e-6 * boom_m
        )

    def _array(self, sizes: Floats) -> Array:
        lengths_m, places_m = self._places(sizes)
        return Array(lengths_m, places_m, self.aim.merit_db(self._figures(sizes)))

    def _places(self, sizes: Floats) -> tuple[Floats, Floats]:
        lengths, gaps = np.split(sizes * self.units_m, [self.count])
        return lengths, np.concatenate([[0.0], np.cumsum(gaps)])

    def _figures(self, sizes: Floats) -> Figures:
        key = sizes.tobytes()
        if self._seen is None or self._seen[0] != key:
            self._seen = (key, self.family.figures(*self._places(sizes)))
        return self._seen[1]

    def _margins(self, x: Floats) -> Floats:
        found = self._figures(x[: self.sizes])
        parts = [found.gain_dbi - x[-2], self.aim.reflection_most + x[-1] - _mismatch(found, self.aim.system_ohm)[0]]
        if self.aim.front_to_back_least_db is not None:
            share = MATCH_PENALTY_DB / RATIO_PENALTY
            parts.append(found.front_to_back_db - self.aim.front_to_back_least_db + share * x[-1])
        return np.concatenate(parts)

    def _margin_slopes(self, x: Floats) -> Floats:
        found = self._figures(x[: self.sizes])
        count = len(found.gain_dbi)
        ones, zeros = np.ones((count, 1)), np.zeros((count, 1))
        parts = [
            np.hstack([found.gain_slopes @ self.chain, -ones, zeros]),
            np.hstack([-_mismatch(found, self.aim.system_ohm)[1] @ self.chain, zeros, ones]),
        ]
        if self.aim.front_to_back_least_db is not None:
            share = MATCH_PENALTY_DB / RATIO_PENALTY
            parts.append(np.hstack([found.front_to_back_slopes @ self.chain, zeros, share * ones]))
        result: Floats = np.vstack(parts)
        return result
