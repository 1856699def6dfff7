"""The chamfer round the bottom of a printed part, against elephant's foot: first layers squeeze outward.

Measured in millimetres at the outer edges: slots, notches and windows narrower than 10 are not among them.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import TYPE_CHECKING, Any

import numpy as np

from boomwright.errors import MeasureError
from boomwright.formats.sections import section_of

if TYPE_CHECKING:
    from boomwright.formats.meshes import MeshReading

SLOT_MM = 10.0
SPACING_MM = 0.5
OFF_LEVEL_MM = 0.004
ABOVE_MM = 0.2
"""How far above its wished height a chamfer is looked past for the part's full outline."""

SEEN_MM = 0.005
"""Edges that lie deeper than this inside the outline with its slots filled are a slot's own."""


def measure_foot_chamfer(reading: MeshReading, arguments: Mapping[str, Any], also: Sequence[Any]) -> float:
    """Least distance [mm] by which the outline on the bed stands back from the outline above the chamfer.

    chamfer_mm   how high the chamfer is wished to be: the outline above it is that of the part
    """
    import shapely

    floor, wished = float(reading.heights[0]), float(arguments["chamfer_mm"])
    bottom = section_of(reading, floor + OFF_LEVEL_MM)
    above = section_of(reading, floor + wished + ABOVE_MM)
    if bottom.is_empty or above.is_empty:
        raise MeasureError(f"{reading.path.name}: nothing stands on the bed")
    half = SLOT_MM / 2.0
    filled = above.buffer(half, join_style="mitre").buffer(-half, join_style="mitre")
    rim = shapely.union_all([part.exterior for part in shapely.get_parts(filled)])
    outline = shapely.union_all([part.exterior for part in shapely.get_parts(above)])
    points = shapely.get_coordinates(outline.segmentize(SPACING_MM))
    places = shapely.points(points)
    outer = places[shapely.distance(rim, places) < SEEN_MM]
    apart = shapely.distance(bottom, outer)
    return float(np.min(apart, initial=np.inf)) + OFF_LEVEL_MM if len(outer) else 0.0
