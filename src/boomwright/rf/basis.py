"""A conductor ready for the matrix: its mesh, its unknowns, and the samples through which it meets the others."""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import cached_property

import numpy as np

from boomwright.rf.arrays import Floats, wavenumber_rad_m
from boomwright.rf.azimuth import Surface, surface
from boomwright.rf.clearance import least_spacing_radii, least_surface_gap_m, nearest_others
from boomwright.rf.conductors import Conductor, Folded, Loop, Rod, Wires
from boomwright.rf.coupling import Samples, sample
from boomwright.rf.mesh import Mesh, build, plan_nodes
from boomwright.rf.outline import facing_m, outline
from boomwright.rf.validity import CLOSE_RADII

ELEMENTS_PER_HALF = 20.0
ELEMENTS_PER_WAVELENGTH = 60.0
THICK_KA = 0.1
FINEST_FACTOR = 3.0
GAP_SHARE = 0.75
FACING_SPACINGS = 14.0
AZIMUTHS_LEAST, AZIMUTHS_MOST = 8, 20
AZIMUTH_DECAY = 9.0


@dataclass(frozen=True)
class Options:
    """How fine to solve.

    refinement  0 = as planned; each step halves every element
    azimuthal   whether current may vary round the circumference; None = where conductors are thick or close
    """

    refinement: int = 0
    azimuthal: bool | None = None


@dataclass(frozen=True)
class Mode:
    """What varies round the circumference: families of m = 1 (0 none, 1 cosine, 2 cosine and sine), azimuth points."""

    families: int
    azimuths: int

    @property
    def flat(self) -> bool:
        """True where only what is symmetric about z = 0 is carried."""
        return self.families == 1


@dataclass(frozen=True)
class Piece:
    """A meshed conductor, sampled for the others and, if it is closed, for itself.

    Surfaces are there when current varies round the circumference; what a rod has of its own is not used.
    """

    conductor: Conductor
    parts: tuple[Floats, ...]
    mesh: Mesh
    surface: Surface | None
    own_surface: Surface | None
    nearest_m: float

    @property
    def nodes(self) -> int:
        """Number of m = 0 unknowns."""
        return self.mesh.elements + (1 if self.mesh.closed else 0)

    @cached_property
    def samples(self) -> Samples:
        """Rings through which the conductor meets the others, m = 0."""
        return sample(self.mesh, self.nearest_m)

    @cached_property
    def own_samples(self) -> Samples:
        """Rings through which a closed conductor meets itself, m = 0."""
        return sample(self.mesh)

    @property
    def unknowns(self) -> int:
        """Number of all unknowns U."""
        return self.nodes if self.surface is None else self.surface.unknowns


def choose_mode(wires: Wires, frequency_hz: float, options: Options) -> Mode:
    """What may vary round the circumference, from the highest frequency [Hz] to be solved."""
    k = wavenumber_rad_m(frequency_hz)
    nearest = least_spacing_radii(wires)
    wanted = options.azimuthal
    if wanted is None:
        thick = any(k * conductor.radius_m > THICK_KA for conductor in wires.conductors)
        wanted = thick or (nearest < CLOSE_RADII and can_resolve(wires, frequency_hz))
    if not wanted:
        return Mode(0, 0)
    decay = math.acosh(max(nearest / 2.0, 1.05)) if math.isfinite(nearest) else 10.0
    azimuths = 2 * math.ceil(AZIMUTH_DECAY / decay / 2.0)
    azimuths = min(max(azimuths, AZIMUTHS_LEAST), AZIMUTHS_MOST)
    return Mode(1 if is_flat(wires) else 2, azimuths)


def can_resolve(wires: Wires, frequency_hz: float) -> bool:
    """True if elements as small as the gaps between surfaces are affordable.

    Where they are not, conductors are a few radii apart and both far thinner than an element: facing sides of a folded
    dipole then crowd the current as two long wires do (`proximity`).
    """
    gap_m = least_surface_gap_m(wires)
    return all(
        largest_element_m(conductor, frequency_hz) <= FINEST_FACTOR * GAP_SHARE * gap_m
        for conductor in wires.conductors
    )


def is_flat(wires: Wires) -> bool:
    """True if the antenna is its own mirror image in z = 0."""
    return all(
        conductor.height_m == 0.0
        and not isinstance(conductor, Loop)
        and not (isinstance(conductor, Folded) and conductor.upright)
        for conductor in wires.conductors
    )


def largest_element_m(conductor: Conductor, frequency_hz: float) -> float:
    """Size of a conductor's elements away from ends, bends and feed [m]."""
    wavelength_m = 2.0 * math.pi / wavenumber_rad_m(frequency_hz)
    half_m = conductor.length_m / 2.0 if isinstance(conductor, Rod) else outline(conductor).length_m / 2.0
    largest_m = min(half_m / ELEMENTS_PER_HALF, wavelength_m / ELEMENTS_PER_WAVELENGTH)
    return largest_m if isinstance(conductor, Rod) else min(largest_m, FACING_SPACINGS * facing_m(conductor))


@dataclass(frozen=True)
class Planner:
    """How the conductors of one antenna are meshed: the same rule for a conductor and for one that differs a little."""

    frequency_hz: float
    options: Options
    mode: Mode
    least_gap_m: float
    gap_m: dict[str, float]
    spacing_m: dict[str, float]

    def parts(self, conductor: Conductor) -> tuple[Floats, ...]:
        """Node fractions for a conductor."""
        largest_m = largest_element_m(conductor, self.frequency_hz)
        if self.mode.families:
            largest_m = max(min(largest_m, GAP_SHARE * self.least_gap_m), largest_m / FINEST_FACTOR)
        return plan_nodes(conductor, largest_m, self.options.refinement)

    def piece(self, conductor: Conductor) -> Piece:
        """A conductor meshed."""
        return self._piece_of(conductor, self.parts(conductor))

    def changed(self, piece: Piece, conductor: Conductor) -> Piece:
        """A slightly changed conductor on a mesh with as many nodes as the piece it comes from."""
        parts = self.parts(conductor)
        same = len(parts) == len(piece.parts) and all(len(a) == len(b) for a, b in zip(parts, piece.parts, strict=True))
        return self._piece_of(conductor, parts if same else piece.parts)

    def alike(self, piece: Piece, conductor: Conductor) -> Piece:
        """Another size of the piece's conductor with the same node fractions: matrices run smoothly with its sizes."""
        return self._piece_of(conductor, piece.parts)

    def _piece_of(self, conductor: Conductor, parts: tuple[Floats, ...]) -> Piece:
        mesh, mode = build(conductor, parts), self.mode
        nearest_m = self.spacing_m[conductor.tag]
        skin = surface(mesh, mode.azimuths, mode.families, self.gap_m[conductor.tag]) if mode.families else None
        if isinstance(conductor, Rod):
            return Piece(conductor, parts, mesh, skin, skin, nearest_m)
        own_skin = surface(mesh, mode.azimuths, mode.families) if mode.families else None
        return Piece(conductor, parts, mesh, skin, own_skin, nearest_m)


def planner_of(wires: Wires, frequency_hz: float, options: Options) -> Planner:
    """The rule that meshes an antenna for frequencies up to the given one [Hz]."""
    spacing_m, gap_m = nearest_others(wires)
    mode = choose_mode(wires, frequency_hz, options)
    return Planner(frequency_hz, options, mode, least_surface_gap_m(wires), gap_m, spacing_m)


def offsets(pieces: tuple[Piece, ...]) -> tuple[int, ...]:
    """First row of every piece in the matrix, and the number of rows at the end."""
    return tuple(int(n) for n in np.concatenate([[0], np.cumsum([piece.unknowns for piece in pieces])]))
