"""Measures on whole bodies of a STEP file: extents, volumes, distances, and what bodies have in common.

Every measure takes (reading, arguments, further readings) and returns one number.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from itertools import combinations, product
from typing import Any

import numpy as np

from boomwright.errors import MeasureError
from boomwright.formats import conductors, gaps
from boomwright.formats.brep import FaceView, ReadBody, StepReading, Vector, exact_box, explore, volume_mm3

__all__ = ["MEASURES", "TOUCH_MM3", "extent_of", "overrun_of", "volume_mm3"]

Arguments = Mapping[str, Any]

TOUCH_MM3 = 1e-6
"""Common volumes below this are two faces that touch."""

MOST_TOOLS, MOST_FACES = 6, 800
"""A boolean of more than both is done in halves."""


def measure_extent(reading: StepReading, arguments: Arguments, also: Sequence[Any]) -> float:
    """Exact extent of a body, or of all [mm]: `quantity` is min_, max_, size_ or mid_ with x_mm, y_mm or z_mm."""
    boxes = np.array([body.box for body in _some(reading, arguments)])
    return extent_of(boxes[:, 0].min(axis=0), boxes[:, 1].max(axis=0), str(arguments["quantity"]))


def extent_of(low: Vector, high: Vector, quantity: str) -> float:
    """One quantity of a box, by its name: `min_x_mm`, `size_z_mm`."""
    sense, _, axis = quantity.removesuffix("_mm").partition("_")
    values = {"min": low, "max": high, "size": high - low, "mid": (low + high) / 2.0}
    if sense not in values or axis not in ("x", "y", "z"):
        raise MeasureError(f"no such extent: {quantity!r}")
    return float(values[sense]["xyz".index(axis)])


def measure_lowest(reading: StepReading, arguments: Arguments, also: Sequence[Any]) -> float:
    """z of the lowest point of a body, or of all [mm]."""
    return float(min(body.box[0, 2] for body in _some(reading, arguments)))


def measure_overrun(reading: StepReading, arguments: Arguments, also: Sequence[Any]) -> float:
    """How far the bodies overrun a bed `bed_mm` (x, y, z), laid either way round [mm]; 0 when they fit."""
    boxes = np.array([body.box for body in reading.bodies])
    return overrun_of(boxes[:, 1].max(axis=0) - boxes[:, 0].min(axis=0), arguments["bed_mm"])


def overrun_of(size: Sequence[float] | Vector, bed: Sequence[float]) -> float:
    """How far a box of this size overruns a bed, x and y either way round [mm]."""
    return float(max(0.0, max(size[:2]) - max(bed[:2]), min(size[:2]) - min(bed[:2]), size[2] - bed[2]))


def measure_volume(reading: StepReading, arguments: Arguments, also: Sequence[Any]) -> float:
    """Volume of a body, or of all [mm³]."""
    return sum(volume_mm3(body.wrapped) for body in _some(reading, arguments))


def measure_solid_count(reading: StepReading, arguments: Arguments, also: Sequence[Any]) -> float:
    """Number of solids in a body, or in all."""
    return float(sum(len(body.solids) for body in _some(reading, arguments)))


def measure_valid(reading: StepReading, arguments: Arguments, also: Sequence[Any]) -> float:
    """1 when the kernel finds no fault in any body and each has a positive volume, else 0."""
    from OCP.BRepCheck import BRepCheck_Analyzer

    sound = all(
        body.solids and BRepCheck_Analyzer(body.wrapped, True, True).IsValid() and volume_mm3(body.wrapped) > 0.0
        for body in _some(reading, arguments)
    )
    return float(sound)


def measure_clearance(reading: StepReading, arguments: Arguments, also: Sequence[Any]) -> float:
    """Least distance from the material of a body, or of all, to `box` ((low corner), (high corner)) [mm]."""
    low, high = np.asarray(arguments["box"], dtype=float)
    return min(_distance_to_box(body, low, high) for body in _some(reading, arguments))


def _distance_to_box(body: ReadBody, low: Vector, high: Vector) -> float:
    from OCP.BRepExtrema import BRepExtrema_DistShapeShape
    from OCP.BRepPrimAPI import BRepPrimAPI_MakeBox
    from OCP.gp import gp_Pnt

    high = np.maximum(high, low + 1e-6)
    if body.holds((low + high) / 2.0):
        return 0.0
    block = BRepPrimAPI_MakeBox(gp_Pnt(*map(float, low)), gp_Pnt(*map(float, high))).Shape()
    # The boxes' distance never exceeds the faces' own: nearest boxes first, stop when no better one can come.
    lows, highs = (np.array([getattr(face, side) for face in body.faces]) for side in ("low", "high"))
    apart = np.linalg.norm(np.maximum(0.0, np.maximum(low - highs, lows - high)), axis=1)
    best = float("inf")
    for index in np.argsort(apart, kind="stable"):
        if apart[index] >= best:
            break
        best = min(best, BRepExtrema_DistShapeShape(block, body.faces[index].face).Value())
    return best


@dataclass(frozen=True)
class _Placed:
    """A solid in the design's frame, its exact box, and which file it came from."""

    file: int
    solid: Any
    low: Vector
    high: Vector


def measure_overlap(reading: StepReading, arguments: Arguments, also: Sequence[Any]) -> float:
    """Volume common to any two bodies of different files [mm³]; with `within` = "all" also of the same file.

    names, also_names    which bodies; default all. `also_names`: one list for every further file, or one list a file
    frame, also_frames   design's frame to each file's frame; default the same for all
    """
    files = [reading, *also]
    also_names = arguments.get("also_names")
    if also_names is None or (also_names and isinstance(also_names[0], str)):
        also_names = [also_names] * len(also)
    names = [arguments.get("names"), *also_names]
    frames = [arguments.get("frame"), *(arguments.get("also_frames") or [None] * len(also))]
    if not len(names) == len(frames) == len(files):
        raise MeasureError("also_names and also_frames must have one entry for each further file")
    placed = [
        solid
        for index, (file, wanted, frame) in enumerate(zip(files, names, frames, strict=True))
        for body in file.chosen(wanted)
        for solid in _in_design_frame(index, body, frame)
    ]
    within = arguments.get("within") == "all"
    partners: dict[int, list[_Placed]] = {}
    for (index, one), (_, other) in combinations(enumerate(placed), 2):
        if (within or one.file != other.file) and np.all(
            np.minimum(one.high, other.high) > np.maximum(one.low, other.low)
        ):
            partners.setdefault(index, []).append(other)
    return sum(_common_mm3(placed[index], others) for index, others in partners.items())


def _in_design_frame(file: int, body: ReadBody, frame: Any) -> list[_Placed]:
    """The solids of a body, moved from the file's frame to the design's; boxes hold them, exactly for quarter turns."""
    from OCP.gp import gp_Trsf
    from OCP.TopLoc import TopLoc_Location

    if frame is None:
        boxed = zip(body.solids, body.solid_boxes, strict=True)
        return [_Placed(file, solid, box[0], box[1]) for solid, box in boxed]
    matrix, motion = np.asarray(frame, dtype=float), gp_Trsf()
    motion.SetValues(*matrix[:3].ravel().tolist())
    location, placed = TopLoc_Location(motion.Inverted()), []
    for solid, box in zip(body.solids, body.solid_boxes, strict=True):
        corners = np.array(list(product(*box.T))) - matrix[:3, 3]
        corners = corners @ matrix[:3, :3]
        placed.append(_Placed(file, solid.Moved(location), corners.min(axis=0), corners.max(axis=0)))
    return placed


def _common_mm3(one: _Placed, others: Sequence[_Placed]) -> float:
    """Volume of `one` that lies in any of the others; one boolean when the others cannot touch each other.

    A boolean's time grows with faces times tools: a long body is halved across until its parts are small.
    """
    if len(others) > MOST_TOOLS and _face_count(one.solid) > MOST_FACES:
        return sum(_common_in_half_mm3(one, others, upper) for upper in (False, True))
    apart = all(np.any(np.minimum(a.high, b.high) < np.maximum(a.low, b.low)) for a, b in combinations(others, 2))
    total = 0.0
    for group in [list(others)] if apart else [[other] for other in others]:
        volume = volume_mm3(_common(one.solid, [other.solid for other in group]))
        total += volume if volume > TOUCH_MM3 else 0.0
    return total


def _common_in_half_mm3(one: _Placed, others: Sequence[_Placed], upper: bool) -> float:
    """The same within one half of `one`, cut across its longest extent."""
    axis = int(np.argmax(one.high - one.low))
    low, high = one.low.copy(), one.high.copy()
    (low if upper else high)[axis] = (one.low[axis] + one.high[axis]) / 2.0
    near = [part for other in others if _meets(other, low, high) for part in _cropped(other, low, high)]
    return sum(
        _common_mm3(part, [other for other in near if _meets(other, part.low, part.high)])
        for part in _cropped(one, low, high)
    )


def _meets(placed: _Placed, low: Vector, high: Vector) -> bool:
    return bool(np.all(np.minimum(placed.high, high) > np.maximum(placed.low, low)))


def _cropped(placed: _Placed, low: Vector, high: Vector) -> list[_Placed]:
    """What of a solid lies in a box [mm]."""
    from OCP.BRepPrimAPI import BRepPrimAPI_MakeBox
    from OCP.gp import gp_Pnt
    from OCP.TopAbs import TopAbs_SOLID

    if np.all(placed.low >= low) and np.all(placed.high <= high):
        return [placed]
    low, high = np.maximum(low, placed.low - 1.0), np.minimum(high, placed.high + 1.0)
    block = BRepPrimAPI_MakeBox(gp_Pnt(*map(float, low)), gp_Pnt(*map(float, high))).Shape()
    parts = explore(_common(placed.solid, [block]), TopAbs_SOLID)
    return [_Placed(placed.file, part, *exact_box(part)) for part in parts]


def _common(solid: Any, tools: Sequence[Any]) -> Any:
    """What a solid has in common with any of several others, as the kernel finds it."""
    from OCP.BRepAlgoAPI import BRepAlgoAPI_Common
    from OCP.TopTools import TopTools_ListOfShape

    arguments, others = TopTools_ListOfShape(), TopTools_ListOfShape()
    arguments.Append(solid)
    for tool in tools:
        others.Append(tool)
    common = BRepAlgoAPI_Common()
    common.SetArguments(arguments)
    common.SetTools(others)
    common.SetNonDestructive(True)
    common.Build()
    if not common.IsDone():
        raise MeasureError("the kernel could not decide whether bodies overlap")
    return common.Shape()


def _face_count(solid: Any) -> int:
    from OCP.TopAbs import TopAbs_FACE

    return len(explore(solid, TopAbs_FACE))


def _round_faces(body: ReadBody, at_mm: float) -> FaceView:
    """The bore or channel across the boom nearest to `at_mm`, at most 1 mm off; of several the longest."""
    across = [
        face
        for face in body.faces
        if face.kind == "cylinder" and face.concave and abs(face.direction[1]) > np.cos(np.radians(1.0))
    ]
    near = [face for face in across if abs(face.origin[0] - at_mm) <= 1.0]
    if not near:
        raise MeasureError(f"{body.name}: no groove or hole within 1 mm of x = {at_mm:g}")
    return min(near, key=lambda f: (round(abs(f.origin[0] - at_mm), 6), f.low[1] - f.high[1]))


def measure_groove(reading: StepReading, arguments: Arguments, also: Sequence[Any]) -> float:
    """Of the groove across the boom near `at_mm`: `quantity` at_mm, radius_mm, height_mm (its axis) or depth_mm.

    Depth runs from the highest point of the body down to the groove's bottom [mm].
    """
    body = reading.body(arguments.get("name"))
    face = _round_faces(body, float(arguments["at_mm"]))
    quantity = str(arguments["quantity"])
    values = {
        "at_mm": face.origin[0],
        "radius_mm": face.radius_mm,
        "diameter_mm": 2.0 * face.radius_mm,
        "height_mm": face.origin[2],
        "depth_mm": body.box[1, 2] - (face.origin[2] - face.radius_mm),
    }
    if quantity not in values:
        raise MeasureError(f"no such quantity of a groove or hole: {quantity!r}")
    return float(values[quantity])


MEASURES: dict[str, Callable[[Any, Arguments, Sequence[Any]], float]] = {
    "extent": measure_extent,
    "lowest_mm": measure_lowest,
    "overrun_mm": measure_overrun,
    "volume_mm3": measure_volume,
    "solid_count": measure_solid_count,
    "valid": measure_valid,
    "clearance_mm": measure_clearance,
    "overlap_mm3": measure_overlap,
    "groove": measure_groove,
    "hole": measure_groove,
    "rod": conductors.measure_rod,
    "driven": conductors.measure_driven,
    "free_mm": gaps.measure_free_in_bodies,
}


def _some(reading: StepReading, arguments: Arguments) -> tuple[ReadBody, ...]:
    name = arguments.get("name")
    return reading.bodies if name is None else (reading.body(name),)
