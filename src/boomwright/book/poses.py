"""Poses: where every part stands when the antenna is assembled, taken apart, in its cradle, in its mould."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from boomwright.plan.cradle import held_conductors
from boomwright.plan.former import BASE_MM, JIG_FLOOR_MM, plan_former
from boomwright.plan.frame import turned_about_x
from boomwright.plan.plan import Plan

Matrix = NDArray[np.float64]

ASSEMBLED, EXPLODED, LAID = "assembled", "exploded", "laid"
MOULD_OPEN, MOULD_CLOSED, FORMER = "mould-open", "mould-closed", "former"
"""Keys of the poses."""

GAP_SHARE = 0.08
"""Room between things taken apart, as a share of the antenna's length along the boom."""

LEAST_GAP_MM = 8.0

CRADLE_GAPS = 3.0
"""How many times as far below all else the cradle stands: it is wide, and would be seen through the rods."""

PULLS = {"x": 0, "z": 2}


@dataclass(frozen=True)
class Room:
    """What a pose needs to know of a part: its key and group, the frame of its file, its box there [mm]."""

    key: str
    group: str
    frame: Matrix
    low: NDArray[np.float64]
    high: NDArray[np.float64]

    def box(self, place: Matrix) -> Matrix:
        """Low and high corner of its box, once placed [mm], (2, 3)."""
        ends = np.array([(x, y, z) for x in (0, 1) for y in (0, 1) for z in (0, 1)])
        corners = np.where(ends, self.high, self.low) @ place[:3, :3].T + place[:3, 3]
        return np.stack([corners.min(axis=0), corners.max(axis=0)])


@dataclass(frozen=True)
class Pose:
    """A pose.

    key     for look-up
    label   in words
    shows   keys of the parts it is about; the others are switched off
    places  by part key: 4 x 4, from the part's file to where it stands [mm]
    true    whether the antenna's parts stand to each other as they do when it is built
    """

    key: str
    label: str
    shows: tuple[str, ...]
    places: Mapping[str, Matrix]
    true: bool = True


def poses_of(plan: Plan, rooms: Sequence[Room]) -> tuple[Pose, ...]:
    """The poses that this antenna and the parts made for it allow, `assembled` first."""
    stand = _Stand(plan, rooms)
    poses = [stand.assembled(), stand.exploded()]
    if stand.cradle:
        poses.append(stand.laid())
    if {"mould-upper", "mould-lower"} <= {room.key for room in rooms}:
        poses += [stand.in_mould(is_open) for is_open in (True, False)]
    former = stand.former()
    return (*poses, former) if former is not None else tuple(poses)


class _Stand:
    """The parts of one antenna, sorted by what they are."""

    def __init__(self, plan: Plan, rooms: Sequence[Room]) -> None:
        self.plan = plan
        self.rooms = {room.key: room for room in rooms}
        self.antenna = [room for room in rooms if room.group == "Antenna"]
        self.cradle = [room for room in rooms if room.group == "Cradle"]
        self.mould = [room for room in rooms if room.group == "Mould"]
        # A part printed in a frame of its own has no place in the design: it stands on the bench.
        self.aids = [room for room in rooms if room.group not in ("Antenna", "Cradle", "Mould")]
        self.home: dict[str, Matrix] = {room.key: np.asarray(np.linalg.inv(room.frame), float) for room in rooms}
        boom = self.rooms["boom"]
        self.gap = max(LEAST_GAP_MM, GAP_SHARE * float(boom.high[0] - boom.low[0]))

    def assembled(self) -> Pose:
        places = self._with_aids(self.home, [room.key for room in self.antenna])
        return Pose(ASSEMBLED, "Assembled", tuple(room.key for room in self.antenna), places)

    def exploded(self) -> Pose:
        places = dict(self.home) | self._antenna_apart()
        self._draw_off(places, [room.key for room in self.antenna])
        if self.cradle:
            bench = np.array(self.plan.cradle.frame) if self.plan.laid is not None else np.eye(4)
            for room in self.cradle:
                places[room.key] = bench @ self.home[room.key]
            above = [room.key for room in (*self.antenna, *self.mould)]
            drop = self._box(places, above)[0, 2] - CRADLE_GAPS * self.gap
            drop -= self._box(places, [room.key for room in self.cradle])[1, 2]
            for room in self.cradle:
                places[room.key] = along(2, drop) @ places[room.key]
        shown = [room.key for room in (*self.antenna, *self.cradle, *self.mould)]
        return Pose(EXPLODED, "Exploded", tuple(shown), self._with_aids(places, shown), true=False)

    def laid(self) -> Pose:
        bench = np.array(self.plan.cradle.frame)
        places = {key: bench @ home for key, home in self.home.items()}
        held = {h.tag for h in held_conductors(self.plan.design)}
        lie = [room.key for room in self.antenna if room.key != "DE" or "DE" in held]
        shown = [*lie, *(room.key for room in self.cradle)]
        return Pose(LAID, "Laid in the cradle", tuple(shown), self._with_aids(places, shown))

    def in_mould(self, is_open: bool) -> Pose:
        """The feed in its mould, the halves together or off by as much as shows their insides; a loop upside down."""
        up = np.array(turned_about_x(0.0)) if self.plan.design.driven.form == "loop" else np.eye(4)
        axis = PULLS[self.plan.mould.pull]
        upper = self.rooms["mould-upper"].box(self.home["mould-upper"])
        apart = float(upper[1, axis] - upper[0, axis]) + LEAST_GAP_MM if is_open else 0.0
        places = {key: up @ home for key, home in self.home.items()}
        for key, way in (("mould-upper", apart), ("mould-lower", -apart)):
            places[key] = up @ along(axis, way) @ self.home[key]
        shown = [room.key for room in (*self.antenna, *self.mould)]
        key, label = (MOULD_OPEN, "Mould open") if is_open else (MOULD_CLOSED, "Mould closed")
        return Pose(key, label, tuple(shown), self._with_aids(places, shown))

    def former(self) -> Pose | None:
        """The driven element on its former, where the whole of it finds room there."""
        plan, driven = plan_former(self.plan.design, self.plan.shop)[0], self.plan.design.driven
        if "former" not in self.rooms:
            return None
        places, shown = {**self.assembled().places, "former": np.eye(4)}, ["former"]
        if not plan.is_corner:
            height = (BASE_MM if plan.bends else JIG_FLOOR_MM) + plan.wire_mm / 2.0
            places["DE"] = _onto_former(driven.at_mm, self._lowest_mm(), height)
            shown.insert(0, "DE")
        return Pose(FORMER, "On the former", tuple(shown), places, true=False)

    def _lowest_mm(self) -> float | None:
        """Height of the fed conductor's axis where the element stands upright, None where it lies flat."""
        driven = self.plan.design.driven
        if driven.form == "straight" or driven.plane == "flat":
            return None
        return float(self.rooms["DE"].low[2]) + driven.diameter_mm / 2.0

    def _antenna_apart(self) -> dict[str, Matrix]:
        """Rods and sleeves off the way they came on: up from a groove, sideways from a hole; a loop along the boom."""
        boom, gap, places = self.rooms["boom"], self.gap, {}
        through = {hole.tag for hole in self.plan.seat.holes}
        for room in self.antenna:
            tag = room.key.removeprefix("sleeve-")
            aside = float(boom.high[1] - room.low[1]) + gap
            if room.key == "boom":
                places[room.key] = np.eye(4)
            elif room.key != tag:
                places[room.key] = along(1, aside)
            elif tag in through:
                sleeve = self.rooms.get(f"sleeve-{tag}")
                further = float(sleeve.high[1] - sleeve.low[1]) + gap if sleeve else 0.0
                places[room.key] = along(1, aside + further)
            elif tag == "DE" and self.plan.design.driven.form == "loop":
                places[room.key] = along(0, float(boom.high[0] - room.low[0]) + gap)
            else:
                places[room.key] = along(2, 2.0 * gap if tag == "DE" else gap)
        return places

    def _draw_off(self, places: dict[str, Matrix], clear: Iterable[str]) -> None:
        """The mould's halves along their pull until they are clear of the antenna taken apart; the clip upward."""
        axis = PULLS[self.plan.mould.pull]
        box = self._box(places, clear)
        for room in self.mould:
            own = room.box(self.home[room.key])
            if room.key == "mould-clip":
                places[room.key] = along(2, box[1, 2] - own[0, 2] + self.gap) @ self.home[room.key]
                continue
            ahead = room.key == "mould-upper"
            way = box[1, axis] - own[0, axis] + self.gap if ahead else box[0, axis] - own[1, axis] - self.gap
            places[room.key] = along(axis, way) @ self.home[room.key]

    def _with_aids(self, places: Mapping[str, Matrix], shown: Sequence[str]) -> dict[str, Matrix]:
        """The same and the shop aids in a row on the bench before it, one behind the other."""
        whole = self._box(places, shown)
        found, y = dict(places), float(whole[0, 1]) - self.gap
        for room in self.aids:
            place = np.eye(4)
            place[:3, 3] = whole[0, 0] - room.low[0], y - room.high[1], whole[0, 2] - room.low[2]
            found[room.key] = place
            y -= float(room.high[1] - room.low[1]) + self.gap
        return found

    def _box(self, places: Mapping[str, Matrix], keys: Iterable[str]) -> Matrix:
        boxes = np.array([self.rooms[key].box(places[key]) for key in keys])
        return np.stack([boxes[:, 0].min(axis=0), boxes[:, 1].max(axis=0)])


def along(axis: int, way_mm: float) -> Matrix:
    """A shift along x, y or z (0, 1, 2) as a 4 x 4 matrix."""
    place = np.eye(4)
    place[axis, 3] = way_mm
    return place


def _onto_former(at_mm: float, lowest_mm: float | None, height_mm: float) -> Matrix:
    """From the design to the former: along the rods becomes x, across the element y; a turn, never a mirror."""
    if lowest_mm is None:
        rows = [(0.0, 1.0, 0.0, 0.0), (1.0, 0.0, 0.0, -at_mm), (0.0, 0.0, -1.0, height_mm)]
    else:
        rows = [(0.0, 1.0, 0.0, 0.0), (0.0, 0.0, 1.0, -lowest_mm), (1.0, 0.0, 0.0, height_mm - at_mm)]
    return np.array([*rows, (0.0, 0.0, 0.0, 1.0)])
