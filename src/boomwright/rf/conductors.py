"""The conductors of an antenna as values: straight rods, folded dipoles and loops, in metres.

Frame: x along the boom forward, y along the rods, z up. Every conductor is its own mirror image in the plane y = 0.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Literal, TypeAlias

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

    tag               its name in results
    at_m              x of its axis [m]
    length_m          tip to tip [m]
    radius_m          [m]
    height_m          z of its axis [m]
    gap_m             opening at the feed [m]; 0 = a rod that is not fed
    conductivity_s_m  [S/m]; IDEAL = perfect conductor
    """

    tag: str
    at_m: float
    length_m: float
    radius_m: float
    height_m: float = 0.0
    gap_m: float = 0.0
    conductivity_s_m: float = IDEAL
    coat: Coat | None = None


@dataclass(frozen=True)
class Folded:
    """A folded dipole, fed at the middle of the conductor at x = at; the other one is ahead of it or above it.

    length_m        tip to tip over the outside [m]
    spacing_m       between the two conductors' axes [m]
    radius_m        of the fed conductor [m]
    gap_m           opening at the feed [m]
    bend_radius_m   inside radius of the bends [m]; None = the two bends of an end make one half circle
    other_radius_m  of the second conductor, bends included [m]; None = as the fed one
    upright         False: second conductor ahead (+x); True: above (+z)
    height_m        z of the fed conductor's axis [m]
    """

    tag: str
    at_m: float
    length_m: float
    spacing_m: float
    radius_m: float
    gap_m: float
    bend_radius_m: float | None = None
    other_radius_m: float | None = None
    upright: bool = False
    height_m: float = 0.0
    conductivity_s_m: float = IDEAL
    coat: Coat | None = None


@dataclass(frozen=True)
class Loop:
    """A loop across the boom in the plane x = at, fed at the middle of its lowest side.

    length_m       perimeter of the closed centreline, gap included [m]
    bend_radius_m  inside radius of a square loop's corners [m]; None = 4 radii; a circle does not use it
    height_m       z of its centre [m]
    """

    tag: str
    at_m: float
    length_m: float
    radius_m: float
    gap_m: float
    shape: Literal["circle", "square"] = "circle"
    bend_radius_m: float | None = None
    height_m: float = 0.0
    conductivity_s_m: float = IDEAL
    coat: Coat | None = None


Conductor: TypeAlias = Rod | Folded | Loop


@dataclass(frozen=True)
class Wires:
    """All conductors of an antenna; exactly one is fed (its gap is above 0)."""

    conductors: tuple[Conductor, ...]

    @property
    def fed(self) -> int:
        """Index of the fed conductor."""
        return next(index for index, conductor in enumerate(self.conductors) if conductor.gap_m > 0.0)
