"""Closed contours of lines and arcs: common shapes, and offsets that keep arcs true. Millimetres.

Counter-clockwise outer contours grow by a positive distance; a hole is drawn clockwise and so shrinks by it.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

from boomwright.errors import Fault, PlanFault
from boomwright.pieces import Contour

Point = tuple[float, float]

SAME_MM = 1e-7
AREA_ALLOWED_SHARE = 1e-4
"""Offset and shapely's buffer, both with arcs as chords, may differ by this share of the area."""

QUARTER_SEGMENTS = 64
HALF_CIRCLE_BULGE = 1.0


def polygon(points: Sequence[Point]) -> Contour:
    """A closed contour of straight lines."""
    return Contour(tuple((x, y, 0.0) for x, y in points))


def rectangle(x_mm: Point, y_mm: Point) -> Contour:
    """An axis-parallel rectangle between two values of each coordinate, counter-clockwise."""
    (x0, x1), (y0, y1) = x_mm, y_mm
    return polygon([(x0, y0), (x1, y0), (x1, y1), (x0, y1)])


def circle(centre: Point, diameter_mm: float) -> Contour:
    """A circle of two half arcs, counter-clockwise."""
    (x, y), r = centre, diameter_mm / 2.0
    return Contour(((x - r, y, HALF_CIRCLE_BULGE), (x + r, y, HALF_CIRCLE_BULGE)))


def round_slot(start: Point, end: Point, width_mm: float) -> Contour:
    """A slot with round ends about the line between two distinct points, counter-clockwise."""
    length, r = math.dist(start, end), width_mm / 2.0
    nx, ny = -(end[1] - start[1]) / length * r, (end[0] - start[0]) / length * r
    (x0, y0), (x1, y1) = start, end
    return Contour(
        (
            (x0 - nx, y0 - ny, 0.0),
            (x1 - nx, y1 - ny, HALF_CIRCLE_BULGE),
            (x1 + nx, y1 + ny, 0.0),
            (x0 + nx, y0 + ny, HALF_CIRCLE_BULGE),
        )
    )


def reversed_contour(contour: Contour) -> Contour:
    """The same contour, run the other way: an outer contour becomes a hole's."""
    v = contour.vertices
    if not contour.closed:
        return Contour(tuple((x, y, -v[i - 1][2] if i else 0.0) for i, (x, y, _) in enumerate(v))[::-1], False)
    return Contour(tuple((v[i][0], v[i][1], -v[i - 1][2]) for i in range(len(v) - 1, -1, -1)))


def moved(contour: Contour, dx_mm: float, dy_mm: float) -> Contour:
    """The contour, shifted."""
    return Contour(tuple((x + dx_mm, y + dy_mm, bulge) for x, y, bulge in contour.vertices), contour.closed)


def area_mm2(contour: Contour) -> float:
    """Signed area [mm²], arcs exact; positive counter-clockwise."""
    total = 0.0
    for piece in _pieces(contour):
        total += (piece.start[0] * piece.end[1] - piece.end[0] * piece.start[1]) / 2.0
        if piece.bulge:
            sweep = 4.0 * math.atan(piece.bulge)
            total += piece.radius_mm**2 * (sweep - math.sin(sweep)) / 2.0
    return total


def as_polygon(contour: Contour) -> Any:
    """A closed contour as a shapely polygon, arcs as fine chords."""
    from shapely import Polygon

    points: list[Point] = []
    for piece in _pieces(contour):
        points.append(piece.start)
        if piece.bulge:
            sweep = 4.0 * math.atan(piece.bulge)
            count = max(2, math.ceil(abs(sweep) / (math.pi / 2.0) * QUARTER_SEGMENTS))
            cx, cy = piece.centre
            first = math.atan2(piece.start[1] - cy, piece.start[0] - cx)
            angles = [first + sweep * i / count for i in range(1, count)]
            points += [(cx + piece.radius_mm * math.cos(a), cy + piece.radius_mm * math.sin(a)) for a in angles]
    return Polygon(points)


def offset_contour(contour: Contour, distance_mm: float) -> Contour:
    """The contour at a distance to its right, so that a counter-clockwise one grows; lines stay lines, arcs arcs.

    Where neighbours move apart, an arc about the corner joins them; where they move together, they are cut short.
    Raises PlanFault when a piece vanishes or the result is not what shapely's buffer gives: two sides have met.
    """
    if distance_mm == 0.0:
        return contour
    if not contour.closed:
        raise _collapse(distance_mm)
    pieces = _pieces(contour)
    sides = [_beside(piece, distance_mm) for piece in pieces]
    run: list[_Piece] = []
    joins = [
        _join(sides[i - 1], sides[i], pieces[i].start, distance_mm) for i in range(len(sides))
    ]  # joins[i] lies before side i
    for index, side in enumerate(sides):
        before, after = joins[index], joins[(index + 1) % len(sides)]
        run.append(_between(side, before[1], after[0], distance_mm))
        if after[2]:
            run.append(_Piece(after[0], after[1], after[2]))
    result = Contour(tuple((*piece.start, piece.bulge) for piece in run))
    _check(contour, result, distance_mm)
    return result


@dataclass(frozen=True)
class _Piece:
    start: Point
    end: Point
    bulge: float

    @property
    def chord_mm(self) -> float:
        return math.dist(self.start, self.end)

    @property
    def radius_mm(self) -> float:
        return self.chord_mm * (1.0 + self.bulge**2) / (4.0 * abs(self.bulge))

    @property
    def centre(self) -> Point:
        reach = (1.0 - self.bulge**2) / (4.0 * self.bulge)
        (x0, y0), (x1, y1) = self.start, self.end
        return (x0 + x1) / 2.0 - reach * (y1 - y0), (y0 + y1) / 2.0 + reach * (x1 - x0)

    def direction(self, at: Point) -> Point:
        """Unit tangent at a point of the piece."""
        if not self.bulge:
            return (self.end[0] - self.start[0]) / self.chord_mm, (self.end[1] - self.start[1]) / self.chord_mm
        (cx, cy), sense = self.centre, math.copysign(1.0, self.bulge)
        length = math.dist(at, (cx, cy))
        return -sense * (at[1] - cy) / length, sense * (at[0] - cx) / length


def _pieces(contour: Contour) -> list[_Piece]:
    v = contour.vertices
    ends = v[1:] + (v[:1] if contour.closed else ())
    return [_Piece((x0, y0), (x1, y1), b) for (x0, y0, b), (x1, y1, _) in zip(v, ends, strict=False)]


def _beside(piece: _Piece, distance_mm: float) -> _Piece:
    """The piece moved to its right; an arc keeps its centre."""

    def shift(point: Point) -> Point:
        tx, ty = piece.direction(point)
        return point[0] + distance_mm * ty, point[1] - distance_mm * tx

    if piece.bulge and piece.radius_mm + math.copysign(distance_mm, piece.bulge * distance_mm) <= SAME_MM:
        raise _collapse(distance_mm)
    return _Piece(shift(piece.start), shift(piece.end), piece.bulge)


def _join(before: _Piece, after: _Piece, corner: Point, distance_mm: float) -> tuple[Point, Point, float]:
    """End of the piece before a corner, start of the one after, and the bulge of the arc between them; 0 = none."""
    if math.dist(before.end, after.start) < SAME_MM:
        return after.start, after.start, 0.0
    (ax, ay), (bx, by) = before.direction(before.end), after.direction(after.start)
    turn = math.atan2(ax * by - ay * bx, ax * bx + ay * by)
    if turn * distance_mm > 0.0:
        return before.end, after.start, math.tan(turn / 4.0)
    met = min(_meetings(before, after), key=lambda p: math.dist(p, corner), default=None)
    if met is None:
        raise _collapse(distance_mm)
    return met, met, 0.0


def _between(side: _Piece, start: Point, end: Point, distance_mm: float) -> _Piece:
    """A piece cut short to new ends on it; refuses one that would run backwards."""
    if not side.bulge:
        tx, ty = side.direction(side.start)
        if (end[0] - start[0]) * tx + (end[1] - start[1]) * ty <= SAME_MM:
            raise _collapse(distance_mm)
        return _Piece(start, end, 0.0)
    (cx, cy), sense = side.centre, math.copysign(1.0, side.bulge)
    angles = [math.atan2(p[1] - cy, p[0] - cx) for p in (start, end)]
    sweep = (sense * (angles[1] - angles[0])) % (2.0 * math.pi)
    if abs(sweep - 4.0 * math.atan(abs(side.bulge))) > math.pi:
        raise _collapse(distance_mm)
    return _Piece(start, end, sense * math.tan(sweep / 4.0))


def _meetings(one: _Piece, other: _Piece) -> list[Point]:
    """Where two pieces, prolonged, cross."""
    if one.bulge and other.bulge:
        return _circles_meet(one.centre, one.radius_mm, other.centre, other.radius_mm)
    if one.bulge or other.bulge:
        line, arc = (other, one) if one.bulge else (one, other)
        return _line_meets_circle(line, arc.centre, arc.radius_mm)
    (ax, ay), (bx, by) = one.direction(one.start), other.direction(other.start)
    across = ax * by - ay * bx
    if abs(across) < 1e-12:
        return []
    dx, dy = other.start[0] - one.start[0], other.start[1] - one.start[1]
    along = (dx * by - dy * bx) / across
    return [(one.start[0] + along * ax, one.start[1] + along * ay)]


def _line_meets_circle(line: _Piece, centre: Point, radius_mm: float) -> list[Point]:
    tx, ty = line.direction(line.start)
    along = (centre[0] - line.start[0]) * tx + (centre[1] - line.start[1]) * ty
    foot = line.start[0] + along * tx, line.start[1] + along * ty
    square = radius_mm**2 - (foot[0] - centre[0]) ** 2 - (foot[1] - centre[1]) ** 2
    if square < 0.0:
        return []
    half = math.sqrt(square)
    return [(foot[0] + side * half * tx, foot[1] + side * half * ty) for side in (-1.0, 1.0)]


def _circles_meet(a: Point, a_mm: float, b: Point, b_mm: float) -> list[Point]:
    apart = math.dist(a, b)
    if apart < SAME_MM or apart > a_mm + b_mm or apart < abs(a_mm - b_mm):
        return []
    along = (apart**2 + a_mm**2 - b_mm**2) / (2.0 * apart)
    half = math.sqrt(max(0.0, a_mm**2 - along**2))
    ux, uy = (b[0] - a[0]) / apart, (b[1] - a[1]) / apart
    foot = a[0] + along * ux, a[1] + along * uy
    return [(foot[0] - side * half * uy, foot[1] + side * half * ux) for side in (-1.0, 1.0)]


def _check(contour: Contour, result: Contour, distance_mm: float) -> None:
    """The area against an independent one, and no crossing of itself."""
    grown = distance_mm * math.copysign(1.0, area_mm2(contour))
    wanted = as_polygon(contour).buffer(grown, quad_segs=QUARTER_SEGMENTS, join_style="round")
    got = as_polygon(result)
    allowed = AREA_ALLOWED_SHARE * max(wanted.area, 1e-9)
    if wanted.is_empty or not got.is_valid or abs(got.area - wanted.area) > allowed:
        raise _collapse(distance_mm)


def _collapse(distance_mm: float) -> PlanFault:
    found = f"an outline collapses when it is moved by {abs(distance_mm):.4g} mm for the kerf"
    return PlanFault([Fault("laser.kerf_mm", found, "measure the kerf again, or use a narrower beam")])
