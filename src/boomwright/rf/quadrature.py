"""Rules for integrals over one element and over pairs of elements, on the unit interval and the unit square."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property, lru_cache

import numpy as np

from boomwright.rf.arrays import Floats

GRADING = 4.0


@dataclass(frozen=True)
class PairRule:
    """Points of a rule on the unit square: first and second coordinate, weight; each (points,)."""

    first: Floats
    second: Floats
    weight: Floats

    @cached_property
    def moments(self) -> Floats:
        """Weights times the products of the two elements' end hats, and the bare weights, (5, points).

        Rows: start-start, start-end, end-start, end-end, constant.
        """
        hats = np.array([1.0 - self.first, self.first])
        others = np.array([1.0 - self.second, self.second])
        return np.array([*(self.weight * a * b for a in hats for b in others), self.weight])


@lru_cache(maxsize=32)
def gauss_unit(count: int) -> tuple[Floats, Floats]:
    """Gauss-Legendre points and weights on 0 to 1, each (count,)."""
    points, weights = np.polynomial.legendre.leggauss(count)
    return (points + 1.0) / 2.0, weights / 2.0


@lru_cache(maxsize=8)
def smooth_rule(count: int) -> PairRule:
    """Product Gauss rule of count x count points, for pairs that are apart."""
    points, weights = gauss_unit(count)
    first, second = np.meshgrid(points, points, indexing="ij")
    return PairRule(first.ravel(), second.ravel(), np.outer(weights, weights).ravel())


@lru_cache(maxsize=2)
def self_rule(distance_count: int = 12, place_count: int = 4) -> PairRule:
    """Rule for an element with itself: the kernel is log-singular where both coordinates agree.

    The distance between the points is a power of the Gauss variable, which makes the integrand smooth and resolves a
    kernel that changes within a small part of the element, as that of a thin wire does.
    """
    v, dv = gauss_unit(distance_count)
    s, ds = gauss_unit(place_count)
    distance = np.repeat(v**GRADING, place_count)
    place = np.tile(s, distance_count) * (1.0 - distance)
    weight = np.outer(dv * GRADING * v ** (GRADING - 1.0), ds).ravel() * (1.0 - distance)
    return PairRule(
        np.concatenate([place, place + distance]),
        np.concatenate([place + distance, place]),
        np.concatenate([weight, weight]),
    )


@lru_cache(maxsize=2)
def corner_rule(radial_count: int = 12, across_count: int = 5) -> PairRule:
    """Rule for two elements that share a node: the first one's end (1) is the second one's start (0)."""
    v, dv = gauss_unit(radial_count)
    t, dt = gauss_unit(across_count)
    radius = np.repeat(v**GRADING, across_count)
    share = np.tile(t, radial_count) * radius
    weight = np.outer(dv * GRADING * v ** (GRADING - 1.0), dt).ravel() * radius
    return PairRule(
        1.0 - np.concatenate([radius, share]),
        np.concatenate([share, radius]),
        np.concatenate([weight, weight]),
    )


def from_start(rule: PairRule) -> PairRule:
    """The corner rule for two elements that both start at the shared node (mirror images of each other)."""
    return PairRule(1.0 - rule.first, rule.second, rule.weight)


def interpolation(nodes: Floats, places: Floats) -> Floats:
    """Values of the Lagrange polynomials of `nodes` (N,) at `places` (P,), (P, N), in barycentric form.

    The nodes are those of a Gauss or Chebyshev rule, where the interpolation is stable [Berrut2004].
    """
    away = nodes[:, None] - nodes[None, :]
    np.fill_diagonal(away, 1.0)
    span = np.abs(away).max()
    weights = 1.0 / np.prod(away * (4.0 / span), axis=1)
    gap = places[:, None] - nodes[None, :]
    exact = np.abs(gap) < 1e-13 * span
    shares = weights / np.where(exact, 1.0, gap)
    shares /= shares.sum(axis=1, keepdims=True)
    hit = exact.any(axis=1)
    shares[hit] = exact[hit]
    result: Floats = shares
    return result
