"""Action of thick or close conductors on one another: current that varies round the circumference, m = 0 and +-1.

Each ring carries azimuth points; the plain kernel between points is first contracted with the few azimuth functions
that occur, then with the basis functions along the conductor [Mautz1969]. Azimuth runs from a ring's in-plane normal.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TypeAlias

import numpy as np

from boomwright.rf.arrays import Complexes, Floats
from boomwright.rf.coupling import MIRROR_SIGNS, hat_values, quadrature_points, sampling_places
from boomwright.rf.kernels import spherical_wave, wave_rest
from boomwright.rf.mesh import Mesh, rings

ONE, COS, SIN, COS_COS, SIN_COS = range(5)
"""The azimuth functions that occur: 1, cos, sin, cos squared, sin cos."""


Parts: TypeAlias = tuple[dict[int, Floats], ...]
"""Moments along a ring's tangent, normal and aside, each by azimuth function, (rows, Q)."""


@dataclass(frozen=True)
class Moment:
    """One component of what all basis functions carry: azimuth functions (F of them), values (U, F * Q)."""

    functions: tuple[int, ...]
    values: Floats

    def of(self, currents: Complexes) -> Complexes:
        """The component for solved unknowns (U,): coefficients of the azimuth functions, (F, Q)."""
        return (currents @ self.values).reshape(len(self.functions), -1)


@dataclass(frozen=True)
class Surface:
    """A conductor's surface at its quadrature rings; Q rings, A azimuths, U unknowns.

    centre, tangent, normal, aside  (Q, 3), the last three a right-handed set of unit vectors up to sign of `aside`
    radius_m                        (Q,)
    azimuths                        number of points round each ring
    current, charge                 moments along x, y, z [m], and the charge
    unknowns                        U: m = 0 nodes, then for each family m = 1 nodes and elements
    """

    centre: Floats
    normal: Floats
    aside: Floats
    radius_m: Floats
    azimuths: int
    current: tuple[Moment, ...]
    charge: Moment
    unknowns: int

    def points(self, half: bool = False) -> Floats:
        """Points on the surface, (Q, A, 3), or those with azimuth below 180 degrees, (Q, A / 2, 3)."""
        angle = azimuth_angles(self.azimuths)[: self.azimuths // 2 if half else None]
        spoke = np.cos(angle)[:, None] * self.normal[:, None, :] + np.sin(angle)[:, None] * self.aside[:, None, :]
        points: Floats = self.centre[:, None, :] + self.radius_m[:, None, None] * spoke
        return points


def azimuth_angles(count: int) -> Floats:
    """Evenly spread azimuths [rad], symmetric about 0, (count,)."""
    return np.linspace(0.0, 2.0 * np.pi, count, endpoint=False) + np.pi / count


def azimuth_functions(count: int, half: bool = False) -> Floats:
    """The functions at the azimuths, divided by their number, (5, count); half: those below 180 degrees, doubled."""
    angle = azimuth_angles(count)
    c, s = np.cos(angle), np.sin(angle)
    table: Floats = np.array([np.ones(count), c, s, c * c, s * c]) / count
    return 2.0 * table[:, : count // 2] if half else table


def surface(mesh: Mesh, azimuths: int, families: int, nearest_m: float = 0.0) -> Surface:
    """Surface samples of a conductor.

    azimuths   points round each ring, even
    families   1: cosine only (everything symmetric about the conductor's plane), 2: cosine and sine
    nearest_m  distance from this surface to any other [m]; 0 = all quadrature points
    """
    element, place, weight = quadrature_points(mesh)
    value, slope = hat_values(mesh, element, place)
    chosen = sampling_places(mesh, nearest_m)
    at = rings(mesh, chosen.element, chosen.place)
    aside = np.cross(at.tangent, at.normal) * -1.0
    size = mesh.size_m
    along = (mesh.travel_m / size)[chosen.element]
    outward = ((mesh.radius_m[:, 1] - mesh.radius_m[:, 0]) / size)[chosen.element]
    span = weight * size[element]
    crowd = mesh.bend_rad_m[chosen.element] * at.radius_m
    keep, column = len(value), np.arange(len(element))
    inside = np.zeros((mesh.elements, len(element)))
    inside[element, column] = span
    inside = inside @ chosen.shares
    hats, slopes = (value * span) @ chosen.shares, (slope * weight) @ chosen.shares
    charge = [(0, {ONE: slopes})]
    unknowns = keep + families * (keep + mesh.elements)
    local: list[tuple[int, Parts]] = [
        (0, ({ONE: hats * along, COS: -hats * along * crowd}, {COS: hats * outward}, {SIN: hats * outward}))
    ]
    value, slope = hat_values(mesh, element, place, plain=False)
    hats, slopes = (value * span) @ chosen.shares, (slope * weight) @ chosen.shares
    for family in range(families):
        row = keep + family * (keep + mesh.elements)
        lengthwise, around = _varying(hats * along, hats * outward, inside * at.radius_m, family)
        lengthwise[0][COS_COS if family == 0 else SIN_COS] = -hats * along * crowd
        local += [(row, lengthwise), (row + keep, around)]
        function = COS if family == 0 else SIN
        charge += [(row, {function: slopes}), (row + keep, {function: inside})]
    frame = (at.tangent, at.normal, aside)
    current = tuple(_moment(_along(local, frame, axis), unknowns) for axis in range(3))
    return Surface(at.centre, at.normal, aside, at.radius_m, azimuths, current, _moment(charge, unknowns), unknowns)


def _varying(along: Floats, outward: Floats, around: Floats, family: int) -> tuple[Parts, Parts]:
    """Moments of m = 1: of the current along the generating curve, and of that round the ring.

    family  0: T cos(phi) with P sin(phi), 1: T sin(phi) with -P cos(phi)
    """
    if family == 0:
        return (
            ({COS: along}, {COS_COS: outward}, {SIN_COS: outward}),
            ({}, {COS_COS: around, ONE: -around}, {SIN_COS: around}),
        )
    return (
        ({SIN: along}, {SIN_COS: outward}, {ONE: outward, COS_COS: -outward}),
        ({}, {SIN_COS: around}, {COS_COS: -around}),
    )


def _along(local: list[tuple[int, Parts]], frame: tuple[Floats, ...], axis: int) -> list[tuple[int, dict[int, Floats]]]:
    """Moments in the rings' own frames turned into one component, by first row and azimuth function."""
    turned = []
    for row, moments in local:
        gathered: dict[int, Floats] = {}
        for vector, parts in zip(frame, moments, strict=True):
            for function, values in parts.items():
                part = values * vector[:, axis]
                gathered[function] = gathered[function] + part if function in gathered else part
        turned.append((row, gathered))
    return turned


def _moment(parts: list[tuple[int, dict[int, Floats]]], unknowns: int) -> Moment:
    """Parts gathered over all unknowns; azimuth functions that carry nothing are left out."""
    found = sorted({function for _, terms in parts for function, values in terms.items() if values.any()})
    columns = next(iter(parts[0][1].values())).shape[1]
    total = np.zeros((unknowns, len(found), columns))
    for row, terms in parts:
        for function, values in terms.items():
            if function in found:
                total[row : row + len(values), found.index(function)] += values
    return Moment(tuple(found), total.reshape(unknowns, -1))


PointMask = np.ndarray[tuple[int, ...], np.dtype[np.bool_]]


def surface_coupling(
    first: Surface,
    second: Surface,
    wavenumber_rad_m: float,
    half: bool,
    apart: tuple[PointMask, PointMask] | None = None,
) -> Complexes:
    """Matrix block (U1, U2) between two surfaces, the second one's mirror image in y = 0 included.

    half   True: all is symmetric about z = 0, and the first one's azimuths below 180 degrees stand for the rest
    apart  (Q1, Q2) masks of the pairs of rings that are apart, direct and image; default all. Of the others only the
           smooth rest of the wave over its static part counts, which points take as well

    Returns the block without the common factor of `impedance`.
    """
    own = first.points(half)
    weights = azimuth_functions(first.azimuths, half), azimuth_functions(second.azimuths)
    tables = []
    for number, flip in enumerate((1.0, -1.0)):
        other = second.points() * np.array([1.0, flip, 1.0])
        wave = spherical_wave(_distances(own, other), wavenumber_rad_m)
        if apart is not None:
            near = np.broadcast_to(~apart[number][:, None, :, None], wave.shape)
            wave[near] = wave_rest(_distances(own, other)[near], wavenumber_rad_m)
        tables.append(wave)
    plus = _contracted(tables[0] + tables[1], weights)
    minus = _contracted(tables[0] - tables[1], weights)
    total = np.zeros((first.unknowns, second.unknowns), dtype=np.complex128)
    for sign, left, right in zip(MIRROR_SIGNS, first.current, second.current, strict=True):
        _add(total, left, plus if sign > 0.0 else minus, right, 1.0)
    _add(total, first.charge, minus, second.charge, -1.0 / wavenumber_rad_m**2)
    return total


def _distances(first: Floats, second: Floats) -> Floats:
    """Distances between points (Q1, A1, 3) and (Q2, A2, 3), as (Q1, A1, Q2, A2); never 0."""
    squared = np.zeros((*first.shape[:2], *second.shape[:2]))
    for axis in range(3):
        across = first[:, :, None, None, axis] - second[None, None, :, :, axis]
        across *= across
        squared += across
    np.maximum(squared, 1e-24, out=squared)
    return np.sqrt(squared, out=squared)


def _contracted(waves: Complexes, weights: tuple[Floats, Floats]) -> Complexes:
    """Azimuths contracted with the azimuth functions: (5, Q1, 5, Q2)."""
    rings_first, _, rings_second, points = waves.shape
    inner = waves.reshape(-1, points) @ weights[1].T.astype(np.complex128)
    inner = inner.reshape(rings_first, -1, rings_second * 5).transpose(1, 0, 2).reshape(weights[0].shape[1], -1)
    outer = weights[0].astype(np.complex128) @ inner
    return outer.reshape(5, rings_first, rings_second, 5).transpose(0, 1, 3, 2)


def _add(total: Complexes, left: Moment, kernels: Complexes, right: Moment, scale: float) -> None:
    """Add scale * left @ kernel @ right.T to the block."""
    if not left.functions or not right.functions:
        return
    kernel = kernels[list(left.functions)][:, :, list(right.functions)]
    kernel = kernel.reshape(left.values.shape[1], right.values.shape[1])
    turned = scale * right.values.T
    total.real += left.values @ kernel.real @ turned
    total.imag += left.values @ kernel.imag @ turned
