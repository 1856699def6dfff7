"""A view under construction: geometry given at true size, drawn to a scale; dimensions to ISO 129-1, lines to ISO 128.

Terminators are open arrowheads of 30 degrees; an oblique stroke where running dimensions leave no room for one.
"""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from typing import Literal

from boomwright.plan.drawing_marks import (
    TEXT_MM,
    Block,
    Dimension,
    Layer,
    Point,
    Stroke,
    Words,
    line_of,
    shown,
    words_width_mm,
)

ARROW_MM = 2.5
CLEAR_MM = 1.0
"""Between an outline and the extension line that starts at it."""

BESIDE_MM = 1.2
"""Between a dimension line and its text: clear of the arrowheads."""

OVERRUN_MM = 1.5
"""How far an extension line runs past the dimension line."""

PITCH_MM = TEXT_MM + 1.4
"""Between the middles of upright texts side by side."""

HATCH_MM = 2.0
SAME_MM = 1e-6
JOG_MM = 6.0
ORIGIN_MM = 1.0


class View:
    """Collects what is drawn. Geometry is in millimetres of the thing, `origin` is where its zero lies on paper."""

    def __init__(self, scale: float, origin: Point = (0.0, 0.0)) -> None:
        self.scale = scale
        self.origin = origin
        self.strokes: list[Stroke] = []
        self.words: list[Words] = []
        self.dimensions: list[Dimension] = []

    def at(self, point: Point) -> Point:
        """From the thing to the paper."""
        return self.origin[0] + self.scale * point[0], self.origin[1] + self.scale * point[1]

    def block(self) -> Block:
        """What was drawn."""
        return Block(tuple(self.strokes), tuple(self.words), tuple(self.dimensions), self.origin)

    def take(self, other: View) -> None:
        """Add another view, which stands where it stands."""
        self.strokes += other.strokes
        self.words += other.words
        self.dimensions += other.dimensions

    def run(self, points: Sequence[Sequence[float]], layer: Layer = "VISIBLE", closed: bool = False) -> None:
        """A run of points (x, y) or (x, y, bulge); points that lie on the one before them are left out."""
        vertices = [(*self.at((p[0], p[1])), p[2] if len(p) > 2 else 0.0) for p in points]
        kept = [v for i, v in enumerate(vertices) if i == 0 or math.dist(v[:2], vertices[i - 1][:2]) > SAME_MM]
        self.strokes.append(Stroke(tuple(kept), layer, closed))

    def rectangle(self, x: Point, y: Point, layer: Layer = "VISIBLE") -> None:
        """A rectangle between two x and two y."""
        self.run([(x[0], y[0]), (x[1], y[0]), (x[1], y[1]), (x[0], y[1])], layer, closed=True)

    def circle(self, middle: Point, radius: float, layer: Layer = "VISIBLE", cross: bool = True) -> None:
        """A circle, with its centre lines unless told otherwise."""
        x, y = middle
        self.run([(x - radius, y, 1.0), (x + radius, y, 1.0)], layer, closed=True)
        if cross:
            more = radius + 2.0 / self.scale
            self.run([(x - more, y), (x + more, y)], "CENTRE")
            self.run([(x, y - more), (x, y + more)], "CENTRE")

    def hatch(self, outline: Sequence[Point], holes: Sequence[Sequence[Point]] = ()) -> None:
        """Lines at 45 degrees across a region given by the corners of its edge and of what is not of it."""
        rings = [[self.at(p) for p in ring] for ring in (outline, *holes)]
        levels = [y - x for ring in rings for x, y in ring]
        level = math.ceil(min(levels) / HATCH_MM) * HATCH_MM
        while level < max(levels):
            cuts = sorted(x for ring in rings for x in _crossings(ring, level))
            pairs = zip(cuts[::2], cuts[1::2], strict=False)
            self.strokes += [line_of((a, a + level), (b, b + level), "HATCH") for a, b in pairs if b - a > 0.1]
            level += HATCH_MM

    def write(self, text: str, at: Point, height_mm: float = TEXT_MM, middle: bool = False) -> None:
        """Words at a place on the paper: their left end, or their middle."""
        left = at[0] - words_width_mm(text, height_mm) / 2.0 if middle else at[0]
        self.words.append(Words(text, left, at[1], height_mm))

    def straight(
        self, name: str, axis: Literal["x", "y"], ends: tuple[Point, Point], at_mm: float, prefix: str = ""
    ) -> None:
        """A dimension along x or y between two points of the thing, its line at a place on paper across that axis."""
        k = 0 if axis == "x" else 1
        a, b = sorted((self.at(ends[0]), self.at(ends[1])), key=lambda p: p[k])
        value = abs(ends[1][k] - ends[0][k])
        text = f"{prefix}{shown(value)}"
        low, high = a[k], b[k]
        width = words_width_mm(text, TEXT_MM)
        wide = high - low >= 2.0 * ARROW_MM + 1.0
        inside = wide and high - low >= width + 2.0
        strokes = [line_of(*_extension(p, at_mm, k)) for p in (a, b)]
        strokes += [_arrow(_placed(low, at_mm, k), k, -1.0 if wide else 1.0)]
        strokes += [_arrow(_placed(high, at_mm, k), k, 1.0 if wide else -1.0)]
        tail = high + (ARROW_MM + 1.0 if not wide else 0.0)
        if not wide:
            strokes.append(line_of(_placed(low - ARROW_MM - 1.0, at_mm, k), _placed(low, at_mm, k)))
        if not inside:
            tail = max(tail, high + 1.0)
            strokes.append(line_of(_placed(high, at_mm, k), _placed(tail + width + 0.5, at_mm, k)))
        start = (low + high - width) / 2.0 if inside else tail
        place = (start, at_mm + BESIDE_MM) if k == 0 else (at_mm - BESIDE_MM, start)
        words = Words(text, *place, upright=k == 1)
        line = (_placed(low, at_mm, k), _placed(high, at_mm, k))
        self.dimensions.append(Dimension(name, axis, value, text, (a, b), line, self.scale, tuple(strokes), words))

    def running(self, marks: Sequence[tuple[str, str, float]], from_y: float, at_mm: float) -> None:
        """Running dimensions along x from zero, one line for all, each text upright above its place with its tag.

        marks   (name of the quantity, tag, x)
        from_y  where the extension lines start, in the thing's y
        at_mm   y of the dimension line on paper, above the view
        """
        marks = sorted(marks, key=lambda mark: mark[2])
        zero = self.at((0.0, from_y))
        feet = [self.at((x, from_y))[0] for _, _, x in marks]
        places = spread(feet, PITCH_MM)
        origin = (zero[0], at_mm)
        left, right = (zero[0] - ORIGIN_MM, at_mm, 1.0), (zero[0] + ORIGIN_MM, at_mm, 1.0)
        self.strokes.append(Stroke((left, right), "DIMENSION", closed=True))
        longest = max(words_width_mm(shown(x), TEXT_MM) for _, _, x in marks)
        for index, ((name, tag, x), foot, place) in enumerate(zip(marks, feet, places, strict=True)):
            ahead = 1.0 if x >= 0.0 else -1.0
            before = [abs(f - foot) for i, f in enumerate(feet) if i != index and (f - foot) * ahead < 0.0]
            roomy = min([abs(foot - zero[0]) - ORIGIN_MM, *before]) > ARROW_MM + 0.5
            tick = _arrow((foot, at_mm), 0, ahead) if roomy else _oblique((foot, at_mm))
            top, jog = at_mm + OVERRUN_MM, at_mm + OVERRUN_MM + JOG_MM
            rise = [(foot, zero[1] + CLEAR_MM), (foot, top), (place, jog), (place, jog + 1.0)]
            strokes = (Stroke(tuple((*p, 0.0) for p in rise), "DIMENSION"), *([tick] if abs(x) > 0.0 else []))
            words = Words(shown(x), place + TEXT_MM / 2.0, jog + 2.0, upright=True)
            ends = (zero, (foot, zero[1]))
            self.dimensions.append(
                Dimension(name, "running", x, words.text, ends, (origin, (foot, at_mm)), self.scale, strokes, words)
            )
            if tag:
                self.words.append(Words(tag, place + TEXT_MM / 2.0, jog + longest + 4.0, upright=True))

    def radius(self, name: str, middle: Point, radius: float, angle_deg: float, out_mm: float = 6.0) -> None:
        """A radius from the centre to the arc and on to its text."""
        self._round(name, "radius", (middle, radius), (angle_deg, out_mm))

    def diameter(self, name: str, middle: Point, radius: float, angle_deg: float, out_mm: float = 6.0) -> None:
        """A diameter right across and on to its text."""
        self._round(name, "diameter", (middle, radius), (angle_deg, out_mm))

    def _round(
        self,
        name: str,
        kind: Literal["radius", "diameter"],
        circle: tuple[Point, float],
        leader: tuple[float, float],
    ) -> None:
        (middle, radius), (angle_deg, out_mm) = circle, leader
        c, s = math.cos(math.radians(angle_deg)), math.sin(math.radians(angle_deg))
        reach = self.scale * radius
        (mx, my) = self.at(middle)
        far = (mx + reach * c, my + reach * s)
        near = (mx - reach * c, my - reach * s) if kind == "diameter" else (mx, my)
        value = 2.0 * radius if kind == "diameter" else radius
        text = f"{'Ø' if kind == 'diameter' else 'R'}{shown(value)}"
        elbow = (far[0] + out_mm * c, far[1] + out_mm * s)
        side, width = (1.0 if c >= 0.0 else -1.0), words_width_mm(text, TEXT_MM)
        shelf = (elbow[0] + side * (width + 1.0), elbow[1])
        strokes = [line_of(far, elbow), line_of(elbow, shelf)]
        inward = reach * (2.0 if kind == "diameter" else 1.0) > 2.0 * ARROW_MM
        strokes.append(_turned_arrow(far, (c, s) if inward else (-c, -s)))
        if kind == "diameter" and inward:
            strokes.append(_turned_arrow(near, (-c, -s)))
        left = min(elbow[0], shelf[0]) + 0.5
        words = Words(text, left, elbow[1] + CLEAR_MM)
        self.dimensions.append(
            Dimension(name, kind, value, text, (near, far), (near, far), self.scale, tuple(strokes), words)
        )


def spread(places_mm: Sequence[float], pitch_mm: float) -> list[float]:
    """Ascending places moved as little as needed to stand at least `pitch_mm` apart (runs of them about their mean)."""
    groups: list[tuple[float, int]] = []
    for place in places_mm:
        group = (place, 1)
        while groups and group[0] - groups[-1][0] < pitch_mm * (group[1] + groups[-1][1]) / 2.0:
            middle, count = groups.pop()
            group = ((middle * count + group[0] * group[1]) / (count + group[1]), count + group[1])
        groups.append(group)
    return [middle + pitch_mm * (i - (count - 1) / 2.0) for middle, count in groups for i in range(count)]


def _placed(along: float, across: float, k: int) -> Point:
    return (along, across) if k == 0 else (across, along)


def _extension(point: Point, at_mm: float, k: int) -> tuple[Point, Point]:
    away = 1.0 if at_mm >= point[1 - k] else -1.0
    return _placed(point[k], point[1 - k] + away * CLEAR_MM, k), _placed(point[k], at_mm + away * OVERRUN_MM, k)


def _arrow(tip: Point, k: int, along: float) -> Stroke:
    """An arrowhead that points along +axis or -axis."""
    return _turned_arrow(tip, (along, 0.0) if k == 0 else (0.0, along))


def _turned_arrow(tip: Point, toward: Point) -> Stroke:
    back, half = ARROW_MM * math.cos(math.radians(15.0)), ARROW_MM * math.sin(math.radians(15.0))
    (x, y), (u, v) = tip, toward
    one = (x - back * u - half * v, y - back * v + half * u, 0.0)
    two = (x - back * u + half * v, y - back * v - half * u, 0.0)
    return Stroke((one, (x, y, 0.0), two), "DIMENSION")


def _oblique(at: Point) -> Stroke:
    half = ARROW_MM / 2.0 * math.sqrt(0.5)
    return line_of((at[0] - half, at[1] - half), (at[0] + half, at[1] + half))


def _crossings(ring: Sequence[Point], level: float) -> Iterator[float]:
    """x where the line y = x + level crosses the edges of a ring."""
    for (x0, y0), (x1, y1) in zip(ring, [*ring[1:], ring[0]], strict=True):
        d0, d1 = y0 - x0 - level, y1 - x1 - level
        if (d0 < 0.0) != (d1 < 0.0):
            yield x0 + (x1 - x0) * d0 / (d0 - d1)
