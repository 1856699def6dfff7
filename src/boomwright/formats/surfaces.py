"""Points beside a face of a solid: height above its surface, outward normals, and samples on it. Millimetres."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Any

import numpy as np

from boomwright.formats.brep import FaceView, Vector

GRIDS = (2, 9)
"""Least samples a side of the parameter square; finer ones only where no coarse one falls inside the face."""

SAMPLE_EVERY_MM = 15.0
MOST_SAMPLES = 12


@dataclass(frozen=True)
class Beside:
    """Points (..., 3) [mm], their signed height above the surface [mm], positive outside, and outward unit normals."""

    points: Vector
    height_mm: Vector
    outward: Vector


def beside(face: FaceView, points: Vector) -> Beside:
    """Height and outward normal of points of any leading shape beside one face's whole surface."""
    if face.kind == "general":
        return _beside_general(face, points)
    offset = points - face.origin
    if face.kind == "plane":
        return Beside(points, offset @ face.direction, np.broadcast_to(face.direction, points.shape))
    if face.kind == "sphere":
        length = np.linalg.norm(offset, axis=-1)
        return _round(face, points, length - face.radius_mm, offset, length)
    along = offset @ face.direction
    radial = offset - along[..., None] * face.direction
    radius = np.linalg.norm(radial, axis=-1)
    if face.kind == "cylinder":
        return _round(face, points, radius - face.radius_mm, radial, radius)
    unit = radial / np.where(radius > 0.0, radius, 1.0)[..., None]
    if face.kind == "cone":
        slope, lean = np.cos(face.half_angle), np.sin(face.half_angle)
        height = (radius - face.radius_mm) * slope - along * lean
        return _round(face, points, height, unit * slope - face.direction * lean, np.ones_like(radius))
    tube = (radius - face.radius_mm)[..., None] * unit + along[..., None] * face.direction
    length = np.linalg.norm(tube, axis=-1)
    return _round(face, points, length - face.minor_mm, tube, length)


def _round(face: FaceView, points: Vector, height: Vector, normal: Vector, length: Vector) -> Beside:
    sense = -1.0 if face.concave else 1.0
    return Beside(points, sense * height, sense * normal / np.where(length > 0.0, length, 1.0)[..., None])


def _beside_general(face: FaceView, points: Vector) -> Beside:
    """By projection, one point at a time; the height's sign is that of the side the normal looks to."""
    from OCP.BRep import BRep_Tool
    from OCP.GeomAPI import GeomAPI_ProjectPointOnSurf
    from OCP.gp import gp_Pnt

    surface = BRep_Tool.Surface_s(face.face)
    flat = points.reshape(-1, 3)
    height, outward = np.full(len(flat), np.inf), np.zeros_like(flat)
    for index, point in enumerate(flat):
        foot = GeomAPI_ProjectPointOnSurf(gp_Pnt(*map(float, point)), surface)
        if foot.NbPoints() == 0:
            continue
        near = foot.NearestPoint()
        normal = _normal(face, surface, *foot.LowerDistanceParameters())
        away = point - np.array([near.X(), near.Y(), near.Z()])
        height[index] = np.copysign(np.linalg.norm(away), away @ normal)
        outward[index] = normal
    return Beside(points, height.reshape(points.shape[:-1]), outward.reshape(points.shape))


def _normal(face: FaceView, surface: Any, u: float, v: float) -> Vector:
    from OCP.TopAbs import TopAbs_REVERSED

    _, du, dv = _derivatives(surface, u, v)
    normal = np.cross(du, dv)
    length = float(np.linalg.norm(normal))
    sense = -1.0 if face.face.Orientation() == TopAbs_REVERSED else 1.0
    return normal * (sense / length) if length > 0.0 else normal


def _derivatives(surface: Any, u: float, v: float) -> tuple[Vector, Vector, Vector]:
    from OCP.gp import gp_Pnt, gp_Vec

    point, along_u, along_v = gp_Pnt(), gp_Vec(), gp_Vec()
    surface.D1(u, v, point, along_u, along_v)
    at, du, dv = (np.array([it.X(), it.Y(), it.Z()]) for it in (point, along_u, along_v))
    return at, du, dv


def samples(face: FaceView, margin_mm: float) -> Beside:
    """Points on a face, farther than the margin from its edges; none when the face is narrower than that."""
    from OCP.BRepAdaptor import BRepAdaptor_Surface
    from OCP.BRepTools import BRepTools
    from OCP.BRepTopAdaptor import BRepTopAdaptor_FClass2d
    from OCP.gp import gp_Pnt2d
    from OCP.TopAbs import TopAbs_IN

    empty = Beside(np.zeros((0, 3)), np.zeros(0), np.zeros((0, 3)))
    if np.sort(face.high - face.low)[1] <= 2.0 * margin_mm:
        return empty
    low_u, high_u, low_v, high_v = BRepTools.UVBounds_s(face.face)
    surface, domain = BRepAdaptor_Surface(face.face, False), BRepTopAdaptor_FClass2d(face.face, 1e-7)
    _, du, dv = _derivatives(surface, (low_u + high_u) / 2.0, (low_v + high_v) / 2.0)
    long_u, long_v = (max(1e-9, math.hypot(*along)) for along in (du, dv))
    step_u, step_v = margin_mm / long_u, margin_mm / long_v

    def inside(u: float, v: float) -> bool:
        around = ((u, v), (u - step_u, v), (u + step_u, v), (u, v - step_v), (u, v + step_v))
        return all(domain.Perform(gp_Pnt2d(*at)) == TopAbs_IN for at in around)

    for grid in GRIDS:
        us = _spread(low_u, high_u, grid, long_u)
        vs = _spread(low_v, high_v, grid, long_v)
        found = [(u, v) for u in us for v in vs if inside(u, v)]
        if found:
            points = np.array([_derivatives(surface, u, v)[0] for u, v in found])
            if face.kind != "general":
                return beside(face, points)
            return Beside(points, np.zeros(len(points)), np.array([_normal(face, surface, u, v) for u, v in found]))
    return empty


def _spread(low: float, high: float, fewest: int, mm_per_unit: float) -> list[float]:
    """Middles of equal parts of a parameter's range: at least `fewest`, more on a long side."""
    count = max(fewest, min(MOST_SAMPLES, math.ceil((high - low) * mm_per_unit / SAMPLE_EVERY_MM)))
    return [low + (high - low) * (i + 0.5) / count for i in range(count)]
