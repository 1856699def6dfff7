"""What a drawing is made of, on paper: strokes, words, dimensions, and blocks of them. Millimetres, y upward.

Every output (DXF, PDF, SVG) is made from these and from nothing else, so that the three cannot disagree.
"""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass, replace
from typing import Literal

Point = tuple[float, float]
Box = tuple[float, float, float, float]
"""Least x, least y, greatest x, greatest y."""

Layer = Literal["VISIBLE", "HIDDEN", "CENTRE", "DIMENSION", "HATCH", "TABLE", "FRAME", "TEXT"]
Kind = Literal["x", "y", "running", "radius", "diameter"]

TEXT_MM = 2.5
"""Height of dimensions, tables and notes: the least that ISO 3098 names for an A4 or A3 sheet."""

CAPITAL_SHARE = 0.718
"""Height of capitals as a share of the font's size, of Helvetica and the fonts of its widths."""

_WIDTHS = (
    "278 278 355 556 556 889 667 191 333 333 389 584 278 333 278 278 556 556 556 556 556 556 556 556 556 556 278 278 "
    "584 584 584 556 1015 667 667 722 722 667 611 778 722 278 500 667 556 833 722 778 667 778 722 667 611 722 667 944 "
    "667 667 611 278 278 278 469 556 333 556 556 500 556 556 278 556 556 222 222 500 222 833 556 556 556 556 333 500 "
    "278 556 500 722 500 500 500 334 260 334 584"
)
WIDTHS = dict(zip(map(chr, range(32, 127)), map(int, _WIDTHS.split()), strict=True)) | {
    "±": 584,
    "×": 584,
    "°": 400,
    "Ø": 778,
}
"""Widths of Helvetica's letters in thousandths of the font's size (its published metrics)."""


def words_width_mm(text: str, height_mm: float) -> float:
    """Width of a line of text [mm] at a height of capitals [mm]; letters without a known width count as wide ones."""
    units = sum(WIDTHS.get(letter, 667 if letter < "\u2e80" else 1000) for letter in text)
    return units / 1000.0 * height_mm / CAPITAL_SHARE


@dataclass(frozen=True)
class Stroke:
    """A run of vertices (x, y, bulge) on a layer; bulge as in DXF, 0 = straight."""

    vertices: tuple[tuple[float, float, float], ...]
    layer: Layer
    closed: bool = False

    @property
    def points(self) -> tuple[Point, ...]:
        """The run as straight pieces, arcs as chords within 0.01 of them; closed runs end where they began."""
        found = list[Point]()
        ends = [*self.vertices[1:], *(self.vertices[:1] if self.closed else ())]
        for (x0, y0, bulge), (x1, y1, _) in zip(self.vertices, ends, strict=False):
            found.append((x0, y0))
            found += _arc_points((x0, y0), (x1, y1), bulge)
        last = ends[-1] if ends else self.vertices[0]
        return (*found, (last[0], last[1]))


def _arc_points(start: Point, end: Point, bulge: float) -> list[Point]:
    """Points between the ends of an arc."""
    chord = math.dist(start, end)
    if bulge == 0.0 or chord == 0.0:
        return []
    sweep = 4.0 * math.atan(bulge)
    radius = chord * (1.0 + bulge**2) / (4.0 * abs(bulge))
    reach = (1.0 - bulge**2) / (4.0 * bulge)
    cx = (start[0] + end[0]) / 2.0 - reach * (end[1] - start[1])
    cy = (start[1] + end[1]) / 2.0 + reach * (end[0] - start[0])
    step = 2.0 * math.acos(max(0.0, 1.0 - 0.01 / radius)) if radius > 0.01 else 1.0
    count = max(4, math.ceil(abs(sweep) / step))
    first = math.atan2(start[1] - cy, start[0] - cx)
    angles = [first + sweep * i / count for i in range(1, count)]
    return [(cx + radius * math.cos(a), cy + radius * math.sin(a)) for a in angles]


@dataclass(frozen=True)
class Words:
    """A line of text, from the left end of its baseline; `upright` reads upward, from the right of the sheet."""

    text: str
    x_mm: float
    y_mm: float
    height_mm: float = TEXT_MM
    upright: bool = False

    @property
    def box(self) -> Box:
        """What it covers: capitals, without the tails of small letters."""
        width, height = words_width_mm(self.text, self.height_mm), self.height_mm
        if self.upright:
            return self.x_mm - height, self.y_mm, self.x_mm, self.y_mm + width
        return self.x_mm, self.y_mm, self.x_mm + width, self.y_mm + height


@dataclass(frozen=True)
class Dimension:
    """A dimension as drawn.

    name     of the quantity, once on its sheet: `D1 at`
    value_mm from the plan
    text     what stands on the drawing
    ends     the two points measured (radius: centre and a point on the arc), on paper
    line     the dimension line between its terminators, as long as `ends` are apart
    scale    of the view it stands in: millimetres of paper per millimetre
    strokes  everything else that is drawn: extension lines, terminators, leader
    words    where the text stands
    """

    name: str
    kind: Kind
    value_mm: float
    text: str
    ends: tuple[Point, Point]
    line: tuple[Point, Point]
    scale: float
    strokes: tuple[Stroke, ...]
    words: Words


@dataclass(frozen=True)
class Block:
    """Views, tables and notes that keep their places to each other. `origin` is where its model's zero lies."""

    strokes: tuple[Stroke, ...] = ()
    words: tuple[Words, ...] = ()
    dimensions: tuple[Dimension, ...] = ()
    origin: Point = (0.0, 0.0)

    @property
    def box(self) -> Box:
        """What it covers on paper."""
        return box_of([stroke_box(s) for s in self.all_strokes] + [w.box for w in self.all_words])

    @property
    def all_strokes(self) -> tuple[Stroke, ...]:
        """Strokes, those of the dimensions included."""
        more = [s for d in self.dimensions for s in (line_of(*d.line), *d.strokes)]
        return (*self.strokes, *more)

    @property
    def all_words(self) -> tuple[Words, ...]:
        """Words, those of the dimensions included."""
        return (*self.words, *(d.words for d in self.dimensions))

    def moved(self, dx_mm: float, dy_mm: float) -> Block:
        """The same somewhere else."""
        return Block(
            tuple(_moved_stroke(s, dx_mm, dy_mm) for s in self.strokes),
            tuple(_moved_words(w, dx_mm, dy_mm) for w in self.words),
            tuple(_moved_dimension(d, dx_mm, dy_mm) for d in self.dimensions),
            (self.origin[0] + dx_mm, self.origin[1] + dy_mm),
        )


def line_of(start: Point, end: Point, layer: Layer = "DIMENSION") -> Stroke:
    """A straight stroke."""
    return Stroke(((*start, 0.0), (*end, 0.0)), layer)


def stroke_box(stroke: Stroke) -> Box:
    """What a stroke covers."""
    xs, ys = zip(*stroke.points, strict=True)
    return min(xs), min(ys), max(xs), max(ys)


def box_of(boxes: Iterable[Box]) -> Box:
    """The least box round others."""
    x0, y0, x1, y1 = zip(*boxes, strict=True)
    return min(x0), min(y0), max(x1), max(y1)


def overlap(one: Box, other: Box, apart_mm: float = 0.0) -> bool:
    """Whether two boxes come nearer than `apart_mm`."""
    return (
        one[0] < other[2] + apart_mm
        and other[0] < one[2] + apart_mm
        and one[1] < other[3] + apart_mm
        and other[1] < one[3] + apart_mm
    )


def shown(value_mm: float) -> str:
    """A size as a drawing has it: at most two decimals, no trailing zeros."""
    text = f"{value_mm:.2f}".rstrip("0").rstrip(".")
    return "0" if text in ("-0", "") else text


def fitted(text: str, room_mm: float, height_mm: float = TEXT_MM) -> str:
    """As much of a text as fits, on one line; what is cut off is shown by three dots."""
    clean = " ".join("".join(c if c.isprintable() else " " for c in text).split())
    if words_width_mm(clean, height_mm) <= room_mm:
        return clean
    while clean and words_width_mm(f"{clean}...", height_mm) > room_mm:
        clean = clean[:-1]
    return f"{clean.rstrip()}..."


def _moved_stroke(stroke: Stroke, dx_mm: float, dy_mm: float) -> Stroke:
    return replace(stroke, vertices=tuple((x + dx_mm, y + dy_mm, b) for x, y, b in stroke.vertices))


def _moved_words(words: Words, dx_mm: float, dy_mm: float) -> Words:
    return replace(words, x_mm=words.x_mm + dx_mm, y_mm=words.y_mm + dy_mm)


def _moved_dimension(dimension: Dimension, dx_mm: float, dy_mm: float) -> Dimension:
    def pair(points: tuple[Point, Point]) -> tuple[Point, Point]:
        (ax, ay), (bx, by) = points
        return (ax + dx_mm, ay + dy_mm), (bx + dx_mm, by + dy_mm)

    return replace(
        dimension,
        ends=pair(dimension.ends),
        line=pair(dimension.line),
        strokes=tuple(_moved_stroke(s, dx_mm, dy_mm) for s in dimension.strokes),
        words=_moved_words(dimension.words, dx_mm, dy_mm),
    )
