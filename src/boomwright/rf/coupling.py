"""Action of one conductor on another, rings apart: sampled at a few rings an element, averaged over both azimuths.

Thin conductors use the average in closed form (`kernels.averaged_kernel`).
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np

from boomwright.rf.arrays import Complexes, Floats, Integers
from boomwright.rf.kernels import averaged_kernel
from boomwright.rf.mesh import Mesh, rings
from boomwright.rf.quadrature import gauss_unit

MIRROR_SIGNS = (-1.0, 1.0, -1.0)
"""Signs of the x, y and z components of a current's mirror image in y = 0; its charge changes sign."""

SMALL_ELEMENT = 0.35


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
    """Element, place and weight of every sample: two an element, one on elements small beside the largest."""
    size = mesh.size_m
    small = size < SMALL_ELEMENT * size.max()
    places, weights = gauss_unit(2)
    index = np.arange(mesh.elements)
    element = np.concatenate([index[small], np.repeat(index[~small], 2)])
    place = np.concatenate([np.full(small.sum(), 0.5), np.tile(places, (~small).sum())])
    weight = np.concatenate([np.ones(small.sum()), np.tile(weights, (~small).sum())])
    return element, place, weight


def hat_values(mesh: Mesh, element: Integers, place: Floats) -> tuple[Floats, Floats]:
    """Value and slope (times element size) of every nodal basis function at given places, each (nodes kept, Q)."""
    keep = mesh.elements + (1 if mesh.closed else 0)
    column = np.arange(len(element))
    value = np.zeros((mesh.elements + 1, len(element)))
    slope = np.zeros_like(value)
    value[element, column], value[element + 1, column] = 1.0 - place, place
    slope[element, column], slope[element + 1, column] = -1.0, 1.0
    return value[:keep], slope[:keep]


def sample(mesh: Mesh) -> Samples:
    """Samples of a thin conductor (harmonic m = 0); the radial current of end faces has no mean moment."""
    element, place, weight = quadrature_points(mesh)
    value, slope = hat_values(mesh, element, place)
    at = rings(mesh, element, place)
    length = value * (weight * mesh.travel_m[element])
    moments: list[Floats | None] = []
    for axis in range(3):
        component = length * at.tangent[:, axis]
        moments.append(component if component.any() else None)
    return Samples(at.centre, at.tangent, at.radius_m, (moments[0], moments[1], moments[2]), slope * weight)


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
