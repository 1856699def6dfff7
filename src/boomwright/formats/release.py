"""Measures of a mould on its written halves: draft, the way off the antenna, the resin's room, the pins' play.

Boxes, points, solids and moves are in the design's frame; `frame` is the file's (4 x 4, design to file), `also_frames`
those of the further files, None = the design's own. Solids that stand in no file (coax, plug) come as

    {"kind": "cylinder", "start": [x, y, z], "end": [x, y, z], "radius_mm": r}
    {"kind": "box", "corners": [[x, y, z], [x, y, z]]}
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from functools import lru_cache
from typing import Any

import numpy as np

from boomwright.errors import MeasureError
from boomwright.formats.bodies import TOUCH_MM3, volume_mm3
from boomwright.formats.brep import FaceView, ReadBody, StepReading, Vector, exact_box
from boomwright.formats.surfaces import samples

Arguments = Mapping[str, Any]
Shape = Any
"""A bare shape of the kernel."""

CHORD_MM, ANGLE_RAD = 0.02, 0.4
SAMPLE_MARGIN_MM = 0.25
"""How far from a face's edges it is looked at."""

STEP_OUT_MM = 1.0
"""How far out of the material, beyond the taper, the cavity is looked for."""

FACING = 1e-6
"""A face looks along a move when its normal has at least this part of it."""

POSITIONS = 24
"""Places along a leg at which the kernel decides what the meshes suspect."""

NEAR_AXIS_MM = 0.5


def measure_draft(reading: StepReading, arguments: Arguments, also: Sequence[Any]) -> float:
    """Least angle [deg] between the cavity's faces and the direction in which this half is drawn off.

    box, pull   the cavity's box, and the unit direction of the half's own way off, in the design's frame
    taper_mm    how far the draft brings the cavity's sides inside the box

    Negative: an undercut. The cavity's faces are those in front of which the cavity lies: a short way out of the
    material is well inside the box.
    """
    motion = _matrix(arguments.get("frame"))
    low, high = np.asarray(arguments["box"], dtype=float)
    pull = np.asarray(arguments["pull"], dtype=float)
    taper, least = float(arguments["taper_mm"]), np.inf
    for face in (face for body in reading.bodies for face in body.faces):
        beside = samples(face, SAMPLE_MARGIN_MM)
        outward = beside.outward @ motion[:3, :3]
        before = (beside.points - motion[:3, 3]) @ motion[:3, :3] + (taper + STEP_OUT_MM) * outward
        margin = taper + STEP_OUT_MM / 2.0
        inside = np.all((before > low + margin) & (before < high - margin), axis=1)
        if inside.any():
            along = outward[inside] @ pull
            least = min(least, float(np.degrees(np.arcsin(np.clip(-along, -1.0, 1.0))).min()))
    if not np.isfinite(least):
        raise MeasureError(f"{reading.path.name}: no face bounds the cavity")
    return least


def measure_sweep(reading: StepReading, arguments: Arguments, also: Sequence[Any]) -> float:
    """What a half meets of the further files and of `solids` on its way off [mm³].

    legs    moves one after the other, each [x, y, z] in the design's frame

    What a body passes through is the body and the prisms of those of its faces that look along the move. Meshes rule
    out what they keep clear of by more than their chord; the kernel decides about the rest, place by place.
    """
    bodies = _solids(reading, arguments.get("frame"))
    obstacles = _obstacles(arguments, also)
    moved, worst = np.zeros(3), 0.0
    for leg in np.asarray(arguments["legs"], dtype=float):
        for body in bodies:
            suspects = _suspects(body, moved, leg, obstacles)
            for share in np.linspace(0.0, 1.0, POSITIONS) if suspects else []:
                worst = max(worst, _common_mm3(_shifted(body, moved + share * leg), suspects))
        moved = moved + leg
    return worst


def _suspects(body: Shape, moved: Vector, leg: Vector, obstacles: Sequence[Shape]) -> list[Shape]:
    """The obstacles that a body, already moved, may meet on a further leg."""
    box = _box(body) + moved
    way = (np.minimum(box[0], box[0] + leg), np.maximum(box[1], box[1] + leg))
    near = [one for one in obstacles if _meet(_box(one), way)]
    if not near:
        return []
    points, triangles = _mesh(body)
    corners = (points + moved)[triangles]
    normals = np.cross(corners[:, 1] - corners[:, 0], corners[:, 2] - corners[:, 0])
    looking = normals @ leg > FACING * np.linalg.norm(normals, axis=1) * np.linalg.norm(leg)
    prisms = np.concatenate([corners[looking], corners[looking] + leg], axis=1)
    return [one for one in near if _passes_through(prisms, one)]


def _passes_through(prisms: Vector, obstacle: Shape) -> bool:
    """Whether any of these prisms, each (6, 3), has room in common with an obstacle, by meshes."""
    import manifold3d

    low, high = _box(obstacle)
    close = np.all((prisms.min(axis=1) < high) & (prisms.max(axis=1) > low), axis=1)
    hulls = [manifold3d.Manifold.hull_points(prism) for prism in prisms[close]]
    if not hulls:
        return False
    swept = manifold3d.Manifold.batch_boolean(hulls, manifold3d.OpType.Add)
    return bool((_manifold(obstacle) ^ swept).volume() > TOUCH_MM3)


def measure_solids_overlap(reading: StepReading, arguments: Arguments, also: Sequence[Any]) -> float:
    """Volume that the file's bodies have in common with `solids` [mm³]."""
    others = [_solid(one) for one in arguments["solids"]]
    return sum(_common_mm3(body, others) for body in _solids(reading, arguments.get("frame")))


def measure_cavity_volume(reading: StepReading, arguments: Arguments, also: Sequence[Any]) -> float:
    """Room for resin in `box`: less the file's bodies, those of the further files, and `solids` [mm³].

    fill, hollows      what plugs a tube's bore, and where grooves go through the plug
    density_g_mm3      given: the resin's mass [g] instead

    Taken from meshes: round bodies come out smaller by two thirds of the chord on their surface.
    """
    volume = sum(space.volume() for space in _spaces(reading, arguments, also))
    return float(volume * float(arguments.get("density_g_mm3", 1.0)))


def measure_connected(reading: StepReading, arguments: Arguments, also: Sequence[Any]) -> float:
    """Number of separate spaces in which `points` lie, of the room that `cavity_volume_mm3` measures; 0 if one is in none."""
    import manifold3d

    spaces, found = _spaces(reading, arguments, also), set()
    for point in np.asarray(arguments["points"], dtype=float):
        drop = manifold3d.Manifold.sphere(0.05, 16).translate(tuple(point))
        shares = [(space ^ drop).volume() for space in spaces]
        if not shares or max(shares) < 0.5 * drop.volume():
            return 0.0
        found.add(int(np.argmax(shares)))
    return float(len(found))


def _spaces(reading: StepReading, arguments: Arguments, also: Sequence[Any]) -> list[Any]:
    """The separate spaces of the room in `box`."""
    import manifold3d

    low, high = np.asarray(arguments["box"], dtype=float)
    room = manifold3d.Manifold.cube(tuple(high - low)).translate(tuple(low))
    inserts = [*_solids(reading, arguments.get("frame")), *_obstacles(arguments, also), *_plugs(arguments)]
    near = [one for one in inserts if _meet(_box(one), (low, high))]
    return list(manifold3d.Manifold.batch_boolean([room, *map(_manifold, near)], manifold3d.OpType.Subtract).decompose())


def _meet(one: Any, other: Any) -> bool:
    """Whether two boxes, each (low, high), have room in common."""
    return bool(np.all(one[0] < other[1]) and np.all(one[1] > other[0]))


def measure_pin_play(reading: StepReading, arguments: Arguments, also: Sequence[Any]) -> float:
    """Least play a side [mm] of the pins (further file) in their sockets (this file), out of line ones included.

    axes    for each pin a point and a direction of its axis, in the design's frame
    """
    (other,) = also
    sockets = [(face, arguments.get("frame")) for body in reading.bodies for face in body.faces if face.concave]
    frame = (arguments.get("also_frames") or [None])[0]
    pins = [(face, frame) for body in other.bodies for face in body.faces if not face.concave]
    plays = []
    for point, direction in np.asarray(arguments["axes"], dtype=float):
        (socket, socket_at), (pin, pin_at) = (_on_axis(faces, point, direction) for faces in (sockets, pins))
        plays.append(socket - pin - float(np.linalg.norm(socket_at - pin_at)))
    if not plays:
        raise MeasureError(f"{reading.path.name}: no pins to measure")
    return min(plays)


def _on_axis(faces: Sequence[tuple[FaceView, Any]], point: Vector, direction: Vector) -> tuple[float, Vector]:
    """Radius of the cylinder nearest to an axis, and where its own axis passes the point's level."""
    found = []
    for face, frame in faces:
        if face.kind != "cylinder":
            continue
        motion = _matrix(frame)
        axis = face.direction @ motion[:3, :3]
        origin = (face.origin - motion[:3, 3]) @ motion[:3, :3]
        if abs(axis @ direction) < 1.0 - 1e-9:
            continue
        passes = origin + axis * ((point - origin) @ direction) / (axis @ direction)
        away = float(np.linalg.norm(passes - point))
        if away <= NEAR_AXIS_MM:
            found.append((away, face.radius_mm, passes))
    if not found:
        raise MeasureError(f"no pin or socket at {', '.join(f'{c:g}' for c in point)}")
    _, radius, passes = min(found, key=lambda one: one[:2])
    return radius, passes


def _obstacles(arguments: Arguments, also: Sequence[Any]) -> list[Shape]:
    frames = arguments.get("also_frames") or [None] * len(also)
    if len(frames) != len(also):
        raise MeasureError("also_frames must have one entry for each further file")
    files = [solid for file, frame in zip(also, frames, strict=True) for solid in _solids(file, frame)]
    return files + [_solid(one) for one in arguments.get("solids", ())]


def _plugs(arguments: Arguments) -> list[Shape]:
    from OCP.BRepAlgoAPI import BRepAlgoAPI_Cut

    plugs = [_solid(one) for one in arguments.get("fill", ())]
    hollows = [_solid(one) for one in arguments.get("hollows", ())]
    if not plugs or not hollows:
        return plugs
    grooved = _boolean(BRepAlgoAPI_Cut, plugs, hollows)
    return list(ReadBody("", None, grooved).solids)


def _solids(reading: StepReading, frame: Any) -> tuple[Shape, ...]:
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


def _solid(one: Mapping[str, Any]) -> Shape:
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


def _shifted(shape: Shape, by: Vector) -> Shape:
    from OCP.gp import gp_Trsf, gp_Vec
    from OCP.TopLoc import TopLoc_Location

    motion = gp_Trsf()
    motion.SetTranslation(gp_Vec(*map(float, by)))
    return shape.Moved(TopLoc_Location(motion))


def _common_mm3(body: Shape, others: Sequence[Shape]) -> float:
    """Volume of a body in any of the others [mm³], one boolean each: they may touch one another."""
    from OCP.BRepAlgoAPI import BRepAlgoAPI_Common

    total = 0.0
    for other in others:
        if _meet(_box(body), _box(other)):
            common = volume_mm3(_boolean(BRepAlgoAPI_Common, [body], [other]))
            total += common if common > TOUCH_MM3 else 0.0
    return total


@lru_cache(maxsize=256)
def _box(shape: Shape) -> Vector:
    return exact_box(shape)


def _boolean(operation: Any, bodies: Sequence[Shape], tools: Sequence[Shape]) -> Shape:
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


def _matrix(frame: Any) -> Vector:
    return np.eye(4) if frame is None else np.asarray(frame, dtype=float)


@lru_cache(maxsize=64)
def _mesh(shape: Shape) -> tuple[Vector, Any]:
    """Vertices (n, 3) and triangles (m, 3) of a solid's surface, outward, equal vertices merged; meshed as a copy."""
    from OCP.BRep import BRep_Tool
    from OCP.BRepBuilderAPI import BRepBuilderAPI_Copy
    from OCP.BRepMesh import BRepMesh_IncrementalMesh
    from OCP.TopAbs import TopAbs_REVERSED
    from OCP.TopLoc import TopLoc_Location

    copied = BRepBuilderAPI_Copy(shape, True, False).Shape()
    BRepMesh_IncrementalMesh(copied, CHORD_MM, False, ANGLE_RAD, False)
    points: list[Vector] = []
    triangles: list[Any] = []
    count = 0
    for face in ReadBody("", None, copied).faces:
        place = TopLoc_Location()
        mesh = BRep_Tool.Triangulation_s(face.face, place)
        if mesh is None:
            continue
        motion = place.Transformation()
        nodes = [mesh.Node(i).Transformed(motion) for i in range(1, mesh.NbNodes() + 1)]
        points.append(np.array([[n.X(), n.Y(), n.Z()] for n in nodes]))
        corners = np.array([mesh.Triangle(i).Get() for i in range(1, mesh.NbTriangles() + 1)]) - 1 + count
        triangles.append(corners[:, ::-1] if face.face.Orientation() == TopAbs_REVERSED else corners)
        count += len(nodes)
    merged, index = np.unique(np.round(np.vstack(points), 7), axis=0, return_inverse=True)
    found = index.reshape(-1)[np.vstack(triangles)]
    distinct = (found[:, 0] != found[:, 1]) & (found[:, 1] != found[:, 2]) & (found[:, 2] != found[:, 0])
    return merged, found[distinct]


def _manifold(shape: Shape) -> Any:
    """A solid as a closed mesh that booleans take."""
    import manifold3d

    points, triangles = _mesh(shape)
    made = manifold3d.Manifold(manifold3d.Mesh64(vert_properties=points, tri_verts=triangles.astype(np.uint64)))
    if made.status() != manifold3d.Error.NoError:
        raise MeasureError(f"a solid gave no closed mesh: {made.status()}")
    return made


MEASURES: dict[str, Callable[[Any, Arguments, Sequence[Any]], float]] = {
    "draft_deg": measure_draft,
    "sweep_overlap_mm3": measure_sweep,
    "solids_overlap_mm3": measure_solids_overlap,
    "cavity_volume_mm3": measure_cavity_volume,
    "cavity_connected": measure_connected,
    "pin_play_mm": measure_pin_play,
}
