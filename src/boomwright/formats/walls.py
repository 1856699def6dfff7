"""The thinnest wall of a mesh that is printed flat on its bed, found in horizontal sections. Millimetres.

Between two holes of a section, or a hole and its rim, the wall is their distance. For all others the section is opened
with a disc (shrunk and grown again by its radius): what a disc of the wished wall's diameter does not reach is thinner
than that. Not counted, because no wall:

- the tips of corners: what hangs on the rest by one side only and stands out from it by less than 1.5 wished walls;
- what is less than 0.7 high, such as the material between the strokes of an engraved letter, which carries nothing:
  each section is joined with the one 0.7 below before it is opened;
- the lowest 0.5, where the bottom edge is chamfered against elephant's foot.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from itertools import pairwise
from typing import TYPE_CHECKING, Any

import numpy as np

from boomwright.formats.sections import section_of

if TYPE_CHECKING:
    from boomwright.formats.meshes import MeshReading

LOW_MM = 0.7
"""What is lower than this carries nothing: a little more than the depth of engraved letters."""

FOOT_MM = 0.5
OFF_LEVEL_MM = 0.02
"""How far inside a slab its two sections lie."""

APART_MM = 0.5
"""Levels nearer than this are one: more than a layer, less than anything that stands alone."""

SPIKE = 1.5
"""A corner's tip stands out by less than this many walls, down to an angle of 29 degrees."""

THIN_SLAB_MM = 1.0
"""A slab lower than this is cut once, in its middle."""

STEP_MM = 0.02
"""A thickness is found to this."""

SIMPLER_MM = 0.01
NOTHING_MM2 = 0.02
TOUCH_MM = 0.02
QUARTER_SEGMENTS = 5


@dataclass(frozen=True)
class Section:
    """The material at a level, and the same joined with what lies a little below it: shapely areas."""

    here: Any
    joined: Any


def measure_thinnest_wall(reading: MeshReading, arguments: Mapping[str, Any], also: Sequence[Any]) -> float:
    """Thinnest wall in any horizontal section [mm], at most `up_to_mm`, which nothing thinner means.

    up_to_mm    where to stop looking
    growth_mm   what the printer adds to each outline, undone before measuring, default 0
    """
    thinnest, growth = float(arguments["up_to_mm"]), float(arguments.get("growth_mm", 0.0))
    for level in _levels(reading):
        section = _section(reading, level, growth)
        thinnest = min(thinnest, _between_rings_mm(section, thinnest))
        if _is_thin(section, thinnest):
            thinnest = _bisected_mm(section, thinnest)
    return thinnest


def _levels(reading: MeshReading) -> list[float]:
    """Heights inside the slabs between distinct levels of corners, near both their ends [mm]."""
    heights = reading.heights
    levels = [float(heights[0])]
    for height in heights[1:].tolist():
        if height - levels[-1] >= APART_MM:
            levels.append(height)
    levels[-1] = max(levels[-1], float(heights[-1]))
    ends = list[float]()
    floor = levels[0] + FOOT_MM
    for low, high in ((max(low, floor), high) for low, high in pairwise(levels) if high > floor):
        thin = high - low < THIN_SLAB_MM
        ends += [(low + high) / 2.0] if thin else [low + OFF_LEVEL_MM, high - OFF_LEVEL_MM]
    return ends


def _section(reading: MeshReading, level_mm: float, growth_mm: float) -> Section:
    """The section at this level as it comes out of the printer."""
    here = section_of(reading, level_mm).buffer(growth_mm, join_style="mitre")
    if level_mm - LOW_MM <= reading.heights[0] + FOOT_MM:
        here = here.simplify(SIMPLER_MM)
        return Section(here, here)
    below = section_of(reading, level_mm - LOW_MM).buffer(growth_mm, join_style="mitre")
    return Section(here, here.union(below).simplify(SIMPLER_MM))


def _between_rings_mm(section: Section, least_mm: float) -> float:
    """Distance between two holes, or a hole and its rim, where it is less than this [mm]; else this."""
    import shapely

    for part in shapely.get_parts(section.joined):
        rings = np.array([part.exterior, *part.interiors])
        one, other = np.triu_indices(len(rings), 1)
        apart = shapely.distance(rings[one], rings[other])
        for index in np.flatnonzero(apart < least_mm):
            web = shapely.shortest_line(rings[one[index]], rings[other[index]])
            if section.here.intersects(web.interpolate(0.5, normalized=True)):
                least_mm = min(least_mm, float(apart[index]))
    return least_mm


def thin_places(section: Section, wall_mm: float) -> Any:
    """The parts of a section that are walls thinner than this, as an array of shapely areas."""
    import shapely

    area, radius = section.joined, wall_mm / 2.0 - STEP_MM / 4.0
    core = area.buffer(-radius, quad_segs=QUARTER_SEGMENTS)
    opened = core.buffer(radius + TOUCH_MM, quad_segs=QUARTER_SEGMENTS)
    rest = shapely.get_parts(area.difference(opened))
    rest = rest[shapely.area(rest) > NOTHING_MM2]
    if len(rest) > 0:
        rest = rest[shapely.area(shapely.intersection(rest, section.here)) > NOTHING_MM2]
    if len(rest) == 0 or core.is_empty:
        return rest
    sides = shapely.intersection(shapely.buffer(rest, TOUCH_MM / 10.0, quad_segs=1), opened.intersection(area))
    return rest[(shapely.get_num_geometries(sides) != 1) | (_reaches(rest, opened) > SPIKE * wall_mm)]


def _reaches(pieces: Any, opened: Any) -> Any:
    """How far each piece stands out from what the disc reaches [mm]."""
    import shapely

    reach = np.zeros(len(pieces))
    points, index = shapely.get_coordinates(pieces, return_index=True)
    np.maximum.at(reach, index, shapely.distance(opened, shapely.points(points)))
    return reach


def _is_thin(section: Section, wall_mm: float) -> bool:
    return len(thin_places(section, wall_mm)) > 0


def _bisected_mm(section: Section, thick_mm: float) -> float:
    """The thinnest wall of a section that has one thinner than this [mm]."""
    thin = 0.0
    while thick_mm - thin > STEP_MM:
        middle = (thin + thick_mm) / 2.0
        if _is_thin(section, middle):
            thick_mm = middle
        else:
            thin = middle
    return thick_mm
