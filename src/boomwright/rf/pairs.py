"""Pairs of elements of one conductor, each with the rule that its integral needs."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from boomwright.rf.arrays import Floats, Integers
from boomwright.rf.mesh import Mesh, radius_at, rings
from boomwright.rf.quadrature import PairRule, corner_rule, from_start, self_rule, smooth_rule

FAR_SIZES = 1.5


@dataclass(frozen=True)
class PairSet:
    """Pairs of elements that share a rule: observed element, source element, whether the source is mirrored."""

    first: Integers
    second: Integers
    mirrored: bool
    rule: PairRule


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
