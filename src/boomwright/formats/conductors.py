"""Measures on the conductors of a STEP file: rods, and driven elements of every form. Coordinates in millimetres."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from typing import Any

import numpy as np

from boomwright.errors import MeasureError
from boomwright.formats.brep import FaceView, ReadBody, StepReading, Vector, volume_mm3

ALONG_Y = math.cos(math.radians(10.0))
"""An axis within 10 degrees of y counts as along y, so that a tilted rod is measured, not missed."""


def measure_rod(reading: StepReading, arguments: Mapping[str, Any], also: Sequence[Any]) -> float:
    """Of the straight rod `name`: `quantity` at_mm, height_mm, offset_y_mm, length_mm, diameter_mm or tilt_mm.

    The axis is that of the largest cylinder along y. Length is the body's whole extent along y. Tilt is how far the
    axis' ends are from its middle, in x and z together.
    """
    body = reading.body(arguments.get("name"))
    cylinders = _along_y(body)
    if not cylinders:
        raise MeasureError(f"{body.name}: no cylinder along y")
    face = max(cylinders, key=lambda f: f.radius_mm * (f.high[1] - f.low[1]))
    length = float(body.box[1, 1] - body.box[0, 1])
    middle_y = float(body.box[0, 1] + body.box[1, 1]) / 2.0
    middle = _axis_at(face, middle_y)
    end = _axis_at(face, middle_y + length / 2.0)
    values = {
        "at_mm": middle[0],
        "height_mm": middle[2],
        "offset_y_mm": middle_y,
        "length_mm": length,
        "diameter_mm": 2.0 * face.radius_mm,
        "tilt_mm": math.hypot(end[0] - middle[0], end[2] - middle[2]),
    }
    return float(_of(values, str(arguments["quantity"]), "rod"))


def measure_driven(reading: StepReading, arguments: Mapping[str, Any], also: Sequence[Any]) -> float:
    """Of the driven element `name`, whatever its form: one `quantity`, found on its faces.

    at_mm, height_mm    axis of the fed conductor; of a circular loop, of its lowest point
    length_mm           tip to tip along y, over the outside
    diameter_mm         of the wire
    gap_mm              opening at the feed, straight between the centres of the end faces
    spacing_mm          between the fed conductor's axis and the farthest one parallel to it
    drop_mm             fed conductor's axis below z = 0
    perimeter_mm        closed centreline of a loop, gap included
    bend_radius_mm      inside, of the widest bend
    extent_z_mm         overall height
    volume_mm3          of the metal
    """
    body = reading.body(arguments.get("name"))
    quantity = str(arguments["quantity"])
    if quantity in ("length_mm", "extent_z_mm"):
        return float(np.ptp(body.box[:, 1 if quantity == "length_mm" else 2]))
    if quantity == "volume_mm3":
        return volume_mm3(body.wrapped)
    ring = _ring(body)
    return _of_circle(ring, body, quantity) if ring is not None else _of_wire(body, quantity)


def _of_wire(body: ReadBody, quantity: str) -> float:
    """Straight, folded, or square loop: conductors along y, joined by bends."""
    cylinders = _along_y(body)
    low_end, high_end = _feed_ends(body)
    if not cylinders:
        raise MeasureError(f"{body.name}: no conductor along y")
    feed = (low_end.centre + high_end.centre) / 2.0
    fed = min(cylinders, key=lambda f: round(_apart(f, feed), 6))
    axis = _axis_at(fed, 0.0)
    across = max(_apart(face, axis) for face in cylinders)
    bends = [face.radius_mm for face in body.faces if face.kind == "torus"]
    values = {
        "at_mm": axis[0],
        "height_mm": axis[2],
        "drop_mm": -axis[2],
        "diameter_mm": 2.0 * fed.radius_mm,
        "gap_mm": high_end.centre[1] - low_end.centre[1],
        "spacing_mm": across,
        "perimeter_mm": 4.0 * across - (8.0 - 2.0 * math.pi) * max(bends, default=0.0),
        "bend_radius_mm": max(bends, default=fed.radius_mm) - fed.radius_mm,
    }
    return float(_of(values, quantity, "driven element"))


def _of_circle(ring: FaceView, body: ReadBody, quantity: str) -> float:
    low_end, high_end = _feed_ends(body)
    values = {
        "at_mm": ring.origin[0],
        "height_mm": ring.origin[2] - ring.radius_mm,
        "drop_mm": ring.radius_mm - ring.origin[2],
        "diameter_mm": 2.0 * ring.minor_mm,
        "gap_mm": np.linalg.norm(high_end.centre - low_end.centre),
        "perimeter_mm": 2.0 * math.pi * ring.radius_mm,
    }
    return float(_of(values, quantity, "circular loop"))


def _ring(body: ReadBody) -> FaceView | None:
    """The torus of a circular loop: one that reaches right across the body; bends do not."""
    for face in body.faces:
        if face.kind == "torus" and not _along_y(body):
            return face
    return None


def _feed_ends(body: ReadBody) -> tuple[FaceView, FaceView]:
    """The flat end faces at the feed: the nearest to y = 0 on either side."""
    flat = [face for face in body.faces if face.kind == "plane" and abs(face.direction[1]) > 0.5]
    low = [face for face in flat if face.centre[1] < 0.0]
    high = [face for face in flat if face.centre[1] > 0.0]
    if not low or not high:
        raise MeasureError(f"{body.name}: no opening at the feed")
    return max(low, key=lambda f: f.centre[1]), min(high, key=lambda f: f.centre[1])


def _along_y(body: ReadBody) -> list[FaceView]:
    return [f for f in body.faces if f.kind == "cylinder" and not f.concave and abs(f.direction[1]) > ALONG_Y]


def _axis_at(face: FaceView, y_mm: float) -> Vector:
    """The point of a cylinder's axis at this y."""
    point: Vector = face.origin + face.direction * ((y_mm - face.origin[1]) / face.direction[1])
    return point


def _apart(face: FaceView, point: Vector) -> float:
    """Distance of a point from a cylinder's axis."""
    offset = point - face.origin
    return float(np.linalg.norm(offset - face.direction * (offset @ face.direction)))


def _of(values: Mapping[str, Any], quantity: str, what: str) -> Any:
    if quantity not in values:
        raise MeasureError(f"no such quantity of a {what}: {quantity!r}")
    return values[quantity]
