"""Ceilings of a mesh in print orientation that plastic would sag from: steep overhangs that nothing carries.

A face that looks down more than 45 degrees from the vertical needs something below it. What spans from wall to wall
is a bridge and carries itself (common practice): a level ceiling up to 10 mm, a vaulted one up to the crown of a lying
bore of 6 mm. A ledge no wider than one line of plastic hangs on its neighbour. Millimetres.
"""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray

if TYPE_CHECKING:
    from boomwright.formats.meshes import MeshReading

STEEPEST_DEG, ANGLE_ALLOWED_DEG = 45.0, 1.0
BRIDGE_MM = 10.0
BORE_MM, FACET_DEG = 6.0, 3.0
CROWN_MM = BORE_MM * math.sin(math.radians(STEEPEST_DEG + FACET_DEG))
"""Width of the part of a lying bore's roof that is flatter than 45 degrees, to the end of its outermost facets."""

LEVEL = math.cos(math.radians(1.0))
ON_BED_MM = 1e-3
STRIP_MM, MOST_STRIPS, LEAST_STRIPS = 0.25, 400, 8
MOST_DIRECTIONS = 8
LEVEL_MM = 1e-4
"""Corners within this height of each other are level: 32-bit coordinates on a bed of half a metre."""

Indices = NDArray[np.int64]


def measure_unsupported(reading: MeshReading, arguments: Mapping[str, Any], also: Sequence[Any]) -> float:
    """Area seen from below of ceilings that neither lie on the bed nor span from wall to wall [mm²].

    ledge_mm   widest ledge that needs nothing below it, default 0
    """
    ledge, total = float(arguments.get("ledge_mm", 0.0)), 0.0
    down = reading.normals[:, 2]
    lowest = reading.corners[:, :, 2].max(axis=1) - float(reading.vertices[:, 2].min())
    steep = down < -math.sin(math.radians(STEEPEST_DEG + ANGLE_ALLOWED_DEG))
    hanging = np.flatnonzero(steep & (lowest > ON_BED_MM))
    if hanging.size == 0:
        return 0.0
    edges, beside = _edges_of(reading, hanging)
    for patch in _patches(hanging, beside):
        own = np.isin(edges[:, 2], patch)
        rim = own & ~np.isin(beside, patch)
        span = BRIDGE_MM if bool(np.all(down[patch] < -LEVEL)) else CROWN_MM
        total += _hanging_mm2(_Rim(reading, edges[rim], beside[rim]), span, ledge)
    return total


def measure_midair_starts(reading: MeshReading, arguments: Mapping[str, Any], also: Sequence[Any]) -> float:
    """Number of places above the bed where material begins with nothing below or beside it: tips and edges."""
    heights = reading.vertices[:, 2]
    start, end = reading.triangles.ravel(), np.roll(reading.triangles, -1, axis=1).ravel()
    level = np.abs(heights[start] - heights[end]) < LEVEL_MM
    root = _joined(len(heights), start[level], end[level])
    has_lower = np.zeros(len(heights), dtype=bool)
    np.logical_or.at(has_lower, root[start], heights[end] < heights[start] - LEVEL_MM)
    np.logical_or.at(has_lower, root[end], heights[start] < heights[end] - LEVEL_MM)
    looks = np.zeros(len(heights))
    across = np.cross(reading.corners[:, 1] - reading.corners[:, 0], reading.corners[:, 2] - reading.corners[:, 0])
    for corner in range(3):
        np.add.at(looks, root[reading.triangles[:, corner]], across[:, 2])
    own = root == np.arange(len(heights))
    aloft = heights > heights.min() + ON_BED_MM
    return float(np.count_nonzero(own & ~has_lower & aloft & (looks < 0.0)))


class _Rim:
    """The rim of a ceiling seen from below: its edges in x and y, and which of them stand on something."""

    def __init__(self, reading: MeshReading, edges: Indices, beside: Indices) -> None:
        a, b = reading.vertices[edges[:, 0]], reading.vertices[edges[:, 1]]
        other = reading.corners[beside]
        along = b - a
        length = np.maximum(np.linalg.norm(along, axis=1), 1e-12)
        along = along / length[:, None]
        # The neighbour's corner that is not on the edge shows whether its face goes down from there.
        apart = other - a[:, None, :]
        away = apart - np.einsum("ijk,ik->ij", apart, along)[:, :, None] * along[:, None, :]
        farthest = np.argmax(np.linalg.norm(away, axis=2), axis=1)
        fall = away[np.arange(len(away)), farthest, 2]
        self.start, self.end, self.length = a[:, :2], b[:, :2], length
        self.carried = fall < -LEVEL_MM

    @property
    def directions(self) -> list[float]:
        """Directions in which plastic may be drawn across [rad]: square to the longest carried edges, and the axes."""
        run = self.end - self.start
        angles = np.degrees(np.arctan2(run[:, 1], run[:, 0])) + 90.0
        weights: dict[int, float] = {0: 0.0, 90: 0.0}
        for angle, length in zip(angles[self.carried], self.length[self.carried], strict=True):
            key = round(float(angle)) % 180
            weights[key] = weights.get(key, 0.0) + float(length)
        best = sorted(weights, key=lambda key: -weights[key])[:MOST_DIRECTIONS]
        return [math.radians(key) for key in best]


def _hanging_mm2(rim: _Rim, span_mm: float, ledge_mm: float) -> float:
    """Area that is not carried, lines of plastic laid in the best of the rim's directions [mm²]."""
    best = math.inf
    for angle in rim.directions:
        best = min(best, _hanging_along_mm2(rim, angle, span_mm, ledge_mm))
        if best == 0.0:
            break
    return best


def _hanging_along_mm2(rim: _Rim, angle: float, span_mm: float, ledge_mm: float) -> float:
    u, v = np.array([math.cos(angle), math.sin(angle)]), np.array([-math.sin(angle), math.cos(angle)])
    v0, v1, u0, u1 = rim.start @ v, rim.end @ v, rim.start @ u, rim.end @ u
    low, high = float(min(v0.min(), v1.min())), float(max(v0.max(), v1.max()))
    count = int(np.clip(math.ceil((high - low) / STRIP_MM), LEAST_STRIPS, MOST_STRIPS))
    lines = low + (high - low) * (np.arange(count) + 0.5) / count
    total = 0.0
    crosses = (v0[None, :] > lines[:, None]) != (v1[None, :] > lines[:, None])
    for line, hit in zip(lines, crosses, strict=True):
        index = np.flatnonzero(hit)
        places = u0[index] + (line - v0[index]) / (v1[index] - v0[index]) * (u1[index] - u0[index])
        order = np.argsort(places)
        places, carried = places[order], rim.carried[index][order]
        for first in range(0, len(places) - 1, 2):
            run, ends = places[first + 1] - places[first], carried[first : first + 2]
            if run > ledge_mm and not (ends.all() and run <= span_mm):
                total += float(run) * (high - low) / count
    return total


def _edges_of(reading: MeshReading, faces: Indices) -> tuple[Indices, Indices]:
    """Edges (from, to, triangle) of these triangles, and the triangle on the other side of each; -1 for none."""
    count = len(reading.vertices)
    start, end = reading.triangles.ravel(), np.roll(reading.triangles, -1, axis=1).ravel()
    owner = np.repeat(np.arange(len(reading.triangles)), 3)
    forward, backward = start * count + end, end * count + start
    order = np.argsort(forward)
    place = np.minimum(np.searchsorted(forward[order], backward), len(order) - 1)
    found = order[place]
    other = np.where(forward[found] == backward, owner[found], -1)
    wanted = np.isin(owner, faces)
    return np.stack([start, end, owner], axis=1)[wanted], other[wanted]


def _patches(faces: Indices, beside: Indices) -> list[Indices]:
    """Groups of triangles that share edges."""
    owner = np.repeat(faces, 3)
    inside = np.isin(beside, faces)
    place = {int(face): index for index, face in enumerate(faces)}
    one = np.array([place[int(face)] for face in owner[inside]], dtype=np.int64)
    other = np.array([place[int(face)] for face in beside[inside]], dtype=np.int64)
    root = _joined(len(faces), one, other)
    return [faces[root == label] for label in np.unique(root)]


def _joined(count: int, one: Indices, other: Indices) -> Indices:
    """For each of `count` things the lowest one it hangs together with by these pairs, shape (count,)."""
    root = np.arange(count)
    while not np.array_equal(root[one], root[other]):
        low, high = np.minimum(root[one], root[other]), np.maximum(root[one], root[other])
        np.minimum.at(root, high, low)
        while not np.array_equal(root, root[root]):
            root = root[root]
    return root
