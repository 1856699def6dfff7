"""The feed-point mould: which way its halves are drawn off, and every size of cavity, channels, flanges and funnel.

Halves: drawn along z, `mould-upper` goes up and `mould-lower` down; drawn along x, `mould-upper` is the front half and
`mould-lower` the rear one. Pins stand on the lower (rear) half.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Literal

import numpy as np
import shapely
from shapely.geometry.base import BaseGeometry

from boomwright.data.tables import cables
from boomwright.design.centreline import Point, Run, loop_drop_mm, trace
from boomwright.design.model import Boom, Design, Driven, Section
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
)
from boomwright.plan.clip import ClipPlan, plan_clip
from boomwright.plan.frame import Matrix
from boomwright.plan.mould_room import (
    LEAST_RESIN_MM,
    MOULD_WALL_MM,
    Ends,
    MouldRoom,
    cavity_ends,
    joint_mm,
    neighbours,
)
from boomwright.plan.parting import SOCKET_SPARE_MM, PartingFace, PinRoom, lay_out_parting
from boomwright.plan.seat import SeatPlan
from boomwright.plan.size import Size
from boomwright.shop.profile import Shop
from boomwright.units import g_from_mm3, ml_from_mm3

Half = Literal["upper", "lower"]
HALVES: tuple[Half, Half] = ("upper", "lower")

COAX_SHORT_OF_CONDUCTOR_MM = 0.5
COAX_STUB_MM = 10.0
COAX_RESIN_MM = 1.5
SKIN_MM = 1.2
"""A wall thinner than this behind a blind channel is left out: the channel goes through."""

NECK_MM, LEAST_NECK_MM = 2.0, 0.8
"""Radius of the funnel where it meets the cavity, and the least for it in a narrow cavity."""

NECK_LENGTH_MM = 1.0
MOUTH_SLOPE = math.tan(math.radians(40.0))
VENT_MM = 0.75
MOUTH_WALL_MM = 1.2
TIP_PLAY_MM = 0.5
CHAMFER_MM = 0.4


@dataclass(frozen=True)
class Wire:
    """A straight round thing: from, to, radius [mm]."""

    start: Point
    end: Point
    radius_mm: float


@dataclass(frozen=True)
class Opening:
    """A round way from the cavity to the outside: from `at` along `direction` (distance, radius) by stages [mm]."""

    at: Point
    direction: Point
    stages: tuple[tuple[float, float], ...]

    @property
    def mouth(self) -> Point:
        """The middle of its outer end [mm]."""
        x, y, z = (a + d * self.stages[-1][0] for a, d in zip(self.at, self.direction, strict=True))
        return x, y, z


@dataclass(frozen=True)
class BoomChannel:
    """The boom's way through the walls: its outline widened by the clearance, `open` up or down beyond its axis."""

    section: Section
    half_mm: float
    axis_mm: float
    x_mm: Span
    open: Literal["", "up", "down"] = ""


@dataclass(frozen=True)
class MouldPlan:
    """The mould in the design's frame [mm].

    block        spans in x, y and z of the closed mould
    parting_mm   where the halves part along the pull: in front and rear walls, and in side walls and flanges
    legs         by half: the way it goes off, as moves one after the other
    resin_mm3    cavity less boom, conductors and coax; funnel and vent not counted
    notes        what the builder must know about this mould, in words
    """

    pull: Pull
    at_mm: float
    block: tuple[Span, Span, Span]
    parting_mm: tuple[float, float]
    cavity: Cavity
    ends: Ends
    clearance_mm: float
    boom: BoomChannel
    conductors: tuple[tuple[Run, ...], ...]
    conductor_channel_mm: float
    coax: Wire | None
    funnel: Opening
    vent: Opening
    face: PartingFace
    play_mm: float
    legs: dict[Half, tuple[Point, ...]]
    resin_mm3: float
    notes: tuple[str, ...]
    clip: ClipPlan | None = None

    def frame(self, half: Half) -> Matrix:
        """Design's frame to print orientation: parting face up, on the bed, in the middle of x and y."""
        (x0, x1), _, (z0, z1) = self.block
        x, z = (x0 + x1) / 2.0, (z0 + z1) / 2.0
        last = (0.0, 0.0, 0.0, 1.0)
        if self.pull == "z" and half == "lower":
            return ((1.0, 0.0, 0.0, -x), (0.0, 1.0, 0.0, 0.0), (0.0, 0.0, 1.0, -z0), last)
        if self.pull == "z":
            return ((1.0, 0.0, 0.0, -x), (0.0, -1.0, 0.0, 0.0), (0.0, 0.0, -1.0, z1), last)
        if half == "upper":
            return ((0.0, 0.0, 1.0, -z), (0.0, 1.0, 0.0, 0.0), (-1.0, 0.0, 0.0, x1), last)
        return ((0.0, 0.0, -1.0, z), (0.0, 1.0, 0.0, 0.0), (1.0, 0.0, 0.0, -x0), last)

    def half_span_mm(self, half: Half) -> Span:
        """Extent of a half along the pull [mm]."""
        low, high = self.block[0 if self.pull == "x" else 2]
        return (min(self.parting_mm), high) if half == "upper" else (low, max(self.parting_mm))


@dataclass(frozen=True)
class _Ground:
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


def plan_mould(design: Design, shop: Shop, seat: SeatPlan) -> tuple[MouldPlan, list[Size], list[Fault]]:
    """The mould of a design with a boom, the sizes with their origins, and why this shop cannot make it."""
    assert design.boom is not None
    pull = pull_of(design.driven)
    room = MouldRoom(pull, design, shop, seat)
    ground = _Ground(design, shop, seat, design.boom, room)
    ends, faults = cavity_ends(room, _inner_half_mm(ground, pull, room.least_depth_mm))
    cavity = _cavity_along_z(ground, ends) if pull == "z" else _cavity_along_x(ground, ends)
    mould = _mould(ground, cavity, ends)
    faults += _pin_faults(mould)
    if design.driven.form == "loop":
        clip, clip_faults = plan_clip(design, shop, seat, mould.block[2][1])
        faults += clip_faults
        mould = _with_clip(mould, clip)
    faults += _bed_faults(mould, shop)
    return mould, _sizes(ground, mould), faults


def _inner_half_mm(ground: _Ground, pull: Pull, depth_mm: float) -> float:
    """Half width of the cavity in y where it is widest [mm]: resin round joints, boom and coax in spite of the draft."""
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
    return max(widths)


def _cavity_along_z(ground: _Ground, ends: Ends) -> Cavity:
    seat, resin = ground.seat, ground.shop.mould.wall_mm
    half = _inner_half_mm(ground, "z", 0.0)
    depth = (seat.bottom_mm - resin, max(seat.top_mm, ground.radius_mm) + resin)
    return Cavity("z", Taper(ends.cavity_mm, seat.axis_mm), Taper((-half, half), 0.0), depth, ground.slope)


def _cavity_along_x(ground: _Ground, ends: Ends) -> Cavity:
    """Upright: from under the fed conductor up. Loop: from the boom's lower half down past the feed."""
    seat, driven, r, resin = ground.seat, ground.driven, ground.radius_mm, ground.shop.mould.wall_mm
    at = driven.at_mm
    lean = ground.slope * max(at - ends.cavity_mm[0], ends.cavity_mm[1] - at)
    half = _inner_half_mm(ground, "x", max(at - ends.cavity_mm[0], ends.cavity_mm[1] - at))
    if driven.form == "loop":
        near = min(seat.axis_mm, ground.lowest_seat_mm - ground.room.under_rods_mm - ground.web_mm)
        across = (-loop_drop_mm(driven) - r - resin - lean, near)
    else:
        assert driven.spacing_mm is not None
        top = driven.spacing_mm if ground.room.encloses_second else 0.0
        across = (-r - _resin_below_mm(ground) - lean, top + r + resin + lean)
    return Cavity("x", Taper(across, at), Taper((-half, half), at), ends.cavity_mm, ground.slope)


def _resin_below_mm(ground: _Ground) -> float:
    """Resin under the fed conductor of an upright element [mm]: less where the floor would sink below the boom's axis."""
    wished = ground.shop.mould.wall_mm
    least = min(LEAST_RESIN_MM, wished)
    return min(wished, max(least, -ground.seat.axis_mm - ground.radius_mm))


def _mould(ground: _Ground, cavity: Cavity, ends: Ends) -> MouldPlan:
    pull, seat, shop = cavity.pull, ground.seat, ground.shop
    wall, clearance = MOULD_WALL_MM, shop.mould.channel_clearance_mm
    (x0, x1), (_, inner), (z0, z1) = cavity.box_mm
    z = (z0 - wall, z1 + wall)
    is_loop = ground.driven.form == "loop"
    if is_loop:  # the ceiling is as thick as the rods above it allow
        z = (z[0], min(z[1], ground.lowest_seat_mm - ground.room.under_rods_mm))
    coax = _coax(ground, ends.block_mm, z)
    wires = _conductor_channels(ground.driven)
    face_u = ends.block_mm if pull == "z" else z
    pins = PinRoom(shop.printer.slide_clearance_mm, ground.web_mm, _pin_depth_mm(ground, ends, z))
    channels = _channels_seen_flat(ground, wires, coax if pull == "x" else None)
    face = lay_out_parting(face_u, inner, inner + wall, channels, pins)
    funnel, vent = _openings(ground, cavity, ends, z)
    boom = BoomBar(ground.boom.section, seat.half_width_mm, seat.axis_mm, (seat.start_mm, seat.end_mm), seat.grooves)
    opened: Literal["", "up", "down"] = "" if pull == "z" else "up" if is_loop else "down"
    return MouldPlan(
        pull=pull,
        at_mm=ground.driven.at_mm,
        block=(ends.block_mm, (-face.outer_mm, face.outer_mm), z),
        parting_mm=(seat.axis_mm, 0.0) if pull == "z" else (ground.driven.at_mm, ground.driven.at_mm),
        cavity=cavity,
        ends=ends,
        clearance_mm=clearance,
        boom=BoomChannel(boom.section, boom.half_mm, boom.axis_mm, _boom_reach(ground, ends), opened),
        conductors=wires,
        conductor_channel_mm=ground.radius_mm + clearance,
        coax=coax,
        funnel=funnel,
        vent=vent,
        face=face,
        play_mm=shop.printer.slide_clearance_mm,
        legs=_legs(ground, ends, z),
        resin_mm3=_resin_mm3(ground, cavity, boom, coax),
        notes=_notes(ground, pull),
    )


def _coax(ground: _Ground, x_mm: Span, z_mm: Span) -> Wire | None:
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


def _channels_seen_flat(ground: _Ground, wires: tuple[tuple[Run, ...], ...], coax: Wire | None) -> BaseGeometry:
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


def _pin_depth_mm(ground: _Ground, ends: Ends, z_mm: Span) -> float:
    """How deep a socket may go [mm]: not through its half, and along x no farther than the pins clear the wires."""
    if pull_of(ground.driven) == "z":
        return z_mm[1] - ground.web_mm
    at, tube = ground.driven.at_mm, max(ground.radius_mm, ground.coax_mm)
    return min(ends.block_mm[1] - at - ground.web_mm, at - ends.cavity_mm[0] - tube + SOCKET_SPARE_MM)


def _openings(ground: _Ground, cavity: Cavity, ends: Ends, z_mm: Span) -> tuple[Opening, Opening]:
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


def _boom_reach(ground: _Ground, ends: Ends) -> Span:
    """How far the boom's channel runs [mm]: right through, or just past an end of the boom that lies in a wall."""
    (x0, x1), clearance = ends.block_mm, ground.shop.mould.channel_clearance_mm
    start, end = ground.seat.start_mm - clearance, ground.seat.end_mm + clearance
    return (x0 - 1.0 if start < x0 + SKIN_MM else start, x1 + 1.0 if end > x1 - SKIN_MM else end)


def _legs(ground: _Ground, ends: Ends, z_mm: Span) -> dict[Half, tuple[Point, ...]]:
    """The moves that take each half off: along its pull until clear; drawn along x then off the boom."""
    if pull_of(ground.driven) == "z":
        off = z_mm[1] - z_mm[0]
        return {"upper": ((0.0, 0.0, off),), "lower": ((0.0, 0.0, -off),)}
    away = (z_mm[1] - z_mm[0]) + 2.0 * ground.seat.half_width_mm
    up = (0.0, 0.0, -away if ground.driven.form == "loop" else away)
    return {"upper": ((ends.travel_mm[1], 0.0, 0.0), up), "lower": ((-ends.travel_mm[0], 0.0, 0.0), up)}


def _resin_mm3(ground: _Ground, cavity: Cavity, boom: BoomBar, coax: Wire | None) -> float:
    bare = ground.driven.diameter_mm / 2.0
    inserts = boom_mm3(cavity, boom) + sum(wire_mm3(cavity, runs, bare) for runs in trace(ground.driven))
    if coax is not None:
        inserts += wire_mm3(cavity, (straight(coax.start, coax.end),), coax.radius_mm)
    return cavity.volume_mm3() - inserts


def _notes(ground: _Ground, pull: Pull) -> tuple[str, ...]:
    notes = []
    if ground.boom.wall_mm > 0.0:
        notes.append("plug the boom's bore for the length of the mould before grooving, or the resin runs into it")
    if pull == "x":
        notes.append("mould-upper is the front half, mould-lower the rear half; draw them off along the boom")
    else:
        notes.append("fill to the funnel's neck; break the sprue off there before the upper half is lifted")
    if ground.driven.form == "loop":
        notes.append("pot with the antenna upside down: funnel and vent are then the highest points")
        notes.append("mould-clip on the boom's top holds the loop upright while the resin sets")
    return tuple(notes)


def _with_clip(mould: MouldPlan, clip: ClipPlan) -> MouldPlan:
    from dataclasses import replace

    return replace(mould, clip=clip)


def _pin_faults(mould: MouldPlan) -> list[Fault]:
    if mould.face.pins:
        return []
    found = "the mould's flanges leave no room for alignment pins of 1.2 mm beside the conductor"
    return [Fault("driven.diameter_mm", found, "use a thinner driven element, or set its neighbours farther away")]


def _bed_faults(mould: MouldPlan, shop: Shop) -> list[Fault]:
    bed, faults = shop.printer.bed_mm, []
    sizes = [high - low for low, high in mould.block]
    for half in HALVES:
        low, high = mould.half_span_mm(half)
        across = sizes[0] if mould.pull == "z" else sizes[2]
        flat = sorted((across, sizes[1]))
        over = max(flat[1] - max(bed[:2]), flat[0] - min(bed[:2]), high - low - bed[2])
        if over > 1e-9:
            found = f"mould-{half} is {flat[1]:.4g} x {flat[0]:.4g} x {high - low:.4g}, {over:.4g} mm more than the bed"
            faults.append(Fault("printer.bed_mm", found, "use a larger printer, or leave the mould out"))
    clip = mould.clip
    if clip is not None:
        over = clip.top_mm - clip.foot_mm - bed[2]
        if over > 1e-9:
            found = f"mould-clip is {clip.top_mm - clip.foot_mm:.4g} high, {over:.4g} mm more than the bed allows"
            faults.append(Fault("printer.bed_mm", found, "use a larger printer, or leave the mould out"))
    return faults


def _sizes(ground: _Ground, mould: MouldPlan) -> list[Size]:
    ends, shop = mould.ends, ground.shop
    sizes = []
    for side, place in (("rear", 0), ("front", 1)):
        sizes.append(Size(f"mould.resin_{side}_mm", ends.resin_mm[place], "mm", ends.why[place]))
        sizes.append(Size(f"mould.wall_{side}_mm", ends.wall_mm[place], "mm", ends.why[place]))
        if (gap := ends.clearance_mm[place]) is not None:
            sizes.append(Size(f"mould.clearance_{side}_mm", gap, "mm", ends.why[place]))
        if mould.pull == "x":
            words = "depth of its cavity + 0.5, then off the boom"
            sizes.append(Size(f"mould.travel_{side}_mm", ends.travel_mm[place], "mm", words))
    for axis, (low, high) in zip("xyz", mould.block, strict=True):
        sizes.append(Size(f"mould.size_{axis}_mm", high - low, "mm", "cavity + walls" + (" + flanges" * (axis == "y"))))
    words = f"conductor {2.0 * ground.radius_mm:g} + 2 x channel clearance {mould.clearance_mm:g}"
    sizes.append(Size("mould.conductor_channel_mm", 2.0 * mould.conductor_channel_mm, "mm", words))
    if mould.coax is not None:
        words = f"{ground.design.feed.coax} {2.0 * mould.coax.radius_mm:g} + 2 x channel clearance"
        sizes.append(Size("mould.coax_channel_mm", 2.0 * (mould.coax.radius_mm + mould.clearance_mm), "mm", words))
    if mould.face.pins:
        words = "as thick as the parting face allows; sockets wider by 2 x slide clearance"
        sizes.append(Size("mould.pin_diameter_mm", mould.face.pins[0].diameter_mm, "mm", words))
    volume, resin = mould.resin_mm3, ground.design.resin
    words = "cavity less boom, conductors and coax; groove and pocket filled; funnel and vent not counted"
    sizes.append(Size("mould.resin_volume_ml", ml_from_mm3(volume), "ml", words))
    words = f"volume x {resin.density_g_cm3:g} g/cm3"
    sizes.append(Size("mould.resin_mass_g", g_from_mm3(volume, resin.density_g_cm3), "g", words))
    sizes.append(Size("mould.draft_deg", shop.mould.draft_deg, "deg", "; ".join(mould.notes)))
    return sizes
