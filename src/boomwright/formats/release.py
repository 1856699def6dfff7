"""Measures of a mould on its written halves: draft, the way off the antenna, the pins' play; with those of pouring.

Boxes, points, solids and moves are in the design's frame; `frame` is the file's (4 x 4, design to file), `also_frames`
those of the further files, None = the design's own. Solids that stand in no file (coax, plug): see `placed`.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from typing import Any

import numpy as np

from boomwright.errors import MeasureError
from boomwright.formats import pouring
from boomwright.formats.brep import FaceView, StepReading, Vector
from boomwright.formats.placed import (
    Arguments,
    Shape,
    apart,
    box_of,
    boxes_meet,
    common_mm3,
    manifold_of,
    matrix_of,
    mesh_of,
    obstacles_of,
    shifted,
    solids_of,
)
from boomwright.formats.surfaces import samples

SAMPLE_MARGIN_MM = 0.25
"""How far from a face's edges it is looked at."""

STEP_OUT_MM = 1.0
"""How far out of the material, beyond the taper, the cavity is looked for."""

NEAR_BOX_MM = 0.5
"""How far outside the cavity's box an undercut is still seen."""

FACING = 1e-6
"""A face looks along a move when its normal has at least this part of it."""

POSITIONS = 9
"""Places along a leg, evenly spread, at which the kernel decides besides those that the meshes point to."""

POINTED = 5
"""Places that the meshes point to, for each obstacle: where the deepest prisms meet it."""

NEAR_AXIS_MM = 0.5


def measure_draft(reading: StepReading, arguments: Arguments, also: Sequence[Any]) -> float:
    """Least angle [deg] between the cavity's faces and the direction in which this half is drawn off.

    box, pull   the cavity's box, and the unit direction of the half's own way off, in the design's frame
    taper_mm    how far the draft brings the cavity's sides inside the box

    Negative: an undercut. The cavity's faces are those in or near the box in front of which it lies: a short way out
    of the material is well inside the box.
    """
    motion = matrix_of(arguments.get("frame"))
    low, high = np.asarray(arguments["box"], dtype=float)
    pull = np.asarray(arguments["pull"], dtype=float)
    taper, least = float(arguments["taper_mm"]), np.inf
    for face in (face for body in reading.bodies for face in body.faces):
        beside = samples(face, SAMPLE_MARGIN_MM)
        outward = beside.outward @ motion[:3, :3]
        points = (beside.points - motion[:3, 3]) @ motion[:3, :3]
        before, margin = points + (taper + STEP_OUT_MM) * outward, taper + STEP_OUT_MM / 2.0
        inside = np.all((points > low - NEAR_BOX_MM) & (points < high + NEAR_BOX_MM), axis=1)
        inside &= np.all((before > low + margin) & (before < high - margin), axis=1)
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
    out what these keep clear of by more than their chords; about the rest the kernel decides, at the places where the
    prisms meet the obstacle. Returns the largest overlap at any of these.
    """
    obstacles = obstacles_of(arguments, also)
    moved, worst = np.zeros(3), 0.0
    for leg in np.asarray(arguments["legs"], dtype=float):
        for body in solids_of(reading, arguments.get("frame")):
            for obstacle, shares in _suspects(body, moved, leg, obstacles):
                for share in shares:
                    worst = max(worst, common_mm3(shifted(body, moved + share * leg), [obstacle]))
        moved = moved + leg
    return worst


def _suspects(body: Shape, moved: Vector, leg: Vector, obstacles: Sequence[Shape]) -> list[tuple[Shape, Vector]]:
    """The obstacles that a body, already moved, may meet on a further leg, and at which shares of it."""
    box = box_of(body) + moved
    way = (np.minimum(box[0], box[0] + leg), np.maximum(box[1], box[1] + leg))
    near = [one for one in obstacles if boxes_meet(box_of(one), way)]
    if not near:
        return []
    points, triangles = mesh_of(body)
    corners = (points + moved)[triangles]
    normals = np.cross(corners[:, 1] - corners[:, 0], corners[:, 2] - corners[:, 0])
    looking = corners[normals @ leg > FACING * np.linalg.norm(normals, axis=1) * np.linalg.norm(leg)]
    found = [(one, _meetings(looking, leg, one)) for one in near]
    return [(one, shares) for one, shares in found if len(shares)]


def _meetings(corners: Vector, leg: Vector, obstacle: Shape) -> Vector:
    """Shares of the leg at which these triangles (n, 3, 3) are inside an obstacle, by meshes; empty: never."""
    import manifold3d

    prisms = np.concatenate([corners, corners + leg], axis=1)
    low, high = box_of(obstacle)
    close = np.all((prisms.min(axis=1) < high) & (prisms.max(axis=1) > low), axis=1)
    hulls = [manifold3d.Manifold.hull_points(prism) for prism in prisms[close]]
    if not hulls:
        return np.zeros(0)
    solid = manifold_of(obstacle)
    if apart(solid, manifold3d.Manifold.batch_boolean(hulls, manifold3d.OpType.Add)):
        return np.zeros(0)
    common = [solid ^ hull for hull in hulls]
    deepest = np.argsort([-one.volume() for one in common])[:POINTED]
    shares = list(np.linspace(0.0, 1.0, POSITIONS))
    for index in deepest:
        if not common[index].is_empty():
            middle = np.reshape(common[index].bounding_box(), (2, 3)).mean(axis=0)
            shares.append(float((middle - corners[close][index].mean(axis=0)) @ leg / (leg @ leg)))
    return np.asarray(np.clip(shares, 0.0, 1.0), dtype=np.float64)


def measure_interference(reading: StepReading, arguments: Arguments, also: Sequence[Any]) -> float:
    """Volume that the file's bodies have in common with those of the further files and with `solids` [mm³].

    Exact: only what boxes and meshes show to be apart is not asked of the kernel.
    """
    others = obstacles_of(arguments, also)
    return sum(common_mm3(body, others) for body in solids_of(reading, arguments.get("frame")))


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
        motion = matrix_of(frame)
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


MEASURES: dict[str, Callable[[Any, Arguments, Sequence[Any]], float]] = {
    "draft_deg": measure_draft,
    "sweep_overlap_mm3": measure_sweep,
    "interference_mm3": measure_interference,
    "pin_play_mm": measure_pin_play,
    **pouring.MEASURES,
}
