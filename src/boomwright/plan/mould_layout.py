"""Where cavity, channels, flanges and openings of the mould lie, and the resin they leave room for."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Literal

import numpy as np
import shapely
from shapely.geometry.base import BaseGeometry

from boomwright.data.tables import cables
from boomwright.design.centreline import Point, Run, bend_radius_mm, loop_drop_mm, straight_half_mm, trace
from boomwright.design.model import Boom, Design, Driven
from boomwright.errors import Fault
from boomwright.plan.cavity import (
    BoomBar,
    Cavity,
    Pull,
    Span,
    Taper,
    boom_mm3,
    places_along,
    straight,
    wire_mm3,
    within,
)
from boomwright.plan.mould_plan import BoomChannel, Half, MouldPlan, Opening, Wire
from boomwright.plan.mould_room import (
    COAX_RESIN_MM,
    LEAST_RESIN_MM,
    MOULD_WALL_MM,
    UNDER_RODS_MM,
    Ends,
    MouldRoom,
    cavity_ends,
    joint_mm,
    neighbours,
)
from boomwright.plan.parting import SOCKET_SPARE_MM, PinRoom, lay_out_parting
from boomwright.plan.seat import SeatPlan
from boomwright.shop.profile import Shop

COAX_SHORT_OF_CONDUCTOR_MM = 0.5
COAX_STUB_MM = 10.0
SKIN_MM = 1.2
"""A wall thinner than this behind a blind channel is left out: the channel goes through."""

THIN_TAB_MM = 2.0
"""What the wall leaves inside a bend must stand out by this from the cavity: a round tab of less breaks off."""

NECK_MM, LEAST_NECK_MM = 2.0, 0.8
"""Radius of the funnel where it meets the cavity, and the least for it in a narrow cavity."""

NECK_LENGTH_MM = 1.0
MOUTH_SLOPE = math.tan(math.radians(40.0))
VENT_MM = 0.75
MOUTH_WALL_MM = 1.2
TIP_PLAY_MM = 0.5
CHANNEL_MARGIN_MM = 5.0
"""How far conductor channels are drawn past the mould."""

TIP_RESIN_MM = 1.0


@dataclass(frozen=True)
class Ground:
    """What all sizes rest on."""

    design: Design
    shop: Shop
    seat: SeatPlan
    boom: Boom
    room: MouldRoom

    @property
    def driven(self) -> Driven:
        return self.design.driven

    @property
    def radius_mm(self) -> float:
        return self.design.driven.outer_diameter_mm / 2.0

    @property
    def slope(self) -> float:
        return math.tan(math.radians(self.shop.mould.draft_deg))

    @property
    def coax_mm(self) -> float:
        """Radius of the coax, 0 without one."""
        name = self.design.feed.coax
        return cables()[name].outer_diameter_mm / 2.0 if name else 0.0

    @property
    def coax_y_mm(self) -> float:
        """Where a coax beside the boom lies: a printable web between its channel and the boom's."""
        return self.seat.half_width_mm + 2.0 * self.shop.mould.channel_clearance_mm + self.web_mm + self.coax_mm

    @property
    def web_mm(self) -> float:
        return 3.0 * self.shop.printer.nozzle_mm

    @property
    def lowest_seat_mm(self) -> float:
        """z of the lowest point of rods and their seats [mm]."""
        depths = [g.radius_mm for g in self.seat.grooves] + [h.diameter_mm / 2.0 for h in self.seat.holes]
        return -max([*depths, *(rod.outer_diameter_mm / 2.0 for rod in self.design.rods)], default=0.0)


def pull_of(driven: Driven) -> Pull:
    """Along which axis the halves are drawn off: z for what lies flat, x for what stands up across the boom."""
    return "x" if driven.form == "loop" or driven.plane == "upright" else "z"


def cavity_of(ground: Ground) -> tuple[Cavity, Ends, list[Fault]]:
    """The cavity, where it and the block end along x, and a fault for each neighbour that leaves too little room."""
    room = ground.room
    ends, faults = cavity_ends(room, _inner_half_mm(ground, room.pull, room.least_depth_mm))
    return (_cavity_along_z if room.pull == "z" else _cavity_along_x)(ground, ends), ends, faults


def _inner_half_mm(ground: Ground, pull: Pull, depth_mm: float) -> float:
    """Half width of the cavity in y where it is widest [mm]: resin round joint, boom and coax."""
    seat, r, slope, resin = ground.seat, ground.radius_mm, ground.slope, ground.shop.mould.wall_mm
    lean = slope * depth_mm
    lean_boom = slope * max(-seat.bottom_mm, seat.top_mm) if pull == "z" else lean
    widths = [
        ground.driven.gap_mm / 2.0 + joint_mm(ground.driven) + resin + (slope * r if pull == "z" else lean),
        seat.half_width_mm + resin + lean_boom,
    ]
    rc, clearance = ground.coax_mm, ground.shop.mould.channel_clearance_mm
    if rc and ground.driven.form != "loop":
        wall = max(COAX_RESIN_MM, ground.web_mm + 2.0 * clearance)
        lean = slope * (abs(seat.axis_mm) + rc) if pull == "z" else lean
        widths.append(ground.coax_y_mm + rc + wall + lean)
    elif rc:  # between funnel and vent on the far side
        widths.append(rc + clearance + ground.web_mm + 2.0 * NECK_MM + TIP_PLAY_MM + lean)
    return _past_a_near_bend_mm(ground, pull, lean, _past_a_near_tip_mm(ground.driven, max(widths)))


def _past_a_near_tip_mm(driven: Driven, half_mm: float) -> float:
    """The half width, or more where a straight element's tip would end in the wall's first skin: then in the cavity."""
    if driven.form != "straight" or driven.length_mm is None:
        return half_mm
    tip = driven.length_mm / 2.0
    return tip + TIP_RESIN_MM if half_mm - TIP_RESIN_MM < tip < half_mm + SKIN_MM else half_mm


def _past_a_near_bend_mm(ground: Ground, pull: Pull, lean_mm: float, half_mm: float) -> float:
    """The half width, or more where the wall would leave but a thin tab of itself inside a bend: then none."""
    driven, tube = ground.driven, ground.radius_mm + ground.shop.mould.channel_clearance_mm
    if driven.form != "folded" or (pull == "x" and not ground.room.encloses_second):
        return half_mm
    lean = ground.slope * tube if pull == "z" else lean_mm
    # A round channel narrows with its depth, so a tab reaches up to the wire's axis there.
    inside = straight_half_mm(driven) + bend_radius_mm(driven) + lean
    return inside if 0.0 < inside - half_mm < THIN_TAB_MM else half_mm


def _cavity_along_z(ground: Ground, ends: Ends) -> Cavity:
    seat, resin = ground.seat, ground.shop.mould.wall_mm
    half = _inner_half_mm(ground, "z", 0.0)
    depth = (seat.bottom_mm - resin, max(seat.top_mm, ground.radius_mm) + resin)
    return Cavity("z", Taper(ends.cavity_mm, seat.axis_mm), Taper((-half, half), 0.0), depth, ground.slope)


def _cavity_along_x(ground: Ground, ends: Ends) -> Cavity:
    """Upright: from under the fed conductor up. Loop: from the boom's lower half down past the feed."""
    seat, driven, r, resin = ground.seat, ground.driven, ground.radius_mm, ground.shop.mould.wall_mm
    at = driven.at_mm
    lean = ground.slope * max(at - ends.cavity_mm[0], ends.cavity_mm[1] - at)
    half = _inner_half_mm(ground, "x", max(at - ends.cavity_mm[0], ends.cavity_mm[1] - at))
    if driven.form == "loop":
        near = min(seat.axis_mm, ground.lowest_seat_mm - UNDER_RODS_MM - ground.web_mm)
        across = (-loop_drop_mm(driven) - r - resin - lean, near)
    else:
        assert driven.spacing_mm is not None
        top = driven.spacing_mm if ground.room.encloses_second else 0.0
        across = (-r - _resin_below_mm(ground) - lean, top + r + resin + lean)
    return Cavity("x", Taper(across, at), Taper((-half, half), at), ends.cavity_mm, ground.slope)


def _resin_below_mm(ground: Ground) -> float:
    """Resin under the fed conductor of an upright element [mm]: less where the floor would sink too low."""
    wished = ground.shop.mould.wall_mm
    least = min(LEAST_RESIN_MM, wished)
    return min(wished, max(least, -ground.seat.axis_mm - ground.radius_mm))


def lay_out_mould(ground: Ground, cavity: Cavity, ends: Ends) -> MouldPlan:
    """Channels, flanges, openings, the way off and the resin's volume round a given cavity."""
    pull, seat, shop = cavity.pull, ground.seat, ground.shop
    wall, clearance = MOULD_WALL_MM, shop.mould.channel_clearance_mm
    _, (_, inner), (z0, z1) = cavity.box_mm
    z = (z0 - wall, z1 + wall)
    is_loop = ground.driven.form == "loop"
    if is_loop:  # the ceiling is as thick as the rods above it allow
        z = (z[0], min(z[1], ground.lowest_seat_mm - UNDER_RODS_MM))
    coax = _coax(ground, ends.block_mm, z)
    wires = _conductor_channels(ground.driven)
    face_u = ends.block_mm if pull == "z" else z
    pins = PinRoom(shop.printer.slide_clearance_mm, ground.web_mm, _pin_depth_mm(ground, ends, z))
    channels = _channels_seen_flat(ground, wires, coax if pull == "x" else None)
    face = lay_out_parting(face_u, inner, inner + wall, channels, pins)
    funnel, vent = _openings(ground, cavity, ends, z)
    boom = BoomBar(ground.boom.section, seat.half_width_mm, seat.axis_mm, (seat.start_mm, seat.end_mm), seat.grooves)
    opened: Literal["", "up", "down"] = "" if pull == "z" else "up" if is_loop else "down"
    block = (ends.block_mm, (-face.outer_mm, face.outer_mm), z)
    return MouldPlan(
        pull=pull,
        at_mm=ground.driven.at_mm,
        block=block,
        parting_mm=(seat.axis_mm, 0.0) if pull == "z" else (ground.driven.at_mm, ground.driven.at_mm),
        cavity=cavity,
        ends=ends,
        clearance_mm=clearance,
        boom=BoomChannel(boom.section, boom.half_mm, boom.axis_mm, _boom_reach(ground, ends), opened),
        conductors=tuple(part for wire in wires for part in within(wire, block, CHANNEL_MARGIN_MM)),
        conductor_channel_mm=ground.radius_mm + clearance,
        coax=coax,
        funnel=funnel,
        vent=vent,
        face=face,
        play_mm=shop.printer.slide_clearance_mm,
        legs=_legs(ground, ends, z),
        resin_mm3=_resin_mm3(ground, cavity, boom, coax),
    )


def _coax(ground: Ground, x_mm: Span, z_mm: Span) -> Wire | None:
    """The coax as far as it matters: from just short of the fed conductor out of the mould by a stub."""
    rc, at, r = ground.coax_mm, ground.driven.at_mm, ground.radius_mm
    if not rc:
        return None
    short = r + COAX_SHORT_OF_CONDUCTOR_MM
    if ground.driven.form == "loop":
        start = -loop_drop_mm(ground.driven) - short
        return Wire((at, 0.0, start), (at, 0.0, z_mm[0] - COAX_STUB_MM), rc)
    y = ground.coax_y_mm
    if pull_of(ground.driven) == "x":
        return Wire((at, y, -short), (at, y, z_mm[0] - COAX_STUB_MM), rc)
    fronts = [n.surface_mm for n in neighbours(ground.design, behind=True)]
    end = max([x_mm[0] - COAX_STUB_MM, *(front + COAX_SHORT_OF_CONDUCTOR_MM for front in fronts)])
    axis = ground.seat.axis_mm
    return Wire((at - short, y, axis), (end, y, axis), rc)


def _conductor_channels(driven: Driven) -> tuple[tuple[Run, ...], ...]:
    """Centrelines of the channels: the conductors', a straight one's tips lengthened by a little play."""
    if driven.form != "straight":
        return trace(driven)
    lengthened = []
    for (run,) in trace(driven):
        side = math.copysign(1.0, run.end[1])
        lengthened.append((straight(run.start, (run.end[0], run.end[1] + side * TIP_PLAY_MM, 0.0)),))
    return tuple(lengthened)


def _channels_seen_flat(ground: Ground, wires: tuple[tuple[Run, ...], ...], coax: Wire | None) -> BaseGeometry:
    """Channels of the parting face as areas in (u, y)."""
    axis = 2 if pull_of(ground.driven) == "x" else 0
    clearance = ground.shop.mould.channel_clearance_mm
    areas = []
    for wire in wires:
        for run in wire:
            shares = np.linspace(0.0, 1.0, 2 if run.middle is None else 33)
            line = shapely.LineString(places_along(run, shares)[:, [axis, 1]])
            areas.append(line.buffer(ground.radius_mm + clearance))
    if coax is not None:
        ends = [(end[axis], end[1]) for end in (coax.start, coax.end)]
        areas.append(shapely.LineString(ends).buffer(coax.radius_mm + clearance))
    return shapely.union_all(areas)


def _pin_depth_mm(ground: Ground, ends: Ends, z_mm: Span) -> float:
    """How deep a socket may go [mm]: not through its half, and along x no farther than the pins clear the wires."""
    if pull_of(ground.driven) == "z":
        return z_mm[1] - ground.web_mm
    at, tube = ground.driven.at_mm, max(ground.radius_mm, ground.coax_mm)
    return min(ends.block_mm[1] - at - ground.web_mm, at - ends.cavity_mm[0] - tube + SOCKET_SPARE_MM)


def _openings(ground: Ground, cavity: Cavity, ends: Ends, z_mm: Span) -> tuple[Opening, Opening]:
    """Funnel at +y and vent at -y of the side that is highest while pouring: the roof, or for a loop the lower side."""
    at, slope = ground.driven.at_mm, cavity.slope
    if cavity.pull == "z":
        level, direction, length = cavity.depth_mm[1], (0.0, 0.0, 1.0), z_mm[1] - cavity.depth_mm[1]
        across, along = cavity.across.at(level, slope), cavity.along.at(level, slope)[1]
        x, narrow = sum(across) / 2.0, (across[1] - across[0]) / 2.0
        outside = min(ends.block_mm[1] - x, x - ends.block_mm[0])
    else:
        down = ground.driven.form == "loop"
        level = cavity.across.span_mm[0 if down else 1]
        direction, length = (0.0, 0.0, -1.0 if down else 1.0), MOULD_WALL_MM
        x, along = at, cavity.along.span_mm[1]
        narrow = min(ends.cavity_mm[1] - at, at - ends.cavity_mm[0])
        outside = min(ends.block_mm[1] - at, at - ends.block_mm[0])
    neck = max(LEAST_NECK_MM, min(NECK_MM, narrow - TIP_PLAY_MM))
    y = along - TIP_PLAY_MM - neck
    mouth = min(neck + (length - NECK_LENGTH_MM) * MOUTH_SLOPE, outside - MOUTH_WALL_MM)
    # Drawn along z the neck narrows upward, so that the upper half comes off what has set in it.
    least = neck - slope * NECK_LENGTH_MM if cavity.pull == "z" else neck
    funnel = Opening((x, y, level), direction, ((0.0, neck), (NECK_LENGTH_MM, least), (length, max(mouth, least))))
    top = VENT_MM - slope * length if cavity.pull == "z" and slope * length < VENT_MM / 2.0 else VENT_MM
    vent = Opening((x, -(along - TIP_PLAY_MM - VENT_MM), level), direction, ((0.0, VENT_MM), (length, top)))
    return funnel, vent


def _boom_reach(ground: Ground, ends: Ends) -> Span:
    """How far the boom's channel runs [mm]: right through, or just past an end of the boom that lies in a wall."""
    (x0, x1), clearance = ends.block_mm, ground.shop.mould.channel_clearance_mm
    start, end = ground.seat.start_mm - clearance, ground.seat.end_mm + clearance
    return (x0 - 1.0 if start < x0 + SKIN_MM else start, x1 + 1.0 if end > x1 - SKIN_MM else end)


def _legs(ground: Ground, ends: Ends, z_mm: Span) -> dict[Half, tuple[Point, ...]]:
    """The moves that take each half off: along its pull until clear; drawn along x then off the boom."""
    if pull_of(ground.driven) == "z":
        off = z_mm[1] - z_mm[0]
        return {"upper": ((0.0, 0.0, off),), "lower": ((0.0, 0.0, -off),)}
    away = (z_mm[1] - z_mm[0]) + 2.0 * ground.seat.half_width_mm
    up = (0.0, 0.0, -away if ground.driven.form == "loop" else away)
    return {"upper": ((ends.travel_mm[1], 0.0, 0.0), up), "lower": ((-ends.travel_mm[0], 0.0, 0.0), up)}


def _resin_mm3(ground: Ground, cavity: Cavity, boom: BoomBar, coax: Wire | None) -> float:
    bare = ground.driven.diameter_mm / 2.0
    inserts = boom_mm3(cavity, boom) + sum(wire_mm3(cavity, runs, bare) for runs in trace(ground.driven))
    if coax is not None:
        inserts += wire_mm3(cavity, (straight(coax.start, coax.end),), coax.radius_mm)
    return cavity.volume_mm3() - inserts
