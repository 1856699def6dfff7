"""The laser-cut cradle: every plate in its place, and on which sheet it is cut. Millimetres.

The fixture's x is the design's, z rises from the bench; the antenna lies in it upside down with its rods' axes at
`axis_height_mm`.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from math import prod

from boomwright.design.model import Boom, Design
from boomwright.errors import Fault
from boomwright.plan.cradle import Held
from boomwright.plan.frame import IDENTITY, Matrix, turned_about_x
from boomwright.plan.seat import SeatPlan
from boomwright.plan.sheet_base import EDGE_MM, FOOT_MM, base_pieces, base_rooms, stop_foot_mm
from boomwright.plan.sheet_frame import notched_top, rail_feet, rail_pieces, spreaders
from boomwright.plan.sheet_lines import Lines, lay_lines
from boomwright.plan.sheet_plate import LeftOutError, Plate, Rect, Standing, TooLargeError, across, along_x, with_slots
from boomwright.plan.sheet_saddle import TIE_SLOT_MM, SaddleLine
from boomwright.plan.sheet_splice import FISHPLATES_MM
from boomwright.plan.sheet_words import Wish, with_words
from boomwright.plan.size import Size
from boomwright.shop.nesting import Place, fits_sheet, nest
from boomwright.shop.profile import Shop

STOP_OVER_AXIS_MM = 2.0
TAG_REACH_MM = 9.0
"""A tag farther from its notch or slot would mislead."""


@dataclass(frozen=True)
class SheetCradlePlan:
    """The whole fixture.

    held      the conductors that lie in it
    rails_mm  |y| of the rails' faces
    plates    every plate where it stands
    places    where each is cut, in the same order
    squeeze_mm3  volume by which feet are larger than their slots, with a negative fit; else 0
    left_out  why there is no such cradle, in words
    """

    axis_height_mm: float = 0.0
    held: tuple[Held, ...] = ()
    rails_mm: tuple[float, float] = (0.0, 0.0)
    plates: tuple[Standing, ...] = ()
    places: tuple[Place, ...] = ()
    squeeze_mm3: float = 0.0
    left_out: str | None = None

    @property
    def frame(self) -> Matrix:
        """The design's frame to the fixture's, and back: turned half about x."""
        return turned_about_x(self.axis_height_mm) if self.plates else IDENTITY

    @property
    def sheets(self) -> int:
        """Number of sheets."""
        return 1 + max((place.sheet for place in self.places), default=-1)


def plan_sheet_cradle(
    design: Design, boom: Boom, shop: Shop, seat: SeatPlan
) -> tuple[SheetCradlePlan, list[Size], list[Fault]]:
    """The laser-cut cradle of a design, its sizes with their origins, and what stands against it."""
    try:
        lines, sizes = lay_lines(design, boom, shop, seat)
        standing = _spliced(design, lines, shop)
    except LeftOutError as reason:
        return SheetCradlePlan(left_out=str(reason)), [], []
    except TooLargeError as need:
        return SheetCradlePlan(), [], [_too_large(str(need), shop)]
    laser = shop.laser
    large = [s.plate for s in standing if not fits_sheet(s.plate.size_mm, laser)]
    if large:
        worst = max(large, key=lambda plate: prod(plate.size_mm))
        size = f"{worst.name.lower()} is {worst.size_mm[0]:.4g} x {worst.size_mm[1]:.4g} mm"
        return SheetCradlePlan(), [], [_too_large(size, shop)]
    places = nest([s.plate.size_mm for s in standing], laser)
    squeeze = _squeeze_mm3(standing, shop) if laser.fit_mm < 0.0 else 0.0
    plan = SheetCradlePlan(lines.axis_height_mm, lines.held, lines.rails_mm, tuple(standing), places, squeeze)
    sizes.append(Size("sheet-cradle.plates", float(len(standing)), "", f"nested on {plan.sheets} sheets"))
    return plan, sizes, []


def _too_large(need: str, shop: Shop) -> Fault:
    x, y = shop.laser.sheet_size_mm
    found = f"{need}, more than a sheet of {x:g} x {y:g} takes either way round"
    return Fault("laser.sheet_size_mm", found, "use a larger sheet, or name the other parts with --only")


def _squeeze_mm3(standing: list[Standing], shop: Shop) -> float:
    """How much larger the feet are than their slots, through the whole sheet."""
    t, fit = shop.laser.sheet_mm, shop.laser.fit_mm
    total = 0.0
    for plate in (one.plate for one in standing):
        for slot in plate.slots:
            width, height = slot.u[1] - slot.u[0], slot.v[1] - slot.v[0]
            total += ((width - fit) * (height - fit) - width * height) * t
    return total


def _spliced(design: Design, lines: Lines, shop: Shop) -> list[Standing]:
    """Every plate, with the first fishplates that can join pieces small enough for the sheet."""
    for length in FISHPLATES_MM[:-1]:
        try:
            return _standing(design, replace(lines, fishplate_mm=length), shop)
        except TooLargeError:
            continue
    return _standing(design, replace(lines, fishplate_mm=FISHPLATES_MM[-1]), shop)


def _standing(design: Design, lines: Lines, shop: Shop) -> list[Standing]:
    """Every plate in its place, slots and words included."""
    laser = shop.laser
    rooms = base_rooms(lines, laser)
    feet = rail_feet(lines, rooms, laser.fit_mm)
    crossing = spreaders(lines, rooms, laser)
    saddles = [Standing(_saddle(lines, s), across(s.x_mm[0])) for s in lines.saddles]
    props, stops = _props(lines), _stops(lines)
    inside = [*crossing, *saddles, *props]
    rails = rail_pieces(lines, feet, inside, laser)
    base = base_pieces(lines, rooms, [*inside, *stops], laser)
    every = [*base, *rails, *crossing, *saddles, *props, *stops]
    all_feet = [foot for one in every for foot in one.feet(lines.sheet_mm)]
    slotted = [with_slots(one, all_feet, lines.sheet_mm, laser.fit_mm) for one in every]
    seats = _seats([*crossing, *saddles, *props], lines.sheet_mm)
    return [replace(one, plate=_worded(design, lines, seats, one.plate)) for one in slotted]


def _seats(standing: list[Standing], sheet_mm: float) -> list[Wish]:
    """What a base says at the slots: the name of the plate that goes there, and where."""
    found = []
    for one in standing:
        x, y, _ = one.reach(sheet_mm)
        share = 0.75 if one.plate.kind == "spreader" and y[0] < 0.0 < y[1] else 0.5
        found.append(Wish(one.plate.name, sum(x) / 2.0, y[0] + share * (y[1] - y[0]), TAG_REACH_MM))
    return found


def _saddle(lines: Lines, saddle: SaddleLine) -> Plate:
    t, half, channel = lines.sheet_mm, saddle.half_mm, saddle.channel_half_mm
    body = Rect((-half, half), (t, saddle.top_mm))
    if half >= 12.0:
        feet = [Rect((half - 8.0, half - 2.0), (0.0, t)), Rect((2.0 - half, 8.0 - half), (0.0, t))]
    else:
        foot = min(half - 2.0, 5.0)
        feet = [Rect((-foot, foot), (0.0, t))]
    if channel == 0.0:
        top: tuple[tuple[float, float], ...] = ()
    elif lines.is_round:
        top = ((-channel, saddle.top_mm), (0.0, saddle.low_mm), (channel, saddle.top_mm))
    else:
        top = ((-channel, saddle.top_mm), (-channel, saddle.low_mm), (channel, saddle.low_mm), (channel, saddle.top_mm))
    ties: tuple[Rect, ...] = ()
    wide, tall = TIE_SLOT_MM
    if half - channel > wide + 4.0 and saddle.top_mm - 2.5 - tall > t + 1.5:
        inner, v = half - 2.4 - wide, (saddle.top_mm - 2.5 - tall, saddle.top_mm - 2.5)
        ties = (Rect((-inner - wide, -inner), v), Rect((inner, inner + wide), v))
    return Plate("saddle", "SADDLE", body, tuple(feet), top, windows=ties)


def _props(lines: Lines) -> list[Standing]:
    found = []
    t, height = lines.sheet_mm, lines.axis_height_mm
    for prop in lines.props:
        vee = replace(lines.vee(prop.held), at_mm=0.0)
        half = prop.half_mm
        foot_half = min(FOOT_MM / 2.0, half - 1.0)
        foot = Rect((-foot_half, foot_half), (0.0, t))
        plate = Plate("prop", "PROP", Rect((-half, half), (t, height)), (foot,), notched_top((vee,), height), (vee,))
        low, high = prop.y_mm
        found += [Standing(plate, along_x(prop.held.at_mm, y)) for y in ((low, high), (-high, -low))]
    return found


def _stops(lines: Lines) -> list[Standing]:
    """All alike."""
    t, half, foot = lines.sheet_mm, lines.stop_width_mm / 2.0, stop_foot_mm(lines) / 2.0
    over = max(STOP_OVER_AXIS_MM, *(h.radius_mm for h in lines.held))
    body = Rect((-half, half), (t, lines.axis_height_mm + over))
    plate = Plate("stop", "STOP", body, (Rect((-foot, foot), (0.0, t)),))
    found = []
    for stop in lines.stops:
        low, high = stop.inner_mm, stop.inner_mm + t
        found += [Standing(plate, along_x(stop.at_mm, y)) for y in ((low, high), (-high, -low))]
    return found


def _worded(design: Design, lines: Lines, seats: list[Wish], plate: Plate) -> Plate:
    """Tags beside notches and stops, FORWARD with an arrow, the design's name, and what the plate is."""
    u, v = ((a + b) / 2.0 for a, b in (plate.body.u, plate.body.v))
    if plate.kind == "rail":
        wishes = [Wish(vee.tag, vee.at_mm, vee.apex_mm - 3.0, TAG_REACH_MM) for vee in plate.vees]
        wishes += [Wish(f"{plate.name} FORWARD →", u, v), Wish(design.name, u + 60.0, v)]
        return with_words(plate, wishes)
    if plate.kind != "base":
        return with_words(plate, [Wish(plate.name, u, v)])
    wishes = []
    for stop in lines.stops:
        y = stop.inner_mm - EDGE_MM
        wishes += [Wish(stop.tag, stop.at_mm, at, TAG_REACH_MM) for at in (y, -y) if _on(plate, stop.at_mm, at)]
    wishes += [seat for seat in seats if _on(plate, seat.u_mm, seat.v_mm)]
    wishes += [Wish("FORWARD →", u, v), Wish(plate.name, u, v - 6.0), Wish(design.name, u, v + 6.0)]
    return with_words(plate, wishes)


def _on(plate: Plate, u_mm: float, v_mm: float) -> bool:
    return plate.body.holds(Rect((u_mm, u_mm), (v_mm, v_mm)))
