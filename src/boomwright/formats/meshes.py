"""Triangle meshes as read back from STL or 3MF, their measures, and the rules they must meet. Millimetres."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from functools import cached_property
from pathlib import Path
from typing import Any

import numpy as np

from boomwright.errors import CatalogueError, MeasureError
from boomwright.formats import deviation, feet, gaps, notches, overhang, walls
from boomwright.formats.bodies import extent_of, overrun_of
from boomwright.formats.brep import Vector
from boomwright.formats.format import FileEntry
from boomwright.formats.meshing import CHORD_MM, Triangles
from boomwright.pieces import Expectation, Probe
from boomwright.shop.profile import Shop

LOWEST_ALLOWED_MM = 1e-3
ROUNDING_MM = 5e-5
"""What 32-bit coordinates may add to a deviation on a bed of up to half a metre."""


@dataclass(frozen=True)
class MeshReading:
    """A mesh file, read once: corners [mm], shape (n, 3); triangles (m, 3); size of the file's unit; its name."""

    path: Path
    vertices: Vector
    triangles: Triangles
    unit_mm: float | None = None
    name: str = ""

    @cached_property
    def corners(self) -> Vector:
        """Corners by triangle [mm], shape (m, 3, 3)."""
        return self.vertices[self.triangles]

    @cached_property
    def normals(self) -> Vector:
        """Unit normals, shape (m, 3); zero for a triangle without area."""
        across = np.cross(self.corners[:, 1] - self.corners[:, 0], self.corners[:, 2] - self.corners[:, 0])
        length = np.linalg.norm(across, axis=1, keepdims=True)
        normals: Vector = np.divide(across, length, out=np.zeros_like(across), where=length > 0.0)
        return normals

    @cached_property
    def heights(self) -> Vector:
        """Distinct heights of corners above the bed, ascending [mm]."""
        heights: Vector = np.unique(self.vertices[:, 2])
        return heights

    @cached_property
    def slopes(self) -> list[notches.Slope]:
        """Flat patches that could carry a rod."""
        return notches.slopes_of_triangles(self.vertices, self.triangles, self.normals)

    @cached_property
    def matches(self) -> dict[Any, deviation.Match]:
        """Matches with a STEP reading, by its identity and the offsets: worked out once for several measures."""
        return {}


def is_watertight(triangles: Triangles) -> bool:
    """Whether every edge is used exactly once in each direction."""
    count = int(triangles.max(initial=0)) + 1
    start, end = triangles.ravel(), np.roll(triangles, -1, axis=1).ravel()
    there, back = np.sort(start * count + end), np.sort(end * count + start)
    return bool(len(there) > 0 and np.all(np.diff(there) > 0) and np.array_equal(there, back))


def measure_watertight(reading: MeshReading, arguments: Mapping[str, Any], also: Sequence[Any]) -> float:
    """1 when the surface is closed and its triangles all look the same way, else 0."""
    return float(is_watertight(reading.triangles))


def measure_volume(reading: MeshReading, arguments: Mapping[str, Any], also: Sequence[Any]) -> float:
    """Enclosed volume [mm³]; negative when the surface is inside out."""
    corners = reading.corners - reading.vertices.mean(axis=0)
    return float(np.einsum("ij,ij->", corners[:, 0], np.cross(corners[:, 1], corners[:, 2])) / 6.0)


def measure_body_count(reading: MeshReading, arguments: Mapping[str, Any], also: Sequence[Any]) -> float:
    """Number of surfaces that do not hang together."""
    start, end = reading.triangles.ravel(), np.roll(reading.triangles, -1, axis=1).ravel()
    root = np.arange(len(reading.vertices))
    while not np.array_equal(root[start], root[end]):
        low, high = np.minimum(root[start], root[end]), np.maximum(root[start], root[end])
        np.minimum.at(root, high, low)
        while not np.array_equal(root, root[root]):
            root = root[root]
    return float(len(np.unique(root)))


def measure_extent(reading: MeshReading, arguments: Mapping[str, Any], also: Sequence[Any]) -> float:
    """Extent of the mesh [mm], `quantity` as `min_x_mm`, `size_z_mm`."""
    return extent_of(reading.vertices.min(axis=0), reading.vertices.max(axis=0), str(arguments["quantity"]))


def measure_lowest(reading: MeshReading, arguments: Mapping[str, Any], also: Sequence[Any]) -> float:
    """z of the lowest corner [mm]."""
    return float(reading.vertices[:, 2].min())


def measure_overrun(reading: MeshReading, arguments: Mapping[str, Any], also: Sequence[Any]) -> float:
    """How far the mesh overruns a bed `bed_mm`, either way round [mm]."""
    return overrun_of(np.ptp(reading.vertices, axis=0), arguments["bed_mm"])


def measure_resting_axis(reading: MeshReading, arguments: Mapping[str, Any], also: Sequence[Any]) -> float:
    """Axis of the nominal rod in the notch near `at_mm`, with `growth_mm` undone; see `notches.resting_axis`."""
    growth = float(arguments.get("growth_mm", 0.0))
    up = np.array([0.0, 0.0, growth])
    undone = [
        notches.Slope(s.normal, s.distance_mm + growth * abs(float(s.normal[0])), s.low, s.high + up)
        for s in reading.slopes
    ]
    return notches.resting_axis(undone, arguments, reading.path.name)


def measure_deviation(reading: MeshReading, arguments: Mapping[str, Any], also: Sequence[Any]) -> float:
    """Farthest corner or triangle's middle from the surface of the STEP file `also[0]`, offsets undone [mm].

    growth_mm, hole_shrink_mm    the printer's offsets, default 0
    """
    return _match(reading, arguments, also).deviation_mm


def measure_coverage(reading: MeshReading, arguments: Mapping[str, Any], also: Sequence[Any]) -> float:
    """Farthest point of the STEP file's surface from the mesh, offsets undone [mm]; arguments as for deviation."""
    return _match(reading, arguments, also).coverage_mm


def _match(reading: MeshReading, arguments: Mapping[str, Any], also: Sequence[Any]) -> deviation.Match:
    if len(also) != 1:
        raise MeasureError(f"{reading.path.name}: the STEP file to compare with is missing")
    offsets = deviation.Offsets(float(arguments.get("growth_mm", 0.0)), float(arguments.get("hole_shrink_mm", 0.0)))
    key = (id(also[0]), offsets)
    if key not in reading.matches:
        reading.matches[key] = deviation.Match(reading.corners, also[0], offsets)
    return reading.matches[key]


def measure_unit(reading: MeshReading, arguments: Mapping[str, Any], also: Sequence[Any]) -> float:
    """Size of the file's unit [mm]; MeasureError for a format that states none."""
    if reading.unit_mm is None:
        raise MeasureError(f"{reading.path.name}: states no unit")
    return reading.unit_mm


def measure_same_as(reading: MeshReading, arguments: Mapping[str, Any], also: Sequence[Any]) -> float:
    """Largest difference between this mesh and `also[0]`, triangle for triangle in the same order [mm]."""
    (other,) = also
    if reading.corners.shape != other.corners.shape:
        raise MeasureError(
            f"{reading.path.name}: {len(reading.triangles)} triangles, {other.path.name} has {len(other.triangles)}"
        )
    return float(np.abs(reading.corners - other.corners).max(initial=0.0))


MEASURES: dict[str, Callable[[Any, Mapping[str, Any], Sequence[Any]], float]] = {
    "watertight": measure_watertight,
    "volume_mm3": measure_volume,
    "body_count": measure_body_count,
    "extent": measure_extent,
    "lowest_mm": measure_lowest,
    "overrun_mm": measure_overrun,
    "resting_axis": measure_resting_axis,
    "deviation_mm": measure_deviation,
    "coverage_mm": measure_coverage,
    "unit_mm": measure_unit,
    "same_as_mm": measure_same_as,
    "free_mm": gaps.measure_free_in_mesh,
    "unsupported_mm2": overhang.measure_unsupported,
    "midair_starts": overhang.measure_midair_starts,
    "thinnest_wall_mm": walls.measure_thinnest_wall,
    "foot_chamfer_mm": feet.measure_foot_chamfer,
}


def measure(reading: Any, probe: Probe, also: Sequence[Any]) -> float:
    """One quantity of a mesh, by the measure's name."""
    if probe.measure not in MEASURES:
        raise CatalogueError(f"unknown mesh measure {probe.measure!r} (known: {', '.join(MEASURES)})")
    return MEASURES[probe.measure](reading, probe.arguments, also)


def sibling(path: str, suffix: str) -> str:
    """The file of the same stem in another format."""
    return path.rpartition(".")[0] + suffix


def expect_sound(entry: FileEntry) -> list[Expectation]:
    """Closed, oriented, in one piece, on the bed."""
    path = entry.path
    return [
        Expectation(path, "closed surface, one orientation", 1.0, 0.0, "", Probe("watertight")),
        Expectation(path, "volume", 0.0, 0.0, "mm3", Probe("volume_mm3"), "at_least"),
        Expectation(path, "number of bodies", 1.0, 0.0, "", Probe("body_count")),
        Expectation(path, "lowest point above the bed", 0.0, LOWEST_ALLOWED_MM, "mm", Probe("lowest_mm")),
    ]


def expect_true_to_step(entry: FileEntry, shop: Shop) -> list[Expectation]:
    """Nowhere farther from the sibling STEP than the chord tolerance, and nothing of it missing.

    An offset is undone only where the manifest says it was taken, and always by the shop's figure.
    """
    taken = {
        "growth_mm": shop.printer.outline_growth_mm if entry.offsets.get("outline_growth_mm") else 0.0,
        "hole_shrink_mm": shop.printer.hole_shrink_mm if entry.offsets.get("hole_shrink_mm") else 0.0,
    }
    also = (sibling(entry.path, ".step"),)
    allowed = CHORD_MM + ROUNDING_MM
    return [
        Expectation(entry.path, what, 0.0, allowed, "mm", Probe(measure, taken, also), "at_most")
        for what, measure in (
            ("distance from the STEP", "deviation_mm"),
            ("surface of the STEP missing", "coverage_mm"),
        )
    ]
