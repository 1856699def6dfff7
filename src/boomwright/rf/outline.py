"""The centreline of a closed conductor: straight and circular stretches from the feed to the far crossing of y = 0."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from boomwright.rf.arrays import Floats
from boomwright.rf.conductors import Folded, Loop


@dataclass(frozen=True)
class Stretch:
    """A straight or circular part of a centreline: length [m], turn [rad] (0 = straight), conductor's radius [m]."""

    length_m: float
    turn_rad: float
    radius_m: float


@dataclass(frozen=True)
class Outline:
    """The half at y >= 0 of a closed conductor.

    start      where it crosses y = 0 at the feed [m], running in direction +y
    normal     unit vector in the x-z plane, toward which it turns
    stretches  its parts in order
    """

    start: tuple[float, float, float]
    normal: tuple[float, float, float]
    stretches: tuple[Stretch, ...]

    @property
    def length_m(self) -> float:
        """Length of the half along its axis [m]."""
        return sum(stretch.length_m for stretch in self.stretches)

    def points(self, count: int = 400) -> Floats:
        """Points on the axis, `count` in each stretch, (stretches * count, 3) [m]."""
        aside = np.array(self.normal)
        forward = np.array([0.0, 1.0, 0.0])
        position, heading, result = np.array(self.start), 0.0, []
        for stretch in self.stretches:
            along = np.linspace(0.0, stretch.length_m, count)
            turn = along * (stretch.turn_rad / stretch.length_m)
            ahead = along * np.sinc(turn / np.pi)
            across = along * (turn / 2.0) * np.sinc(turn / (2.0 * np.pi)) ** 2
            t = math.cos(heading) * forward + math.sin(heading) * aside
            n = math.cos(heading) * aside - math.sin(heading) * forward
            result.append(position + ahead[:, None] * t + across[:, None] * n)
            position, heading = result[-1][-1], heading + stretch.turn_rad
        return np.concatenate(result)


def outline(conductor: Folded | Loop) -> Outline:
    """The centreline of a folded dipole or a loop."""
    if isinstance(conductor, Folded):
        return _folded(conductor)
    return _circle(conductor) if conductor.shape == "circle" else _square(conductor)


def facing_m(conductor: Folded | Loop) -> float:
    """Distance of the two sides that face each other across the conductor [m], axis to axis."""
    if isinstance(conductor, Folded):
        return conductor.spacing_m
    return conductor.length_m / math.pi if conductor.shape == "circle" else _side_m(conductor)


def tightest_bend_radii(conductor: Folded | Loop) -> float:
    """Smallest bend radius on the axis, counted in radii of the conductor there."""
    stretches = outline(conductor).stretches
    return min(s.length_m / abs(s.turn_rad) / s.radius_m for s in stretches if s.turn_rad != 0.0)


def _axis_bend_m(folded: Folded) -> float:
    other_m = folded.radius_m if folded.other_radius_m is None else folded.other_radius_m
    half_m = folded.spacing_m / 2.0
    return half_m if folded.bend_radius_m is None else min(folded.bend_radius_m + other_m, half_m)


def is_half_circle(folded: Folded) -> bool:
    """True if the two bends of an end make one half circle."""
    return folded.spacing_m - 2.0 * _axis_bend_m(folded) <= 1e-9 * folded.spacing_m


def _folded(folded: Folded) -> Outline:
    other_m = folded.radius_m if folded.other_radius_m is None else folded.other_radius_m
    bend_m = _axis_bend_m(folded)
    straight_m = folded.length_m / 2.0 - other_m - bend_m
    across_m = folded.spacing_m - 2.0 * bend_m
    quarter = Stretch(bend_m * math.pi / 2.0, math.pi / 2.0, other_m)
    end = [] if is_half_circle(folded) else [Stretch(across_m, 0.0, other_m)]
    fed, second = Stretch(straight_m, 0.0, folded.radius_m), Stretch(straight_m, 0.0, other_m)
    normal = (0.0, 0.0, 1.0) if folded.upright else (1.0, 0.0, 0.0)
    return Outline((folded.at_m, 0.0, folded.height_m), normal, (fed, quarter, *end, quarter, second))


def _circle(loop: Loop) -> Outline:
    start = (loop.at_m, 0.0, loop.height_m - loop.length_m / (2.0 * math.pi))
    return Outline(start, (0.0, 0.0, 1.0), (Stretch(loop.length_m / 2.0, math.pi, loop.radius_m),))


def _square_bend_m(loop: Loop) -> float:
    inside_m = 4.0 * loop.radius_m if loop.bend_radius_m is None else loop.bend_radius_m
    return inside_m + loop.radius_m


def _side_m(loop: Loop) -> float:
    return (loop.length_m + (8.0 - 2.0 * math.pi) * _square_bend_m(loop)) / 4.0


def _square(loop: Loop) -> Outline:
    bend_m, side_m = _square_bend_m(loop), _side_m(loop)
    quarter = Stretch(bend_m * math.pi / 2.0, math.pi / 2.0, loop.radius_m)
    half = Stretch(side_m / 2.0 - bend_m, 0.0, loop.radius_m)
    whole = Stretch(side_m - 2.0 * bend_m, 0.0, loop.radius_m)
    start = (loop.at_m, 0.0, loop.height_m - side_m / 2.0)
    return Outline(start, (0.0, 0.0, 1.0), (half, quarter, whole, quarter, half))
