"""SVG: charts. A curve is read back as a person reads it: against the numbers that stand on the axes or rings."""

from __future__ import annotations

import itertools
import math
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any
from xml.etree import ElementTree

from boomwright.errors import CatalogueError, MeasureError
from boomwright.formats import dimensions
from boomwright.formats.dimensions import SeenDimension
from boomwright.formats.format import FileEntry, Format
from boomwright.pieces import Expectation, PicturePiece, Piece, Probe
from boomwright.shop.profile import Shop

NAMESPACE = "{http://www.w3.org/2000/svg}"
ACTIVE = ("script", "foreignObject", "iframe", "image", "use", "a")
SAME_PLACE = 0.02
"""Two decimals of a coordinate, twice [units of the sheet]."""

Point = tuple[float, float]


@dataclass(frozen=True)
class Ring:
    """A ring of a round chart: its middle, radius and the level it stands for."""

    x: float
    y: float
    radius: float
    level: float


@dataclass
class PictureReading:
    """A chart or drawing, read once: points of every named curve, tick places with their numbers by axis, rings, active
    parts; every text, and of dimensions (their lines are curves) text and scale by name.
    """

    path: Path
    curves: dict[str, list[Point]] = field(default_factory=dict)
    ticks: dict[str, list[Point]] = field(default_factory=dict)
    rings: list[Ring] = field(default_factory=list)
    active: int = 0
    words: list[str] = field(default_factory=list)
    noted: dict[str, tuple[str, float]] = field(default_factory=dict)

    @property
    def dimensions(self) -> tuple[SeenDimension, ...]:
        """Every dimension, its line's length in the view's own scale."""
        found = []
        for name, (text, scale) in self.noted.items():
            points = self.curve(name)
            found.append(SeenDimension(name, text, math.dist(points[0], points[-1]) / scale, scale))
        return tuple(found)

    def curve(self, name: str) -> list[Point]:
        """The points of a curve. Raises MeasureError when there is no such curve."""
        if not self.curves.get(name):
            raise MeasureError(f"{self.path.name}: no curve {name!r}")
        return self.curves[name]


class Svg(Format):
    """The SVG format."""

    name = "svg"
    suffix = ".svg"
    unit = ""

    def takes(self, piece: Piece) -> bool:
        """Charts."""
        return isinstance(piece, PicturePiece)

    def write(self, piece: Piece, path: Path) -> None:
        """The document as it is."""
        assert isinstance(piece, PicturePiece)
        path.write_bytes(piece.svg.encode("utf-8"))

    def read(self, path: Path) -> PictureReading:
        """Curves, ticks and rings. Raises MeasureError for what is no SVG."""
        try:
            data = path.read_bytes()
        except OSError as error:
            raise MeasureError(f"{path.name}: cannot be read ({error.strerror})") from error
        if b"<!DOCTYPE" in data or b"<!ENTITY" in data:
            raise MeasureError(f"{path.name}: declares entities, which a chart has no use for")
        try:
            root = ElementTree.fromstring(data)
            reading = PictureReading(path)
            for element in root.iter():
                _take(element, reading)
        except (ElementTree.ParseError, ValueError, LookupError) as error:
            raise MeasureError(f"{path.name}: not a readable SVG ({error})") from error
        if root.tag != f"{NAMESPACE}svg":
            raise MeasureError(f"{path.name}: not an SVG")
        return reading

    def measure(self, reading: Any, probe: Probe, also: Sequence[Any]) -> float:
        """One quantity; the measures are listed in `MEASURES`."""
        if probe.measure in dimensions.MEASURES:
            return dimensions.MEASURES[probe.measure](reading, probe.arguments, also)
        if probe.measure not in MEASURES:
            known = [*MEASURES, *dimensions.MEASURES]
            raise CatalogueError(f"unknown SVG measure {probe.measure!r} (known: {', '.join(known)})")
        return MEASURES[probe.measure](reading, probe.arguments)

    def expect(self, entry: FileEntry, shop: Shop) -> tuple[Expectation, ...]:
        """At least one curve, and nothing that acts: no script, no link, no embedded document."""
        return (
            Expectation(entry.path, "number of curves", 1.0, 0.0, "", Probe("curve_count"), "at_least"),
            Expectation(entry.path, "scripts and links", 0.0, 0.0, "", Probe("active_count")),
        )


def _take(element: ElementTree.Element, reading: PictureReading) -> None:
    tag = element.tag.removeprefix(NAMESPACE)
    get = element.attrib
    if tag in ACTIVE or any(name.lower().startswith("on") or name.endswith("href") for name in get):
        reading.active += 1
    curve = get.get("data-curve")
    if curve is not None and tag == "circle":
        reading.curves.setdefault(curve, []).append((float(get["cx"]), float(get["cy"])))
    elif curve is not None:
        pairs = [pair.split(",") for pair in get.get("points", "").split()]
        reading.curves.setdefault(curve, []).extend((float(pair[0]), float(pair[1])) for pair in pairs)
    if tag == "text":
        reading.words.append(element.text or "")
    if "data-dimension" in get:
        reading.noted[get["data-dimension"]] = (element.text or "", float(get["data-scale"]))
    if "data-axis" in get:
        axis = get["data-axis"]
        place = float(get[axis]) - float(get.get("data-shift", "0"))
        reading.ticks.setdefault(axis, []).append((place, float((element.text or "").replace("\u2212", "-"))))
    if "data-level" in get:
        sizes = (float(get.get(name, "nan")) for name in ("cx", "cy", "r", "data-level"))
        reading.rings.append(Ring(*sizes))


def _point_count(reading: PictureReading, arguments: Mapping[str, Any]) -> float:
    """How many points the curve `curve` has."""
    return float(len(reading.curve(str(arguments["curve"]))))


def _curve_count(reading: PictureReading, arguments: Mapping[str, Any]) -> float:
    """How many named curves have points."""
    return float(sum(1 for points in reading.curves.values() if points))


def _active_count(reading: PictureReading, arguments: Mapping[str, Any]) -> float:
    """How many elements act or lead elsewhere."""
    return float(reading.active)


def _value(reading: PictureReading, arguments: Mapping[str, Any]) -> float:
    """What the curve `curve` shows at the x value `at`, both by the numbers on the axes."""
    points = reading.curve(str(arguments["curve"]))
    place = _scale(reading, "x", inverse=True)(float(arguments["at"]))
    return _scale(reading, "y")(_between(points, place, reading.path.name))


def _level(reading: PictureReading, arguments: Mapping[str, Any]) -> float:
    """What the closed curve `curve` shows toward `at_deg`, by the numbers of the rings; one point a degree."""
    points = reading.curve(str(arguments["curve"]))
    if len(reading.rings) < 2:
        raise MeasureError(f"{reading.path.name}: fewer than two rings")
    first, last = reading.rings[0], reading.rings[-1]
    angle = math.radians(float(arguments["at_deg"]))
    spokes = [(x - first.x, first.y - y) for x, y in points]
    along = [x * math.cos(angle) + y * math.sin(angle) for x, y in spokes]
    aside = [abs(y * math.cos(angle) - x * math.sin(angle)) for x, y in spokes]
    ahead = [index for index in range(len(spokes)) if along[index] >= 0.0]
    if not ahead:
        raise MeasureError(f"{reading.path.name}: the curve shows nothing at {math.degrees(angle):g} degrees")
    radius = along[min(ahead, key=lambda index: (round(aside[index], 1), -along[index]))]
    return first.level + (radius - first.radius) * (last.level - first.level) / (last.radius - first.radius)


def _between(points: Sequence[Point], place: float, name: str) -> float:
    """The curve's y at an x, on the straight line between its points [units of the sheet]."""
    for x, y in points:
        if abs(x - place) <= SAME_PLACE:
            return y
    for (x, y), (next_x, next_y) in itertools.pairwise(points):
        if min(x, next_x) <= place <= max(x, next_x):
            return y + (next_y - y) * (place - x) / (next_x - x)
    raise MeasureError(f"{name}: the curve does not reach there")


def _scale(reading: PictureReading, axis: str, inverse: bool = False) -> Callable[[float], float]:
    """From a place on the sheet to the value that the axis' first and last numbers make of it, or back."""
    ticks = reading.ticks.get(axis, [])
    if len(ticks) < 2 or ticks[0][0] == ticks[-1][0] or ticks[0][1] == ticks[-1][1]:
        raise MeasureError(f"{reading.path.name}: fewer than two numbers on the {axis} axis")
    (place, value), (last_place, last_value) = ticks[0], ticks[-1]
    slope = (last_value - value) / (last_place - place)
    if inverse:
        return lambda wanted: place + (wanted - value) / slope
    return lambda at: value + (at - place) * slope


MEASURES: dict[str, Callable[[PictureReading, Mapping[str, Any]], float]] = {
    "point_count": _point_count,
    "curve_count": _curve_count,
    "active_count": _active_count,
    "value": _value,
    "level": _level,
}

SVG = Svg()
