"""Joints between two pieces in two STEP files: how far one can be drawn along a direction before the other holds it.

Where plane faces of the two would meet follows from their distance; whether they do, the kernel decides: just short of
that place the pieces have nothing in common, just beyond it they overlap. Coordinates in millimetres.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from functools import lru_cache
from typing import Any

import numpy as np

from boomwright.errors import MeasureError
from boomwright.formats.bodies import TOUCH_MM3, volume_mm3
from boomwright.formats.brep import ReadBody, StepReading, Vector
from boomwright.formats.placed import boolean, matrix_of, shifted, solid_of

MOST_PLAY_MM = 3.0
"""A piece that can be drawn farther is not held."""

BEYOND_MM = 0.002
SAME_MM = 1e-6
ANTIPARALLEL = 1e-9

Box = tuple[tuple[float, float, float], tuple[float, float, float]]
Frame = tuple[tuple[float, ...], ...] | None


def measure_joint_play(reading: StepReading, arguments: Mapping[str, Any], also: Sequence[Any]) -> float:
    """How far the piece of `also[0]` can be moved along `along` and back before this file's holds it [mm].

    along                 unit direction in the design's frame
    box                   corners of the room round the joint, in the design's frame
    frame, also_frames    design's frame to each file's
    """
    (other,) = also
    (other_frame,) = arguments["also_frames"]
    return _play(reading, other, _frozen(arguments["frame"]), _frozen(other_frame), _joint(arguments))


def measure_position_deviation(reading: StepReading, arguments: Mapping[str, Any], also: Sequence[Any]) -> float:
    """Standard deviation [mm] of a place in this file behind joints, their play measured on it and the files of `also`.

    chain      for each joint: files (indices, 0 = this file, 1 = also[0], ...) of its two pieces, `along` and `box`
    frames     design's frame to each file's, this one's first
    notch_mm   largest error of the place within its own piece

    Plays and the notch are independent errors, evenly spread: root of the sum of play² / 12 and notch² / 3.
    """
    files, frames = [reading, *also], [_frozen(frame) for frame in arguments["frames"]]
    total = float(arguments["notch_mm"]) ** 2 / 3.0
    for joint in arguments["chain"]:
        one, two = joint["files"]
        total += _play(files[one], files[two], frames[one], frames[two], _joint(joint)) ** 2 / 12.0
    return float(np.sqrt(total))


def _frozen(frame: Any) -> Frame:
    return None if frame is None else tuple(tuple(float(value) for value in row) for row in frame)


def _joint(arguments: Mapping[str, Any]) -> tuple[tuple[float, ...], Box]:
    low, high = (tuple(float(value) for value in corner) for corner in arguments["box"])
    return tuple(float(value) for value in arguments["along"]), (low, high)  # type: ignore[return-value]


@lru_cache(maxsize=64)
def _play(
    one: StepReading, other: StepReading, frame: Frame, other_frame: Frame, joint: tuple[tuple[float, ...], Box]
) -> float:
    """Kept, since every piece behind a joint asks for its play."""
    along, (low, high) = np.array(joint[0]), (np.array(corner) for corner in joint[1])
    margin = 2.0 * MOST_PLAY_MM
    fixed = _clipped(one, frame, low, high)
    moved = _clipped(other, other_frame, low - margin, high + margin)
    where = f"{one.path.name} and {other.path.name}"
    return sum(_way(fixed, moved, sense * along, where) for sense in (1.0, -1.0))


def _clipped(reading: StepReading, frame: Frame, low: Vector, high: Vector) -> Any:
    """What of a file's solids lies in a box of the design's frame, moved there: clipped first, since that is less."""
    from OCP.BRepAlgoAPI import BRepAlgoAPI_Common
    from OCP.gp import gp_Trsf
    from OCP.TopLoc import TopLoc_Location

    motion = gp_Trsf()
    motion.SetValues(*matrix_of(frame)[:3].ravel().tolist())
    block = solid_of({"kind": "box", "corners": [low, high]}).Moved(TopLoc_Location(motion))
    solids = [solid for body in reading.bodies for solid in body.solids]
    return boolean(BRepAlgoAPI_Common, solids, [block]).Moved(TopLoc_Location(motion.Inverted()))


def _way(fixed: Any, moved: Any, along: Vector, where: str) -> float:
    """How far the moved piece gets [mm]: the first of the places where plane faces would meet at which they do."""
    for place in _places(fixed, moved, along):
        if _common_mm3(fixed, moved, (place + BEYOND_MM) * along) > TOUCH_MM3:
            if place > BEYOND_MM and _common_mm3(fixed, moved, (place - BEYOND_MM) * along) > TOUCH_MM3:
                raise MeasureError(f"{where}: something other than plane faces holds the joint")
            return place
    raise MeasureError(f"{where}: nothing holds the joint along {tuple(along.tolist())}")


def _places(fixed: Any, moved: Any, along: Vector) -> list[float]:
    """Ways [mm], ascending, after which a plane face of one lies in that of a face of the other that looks at it."""
    here, there = (
        [face for face in ReadBody("", None, shape).faces if face.kind == "plane"] for shape in (fixed, moved)
    )
    normals, others = (np.array([face.direction for face in faces]) for faces in (here, there))
    offsets = np.array([face.direction @ face.origin for face in here])
    other_offsets = np.array([face.direction @ face.origin for face in there])
    facing = normals @ others.T < ANTIPARALLEL - 1.0
    closing = -(normals @ along)
    gap = -other_offsets[None, :] - offsets[:, None]
    chosen = facing & (closing[:, None] > SAME_MM) & (gap > -SAME_MM)
    ways = gap[chosen] / np.broadcast_to(closing[:, None], gap.shape)[chosen]
    return sorted({max(0.0, round(float(way), 6)) for way in ways if way <= MOST_PLAY_MM})


def _common_mm3(fixed: Any, moved: Any, by: Vector) -> float:
    from OCP.BRepAlgoAPI import BRepAlgoAPI_Common

    return volume_mm3(boolean(BRepAlgoAPI_Common, [fixed], [shifted(moved, by)]))


MEASURES: dict[str, Callable[[Any, Mapping[str, Any], Sequence[Any]], float]] = {
    "joint_play_mm": measure_joint_play,
    "position_deviation_mm": measure_position_deviation,
}
