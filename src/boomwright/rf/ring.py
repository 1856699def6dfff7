"""A closed conductor's action on itself: neighbours along the chord, facing sides closely sampled, the rest by rings."""

from __future__ import annotations

import math

import numpy as np

from boomwright.rf.arrays import Complexes, Floats
from boomwright.rf.coupling import (
    MIRROR_SIGNS,
    Samples,
    contracted,
    quadrature_points,
    ring_kernels,
    sample,
)
from boomwright.rf.kernels import averaged_kernel
from boomwright.rf.mesh import Mesh, rings
from boomwright.rf.own import FAR_SIZES, Moments, OwnAction, _gaps, nodal
from boomwright.rf.quadrature import smooth_rule

CHORD_RADII = 4.0
CLOSE_POINTS_MAX = 40

Mask = np.ndarray[tuple[int, ...], np.dtype[np.bool_]]


class RingAction:
    """Integrals of a closed thin conductor with itself and its image."""

    def __init__(self, mesh: Mesh, azimuthal: bool = False) -> None:
        self.mesh = mesh
        gaps = [_gaps(mesh, mirrored) for mirrored in (False, True)]
        near = np.array([self._near(mirrored) for mirrored in (False, True)])
        self.chord = OwnAction(mesh, azimuthal, near)
        close = np.array([gap < FAR_SIZES * size for gap, size in gaps]) & ~near
        self.close = [
            (mirrored, *np.nonzero(close[int(mirrored)] & (gaps[int(mirrored)][0] > 0))) for mirrored in (False, True)
        ]
        self.gaps = gaps
        self.samples: Samples = sample(mesh)
        element = quadrature_points(mesh)[0]
        taken = near | close
        self.apart = [~taken[m][np.ix_(element, element)] for m in (0, 1)]

    def _near(self, mirrored: bool) -> Mask:
        """Pairs of elements close to one another along the axis, across the mirror plane too."""
        travel = np.concatenate([[0.0], np.cumsum(self.mesh.travel_m)])
        start, end, total = travel[:-1], travel[1:], travel[-1]
        if not mirrored:
            along = np.maximum(start[:, None], start[None, :]) - np.minimum(end[:, None], end[None, :])
        else:
            along = np.minimum(
                start[:, None] + start[None, :], (total - end)[:, None] + (total - end)[None, :]
            )
        reach = CHORD_RADII * np.maximum(self.mesh.radius_m[:, 0][:, None], self.mesh.radius_m[:, 0][None, :])
        size = np.maximum(self.mesh.size_m[:, None], self.mesh.size_m[None, :])
        index = np.arange(self.mesh.elements)
        touching = np.abs(index[:, None] - index[None, :]) <= (-1 if mirrored else 1)
        if mirrored:
            touching[0, 0] = touching[-1, -1] = True
        near: Mask = (along < reach) | (along < 0.5 * size) | touching
        return near

    def block(self, wavenumber_rad_m: float) -> Complexes:
        """Matrix of the conductor in its nodal basis, without the common factor of `impedance`; (U, U)."""
        moments: Moments = self.chord.static.plus(self.chord.dynamic(wavenumber_rad_m))
        inverse = 1.0 / wavenumber_rad_m**2
        current = np.array(moments.current0, dtype=np.complex128)
        charge = np.array(moments.charge0, dtype=np.complex128)
        for mirrored, first, second in self.close:
            self._add_close(mirrored, first, second, wavenumber_rad_m, current, charge)
        total = nodal(current, charge * inverse)
        direct, image = ring_kernels(self.samples, self.samples, wavenumber_rad_m)
        direct[~self.apart[0]] = 0.0
        image[~self.apart[1]] = 0.0
        total += contracted(self.samples, self.samples, (direct, image), wavenumber_rad_m)
        return (total + total.T) / 2.0

    def _add_close(
        self,
        mirrored: bool,
        first: np.ndarray[tuple[int, ...], np.dtype[np.int64]],
        second: np.ndarray[tuple[int, ...], np.dtype[np.int64]],
        wavenumber_rad_m: float,
        current: Complexes,
        charge: Complexes,
    ) -> None:
        """Add the pairs that face each other nearer than the far rule allows, with as many points as that takes."""
        gap, size = self.gaps[int(mirrored)]
        counts = np.minimum(np.ceil(2.0 * size[first, second] / gap[first, second]) + 3, CLOSE_POINTS_MAX)
        lengths = self.mesh.travel_m
        for count in np.unique(counts):
            p, q = first[counts == count], second[counts == count]
            rule = smooth_rule(int(count))
            one, two = rings(self.mesh, p[:, None], rule.first), rings(self.mesh, q[:, None], rule.second)
            flip = np.array([1.0, -1.0 if mirrored else 1.0, 1.0])
            signs = np.array(MIRROR_SIGNS) if mirrored else np.ones(3)
            across = one.centre - two.centre * flip
            distance: Floats = np.sqrt((across**2).sum(axis=-1))
            tangent = two.tangent * signs
            cosines = tuple((across * t).sum(axis=-1) / distance for t in (one.tangent, tangent))
            kernel = averaged_kernel(
                distance, wavenumber_rad_m, (cosines[0], cosines[1]), (one.radius_m, two.radius_m)
            )
            weights = rule.moments()
            hats = (kernel * (one.tangent * tangent).sum(axis=-1)) @ weights[:4].T
            current[p, q] += (lengths[p] * lengths[q])[:, None, None] * hats.reshape(-1, 2, 2)
            charge[p, q] += (-1.0 if mirrored else 1.0) * (kernel @ weights[4])


def clearance_needed_m(mesh: Mesh) -> float:
    """Largest element of the mesh [m], the scale that decides how closely a neighbour is sampled."""
    return float(np.max(mesh.travel_m)) if mesh.elements else math.inf
