"""What a design is predicted to do: its frequencies, its figures as one document and as a table, its spec judged."""

from __future__ import annotations

import json
import math
from collections.abc import Sequence
from dataclasses import dataclass, replace
from functools import cached_property, lru_cache
from pathlib import Path
from typing import Any

import numpy as np

from boomwright.design.model import Design
from boomwright.design.tomlfile import LEAST_MHZ, MOST_MHZ, load_design
from boomwright.errors import DesignFault, Fault, InputFault
from boomwright.rf.conductors import Wires
from boomwright.rf.document import POINTS, design_sensitivities, document
from boomwright.rf.solve import Model, Solution
from boomwright.rf.sweep import Sweep, sweep
from boomwright.rf.wires import FED_TAG, design_warnings, wires_of
from boomwright.spec import Shortfall, shortfalls
from boomwright.units import hz_from_mhz

FEWEST_POINTS, MOST_POINTS = 4, 2001
LEAST_WIDENING = 0.02
LOWEST_SHARE = 0.1
"""A sweep below a very wide band ends at this share of the band's lower edge."""
HIGHEST_MULTIPLE = 4.0
"""Of the band's upper edge: beyond it rods are many wavelengths long and the equations large."""
LEAST_EFFICIENCY = 1e-8
DIGITS = 9
"""Significant digits of a figure in the document: more than the equations hold, fewer than differ by the machine."""

COLUMNS = ("MHz", "R ohm", "X ohm", "VSWR", "RL dB", "dBi", "F/B dB", "eff %")
ROW = "{:>10} {:>8} {:>8} {:>7} {:>6} {:>7} {:>7} {:>6}"


@dataclass(frozen=True)
class Prediction:
    """A solved design: figures run with `frequency_mhz` (F,), ascending."""

    design: Design
    frequency_mhz: tuple[float, ...]
    sweep: Sweep

    @property
    def in_band(self) -> tuple[int, ...]:
        """Indices of the frequencies that lie in the band."""
        band = self.design.band
        return tuple(i for i, f in enumerate(self.frequency_mhz) if band.low_mhz <= f <= band.high_mhz)

    @property
    def middle(self) -> int:
        """Index of the frequency nearest to the band's centre."""
        return min(
            range(len(self.frequency_mhz)), key=lambda i: abs(self.frequency_mhz[i] - self.design.band.centre_mhz)
        )

    @property
    def warnings(self) -> tuple[str, ...]:
        """What to doubt, and what of the design is not in the equations."""
        return (*self.sweep.warnings, *design_warnings(self.design))

    @cached_property
    def shortfalls(self) -> tuple[Shortfall, ...]:
        """What of the spec is not met at the frequencies that lie in the band."""
        found = self.sweep
        return shortfalls(
            self.design,
            self.frequency_mhz,
            found.gain_dbi.tolist(),
            found.front_to_back_db.tolist(),
            found.vswr.tolist(),
        )

    def as_json(self) -> str:
        """The document of `predict --json`, sensitivities at the band's centre included."""
        found = document(self.design, self.sweep, design_sensitivities(self.design))
        found = {key: _rounded(value) for key, value in found.items()}
        found["frequency_mhz"] = list(self.frequency_mhz)
        return json.dumps(found, indent=1, ensure_ascii=True, allow_nan=False) + "\n"

    def as_text(self) -> str:
        """A line a frequency, then the band's worst figures, the beam at its centre, and the warnings."""
        lines = [
            ROW.format(*COLUMNS),
            *(_row(f, s) for f, s in zip(self.frequency_mhz, _figures(self.sweep), strict=True)),
        ]
        lines += ["", self._beam_line, self.band_line, *(f"warning: {each}" for each in self.warnings)]
        return "\n".join(lines)

    @property
    def band_line(self) -> str:
        """The worst figures of the frequencies that lie in the band, and whether they meet the spec."""
        found, inside = self.sweep, list(self.in_band)
        if not inside:
            return "no frequency lies in the band"
        low, high = self.frequency_mhz[inside[0]], self.frequency_mhz[inside[-1]]
        verdict = "" if self.design.spec is None else f"; spec {'not met' if self.shortfalls else 'met'}"
        return (
            f"{low:g} to {high:g} MHz: gain {found.gain_dbi[inside].min():.2f} dBi or more, "
            f"front-to-back {found.front_to_back_db[inside].min():.1f} dB or more, "
            f"VSWR {found.vswr[inside].max():.2f} or less{verdict}"
        )

    @property
    def _beam_line(self) -> str:
        solution = self.sweep.solutions[self.middle]
        beams = (("E-plane", solution.beamwidth_e_deg), ("H-plane", solution.beamwidth_h_deg))
        words = [f"{plane} {'none' if width is None else f'{width:.1f} deg'}" for plane, width in beams]
        return f"half-power beamwidth at {self.frequency_mhz[self.middle]:g} MHz: {', '.join(words)}"


def predict_file(design_path: Path, at_mhz: Sequence[float] = (), points: int | None = None) -> Prediction:
    """Solve the design of a file.

    design_path  the design file
    at_mhz       exactly these frequencies [MHz]; none = a sweep over the band and beside it
    points       number of frequencies of the sweep, None = 61

    Raises InputFault for what the user gave, AccessError for a file that cannot be read.
    """
    _refuse_arguments(at_mhz, points)
    design = load_design(design_path)
    try:
        return predict(design, tuple(sorted(set(at_mhz))), POINTS if points is None else points)
    except InputFault as fault:
        arguments = any(each.path.startswith("--") for each in fault.faults)
        raise fault if arguments else fault.in_file(str(design_path)) from None


@lru_cache(maxsize=8)
def predict(design: Design, at_mhz: tuple[float, ...] = (), points: int = POINTS) -> Prediction:
    """Solve a design at these frequencies [MHz], ascending, or, without any, over its band; once a process.

    Raises DesignFault, naming keys of the design file, for conductors that have no solution.
    """
    chosen = at_mhz or sweep_frequencies_mhz(design, points)
    most_mhz = HIGHEST_MULTIPLE * design.band.high_mhz
    if chosen[-1] > most_mhz:
        found = f"{chosen[-1]:g} is far above the band, which ends at {design.band.high_mhz:g}"
        raise InputFault([Fault("--at-mhz", found, f"give frequencies up to {most_mhz:g} MHz")])
    frequencies_hz = tuple(hz_from_mhz(value) for value in chosen)
    centre_hz = hz_from_mhz(design.band.centre_mhz)
    try:
        found_sweep = sweep(wires_of(design), frequencies_hz, design.feed.system_ohm, centre_hz)
    except DesignFault as fault:
        raise DesignFault(_by_key(each, design) for each in fault.faults) from None
    _refuse_no_antenna(chosen, found_sweep)
    return Prediction(design, chosen, found_sweep)


@lru_cache(maxsize=8)
def solve_apart(wires: Wires, at_mhz: tuple[float, ...], highest_mhz: float) -> tuple[Solution, ...]:
    """Solve conductors at frequencies [MHz], each on its own: nothing is interpolated; once a process.

    highest_mhz  what the mesh is made for [MHz]

    Raises DesignFault for conductors that have no solution.
    """
    model = Model(wires, hz_from_mhz(highest_mhz))
    return tuple(model.solve(hz_from_mhz(value)) for value in at_mhz)


def band_points_mhz(design: Design) -> tuple[float, ...]:
    """The band's lower edge, centre and upper edge [MHz], each once."""
    band = design.band
    return tuple(sorted({band.low_mhz, band.centre_mhz, band.high_mhz}))


def sweep_frequencies_mhz(design: Design, points: int = POINTS) -> tuple[float, ...]:
    """Frequencies [MHz] over the band widened by its own width, at least 2 % of the centre, on each side; ascending.

    points  how many, 4 or more: the band's edges are always among them, its centre from 5 on
    """
    band = design.band
    width = max(band.high_mhz - band.low_mhz, LEAST_WIDENING * band.centre_mhz)
    lowest = max(band.low_mhz - width, LOWEST_SHARE * band.low_mhz)
    grid = np.linspace(lowest, band.high_mhz + width, points)
    marks = band_points_mhz(design) if points > 4 else (band.low_mhz, band.high_mhz)
    # Each mark takes the place of a grid point of its own, however narrow the band is beside the grid.
    last, middle = len(marks) - 1, len(marks) // 2
    nearest = (int(np.argmin(np.abs(grid - mark))) for mark in marks)
    places = [min(max(place, 1 + i), points - 2 - last + i) for i, place in enumerate(nearest)]
    for i in range(middle - 1, -1, -1):
        places[i] = min(places[i], places[i + 1] - 1)
    for i in range(middle + 1, last + 1):
        places[i] = max(places[i], places[i - 1] + 1)
    for place, mark in zip(places, marks, strict=True):
        grid[place] = mark
    return tuple(float(value) for value in grid)


def _refuse_arguments(at_mhz: Sequence[float], points: int | None) -> None:
    faults = [
        Fault("--at-mhz", f"{value:g} is not a frequency in use", f"give {LEAST_MHZ:g} to {MOST_MHZ:g} MHz")
        for value in at_mhz
        if not (math.isfinite(value) and LEAST_MHZ <= value <= MOST_MHZ)
    ]
    if points is not None and not FEWEST_POINTS <= points <= MOST_POINTS:
        faults.append(Fault("--points", f"{points} points", f"give {FEWEST_POINTS} to {MOST_POINTS}"))
    if points is not None and at_mhz:
        faults.append(Fault("--points", "given beside --at-mhz, which sweeps nothing", "leave one of them out"))
    if len(at_mhz) > MOST_POINTS:
        faults.append(Fault("--at-mhz", f"{len(at_mhz)} frequencies", f"give at most {MOST_POINTS}"))
    if faults:
        raise InputFault(faults)


def _refuse_no_antenna(frequency_mhz: Sequence[float], found: Sweep) -> None:
    """Refuse what loses all its power: there rounding is all that is left of the radiated part."""
    for at_mhz, efficiency in zip(frequency_mhz, found.efficiency, strict=True):
        if not efficiency > LEAST_EFFICIENCY:
            what = f"at {at_mhz:g} MHz less than {LEAST_EFFICIENCY:g} of the power is radiated: this is no antenna"
            raise DesignFault([Fault("driven", what, "check that sizes are in mm and frequencies in MHz")])


def _by_key(fault: Fault, design: Design) -> Fault:
    """A solver's fault, which names conductors by tag, under the key of the design file."""
    tag, _, size = fault.path.partition(".")
    keys = {rod.tag: f"rod[{rod.file_index}]" for rod in design.rods} | {FED_TAG: "driven"}
    return replace(fault, path=f"{keys[tag]}.{size.replace('_m', '_mm') or 'at_mm'}") if tag in keys else fault


def _figures(found: Sweep) -> Sequence[tuple[float, ...]]:
    impedance = found.impedance_ohm
    columns = (
        impedance.real,
        impedance.imag,
        found.vswr,
        found.return_loss_db,
        found.gain_dbi,
        found.front_to_back_db,
        100.0 * found.efficiency,
    )
    return [tuple(float(value) for value in row) for row in zip(*columns, strict=True)]


def _row(frequency_mhz: float, figures: tuple[float, ...]) -> str:
    resistance, reactance, vswr, loss, gain, back, efficiency = figures
    ratio = f"{vswr:.2f}" if vswr < 1000.0 else ">999"
    cells = (f"{frequency_mhz:.3f}", f"{resistance:.2f}", f"{reactance:.2f}", ratio, f"{loss:.1f}")
    return ROW.format(*cells, f"{gain:.2f}", f"{back:.2f}", f"{efficiency:.1f}").rstrip()


def _rounded(value: Any) -> Any:
    """The same document with its numbers at `DIGITS` significant digits, and None for one that is not finite."""
    if isinstance(value, dict):
        return {key: _rounded(item) for key, item in value.items()}
    if isinstance(value, list | tuple):
        return [_rounded(item) for item in value]
    if isinstance(value, float):
        return float(f"{value:.{DIGITS}g}") + 0.0 if math.isfinite(value) else None
    return value
