"""A conductor's action on itself and on its own mirror image: rings on one axis, elements singly, adjacent and apart.

Every pair of elements is integrated with a rule made for it; the static part depends on the shape alone and is kept,
the dynamic rest is smooth. Along a bend, rings close to one another act as if their axis ran along the chord.
Harmonic m = 0 always; m = 1 on request [Mautz1969]: with t along the generating curve and rho the ring's radius,

    J_t = T(t) cos(phi) / (2 pi rho),  J_phi = P(t) sin(phi) / (2 pi),  charge ~ (T' + P) cos(phi) / (2 pi rho),

T linear and P constant on an element, so that the charge is constant too. Means over both azimuths leave the ring
harmonics g0, g1, g2 of the kernel: T with T along the axis and charge with charge g1 / 2, P with P and radial T with
radial T (g0 + g2) / 4, radial T with P (g2 - g0) / 4. For m = 0: along the axis and charge g0, radial g1
[Harrington1968].
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from boomwright.rf.arrays import Complexes, Floats, Numbers
from boomwright.rf.kernels import dynamic_ring_kernels, static_ring_kernels
from boomwright.rf.mesh import Mesh, Rings, plain_shapes, radius_at, rings
from boomwright.rf.pairs import PairSet, pair_sets
from boomwright.rf.quadrature import smooth_rule

AZIMUTHS_PLAIN = 2
AZIMUTHS_FULL = 5

EXCHANGED = [0, 2, 1, 3, 4, 5, 7, 6, 8, 9, 10, 13, 14, 11, 12]
"""Rows of `PairGeometry.plain` and `.varying` when the elements of a pair change places."""

Harmonics = tuple[Numbers, Numbers, Numbers]


@dataclass(frozen=True)
class Moments:
    """Integrals over all pairs of elements, mirror image included with its signs; E = elements.

    current0, charge0              m = 0: products of hats (E, E, 2, 2) and constants (E, E)
    current1, charge1              m = 1, the same for the part along the generating curve
    around1, mixed1                m = 1: azimuthal-azimuthal (E, E), hats with azimuthal (E, E, 2)
    """

    current0: Numbers
    charge0: Numbers
    current1: Numbers | None = None
    charge1: Numbers | None = None
    around1: Numbers | None = None
    mixed1: Numbers | None = None

    def plus(self, other: Moments) -> Moments:
        """Sum, part by part."""

        def both(a: Numbers | None, b: Numbers | None) -> Numbers | None:
            return None if a is None or b is None else a + b

        return Moments(
            self.current0 + other.current0,
            self.charge0 + other.charge0,
            both(self.current1, other.current1),
            both(self.charge1, other.charge1),
            both(self.around1, other.around1),
            both(self.mixed1, other.mixed1),
        )


class PairGeometry:
    """All points of some pair sets in one row: rings and direction factors there; kernels come in, moments go out.

    Points of a pair stand together, pairs in the order of the sets; P points.
    """

    def __init__(self, mesh: Mesh, sets: list[PairSet]) -> None:
        counts = [len(pairs.first) for pairs in sets]
        self.first = np.concatenate([pairs.first for pairs in sets])
        self.second = np.concatenate([pairs.second for pairs in sets])
        self.sign = np.repeat([-1.0 if pairs.mirrored else 1.0 for pairs in sets], counts)
        points = np.repeat([len(pairs.rule.weight) for pairs in sets], counts)
        self.starts = np.concatenate([[0], np.cumsum(points)[:-1]])
        self.weight = np.concatenate([np.tile(s.rule.weight, n) for n, s in zip(counts, sets, strict=True)])
        place = np.concatenate([np.tile(s.rule.first, n) for n, s in zip(counts, sets, strict=True)])
        other = np.concatenate([np.tile(s.rule.second, n) for n, s in zip(counts, sets, strict=True)])
        element, source = np.repeat(self.first, points), np.repeat(self.second, points)
        sign = np.repeat(self.sign, points)
        self.radius_m, self.source_radius_m = radius_at(mesh, element, place), radius_at(mesh, source, other)
        cosines: Floats | float = 1.0
        if mesh.closed:
            one, two = rings(mesh, element, place), _continued(rings(mesh, source, other), sign)
            self.axial_m: Floats = np.sqrt(((one.centre - two.centre) ** 2).sum(axis=-1))
            cosines = (one.tangent * two.tangent).sum(axis=-1)
        else:
            y = mesh.start[element, 1] + mesh.travel_m[element] * place
            self.axial_m = np.abs(y - sign * (mesh.start[source, 1] + mesh.travel_m[source] * other))
        size = mesh.size_m
        self.area = size[self.first] * size[self.second]
        along, outward = mesh.travel_m / size, (mesh.radius_m[:, 1] - mesh.radius_m[:, 0]) / size
        self.axial = along[element] * along[source] * cosines
        self.radial = sign * outward[element] * outward[source]
        self.outward = sign * outward[element], sign * outward[source]
        self.linear = (1.0 - place, place), (1.0 - other, other)
        self.hats, self.charge = plain_shapes(mesh, element, place)
        self.other_hats, self.other_charge = plain_shapes(mesh, source, other)

    def plain(self, g0: Numbers, g1: Numbers) -> Numbers:
        """Pair integrals of m = 0 with kernels (P,): four products of hats, then the charge; (5, pairs)."""
        weighted = self.weight * (self.axial * g0 + self.radial * g1)
        ends = [weighted * hat for hat in self.hats]
        rows = [end * hat for end in ends for hat in self.other_hats]
        sums = np.add.reduceat(
            np.array([*rows, self.weight * g0 * self.charge * self.other_charge]), self.starts, axis=1
        )
        sums[:4] *= self.area
        sums[4] *= self.sign
        return sums

    def varying(self, g0: Numbers, g1: Numbers, g2: Numbers) -> Numbers:
        """Pair integrals of m = 1, (10, pairs): four products of hats, charge, azimuthal, hats with azimuthal.

        The last four rows are the first element's two hats with the second's azimuthal current, then the reverse.
        """
        even, odd = self.weight * (g0 + g2) / 2.0, self.weight * (g0 - g2) / 2.0
        weighted = self.weight * g1
        ends = [(self.axial * weighted + self.radial * even) * hat for hat in self.linear[0]]
        rows = [end * hat for end in ends for hat in self.linear[1]]
        rows += [weighted, self.radius_m * self.source_radius_m * even]
        rows += [-self.outward[0] * self.source_radius_m * odd * hat for hat in self.linear[0]]
        rows += [-self.outward[1] * self.radius_m * odd * hat for hat in self.linear[1]]
        sums = 0.5 * np.add.reduceat(np.array(rows), self.starts, axis=1)
        sums[:4] *= self.area
        sums[4] *= self.sign
        sums[5] *= self.sign * self.area
        sums[6:] *= self.area
        return sums

    def moments(self, harmonics: Harmonics, elements: int, azimuthal: bool) -> Moments:
        """Integrals of these kernels (P,) between all elements, exchanged pairs too."""
        rows = self.plain(harmonics[0], harmonics[1])
        if azimuthal:
            rows = np.concatenate([rows, self.varying(*harmonics)])
        spread = self._spread(rows, elements)
        current, charge = spread[:, :, :4].reshape(elements, elements, 2, 2), spread[:, :, 4]
        if not azimuthal:
            return Moments(current, charge)
        varying = spread[:, :, 5:9].reshape(elements, elements, 2, 2)
        return Moments(current, charge, varying, spread[:, :, 9], spread[:, :, 10], spread[:, :, 11:13])

    def _spread(self, rows: Numbers, elements: int) -> Numbers:
        """Rows (n, pairs) at their pairs, and at the exchanged pairs in the order that exchange gives; (E, E, n)."""
        total = np.zeros((elements, elements, len(rows)), dtype=rows.dtype)
        order = EXCHANGED[: len(rows)]
        for part in (self.sign > 0.0, self.sign < 0.0):
            first, second, values = self.first[part], self.second[part], rows[:, part].T
            total[first, second] += values
            apart = first != second
            total[second[apart], first[apart]] += values[apart][:, order]
        return total


def _continued(source: Rings, sign: Floats) -> Rings:
    """Rings where sign is 1; where it is -1 their mirror images in y = 0, the axis running on across the plane."""
    flip = np.where(sign[:, None] < 0.0, np.array([1.0, -1.0, 1.0]), 1.0)
    return Rings(source.centre * flip, source.tangent * flip * sign[:, None], source.normal * flip, source.radius_m)


class OwnAction:
    """Integrals of a conductor with itself; `static` is worked out once, `dynamic` for each wavenumber."""

    def __init__(
        self, mesh: Mesh, azimuthal: bool, wanted: np.ndarray[tuple[int, ...], np.dtype[np.bool_]] | None = None
    ) -> None:
        if wanted is None:
            wanted = np.ones((2, mesh.elements, mesh.elements), dtype=bool)
        self.mesh, self.azimuthal, self.wanted = mesh, azimuthal, wanted
        geometry = PairGeometry(mesh, pair_sets(mesh, wanted))
        harmonics = static_ring_kernels(geometry.axial_m, geometry.radius_m, geometry.source_radius_m)
        self.static: Moments = geometry.moments(harmonics, mesh.elements, azimuthal)
        self._smooth: PairGeometry | None = None

    def dynamic(self, wavenumber_rad_m: float) -> Moments:
        """Integrals of the kernel's dynamic rest at k [rad/m]."""
        if self._smooth is None:
            sets = []
            for mirrored in (False, True):
                first, second = np.nonzero(np.triu(self.wanted[int(mirrored)]))
                sets.append(PairSet(first, second, mirrored, smooth_rule(2)))
            self._smooth = PairGeometry(self.mesh, sets)
        geometry = self._smooth
        azimuths = AZIMUTHS_FULL if self.azimuthal else AZIMUTHS_PLAIN
        rest = dynamic_ring_kernels(
            geometry.axial_m, geometry.radius_m, geometry.source_radius_m, wavenumber_rad_m, azimuths
        )
        return geometry.moments(rest, self.mesh.elements, self.azimuthal)


def block(mesh: Mesh, moments: Moments, wavenumber_rad_m: float, families: int = 0) -> Complexes:
    """Matrix of one conductor in its basis, without the common factor of `impedance`.

    families  of m = 1: 0, 1 (cosine) or 2 (cosine, then sine: the same numbers again)

    Returns (U, U): current integrals minus charge integrals over k squared; m = 0 nodes first, then for each family its
    nodes and its elements.
    """
    keep = mesh.elements + (1 if mesh.closed else 0)
    inverse = 1.0 / wavenumber_rad_m**2
    plain = nodal(moments.current0, moments.charge0 * inverse)[:keep, :keep]
    if moments.current1 is None or moments.charge1 is None or moments.around1 is None or moments.mixed1 is None:
        return plain
    count, size = mesh.elements, mesh.size_m
    charge = moments.charge1 * inverse
    along = nodal(moments.current1, charge)[:keep, :keep]
    around = moments.around1 - size[:, None] * size[None, :] * charge
    mixed = np.zeros((count + 1, count), dtype=np.complex128)
    mixed[:count] += moments.mixed1[:, :, 0] + size * charge
    mixed[1:] += moments.mixed1[:, :, 1] - size * charge
    unknowns = keep + families * (keep + count)
    total = np.zeros((unknowns, unknowns), dtype=np.complex128)
    total[:keep, :keep] = plain
    for family in range(families):
        nodes = slice(keep + family * (keep + count), 2 * keep + family * (keep + count))
        elements = slice(nodes.stop, nodes.stop + count)
        total[nodes, nodes] = along
        total[elements, elements] = around
        total[nodes, elements] = mixed[:keep]
        total[elements, nodes] = mixed[:keep].T
    return total


def nodal(current: Numbers, charge: Numbers) -> Complexes:
    """Element integrals (E, E, 2, 2) and (E, E) gathered on nodes, (E + 1, E + 1): current minus charge."""
    count = len(charge)
    total = np.zeros((count + 1, count + 1), dtype=np.complex128)
    for i in (0, 1):
        for j in (0, 1):
            sign = 1.0 if i == j else -1.0
            total[i : count + i, j : count + j] += current[:, :, i, j] - sign * charge
    return total
