"""Flat plates read back from a nested DXF file: the kerf undone, turned back into their own u and v. Millimetres.

A measure is told where on the sheet a plate was drawn and which motion takes the sheet into the plate's own frame:

    {"box": [x0, y0, x1, y1], "frame": 4 x 4}

Plates have straight sides; the small arcs that the kerf leaves at outer corners vanish when it is undone.
"""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np

from boomwright.errors import MeasureError
from boomwright.formats.outlines import SAME_MM, DxfReading, Outline, Segment

Arguments = Mapping[str, Any]
Points = Any
"""Points (n, 2) or (n, 3) [mm]."""

FARTHEST_MM = 3.0
"""How far from its planned place a slot, a foot or a notch is looked for, so that a shifted one is measured."""

PARALLEL = 1e-9


@dataclass(frozen=True)
class PlateRead:
    """A plate as cut: its outline and its holes as points (n, 2) on the sheet, outline anticlockwise."""

    outer: Points
    holes: tuple[Points, ...]


def plate_on(reading: DxfReading, box: Sequence[float], layer: str, kerf_mm: float) -> PlateRead:
    """The plate drawn inside a box of the sheet; kept with the reading. MeasureError when there is none."""
    key = (tuple(map(float, box)), layer, kerf_mm)
    if key not in reading.plates:
        x0, y0, x1, y1 = key[0]
        inside = [o for o in reading.on(layer) if o.closed and _inside(o, (x0, y0, x1, y1))]
        if not inside:
            raise MeasureError(f"{reading.path.name}: no plate between ({x0:.5g}, {y0:.5g}) and ({x1:.5g}, {y1:.5g})")
        outer = max(inside, key=lambda o: o.polygon.area)
        holes = [as_cut(o, -kerf_mm / 2.0) for o in inside if o is not outer]
        reading.plates[key] = PlateRead(as_cut(outer, kerf_mm / 2.0), tuple(holes))
    found: PlateRead = reading.plates[key]
    return found


def _inside(outline: Outline, box: Sequence[float]) -> bool:
    xs, ys = ([s.reach(axis) for s in outline.segments] for axis in (0, 1))
    return bool(
        min(x[0] for x in xs) >= box[0]
        and max(x[1] for x in xs) <= box[2]
        and min(y[0] for y in ys) >= box[1]
        and max(y[1] for y in ys) <= box[3]
    )


def as_cut(outline: Outline, inward_mm: float) -> Points:
    """The corners of a drawn outline moved inward, anticlockwise (n, 2); negative moves outward, as for a hole."""
    sides = [s for s in outline.segments if s.chord_mm >= SAME_MM and not _corner_arc(s, inward_mm)]
    if any(s.bulge for s in sides) or len(sides) < 3:
        raise MeasureError("a plate has a round side where a straight one was planned")
    anticlockwise = outline.polygon.exterior.is_ccw
    turn = 1.0 if anticlockwise else -1.0
    lines = []
    for s in sides:
        along = np.array([s.x1 - s.x0, s.y1 - s.y0]) / s.chord_mm
        left = np.array([-along[1], along[0]]) * turn
        lines.append((np.array([s.x0, s.y0]) + inward_mm * left, along, np.array([s.x1, s.y1]) + inward_mm * left))
    corners = [_meeting(lines[i - 1], lines[i]) for i in range(len(lines))]
    points = np.array(corners)
    return points if anticlockwise else points[::-1]


def _corner_arc(segment: Segment, inward_mm: float) -> bool:
    return segment.bulge != 0.0 and segment.radius_mm <= 2.0 * abs(inward_mm) + SAME_MM


def _meeting(one: tuple[Points, Points, Points], other: tuple[Points, Points, Points]) -> Points:
    """Where two sides cross; of two in one line, the place where the first ends."""
    (a, d, end), (b, e, _) = one, other
    across = float(d[0] * e[1] - d[1] * e[0])
    if abs(across) < PARALLEL:
        return end
    gap = b - a
    return a + d * float(gap[0] * e[1] - gap[1] * e[0]) / across


def moved(points: Points, frame: Any) -> Points:
    """Points of the sheet (n, 2) in the plate's own frame, (n, 2)."""
    matrix = np.asarray(frame, dtype=float)
    return points @ matrix[:2, :2].T + matrix[:2, 3]


def _plate(reading: DxfReading, arguments: Arguments) -> PlateRead:
    plate = arguments["plate"]
    read = plate_on(reading, plate["box"], str(arguments["layer"]), float(arguments["kerf_mm"]))
    outer, *holes = (moved(points, plate["frame"]) for points in (read.outer, *read.holes))
    return PlateRead(outer, tuple(holes))


def measure_plate_slots(reading: DxfReading, arguments: Arguments, also: Sequence[Any]) -> float:
    """Of the holes of a plate, kerf undone, against the planned `rects` [[u0, u1, v0, v1], ..] [mm].

    quantity   count = number of holes; error_mm = the farthest that any side is from its plan; width_mm = of each
               slot the side nearer to `width_mm`, and of those the one farthest from it
    """
    holes = _plate(reading, arguments).holes
    quantity = str(arguments["quantity"])
    if quantity == "count":
        return float(len(holes))
    boxes = np.array([[*h.min(axis=0), *h.max(axis=0)] for h in holes]).reshape(-1, 4)[:, [0, 2, 1, 3]]
    found = [_nearest_box(boxes, np.asarray(rect, dtype=float), reading) for rect in arguments["rects"]]
    if quantity == "error_mm":
        return float(np.abs(np.array(found) - np.asarray(arguments["rects"], dtype=float)).max())
    if quantity == "width_mm":
        wanted = float(arguments["width_mm"])
        widths = [min((b[1] - b[0], b[3] - b[2]), key=lambda side: abs(side - wanted)) for b in found]
        return float(max(widths, key=lambda width: abs(width - wanted)))
    raise MeasureError(f"no such quantity of slots: {quantity!r}")


def _nearest_box(boxes: Points, rect: Points, reading: DxfReading) -> Points:
    apart = np.abs(boxes - rect).max(axis=1) if len(boxes) else np.array([math.inf])
    best = int(np.argmin(apart))
    if apart[best] > FARTHEST_MM:
        raise MeasureError(
            f"{reading.path.name}: no slot within {FARTHEST_MM:g} mm of u {rect[0]:.5g}, v {rect[2]:.5g}"
        )
    return boxes[best]


def measure_plate_feet(reading: DxfReading, arguments: Arguments, also: Sequence[Any]) -> float:
    """The farthest that a side of a plate's planned feet `rects` [[u0, u1, v0, v1], ..] is from where it was cut [mm].

    A side is looked for among the outline's straight sides that run the same way and pass the rectangle's middle.
    """
    outer = _plate(reading, arguments).outer
    starts, ends = outer, np.roll(outer, -1, axis=0)
    worst = 0.0
    for u0, u1, v0, v1 in arguments["rects"]:
        level = []
        for axis, values, middle in ((0, (u0, u1), (v0 + v1) / 2.0), (1, (v0, v1), (u0 + u1) / 2.0)):
            straight = np.abs(ends[:, axis] - starts[:, axis]) < SAME_MM
            low = np.minimum(starts[:, 1 - axis], ends[:, 1 - axis])
            high = np.maximum(starts[:, 1 - axis], ends[:, 1 - axis])
            places = starts[straight & (low < middle) & (high > middle), axis]
            level.append([float(np.abs(places - value).min(initial=math.inf)) for value in values])
        # A foot has three sides: the fourth is where it grows out of the plate.
        errors = sorted(error for pair in level for error in pair)[:3]
        worst = max(worst, *errors)
    if worst > FARTHEST_MM:
        raise MeasureError(f"{reading.path.name}: a foot is missing")
    return worst


def measure_plate_vee(reading: DxfReading, arguments: Arguments, also: Sequence[Any]) -> float:
    """Of the V nearest to u = `at_mm` in a plate's edge, where a round bar of `diameter_mm` rests in it [mm].

    quantity   at_mm = u of the bar's axis; height_mm = v of it; over_foot_mm = its height above the edge that the
               plate stands on between its feet
    """
    outer = _plate(reading, arguments).outer
    at, radius = float(arguments["at_mm"]), float(arguments["diameter_mm"]) / 2.0
    centre = resting_in(outer, at, radius)
    if centre is None:
        raise MeasureError(f"{reading.path.name}: no notch within {FARTHEST_MM:g} mm of u = {at:g}")
    quantity = str(arguments["quantity"])
    if quantity == "over_foot_mm":
        return float(centre[1] - _foot_line(outer))
    return float(centre[{"at_mm": 0, "height_mm": 1}[quantity]])


def resting_in(outer: Points, at_mm: float, radius_mm: float) -> Points | None:
    """Where the axis of a round bar comes to lie in the V nearest to a place along u; None where there is none."""
    before, after = np.roll(outer, 1, axis=0), np.roll(outer, -1, axis=0)
    valley = (before[:, 1] > outer[:, 1] + SAME_MM) & (after[:, 1] > outer[:, 1] + SAME_MM)
    # Run anticlockwise, the edge of a notch turns to the right at its bottom.
    turn = np.cross(np.c_[outer - before, np.zeros(len(outer))], np.c_[after - outer, np.zeros(len(outer))])[:, 2]
    near = np.flatnonzero(valley & (turn < 0.0) & (np.abs(outer[:, 0] - at_mm) <= FARTHEST_MM))
    if not len(near):
        return None
    i = min(near, key=lambda k: abs(outer[k, 0] - at_mm))
    arms = [end - outer[i] for end in (before[i], after[i])]
    lengths = [float(np.linalg.norm(arm)) for arm in arms]
    one, two = (arm / length for arm, length in zip(arms, lengths, strict=True))
    half = math.acos(float(np.clip(one @ two, -1.0, 1.0))) / 2.0
    if radius_mm / math.tan(half) > min(lengths) + SAME_MM:
        return None
    middle = (one + two) / np.linalg.norm(one + two)
    return outer[i] + middle * radius_mm / math.sin(half)


def _foot_line(outer: Points) -> float:
    """v of the edge that a plate stands on: the lowest level at which its outline looks down, but for its feet."""
    ends = np.roll(outer, -1, axis=0)
    level = (np.abs(ends[:, 1] - outer[:, 1]) < SAME_MM) & (ends[:, 0] > outer[:, 0])
    heights = np.sort(outer[level, 1])
    above = heights[heights > heights.min(initial=math.inf) + SAME_MM]
    if not len(above):
        raise MeasureError("the plate has no edge to stand on between its feet")
    return float(above[0])


def measure_plate_level(reading: DxfReading, arguments: Arguments, also: Sequence[Any]) -> float:
    """v of the level side of a plate's outline that passes u = `at_mm` nearest to v = `v_mm` [mm]."""
    outer = _plate(reading, arguments).outer
    ends = np.roll(outer, -1, axis=0)
    at, v = float(arguments["at_mm"]), float(arguments["v_mm"])
    low, high = np.minimum(outer[:, 0], ends[:, 0]), np.maximum(outer[:, 0], ends[:, 0])
    level = (np.abs(ends[:, 1] - outer[:, 1]) < SAME_MM) & (low < at) & (high > at)
    found = min(outer[level, 1], key=lambda value: abs(value - v), default=math.inf)
    if abs(found - v) > FARTHEST_MM:
        raise MeasureError(f"{reading.path.name}: no level side within {FARTHEST_MM:g} mm of v = {v:g}")
    return float(found)


MEASURES = {
    "plate_slots": measure_plate_slots,
    "plate_feet": measure_plate_feet,
    "plate_vee": measure_plate_vee,
    "plate_level": measure_plate_level,
}
