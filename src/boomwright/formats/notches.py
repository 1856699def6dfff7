"""V notches and the axis of a rod that rests in them, from the faces of a STEP file or the triangles of a mesh.

A rod of radius r rests on two faces with outward normals n and distances d from the origin (n . p = d) where
n . axis = d + r for both: two straight lines in the xz plane, whatever the slopes of the faces.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np

from boomwright.errors import MeasureError
from boomwright.formats.brep import StepReading, Vector

LEAST_SLOPE = 0.05
"""Least x and z part of a notch face's unit normal; anything flatter or steeper is a floor or a wall."""

ALONG_Y = 1e-3
"""Most y part of a notch face's unit normal."""

CONTACT_MM = 0.02
"""How far outside a face's box the contact may lie by rounding."""

SAME_ANGLE_RAD = 2e-3
SAME_PLANE_MM = 0.02


@dataclass(frozen=True)
class Slope:
    """One face of a notch: unit normal (x, z), distance from the origin [mm], the box it fills in x, y, z [mm]."""

    normal: Vector
    distance_mm: float
    low: Vector
    high: Vector


def resting_axis(slopes: Sequence[Slope], arguments: Mapping[str, Any], where: str) -> float:
    """Axis of a round rod resting between two slopes near `at_mm`, both within `side_y_mm` [mm].

    Arguments: at_mm, side_y_mm (low, high), diameter_mm, quantity at_mm or height_mm. Raises MeasureError when no
    two faces carry the rod there.
    """
    at, radius = float(arguments["at_mm"]), float(arguments["diameter_mm"]) / 2.0
    low_y, high_y = arguments["side_y_mm"]
    reach = 2.0 * radius + 5.0
    near = [
        s
        for s in slopes
        if s.high[1] > low_y + 1e-6 and s.low[1] < high_y - 1e-6 and s.low[0] < at + reach and s.high[0] > at - reach
    ]
    best: Vector | None = None
    for rising in (s for s in near if s.normal[0] > 0.0):
        for falling in (s for s in near if s.normal[0] < 0.0):
            axis = _axis(rising, falling, radius)
            if axis is not None and (best is None or abs(axis[0] - at) < abs(best[0] - at)):
                best = axis
    if best is None or abs(best[0] - at) > reach:
        raise MeasureError(f"{where}: no notch near x = {at:g} between y = {low_y:g} and {high_y:g}")
    quantity = str(arguments["quantity"])
    if quantity not in ("at_mm", "height_mm"):
        raise MeasureError(f"no such quantity of a resting axis: {quantity!r}")
    return float(best[0] if quantity == "at_mm" else best[1])


def _axis(one: Slope, other: Slope, radius_mm: float) -> Vector | None:
    """Where the rod's axis comes to lie (x, z), or None when it does not touch both faces within their bounds."""
    if min(one.high[1], other.high[1]) <= max(one.low[1], other.low[1]):
        return None
    matrix = np.array([one.normal, other.normal])
    axis: Vector = np.linalg.solve(matrix, np.array([one.distance_mm, other.distance_mm]) + radius_mm)
    for slope in (one, other):
        contact = axis - radius_mm * slope.normal
        if np.any(contact < slope.low[[0, 2]] - CONTACT_MM) or np.any(contact > slope.high[[0, 2]] + CONTACT_MM):
            return None
    return axis


def _is_slope(normals: Vector) -> Any:
    return (np.abs(normals[:, 1]) < ALONG_Y) & (np.abs(normals[:, 0]) > LEAST_SLOPE) & (normals[:, 2] > LEAST_SLOPE)


def slopes_of_bodies(reading: StepReading, name: str | None) -> list[Slope]:
    """The plane faces of a STEP file that could carry a rod along y."""
    found = []
    for body in reading.bodies if name is None else (reading.body(name),):
        planes = [face for face in body.faces if face.kind == "plane"]
        if not planes:
            continue
        chosen = _is_slope(np.array([face.direction for face in planes]))
        for face in (face for face, good in zip(planes, chosen, strict=True) if good):
            normal = face.direction[[0, 2]] / np.linalg.norm(face.direction[[0, 2]])
            found.append(Slope(normal, float(normal @ face.origin[[0, 2]]), face.low, face.high))
    return found


def slopes_of_triangles(vertices: Vector, faces: Any, normals: Vector) -> list[Slope]:
    """The flat patches of a mesh that could carry a rod along y; the plane is fitted to all corners of a patch.

    vertices  corners [mm], shape (n, 3); faces  corner indices, shape (m, 3); normals  unit normals, shape (m, 3)
    """
    chosen = np.flatnonzero(_is_slope(normals))
    if chosen.size == 0:
        return []
    corners = vertices[faces[chosen]]
    flat = normals[chosen][:, [0, 2]]
    found = []
    for group in _patches(flat, corners):
        points = corners[group].reshape(-1, 3)
        centre = points[:, [0, 2]].mean(axis=0)
        _, _, directions = np.linalg.svd(points[:, [0, 2]] - centre, full_matrices=False)
        normal = directions[1] * (1.0 if directions[1] @ flat[group[0]] > 0.0 else -1.0)
        found.append(Slope(normal, float(normal @ centre), points.min(axis=0), points.max(axis=0)))
    return found


def _patches(flat: Vector, corners: Vector) -> list[Any]:
    """Indices of triangles that belong together: same slope, same plane, no gap in y between them."""
    angle = np.arctan2(flat[:, 0], flat[:, 1])
    patches = []
    for alike in _split(np.arange(len(angle)), angle, SAME_ANGLE_RAD):
        mean = flat[alike].mean(axis=0)
        distance = corners[:, :, [0, 2]].mean(axis=1) @ (mean / np.linalg.norm(mean))
        for plane in _split(alike, distance, SAME_PLANE_MM):
            low = corners[plane][:, :, 1].min(axis=1)
            order = np.argsort(low, kind="stable")
            reach = np.maximum.accumulate(corners[plane][:, :, 1].max(axis=1)[order])
            gaps = np.flatnonzero(low[order][1:] > reach[:-1] + 1e-3) + 1
            patches += np.split(plane[order], gaps)
    return patches


def _split(members: Any, values: Vector, gap: float) -> list[Any]:
    """Members in groups whose sorted values leave no gap."""
    order = members[np.argsort(values[members], kind="stable")]
    return list(np.split(order, np.flatnonzero(np.diff(values[order]) > gap) + 1))


def measure_resting_axis(reading: StepReading, arguments: Mapping[str, Any], also: Sequence[Any]) -> float:
    """Axis of the nominal rod resting in the notch near `at_mm`, from the plane faces; see `resting_axis`."""
    return resting_axis(slopes_of_bodies(reading, arguments.get("name")), arguments, reading.path.name)


BODY_MEASURES: dict[str, Callable[[Any, Mapping[str, Any], Sequence[Any]], float]] = {
    "resting_axis": measure_resting_axis,
}
