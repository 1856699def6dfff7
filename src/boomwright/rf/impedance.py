"""The matrix of the whole antenna at one frequency: own blocks, couplings, loss and coats, all over the same basis.

Z[m, n] = j eta k / (4 pi) (current integrals - charge integrals / k^2), mixed-potential Galerkin form [Harrington1968].
Unknowns are the total currents at the nodes of the half y >= 0; the mirror half carries the same. Own integrals that do
not depend on frequency are worked out once and kept.
"""

from __future__ import annotations

import math

import numpy as np

from boomwright.rf.arrays import WAVE_IMPEDANCE_OHM, Complexes, wavenumber_rad_m
from boomwright.rf.azimuth import surface_coupling
from boomwright.rf.basis import Mode, Piece, offsets
from boomwright.rf.coat import coat_elastance_m_f
from boomwright.rf.conductors import Folded, Rod
from boomwright.rf.coupling import coupling
from boomwright.rf.loss import round_impedance_ohm_m, surface_impedance_ohm
from boomwright.rf.own import OwnAction, block
from boomwright.rf.quadrature import gauss_unit
from boomwright.rf.ring import RingAction


class Impedance:
    """The matrix of an antenna's pieces, ready for any frequency.

    pieces  the meshed conductors
    mode    what varies round the circumference
    """

    def __init__(self, pieces: tuple[Piece, ...], mode: Mode) -> None:
        self.pieces, self.mode = pieces, mode
        self.actions = tuple(own_action(piece, mode) for piece in pieces)
        self.lossy = tuple(is_lossy(piece) for piece in pieces)

    def matrix(self, frequency_hz: float) -> Complexes:
        """The whole matrix [ohm], symmetric, (U, U), at a frequency [Hz]."""
        first_row = offsets(self.pieces)
        total = np.empty((first_row[-1], first_row[-1]), dtype=np.complex128)
        for i, piece in enumerate(self.pieces):
            rows = slice(first_row[i], first_row[i + 1])
            total[rows, rows] = own_block(piece, self.actions[i], frequency_hz, self.mode)
            for j in range(i + 1, len(self.pieces)):
                columns = slice(first_row[j], first_row[j + 1])
                part = coupling_block(piece, self.pieces[j], frequency_hz, self.mode)
                total[rows, columns] = part
                total[columns, rows] = part.T
        return total

    def dissipation(self, piece: Piece, frequency_hz: float) -> Complexes:
        """What loss and coat add to a piece's own block [ohm], (U, U); its real part takes power."""
        total = np.zeros((piece.unknowns, piece.unknowns), dtype=np.complex128)
        _add_loss(total, piece, frequency_hz)
        _add_coat(total, piece, frequency_hz)
        return total


def is_lossy(piece: Piece) -> bool:
    """True if a piece takes power: a conductor that is not perfect, or a coat with loss."""
    coat = piece.conductor.coat
    return not math.isinf(piece.conductor.conductivity_s_m) or (coat is not None and coat.loss_tangent > 0.0)


def factor_ohm_m(frequency_hz: float) -> complex:
    """j eta k / (4 pi), twice, since the half that is tested stands for the whole [ohm/m]."""
    return 2.0 * 1j * WAVE_IMPEDANCE_OHM * wavenumber_rad_m(frequency_hz) / (4.0 * math.pi)


def own_action(piece: Piece, mode: Mode) -> OwnAction | RingAction:
    """The integrals of one conductor with itself, ready for any frequency."""
    if isinstance(piece.conductor, Rod):
        return OwnAction(piece.mesh, azimuthal=mode.families > 0)
    samples = piece.own_samples if piece.own_surface is None else None
    return RingAction(piece.mesh, samples, piece.own_surface, mode.families)


def own_block(piece: Piece, action: OwnAction | RingAction, frequency_hz: float, mode: Mode) -> Complexes:
    """Block of one conductor with itself [ohm], (U, U), loss and coat included."""
    k = wavenumber_rad_m(frequency_hz)
    if isinstance(action, RingAction):
        total = action.block(k)
    else:
        total = block(piece.mesh, action.static.plus(action.dynamic(k)), k, mode.families)
    if isinstance(piece.conductor, Folded) and piece.surface is None:
        _add_proximity(total, piece, piece.conductor, k)
    total *= factor_ohm_m(frequency_hz)
    _add_loss(total, piece, frequency_hz)
    _add_coat(total, piece, frequency_hz)
    return total


def coupling_block(first: Piece, second: Piece, frequency_hz: float, mode: Mode) -> Complexes:
    """Block between two conductors [ohm], (U1, U2)."""
    k = wavenumber_rad_m(frequency_hz)
    if first.surface is not None and second.surface is not None:
        total = surface_coupling(first.surface, second.surface, k, mode.flat)
    else:
        total = coupling(first.samples, second.samples, k)
    total *= factor_ohm_m(frequency_hz)
    return total


def _families(piece: Piece) -> range:
    """First row of every m = 1 family of a piece."""
    return range(piece.nodes, piece.unknowns, piece.nodes + piece.mesh.elements)


def _add_nodal(total: Complexes, piece: Piece, row: int, parts: Complexes) -> None:
    """Add element matrices (E, 2, 2) to the nodes that start at `row`."""
    count = piece.mesh.elements
    index = np.arange(count)
    for i in (0, 1):
        for j in (0, 1):
            keep = (index + i < piece.nodes) & (index + j < piece.nodes)
            total[row + index[keep] + i, row + index[keep] + j] += parts[keep, i, j]


def _add_loss(total: Complexes, piece: Piece, frequency_hz: float) -> None:
    """Add the surface impedance: exact round form along the conductor, flat form on ends and round it."""
    mesh, sigma = piece.mesh, piece.conductor.conductivity_s_m
    if math.isinf(sigma):
        return
    flat = surface_impedance_ohm(sigma, frequency_hz)
    places, weights = gauss_unit(6)
    hats = np.array([1.0 - places, places])
    radius = mesh.radius_m[:, :1] + (mesh.radius_m[:, 1:] - mesh.radius_m[:, :1]) * places
    sizes, which = np.unique(mesh.radius_m[~mesh.cap, 0], return_inverse=True)
    along = np.zeros(mesh.elements, dtype=np.complex128)
    along[~mesh.cap] = np.array([round_impedance_ohm_m(float(a), sigma, frequency_hz) for a in sizes])[which]
    per_length = np.where(mesh.cap[:, None], flat / (2.0 * math.pi * radius), along[:, None])
    weighted = 2.0 * per_length * weights * mesh.size_m[:, None]
    _add_nodal(total, piece, 0, np.einsum("eq,iq,jq->eij", weighted, hats, hats))
    count = mesh.elements
    for row in _families(piece):
        varying = 2.0 * flat / (4.0 * math.pi * radius) * weights * mesh.size_m[:, None]
        _add_nodal(total, piece, row, np.einsum("eq,iq,jq->eij", varying, hats, hats))
        elements = row + piece.nodes + np.arange(count)
        total[elements, elements] += 2.0 * flat * (radius @ weights) * mesh.size_m / (4.0 * math.pi)


def _add_proximity(total: Complexes, piece: Piece, folded: Folded, wavenumber_rad_m: float) -> None:
    """Add what the facing sides of a folded dipole do to one another beyond m = 0, as two long parallel wires do.

    A wire of radius b at distance d from a line charge or current takes a dipole moment that lowers the line's own
    potential as if its logarithm of distance over radius were less by (b / d)^2; the next term is its square.
    """
    mesh = piece.mesh
    other_m = folded.radius_m if folded.other_radius_m is None else folded.other_radius_m
    facing = (mesh.bend_rad_m == 0.0) & (np.abs(mesh.tangent[:, 1]) > 0.5)
    second = mesh.tangent[:, 1] < 0.0
    radius = np.where(second, folded.radius_m, other_m)
    change = np.where(facing, -2.0 * (radius / folded.spacing_m) ** 2, 0.0)
    hats, slopes = np.array([[2.0, 1.0], [1.0, 2.0]]) / 6.0, np.array([[1.0, -1.0], [-1.0, 1.0]])
    size = mesh.size_m[:, None, None]
    parts = change[:, None, None] * (size * hats - slopes / (size * wavenumber_rad_m**2))
    _add_nodal(total, piece, 0, parts.astype(np.complex128))


def _add_coat(total: Complexes, piece: Piece, frequency_hz: float) -> None:
    """Add the sheath's elastance to the charge of every element along the conductor."""
    mesh, coat = piece.mesh, piece.conductor.coat
    if coat is None or coat.thickness_m <= 0.0:
        return
    omega = 2.0 * math.pi * frequency_hz
    size = mesh.size_m
    elastance = np.array([coat_elastance_m_f(coat, float(a)) for a in mesh.radius_m[:, 0]])
    per_element = np.where(mesh.cap, 0.0, 2.0 * elastance / (1j * omega * size))
    slopes = np.array([[1.0, -1.0], [-1.0, 1.0]])
    _add_nodal(total, piece, 0, per_element[:, None, None] * slopes)
    index = np.arange(mesh.elements)
    for row in _families(piece):
        half = per_element / 2.0
        _add_nodal(total, piece, row, half[:, None, None] * slopes)
        elements = row + piece.nodes + index
        total[elements, elements] += half * size**2
        for end, sign in ((0, -1.0), (1, 1.0)):
            keep = index + end < piece.nodes
            nodes = row + index[keep] + end
            total[nodes, elements[keep]] += sign * (half * size)[keep]
            total[elements[keep], nodes] += sign * (half * size)[keep]
