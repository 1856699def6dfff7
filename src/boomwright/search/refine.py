"""From the best array of the reduced model to a design as cut: full solutions correct the model, sizes are rounded."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from boomwright.design.model import Design
from boomwright.prediction import sweep_frequencies_mhz
from boomwright.rf.arrays import Complexes, Floats
from boomwright.rf.quadrature import interpolation
from boomwright.rf.solve import Model
from boomwright.rf.wires import wires_of
from boomwright.search.draft import Frame, bounds_of, draft_design, rounded_mm
from boomwright.search.family import Family, Figures
from boomwright.search.optimise import Aim, Array, Bounds, optimise
from boomwright.units import hz_from_mhz, m_from_mm

CORRECTIONS, FEW_CORRECTIONS, COSTLY_CONDUCTORS = 6, 3, 10
STEPS = 60
SETTLED_OHM, SETTLED_DB = 0.2, 0.004
ROUNDING_PASSES = 3


@dataclass(frozen=True)
class Corrected:
    """A family whose figures are set right by what full solutions of one array differ by, at each frequency (F,)."""

    family: Family
    impedance_ohm: Complexes
    gain_db: Floats
    front_to_back_db: Floats

    @property
    def wavenumbers(self) -> Floats:
        """Of the family [rad/m]."""
        return self.family.wavenumbers

    def figures(self, lengths_m: Floats, places_m: Floats) -> Figures:
        """As the family's, corrected."""
        found = self.family.figures(lengths_m, places_m)
        return replace(
            found,
            impedance_ohm=found.impedance_ohm + self.impedance_ohm,
            gain_dbi=found.gain_dbi + self.gain_db,
            front_to_back_db=found.front_to_back_db + self.front_to_back_db,
        )


def refine(
    frame: Frame, family: Family, array: Array, aim: Aim, corrected: Corrected | None = None
) -> tuple[Design, Array, Corrected]:
    """The design nearest to the best that can be cut: every size a whole step.

    frame, family  what the array is made of
    array          where to begin
    aim            what is to be kept, with the margin for what rounding does
    corrected      of an array nearby, None = not known yet

    Returns the design, its array, and the correction for another turn.
    """
    bounds = bounds_of(frame, family, len(array.lengths_m), frame.request.boom_mm)
    corrected = corrected or correct(frame, family, array)
    for _ in range(CORRECTIONS if len(array.lengths_m) < COSTLY_CONDUCTORS else FEW_CORRECTIONS):
        array = optimise(corrected, (array.lengths_m, array.places_m), bounds, aim, STEPS)
        before, corrected = corrected, correct(frame, family, array)
        if _settled(before, corrected):
            break
    array = _on_steps(frame, corrected, array, bounds, aim)
    corrected = correct(frame, family, array)
    array = _on_steps(frame, corrected, array, bounds, aim)
    return design_of(frame, array), array, corrected


def _settled(one: Corrected, two: Corrected) -> bool:
    apart_ohm = float(np.abs(one.impedance_ohm - two.impedance_ohm).max())
    return apart_ohm < SETTLED_OHM and float(np.abs(one.gain_db - two.gain_db).max()) < SETTLED_DB


def design_of(frame: Frame, array: Array) -> Design:
    """The design of an array, sizes at whole steps."""
    step = frame.stock.step_mm
    return draft_design(frame.request, frame.stock, rounded_mm(array.lengths_m, step), rounded_mm(array.places_m, step))


def correct(frame: Frame, family: Family, array: Array) -> Corrected:
    """The family set right by full solutions of an array at a few frequencies: what it leaves out varies slowly."""
    design = draft_design(frame.request, frame.stock, array.lengths_m * 1e3, array.places_m * 1e3)
    frequencies_hz = np.array(family.frequencies_hz)
    picked = sorted({0, len(frequencies_hz) // 2, len(frequencies_hz) - 1})
    model = Model(wires_of(design), hz_from_mhz(sweep_frequencies_mhz(design)[-1]))
    solved = [model.solve(float(frequencies_hz[index])) for index in picked]
    found = family.figures(array.lengths_m, array.places_m)
    shares = interpolation(frequencies_hz[picked], frequencies_hz)
    # Ratios of impedance and differences of level are smoother than what they compare.
    ratio = np.array([each.impedance_ohm for each in solved]) / found.impedance_ohm[picked]
    gain = np.array([each.gain_dbi for each in solved]) - found.gain_dbi[picked]
    back = np.array([each.front_to_back_db for each in solved]) - found.front_to_back_db[picked]
    return Corrected(family, (shares @ ratio - 1.0) * found.impedance_ohm, shares @ gain, shares @ back)


def _on_steps(frame: Frame, family: Corrected, array: Array, bounds: Bounds, aim: Aim) -> Array:
    """Every size on a whole step, then each moved a step as long as that helps; the boom's ends stay."""
    step_m = m_from_mm(frame.stock.step_mm)
    steps = [np.round(array.lengths_m / step_m), np.round(array.places_m / step_m)]
    count, fixed = len(array.lengths_m), bounds.boom_m is not None

    def merit(trial: list[Floats]) -> float:
        gaps = np.diff(trial[1]) * step_m
        if (gaps < bounds.gap_m[:, 0] - 1e-9).any() or (gaps > bounds.gap_m[:, 1] + 1e-9).any():
            return -np.inf
        return aim.merit_db(family.figures(trial[0] * step_m, trial[1] * step_m))

    steps[1] = _apart(steps[1], bounds.gap_m[:, 0] / step_m, fixed)
    best = merit(steps)
    for _ in range(ROUNDING_PASSES):
        before = best
        for kind, index in [(0, n) for n in range(count)] + [(1, n) for n in range(1, count - fixed)]:
            for move in (1.0, -1.0):
                trial = [part.copy() for part in steps]
                trial[kind][index] += move
                value = merit(trial)
                if value > best:
                    steps, best = trial, value
                    break
        if best - before < SETTLED_DB / 4.0:
            break
    return Array(steps[0] * step_m, steps[1] * step_m, best)


def _apart(places: Floats, least: Floats, fixed_end: bool) -> Floats:
    """Places in steps, pushed apart where rounding brought neighbours a step too near."""
    result = places.copy()
    for n, gap in enumerate(least):
        result[n + 1] = max(result[n + 1], result[n] + np.ceil(gap - 1e-6))
    if fixed_end:
        result[-1] = places[-1]
        for n in range(len(least) - 1, 0, -1):
            result[n] = min(result[n], result[n + 1] - np.ceil(least[n] - 1e-6))
    return result
