"""A conductor's action on itself and on its own mirror image: rings on one axis, elements singly, adjacent and apart.

Every pair of elements is integrated with a rule made for it; the static part depends on the shape alone and is kept,
the dynamic rest is smooth. Along a bend, rings close to one another act as if their axis ran along the chord.
Harmonic m = 0 always, m = 1 on request; their integrals are derived in DEVELOPERS.md [Harrington1968], [Mautz1969].
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from boomwright.rf.arrays import Complexes, Floats, Integers, Numbers
from boomwright.rf.kernels import dynamic_ring_kernels, static_ring_kernels
from boomwright.rf.mesh import Mesh, Rings, plain_shapes, radius_at, rings
from boomwright.rf.quadrature import PairRule, corner_rule, from_start, self_rule, smooth_rule

FAR_SIZES = 1.5
AZIMUTHS_PLAIN = 2
AZIMUTHS_FULL = 5

Harmonics = tuple[Numbers, Numbers, Numbers]


@dataclass(frozen=True)
class PairSet:
    """Pairs of elements that share a rule: observed element, source element, whether the source is mirrored."""

    first: Integers
    second: Integers
    mirrored: bool
    rule: PairRule


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


def pair_sets(mesh: Mesh, wanted: np.ndarray[tuple[int, ...], np.dtype[np.bool_]]) -> list[PairSet]:
    """Pairs of elements with the rule each needs.

    wanted  (2, E, E): which pairs to take, direct and mirrored; symmetric

    Returns sets that together hold every wanted pair once, the first element never behind the second.
    """
    count = mesh.elements
    index = np.arange(count)
    offset = index[None, :] - index[:, None]
    sets = []
    for mirrored in (False, True):
        take = wanted[int(mirrored)]
        gap, size = element_gaps(mesh, mirrored)
        touching = np.abs(offset) <= 1
        if mirrored:
            touching = np.zeros((count, count), dtype=bool)
            touching[0, 0] = True
            if mesh.closed:
                touching[-1, -1] = True
            sets += [
                PairSet(np.array([0]), np.array([0]), True, from_start(corner_rule())),
                *([PairSet(np.array([count - 1]), np.array([count - 1]), True, _from_end())] if mesh.closed else []),
            ]
        else:
            sets += [
                PairSet(index, index, False, self_rule()),
                PairSet(index[:-1], index[1:], False, corner_rule()),
            ]
        rest = np.triu(take & ~touching)
        far = gap > FAR_SIZES * size
        for mask, rule in ((rest & far, smooth_rule(2)), (rest & ~far, smooth_rule(5))):
            first, second = np.nonzero(mask)
            sets.append(PairSet(first, second, mirrored, rule))
    return [s for s in sets if len(s.first)]


def _from_end() -> PairRule:
    rule = corner_rule()
    return PairRule(rule.first, 1.0 - rule.second, rule.weight)


def element_gaps(mesh: Mesh, mirrored: bool) -> tuple[Floats, Floats]:
    """Least distance between the ends of two elements' generating lines [m], and the larger one's size [m]; (E, E)."""
    places = np.arange(mesh.elements)[:, None], np.array([0.0, 1.0])
    radius = radius_at(mesh, *places)
    if mesh.closed:
        centre = rings(mesh, *places).centre
        flip = np.array([1.0, -1.0 if mirrored else 1.0, 1.0])
        across = ((centre[:, None, :, None, :] - (centre * flip)[None, :, None, :, :]) ** 2).sum(axis=-1)
    else:
        y = mesh.start[:, 1:2] + mesh.travel_m[:, None] * places[1]
        across = (y[:, None, :, None] - (-y if mirrored else y)[None, :, None, :]) ** 2
    radial = radius[:, None, :, None] - radius[None, :, None, :]
    distance = np.sqrt(across + radial**2)
    size = mesh.size_m
    return distance.min(axis=(2, 3)), np.maximum(size[:, None], size[None, :])


class PairGeometry:
    """Rings and direction factors at the points of one pair set; kernels come in, moments go out."""

    def __init__(self, mesh: Mesh, pairs: PairSet) -> None:
        self.pairs = pairs
        places = (pairs.first[:, None], pairs.rule.first), (pairs.second[:, None], pairs.rule.second)
        self.radius_m, self.source_radius_m = (radius_at(mesh, *place) for place in places)
        cosines: Floats | float = 1.0
        if mesh.closed:
            first, second = (rings(mesh, *place) for place in places)
            if pairs.mirrored:
                second = _continued(second)
            across = first.centre - second.centre
            self.axial_m: Floats = np.sqrt((across**2).sum(axis=-1))
            cosines = (first.tangent * second.tangent).sum(axis=-1)
        else:
            y, other = (mesh.start[element, 1] + mesh.travel_m[element] * place for element, place in places)
            self.axial_m = np.abs(y + other if pairs.mirrored else y - other)
        size = mesh.size_m
        along = mesh.travel_m / size
        outward = (mesh.radius_m[:, 1] - mesh.radius_m[:, 0]) / size
        sign = -1.0 if pairs.mirrored else 1.0
        self.sign = sign
        self.size = (size[pairs.first], size[pairs.second])
        self.axial = (along[pairs.first] * along[pairs.second])[:, None] * cosines
        self.radial = sign * (outward[pairs.first] * outward[pairs.second])[:, None]
        self.outward = sign * outward[pairs.first][:, None], sign * outward[pairs.second][:, None]
        self.weights = pairs.rule.moments
        self.hats, self.charge = plain_shapes(mesh, *places[0])
        self.other_hats, self.other_charge = plain_shapes(mesh, *places[1])

    def add_to(self, total: dict[str, Numbers], harmonics: Harmonics) -> None:
        """Add the integrals of these kernels (pairs, points), exchanged pairs too, to the totals by name."""
        g0, g1, g2 = harmonics
        area = (self.size[0] * self.size[1])[:, None]
        rule, where = self.pairs.rule, (self.pairs.first, self.pairs.second)
        hats, constant = self.weights[:4].T, self.weights[4]
        weighted = (self.axial * g0 + self.radial * g1) * rule.weight
        plain = [((weighted * one) * two).sum(axis=1) for one in self.hats for two in self.other_hats]
        self._put(total["current0"], area * np.column_stack(plain))
        self._put(total["charge0"], self.sign * ((g0 * self.charge * self.other_charge) @ rule.weight))
        if "current1" not in total:
            return
        even, odd = (g0 + g2) / 2.0, (g0 - g2) / 2.0
        self._put(total["current1"], 0.5 * area * ((self.axial * g1 + self.radial * even) @ hats))
        self._put(total["charge1"], 0.5 * self.sign * (g1 @ constant))
        around = self.radius_m * self.source_radius_m * even
        self._put(total["around1"], 0.5 * self.sign * area[:, 0] * (around @ constant))
        first_hat = np.array([1.0 - rule.first, rule.first]) * rule.weight
        second_hat = np.array([1.0 - rule.second, rule.second]) * rule.weight
        total["mixed1"][where] += -0.5 * area * ((self.outward[0] * self.source_radius_m * odd) @ first_hat.T)
        apart = where[0] != where[1]
        exchanged = -0.5 * area * ((self.outward[1] * self.radius_m * odd) @ second_hat.T)
        total["mixed1"][where[1][apart], where[0][apart]] += exchanged[apart]

    def _put(self, total: Numbers, values: Numbers) -> None:
        """Add values (pairs,) or (pairs, 4) at the pairs, and transposed at the exchanged pairs."""
        first, second = self.pairs.first, self.pairs.second
        apart = first != second
        if values.ndim == 1:
            total[first, second] += values
            total[second[apart], first[apart]] += values[apart]
            return
        square = values.reshape(-1, 2, 2)
        total[first, second] += square
        total[second[apart], first[apart]] += square[apart].transpose(0, 2, 1)


def _continued(source: Rings) -> Rings:
    """Mirror image in y = 0, its axis directed so that the conductor runs on across the plane."""
    flip = np.array([1.0, -1.0, 1.0])
    return Rings(source.centre * flip, source.tangent * -flip, source.normal * flip, source.radius_m)


def _empty(elements: int, azimuthal: bool, kind: type) -> dict[str, Numbers]:
    shapes = {"current0": (2, 2), "charge0": ()}
    if azimuthal:
        shapes |= {"current1": (2, 2), "charge1": (), "around1": (), "mixed1": (2,)}
    return {name: np.zeros((elements, elements, *tail), dtype=kind) for name, tail in shapes.items()}


class OwnAction:
    """Integrals of a conductor with itself; `static` is worked out once, `dynamic` for each wavenumber."""

    def __init__(
        self, mesh: Mesh, azimuthal: bool, wanted: np.ndarray[tuple[int, ...], np.dtype[np.bool_]] | None = None
    ) -> None:
        if wanted is None:
            wanted = np.ones((2, mesh.elements, mesh.elements), dtype=bool)
        self.mesh, self.azimuthal, self.wanted = mesh, azimuthal, wanted
        self.static: Moments = self._static()
        self._smooth: list[PairGeometry] | None = None

    def _static(self) -> Moments:
        total = _empty(self.mesh.elements, self.azimuthal, float)
        for pairs in pair_sets(self.mesh, self.wanted):
            geometry = PairGeometry(self.mesh, pairs)
            harmonics = static_ring_kernels(geometry.axial_m, geometry.radius_m, geometry.source_radius_m)
            geometry.add_to(total, harmonics)
        return Moments(**total)

    def dynamic(self, wavenumber_rad_m: float) -> Moments:
        """Integrals of the kernel's dynamic rest at k [rad/m]."""
        if self._smooth is None:
            self._smooth = []
            for mirrored in (False, True):
                first, second = np.nonzero(np.triu(self.wanted[int(mirrored)]))
                self._smooth.append(PairGeometry(self.mesh, PairSet(first, second, mirrored, smooth_rule(2))))
        total = _empty(self.mesh.elements, self.azimuthal, complex)
        azimuths = AZIMUTHS_FULL if self.azimuthal else AZIMUTHS_PLAIN
        for geometry in self._smooth:
            rest = dynamic_ring_kernels(
                geometry.axial_m, geometry.radius_m, geometry.source_radius_m, wavenumber_rad_m, azimuths
            )
            geometry.add_to(total, rest)
        return Moments(**total)


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
