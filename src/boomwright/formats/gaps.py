"""Free space along a straight line through a point, between the material on either side; bodies and meshes alike."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import TYPE_CHECKING, Any

import numpy as np

from boomwright.errors import MeasureError

if TYPE_CHECKING:
    from boomwright.formats.brep import StepReading
    from boomwright.formats.meshes import MeshReading

REACH_MM = 1e4
INSIDE = 1e-9


def measure_free_in_bodies(reading: StepReading, arguments: Mapping[str, Any], also: Sequence[Any]) -> float:
    """Free length [mm] along `along` (a direction) through the point `at` [mm] of a STEP file; `side` as below."""
    from OCP.gp import gp_Dir, gp_Lin, gp_Pnt
    from OCP.IntCurvesFace import IntCurvesFace_Intersector

    at, along = (np.asarray(arguments[key], dtype=float) for key in ("at", "along"))
    along = along / np.linalg.norm(along)
    line = gp_Lin(gp_Pnt(*at.tolist()), gp_Dir(*along.tolist()))
    crossings = []
    for face in (face for body in reading.bodies for face in body.faces):
        middle, half = face.centre - at, float(np.linalg.norm(face.high - face.low)) / 2.0
        if np.linalg.norm(middle - (middle @ along) * along) > half + INSIDE:
            continue
        finder = IntCurvesFace_Intersector(face.face, INSIDE)
        finder.Perform(line, -REACH_MM, REACH_MM)
        crossings += [finder.WParameter(i) for i in range(1, finder.NbPnt() + 1)]
    return _free(crossings, arguments, reading.path.name)


def measure_free_in_mesh(reading: MeshReading, arguments: Mapping[str, Any], also: Sequence[Any]) -> float:
    """The same on the triangles of a mesh."""
    at, along = (np.asarray(arguments[key], dtype=float) for key in ("at", "along"))
    along = along / np.linalg.norm(along)
    first, second, third = (reading.corners[:, i] for i in range(3))
    one, two, back = second - first, third - first, at - first
    across = np.cross(along, two)
    scale = np.einsum("ij,ij->i", one, across)
    level = np.abs(scale) < INSIDE
    scale = np.where(level, 1.0, scale)
    u = np.einsum("ij,ij->i", back, across) / scale
    turned = np.cross(back, one)
    v = turned @ along / scale
    hit = ~level & (u >= -INSIDE) & (v >= -INSIDE) & (u + v <= 1.0 + INSIDE)
    places = np.einsum("ij,ij->i", two, turned) / scale
    return _free(places[hit].tolist(), arguments, reading.path.name)


def _free(crossings: Sequence[float], arguments: Mapping[str, Any], where: str) -> float:
    """From the nearest crossing behind the point to the nearest ahead; with `side` behind or ahead only that part."""
    behind = [-place for place in crossings if place < 0.0]
    ahead = [place for place in crossings if place >= 0.0]
    wanted = {"behind": [behind], "ahead": [ahead], "both": [behind, ahead]}[str(arguments.get("side", "both"))]
    if not all(wanted):
        raise MeasureError(f"{where}: nothing on one side of {tuple(arguments['at'])}")
    return float(sum(min(places) for places in wanted))
