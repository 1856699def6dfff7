"""Flat plates put together: DXF contours extruded and placed, and what the assembled fixture shows. Millimetres.

Every measure takes

    plates     [{"file": number, "box": [x0, y0, x1, y1], "frame": 4 x 4}, ..]: file 0 is the measured one, then those
               of `also`; the frame takes the sheet, z up to its thickness, into the fixture
    sheet_mm, kerf_mm, layer

Plates are polyhedra, for which the mesh kernel's booleans are exact; round bodies are decided by the CAD kernel.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from functools import cached_property
from itertools import combinations
from typing import Any

import numpy as np

from boomwright.errors import MeasureError
from boomwright.formats.bodies import TOUCH_MM3
from boomwright.formats.brep import StepReading
from boomwright.formats.outlines import DxfReading
from boomwright.formats.placed import boxes_meet, common_mm3
from boomwright.formats.plates import FARTHEST_MM, PlateRead, plate_on, resting_in

Arguments = Mapping[str, Any]
Array = Any

FILLED = 1.0 - 1e-4
"""Share of a joint that the foot must fill."""

SAME_FACE_MM = 0.05


@dataclass(frozen=True)
class Standing:
    """A plate in its place: as read, its motion into the fixture (4, 4), and the sheet's thickness."""

    plate: PlateRead
    frame: Array
    sheet_mm: float

    @cached_property
    def corners(self) -> Array:
        """Corners of its lower and upper face in the fixture, outline first (2, n, 3)."""
        points = np.vstack([self.plate.outer, *self.plate.holes])
        faces = [np.c_[points, np.full(len(points), w)] for w in (0.0, self.sheet_mm)]
        return np.array([face @ self.frame[:3, :3].T + self.frame[:3, 3] for face in faces])

    @cached_property
    def box(self) -> tuple[Array, Array]:
        """Its least and greatest x, y, z."""
        return self.corners.min(axis=(0, 1)), self.corners.max(axis=(0, 1))

    @cached_property
    def manifold(self) -> Any:
        """The plate as a closed mesh, corners exact."""
        import manifold3d

        rings = [self.plate.outer, *(hole[::-1] for hole in self.plate.holes)]
        caps = np.asarray(manifold3d.triangulate([np.ascontiguousarray(r) for r in rings]), dtype=np.int64)
        # The mesh's points run through the rings as they are handed over: holes turned round.
        order, first = [], 0
        for index, ring in enumerate(rings):
            run = np.arange(first, first + len(ring))
            order.append(run if index == 0 else run[::-1])
            first += len(ring)
        points = self.corners[:, np.concatenate(order)]
        count, sides, first = points.shape[1], [], 0
        for ring in rings:
            a = np.arange(first, first + len(ring))
            b = np.roll(a, -1)
            sides += [np.c_[a, b, b + count], np.c_[a, b + count, a + count]]
            first += len(ring)
        triangles = np.vstack([caps[:, ::-1], caps + count, *sides]).astype(np.uint64)
        mesh = manifold3d.Mesh64(vert_properties=points.reshape(-1, 3), tri_verts=triangles)
        made = manifold3d.Manifold(mesh)
        if made.status() != manifold3d.Error.NoError:
            raise MeasureError(f"a plate gave no closed mesh: {made.status()}")
        return made

    @cached_property
    def solid(self) -> Any:
        """The plate as a solid of the CAD kernel."""
        from OCP.BRepBuilderAPI import BRepBuilderAPI_MakeFace, BRepBuilderAPI_MakePolygon
        from OCP.BRepPrimAPI import BRepPrimAPI_MakePrism
        from OCP.gp import gp_Pnt, gp_Vec

        wires: list[Any] = []
        first = 0
        for ring in (self.plate.outer, *self.plate.holes):
            run = self.corners[0, first : first + len(ring)]
            polygon = BRepBuilderAPI_MakePolygon()
            for x, y, z in run if not wires else run[::-1]:
                polygon.Add(gp_Pnt(float(x), float(y), float(z)))
            polygon.Close()
            wires.append(polygon.Wire())
            first += len(ring)
        face = BRepBuilderAPI_MakeFace(wires[0], True)
        for wire in wires[1:]:
            face.Add(wire)
        up = self.corners[1, 0] - self.corners[0, 0]
        return BRepPrimAPI_MakePrism(face.Face(), gp_Vec(*map(float, up))).Shape()


def standing_plates(reading: DxfReading, arguments: Arguments, also: Sequence[Any]) -> list[Standing]:
    """All plates in the fixture; kept with the reading. MeasureError when one is not on its sheet."""
    files = [reading, *(file for file in also if isinstance(file, DxfReading))]
    layer, kerf, sheet = str(arguments["layer"]), float(arguments["kerf_mm"]), float(arguments["sheet_mm"])
    found = []
    for row in arguments["plates"]:
        index = int(row["file"])
        plate = plate_on(files[index], row["box"], layer, kerf)
        frame = np.asarray(row["frame"], dtype=float)
        key = (id(files[index]), tuple(map(float, row["box"])), frame.tobytes(), sheet, kerf)
        if key not in reading.standing:
            reading.standing[key] = Standing(plate, frame, sheet)
        found.append(reading.standing[key])
    return found


def measure_plates_overlap(reading: DxfReading, arguments: Arguments, also: Sequence[Any]) -> float:
    """Volume common to any two plates in their places [mm³]."""
    plates = standing_plates(reading, arguments, also)
    total = 0.0
    for one, other in combinations(plates, 2):
        if boxes_meet(one.box, other.box):
            common = float((one.manifold ^ other.manifold).volume())
            total += common if common > TOUCH_MM3 else 0.0
    return total


def measure_open_joints(reading: DxfReading, arguments: Arguments, also: Sequence[Any]) -> float:
    """Number of the `joints` [((x0, y0, z0), (x1, y1, z1)), ..] that no single plate fills: slots without their tab."""
    import manifold3d

    plates = standing_plates(reading, arguments, also)
    count = 0
    for low, high in (np.asarray(joint, dtype=float) for joint in arguments["joints"]):
        block = manifold3d.Manifold.cube((high - low).tolist()).translate(low.tolist())
        near = [plate for plate in plates if boxes_meet(plate.box, (low, high))]
        filled = max((float((plate.manifold ^ block).volume()) for plate in near), default=0.0)
        count += filled < FILLED * float(np.prod(high - low))
    return float(count)


def measure_plates_clearance(reading: DxfReading, arguments: Arguments, also: Sequence[Any]) -> float:
    """Least distance from any plate to `solid_box` ((x, y, z), (x, y, z)) [mm]; looked for up to `most_mm`."""
    import manifold3d

    low, high = np.asarray(arguments["solid_box"], dtype=float)
    most = float(arguments["most_mm"])
    block = manifold3d.Manifold.cube((high - low).tolist()).translate(low.tolist())
    near = [
        plate for plate in standing_plates(reading, arguments, also) if boxes_meet(plate.box, (low - most, high + most))
    ]
    return min((float(plate.manifold.min_gap(block, most)) for plate in near), default=most)


def measure_plates_rest(reading: DxfReading, arguments: Arguments, also: Sequence[Any]) -> float:
    """Where a bar along y of `diameter_mm` rests in the plate that occupies `y_mm`, near x = `at_mm` [mm].

    quantity   height_mm = z of its axis, at_mm = x of it
    """
    at, radius = float(arguments["at_mm"]), float(arguments["diameter_mm"]) / 2.0
    low_y, high_y = map(float, arguments["y_mm"])
    for plate in standing_plates(reading, arguments, also):
        low, high = plate.box
        if max(abs(low[1] - low_y), abs(high[1] - high_y)) > SAME_FACE_MM:
            continue
        if not low[0] - FARTHEST_MM <= at <= high[0] + FARTHEST_MM:
            continue
        outer = plate.corners[0, : len(plate.plate.outer)][:, [0, 2]]
        centre = resting_in(outer if _anticlockwise(outer) else outer[::-1], at, radius)
        if centre is not None:
            return float(centre[{"at_mm": 0, "height_mm": 1}[str(arguments["quantity"])]])
    raise MeasureError(f"no plate between y = {low_y:g} and {high_y:g} holds a bar at x = {at:g}")


def _anticlockwise(points: Array) -> bool:
    x, y = points[:, 0], points[:, 1]
    return bool(np.sum(x * np.roll(y, -1) - np.roll(x, -1) * y) > 0.0)


def measure_plates_meet_antenna(reading: DxfReading, arguments: Arguments, also: Sequence[Any]) -> float:
    """Volume common to the plates and the bodies `names` of a STEP file in `also` [mm³].

    antenna_frame   takes the STEP file's frame into the fixture's
    """
    (step,) = (file for file in also if isinstance(file, StepReading))
    plates = standing_plates(reading, arguments, also)
    total = 0.0
    for body in step.chosen(arguments["names"]):
        for solid in _moved(body.solids, arguments["antenna_frame"]):
            low, high = _box_of(solid)
            near = [plate.solid for plate in plates if boxes_meet(plate.box, (low, high))]
            total += common_mm3(solid, near)
    return total


def _moved(solids: Sequence[Any], frame: Any) -> list[Any]:
    from OCP.BRepBuilderAPI import BRepBuilderAPI_Transform
    from OCP.gp import gp_Trsf

    motion = gp_Trsf()
    motion.SetValues(*np.asarray(frame, dtype=float)[:3].ravel().tolist())
    return [BRepBuilderAPI_Transform(solid, motion, True).Shape() for solid in solids]


def _box_of(solid: Any) -> tuple[Array, Array]:
    from boomwright.formats.placed import box_of

    low, high = box_of(solid)
    return low, high


MEASURES = {
    "plates_overlap_mm3": measure_plates_overlap,
    "open_joints": measure_open_joints,
    "plates_clearance_mm": measure_plates_clearance,
    "plates_rest": measure_plates_rest,
    "plates_meet_antenna_mm3": measure_plates_meet_antenna,
}
