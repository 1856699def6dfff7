"""The least change that gives a carried design its old figures back: full solutions, few variables."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import Any

import numpy as np
from scipy.optimize import minimize

from boomwright.design.model import Design, Rod
from boomwright.errors import DesignFault
from boomwright.rf.arrays import Floats
from boomwright.rf.basis import Options
from boomwright.rf.feed import reflection
from boomwright.rf.solve import Model
from boomwright.rf.wires import wires_of
from boomwright.units import hz_from_mhz, wavelength_mm

GAIN_SLACK_DB, RATIO_SLACK_DB = 0.03, 1.0
PENALTY = 300.0
STEP = 0.05
STEPS = 25
TOLERANCE = 1e-4
FAILED = -99.0

UNITS = {"driven": 0.02, "place": 0.01, "directors": 0.004, "reflector": 0.004, "first": 0.01, "first length": 0.006}
"""What one unit of each variable is: shares of a length, or of the wavelength for a place."""

MOST_UNITS = 5.0


@dataclass(frozen=True)
class Figures:
    """What a design does at frequencies (F,): reflection, gain [dBi], front-to-back [dB]."""

    reflection: Floats
    gain_dbi: Floats
    front_to_back_db: Floats


@dataclass(frozen=True)
class Keep:
    """What trimming holds to.

    frequencies_mhz  where (F,)
    gain_dbi         as before (F,)
    front_to_back_db as before (F,)
    vswr_most        greatest
    clear_mm         least distances of the driven element's place to the rod behind and the rod ahead
    """

    frequencies_mhz: tuple[float, ...]
    gain_dbi: Floats
    front_to_back_db: Floats
    vswr_most: float
    clear_mm: tuple[float, float]


def figures_at(design: Design, frequencies_mhz: tuple[float, ...], azimuthal: bool | None = None) -> Figures:
    """A design solved in full at ascending frequencies [MHz]."""
    ohm = design.feed.system_ohm
    model = Model(wires_of(design), hz_from_mhz(frequencies_mhz[-1]), Options(azimuthal=azimuthal))
    solved = [model.solve(hz_from_mhz(value)) for value in frequencies_mhz]
    return Figures(
        np.array([abs(reflection(each.impedance_ohm, ohm)) for each in solved]),
        np.array([each.gain_dbi for each in solved]),
        np.array([each.front_to_back_db for each in solved]),
    )


def trimmed(design: Design, keep: Keep) -> Design:
    """The design with its driven element, its first director's place and the others' common length moved least."""
    return _Trim(design, keep).run()


class _Trim:
    """Variables in `UNITS`, those that the design has; each moves from 0."""

    def __init__(self, design: Design, keep: Keep) -> None:
        self.design, self.keep = design, keep
        self.directors = [n for n, rod in enumerate(design.rods) if rod.role == "director"]
        self.reflectors = [n for n, rod in enumerate(design.rods) if rod.role == "reflector"]
        self.names = ["driven", "place"]
        self.names += ["directors", "first", "first length"] if self.directors else []
        self.names += ["reflector"] if self.reflectors else []
        highest_hz = hz_from_mhz(keep.frequencies_mhz[-1])
        self.azimuthal = Model(wires_of(design), highest_hz).mode.families > 0
        self.wave_mm = wavelength_mm(design.band.centre_mhz)
        self._seen: dict[bytes, Floats] = {}

    def run(self) -> Design:
        count = len(self.names)
        start = np.append(np.zeros(count), 0.0)
        start[-1] = max(0.0, -float(self._margins_of(start[:-1]).min()))
        if start[-1] == 0.0:
            return self.design
        bounds = [*self._bounds(), (0.0, None)]
        settings: dict[str, Any] = {
            "jac": lambda x: np.append(2.0 * x[:-1], PENALTY),
            "bounds": bounds,
            "constraints": [{"type": "ineq", "fun": self._margins, "jac": self._slopes}],
            "method": "SLSQP",
            "options": {"maxiter": STEPS, "ftol": TOLERANCE},
        }
        found = minimize(self._cost, start, **settings)
        return self.moved(np.asarray(found.x)[:-1])

    def _cost(self, x: Floats) -> float:
        return float((x[:-1] ** 2).sum()) + PENALTY * float(x[-1])

    def _bounds(self) -> list[tuple[float, float]]:
        bounds = dict.fromkeys(self.names, (-MOST_UNITS, MOST_UNITS))
        unit = UNITS["place"] * self.wave_mm
        at, rods = self.design.driven.at_mm, self.design.rods
        if self.reflectors:
            room = at - rods[self.reflectors[-1]].at_mm - self.keep.clear_mm[0]
            bounds["place"] = (min(0.0, max(-MOST_UNITS, -room / unit)), MOST_UNITS)
        if self.directors:
            room = rods[self.directors[0]].at_mm - at - self.keep.clear_mm[1]
            half = max(0.0, room / 2.0 / unit)
            bounds["place"] = (bounds["place"][0], min(MOST_UNITS, half))
            bounds["first"] = (-min(MOST_UNITS, half), self._room_ahead(unit))
        return [bounds[name] for name in self.names]

    def _room_ahead(self, unit_mm: float) -> float:
        """Units that the first director may move forward: a third of the way to the next."""
        if len(self.directors) < 2:
            return 0.0
        first, second = (self.design.rods[n].at_mm for n in self.directors[:2])
        return min(MOST_UNITS, (second - first) / 3.0 / unit_mm)

    def moved(self, x: Floats) -> Design:
        """The design with the variables at these values."""
        by = {name: float(value) * UNITS[name] for name, value in zip(self.names, x, strict=True)}
        rods = list(self.design.rods)
        for n in self.reflectors:
            rods[n] = _longer(rods[n], by["reflector"])
        for n in self.directors:
            rods[n] = _longer(rods[n], by["directors"])
        if self.directors:
            first = self.directors[0]
            rods[first] = _longer(rods[first], by["first length"])
            rods[first] = replace(rods[first], at_mm=rods[first].at_mm + by["first"] * self.wave_mm)
        driven, share = self.design.driven, 1.0 + by["driven"]
        driven = replace(driven, at_mm=driven.at_mm + by["place"] * self.wave_mm)
        if driven.length_mm is not None:
            driven = replace(driven, length_mm=driven.length_mm * share)
        if driven.perimeter_mm is not None:
            driven = replace(driven, perimeter_mm=driven.perimeter_mm * share)
        return replace(self.design, rods=tuple(rods), driven=driven)

    def _margins_of(self, x: Floats) -> Floats:
        key = x.tobytes()
        if key not in self._seen:
            self._seen[key] = self._solved(x)
        return self._seen[key]

    def _solved(self, x: Floats) -> Floats:
        """What is kept to spare, (3 F,): match, gain, front-to-back, each in a unit of about equal worth."""
        keep = self.keep
        most = (keep.vswr_most - 1.0) / (keep.vswr_most + 1.0)
        try:
            found = figures_at(self.moved(x), keep.frequencies_mhz, self.azimuthal)
        except DesignFault:
            return np.full(3 * len(keep.frequencies_mhz), FAILED)
        gain = found.gain_dbi - keep.gain_dbi + GAIN_SLACK_DB
        ratio = found.front_to_back_db - keep.front_to_back_db + RATIO_SLACK_DB
        return np.concatenate([10.0 * (most**2 - found.reflection**2), 5.0 * gain, 0.2 * ratio])

    def _margins(self, x: Floats) -> Floats:
        result: Floats = self._margins_of(x[:-1]) + x[-1]
        return result

    def _slopes(self, x: Floats) -> Floats:
        here = x[:-1]
        columns = []
        for n in range(len(here)):
            ahead, behind = here.copy(), here.copy()
            ahead[n] += STEP
            behind[n] -= STEP
            columns.append((self._margins_of(ahead) - self._margins_of(behind)) / (2.0 * STEP))
        columns.append(np.ones(len(columns[0])))
        return np.column_stack(columns)


def _longer(rod: Rod, share: float) -> Rod:
    return replace(rod, length_mm=rod.length_mm * (1.0 + share))
