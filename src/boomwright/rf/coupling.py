"""Action of one conductor on another, rings apart: sampled at a few rings an element, averaged over both azimuths.

Thin conductors use the average in closed form (`kernels.averaged_kernel`).
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import cached_property

import numpy as np

from boomwright.rf.arrays import Complexes, Floats, Integers
from boomwright.rf.kernels import averaged_kernel
from boomwright.rf.mesh import Mesh, plain_shapes, rings
from boomwright.rf.quadrature import gauss_unit, interpolation

MIRROR_SIGNS = (-1.0, 1.0, -1.0)
"""Signs of the x, y and z components of a current's mirror image in y = 0; its charge changes sign."""

PLACES_DECAY = 11.0
LEAST_PLACES = 2
EVERY_POINT = 1_000_000


@dataclass(frozen=True)
class Samples:
    """Rings of a conductor at its quadrature points, and what each basis function carries there; Q points, U unknowns.

    centre, tangent   (Q, 3); radius_m (Q,)
    current           moment of each basis function along x, y, z [m], three (U, Q) or None where all are 0
    charge            (U, Q)
    """

    centre: Floats
    tangent: Floats
    radius_m: Floats
    current: tuple[Floats | None, Floats | None, Floats | None]
    charge: Floats

    @cached_property
    def straight(self) -> bool:
        """True where every ring's axis is along y."""
        return bool((self.tangent[:, 1] == 1.0).all())


def quadrature_points(mesh: Mesh) -> tuple[Integers, Floats, Floats]:
    """Element, place and weight of two samples an element, (2 N,) each."""
    places, weights = gauss_unit(2)
    return np.repeat(np.arange(mesh.elements), 2), np.tile(places, mesh.elements), np.tile(weights, mesh.elements)


def hat_values(mesh: Mesh, element: Integers, place: Floats, plain: bool = True) -> tuple[Floats, Floats]:
    """Value and slope (times element size) of every nodal basis function at given places, each (nodes kept, Q).

    plain  True: those of m = 0 (`plain_shapes`), False: linear everywhere, as m = 1 has them
    """
    keep = mesh.elements + (1 if mesh.closed else 0)
    column = np.arange(len(element))
    value = np.zeros((mesh.elements + 1, len(element)))
    slope = np.zeros_like(value)
    (start, end), charge = plain_shapes(mesh, element, place) if plain else ((1.0 - place, place), np.ones(len(place)))
    value[element, column], value[element + 1, column] = start, end
    slope[element, column], slope[element + 1, column] = -charge, charge
    return value[:keep], slope[:keep]


@dataclass(frozen=True)
class Places:
    """Where a conductor is sampled: element and place on it (Q,), and the share of every fine point in each (F, Q)."""

    element: Integers
    place: Floats
    shares: Floats


def sampling_places(mesh: Mesh, nearest_m: float) -> Places:
    """Few enough places for the distance [m] of the nearest other conductor (0: every quadrature point).

    Along a straight run the field of another conductor is smooth: it is sampled at Gauss points of the whole run, as
    many as a singularity at that distance asks for, and interpolated to the elements.
    """
    element, place, _ = quadrature_points(mesh)
    elements, places, shares = [], [], []
    for first, last in straight_runs(mesh):
        inside = np.flatnonzero((element >= first) & (element < last))
        ends = np.concatenate([[0.0], np.cumsum(mesh.size_m[first:last])])
        count = places_needed(ends[-1], nearest_m)
        part = np.zeros((len(element), min(count, len(inside))))
        if count < len(inside):
            coarse = gauss_unit(count)[0] * ends[-1]
            fine = ends[element[inside] - first] + place[inside] * mesh.size_m[element[inside]]
            part[inside] = interpolation(coarse, fine)
            owner = np.clip(np.searchsorted(ends, coarse, side="right") - 1, 0, last - first - 1)
            elements.append(owner + first)
            places.append((coarse - ends[owner]) / mesh.size_m[owner + first])
        else:
            part[inside, np.arange(len(inside))] = 1.0
            elements.append(element[inside])
            places.append(place[inside])
        shares.append(part)
    return Places(np.concatenate(elements), np.concatenate(places), np.concatenate(shares, axis=1))


def straight_runs(mesh: Mesh) -> list[tuple[int, int]]:
    """First and one past the last element of every straight run; each element of a bend is a run of its own."""
    bent, cap = mesh.bend_rad_m != 0.0, mesh.cap
    same_radius = mesh.radius_m[1:, 0] == mesh.radius_m[:-1, 0]
    same_direction = (mesh.tangent[1:] * mesh.tangent[:-1]).sum(axis=1) > 1.0 - 1e-12
    together = (cap[1:] == cap[:-1]) & ~bent[1:] & ~bent[:-1] & same_direction & (cap[1:] | same_radius)
    starts = [0, *(int(i) + 1 for i in np.flatnonzero(~together))]
    return list(zip(starts, [*starts[1:], mesh.elements], strict=True))


def places_needed(length_m: float, nearest_m: float) -> int:
    """Gauss points on a run of a length [m] that resolve a singularity at a distance [m] from it."""
    if nearest_m <= 0.0:
        return EVERY_POINT
    reach = 4.0 * nearest_m / length_m if math.isfinite(nearest_m) else 1e3
    decay = math.asinh(min(reach, 1e3))
    return math.ceil(PLACES_DECAY / decay) + LEAST_PLACES


def sample(mesh: Mesh, nearest_m: float = 0.0) -> Samples:
    """Samples of a thin conductor (harmonic m = 0) for others at least `nearest_m` away; 0 = all quadrature points.

    The radial current of end faces has no mean moment.
    """
    element, place, weight = quadrature_points(mesh)
    value, slope = hat_values(mesh, element, place)
    chosen = sampling_places(mesh, nearest_m)
    at = rings(mesh, chosen.element, chosen.place)
    length = (value * (weight * mesh.travel_m[element])) @ chosen.shares
    moments: list[Floats | None] = []
    for axis in range(3):
        component = length * at.tangent[:, axis]
        moments.append(component if component.any() else None)
    current = (moments[0], moments[1], moments[2])
    return Samples(at.centre, at.tangent, at.radius_m, current, (slope * weight) @ chosen.shares)


def mirrored(samples: Samples) -> tuple[Floats, Floats]:
    """Centres and axes of the rings' mirror images in y = 0, each (Q, 3)."""
    flip = np.array([1.0, -1.0, 1.0])
    return samples.centre * flip, samples.tangent * -flip


def ring_kernels(first: Samples, second: Samples, wavenumber_rad_m: float) -> tuple[Complexes, Complexes]:
    """Averaged kernel between all rings of two conductors, and of the first with the second's image; (Q1, Q2) each."""
    images = mirrored(second)
    result = []
    for centre, tangent in ((second.centre, second.tangent), images):
        across = [first.centre[:, None, axis] - centre[None, :, axis] for axis in range(3)]
        distance = np.sqrt(across[0] ** 2 + across[1] ** 2 + across[2] ** 2)
        np.maximum(distance, 1e-12, out=distance)
        if first.straight and second.straight:
            cosine = across[1] / distance
            along = (cosine, cosine)
        else:
            along = (
                sum(across[i] * first.tangent[:, None, i] for i in range(3)) / distance,
                sum(across[i] * tangent[None, :, i] for i in range(3)) / distance,
            )
        radii = (first.radius_m[:, None], second.radius_m[None, :])
        result.append(averaged_kernel(distance, wavenumber_rad_m, along, radii))
    return result[0], result[1]


def contracted(
    first: Samples, second: Samples, kernels: tuple[Complexes, Complexes], wavenumber_rad_m: float
) -> Complexes:
    """Matrix block (U1, U2) from sampled kernels, without the common factor of `impedance`."""
    direct, image = kernels
    inverse = 1.0 / wavenumber_rad_m**2
    total = -inverse * _sandwich(first.charge, direct - image, second.charge)
    for sign, left, right in zip(MIRROR_SIGNS, first.current, second.current, strict=True):
        if left is not None and right is not None:
            total += _sandwich(left, direct + image if sign > 0.0 else direct - image, right)
    return total


def _sandwich(left: Floats, middle: Complexes, right: Floats) -> Complexes:
    """left @ middle @ right.T with real outer factors."""
    result = np.empty((left.shape[0], right.shape[0]), dtype=np.complex128)
    result.real = left @ middle.real @ right.T
    result.imag = left @ middle.imag @ right.T
    return result


def coupling(first: Samples, second: Samples, wavenumber_rad_m: float) -> Complexes:
    """Matrix block (U1, U2) of two thin conductors at k [rad/m], the second one's mirror image included."""
    return contracted(first, second, ring_kernels(first, second, wavenumber_rad_m), wavenumber_rad_m)
