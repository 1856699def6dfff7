"""Solids in the design's frame, from files and from none; their boxes, booleans and meshes. Millimetres.

Solids that stand in no file (a coax, a plug) come as

    {"kind": "cylinder", "start": [x, y, z], "end": [x, y, z], "radius_mm": r}
    {"kind": "box", "corners": [[x, y, z], [x, y, z]]}
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from functools import lru_cache
from typing import Any

import numpy as np

from boomwright.errors import MeasureError
from boomwright.formats.bodies import TOUCH_MM3, volume_mm3
from boomwright.formats.brep import ReadBody, StepReading, Vector, exact_box, explore

Arguments = Mapping[str, Any]
Shape = Any
"""A bare shape of the kernel."""

CHORD_MM, ANGLE_RAD = 0.02, 0.4
APART_MM = 2.5 * CHORD_MM
"""Meshes that are farther apart than this belong to solids that do not meet: each is off its solid by a chord."""


def obstacles_of(arguments: Arguments, also: Sequence[Any]) -> list[Shape]:
    frames = arguments.get("also_frames") or [None] * len(also)
    if len(frames) != len(also):
        raise MeasureError("also_frames must have one entry for each further file")
    files = [solid for file, frame in zip(also, frames, strict=True) for solid in solids_of(file, frame)]
    return files + [solid_of(one) for one in arguments.get("solids", ())]


def plugs_of(arguments: Arguments) -> list[Shape]:
    from OCP.BRepAlgoAPI import BRepAlgoAPI_Cut

    plugs = [solid_of(one) for one in arguments.get("fill", ())]
    hollows = [solid_of(one) for one in arguments.get("hollows", ())]
    if not plugs or not hollows:
        return plugs
    grooved = boolean(BRepAlgoAPI_Cut, plugs, hollows)
    return list(ReadBody("", None, grooved).solids)


def solids_of(reading: StepReading, frame: Any) -> tuple[Shape, ...]:
    """Every solid of a file in the design's frame."""
    if frame is None:
        return tuple(solid for body in reading.bodies for solid in body.solids)
    return _moved_back(reading, tuple(tuple(float(value) for value in row) for row in frame))


@lru_cache(maxsize=8)
def _moved_back(reading: StepReading, frame: tuple[tuple[float, ...], ...]) -> tuple[Shape, ...]:
    """Kept, so that every measure of a file shares its solids, and with them their meshes."""
    from OCP.BRepBuilderAPI import BRepBuilderAPI_Transform
    from OCP.gp import gp_Trsf

    motion = gp_Trsf()
    motion.SetValues(*(value for row in frame[:3] for value in row))
    back = motion.Inverted()
    return tuple(BRepBuilderAPI_Transform(one, back, True).Shape() for body in reading.bodies for one in body.solids)


def solid_of(one: Mapping[str, Any]) -> Shape:
    from OCP.BRepPrimAPI import BRepPrimAPI_MakeBox, BRepPrimAPI_MakeCylinder
    from OCP.gp import gp_Ax2, gp_Dir, gp_Pnt

    if one["kind"] == "box":
        low, high = (gp_Pnt(*map(float, corner)) for corner in one["corners"])
        return BRepPrimAPI_MakeBox(low, high).Shape()
    if one["kind"] == "cylinder":
        start, end = (np.asarray(one[key], dtype=float) for key in ("start", "end"))
        axis = gp_Ax2(gp_Pnt(*map(float, start)), gp_Dir(*map(float, end - start)))
        return BRepPrimAPI_MakeCylinder(axis, float(one["radius_mm"]), float(np.linalg.norm(end - start))).Shape()
    raise MeasureError(f"no such solid: {one['kind']!r}")


def shifted(shape: Shape, by: Vector) -> Shape:
    from OCP.gp import gp_Trsf, gp_Vec
    from OCP.TopLoc import TopLoc_Location

    motion = gp_Trsf()
    motion.SetTranslation(gp_Vec(*map(float, by)))
    return shape.Moved(TopLoc_Location(motion))


def common_mm3(body: Shape, others: Sequence[Shape]) -> float:
    """Volume of a body in each of the others [mm³], added up: exact booleans where boxes and meshes are not apart."""
    from OCP.BRepAlgoAPI import BRepAlgoAPI_Common

    total = 0.0
    for other in others:
        if boxes_meet(box_of(body), box_of(other)) and not apart(manifold_of(body), manifold_of(other)):
            common = volume_mm3(boolean(BRepAlgoAPI_Common, [body], [other]))
            total += common if common > TOUCH_MM3 else 0.0
    return total


def apart(one: Any, other: Any) -> bool:
    """Whether two meshes are so far apart that the solids they were made from cannot meet."""
    return bool(one.min_gap(other, APART_MM) >= APART_MM)


@lru_cache(maxsize=256)
def box_of(shape: Shape) -> Vector:
    return exact_box(shape)


def boolean(operation: Any, bodies: Sequence[Shape], tools: Sequence[Shape]) -> Shape:
    from OCP.TopTools import TopTools_ListOfShape

    lists = []
    for shapes in (bodies, tools):
        held = TopTools_ListOfShape()
        for shape in shapes:
            held.Append(shape)
        lists.append(held)
    made = operation()
    made.SetArguments(lists[0])
    made.SetTools(lists[1])
    made.SetNonDestructive(True)
    made.Build()
    if not made.IsDone():
        raise MeasureError("the kernel could not decide what bodies have in common")
    return made.Shape()


def matrix_of(frame: Any) -> Vector:
    return np.eye(4) if frame is None else np.asarray(frame, dtype=float)


@lru_cache(maxsize=64)
def mesh_of(shape: Shape) -> tuple[Vector, Any]:
    """Vertices (n, 3) and triangles (m, 3) of a solid's surface, outward, equal vertices merged; meshed as a copy."""
    from OCP.BRep import BRep_Tool
    from OCP.BRepBuilderAPI import BRepBuilderAPI_Copy
    from OCP.BRepMesh import BRepMesh_IncrementalMesh
    from OCP.TopAbs import TopAbs_FACE, TopAbs_REVERSED
    from OCP.TopLoc import TopLoc_Location

    copied = BRepBuilderAPI_Copy(shape, True, False).Shape()
    BRepMesh_IncrementalMesh(copied, CHORD_MM, False, ANGLE_RAD, False)
    points: list[Vector] = []
    triangles: list[Any] = []
    count = 0
    for face in explore(copied, TopAbs_FACE):
        place = TopLoc_Location()
        mesh = BRep_Tool.Triangulation_s(face, place)
        if mesh is None:
            continue
        motion = place.Transformation()
        nodes = [mesh.Node(i).Transformed(motion) for i in range(1, mesh.NbNodes() + 1)]
        points.append(np.array([[n.X(), n.Y(), n.Z()] for n in nodes]))
        corners = np.array([mesh.Triangle(i).Get() for i in range(1, mesh.NbTriangles() + 1)]) - 1 + count
        triangles.append(corners[:, ::-1] if face.Orientation() == TopAbs_REVERSED else corners)
        count += len(nodes)
    rounded = np.round(np.vstack(points), 7).astype(np.float64)
    merged, index = np.unique(rounded, axis=0, return_inverse=True)
    found = index.reshape(-1)[np.vstack(triangles)]
    distinct = (found[:, 0] != found[:, 1]) & (found[:, 1] != found[:, 2]) & (found[:, 2] != found[:, 0])
    return merged, found[distinct]


def manifold_of(shape: Shape) -> Any:
    """A solid as a closed mesh that booleans take."""
    import manifold3d

    points, triangles = mesh_of(shape)
    made = manifold3d.Manifold(manifold3d.Mesh64(vert_properties=points, tri_verts=triangles.astype(np.uint64)))
    if made.status() != manifold3d.Error.NoError:
        raise MeasureError(f"a solid gave no closed mesh: {made.status()}")
    return made


def boxes_meet(one: Any, other: Any) -> bool:
    """Whether two boxes, each (low, high), have room in common."""
    return bool(np.all(one[0] < other[1]) and np.all(one[1] > other[0]))
