"""The matrix of the whole antenna at one frequency: own blocks, couplings, loss and coats, all over the same basis.

Z[m, n] = j eta k / (4 pi) (current integrals - charge integrals / k^2), mixed-potential Galerkin form [Harrington1968].
Unknowns are the total currents at the nodes of the half y >= 0; the mirror half carries the same.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from boomwright.rf.arrays import VACUUM_PERMITTIVITY_F_M, WAVE_IMPEDANCE_OHM, Complexes, Floats, wavenumber_rad_m
from boomwright.rf.conductors import Coat, Conductor, Rod
from boomwright.rf.coupling import Samples, coupling, sample
from boomwright.rf.loss import round_impedance_ohm_m, surface_impedance_ohm
from boomwright.rf.mesh import Mesh, build, plan_nodes
from boomwright.rf.own import OwnAction, block
from boomwright.rf.quadrature import gauss_unit
from boomwright.rf.ring import RingAction

ELEMENTS_PER_HALF = 20.0


@dataclass(frozen=True)
class Meshed:
    """A conductor with its mesh, its node fractions and its samples."""

    conductor: Conductor
    parts: tuple[Floats, ...]
    mesh: Mesh
    samples: Samples

    @property
    def unknowns(self) -> int:
        """Number of unknowns U."""
        return int(self.samples.charge.shape[0])


def meshed(conductor: Conductor, parts: tuple[Floats, ...]) -> Meshed:
    """A conductor meshed with given node fractions."""
    mesh = build(conductor, parts)
    return Meshed(conductor, parts, mesh, sample(mesh))


def planned(conductor: Conductor, refinement: int = 0) -> Meshed:
    """A conductor with the mesh that suits it; each refinement halves all elements."""
    if isinstance(conductor, Rod):
        largest_m = conductor.length_m / 2.0 / ELEMENTS_PER_HALF
    else:
        largest_m = conductor.half_length_m / (2.0 * ELEMENTS_PER_HALF)
    return meshed(conductor, plan_nodes(conductor, largest_m, refinement))


def factor(k: float) -> complex:
    """j eta k / (4 pi), twice: the half tested stands for the whole [ohm/m]."""
    return 2.0 * 1j * WAVE_IMPEDANCE_OHM * k / (4.0 * math.pi)


def own_action(piece: Meshed) -> OwnAction | RingAction:
    """The integrals of one conductor with itself, ready for any frequency."""
    return OwnAction(piece.mesh, azimuthal=False) if isinstance(piece.conductor, Rod) else RingAction(piece.mesh)


def own_block(piece: Meshed, action: OwnAction | RingAction, frequency_hz: float) -> Complexes:
    """Block of one conductor with itself [ohm], (U, U), loss and coat included."""
    k = wavenumber_rad_m(frequency_hz)
    if isinstance(action, RingAction):
        bare = action.block(k)
    else:
        bare = block(piece.mesh, action.static.plus(action.dynamic(k)), k)
    result: Complexes = factor(k) * bare + loss_block(piece, frequency_hz) + coat_block(piece, frequency_hz)
    return result


def coupling_block(first: Meshed, second: Meshed, frequency_hz: float) -> Complexes:
    """Block between two conductors [ohm], (U1, U2)."""
    k = wavenumber_rad_m(frequency_hz)
    result: Complexes = factor(k) * coupling(first.samples, second.samples, k)
    return result


def loss_block(piece: Meshed, frequency_hz: float) -> Complexes:
    """What conductor loss and internal reactance add [ohm], (U, U)."""
    mesh, sigma = piece.mesh, piece.conductor.conductivity_s_m
    total = np.zeros((mesh.elements + 1, mesh.elements + 1), dtype=np.complex128)
    if not math.isinf(sigma):
        per_length = {
            a: round_impedance_ohm_m(a, sigma, frequency_hz) for a in {float(r) for r in mesh.radius_m[~mesh.cap, 0]}
        }
        flat = surface_impedance_ohm(sigma, frequency_hz)
        places, weights = gauss_unit(6)
        hats = np.array([1.0 - places, places])
        for index in range(mesh.elements):
            if mesh.cap[index]:
                radius = mesh.radius_m[index, 0] + (mesh.radius_m[index, 1] - mesh.radius_m[index, 0]) * places
                impedance = flat / (2.0 * math.pi * radius)
            else:
                impedance = np.full(len(places), per_length[float(mesh.radius_m[index, 0])])
            part = (hats * (weights * impedance * mesh.size_m[index])) @ hats.T
            total[index : index + 2, index : index + 2] += 2.0 * part
    return total[: piece.unknowns, : piece.unknowns]


def coat_block(piece: Meshed, frequency_hz: float) -> Complexes:
    """What a thin coat adds [ohm], (U, U): the field of the charge inside the sheath is weaker [Richmond1976]."""
    mesh, coat = piece.mesh, piece.conductor.coat
    total = np.zeros((mesh.elements + 1, mesh.elements + 1), dtype=np.complex128)
    if coat is not None and coat.thickness_m > 0.0:
        omega = 2.0 * math.pi * frequency_hz
        for index in np.flatnonzero(~mesh.cap):
            change = coat_elastance_m_f(coat, float(mesh.radius_m[index, 0])) / (1j * omega * mesh.size_m[index])
            total[index : index + 2, index : index + 2] += 2.0 * change * np.array([[1.0, -1.0], [-1.0, 1.0]])
    return total[: piece.unknowns, : piece.unknowns]


def coat_elastance_m_f(coat: Coat, radius_m: float) -> complex:
    """Change of elastance times length [m/F] that a coat makes on a round conductor [Richmond1976].

    Returns (1 / eps - 1 / eps0) ln(b / a) / (2 pi): 0 without thickness and at permittivity 1.
    """
    permittivity = coat.permittivity * (1.0 - 1j * coat.loss_tangent)
    thickness = math.log1p(coat.thickness_m / radius_m)
    return (1.0 / permittivity - 1.0) * thickness / (2.0 * math.pi * VACUUM_PERMITTIVITY_F_M)


def full_matrix(pieces: list[Meshed], frequency_hz: float) -> Complexes:
    """The whole matrix [ohm], symmetric."""
    offsets = np.concatenate([[0], np.cumsum([p.unknowns for p in pieces])])
    total = np.zeros((offsets[-1], offsets[-1]), dtype=np.complex128)
    for i, first in enumerate(pieces):
        total[offsets[i] : offsets[i + 1], offsets[i] : offsets[i + 1]] = own_block(
            first, own_action(first), frequency_hz
        )
        for j in range(i + 1, len(pieces)):
            part = coupling_block(first, pieces[j], frequency_hz)
            total[offsets[i] : offsets[i + 1], offsets[j] : offsets[j + 1]] = part
            total[offsets[j] : offsets[j + 1], offsets[i] : offsets[i + 1]] = part.T
    return total
