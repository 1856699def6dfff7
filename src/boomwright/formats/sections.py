"""Horizontal sections of a closed mesh as shapely areas. Millimetres."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray

from boomwright.errors import MeasureError

if TYPE_CHECKING:
    from boomwright.formats.meshes import MeshReading

LEVEL_MM = 2e-3
"""A section this near to a corner of the mesh is moved off it."""


def section_of(reading: MeshReading, level_mm: float) -> Any:
    """The material at a height above the bed as a shapely polygon or several; empty where there is none.

    Raises MeasureError when the mesh is not closed there.
    """
    import shapely

    rings = [ring for ring in _rings(reading, _off_corners(reading, level_mm)) if len(ring) > 2]
    area = shapely.build_area(shapely.geometrycollections([shapely.linearrings(ring) for ring in rings]))
    return area if area.is_valid else area.buffer(0.0)


def _off_corners(reading: MeshReading, level_mm: float) -> float:
    """The level, or one a little higher that no corner of the mesh lies on."""
    heights = reading.heights
    while True:
        at = int(np.searchsorted(heights, level_mm - 1e-6))
        if at == len(heights) or heights[at] > level_mm + 1e-6:
            return level_mm
        level_mm += LEVEL_MM


def _rings(reading: MeshReading, level_mm: float) -> list[NDArray[np.float64]]:
    """Closed rings of points (x, y) in which the surface crosses the level."""
    over = reading.vertices[:, 2] > level_mm
    triangles = reading.triangles
    flags = over[triangles]
    crossing = flags.any(axis=1) & ~flags.all(axis=1)
    triangles, flags = triangles[crossing], flags[crossing]
    following, later = np.roll(triangles, -1, axis=1), np.roll(flags, -1, axis=1)
    rising, falling = ~flags & later, flags & ~later
    count = len(reading.vertices)
    keys = np.minimum(triangles, following) * count + np.maximum(triangles, following)
    starts, ends = keys[rising], keys[falling]
    order = np.argsort(starts)
    sorted_starts = starts[order]
    if not np.array_equal(sorted_starts, np.sort(ends)) or np.any(np.diff(sorted_starts) == 0):
        raise MeasureError(f"{reading.path.name}: its surface is not closed at {level_mm:.4g} mm above the bed")
    following_place = order[np.searchsorted(sorted_starts, ends)].tolist()
    low, high = reading.vertices[starts // count], reading.vertices[starts % count]
    share = (level_mm - low[:, 2]) / (high[:, 2] - low[:, 2])
    points = low[:, :2] + share[:, None] * (high[:, :2] - low[:, :2])
    rings, left = [], [True] * len(starts)
    for first in range(len(starts)):
        ring, at = [], first
        while left[at]:
            left[at] = False
            ring.append(at)
            at = following_place[at]
        if ring:
            rings.append(points[ring])
    return rings
