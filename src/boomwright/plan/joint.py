"""Joints between printed sections: dovetails drawn along z, so that one section is let down beside the other.

The sections stand on one flat bench, which sets their height; the faces of a joint butt, so that its flanks hold them
together. What a joint leaves free along its pull is its play, and that counts in the budget of positions.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

NECK_MM = 1.2
"""Straight part of a dovetail before and behind its flanks, so that no edge is sharper than a right angle."""

FLANK_MM = 3.0
TIP_HALF_MM = 6.5
WALL_MM = 2.6
"""Least material round a socket."""

BORE_MM = 3.4
"""For a screw of 3 mm that fixes the section on a board [ISO 273], medium fit of M3."""

BORE_FROM_FACE_MM = 4.0
LEAST_ROOT_HALF_MM = 0.6
SHARE_FLANK = 0.55
ROOT_2 = math.sqrt(2.0)
Point = tuple[float, float]


@dataclass(frozen=True)
class Dovetail:
    """A tenon with flanks at 45°: the middle of its neck on the joint's face, and the way it points (unit x, y)."""

    at_mm: Point
    way: tuple[int, int]
    tip_half_mm: float = TIP_HALF_MM
    flank_mm: float = FLANK_MM

    @property
    def length_mm(self) -> float:
        """How far it reaches beyond the joint's face [mm]."""
        return 2.0 * NECK_MM + self.flank_mm

    @property
    def root_half_mm(self) -> float:
        """Half the width of its neck [mm]."""
        return self.tip_half_mm - self.flank_mm

    def outline(self, clearance_mm: float = 0.0) -> tuple[Point, ...]:
        """Corners (x, y) of the tenon, or with a clearance (normal to its faces) of the socket that takes it [mm]."""
        k, root, tip = clearance_mm, self.root_half_mm + clearance_mm, self.tip_half_mm + clearance_mm
        turn = (1.0 - ROOT_2) * k
        half = ((0.0, root), (NECK_MM + turn, root), (NECK_MM + self.flank_mm + turn, tip), (self.length_mm + k, tip))
        local = [*half, *((u, -v) for u, v in reversed(half))]
        (x, y), (a, b) = self.at_mm, self.way
        return tuple((x + a * u - b * v, y + b * u + a * v) for u, v in local)


@dataclass(frozen=True)
class Joint:
    """A joint of two pieces, named by their stems: how far they can move along `way` before its flanks hold [mm].

    box    low and high corner (x, y) of the room round it, in the cradle's frame [mm]
    """

    tenon: str
    socket: str
    way: tuple[int, int]
    box: tuple[Point, Point]
    play_mm: float


def flank_play_mm(clearance_mm: float) -> float:
    """Way along the pull [mm] until flanks at 45° meet, faces butting at the start: clearance x root 2."""
    return ROOT_2 * clearance_mm


def dovetail_mm(room_half_mm: float) -> tuple[float, float] | None:
    """Half tip and flank [mm] of the largest dovetail within a half width, or None where its neck would be too thin."""
    tip = min(TIP_HALF_MM, room_half_mm)
    flank = min(FLANK_MM, SHARE_FLANK * tip)
    return (tip, flank) if tip - flank >= LEAST_ROOT_HALF_MM else None


def joint_box(dovetails: Sequence[Dovetail], margin_mm: float = 2.0) -> tuple[Point, Point]:
    """Corners (x, y) of the room round a joint's dovetails [mm]."""
    points = [point for d in dovetails for point in d.outline()]
    xs, ys = [x for x, _ in points], [y for _, y in points]
    return (min(xs) - margin_mm, min(ys) - margin_mm), (max(xs) + margin_mm, max(ys) + margin_mm)


def position_deviation_mm(plays_mm: Sequence[float], notch_mm: float) -> float:
    """Standard deviation [mm] of a place behind joints of these plays, and a notch error of at most `notch_mm`.

    Each play is an error evenly spread over its width (deviation play / root 12), the notch's over plus and minus its
    bound (notch / root 3); they are independent, so that their squares add.
    """
    return math.sqrt(sum(play**2 for play in plays_mm) / 12.0 + notch_mm**2 / 3.0)


def most_play_mm(joints: int, notch_mm: float, limit_mm: float) -> float:
    """The play [mm] of each of so many joints at which `position_deviation_mm` reaches the limit; 0 where none does."""
    return math.sqrt(max(0.0, limit_mm**2 - notch_mm**2 / 3.0) * 12.0 / joints)
