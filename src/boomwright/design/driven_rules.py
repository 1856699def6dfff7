"""Rules between the keys of the driven element: gap, bends, spacing, and a loop's way round the boom."""

from __future__ import annotations

import math

from boomwright.design.centreline import bend_radius_mm, loop_drop_mm, straight_half_mm
from boomwright.design.model import Boom, Design, Driven
from boomwright.errors import Fault


def driven_faults(design: Design) -> list[Fault]:
    """Every rule that the driven element breaks."""
    driven = design.driven
    if driven.form == "straight":
        return _gap_faults(driven)
    if driven.form == "folded":
        return _gap_faults(driven) or _folded_faults(driven)
    if driven.form == "loop":
        return _loop_faults(driven) or _clearance_faults(design)
    return []


def _gap_faults(driven: Driven) -> list[Fault]:
    assert driven.length_mm is not None
    if driven.gap_mm >= driven.length_mm:
        found = f"{driven.gap_mm:g} is not less than length_mm {driven.length_mm:g}"
        return [Fault("driven.gap_mm", found, "give the opening at the feed, a small part of the length")]
    return []


def _folded_faults(driven: Driven) -> list[Fault]:
    assert driven.spacing_mm is not None
    assert driven.length_mm is not None
    if driven.spacing_mm <= driven.outer_diameter_mm:
        found = f"{driven.spacing_mm:g} lets the two conductors of {driven.outer_diameter_mm:g} touch"
        return [Fault("driven.spacing_mm", found, f"give more than {driven.outer_diameter_mm:g} mm")]
    most_mm = (driven.spacing_mm - driven.diameter_mm) / 2.0
    if driven.bend_radius_mm is not None and driven.bend_radius_mm > most_mm + 1e-9:
        found = f"{driven.bend_radius_mm:g} does not fit between conductors {driven.spacing_mm:g} apart"
        return [Fault("driven.bend_radius_mm", found, f"give at most {most_mm:g} mm, or leave it out")]
    short_mm = driven.gap_mm / 2.0 - straight_half_mm(driven)
    if short_mm >= 0.0:
        found = f"{driven.length_mm:g} leaves no straight part between the gap and the bends"
        return [Fault("driven.length_mm", found, f"give more than {driven.length_mm + 2.0 * short_mm:g} mm")]
    return []


def _loop_faults(driven: Driven) -> list[Fault]:
    assert driven.perimeter_mm is not None
    if driven.shape == "circle":
        if driven.bend_radius_mm is not None:
            found = 'has no meaning with shape = "circle"'
            return [Fault("driven.bend_radius_mm", found, 'leave it out, or set shape = "square"')]
        half_mm, edge_mm = driven.perimeter_mm / 2.0, driven.perimeter_mm / 8.0
    else:
        half_mm = loop_drop_mm(driven)
        edge_mm = half_mm - bend_radius_mm(driven)
        if edge_mm <= 0.0:
            found = f"{driven.perimeter_mm:g} is too short for four bends of {bend_radius_mm(driven):g} on the axis"
            return [Fault("driven.perimeter_mm", found, "give a longer loop, or a smaller bend_radius_mm")]
    if loop_drop_mm(driven) <= driven.outer_diameter_mm:
        found = f"{driven.perimeter_mm:g} is too short a loop for a conductor of {driven.outer_diameter_mm:g}"
        return [Fault("driven.perimeter_mm", found, "give a longer loop, or a thinner conductor")]
    if driven.gap_mm / 2.0 >= edge_mm:
        found = f"{driven.gap_mm:g} does not fit in the loop's lowest side"
        return [Fault("driven.gap_mm", found, f"give less than {2.0 * edge_mm:g} mm")]
    return []


def _clearance_faults(design: Design) -> list[Fault]:
    """The boom must pass through the loop without meeting its conductor."""
    boom, driven = design.boom, design.driven
    if boom is None:
        return []
    free_mm = _free_room_mm(design, boom)
    if free_mm <= 0.0:
        assert driven.perimeter_mm is not None
        per_room = 2.0 * math.pi if driven.shape == "circle" else 8.0
        least_mm = driven.perimeter_mm - per_room * free_mm
        found = f"{driven.perimeter_mm:g} does not clear the boom of {boom.width_mm:g} that passes through the loop"
        return [Fault("driven.perimeter_mm", found, f"give more than {math.ceil(least_mm)} mm, or a thinner boom")]
    return []


def _free_room_mm(design: Design, boom: Boom) -> float:
    """Least distance between the boom's surface and the loop's conductor with its coat [mm]; negative = they meet."""
    driven, half_mm = design.driven, boom.width_mm / 2.0
    top_mm = boom_top_mm(design, boom)
    room_mm = -driven.outer_diameter_mm / 2.0
    if boom.section == "round":
        return room_mm - half_mm - _outside_mm(driven, 0.0, top_mm - half_mm)
    return room_mm - max(_outside_mm(driven, half_mm, z_mm) for z_mm in (top_mm, top_mm - boom.width_mm))


def _outside_mm(driven: Driven, y_mm: float, z_mm: float) -> float:
    """Distance of a point of the loop's plane outside the loop's centreline [mm]; negative inside."""
    radius_mm = bend_radius_mm(driven)
    flat_mm = loop_drop_mm(driven) - radius_mm
    qy_mm, qz_mm = abs(y_mm) - flat_mm, abs(z_mm) - flat_mm
    outside_mm = math.hypot(max(qy_mm, 0.0), max(qz_mm, 0.0))
    return outside_mm + min(max(qy_mm, qz_mm), 0.0) - radius_mm


def boom_top_mm(design: Design, boom: Boom) -> float:
    """Height of the boom's top line over the datum plane [mm]: the thickest conductor lies flush in its groove."""
    if design.seat is not None and design.seat.kind == "through":
        return boom.width_mm / 2.0
    diameters = [rod.outer_diameter_mm for rod in design.rods]
    if design.driven.form != "loop":
        diameters.append(design.driven.outer_diameter_mm)
    return max(diameters, default=0.0) / 2.0
