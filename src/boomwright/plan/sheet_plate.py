"""What a fixture of flat sheet consists of: plates with feet and slots, and where each stands. Millimetres.

A plate is drawn in its own u and v and reaches from w = 0 to the sheet's thickness; its frame takes (u, v, w) into the
fixture, whose x is the design's and whose z rises from the bench. A foot is a tab on an edge that enters the slot of
another plate: slots are never planned, they follow from the feet.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

from boomwright.plan.frame import Matrix

Span = tuple[float, float]
Box = tuple[Span, Span, Span]
Point = tuple[float, float]


class LeftOutError(Exception):
    """Why a sheet cannot make the fixture, in words."""


class TooLargeError(Exception):
    """A part is larger than the sheet however it is cut: what it needs, in words."""


@dataclass(frozen=True)
class Rect:
    """An axis-parallel rectangle between two values of u and two of v [mm]."""

    u: Span
    v: Span

    def grown(self, by_mm: float) -> Rect:
        """The rectangle with every side moved outward."""
        return Rect((self.u[0] - by_mm, self.u[1] + by_mm), (self.v[0] - by_mm, self.v[1] + by_mm))

    def meets(self, other: Rect) -> bool:
        """Whether two rectangles have room in common."""
        return spans_meet(self.u, other.u) and spans_meet(self.v, other.v)

    def holds(self, other: Rect) -> bool:
        """Whether another rectangle lies inside."""
        return (
            self.u[0] <= other.u[0] and other.u[1] <= self.u[1] and self.v[0] <= other.v[0] <= other.v[1] <= self.v[1]
        )


@dataclass(frozen=True)
class Vee:
    """A 90° notch of a rail or a prop: whose conductor it holds, where along u, radius, and height of its apex [mm]."""

    tag: str
    at_mm: float
    radius_mm: float
    apex_mm: float


@dataclass(frozen=True)
class Words:
    """Scored text: its left end on the baseline and the height of capitals [mm]."""

    text: str
    u_mm: float
    v_mm: float
    height_mm: float


@dataclass(frozen=True)
class Plate:
    """One flat plate.

    kind     what it is, in the builder's words: base, rail, saddle, spreader, stop, prop, fishplate
    name     as scored: the kind, with a number where the place matters
    body     its rectangle without the feet
    feet     tabs on its edges
    top      the upper edge from left to right where it is no straight line, corners left out
    vees     the notches of that edge
    slots    holes that take feet, the fit counted
    windows  holes that take none
    words    what is scored on it
    """

    kind: str
    name: str
    body: Rect
    feet: tuple[Rect, ...] = ()
    top: tuple[Point, ...] = ()
    vees: tuple[Vee, ...] = ()
    slots: tuple[Rect, ...] = ()
    windows: tuple[Rect, ...] = ()
    words: tuple[Words, ...] = ()

    @property
    def extent(self) -> Rect:
        """The rectangle round body and feet."""
        rects = (self.body, *self.feet)
        us, vs = [value for r in rects for value in r.u], [value for r in rects for value in r.v]
        return Rect((min(us), max(us)), (min(vs), max(vs)))

    @property
    def size_mm(self) -> tuple[float, float]:
        """Extent along u and v [mm]."""
        e = self.extent
        return e.u[1] - e.u[0], e.v[1] - e.v[0]


@dataclass(frozen=True)
class Standing:
    """A plate in its place: `frame` takes its u, v, w into the fixture's x, y, z."""

    plate: Plate
    frame: Matrix

    def box(self, rect: Rect, sheet_mm: float) -> Box:
        """A rectangle of the plate, through its whole thickness, as x, y and z in the fixture [mm]."""
        corners = [self._moved(u, v, w) for u in rect.u for v in rect.v for w in (0.0, sheet_mm)]
        x, y, z = ((min(values), max(values)) for values in zip(*corners, strict=True))
        return x, y, z

    def feet(self, sheet_mm: float) -> tuple[Box, ...]:
        """Its feet in the fixture."""
        return tuple(self.box(foot, sheet_mm) for foot in self.plate.feet)

    def reach(self, sheet_mm: float) -> Box:
        """Its body in the fixture."""
        return self.box(self.plate.body, sheet_mm)

    def _moved(self, u: float, v: float, w: float) -> tuple[float, float, float]:
        x, y, z = (row[0] * u + row[1] * v + row[2] * w + row[3] for row in self.frame[:3])
        return x, y, z


def flat() -> Matrix:
    """Lying on the bench: u, v, w are x, y, z."""
    return _frame((1, 0, 0), (0, 1, 0), (0, 0, 1))


def along_x(x_mm: float, y_mm: Span) -> Matrix:
    """Upright, u along x, v up, occupying `y_mm`; u = 0 at `x_mm`."""
    return _frame((1, 0, 0, x_mm), (0, 0, -1, y_mm[1]), (0, 1, 0))


def across(x_mm: float, y_mm: float = 0.0, z_mm: float = 0.0) -> Matrix:
    """Upright, u along y from `y_mm`, v up from `z_mm`, occupying x from `x_mm` on."""
    return _frame((0, 0, 1, x_mm), (1, 0, 0, y_mm), (0, 1, 0, z_mm))


def across_turned(x_mm: float, y_mm: float) -> Matrix:
    """As `across`, turned half about the vertical: u against y, occupying x below `x_mm`."""
    return _frame((0, 0, -1, x_mm), (-1, 0, 0, y_mm), (0, 1, 0))


def lying_beside(x_mm: float, face_mm: float, z_mm: Span) -> Matrix:
    """Level, u along x from `x_mm`, its v = 0 edge against a face at y = `face_mm`, body toward the middle plane."""
    if face_mm > 0.0:
        return _frame((1, 0, 0, x_mm), (0, -1, 0, face_mm), (0, 0, -1, z_mm[1]))
    return _frame((1, 0, 0, x_mm), (0, 1, 0, face_mm), (0, 0, 1, z_mm[0]))


def with_slots(standing: Standing, feet: list[Box], sheet_mm: float, fit_mm: float) -> Standing:
    """The plate with a slot for every foot that stands in it."""
    plate, found, reach = standing.plate, [], standing.reach(sheet_mm)
    for foot in feet:
        if all(lo - 1e-6 <= one[0] and one[1] <= hi + 1e-6 for one, (lo, hi) in zip(foot, reach, strict=True)):
            found.append(_in_plate(standing.frame, foot).grown(fit_mm / 2.0))
    return replace(standing, plate=replace(plate, slots=tuple(sorted(found, key=lambda r: (r.u, r.v)))))


def _in_plate(frame: Matrix, box: Box) -> Rect:
    """A box of the fixture as the rectangle it cuts in a plate."""
    corners = [(x, y, z) for x in box[0] for y in box[1] for z in box[2]]
    spans = []
    for column in (0, 1):
        values = [sum(frame[row][column] * (corner[row] - frame[row][3]) for row in range(3)) for corner in corners]
        spans.append((min(values), max(values)))
    return Rect(spans[0], spans[1])


def spans_meet(one: Span, other: Span) -> bool:
    """Whether two spans have length in common."""
    return min(one[1], other[1]) - max(one[0], other[0]) > 1e-9


def free_spans(room: Span, taken: list[Span]) -> list[Span]:
    """What of a span is left beside others."""
    found, at = [], room[0]
    for low, high in sorted(taken):
        if low > at:
            found.append((at, min(low, room[1])))
        at = max(at, high)
    return [s for s in [*found, (at, room[1])] if s[1] - s[0] > 1e-9]


def _frame(*rows: tuple[float, ...]) -> Matrix:
    x, y, z = ((float(r[0]), float(r[1]), float(r[2]), float(r[3]) if len(r) > 3 else 0.0) for r in rows)
    return (x, y, z, (0.0, 0.0, 0.0, 1.0))
