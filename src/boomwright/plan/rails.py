"""Where the cradle holds the conductors: the height of the axes, rails or end pockets with their notches, end stops."""

from __future__ import annotations

import math
from dataclasses import dataclass

from boomwright.data.lettering import text_width_mm
from boomwright.design.model import Boom
from boomwright.errors import Fault
from boomwright.plan.cradle_model import (
    BASE_MM,
    ROOT_2,
    STOP_MM,
    Bearer,
    Ground,
    Held,
    Notch,
    Span,
    Stop,
    between_neighbours,
)
from boomwright.plan.notch import axis_height, notch_apex_height_mm
from boomwright.plan.saddle import FLOOR_MM, SADDLE_WALL_MM, TIE_GROOVE_DEPTH_MM
from boomwright.plan.seat import SeatPlan
from boomwright.plan.size import Size
from boomwright.shop.profile import Shop

TIP_MARGIN_MM = 1.0
LEAST_RAIL_MM = 2.0
LEAST_HOLD_MM = 1.5
NOTCH_WALL_MM = 1.2
NOTCH_OVER_BASE_MM = 0.5
"""How far the lowest V stays above the base, so that it stays whole when it is drawn lower for a printer that grows."""

TAG_HEIGHT_MM = 2.8
STOPS_APART_MM = 0.8
NOTCH_ERROR_MM = 0.01
"""The notch error [mm] whose tilt is stated."""


@dataclass(frozen=True)
class Limit:
    """How far from the middle plane rails may reach, where the bed is the limit, and the bed's width there [mm]."""

    outer_mm: float = math.inf
    bed_mm: float = math.inf


UNLIMITED = Limit()


def plan_axis_height(boom: Boom, shop: Shop, seat: SeatPlan, held: tuple[Held, ...]) -> tuple[float, list[Size]]:
    """Height of the axes above the bed [mm], and every notch's apex, with their origins."""
    over_tie = max(TIE_GROOVE_DEPTH_MM + FLOOR_MM, BASE_MM + NOTCH_OVER_BASE_MM)
    saddle = seat.top_mm + over_tie + ((ROOT_2 - 1.0) * seat.half_width_mm if boom.section == "round" else 0.0)
    needs = {
        f"base {BASE_MM:g} + relief {shop.cradle.relief_mm:g} + boom's line {seat.top_mm:g} under the axes": (
            BASE_MM + shop.cradle.relief_mm + seat.top_mm
        ),
        f"base and tie groove {over_tie:g} under the saddles": saddle,
        f"base and tie groove {over_tie:g} under the deepest notch": over_tie + ROOT_2 * max(h.radius_mm for h in held),
    }
    return axis_height(needs, {h.tag: h.radius_mm for h in held}, "cradle")


def plan_rails(ground: Ground, limit: Limit = UNLIMITED) -> tuple[Span | None, list[Size], list[Fault]]:
    """Where the rails stand in |y|, or None where only end pockets over the full width can hold the shortest rod."""
    shop, inner = ground.shop, ground.inner_mm
    shortest = min(ground.held, key=lambda h: h.reach_mm)
    free = shortest.reach_mm - TIP_MARGIN_MM
    outer, bed_limits = min(free, limit.outer_mm), limit.outer_mm < free
    if bed_limits and outer - LEAST_RAIL_MM < inner:
        found = f"leaves no room for rails: boom and relief take {inner:g} mm on each side of the middle"
        return None, [], [Fault("printer.bed_mm", found, "use a printer with a larger bed, or a narrower boom")]
    if outer - LEAST_RAIL_MM >= inner - 1e-9:
        wish = shop.cradle.rail_mm
        rail = min(wish, outer - inner)
        narrowed = "" if rail == wish else f", narrowed from {wish:g} to clear the adhesive"
        origin = f"two rails: {shortest.tag} reaches {shortest.reach_mm:g}, less {TIP_MARGIN_MM:g} at its tip"
        if bed_limits:
            origin = f"two rails: as far apart as the bed of {limit.bed_mm:g} allows beside the outriggers' joints"
        sizes = [
            Size("cradle.rail.outer_mm", outer, "mm", origin),
            Size("cradle.rail.thickness_mm", rail, "mm", "shop's rail thickness" + narrowed),
        ]
        return (outer - rail, outer), sizes + (_tilt(ground, outer - rail / 2.0) if bed_limits else []), []
    origin = f"end pockets over the full width: {shortest.tag} is too short for rails outside the relief"
    hold = shortest.reach_mm - inner
    faults = []
    if hold < LEAST_HOLD_MM:
        found = (
            f"{shortest.tag} reaches {shortest.reach_mm:g} mm from the middle, boom and relief take {inner:g} of it: "
            f"{hold:.3g} is left to hold it by, at least {LEAST_HOLD_MM:g} is needed"
        )
        fix = "use a narrower boom, or a smaller cradle.relief_mm in the shop file"
        faults.append(Fault(f"{shortest.path}.length_mm", found, fix))
    return None, [Size("cradle.pocket.inner_mm", inner, "mm", origin)], faults


def _tilt(ground: Ground, rail_mm: float) -> list[Size]:
    """What a notch error does where the bed keeps the rails near the middle."""
    longest = max(ground.held, key=lambda h: h.tip_mm)
    tilt_mrad = 1e3 * NOTCH_ERROR_MM / (2.0 * rail_mm)
    origin = f"one notch {1e3 * NOTCH_ERROR_MM:g} um off, rails {2.0 * rail_mm:.4g} apart"
    tip = tilt_mrad * 1e-3 * longest.tip_mm
    return [
        Size("cradle.tilt_mrad", tilt_mrad, "mrad", origin),
        Size("cradle.tilt_at_tip_mm", tip, "mm", f"that tilt at the tip of {longest.tag}, {longest.tip_mm:g} out"),
    ]


def plan_bearers(ground: Ground, rails: Span | None, limit: Limit = UNLIMITED) -> tuple[Bearer, ...]:
    """Rails with a notch for every conductor, a trough for a straight driven element; or a pocket for each."""
    held, inner = ground.held, ground.inner_mm
    notches = tuple(
        Notch(h.tag, h.at_mm, h.radius_mm, notch_apex_height_mm(ground.height_mm, 2.0 * h.radius_mm)) for h in held
    )
    if rails is None:
        return tuple(
            _with_notch(_trough(held, i, (inner, min(h.reach_mm, limit.outer_mm))), notches) for i, h in enumerate(held)
        )
    low = min(n.at_mm - n.radius_mm * ROOT_2 for n in notches) - SADDLE_WALL_MM
    high = max(n.at_mm + n.radius_mm * ROOT_2 for n in notches) + SADDLE_WALL_MM
    bearers = [Bearer((low, high), rails, notches)]
    if ground.design.driven.form == "straight":
        troughs = [
            _trough(held, i, (inner, min(h.tip_mm, limit.outer_mm))) for i, h in enumerate(held) if h.tag == "DE"
        ]
        bearers += [_with_notch(b, notches) for b in troughs]
    return tuple(bearers)


def _trough(held: tuple[Held, ...], index: int, y_mm: Span) -> Bearer:
    wish = held[index].radius_mm * ROOT_2 + NOTCH_WALL_MM
    return Bearer(between_neighbours(held, index, wish, 0.0), y_mm, ())


def _with_notch(bearer: Bearer, notches: tuple[Notch, ...]) -> Bearer:
    inside = tuple(n for n in notches if bearer.x_mm[0] < n.at_mm < bearer.x_mm[1])
    return Bearer(bearer.x_mm, bearer.y_mm, inside)


def plan_stops(ground: Ground) -> tuple[Stop, ...]:
    """The end walls: pocket length = conductor's length + 2 x slide clearance; one for both of a flat folded one."""
    held, stops = ground.held, []
    for index, h in enumerate(held):
        if h.tag == "DE-front":
            continue
        wish = max(h.radius_mm + 2.0, text_width_mm(h.tag, TAG_HEIGHT_MM) / 2.0 + STOPS_APART_MM)
        low, high = between_neighbours(held, index, wish, STOPS_APART_MM)
        if index + 1 < len(held) and held[index + 1].tag == "DE-front":
            high = between_neighbours(held, index + 1, wish, STOPS_APART_MM)[1]
        inner = h.tip_mm + ground.shop.printer.slide_clearance_mm
        stops.append(Stop(h.tag, (low, high), (inner, inner + STOP_MM), ground.height_mm + h.radius_mm / 2.0))
    return tuple(stops)
