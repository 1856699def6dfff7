"""A mesh against the solid it was made from: how far off its points are, and what of the solid it leaves out.

The printer's offsets are undone face by face: a face may stand where the solid has it, or moved into the material by
one of the offsets, and nowhere else. Coordinates in millimetres.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from boomwright.formats.brep import FaceView, StepReading, Vector
from boomwright.formats.surfaces import Beside, beside, samples

REACH_MM = 0.5
"""Faces farther from a triangle than this are not asked; a deviation beyond it is reported as at least this."""

MATCHED_MM = 0.01
"""A triangle this near to a face's surface may stand for the face."""

EDGE_MM = 0.02
"""Samples keep this far from a face's edge, where chords of its rim may cut in."""

CORNER_REACH = 6.0
"""A sharp corner between two moved faces runs ahead of them, by up to this many times their move."""

MOST_MOVES = 3
"""None, by the growth, by half the shrink."""

Indices = NDArray[np.int64]


@dataclass(frozen=True)
class Offsets:
    """What the printer's profile moves [mm]: side faces by the growth, bores and channels by half the shrink."""

    growth_mm: float = 0.0
    hole_shrink_mm: float = 0.0

    @property
    def largest_mm(self) -> float:
        """The largest move of any face [mm]."""
        return max(abs(self.growth_mm), abs(self.hole_shrink_mm) / 2.0)

    def moves(self, face: FaceView, outward: Vector) -> list[Vector]:
        """The moves into the material [mm] that points of this face may show; `outward` unit normals (n, 3)."""
        level = np.hypot(outward[..., 0], outward[..., 1])
        moves = [np.zeros_like(level)]
        if self.growth_mm:
            moves.append(self.growth_mm * level)
        if self.hole_shrink_mm and face.kind == "plane":
            moves.append(self.hole_shrink_mm / 2.0 * level)
        elif self.hole_shrink_mm and (face.concave or face.kind == "general"):
            moves.append(np.full_like(level, self.hole_shrink_mm / 2.0 * np.cos(face.half_angle)))
        return moves


class Match:
    """Which triangle stands for which face.

    corners  triangles [mm], shape (m, 3, 3)
    """

    def __init__(self, corners: Vector, reading: StepReading, offsets: Offsets) -> None:
        self._corners = corners
        self._faces = [face for body in reading.bodies for face in body.faces]
        self._offsets = offsets
        self._stand_ins: dict[int, Indices] = {}

    @cached_property
    def _residual(self) -> Vector:
        """For each triangle its distance from the nearest face, offsets undone [mm]; corners and middle count."""
        corners = self._corners
        low, high = corners.min(axis=1), corners.max(axis=1)
        order = np.argsort(low[:, 0], kind="stable")
        starts = low[order, 0]
        points = np.concatenate([corners, corners.mean(axis=1, keepdims=True)], axis=1)
        best = np.full(len(corners), np.inf)
        margin = CORNER_REACH * self._offsets.largest_mm
        # Analytic surfaces first: the others cost a projection a point, and are asked only for what is left.
        for face in sorted(self._faces, key=lambda f: f.kind == "general"):
            floor, ceiling = face.low - margin - REACH_MM, face.high + margin + REACH_MM
            near = order[np.searchsorted(starts, floor[0]) : np.searchsorted(starts, ceiling[0])]
            near = near[np.all(low[near] >= floor, axis=1) & np.all(high[near] <= ceiling, axis=1)]
            if face.kind == "general":
                near = near[best[near] > MATCHED_MM]
            if near.size == 0:
                self._stand_ins[id(face)] = near
                continue
            residual = self._to_face(face, points[near], margin)
            best[near] = np.minimum(best[near], residual)
            self._stand_ins[id(face)] = near[residual <= MATCHED_MM]
        return best

    def _to_face(self, face: FaceView, points: Vector, margin: float) -> Vector:
        """Distance of triangles (k, 4 points, 3) from a face: off its surface, or beyond its box; shape (k,)."""
        at = beside(face, points)
        off = np.min(
            [np.abs(at.height_mm + move).max(axis=1) for move in self._offsets.moves(face, at.outward)], axis=0
        )
        beyond = np.maximum(face.low - margin - points, points - face.high - margin).max(axis=(1, 2))
        result: Vector = np.maximum(off, beyond)
        return result

    @cached_property
    def deviation_mm(self) -> float:
        """The farthest triangle's distance [mm]."""
        residual = self._residual.copy()
        for index in np.flatnonzero(np.isinf(residual))[:1000]:
            residual[index] = max(REACH_MM, self._to_boxes(self._corners[index]))
        residual[np.isinf(residual)] = REACH_MM
        return float(residual.max(initial=0.0))

    def _to_boxes(self, triangle: Vector) -> float:
        """Least distance from a triangle's farthest corner to any face's box [mm]."""
        lows, highs = self._boxes
        outside = np.maximum(0.0, np.maximum(lows - triangle[:, None], triangle[:, None] - highs))
        return float(np.linalg.norm(outside, axis=2).min(axis=1).max())

    @cached_property
    def _boxes(self) -> tuple[Vector, Vector]:
        return np.array([face.low for face in self._faces]), np.array([face.high for face in self._faces])

    @cached_property
    def coverage_mm(self) -> float:
        """The farthest sample of the solid's surface from the triangles that stand for its face [mm]."""
        _ = self._residual
        margin = EDGE_MM + 2.0 * self._offsets.largest_mm
        drawn = [(face, samples(face, margin)) for face in self._faces]
        points = np.concatenate([at.points for _, at in drawn])
        if len(points) == 0:
            return 0.0
        outward = np.concatenate([at.outward for _, at in drawn])
        moves = np.concatenate([self._columns(face, at.outward) for face, at in drawn])
        first = np.cumsum([0] + [len(at.points) for _, at in drawn])
        pairs = [self._pairs(face, at, start) for (face, at), start in zip(drawn, first[:-1], strict=True)]
        sample, triangle = np.concatenate(pairs, axis=1)
        apart = closest_on_triangles(points[sample], self._corners[triangle]) - points[sample]
        along = np.einsum("ij,ij->i", apart, outward[sample])
        aside = np.linalg.norm(apart - along[:, None] * outward[sample], axis=1)
        off = np.abs(along[:, None] + moves[sample]).min(axis=1)
        worst = np.full(len(points), np.inf)
        np.minimum.at(worst, sample, np.hypot(aside, off))
        for index in np.flatnonzero(np.isinf(worst)):
            worst[index] = self._to_mesh(points[index])
        return float(worst.max())

    def _columns(self, face: FaceView, outward: Vector) -> Vector:
        """The moves a face's samples may show, shape (n, MOST_MOVES); the first, none, again where there are fewer."""
        columns = self._offsets.moves(face, outward)
        return np.stack(columns + columns[:1] * (MOST_MOVES - len(columns)), axis=1)

    def _pairs(self, face: FaceView, at: Beside, first: int) -> Indices:
        """Samples of a face, counted from `first`, and the triangles near them that stand for it; shape (2, k)."""
        triangles = self._stand_ins[id(face)]
        corners = self._corners[triangles]
        reach = self._offsets.largest_mm + 2.0 * MATCHED_MM
        low, high = corners.min(axis=1) - reach, corners.max(axis=1) + reach
        near = np.all((at.points[:, None] >= low) & (at.points[:, None] <= high), axis=2)
        sample, triangle = np.nonzero(near)
        return np.stack([sample + first, triangles[triangle]])

    def _to_mesh(self, point: Vector) -> float:
        """Distance of a point from the whole mesh [mm], at least MATCHED_MM x 2: nothing stands for its face there."""
        nearest = closest_on_triangles(np.broadcast_to(point, (len(self._corners), 3)), self._corners)
        return max(2.0 * MATCHED_MM, float(np.linalg.norm(nearest - point, axis=1).min()))


def closest_on_triangles(points: Vector, triangles: Vector) -> Vector:
    """The closest point of each triangle (n, 3, 3) to the point of the same row (n, 3); shape (n, 3)."""
    a, b, c = triangles[:, 0], triangles[:, 1], triangles[:, 2]
    across = np.cross(b - a, c - a)
    area = np.einsum("ij,ij->i", across, across)
    flat = np.where(area > 0.0, area, 1.0)
    height = np.einsum("ij,ij->i", points - a, across) / flat
    foot = points - height[:, None] * across
    inside = area > 0.0
    for start, end in ((a, b), (b, c), (c, a)):
        inside &= np.einsum("ij,ij->i", np.cross(end - start, foot - start), across) >= 0.0
    best = np.where(inside[:, None], foot, a)
    distance = np.where(inside, np.linalg.norm(foot - points, axis=1), np.inf)
    for start, end in ((a, b), (b, c), (c, a)):
        edge = end - start
        length = np.einsum("ij,ij->i", edge, edge)
        part = np.einsum("ij,ij->i", points - start, edge) / np.where(length > 0.0, length, 1.0)
        candidate = start + np.clip(part, 0.0, 1.0)[:, None] * edge
        apart = np.linalg.norm(candidate - points, axis=1)
        nearer = ~inside & (apart < distance)
        best = np.where(nearer[:, None], candidate, best)
        distance = np.where(nearer, apart, distance)
    return best
