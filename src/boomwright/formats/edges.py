"""Straight edges along y in a flat drawing, as they are drawn. Millimetres."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

from boomwright.errors import MeasureError
from boomwright.formats.outlines import DxfReading

FARTHEST_MM = 5.0


def measure_edge(reading: DxfReading, arguments: Mapping[str, Any], also: Sequence[Any]) -> float:
    """x of the straight line along y on `layer` that passes the height `y_mm` nearest to `x_mm` [mm]."""
    x, y = float(arguments["x_mm"]), float(arguments["y_mm"])
    places = [
        segment.x0
        for outline in reading.on(arguments.get("layer"))
        for segment in outline.segments
        if segment.is_vertical and min(segment.y0, segment.y1) <= y <= max(segment.y0, segment.y1)
    ]
    nearest = min(places, key=lambda at: abs(at - x), default=None)
    if nearest is None or abs(nearest - x) > FARTHEST_MM:
        raise MeasureError(f"{reading.path.name}: no line along y within {FARTHEST_MM:g} mm of ({x:g}, {y:g})")
    return nearest
