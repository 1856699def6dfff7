"""What a DXF file held, as outlines of straight and circular segments, and the measures on them. Millimetres."""

from __future__ import annotations

import math
from collections import Counter
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from functools import cached_property
from itertools import combinations
from pathlib import Path
from typing import Any

import numpy as np

from boomwright.errors import MeasureError
from boomwright.formats.bodies import extent_of
from boomwright.formats.dimensions import SeenDimension, SeenWords

Arguments = Mapping[str, Any]
Vertex = tuple[float, float, float]

SAME_MM = 1e-4
"""Points nearer than this are the same."""

FACET_MM = 1e-3
"""Arcs are turned into chords no farther from them than this where distances between parts are measured."""


@dataclass(frozen=True)
class Segment:
    """A straight line or an arc from (x0, y0) to (x1, y1) [mm]; bulge as in DXF, 0 = straight."""

    x0: float
    y0: float
    x1: float
    y1: float
    bulge: float

    @property
    def chord_mm(self) -> float:
        """Distance between the ends [mm]."""
        return math.hypot(self.x1 - self.x0, self.y1 - self.y0)

    @property
    def middle(self) -> tuple[float, float]:
        """The point half-way along [mm]."""
        return (
            (self.x0 + self.x1 + self.bulge * (self.y1 - self.y0)) / 2.0,
            (self.y0 + self.y1 - self.bulge * (self.x1 - self.x0)) / 2.0,
        )

    @property
    def is_vertical(self) -> bool:
        """Whether it is a straight line along y."""
        return self.bulge == 0.0 and abs(self.x1 - self.x0) < SAME_MM < abs(self.y1 - self.y0)

    @property
    def radius_mm(self) -> float:
        """Radius of an arc [mm]; infinite for a line."""
        return math.inf if self.bulge == 0.0 else self.chord_mm * (1.0 + self.bulge**2) / (4.0 * abs(self.bulge))

    @property
    def centre(self) -> tuple[float, float]:
        """Centre of an arc [mm]."""
        reach = (1.0 - self.bulge**2) / (4.0 * self.bulge)
        return (
            (self.x0 + self.x1) / 2.0 - reach * (self.y1 - self.y0),
            (self.y0 + self.y1) / 2.0 + reach * (self.x1 - self.x0),
        )

    def points(self, chord_mm: float = FACET_MM) -> list[tuple[float, float]]:
        """The start, and further points so that chords stay this near to an arc; without the end [mm]."""
        if self.bulge == 0.0 or self.chord_mm < SAME_MM:
            return [(self.x0, self.y0)]
        sweep, radius = 4.0 * math.atan(self.bulge), self.radius_mm
        count = max(2, math.ceil(abs(sweep) / (2.0 * math.acos(max(0.0, 1.0 - chord_mm / radius)))))
        (cx, cy), first = self.centre, math.atan2(self.y0 - self.centre[1], self.x0 - self.centre[0])
        angles = [first + sweep * i / count for i in range(count)]
        return [(cx + radius * math.cos(a), cy + radius * math.sin(a)) for a in angles]

    def reach(self, axis: int) -> tuple[float, float]:
        """Least and greatest x (axis 0) or y (axis 1) [mm], exact for arcs."""
        values = [(self.x0, self.x1), (self.y0, self.y1)][axis]
        low, high = min(values), max(values)
        if self.bulge != 0.0:
            sweep, radius = 4.0 * math.atan(self.bulge), self.radius_mm
            first = math.atan2(self.y0 - self.centre[1], self.x0 - self.centre[0])
            for quarter in range(4):
                turned = (quarter * math.pi / 2.0 - first) * (1.0 if sweep > 0.0 else -1.0) % (2.0 * math.pi)
                if turned <= abs(sweep):
                    at = self.centre[axis] + radius * [(1, 0, -1, 0), (0, 1, 0, -1)][axis][quarter]
                    low, high = min(low, at), max(high, at)
        return low, high


@dataclass(frozen=True)
class Outline:
    """A closed or open run of vertices (x, y, bulge) [mm] on a layer."""

    vertices: tuple[Vertex, ...]
    closed: bool
    layer: str

    @cached_property
    def segments(self) -> tuple[Segment, ...]:
        """The pieces between the vertices, in order."""
        ends = self.vertices[1:] + (self.vertices[:1] if self.closed else ())
        return tuple(Segment(x0, y0, x1, y1, b) for (x0, y0, b), (x1, y1, _) in zip(self.vertices, ends, strict=False))

    @cached_property
    def polygon(self) -> Any:
        """A closed outline as a shapely polygon, arcs as chords."""
        from shapely import Polygon

        points = [point for segment in self.segments for point in segment.points()]
        return Polygon(points) if len(points) >= 3 else Polygon()


@dataclass(frozen=True)
class DxfReading:
    """One DXF file, read once; `unit_code` is the header's number of the unit, 4 = millimetre."""

    path: Path
    outlines: tuple[Outline, ...]
    audit_errors: int
    unit_code: int
    dimensions: tuple[SeenDimension, ...] = ()
    placed_words: tuple[SeenWords, ...] = ()

    @property
    def words(self) -> tuple[str, ...]:
        """Every text, those of dimensions included."""
        return (*(w.text for w in self.placed_words), *(d.text for d in self.dimensions))

    def on(self, layer: Any) -> list[Outline]:
        """Outlines of one layer, or all."""
        return [outline for outline in self.outlines if layer is None or outline.layer == layer]

    @cached_property
    def parts_by_layer(self) -> dict[str | None, list[Outline]]:
        """Closed outlines that lie in no other, by layer; filled as asked for."""
        return {}

    @cached_property
    def plates(self) -> dict[Any, Any]:
        """Plates with the kerf undone, by place; filled as asked for."""
        return {}

    @cached_property
    def standing(self) -> dict[Any, Any]:
        """Plates in their places in a fixture; filled as asked for."""
        return {}

    def parts(self, layer: str | None) -> list[Outline]:
        """The outer contours: closed outlines that lie in no other one of the layer."""
        if layer not in self.parts_by_layer:
            closed = [outline for outline in self.on(layer) if outline.closed and not outline.polygon.is_empty]
            self.parts_by_layer[layer] = [
                one
                for one in closed
                if not any(
                    other is not one and other.polygon.area > one.polygon.area and other.polygon.contains(one.polygon)
                    for other in closed
                )
            ]
        return self.parts_by_layer[layer]


def outlines_of(reading: DxfReading, arguments: Arguments) -> list[Outline]:
    """Outlines on `layer` (default all); with `plate` those drawn in its box, moved into its own frame.

    plate   {"box": [x0, y0, x1, y1], "frame": 4 x 4}, the frame a turn and shift of the sheet
    """
    found, plate = reading.on(arguments.get("layer")), arguments.get("plate")
    if plate is None:
        return found
    x0, y0, x1, y1 = map(float, plate["box"])
    inside = [o for o in found if all(x0 <= x <= x1 and y0 <= y <= y1 for x, y, _ in o.vertices)]
    (a, b, _, c), (d, e, _, f) = plate["frame"][:2]
    return [
        Outline(tuple((a * x + b * y + c, d * x + e * y + f, k) for x, y, k in o.vertices), o.closed, o.layer)
        for o in inside
    ]


def measure_audit_errors(reading: DxfReading, arguments: Arguments, also: Sequence[Any]) -> float:
    """Number of errors that ezdxf's audit found, those it could mend included."""
    return float(reading.audit_errors)


def measure_unit_code(reading: DxfReading, arguments: Arguments, also: Sequence[Any]) -> float:
    """The header's number of the unit; 4 = millimetre."""
    return float(reading.unit_code)


def measure_open_contours(reading: DxfReading, arguments: Arguments, also: Sequence[Any]) -> float:
    """Number of outlines on `layer` (default all) that are not closed."""
    return float(sum(not outline.closed for outline in reading.on(arguments.get("layer"))))


def measure_duplicates(reading: DxfReading, arguments: Arguments, also: Sequence[Any]) -> float:
    """Number of segments that lie on another of the same layer, whichever way they run."""

    def key(layer: str, segment: Segment) -> tuple[Any, ...]:
        points = sorted([(segment.x0, segment.y0), (segment.x1, segment.y1)])
        return (layer, *(round(value / SAME_MM) for point in (*points, segment.middle) for value in point))

    seen = Counter(
        key(outline.layer, segment)
        for outline in reading.on(arguments.get("layer"))
        for segment in outline.segments
        if segment.chord_mm >= SAME_MM
    )
    return float(sum(count - 1 for count in seen.values()))


def measure_zero_length(reading: DxfReading, arguments: Arguments, also: Sequence[Any]) -> float:
    """Number of segments, and of outlines without any, that are shorter than a tenth of a micron."""
    outlines = reading.on(arguments.get("layer"))
    return float(sum(not o.segments or any(s.chord_mm < SAME_MM for s in o.segments) for o in outlines))


def measure_layer_count(reading: DxfReading, arguments: Arguments, also: Sequence[Any]) -> float:
    """Number of outlines on `layer`; with `closed` only those (true) or only the others (false)."""
    wanted = arguments.get("closed")
    return float(sum(wanted is None or o.closed == wanted for o in reading.on(arguments.get("layer"))))


def measure_unknown_layers(reading: DxfReading, arguments: Arguments, also: Sequence[Any]) -> float:
    """Number of outlines on layers other than `layers`."""
    return float(sum(outline.layer not in arguments["layers"] for outline in reading.outlines))


def measure_extent(reading: DxfReading, arguments: Arguments, also: Sequence[Any]) -> float:
    """Extent of the outlines on `layer` (default all) [mm], `quantity` as `min_x_mm`, `size_y_mm`; exact for arcs.

    plate   optional, as in `outlines_of`
    """
    low, high = _box(reading, arguments)
    return extent_of(low, high, str(arguments["quantity"]))


def measure_outside(reading: DxfReading, arguments: Arguments, also: Sequence[Any]) -> float:
    """How far the drawing leaves a sheet of `size` (x, y) that begins at (0, 0) [mm]; 0 when it is inside."""
    low, high = _box(reading, {})
    size = np.array([*arguments["size"], 0.0])
    return float(max(0.0, *(-low[:2]), *(high - size)[:2]))


def _box(reading: DxfReading, arguments: Arguments) -> tuple[Any, Any]:
    segments = [segment for outline in outlines_of(reading, arguments) for segment in outline.segments]
    if not segments:
        raise MeasureError(f"{reading.path.name}: nothing is drawn on {arguments.get('layer') or 'it'}")
    reaches = np.array([(segment.reach(0), segment.reach(1), (0.0, 0.0)) for segment in segments])
    return reaches[:, :, 0].min(axis=0), reaches[:, :, 1].max(axis=0)


def measure_spacing(reading: DxfReading, arguments: Arguments, also: Sequence[Any]) -> float:
    """Least distance between the outer contours of two parts on `layer` [mm]; MeasureError with fewer than two."""
    parts = reading.parts(arguments.get("layer"))
    if len(parts) < 2:
        raise MeasureError(f"{reading.path.name}: fewer than two parts")
    return float(min(one.polygon.distance(other.polygon) for one, other in combinations(parts, 2)))


def measure_too_near(reading: DxfReading, arguments: Arguments, also: Sequence[Any]) -> float:
    """Number of pairs of parts on `layer` whose outer contours are nearer than `least_mm`."""
    from shapely import STRtree

    polygons = [outline.polygon for outline in reading.parts(arguments.get("layer"))]
    if len(polygons) < 2:
        return 0.0
    least = float(arguments["least_mm"]) - 2.0 * FACET_MM
    left, right = STRtree(polygons).query(polygons, predicate="dwithin", distance=least)
    return float(np.count_nonzero(left < right))


def measure_crossings(reading: DxfReading, arguments: Arguments, also: Sequence[Any]) -> float:
    """Number of pairs of closed outlines on `layer` that cross or touch."""
    from shapely import STRtree

    rings = [o.polygon.exterior for o in reading.on(arguments.get("layer")) if o.closed and not o.polygon.is_empty]
    if len(rings) < 2:
        return 0.0
    left, right = STRtree(rings).query(rings, predicate="dwithin", distance=2.0 * FACET_MM)
    return float(np.count_nonzero(left < right))


def measure_line_at(reading: DxfReading, arguments: Arguments, also: Sequence[Any]) -> float:
    """x of the vertical straight line on `layer` nearest to `x_mm`, at most 1 mm off [mm]."""
    at = float(arguments["x_mm"])
    found = [
        (s.x0 + s.x1) / 2.0 for outline in reading.on(arguments.get("layer")) for s in outline.segments if s.is_vertical
    ]
    nearest = min(found, key=lambda x: abs(x - at), default=math.inf)
    if abs(nearest - at) > 1.0:
        raise MeasureError(f"{reading.path.name}: no line along y within 1 mm of x = {at:g}")
    return nearest


def measure_circle(reading: DxfReading, arguments: Arguments, also: Sequence[Any]) -> float:
    """Of the closed circle nearest to (`x_mm`, `y_mm`), at most 1 mm off: `quantity` x_mm, y_mm or diameter_mm."""
    at = float(arguments["x_mm"]), float(arguments["y_mm"])
    circles = [c for outline in reading.on(arguments.get("layer")) if (c := _circle(outline)) is not None]
    nearest = min(circles, key=lambda c: math.hypot(c[0] - at[0], c[1] - at[1]), default=None)
    if nearest is None or math.hypot(nearest[0] - at[0], nearest[1] - at[1]) > 1.0:
        raise MeasureError(f"{reading.path.name}: no circle within 1 mm of ({at[0]:g}, {at[1]:g})")
    return nearest[("x_mm", "y_mm", "diameter_mm").index(str(arguments["quantity"]))]


def _circle(outline: Outline) -> tuple[float, float, float] | None:
    """Centre and diameter of an outline that is a whole circle."""
    if not outline.closed or any(s.bulge == 0.0 for s in outline.segments):
        return None
    rounds = np.array([(*s.centre, s.radius_mm) for s in outline.segments])
    if np.ptp(rounds, axis=0).max() > SAME_MM:
        return None
    x, y, radius = rounds.mean(axis=0).tolist()
    return x, y, 2.0 * radius


MEASURES: dict[str, Callable[[DxfReading, Arguments, Sequence[Any]], float]] = {
    "audit_errors": measure_audit_errors,
    "unit_code": measure_unit_code,
    "open_contours": measure_open_contours,
    "duplicates": measure_duplicates,
    "zero_length": measure_zero_length,
    "layer_count": measure_layer_count,
    "unknown_layers": measure_unknown_layers,
    "extent": measure_extent,
    "outside_mm": measure_outside,
    "spacing_mm": measure_spacing,
    "too_near": measure_too_near,
    "crossings": measure_crossings,
    "line_at": measure_line_at,
    "circle": measure_circle,
}
