"""The antenna at one frequency: currents, impedance, gain and the rest of what a data sheet states."""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from scipy.linalg import lapack

from boomwright.errors import DesignFault, Fault
from boomwright.rf.arrays import Complexes, Floats, wavenumber_rad_m
from boomwright.rf.basis import Mode, Options, Piece, offsets, planner_of
from boomwright.rf.clearance import refuse_impossible
from boomwright.rf.conductors import Wires
from boomwright.rf.feed import excitation
from boomwright.rf.impedance import Impedance
from boomwright.rf.pattern import (
    Sources,
    Sphere,
    cut_intensity_w_sr,
    half_power_beamwidth_deg,
    intensity_w_sr,
    radiation_moments,
    side_lobe_db,
    sources_of,
    sphere,
)
from boomwright.rf.validity import balance_warning, crowding_warnings, geometry_warnings

FORWARD = np.array([[1.0, 0.0, 0.0]])
LEAST_FREQUENCY_HZ = 1e5


@dataclass(frozen=True)
class Solution:
    """A solved antenna at one frequency, fed with 1 V (peak) at the gap; everything else follows from the currents.

    frequency_hz  [Hz]
    currents      the unknowns (U,): ampere at the nodes
    feed_current  mean current over the gap [A]
    lost_w        power lost in conductors and coats [W]
    """

    wires: Wires
    pieces: tuple[Piece, ...]
    mode: Mode
    frequency_hz: float
    currents: Complexes
    feed_current: complex
    lost_w: float

    @property
    def wavenumber_rad_m(self) -> float:
        """Wavenumber in vacuum [rad/m]."""
        return wavenumber_rad_m(self.frequency_hz)

    @property
    def impedance_ohm(self) -> complex:
        """Input impedance at the gap [ohm]."""
        return 1.0 / self.feed_current

    @property
    def input_w(self) -> float:
        """Power taken at the gap [W]."""
        return self.feed_current.real / 2.0

    @property
    def efficiency(self) -> float:
        """Share of the input power that is not lost, 0 to 1."""
        return 1.0 - self.lost_w / self.input_w

    @cached_property
    def sources(self) -> Sources:
        """Current moments for the far field."""
        return sources_of(self.pieces, self.currents)

    @cached_property
    def sphere(self) -> Sphere:
        """Intensity over the whole sphere and its integral."""
        return sphere(self.sources, self.wavenumber_rad_m, self.mode.flat)

    @property
    def imbalance(self) -> float:
        """Input minus lost minus radiated power, as a share of the input."""
        return 1.0 - (self.lost_w + self.sphere.radiated_w) / self.input_w

    def gain_toward_dbi(self, directions: Floats) -> Floats:
        """Gain [dBi] toward unit vectors (D, 3); IEEE Std 145: loss in, mismatch out; (D,)."""
        moments = radiation_moments(self.sources, directions, self.wavenumber_rad_m)
        return self.decibel(intensity_w_sr(moments, directions, self.wavenumber_rad_m))

    def decibel(self, intensity: Floats) -> Floats:
        """Gain [dBi] of intensities [W/sr]; nothing below -200."""
        result: Floats = 10.0 * np.log10(np.maximum(4.0 * np.pi * intensity / self.input_w, 1e-20))
        return result

    @cached_property
    def gain_dbi(self) -> float:
        """Gain toward +x [dBi]."""
        return float(self.gain_toward_dbi(FORWARD)[0])

    @property
    def directivity_dbi(self) -> float:
        """Directivity toward +x [dBi]."""
        return self.gain_dbi - 10.0 * math.log10(self.efficiency)

    @cached_property
    def front_to_back_db(self) -> float:
        """Level toward +x over level toward -x [dB]."""
        return self.gain_dbi - float(self.gain_toward_dbi(-FORWARD)[0])

    @cached_property
    def e_plane(self) -> Floats:
        """Gain every degree round the plane z = 0, from +x toward +y, (360,) [dBi]."""
        return self.decibel(cut_intensity_w_sr(self.sources, "e", self.wavenumber_rad_m))

    @cached_property
    def h_plane(self) -> Floats:
        """Gain every degree round the plane y = 0, from +x toward +z, (360,) [dBi]."""
        return self.decibel(cut_intensity_w_sr(self.sources, "h", self.wavenumber_rad_m))

    @property
    def front_to_rear_db(self) -> float:
        """Level toward +x over the largest level more than 90 degrees off it [dB]."""
        behind = self.sphere.directions[..., 0] < 0.0
        largest = max(
            float(self.decibel(self.sphere.intensity_w_sr[behind]).max()),
            float(self.e_plane[91:270].max()),
            float(self.h_plane[91:270].max()),
        )
        return self.gain_dbi - largest

    @property
    def beamwidth_e_deg(self) -> float | None:
        """Half-power beamwidth in the plane z = 0 [deg]; None without half-power points."""
        return half_power_beamwidth_deg(10.0 ** (self.e_plane / 10.0))

    @property
    def beamwidth_h_deg(self) -> float | None:
        """Half-power beamwidth in the plane y = 0 [deg]; None without half-power points."""
        return half_power_beamwidth_deg(10.0 ** (self.h_plane / 10.0))

    @property
    def side_lobe_db(self) -> float | None:
        """Highest lobe outside the beam in both principal planes, relative to the beam [dB]; None without one."""
        lobes = [side_lobe_db(10.0 ** (cut / 10.0)) for cut in (self.e_plane, self.h_plane)]
        found = [lobe for lobe in lobes if lobe is not None]
        return max(found) if found else None

    def sphere_dbi(self, step_deg: int = 5) -> tuple[Floats, Floats, Floats]:
        """Gain over the full sphere: theta from +z (T,), phi from +x toward +y (P,) [deg], gain (T, P) [dBi]."""
        theta, phi = np.arange(0.0, 180.1, step_deg), np.arange(0.0, 359.9, step_deg)
        t, p = np.meshgrid(np.radians(theta), np.radians(phi), indexing="ij")
        toward = np.stack([np.sin(t) * np.cos(p), np.sin(t) * np.sin(p), np.cos(t)], axis=-1).reshape(-1, 3)
        return theta, phi, self.gain_toward_dbi(toward).reshape(t.shape)

    @property
    def current_ratios(self) -> tuple[tuple[str, complex], ...]:
        """Tag of every conductor and its current at y = 0 over the feed current."""
        rows = offsets(self.pieces)
        return tuple(
            (piece.conductor.tag, complex(self.currents[row] / self.feed_current))
            for row, piece in zip(rows[:-1], self.pieces, strict=True)
        )

    @property
    def warnings(self) -> tuple[str, ...]:
        """What to doubt: geometry near the equations' limits, power balance off."""
        crowding = () if self.mode.families else crowding_warnings(self.wires)
        found = geometry_warnings(self.wires, self.frequency_hz) + crowding
        return found + balance_warning(self.frequency_hz, self.imbalance)


class Model:
    """An antenna meshed for frequencies up to a highest one, ready to be solved.

    wires                 its conductors
    highest_frequency_hz  the mesh and the choice of harmonics suit frequencies up to this [Hz]
    options               how fine

    Raises DesignFault for conductors that touch, cross, lie inside one another or cannot exist.
    """

    def __init__(self, wires: Wires, highest_frequency_hz: float, options: Options | None = None) -> None:
        refuse_impossible(wires)
        refuse_frequencies((highest_frequency_hz,))
        self.wires = wires
        self.planner = planner_of(wires, highest_frequency_hz, options or Options())
        self.mode = self.planner.mode
        self.pieces = tuple(self.planner.piece(conductor) for conductor in wires.conductors)
        self.impedance = Impedance(self.pieces, self.mode)
        self.excitation = excitation(self.pieces)

    def solve(self, frequency_hz: float) -> Solution:
        """The antenna at one frequency [Hz]."""
        return self.solution(factored(self.impedance.matrix(frequency_hz)).solve(self.excitation), frequency_hz)

    def solution(self, currents: Complexes, frequency_hz: float) -> Solution:
        """What follows from the unknowns (U,) at a frequency [Hz]."""
        lost_w = 0.0
        for row, piece, lossy in zip(offsets(self.pieces), self.pieces, self.impedance.lossy, strict=False):
            if lossy:
                part = currents[row : row + piece.unknowns]
                lost_w += 0.5 * float((part.conj() @ self.impedance.dissipation(piece, frequency_hz) @ part).real)
        feed_current = complex(self.excitation @ currents)
        return Solution(self.wires, self.pieces, self.mode, frequency_hz, currents, feed_current, lost_w)


@dataclass(frozen=True)
class Factored:
    """A matrix with its LU factors."""

    factors: Complexes
    pivots: Floats

    def solve(self, right: Complexes) -> Complexes:
        """Solution for right-hand side(s) (U,) or (U, n)."""
        solution, _ = lapack.zgetrs(self.factors, self.pivots, right)
        return np.asarray(solution, dtype=np.complex128).reshape(right.shape)


def factored(matrix: Complexes) -> Factored:
    """LU factors of a symmetric matrix."""
    factors, pivots, failed = lapack.zgetrf(matrix.T)
    if failed != 0 or not np.isfinite(factors).all():
        raise DesignFault([Fault("wires", "the conductors have no single solution", "look for conductors that touch")])
    return Factored(factors, pivots)


def solve_at(wires: Wires, frequency_hz: float, options: Options | None = None) -> Solution:
    """Solve an antenna at one frequency [Hz], 100 kHz or more.

    Raises DesignFault for conductors that touch, cross, lie inside one another or cannot exist.
    """
    return Model(wires, frequency_hz, options).solve(frequency_hz)


def refuse_frequencies(frequencies_hz: tuple[float, ...]) -> None:
    """Raise DesignFault for frequencies that are no frequencies."""
    faults = [
        Fault("frequency_hz", f"{value} is not a frequency", "give it in hertz, 100 kHz or more")
        for value in frequencies_hz
        if not (math.isfinite(value) and value >= LEAST_FREQUENCY_HZ)
    ]
    if faults:
        raise DesignFault(faults)
