"""Triangle meshes made small, and the edges of them that are worth a line."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Points = NDArray[np.float64]
Indices = NDArray[np.int64]

FEATURE_DEG = 25.0
"""Neighbouring triangles that turn by more than this share an edge that is drawn; facets of a round turn by less."""


@dataclass(frozen=True)
class Ridges:
    """The edges of a mesh between two triangles each.

    ends   corner indices, (k, 2)
    sides  the two triangles, (k, 2)
    """

    ends: Indices
    sides: Indices


def ridges_of(triangles: Indices) -> Ridges:
    """Every edge of a closed mesh, once; an edge of more or fewer than two triangles is left out."""
    start, end = triangles.ravel(), np.roll(triangles, -1, axis=1).ravel()
    low, high = np.minimum(start, end), np.maximum(start, end)
    order = np.lexsort((high, low))
    low, high, owner = low[order], high[order], order // 3
    first = np.flatnonzero(np.concatenate(([True], (np.diff(low) != 0) | (np.diff(high) != 0))))
    pairs = first[np.diff(np.append(first, len(low))) == 2]
    return Ridges(np.stack([low[pairs], high[pairs]], axis=1), np.stack([owner[pairs], owner[pairs + 1]], axis=1))


def unit_normals(corners: Points) -> Points:
    """Outward unit normals of triangles, (m, 3); zero where a triangle has no area."""
    across = np.cross(corners[:, 1] - corners[:, 0], corners[:, 2] - corners[:, 0])
    length = np.linalg.norm(across, axis=1, keepdims=True)
    return np.asarray(np.divide(across, length, out=np.zeros_like(across), where=length > 0.0))


def sharp_edges(vertices: Points, triangles: Indices) -> Indices:
    """Corner indices of the edges where the surface turns by more than FEATURE_DEG, (k, 2)."""
    ridges, normals = ridges_of(triangles), unit_normals(vertices[triangles])
    sides = normals[ridges.sides]
    turn = np.einsum("ij,ij->i", sides[:, 0], sides[:, 1])
    whole = np.all(np.any(sides != 0.0, axis=2), axis=1)
    return np.asarray(ridges.ends[whole & (turn < math.cos(math.radians(FEATURE_DEG)))])


def thinned(vertices: Points, triangles: Indices, allowed_mm: float) -> tuple[Points, Indices]:
    """The same surface with fewer triangles, nowhere farther off than allowed; unchanged if it is not closed."""
    import manifold3d

    mesh = manifold3d.Mesh64(vert_properties=np.ascontiguousarray(vertices), tri_verts=triangles.astype(np.uint64))
    solid = manifold3d.Manifold(mesh)
    if solid.status() != manifold3d.Error.NoError:
        return vertices, triangles
    small = solid.simplify(allowed_mm).to_mesh64()
    if len(small.tri_verts) == 0:
        return vertices, triangles
    return np.asarray(small.vert_properties)[:, :3], np.asarray(small.tri_verts).astype(np.int64)
