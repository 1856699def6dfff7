"""Where the lines of the laser-cut cradle run: axis height, rails, stops, props and saddles, in its own frame.

x is the design's, z rises from the bench; the antenna lies in it upside down. All figures in millimetres.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from itertools import pairwise

from boomwright.design.model import Boom, Design
from boomwright.plan.cradle import Held, held_conductors
from boomwright.plan.notch import notch_apex_height_mm
from boomwright.plan.seat import SeatPlan
from boomwright.plan.sheet_plate import Span, Vee, free_spans
from boomwright.plan.sheet_splice import FISHPLATES_MM
from boomwright.plan.size import Size
from boomwright.shop.profile import Shop

ROOT_2 = math.sqrt(2.0)
LEAST_WEB_MM = 10.0
STANDING_MM = 8.0
"""Least height of what stands on the base under the boom: spreaders, and the fishplates of a spliced base."""

NO_SAG_SHARE = 0.5228
"""A uniform bar on two supports this share of its length apart does not sag in the middle (closed form)."""

LONG_ROD_MM = 150.0
"""Shorter rods sag by microns wherever they are held: their rails stand as far apart as the tips allow."""

TIP_MARGIN_MM, PROP_MARGIN_MM = 1.0, 3.0
LEAST_HOLD_MM = 1.5
WEB_MM = 1.5
"""Least sheet between two slots."""

MOST_STOP_MM, LEAST_STOP_MM = 14.0, 3.0
MOST_SADDLE_SPAN_MM = 300.0
SADDLE_FROM_END_MM, SADDLE_FROM_ROD_MM = 4.0, 20.0
BESIDE_WINDOW_MM = 4.0
FAR_MM = 20.0
"""A saddle this far beyond the rails' ends gets its own sleeper, and the rails run on to it."""

CHEEK_MM, LEAST_CHEEK_MM = 2.4, 0.8
TIE_SLOT_MM = (2.0, 4.2)


class LeftOutError(Exception):
    """Why a sheet cannot make the fixture, in words."""


@dataclass(frozen=True)
class StopLine:
    """Both end stops of a conductor: tag, place along x, and |y| of the faces that meet its tips."""

    tag: str
    at_mm: float
    inner_mm: float


@dataclass(frozen=True)
class PropLine:
    """A second notch under each half of a straight driven element: the conductor and |y| of the prop."""

    held: Held
    y_mm: Span


@dataclass(frozen=True)
class SaddleLine:
    """A saddle's place along x, half its width, and half its channel's width at the top."""

    x_mm: Span
    half_mm: float
    channel_half_mm: float
    low_mm: float
    top_mm: float


@dataclass(frozen=True)
class Lines:
    """Everything the plates are drawn from; `under_boom_mm` is the most height under the boom.

    window_mm   x of what is fitted to the boom when the rods have cured, None = nothing
    """

    sheet_mm: float
    axis_height_mm: float
    web_mm: float
    under_boom_mm: float
    rails_mm: Span
    rail_x_mm: Span
    held: tuple[Held, ...]
    stops: tuple[StopLine, ...]
    stop_width_mm: float
    props: tuple[PropLine, ...]
    saddles: tuple[SaddleLine, ...]
    is_round: bool
    window_mm: Span | None
    fishplate_mm: float = FISHPLATES_MM[0]

    def vee(self, held: Held) -> Vee:
        """The notch of a conductor, in the fixture's x and z."""
        apex = notch_apex_height_mm(self.axis_height_mm, 2.0 * held.radius_mm)
        return Vee(held.tag, held.at_mm, held.radius_mm, apex)


def lay_lines(design: Design, boom: Boom, shop: Shop, seat: SeatPlan) -> tuple[Lines, list[Size]]:
    """The lines of the fixture and its sizes with their origins; LeftOutError where a sheet cannot make it."""
    held = held_conductors(design)
    if not held:
        raise LeftOutError(
            "no conductor lies on the datum plane: the driven element is fitted to the boom by its mould"
        )
    t, under = shop.laser.sheet_mm, max(shop.cradle.relief_mm, 1.0)
    web = max(LEAST_WEB_MM, t + STANDING_MM)
    height, sizes = _axis_height(boom, seat, held, (t, web, under))
    rails, rail_sizes = _rails(shop, seat, held)
    stops, width = _stops(design, shop, held)
    window = _window(design, shop)
    ends = [(h.at_mm - h.radius_mm * ROOT_2, h.at_mm + h.radius_mm * ROOT_2) for h in held]
    rail_x = (min(e[0] for e in ends) - 6.0, max(e[1] for e in ends) + 6.0)
    places = _saddle_places(design, shop, seat)
    rail_x = _reaching(rail_x, places)
    shaped = []
    for x in places:
        wide = _saddle((boom, shop, seat), height, x, math.inf)
        if wide.half_mm > rails[0] - 0.5:
            if rail_x[0] <= x[0] and x[1] <= rail_x[1]:
                wide = _saddle((boom, shop, seat), height, x, rails[0] - 0.5)
            elif x[1] <= ends[0][0] - 3.0:
                rail_x = (max(rail_x[0], x[1] + 0.5), rail_x[1])
            elif x[0] >= max(e[1] for e in ends) + 3.0:
                rail_x = (rail_x[0], min(rail_x[1], x[0] - 0.5))
            else:
                wide = _saddle((boom, shop, seat), height, x, rails[0] - 0.5)
        shaped.append(wide)
    lines = Lines(
        sheet_mm=t,
        axis_height_mm=height,
        web_mm=web,
        under_boom_mm=height - seat.top_mm - under,
        rails_mm=rails,
        rail_x_mm=rail_x,
        held=held,
        stops=stops,
        stop_width_mm=width,
        props=_props(design, shop, seat, held, rails),
        saddles=tuple(shaped),
        is_round=boom.section == "round",
        window_mm=window,
    )
    sizes += [Size("sheet-cradle.stop.width_mm", width, "mm", "every stop alike: the closest conductors leave it")]
    return lines, sizes + rail_sizes


def _reaching(rail_x_mm: Span, saddles: list[Span]) -> Span:
    """The rails' ends, drawn out to saddles that stand far beyond the outermost notches."""
    low, high = rail_x_mm
    first, last = saddles[0], saddles[-1]
    return (
        first[0] - 8.0 if first[1] < low - FAR_MM else low,
        last[1] + 8.0 if last[0] > high + FAR_MM else high,
    )


def _axis_height(
    boom: Boom, seat: SeatPlan, held: tuple[Held, ...], given: tuple[float, float, float]
) -> tuple[float, list[Size]]:
    t, web, under = given
    thickest = max(h.radius_mm for h in held)
    rounding = (ROOT_2 - 1.0) * seat.half_width_mm if boom.section == "round" else 0.0
    needs = {
        f"base {t:g} + web {web:g} under the deepest notch": t + web + ROOT_2 * thickest,
        f"base {t:g} + {STANDING_MM:g} for what stands on it + {under:g} clear of the boom's line {seat.top_mm:g}": (
            t + STANDING_MM + under + seat.top_mm
        ),
        f"base {t:g} + 6 under the saddle's bottom": t + 6.0 + seat.top_mm + rounding,
    }
    reason = max(needs, key=lambda words: needs[words])
    height = math.ceil(needs[reason] * 2.0 - 1e-9) / 2.0
    sizes = [Size("sheet-cradle.axis_height_mm", height, "mm", f"{reason}, rounded up to half a millimetre")]
    for h in held:
        apex = notch_apex_height_mm(height, 2.0 * h.radius_mm)
        origin = f"axis height {height:g} - radius {h.radius_mm:g} x root 2"
        sizes.append(Size(f"sheet-cradle.notch.{h.tag}.apex_mm", apex, "mm", origin))
    return height, sizes


def _rails(shop: Shop, seat: SeatPlan, held: tuple[Held, ...]) -> tuple[Span, list[Size]]:
    """|y| of the rails' faces."""
    t, least = shop.laser.sheet_mm, seat.half_width_mm + shop.cradle.relief_mm
    shortest = min(held, key=lambda h: h.reach_mm)
    if 2.0 * shortest.reach_mm > LONG_ROD_MM:
        middle = NO_SAG_SHARE * shortest.reach_mm
        inner = middle - t / 2.0
        origin = f"{NO_SAG_SHARE:g} of {shortest.tag}'s length apart: so held, a rod does not sag at the boom"
    else:
        inner = shortest.reach_mm - TIP_MARGIN_MM - t
        origin = f"as far apart as {shortest.tag} allows, {TIP_MARGIN_MM:g} from its tips"
    if inner < least:
        inner, origin = least, "beside the boom: its half width + the relief from the adhesive"
    if min(shortest.reach_mm, inner + t) - inner < LEAST_HOLD_MM:
        room = min(t, max(shortest.reach_mm - inner, 0.0))
        raise LeftOutError(f"{shortest.tag} would lie on {room:.3g} mm of rail, at least {LEAST_HOLD_MM:g} is needed")
    # A straight rod may end on the rail, its stop right behind it; a bent one must not touch the rail's teeth.
    slide = shop.printer.slide_clearance_mm
    most, tag = min((h.tip_mm + slide if h.reach_mm == h.tip_mm else h.reach_mm, h.tag) for h in held)
    if inner + t > most + 1e-9:
        room = max(most - least, 0.0)
        raise LeftOutError(
            f"{tag} leaves {room:.3g} mm between the adhesive's relief and its end, "
            f"too little for a rail of {t:g} mm sheet"
        )
    apart = 2.0 * inner + t
    return (inner, inner + t), [Size("sheet-cradle.rails.apart_mm", apart, "mm", f"middle to middle: {origin}")]


def _stops(design: Design, shop: Shop, held: tuple[Held, ...]) -> tuple[tuple[StopLine, ...], float]:
    found = []
    for h in held:
        if h.tag != "DE-front":
            middle = h.at_mm
            if h.tag == "DE" and design.driven.form == "folded":
                assert design.driven.spacing_mm is not None
                middle += design.driven.spacing_mm / 2.0
            found.append(StopLine(h.tag, middle, h.tip_mm + shop.printer.slide_clearance_mm))
    nearest = min((b.at_mm - a.at_mm for a, b in pairwise(sorted(found, key=lambda s: s.at_mm))), default=math.inf)
    width = min(MOST_STOP_MM, nearest - 1.0)
    if width < LEAST_STOP_MM:
        raise LeftOutError(f"conductors {nearest:.3g} mm apart leave no room for end stops of sheet side by side")
    return tuple(found), width


def _window(design: Design, shop: Shop) -> Span | None:
    """x of a driven element that is fitted after the rods have cured."""
    driven = design.driven
    if driven.form == "loop" or (driven.form == "folded" and driven.plane == "upright"):
        half = driven.outer_diameter_mm / 2.0 + shop.cradle.relief_mm
        return driven.at_mm - half, driven.at_mm + half
    return None


def _props(design: Design, shop: Shop, seat: SeatPlan, held: tuple[Held, ...], rails: Span) -> tuple[PropLine, ...]:
    """A half of a straight element lies on rail and prop, its middle between them; short ones on the rail alone."""
    if design.driven.form != "straight":
        return ()
    (one,) = (h for h in held if h.tag == "DE")
    t = shop.laser.sheet_mm
    first = max(seat.half_width_mm + shop.cradle.relief_mm, design.driven.gap_mm / 2.0 + 1.0)
    middle = (design.driven.gap_mm / 2.0 + one.reach_mm) / 2.0
    room = WEB_MM + max(shop.laser.fit_mm, 0.0)
    inside, outside = rails[0] - room - t >= first, one.reach_mm - PROP_MARGIN_MM - t >= rails[1] + room
    if inside and (middle <= sum(rails) / 2.0 or not outside):
        return (PropLine(one, (first, first + t)),)
    if outside:
        outer = one.reach_mm - PROP_MARGIN_MM
        return (PropLine(one, (outer - t, outer)),)
    return ()


def _saddle_places(design: Design, shop: Shop, seat: SeatPlan) -> list[Span]:
    """x of each saddle: near both ends of the boom, and between conductors wherever the way between is long."""
    relief, t, driven = shop.cradle.relief_mm, shop.laser.sheet_mm, design.driven
    kept = [(b.at_mm - b.half_x_mm - relief, b.at_mm + b.half_x_mm + relief) for b in seat.bond_lines]
    half = driven.outer_diameter_mm / 2.0 + relief
    # The base has a window under what is fitted later: a saddle stands on the sheet beside it.
    half += BESIDE_WINDOW_MM if _window(design, shop) else 0.0
    kept.append((driven.at_mm - half, driven.at_mm + half))
    free = free_spans((seat.start_mm, seat.end_mm), kept)
    first, last = free[0], free[-1]
    for room, bare, end in ((first, kept, "tail"), (last, kept, "nose")):
        reached = room[0] > seat.start_mm if end == "tail" else room[1] < seat.end_mm
        if reached or room[1] - room[0] < t or not bare:
            raise LeftOutError(f"the boom's {end} leaves no room for a saddle of {t:g} mm sheet clear of the adhesive")
    places = [_near(first, t, at_end=False), _near(last, t, at_end=True)]
    rooms = [f for f in free[1:-1] if f[1] - f[0] >= t]
    while True:
        places.sort()
        wide = [(a, b) for a, b in pairwise(places) if b[0] - a[1] > MOST_SADDLE_SPAN_MM]
        choices = []
        for a, b in wide:
            target = (a[1] + b[0]) / 2.0
            for low, high in rooms:
                at = min(max(target, low + t / 2.0), high - t / 2.0)
                if a[1] + t < at < b[0] - t:
                    choices.append((abs(at - target), at))
        if not choices:
            return places
        _, at = min(choices)
        places.append((at - t / 2.0, at + t / 2.0))


def _near(room: Span, t: float, at_end: bool) -> Span:
    """A saddle in the free end of the boom: off the end, but not far from the rods."""
    long = room[1] - room[0] - t
    away = min(long - min(SADDLE_FROM_END_MM, long / 2.0), SADDLE_FROM_ROD_MM)
    low = room[0] + away if at_end else room[1] - away - t
    return low, low + t


def _saddle(given: tuple[Boom, Shop, SeatPlan], height_mm: float, x_mm: Span, most_half_mm: float) -> SaddleLine:
    """A V for a round boom, a flat channel for a square one; narrow where it stands between the rails."""
    boom, shop, seat = given
    half = seat.half_width_mm
    if boom.section == "round":
        axis = height_mm - seat.axis_mm
        low = axis - half * ROOT_2
        channel = half / ROOT_2 + max(1.0, half / 6.0)
        channel = min(channel, most_half_mm - LEAST_CHEEK_MM)
        if channel < half / ROOT_2 + 0.3:
            raise LeftOutError("the rails stand too close to the boom for a saddle between them")
        top = low + channel
    else:
        low, channel = height_mm - seat.top_mm, half + shop.printer.slide_clearance_mm
        top = low + min(half, 4.0)
        if channel + LEAST_CHEEK_MM > most_half_mm:
            return SaddleLine(x_mm, most_half_mm, 0.0, low, low)
    outer = min(channel + CHEEK_MM + TIE_SLOT_MM[0] + CHEEK_MM, most_half_mm)
    return SaddleLine(x_mm, outer, channel, low, top)
