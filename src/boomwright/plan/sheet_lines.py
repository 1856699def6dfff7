"""Where the lines of the laser-cut cradle run: axis height, rails, stops, props and saddles, in its own frame.

x is the design's, z rises from the bench; the antenna lies in it upside down. All figures in millimetres.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from itertools import pairwise

from boomwright.design.model import Boom, Design
from boomwright.plan.cradle import Held, held_conductors
from boomwright.plan.notch import axis_height, notch_apex_height_mm
from boomwright.plan.seat import SeatPlan
from boomwright.plan.sheet_plate import LeftOutError, Span, Vee
from boomwright.plan.sheet_saddle import SaddleLine, saddle_places, stand_saddles
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
PROP_BESIDE_MM, PROP_CLEAR_MM = 5.0, 0.3
LEAST_HOLD_MM = 1.5
WEB_MM = 1.5
"""Least sheet between two slots."""

MOST_STOP_MM, LEAST_STOP_MM = 14.0, 3.0


@dataclass(frozen=True)
class StopLine:
    """Both end stops of a conductor: tag, place along x, and |y| of the faces that meet its tips."""

    tag: str
    at_mm: float
    inner_mm: float


@dataclass(frozen=True)
class PropLine:
    """A second notch under each half of a straight driven element: the conductor, |y| of the prop, half its length."""

    held: Held
    y_mm: Span
    half_mm: float


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
    notches = (
        min(h.at_mm - h.radius_mm * ROOT_2 for h in held),
        max(h.at_mm + h.radius_mm * ROOT_2 for h in held),
    )
    places = saddle_places(design, shop, seat, window is not None)
    beside = [((s.at_mm - width / 2.0, s.at_mm + width / 2.0), s.inner_mm) for s in stops]
    saddles, rail_x = stand_saddles((boom, shop, seat), height, places, (rails[0], notches), beside)
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
        props=_props(design, shop, seat, (held, rails, saddles)),
        saddles=saddles,
        is_round=boom.section == "round",
        window_mm=window,
    )
    sizes += [Size("sheet-cradle.stop.width_mm", width, "mm", "every stop alike: the closest conductors leave it")]
    return lines, sizes + rail_sizes


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
    return axis_height(needs, {h.tag: h.radius_mm for h in held}, "sheet-cradle")


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


def _props(
    design: Design, shop: Shop, seat: SeatPlan, laid: tuple[tuple[Held, ...], Span, tuple[SaddleLine, ...]]
) -> tuple[PropLine, ...]:
    """A half of a straight element lies on rail and prop, its middle between them; short ones on the rail alone."""
    if design.driven.form != "straight":
        return ()
    held, rails, saddles = laid
    (one,) = (h for h in held if h.tag == "DE")
    t = shop.laser.sheet_mm
    first = max(seat.half_width_mm + shop.cradle.relief_mm, design.driven.gap_mm / 2.0 + 1.0)
    middle = (design.driven.gap_mm / 2.0 + one.reach_mm) / 2.0
    room = WEB_MM + max(shop.laser.fit_mm, 0.0)
    inside, outside = rails[0] - room - t >= first, one.reach_mm - PROP_MARGIN_MM - t >= rails[1] + room
    if inside and (middle <= sum(rails) / 2.0 or not outside):
        y = (first, first + t)
    elif outside:
        y = (one.reach_mm - PROP_MARGIN_MM - t, one.reach_mm - PROP_MARGIN_MM)
    else:
        return ()
    return (PropLine(one, y, _prop_half_mm(one, y, held, saddles)),)


def _prop_half_mm(one: Held, y_mm: Span, held: tuple[Held, ...], saddles: tuple[SaddleLine, ...]) -> float:
    """Half a prop's length along x: it stays clear of the rods and saddles beside it."""
    room = [abs(h.at_mm - one.at_mm) - h.radius_mm for h in held if h is not one]
    room += [abs(x - one.at_mm) for s in saddles if s.half_mm + PROP_CLEAR_MM > y_mm[0] for x in s.x_mm]
    notch = ROOT_2 * one.radius_mm
    half = min([notch + PROP_BESIDE_MM, *(r - PROP_CLEAR_MM for r in room)])
    if half < notch + PROP_CLEAR_MM:
        raise LeftOutError(f"what stands beside {one.tag} leaves no room for the props under its halves")
    return half
