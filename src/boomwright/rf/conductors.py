"""The conductors of an antenna as values: straight rods, and one closed conductor for a folded or loop driven element.

Frame: x along the boom forward, y along the rods, z up. Every conductor is its own mirror image in the plane y = 0.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TypeAlias

IDEAL = math.inf
"""Conductivity of a perfect conductor [S/m]."""


@dataclass(frozen=True)
class Coat:
    """A thin dielectric coat: thickness [m], relative permittivity (at least 1) and loss tangent."""

    thickness_m: float
    permittivity: float
    loss_tangent: float = 0.0


@dataclass(frozen=True)
class Rod:
    """A straight round rod with flat solid ends, parallel to y, centred on y = 0.

    tag                 its name in results
    at_m                x of its axis [m]
    length_m            tip to tip [m]
    radius_m            [m]
    height_m            z of its axis [m]
    conductivity_s_m    [S/m]; IDEAL = perfect conductor
    gap_m               opening at the feed [m]; 0 = a rod that is not fed
    """

    tag: str
    at_m: float
    length_m: float
    radius_m: float
    height_m: float = 0.0
    conductivity_s_m: float = IDEAL
    gap_m: float = 0.0
    coat: Coat | None = None


@dataclass(frozen=True)
class Stretch:
    """A straight or circular part of a closed conductor's half: length [m], turn [rad] (0 = straight), radius [m]."""

    length_m: float
    turn_rad: float
    radius_m: float


@dataclass(frozen=True)
class Ring:
    """A closed fed conductor (folded dipole or loop), given by its half at y >= 0.

    The half starts at `start` = (x, 0, z) in direction +y, in the plane of y and `normal` (a unit vector in the x-z
    plane toward the second conductor), and follows `stretches` until it crosses y = 0 again. The feed is at the start.
    """

    tag: str
    start: tuple[float, float, float]
    normal: tuple[float, float, float]
    stretches: tuple[Stretch, ...]
    gap_m: float
    conductivity_s_m: float = IDEAL
    coat: Coat | None = None

    @property
    def radius_m(self) -> float:
        """Radius of the fed side [m]."""
        return self.stretches[0].radius_m

    @property
    def half_length_m(self) -> float:
        """Length of the half along its axis [m]."""
        return sum(stretch.length_m for stretch in self.stretches)


Conductor: TypeAlias = Rod | Ring


def folded(
    tag: str,
    at_m: float,
    length_m: float,
    spacing_m: float,
    radius_m: float,
    gap_m: float,
    bend_radius_m: float | None = None,
    other_radius_m: float | None = None,
    upright: bool = False,
    conductivity_s_m: float = IDEAL,
    coat: Coat | None = None,
) -> Ring:
    """A folded dipole; the fed conductor lies on the axis x = at, z = 0, the other one ahead of it or above it.

    length_m        tip to tip over the outside [m]
    spacing_m       between the two conductors' axes [m]
    radius_m        of the fed conductor [m]
    gap_m           opening at the feed [m]
    bend_radius_m   inside radius of the bends [m]; default a full half circle, spacing / 2 - radius
    other_radius_m  of the second conductor, bends included [m]; default as the fed one

    Returns the closed conductor.
    """
    second_m = radius_m if other_radius_m is None else other_radius_m
    axis_bend_m = spacing_m / 2.0 if bend_radius_m is None else min(bend_radius_m + second_m, spacing_m / 2.0)
    straight_m = length_m / 2.0 - second_m - axis_bend_m
    quarter = Stretch(axis_bend_m * math.pi / 2.0, math.pi / 2.0, second_m)
    across_m = spacing_m - 2.0 * axis_bend_m
    end = [Stretch(across_m, 0.0, second_m)] if across_m > 1e-9 * spacing_m else []
    parts = [Stretch(straight_m, 0.0, radius_m), quarter, *end, quarter, Stretch(straight_m, 0.0, second_m)]
    normal = (0.0, 0.0, 1.0) if upright else (1.0, 0.0, 0.0)
    return Ring(tag, (at_m, 0.0, 0.0), normal, tuple(parts), gap_m, conductivity_s_m, coat)


def circular_loop(
    tag: str,
    at_m: float,
    perimeter_m: float,
    radius_m: float,
    gap_m: float,
    conductivity_s_m: float = IDEAL,
    coat: Coat | None = None,
) -> Ring:
    """A circular loop across the boom in the plane x = at, centred on z = 0, fed at its lowest point."""
    start = (at_m, 0.0, -perimeter_m / (2.0 * math.pi))
    half = Stretch(perimeter_m / 2.0, math.pi, radius_m)
    return Ring(tag, start, (0.0, 0.0, 1.0), (half,), gap_m, conductivity_s_m, coat)


def square_loop(
    tag: str,
    at_m: float,
    perimeter_m: float,
    radius_m: float,
    gap_m: float,
    bend_radius_m: float,
    conductivity_s_m: float = IDEAL,
    coat: Coat | None = None,
) -> Ring:
    """A square loop across the boom, fed at the middle of its lowest side; bend radius inside [m]."""
    bend_m = bend_radius_m + radius_m
    side_m = (perimeter_m + (8.0 - 2.0 * math.pi) * bend_m) / 4.0
    quarter = Stretch(bend_m * math.pi / 2.0, math.pi / 2.0, radius_m)
    half_side = Stretch(side_m / 2.0 - bend_m, 0.0, radius_m)
    parts = (half_side, quarter, Stretch(side_m - 2.0 * bend_m, 0.0, radius_m), quarter, half_side)
    return Ring(tag, (at_m, 0.0, -side_m / 2.0), (0.0, 0.0, 1.0), parts, gap_m, conductivity_s_m, coat)
