"""Elements of one conductor: nodes along its generating curve, closer where the charge is singular.

Only the half at y >= 0 is meshed; the other half is its mirror image. A rod's curve runs from its middle to its tip and
over the flat end face to the axis, a ring's from the feed to the far crossing of y = 0.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from itertools import pairwise

import numpy as np

from boomwright.rf.arrays import Floats, Integers
from boomwright.rf.conductors import Conductor, Folded, Loop, Rod
from boomwright.rf.outline import outline

GROWTH = 1.4
TIP_ELEMENT_RADII = 0.005
GAP_EDGE_SHARE = 0.1
CAP_NODES = (1.0, 0.996, 0.985, 0.94, 0.8, 0.45, 0.0)
ELEMENTS_PER_HALF_CIRCLE = 8.0


@dataclass(frozen=True)
class Mesh:
    """Elements of a conductor's half; all arrays run over elements (N,) or (N, 3).

    start, tangent, normal  centre of the first ring [m], direction of the axis, in-plane normal there
    travel_m                how far the axis runs along the element [m]; 0 on an end face
    bend_rad_m              curvature of the axis toward the normal [rad/m]
    radius_m                ring radius at start and end [m], (N, 2)
    closed                  True: the last node carries current on (ring); False: it ends on the axis (rod)
    """

    start: Floats
    tangent: Floats
    normal: Floats
    travel_m: Floats
    bend_rad_m: Floats
    radius_m: Floats
    closed: bool

    @property
    def elements(self) -> int:
        """Number of elements N."""
        return len(self.travel_m)

    @property
    def size_m(self) -> Floats:
        """Length of each element along the generating curve [m], (N,)."""
        return np.hypot(self.travel_m, self.radius_m[:, 1] - self.radius_m[:, 0])

    @property
    def cap(self) -> np.ndarray[tuple[int, ...], np.dtype[np.bool_]]:
        """True for the elements of the end face, (N,)."""
        face: np.ndarray[tuple[int, ...], np.dtype[np.bool_]] = self.travel_m == 0.0
        return face


@dataclass(frozen=True)
class Rings:
    """Rings of a mesh at given places: centre, axis and in-plane normal (..., 3), radius [m] (...)."""

    centre: Floats
    tangent: Floats
    normal: Floats
    radius_m: Floats


def rings(mesh: Mesh, elements: Integers, places: Floats) -> Rings:
    """Rings at `places` (0 to 1) of the given elements; the two arrays broadcast to the shape (...) of the result."""
    travel = mesh.travel_m[elements] * places
    turn = mesh.bend_rad_m[elements] * travel
    tangent, normal = mesh.tangent[elements], mesh.normal[elements]
    radius = radius_at(mesh, elements, places)
    if not turn.any():
        centre = mesh.start[elements] + travel[..., None] * tangent
        everywhere = (*turn.shape, 3)
        return Rings(centre, np.broadcast_to(tangent, everywhere), np.broadcast_to(normal, everywhere), radius)
    forward = travel * np.sinc(turn / np.pi)
    aside = travel * (turn / 2.0) * np.sinc(turn / (2.0 * np.pi)) ** 2
    centre = mesh.start[elements] + forward[..., None] * tangent + aside[..., None] * normal
    cosine, sine = np.cos(turn)[..., None], np.sin(turn)[..., None]
    return Rings(centre, tangent * cosine + normal * sine, normal * cosine - tangent * sine, radius)


def radius_at(mesh: Mesh, elements: Integers, places: Floats) -> Floats:
    """Ring radius [m] at `places` (0 to 1) of the given elements; broadcast."""
    start = mesh.radius_m[elements, 0]
    radius: Floats = start + (mesh.radius_m[elements, 1] - start) * places
    return radius


def plain_shapes(mesh: Mesh, elements: Integers, places: Floats) -> tuple[tuple[Floats, Floats], Floats]:
    """The m = 0 hats of elements' starts and ends at `places`, and the share of charge there; all broadcast.

    Along a conductor hats are linear and the charge is even; on an end face the current grows with the square of the
    radius, so that the charge is even over the face and finite on the axis.
    """
    start, end = mesh.radius_m[elements, 0], mesh.radius_m[elements, 1]
    here = radius_at(mesh, elements, places)
    rising = places * (start + here) / (start + end)
    return (1.0 - rising, rising), 2.0 * here / (start + end)


def graded_nodes(length_m: float, largest_m: float, first_m: float, last_m: float, refinement: int = 0) -> Floats:
    """Nodes from 0 to length [m]: elements grow from `first_m` and `last_m` at the ends to at most `largest_m`.

    Each refinement halves every element in the measure of the grading.
    """
    rise = np.geomspace(0.01 * min(first_m, last_m, length_m), length_m / 2.0, 400)
    place = np.concatenate([[0.0], rise, length_m - rise[-2::-1], [length_m]])
    size = np.minimum(largest_m, np.minimum(first_m + GROWTH * place, last_m + GROWTH * (length_m - place)))
    density = 1.0 / size
    count = np.concatenate([[0.0], np.cumsum((density[1:] + density[:-1]) / 2.0 * np.diff(place))])
    wanted = max(1, math.ceil(count[-1] - 1e-9)) * 2**refinement
    nodes: Floats = np.interp(np.linspace(0.0, count[-1], wanted + 1), count, place)
    nodes[0], nodes[-1] = 0.0, length_m
    return nodes


def plan_nodes(conductor: Conductor, largest_m: float, refinement: int = 0) -> tuple[Floats, ...]:
    """Node places as fractions of each part of a conductor's half, so that a changed length keeps its mesh.

    conductor   rod (parts: gap half if fed, rest of the half, end face) or ring (parts: gap half, then its stretches)
    largest_m   largest element away from ends and feed [m]
    refinement  0 = as is, each step halves all elements

    Returns one array of fractions from 0 to 1 for each part.
    """
    step = 0.5**refinement
    gap_m = conductor.gap_m / 2.0
    near_gap_m = max(min(largest_m, GAP_EDGE_SHARE * gap_m), 1e-3 * largest_m)
    parts: list[Floats] = []
    if gap_m > 0.0:
        parts.append(graded_nodes(gap_m, largest_m, largest_m, near_gap_m, refinement) / gap_m)
    if isinstance(conductor, Rod):
        rest_m = conductor.length_m / 2.0 - gap_m
        first_m = near_gap_m if gap_m > 0.0 else largest_m
        tip_m = min(TIP_ELEMENT_RADII * conductor.radius_m, largest_m)
        parts.append(graded_nodes(rest_m, largest_m, first_m, tip_m, refinement) / rest_m)
        coarse = 1.0 - np.array(CAP_NODES)
        fine = np.arange(0.0, len(CAP_NODES) - 1.0 + step / 2.0, step)
        parts.append(np.interp(fine, np.arange(len(CAP_NODES)), coarse))
        return tuple(parts)
    stretches = outline(conductor).stretches
    for index, stretch in enumerate(stretches):
        length_m = stretch.length_m - (gap_m if index == 0 else 0.0)
        size_m = largest_m
        if stretch.turn_rad != 0.0:
            size_m = min(largest_m, length_m / abs(stretch.turn_rad) * math.pi / ELEMENTS_PER_HALF_CIRCLE)
        ends_m = [largest_m, largest_m]
        for side, neighbour in enumerate((index - 1, index + 1)):
            if 0 <= neighbour < len(stretches) and stretches[neighbour].turn_rad != 0.0:
                bend = stretches[neighbour]
                ends_m[side] = bend.length_m / abs(bend.turn_rad) * math.pi / ELEMENTS_PER_HALF_CIRCLE
        first_m = near_gap_m if index == 0 and gap_m > 0.0 else ends_m[0]
        parts.append(graded_nodes(length_m, size_m, first_m, ends_m[1], refinement) / length_m)
    return tuple(parts)


def build(conductor: Conductor, parts: tuple[Floats, ...]) -> Mesh:
    """Mesh of a conductor with node fractions from `plan_nodes` (of it, or of one that differs in size only)."""
    return _rod(conductor, parts) if isinstance(conductor, Rod) else _ring(conductor, parts)


def _rod(rod: Rod, parts: tuple[Floats, ...]) -> Mesh:
    gap_m = rod.gap_m / 2.0
    rest_m = rod.length_m / 2.0 - gap_m
    side = gap_m + rest_m * parts[-2]
    if gap_m > 0.0:
        side = np.concatenate([gap_m * parts[0][:-1], side])
    face = rod.radius_m * (1.0 - parts[-1])
    y = np.concatenate([side, np.full(len(face) - 1, side[-1])])
    radius = np.concatenate([np.full(len(side) - 1, rod.radius_m), face])
    count = len(y) - 1
    start = np.column_stack([np.full(count, rod.at_m), y[:-1], np.full(count, rod.height_m)])
    return Mesh(
        start,
        np.tile([0.0, 1.0, 0.0], (count, 1)),
        np.tile([1.0, 0.0, 0.0], (count, 1)),
        np.diff(y),
        np.zeros(count),
        np.column_stack([radius[:-1], radius[1:]]),
        closed=False,
    )


def _ring(conductor: Folded | Loop, parts: tuple[Floats, ...]) -> Mesh:
    line = outline(conductor)
    gap_m = conductor.gap_m / 2.0
    forward, aside = np.array([0.0, 1.0, 0.0]), np.array(line.normal)
    position, heading = np.array(line.start), 0.0
    start, tangent, normal, travel, bend, radius = [], [], [], [], [], []
    pieces = [(s.length_m, s.turn_rad, s.radius_m) for s in line.stretches]
    if gap_m > 0.0:
        length_m, turn_rad, radius_m = pieces[0]
        opening = gap_m / length_m
        pieces[:1] = [(gap_m, turn_rad * opening, radius_m), (length_m - gap_m, turn_rad * (1.0 - opening), radius_m)]
    for (length_m, turn_rad, radius_m), fractions in zip(pieces, parts, strict=True):
        curvature = turn_rad / length_m
        for low, high in pairwise(fractions):
            step = (high - low) * length_m
            angle = curvature * step
            t = np.cos(heading) * forward + np.sin(heading) * aside
            n = np.cos(heading) * aside - np.sin(heading) * forward
            start.append(position)
            tangent.append(t)
            normal.append(n)
            travel.append(step)
            bend.append(curvature)
            radius.append((radius_m, radius_m))
            sinc, half = np.sinc(angle / np.pi), np.sinc(angle / (2.0 * np.pi))
            position = position + step * sinc * t + step * (angle / 2.0) * half**2 * n
            heading += angle
    return Mesh(
        np.array(start), np.array(tangent), np.array(normal), np.array(travel), np.array(bend), np.array(radius), True
    )
