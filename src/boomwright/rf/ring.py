"""A closed conductor's action on itself: neighbours along the chord, facing sides closely, the rest by rings."""

from __future__ import annotations

import numpy as np

from boomwright.rf.arrays import Complexes, Floats, Integers
from boomwright.rf.azimuth import Surface, surface_coupling
from boomwright.rf.coupling import MIRROR_SIGNS, Samples, contracted, quadrature_points, ring_kernels, straight_runs
from boomwright.rf.kernels import averaged_kernel
from boomwright.rf.mesh import Mesh, rings
from boomwright.rf.own import OwnAction, block, nodal
from boomwright.rf.pairs import FAR_SIZES, element_gaps
from boomwright.rf.quadrature import smooth_rule

CHORD_RADII, CHORD_RADII_SURFACE, COAXIAL_RADII = 4.0, 2.5, 12.0
CLOSE_POINTS_MAX = 40

Mask = np.ndarray[tuple[int, ...], np.dtype[np.bool_]]


class RingAction:
    """Integrals of a closed conductor with itself and its image, prepared once, taken at any wavenumber."""

    def __init__(self, mesh: Mesh, samples: Samples | None, surface: Surface | None, families: int) -> None:
        self.mesh, self.samples, self.surface, self.families = mesh, samples, surface, families
        chord_radii = CHORD_RADII if surface is None else CHORD_RADII_SURFACE
        near = np.array([_near(mesh, mirrored, chord_radii) for mirrored in (False, True)])
        self.chord = OwnAction(mesh, surface is not None, near)
        self.close: list[tuple[bool, Integers, Integers, Integers]] = []
        taken = near.copy()
        if surface is None:
            for mirrored in (False, True):
                gap, size = element_gaps(mesh, mirrored)
                close = (gap < FAR_SIZES * size) & ~near[int(mirrored)]
                taken[int(mirrored)] |= close
                first, second = np.nonzero(close)
                points = np.ceil(2.0 * size[close] / np.maximum(gap[close], 1e-3 * size[close])) + 3.0
                self.close.append((mirrored, first, second, np.minimum(points, CLOSE_POINTS_MAX).astype(np.int64)))
        element = quadrature_points(mesh)[0]
        grid = np.ix_(element, element)
        self.apart = (~taken[0][grid], ~taken[1][grid])

    def block(self, wavenumber_rad_m: float) -> Complexes:
        """Matrix of the conductor in its basis, without the common factor of `impedance`; (U, U)."""
        moments = self.chord.static
        if self.surface is None:
            moments = moments.plus(self.chord.dynamic(wavenumber_rad_m))
        total = block(self.mesh, moments, wavenumber_rad_m, self.families)
        if self.surface is not None:
            total += surface_coupling(self.surface, self.surface, wavenumber_rad_m, self.families == 1, self.apart)
        elif self.samples is not None:
            count = self.mesh.elements
            current = np.zeros((count, count, 2, 2), dtype=np.complex128)
            charge = np.zeros((count, count), dtype=np.complex128)
            for mirrored, first, second, points in self.close:
                for number in np.unique(points):
                    chosen = points == number
                    pairs = (mirrored, first[chosen], second[chosen], int(number))
                    self._add_close(pairs, wavenumber_rad_m, current, charge)
            total += nodal(current, charge / wavenumber_rad_m**2)
            direct, image = ring_kernels(self.samples, self.samples, wavenumber_rad_m)
            direct[~self.apart[0]] = 0.0
            image[~self.apart[1]] = 0.0
            total += contracted(self.samples, self.samples, (direct, image), wavenumber_rad_m)
        symmetric: Complexes = (total + total.T) / 2.0
        return symmetric

    def _add_close(
        self,
        pairs: tuple[bool, Integers, Integers, int],
        wavenumber_rad_m: float,
        current: Complexes,
        charge: Complexes,
    ) -> None:
        """Add pairs that face each other nearer than the far rule allows, with as many points as that takes."""
        mirrored, p, q, count = pairs
        rule = smooth_rule(count)
        one, two = rings(self.mesh, p[:, None], rule.first), rings(self.mesh, q[:, None], rule.second)
        flip = np.array([1.0, -1.0 if mirrored else 1.0, 1.0])
        tangent = two.tangent * (np.array(MIRROR_SIGNS) if mirrored else 1.0)
        across = one.centre - two.centre * flip
        distance: Floats = np.sqrt((across**2).sum(axis=-1))
        along = ((across * one.tangent).sum(axis=-1) / distance, (across * tangent).sum(axis=-1) / distance)
        kernel = averaged_kernel(distance, wavenumber_rad_m, along, (one.radius_m, two.radius_m))
        weights = rule.moments
        hats = (kernel * (one.tangent * tangent).sum(axis=-1)) @ weights[:4].T
        lengths = self.mesh.travel_m
        current[p, q] += (lengths[p] * lengths[q])[:, None, None] * hats.reshape(-1, 2, 2)
        charge[p, q] += (-1.0 if mirrored else 1.0) * (kernel @ weights[4])


def _near(mesh: Mesh, mirrored: bool, chord_radii: float) -> Mask:
    """Pairs of elements close to one another along the axis, across the mirror plane too; (E, E)."""
    travel = np.concatenate([[0.0], np.cumsum(mesh.travel_m)])
    start, end, total = travel[:-1], travel[1:], travel[-1]
    if mirrored:
        along = np.minimum(start[:, None] + start[None, :], (total - end)[:, None] + (total - end)[None, :])
    else:
        along = np.maximum(start[:, None], start[None, :]) - np.minimum(end[:, None], end[None, :])
    radius = mesh.radius_m[:, 0]
    run = np.zeros(mesh.elements, dtype=np.int64)
    for number, (first, last) in enumerate(straight_runs(mesh)):
        run[first:last] = number
    same = run[:, None] == run[None, :]
    if mirrored:
        # Runs go straight on across the mirror plane at the feed and opposite it, nowhere else.
        same &= np.isin(run, (run[0], run[-1]))[None, :] & (mesh.bend_rad_m == 0.0)[None, :]
    reach = np.where(same, COAXIAL_RADII, chord_radii) * np.maximum(radius[:, None], radius[None, :])
    size = np.maximum(mesh.size_m[:, None], mesh.size_m[None, :])
    index = np.arange(mesh.elements)
    touching = np.abs(index[:, None] - index[None, :]) <= (-1 if mirrored else 1)
    if mirrored:
        touching[0, 0] = touching[-1, -1] = True
    near: Mask = (along < reach) | (along < 0.5 * size) | touching
    return near
