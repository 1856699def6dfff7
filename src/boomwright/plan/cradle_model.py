"""What a printed cradle consists of. All sizes in the cradle's own frame: x as the design's, z up from the bed.

The antenna lies in it upside down, turned about x, so the datum plane is at `CradlePlan.axis_height_mm` and the boom's
grooves look down.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

from boomwright.design.model import Boom, Design
from boomwright.plan.frame import Matrix, turned_about_x
from boomwright.plan.joint import Dovetail, Joint
from boomwright.plan.label import Label
from boomwright.plan.seat import SeatPlan
from boomwright.shop.profile import Shop

Span = tuple[float, float]
Rectangle = tuple[Span, Span]

BASE_MM = 4.0
CHAMFER_MM = 0.4
STOP_MM = 4.0
BEAM_MM = 10.0
NOTCH_ALLOWED_MM = 0.01
"""How far a notch's axis may be off the plan in a written file."""

ROOT_2 = math.sqrt(2.0)


@dataclass(frozen=True)
class Held:
    """A conductor that lies in the cradle: how far its straight part and its tip reach from the middle plane [mm]."""

    tag: str
    path: str
    at_mm: float
    radius_mm: float
    reach_mm: float
    tip_mm: float


@dataclass(frozen=True)
class Ground:
    """What every size of the cradle follows from: design, boom, shop, seats, what is held, height of the axes [mm]."""

    design: Design
    boom: Boom
    shop: Shop
    seat: SeatPlan
    held: tuple[Held, ...]
    height_mm: float

    @property
    def inner_mm(self) -> float:
        """How far from the middle plane [mm] the adhesive lets material stand at the height of the axes."""
        return self.seat.half_width_mm + self.shop.cradle.relief_mm

    @property
    def window_mm(self) -> Span | None:
        """x between which the base stays open for a driven element that is fitted after the rods have cured [mm]."""
        driven = self.design.driven
        if driven.form != "loop" and driven.plane != "upright":
            return None
        half = driven.outer_diameter_mm / 2.0 + self.shop.cradle.relief_mm
        return driven.at_mm - half, driven.at_mm + half


@dataclass(frozen=True)
class Notch:
    """A 90° V across a bearer, its apex at this height."""

    tag: str
    at_mm: float
    radius_mm: float
    apex_mm: float


@dataclass(frozen=True)
class Bearer:
    """A wall along x with V notches, once at +y and once at -y: a rail (all conductors) or a trough (one)."""

    x_mm: Span
    y_mm: Span
    notches: tuple[Notch, ...]


@dataclass(frozen=True)
class Stop:
    """The end wall of a conductor's pocket, once at +y and once at -y."""

    tag: str
    x_mm: Span
    y_mm: Span
    top_mm: float


@dataclass(frozen=True)
class Saddle:
    """Carries the boom: a V for a round one (low = apex), a flat channel for a square one (low = floor)."""

    x_mm: Span
    low_mm: float
    top_mm: float
    channel_half_mm: float
    outer_half_mm: float
    tie_y_mm: Span

    @property
    def middle_mm(self) -> float:
        """x of its middle [mm]."""
        return sum(self.x_mm) / 2.0

    @property
    def beam_mm(self) -> Span:
        """x of the beam under it [mm]."""
        return self.middle_mm - BEAM_MM / 2.0, self.middle_mm + BEAM_MM / 2.0


@dataclass(frozen=True)
class Block:
    """A block on the base with a level top; y as it stands, with its sign. `tag` of the conductor, `role` its use."""

    tag: str
    role: str
    x_mm: Span
    y_mm: Span
    top_mm: float


@dataclass(frozen=True)
class Section:
    """One printed piece. Its base is the union of rectangles and tenons less the sockets; the rest stands on it.

    bearers   both at +y and at -y
    serves    tags of the conductors whose ends an outrigger carries; empty for a section of the cradle itself
    side      +1 or -1, the side of y on which an outrigger lies; 0 for a section of the cradle itself
    shift_mm  x and y by which it is moved to lie on the bed
    """

    stem: str
    base: tuple[Rectangle, ...]
    tenons: tuple[Dovetail, ...] = ()
    sockets: tuple[Dovetail, ...] = ()
    bores: tuple[tuple[float, float], ...] = ()
    bearers: tuple[Bearer, ...] = ()
    blocks: tuple[Block, ...] = ()
    saddles: tuple[Saddle, ...] = ()
    labels: tuple[Label, ...] = ()
    serves: tuple[str, ...] = ()
    side: int = 0
    shift_mm: tuple[float, float] = (0.0, 0.0)

    @property
    def plan_extent_mm(self) -> tuple[Span, Span]:
        """Outer x and y [mm], tenons included."""
        xs = [value for x, _ in self.base for value in x] + [x for d in self.tenons for x, _ in d.outline()]
        ys = [value for _, y in self.base for value in y] + [y for d in self.tenons for _, y in d.outline()]
        return (min(xs), max(xs)), (min(ys), max(ys))

    @property
    def top_mm(self) -> float:
        """Its highest point above the bed [mm]."""
        tops = [BASE_MM, *(b.top_mm for b in self.blocks), *(s.top_mm for s in self.saddles)]
        return max(tops)


@dataclass(frozen=True)
class CradlePlan:
    """The cradle: what it holds, and the pieces that it is printed in.

    rails     where the rails stand in |y|, None where end pockets over the full width hold the rods
    bearers, stops, saddles    of all sections together
    sections  along x, then the outriggers
    joints    between the pieces; those of the sections first, from the rear
    """

    axis_height_mm: float
    held: tuple[Held, ...]
    rails: Span | None
    bearers: tuple[Bearer, ...]
    stops: tuple[Stop, ...]
    saddles: tuple[Saddle, ...]
    sections: tuple[Section, ...]
    relief_mm: float
    joints: tuple[Joint, ...] = ()

    @property
    def frame(self) -> Matrix:
        """From the design's frame to the cradle's."""
        return turned_about_x(self.axis_height_mm)

    def frame_of(self, section: Section) -> Matrix:
        """From the design's frame to that of a section's files."""
        return turned_about_x(self.axis_height_mm, section.shift_mm)

    def top_of(self, section: Section) -> float:
        """The highest point of a section above the bed [mm]."""
        return max(section.top_mm, self.axis_height_mm if section.bearers else 0.0)

    def section(self, stem: str) -> Section:
        """The section of this stem."""
        return next(s for s in self.sections if s.stem == stem)

    @property
    def top_mm(self) -> float:
        """The highest point of all pieces above the bed [mm]."""
        return max(self.top_of(section) for section in self.sections)

    @property
    def extent_mm(self) -> tuple[Span, Span, Span]:
        """Outer x, y and z of all pieces put together [mm]."""
        extents = [s.plan_extent_mm for s in self.sections]
        xs, ys = [v for x, _ in extents for v in x], [v for _, y in extents for v in y]
        return (min(xs), max(xs)), (min(ys), max(ys)), (0.0, self.top_mm)


def mirrored(y_mm: Span, side: float) -> Span:
    """A span of |y| on the side of y with this sign [mm]."""
    low, high = sorted((side * y_mm[0], side * y_mm[1]))
    return low, high


def between_neighbours(held: tuple[Held, ...], index: int, wish_mm: float, apart_mm: float) -> Span:
    """`wish_mm` to both sides of a conductor, at most half-way to its neighbours less half of `apart_mm`."""
    at = held[index].at_mm
    low = at - held[index - 1].at_mm if index > 0 else math.inf
    high = held[index + 1].at_mm - at if index + 1 < len(held) else math.inf
    return at - min(wish_mm, (low - apart_mm) / 2.0), at + min(wish_mm, (high - apart_mm) / 2.0)
