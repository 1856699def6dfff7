"""The antenna over many frequencies: the matrix is filled at a few and interpolated between them, then solved at all.

Elements of the matrix are smooth in frequency, resonances appear only on solving; Chebyshev nodes over the span and as
many of them as the antenna's electrical size asks for keep the interpolation error below that of the mesh.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from boomwright.rf.arrays import Complexes, Floats, wavenumber_rad_m
from boomwright.rf.basis import Options, Piece
from boomwright.rf.conductors import Wires
from boomwright.rf.feed import return_loss_db, vswr
from boomwright.rf.quadrature import interpolation
from boomwright.rf.solve import Model, Solution, factored, refuse_frequencies
from boomwright.rf.validity import balance_warning, crowding_warnings, geometry_warnings, span_warnings

INTERPOLATION_ERROR = 1e-8
STORED_NUMBERS_MOST = 20_000_000
SPOT_CHECKS = 2
WIDEST_RATIO = 3.0
"""Widest sweep that is interpolated in one piece: over a decade k and 1 / k are no polynomials any more."""

REDUCTION_ERROR = 1e-5


@dataclass(frozen=True)
class Sweep:
    """Solutions at ascending frequencies; every property runs with them (F,)."""

    solutions: tuple[Solution, ...]
    system_ohm: float
    warnings: tuple[str, ...]

    @property
    def frequency_hz(self) -> Floats:
        """Frequencies [Hz]."""
        return np.array([solution.frequency_hz for solution in self.solutions])

    @property
    def impedance_ohm(self) -> Complexes:
        """Input impedance [ohm]."""
        return np.array([solution.impedance_ohm for solution in self.solutions])

    @property
    def vswr(self) -> Floats:
        """Voltage standing wave ratio in the system."""
        return np.array([vswr(solution.impedance_ohm, self.system_ohm) for solution in self.solutions])

    @property
    def return_loss_db(self) -> Floats:
        """Return loss in the system [dB]."""
        return np.array([return_loss_db(solution.impedance_ohm, self.system_ohm) for solution in self.solutions])

    @property
    def gain_dbi(self) -> Floats:
        """Gain toward +x [dBi]."""
        return np.array([solution.gain_dbi for solution in self.solutions])

    @property
    def directivity_dbi(self) -> Floats:
        """Directivity toward +x [dBi]."""
        return np.array([solution.directivity_dbi for solution in self.solutions])

    @property
    def efficiency(self) -> Floats:
        """Share of the input power that is not lost."""
        return np.array([solution.efficiency for solution in self.solutions])

    @property
    def front_to_back_db(self) -> Floats:
        """Level toward +x over level toward -x [dB]."""
        return np.array([solution.front_to_back_db for solution in self.solutions])

    @property
    def front_to_rear_db(self) -> Floats:
        """Level toward +x over the largest more than 90 degrees off it [dB]."""
        return np.array([solution.front_to_rear_db for solution in self.solutions])

    @property
    def beamwidth_e_deg(self) -> tuple[float | None, ...]:
        """Half-power beamwidth in the plane z = 0 [deg]; None where it has none."""
        return tuple(solution.beamwidth_e_deg for solution in self.solutions)

    @property
    def beamwidth_h_deg(self) -> tuple[float | None, ...]:
        """Half-power beamwidth in the plane y = 0 [deg]; None where it has none."""
        return tuple(solution.beamwidth_h_deg for solution in self.solutions)

    @property
    def side_lobe_db(self) -> tuple[float | None, ...]:
        """Highest lobe outside the beam in the principal planes [dB]; None where there is none."""
        return tuple(solution.side_lobe_db for solution in self.solutions)


def sweep(
    wires: Wires,
    frequencies_hz: tuple[float, ...],
    system_ohm: float = 50.0,
    design_frequency_hz: float | None = None,
    options: Options | None = None,
) -> Sweep:
    """Solve an antenna over frequencies.

    wires                its conductors
    frequencies_hz       [Hz], at least one, any order; solved ascending, each once
    system_ohm           for VSWR and return loss [ohm], above 0
    design_frequency_hz  warns if the sweep leaves 0.5 to 1.5 of it [Hz]; None = no such warning
    options              how fine

    Raises DesignFault as `solve_at`.
    """
    refuse_frequencies(tuple(frequencies_hz) or (math.nan,))
    ascending = tuple(sorted(set(frequencies_hz)))
    model = Model(wires, ascending[-1], options)
    solutions = solve_all(model, ascending)
    worst = max(solutions, key=lambda solution: abs(solution.imbalance))
    warnings = (
        *geometry_warnings(wires, ascending[-1]),
        *(() if model.mode.families else crowding_warnings(wires)),
        *span_warnings(ascending, design_frequency_hz),
        *balance_warning(worst.frequency_hz, worst.imbalance),
    )
    return Sweep(solutions, system_ohm, warnings)


def solve_all(model: Model, frequencies_hz: tuple[float, ...]) -> tuple[Solution, ...]:
    """Solve a model at ascending frequencies [Hz], filling the matrix at as few of them as that takes."""
    low, high = frequencies_hz[0], frequencies_hz[-1]
    if high > WIDEST_RATIO * low:
        lower = tuple(f for f in frequencies_hz if f < math.sqrt(low * high))
        return solve_all(model, lower) + solve_all(model, frequencies_hz[len(lower) :])
    count = nodes_needed(model.pieces, low, high)
    unknowns = len(model.excitation)
    if count >= len(frequencies_hz) or count * unknowns**2 > STORED_NUMBERS_MOST:
        return tuple(model.solve(frequency_hz) for frequency_hz in frequencies_hz)
    turns = (2.0 * np.arange(count) + 1.0) / (2.0 * count) * np.pi
    nodes = (low + high) / 2.0 - (high - low) / 2.0 * np.cos(turns)
    stored = np.array([model.impedance.matrix(float(node)) for node in nodes])
    shares = list(interpolation(nodes, np.array(frequencies_hz)))
    reduced = _reduced_currents(model, stored, shares)
    if reduced is None:
        reduced = [factored(mixed(share, stored)).solve(model.excitation) for share in shares]
    return tuple(model.solution(currents, f) for currents, f in zip(reduced, frequencies_hz, strict=True))


def mixed(shares: Floats, stored: Complexes) -> Complexes:
    """Sum of stored matrices (nodes, n, n) with their shares (nodes,)."""
    result: Complexes = np.tensordot(shares.astype(np.complex128), stored, axes=1)
    return result


def _reduced_currents(model: Model, stored: Complexes, shares: list[Floats]) -> list[Complexes] | None:
    """Currents at all frequencies sought among those at the nodes (Galerkin); None if spot checks do not agree.

    A stationary reduction: the error of the feed current is the square of that of the currents. The worst frequencies
    are those farthest from a node; a few of them are solved in full and compared.
    """
    solved = np.column_stack([factored(matrix).solve(model.excitation) for matrix in stored])
    basis, _ = np.linalg.qr(np.column_stack([solved.real, solved.imag]))
    small = basis.T @ stored @ basis
    right = basis.T @ model.excitation
    found = [np.asarray(basis @ np.linalg.solve(mixed(share, small), right)) for share in shares]
    farthest = np.argsort([float(share.max()) for share in shares])[:SPOT_CHECKS]
    for index in farthest:
        full = factored(mixed(shares[index], stored)).solve(model.excitation)
        if np.abs(full - found[index]).max() > REDUCTION_ERROR * np.abs(full).max():
            return None
    return found


def nodes_needed(pieces: tuple[Piece, ...], low_hz: float, high_hz: float) -> int:
    """Number of Chebyshev nodes that interpolate exp(-jkR) over the antenna's largest distance to 1e-8."""
    places = np.concatenate([piece.mesh.start for piece in pieces])
    across_m = math.hypot(float(np.ptp(places[:, 0])), 2.0 * float(places[:, 1].max()), float(np.ptp(places[:, 2])))
    swing_rad = (wavenumber_rad_m(high_hz) - wavenumber_rad_m(low_hz)) / 2.0 * across_m
    # The factors k and 1 / k of the matrix swing with the relative span, like a distance of one radian at the middle.
    swing_rad = max(swing_rad, 2.0 * (high_hz - low_hz) / (high_hz + low_hz))
    count, error = 2, swing_rad**2 / 4.0
    while error > INTERPOLATION_ERROR and count < 60:
        count += 1
        error *= swing_rad / (2.0 * count)
    return count + 1
