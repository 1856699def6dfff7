"""A design's geometry at another frequency and in other stock, before it is trimmed."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace

from boomwright.design.model import Band, Boom, Design, Driven, Rod
from boomwright.design.rules import THROUGH_GAP_MM
from boomwright.rf.wires import rod_of
from boomwright.search.reactance import length_of_reactance_m, own_impedance_ohm
from boomwright.search.stock import (
    BOOM_SIZES_MM,
    LEAST_BEND_DIAMETERS,
    LEAST_GAP_MM,
    ROD_SIZES_MM,
    SADDLE_MM,
    WIRE_SIZES_MM,
    nearest_size_mm,
    step_of_mm,
)
from boomwright.shop.profile import Shop
from boomwright.units import hz_from_mhz, m_from_mm, mm_from_m

LEAST_INSIDE_BEND = 1.5
"""Least inside bend radius in diameters of the wire: tighter ones kink (common practice)."""

WIDEST_BOOM_MM, LONGEST_END_MM = 40.0, 60.0
"""A boom does not grow with the wavelength without end: wider and longer ends only where grooves ask for it."""

TITLE_MOST = 200
NAME_MOST = 64


@dataclass(frozen=True)
class Target:
    """Where a design is carried to: frequency [MHz], rods and boom [mm] (None = the nearest common size)."""

    to_mhz: float
    rod_mm: float | None = None
    boom_width_mm: float | None = None


@dataclass(frozen=True)
class RodChange:
    """What became of a rod: length scaled alone, own reactance then and now, and length in the new stock."""

    tag: str
    scaled_mm: float
    diameter_mm: float
    reactance_ohm: float
    length_mm: float


def carried(design: Design, target: Target, shop: Shop) -> tuple[Design, tuple[RodChange, ...]]:
    """The design scaled, in stock on sale, every rod as reactive as it was; sizes not yet rounded.

    Raises DesignFault where rods of the new stock cannot be as reactive.
    """
    scale = design.band.centre_mhz / target.to_mhz
    changes = tuple(_rod_change(rod, design, target, shop) for rod in design.rods)
    rods = tuple(
        replace(rod, at_mm=rod.at_mm * scale, length_mm=change.length_mm, diameter_mm=change.diameter_mm)
        for rod, change in zip(design.rods, changes, strict=True)
    )
    driven = _driven(design, scale, target, shop)
    band = design.band
    low, high = (round(value / scale, 3) for value in (band.low_mhz, band.high_mhz))
    new_band = Band(min(low, target.to_mhz), max(high, target.to_mhz), target.to_mhz)
    seat = design.seat
    if seat is not None and seat.kind == "groove":
        seat = replace(seat, glue_gap_mm=min(seat.glue_gap_mm, max(0.05, round(seat.glue_gap_mm * scale, 2))))
    moved = replace(
        design,
        name=f"{design.name[: NAME_MOST - 7]}-{target.to_mhz:.0f}"[:NAME_MOST],
        title=None if design.title is None else f"{design.title}, carried to {target.to_mhz:g} MHz"[:TITLE_MOST],
        band=new_band,
        rods=rods,
        driven=driven,
        seat=seat,
    )
    if design.boom is None:
        return moved, changes
    boom = _boom(moved, design.boom, (scale, target.boom_width_mm), shop)
    if seat is not None and seat.kind == "through" and driven.form == "straight":
        gap = max(driven.gap_mm, boom.width_mm + THROUGH_GAP_MM)
        moved = replace(moved, driven=replace(driven, gap_mm=gap))
    return replace(moved, boom=boom), changes


def _rod_change(rod: Rod, design: Design, target: Target, shop: Shop) -> RodChange:
    old_hz, new_hz = hz_from_mhz(design.band.centre_mhz), hz_from_mhz(target.to_mhz)
    scale = old_hz / new_hz
    reactance = own_impedance_ohm(rod_of(rod), old_hz).imag
    diameter = target.rod_mm
    if diameter is None:
        held = tuple(bar.diameter_mm for bar in shop.stock if bar.material == rod.material)
        diameter = nearest_size_mm(held or ROD_SIZES_MM, rod.diameter_mm * scale)
    new = replace(rod_of(rod), radius_m=m_from_mm(diameter) / 2.0)
    length_mm = mm_from_m(length_of_reactance_m(new, reactance, new_hz))
    return RodChange(rod.tag, rod.length_mm * scale, diameter, reactance, length_mm)


def _driven(design: Design, scale: float, target: Target, shop: Shop) -> Driven:
    """The driven element scaled, of wire on sale, in bends that can be made; its length is trimmed later."""
    driven = design.driven
    held = tuple(bar.diameter_mm for bar in shop.stock if bar.material == driven.material)
    wire = nearest_size_mm(held or WIRE_SIZES_MM, driven.diameter_mm * scale)
    as_rods = {rod.diameter_mm for rod in design.rods} == {driven.diameter_mm}
    if target.rod_mm is not None and driven.form == "straight" and as_rods:
        wire = target.rod_mm
    gap = max(math.ceil(2.0 * driven.gap_mm * scale - 0.5) / 2.0, LEAST_GAP_MM, wire)
    new = replace(driven, at_mm=driven.at_mm * scale, diameter_mm=wire, gap_mm=gap)
    if driven.length_mm is not None:
        new = replace(new, length_mm=driven.length_mm * scale)
    if driven.perimeter_mm is not None:
        new = replace(new, perimeter_mm=driven.perimeter_mm * scale)
    if driven.spacing_mm is not None:
        spacing = max(driven.spacing_mm * scale, LEAST_BEND_DIAMETERS * wire)
        new = replace(new, spacing_mm=round(2.0 * spacing) / 2.0 if spacing > 2.0 * wire else spacing)
    if driven.bend_radius_mm is not None:
        bend = max(driven.bend_radius_mm * scale, LEAST_INSIDE_BEND * wire)
        most = math.inf if new.spacing_mm is None else (new.spacing_mm - wire) / 2.0
        new = replace(new, bend_radius_mm=round(bend, 1) if bend < most else None)
    return new


def _boom(design: Design, boom: Boom, wanted: tuple[float, float | None], shop: Shop) -> Boom:
    """A boom on sale that holds the grooves, with ends long enough for the cradle's saddles."""
    scale, width = wanted
    seat = design.seat
    outer = [rod.outer_diameter_mm for rod in design.rods]
    if design.driven.form != "loop":
        outer.append(design.driven.outer_diameter_mm)
    thickest = max(outer, default=0.0)
    glue = seat.glue_gap_mm if seat is not None else 0.0
    if width is None:
        through = seat is not None and seat.kind == "through"
        sleeves = 2.0 * seat.sleeve_mm + seat.hole_clearance_mm if seat is not None and through else 0.0
        least = 2.0 * (thickest + (sleeves if through else glue))
        fitting = [size for size in BOOM_SIZES_MM if size >= least]
        wish = min(boom.width_mm * scale, max(WIDEST_BOOM_MM, least))
        width = nearest_size_mm(fitting, wish) if fitting else math.ceil(least)
    end = thickest / 2.0 + glue + shop.cradle.relief_mm + SADDLE_MM
    wall = 0.0 if boom.wall_mm == 0.0 else min(max(1.0, round(2.0 * boom.wall_mm * scale) / 2.0), width / 2.0 - 0.5)
    long = max(end, LONGEST_END_MM)
    tail, nose = (float(math.ceil(max(min(value * scale, long), end))) for value in (boom.tail_mm, boom.nose_mm))
    return replace(boom, width_mm=float(width), wall_mm=wall, tail_mm=tail, nose_mm=nose)


def on_steps(design: Design) -> Design:
    """The design with every length and position at a whole step of the workshop."""
    step = step_of_mm(design.band.centre_mhz)

    def whole(value: float) -> float:
        return round(round(value / step) * step, 3)

    rods = tuple(replace(rod, at_mm=whole(rod.at_mm), length_mm=whole(rod.length_mm)) for rod in design.rods)
    driven = replace(design.driven, at_mm=whole(design.driven.at_mm))
    if driven.length_mm is not None:
        driven = replace(driven, length_mm=whole(driven.length_mm))
    if driven.perimeter_mm is not None:
        driven = replace(driven, perimeter_mm=whole(driven.perimeter_mm))
    return replace(design, rods=rods, driven=driven)
