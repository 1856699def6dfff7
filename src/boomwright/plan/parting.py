"""The parting face of a mould seen flat: where alignment pins, tie notches and pry notches find room on the flanges.

Two coordinates: `u` across the flange (x for halves pulled along z, z for halves pulled along x) and y along the rods.
The two flanges mirror each other in y.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from itertools import combinations

import shapely
from shapely import Polygon
from shapely.geometry.base import BaseGeometry

Span = tuple[float, float]

MOST_PIN_MM, LEAST_PIN_MM, PIN_STEP_MM, GOOD_PIN_MM = 4.0, 1.2, 0.2, 3.0
LEAST_FLANGE_MM, MOST_FLANGE_MM = 8, 30
TIE_WIDTH_MM, TIE_DEPTHS_MM = 4.2, (1.6, 1.0)
PRY_MM = (3.0, 2.5)
PRY_DEPTH_MM = 1.2
SOCKET_SPARE_MM = 0.5
"""How much deeper a socket is than its pin is high."""


@dataclass(frozen=True)
class Pin:
    """An alignment pin on the lower half, its socket in the upper one [mm]."""

    u_mm: float
    y_mm: float
    diameter_mm: float
    height_mm: float

    def mirrored(self) -> Pin:
        """The same pin on the other flange."""
        return replace(self, y_mm=-self.y_mm)


@dataclass(frozen=True)
class Notch:
    """A rectangle of the parting face that is cut away [mm]."""

    u_mm: Span
    y_mm: Span

    @property
    def polygon(self) -> Polygon:
        """The rectangle as a polygon in (u, y)."""
        return shapely.box(self.u_mm[0], self.y_mm[0], self.u_mm[1], self.y_mm[1])

    def mirrored(self) -> Notch:
        """The same notch on the other flange."""
        return Notch(self.u_mm, (-self.y_mm[1], -self.y_mm[0]))


@dataclass(frozen=True)
class PartingFace:
    """What the flanges carry; `outer_mm` is half the mould's length in y."""

    outer_mm: float
    pins: tuple[Pin, ...]
    ties: tuple[Notch, ...]
    pries: tuple[Notch, ...]


@dataclass(frozen=True)
class PinRoom:
    """What pins and notches need: play in a socket a side, walls round sockets and notches, depth for a socket [mm]."""

    play_mm: float
    wall_mm: float
    depth_mm: float


def lay_out_parting(u_mm: Span, inner_mm: float, body_mm: float, channels: BaseGeometry, room: PinRoom) -> PartingFace:
    """Lay out the flanges, each as short as lets it carry good pins.

    u_mm      the mould's extent across the flange [mm]
    inner_mm  half width in y of the cavity [mm]
    body_mm   half width in y of the block without its flanges [mm]
    channels  what is cut into the parting face already, in (u, y) [mm]
    room      what the pins need

    Returns the face; without pins where none of 1.2 mm fits on a flange of 30 mm, without ties where no notch does.
    """
    both = shapely.union_all([channels, shapely.transform(channels, lambda points: points * (1.0, -1.0))])
    best: PartingFace | None = None
    for flange_mm in range(LEAST_FLANGE_MM, MOST_FLANGE_MM + 1):
        outer = body_mm + flange_mm
        pries = _pry_notch(u_mm, outer, both.buffer(room.wall_mm))
        solid = shapely.union_all([both, *(notch.polygon for notch in pries)])
        ties = _tie_notches(u_mm, (body_mm + room.wall_mm, outer - room.wall_mm), solid.buffer(room.wall_mm))
        taken = shapely.union_all([both, *(n.polygon for n in (*ties, *pries))])
        free = shapely.box(u_mm[0], inner_mm, u_mm[1], outer).difference(taken)
        pins = _pins(free, room)
        face = PartingFace(
            outer,
            (*pins, *(pin.mirrored() for pin in pins)),
            (*ties, *(notch.mirrored() for notch in ties)),
            (*pries, *(notch.mirrored() for notch in pries)),
        )
        if best is None or _worth(face) > _worth(best):
            best = face
        if _worth(best) >= (True, GOOD_PIN_MM):
            break
    assert best is not None
    return best


def _worth(face: PartingFace) -> tuple[bool, float]:
    """Pins before all, then room for ties, then thick pins; pins past the good measure count no more."""
    thickness = face.pins[0].diameter_mm if face.pins else 0.0
    return bool(face.pins and face.ties), min(thickness, GOOD_PIN_MM)


def _pins(free: BaseGeometry, room: PinRoom) -> tuple[Pin, ...]:
    """The two places farthest from each other for the thickest pins that fit: a half does not go on turned round."""
    for step in range(round((MOST_PIN_MM - LEAST_PIN_MM) / PIN_STEP_MM) + 1):
        diameter = round(MOST_PIN_MM - step * PIN_STEP_MM, 6)
        socket = diameter / 2.0 + room.play_mm
        height = min(diameter, room.depth_mm - SOCKET_SPARE_MM)
        places = _corners(free.buffer(-(socket + room.wall_mm), join_style="mitre"))
        pairs = [(round(_apart(a, b), 6), a, b) for a, b in combinations(places, 2)]
        pairs = [pair for pair in pairs if pair[0] >= 2.0 * socket + room.wall_mm]
        if pairs and height >= LEAST_PIN_MM / 2.0:
            _, one, other = max(pairs)
            return tuple(Pin(u, y, diameter, height) for u, y in (one, other))
    return ()


def _corners(shape: BaseGeometry) -> list[tuple[float, float]]:
    corners = {(round(float(u), 6), round(float(y), 6)) for u, y in shapely.get_coordinates(shape)}
    return sorted(corners)


def _apart(one: tuple[float, float], other: tuple[float, float]) -> float:
    return float(((one[0] - other[0]) ** 2 + (one[1] - other[1]) ** 2) ** 0.5)


def _tie_notches(u_mm: Span, y_mm: Span, walled: BaseGeometry) -> tuple[Notch, ...]:
    """A notch in both edges of the flange, as near the body as what is `walled` lets it, or none."""
    for depth in TIE_DEPTHS_MM:
        for step in range(int(y_mm[1] - TIE_WIDTH_MM - y_mm[0]) + 1):
            y = (y_mm[0] + step, y_mm[0] + step + TIE_WIDTH_MM)
            pair = (Notch((u_mm[0], u_mm[0] + depth), y), Notch((u_mm[1] - depth, u_mm[1]), y))
            if y[1] <= y_mm[1] and not any(notch.polygon.intersects(walled) for notch in pair):
                return pair
    return ()


def _pry_notch(u_mm: Span, outer_mm: float, walled: BaseGeometry) -> tuple[Notch, ...]:
    """A corner of the flange, where a blade goes in; none where what is `walled` takes both corners."""
    y = (outer_mm - PRY_MM[1], outer_mm)
    for u in ((u_mm[1] - PRY_MM[0], u_mm[1]), (u_mm[0], u_mm[0] + PRY_MM[0])):
        if not Notch(u, y).polygon.intersects(walled):
            return (Notch(u, y),)
    return ()
