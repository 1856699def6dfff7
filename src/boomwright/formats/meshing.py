"""Triangle meshes made from a piece's solids: closed, rounded to 32 bits, the same each time. Millimetres."""

from __future__ import annotations

from collections import OrderedDict
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from boomwright.formats.brep import Vector
from boomwright.pieces import SolidPiece

CHORD_MM = 0.01
"""Chord tolerance: no point of a mesh is farther from the solid's surface."""

ASKED_CHORD_MM = 0.004
"""Deflection asked of the mesher, absolute; well under the tolerance, since it keeps to it on average: a strip of a
torus came out 2.6 times as far off."""

ASKED_ANGLE_RAD = 0.35
"""Most turn between neighbouring facets, so that small rounds stay round."""

SAME_POINT_MM = 1e-6
"""Corners of neighbouring faces nearer than this are one vertex."""

Triangles = NDArray[np.int64]


@dataclass(frozen=True)
class Mesh:
    """A closed surface: corners [mm], float32, shape (n, 3); triangles, corner indices, shape (m, 3)."""

    vertices: NDArray[np.float32]
    triangles: Triangles


_made: OrderedDict[int, tuple[SolidPiece, Mesh]] = OrderedDict()


def mesh_piece(piece: SolidPiece) -> Mesh:
    """One mesh of all bodies of a piece, with the printer's offsets, in the file's frame.

    The last pieces are remembered, since each is written in two formats.
    """
    if id(piece) not in _made:
        _made[id(piece)] = (piece, _mesh(piece))
        while len(_made) > 2:
            _made.popitem(last=False)
    return _made[id(piece)][1]


def _mesh(piece: SolidPiece) -> Mesh:
    from boomwright.formats.step import place

    points: list[Vector] = []
    triangles: list[Triangles] = []
    count = 0
    for body in piece.printed or piece.bodies:
        for nodes, faces in _tessellate(place(body.shape, piece.frame)):
            points.append(nodes)
            triangles.append(faces + count)
            count += len(nodes)
    return merge(np.concatenate(points), np.concatenate(triangles))


def _tessellate(shape: Any) -> list[tuple[Vector, Triangles]]:
    """Corners and outward triangles of each face of a kernel shape, in the shape's own order."""
    from OCP.BRep import BRep_Tool
    from OCP.BRepMesh import BRepMesh_IncrementalMesh
    from OCP.TopAbs import TopAbs_FACE, TopAbs_REVERSED
    from OCP.TopExp import TopExp_Explorer
    from OCP.TopLoc import TopLoc_Location
    from OCP.TopoDS import TopoDS

    BRepMesh_IncrementalMesh(shape, ASKED_CHORD_MM, False, ASKED_ANGLE_RAD, False)
    found = []
    explorer = TopExp_Explorer(shape, TopAbs_FACE)
    while explorer.More():
        face, location = TopoDS.Face_s(explorer.Current()), TopLoc_Location()
        explorer.Next()
        facets = BRep_Tool.Triangulation_s(face, location)
        if facets is None:
            continue
        motion = location.Transformation()
        nodes = [facets.Node(i).Transformed(motion) for i in range(1, facets.NbNodes() + 1)]
        corners = np.array([(node.X(), node.Y(), node.Z()) for node in nodes])
        triangles = np.array([facets.Triangle(i).Get() for i in range(1, facets.NbTriangles() + 1)], dtype=np.int64) - 1
        found.append((corners, triangles[:, ::-1] if face.Orientation() == TopAbs_REVERSED else triangles))
    return found


def merge(points: Vector, triangles: Triangles) -> Mesh:
    """Corners nearer than SAME_POINT_MM made one, rounded to 32 bits, made one again; collapsed triangles dropped."""
    cluster = _clusters(points)
    _, first = np.unique(cluster, return_index=True)
    rounded = points[first].astype(np.float32) + np.float32(0.0)
    return Mesh(*_compact(rounded, first_alike(rounded)[cluster[triangles]]))


def _clusters(points: Vector) -> NDArray[np.int64]:
    """A number for every point, the same for points that lie together, shape (n,).

    Split at gaps along x, y and z in turn until no split is left: no grid, so no point can fall across its lines.
    """
    label, count = np.zeros(len(points), dtype=np.int64), 0
    while True:
        for axis in range(3):
            order = np.lexsort((points[:, axis], label))
            apart = (np.diff(points[order, axis]) > SAME_POINT_MM) | (np.diff(label[order]) > 0)
            label[order] = np.concatenate(([0], np.cumsum(apart)))
        if int(label.max()) == count:
            return label
        count = int(label.max())


def first_alike(vertices: NDArray[Any]) -> NDArray[np.int64]:
    """For every row the index of the first row equal to it, shape (n,)."""
    order = np.lexsort((np.arange(len(vertices)), *vertices.T))
    rows = vertices[order]
    new = np.concatenate(([True], np.any(rows[1:] != rows[:-1], axis=1)))
    alike = np.empty(len(vertices), dtype=np.int64)
    alike[order] = order[np.flatnonzero(new)][np.cumsum(new) - 1]
    return alike


def _compact(vertices: NDArray[np.float32], triangles: Triangles) -> tuple[NDArray[np.float32], Triangles]:
    """Without collapsed triangles and unused corners; corners numbered in the order of first use."""
    a, b, c = triangles.T
    kept = triangles[(a != b) & (b != c) & (c != a)]
    used, first, index = np.unique(kept.ravel(), return_index=True, return_inverse=True)
    order = np.argsort(first)
    place = np.empty_like(order)
    place[order] = np.arange(len(order))
    return vertices[used[order]], place[index].reshape(-1, 3).astype(np.int64)
