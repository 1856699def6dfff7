"""Rules between the keys of a design: what each value allows of the others, and the faults of those that break one.

A value that could not be read stands as NaN or an empty text in the draft that is judged here. Every rule is written
so that a comparison with NaN lets it pass: nothing is complained of twice.
"""

from __future__ import annotations

from boomwright.design.driven_rules import driven_faults
from boomwright.design.model import Boom, Design, Driven, Rod, Seat
from boomwright.errors import DesignFault, Fault

THROUGH_GAP_MM = 2.0
"""Least room that a straight driven element's gap leaves beside the boom with through seats, both sides together."""


def check_design(design: Design) -> None:
    """Raises DesignFault with every rule that a design breaks; for designs that no file was read for."""
    faults = design_faults(design)
    if faults:
        raise DesignFault(faults)


def require_boom(design: Design) -> tuple[Boom, Seat]:
    """The boom and the seat that a build needs. Raises DesignFault when the design has no boom."""
    if design.boom is None:
        fix = "add [boom] with section, width_mm, material, tail_mm and nose_mm"
        raise DesignFault([Fault("boom", "missing: there is nothing to build the rods on", fix)])
    return design.boom, design.seat or Seat()


def design_faults(design: Design) -> list[Fault]:
    """Every rule that a design breaks, rods in the order they stand in."""
    return [
        *_band_faults(design),
        *_boom_faults(design),
        *_coat_faults(design),
        *_role_faults(design),
        *_touch_faults(design),
        *driven_faults(design),
        *_seat_faults(design),
    ]


def _band_faults(design: Design) -> list[Fault]:
    band = design.band
    if band.high_mhz <= band.low_mhz:
        found = f"{band.high_mhz:g} is not above low_mhz {band.low_mhz:g}"
        return [Fault("band.high_mhz", found, "give the band's upper edge, above the lower one")]
    if band.centre_mhz < band.low_mhz or band.centre_mhz > band.high_mhz:
        found = f"{band.centre_mhz:g} is outside the band {band.low_mhz:g} to {band.high_mhz:g}"
        return [Fault("band.centre_mhz", found, "give a frequency inside the band, or leave it out for the middle")]
    return []


def _boom_faults(design: Design) -> list[Fault]:
    boom, faults = design.boom, []
    if boom is None:
        return []
    if boom.wall_mm >= boom.width_mm / 2.0:
        found = f"{boom.wall_mm:g} leaves no bore in a boom of {boom.width_mm:g}"
        faults.append(Fault("boom.wall_mm", found, "give less than half the width, or 0 for a solid boom"))
    ends = [(rod.at_mm, rod.outer_diameter_mm / 2.0, f"rod[{rod.file_index}]") for rod in design.rods]
    half = design.driven.outer_diameter_mm / 2.0
    ends += [(at, half, "the driven element") for at in fed_span_mm(design.driven)]
    rear, front = min(at for at, _, _ in ends), max(at for at, _, _ in ends)
    for key, over_mm, name in [
        *(("tail_mm", half - (at - rear) - boom.tail_mm, name) for at, half, name in ends),
        *(("nose_mm", half - (front - at) - boom.nose_mm, name) for at, half, name in ends),
    ]:
        if over_mm > 0.0:
            found = f"{name} reaches {over_mm:g} mm past the boom's end"
            faults.append(Fault(f"boom.{key}", found, f"give at least {over_mm + getattr(boom, key):g} mm"))
    return faults


def _coat_faults(design: Design) -> list[Fault]:
    coated: list[tuple[str, Rod | Driven]] = [(f"rod[{rod.file_index}]", rod) for rod in design.rods]
    coated.append(("driven", design.driven))
    return [
        Fault(f"{path}.coat_material", "missing beside coat_mm", "name the coat's material, or set coat_mm = 0")
        for path, conductor in coated
        if conductor.coat_mm > 0.0 and conductor.coat_material is None
    ]


def _role_faults(design: Design) -> list[Fault]:
    faults, driven = [], design.driven
    reflectors = [rod for rod in design.rods if rod.role == "reflector"]
    for rod in reflectors[1:]:
        path = f"rod[{rod.file_index}].role"
        found = f"a second reflector, beside rod[{reflectors[0].file_index}]"
        faults.append(Fault(path, found, 'make it a "director", or leave it out'))
    for rod in reflectors[:1]:
        behind = [(d.at_mm, f"rod[{d.file_index}]") for d in design.rods if d.role == "director"]
        behind.append((driven.at_mm, "the driven element"))
        at_mm, name = min((other for other in behind if other[0] <= rod.at_mm), default=(0.0, ""))
        if name:
            found = f"the reflector at {rod.at_mm:g} is not behind {name} at {at_mm:g}"
            fix = "set it behind everything else: smaller than every other at_mm"
            faults.append(Fault(f"rod[{rod.file_index}].at_mm", found, fix))
    front_mm = fed_span_mm(driven)[-1]
    for rod in design.rods:
        if rod.role == "director" and rod.at_mm <= front_mm:
            found = f"the director at {rod.at_mm:g} is not ahead of the driven element at {front_mm:g}"
            faults.append(Fault(f"rod[{rod.file_index}].at_mm", found, f"give a position ahead of {front_mm:g}"))
    return faults


def _touch_faults(design: Design) -> list[Fault]:
    """Conductors that touch; a position that `_role_faults` already refuses is not judged again."""
    refused = {fault.path for fault in _role_faults(design)}
    faults, driven = [], design.driven
    fed = [(at, driven.outer_diameter_mm, "the driven element") for at in fed_span_mm(driven)]
    for rod in design.rods:
        path = f"rod[{rod.file_index}].at_mm"
        if path in refused:
            continue
        others = [
            (other.at_mm, other.outer_diameter_mm, f"rod[{other.file_index}]")
            for other in design.rods
            if other.file_index < rod.file_index and f"rod[{other.file_index}].at_mm" not in refused
        ]
        for at_mm, diameter_mm, name in [*others, *fed]:
            least_mm = (rod.outer_diameter_mm + diameter_mm) / 2.0
            if abs(rod.at_mm - at_mm) <= least_mm:
                found = f"{rod.at_mm:g} touches {name} at {at_mm:g}"
                faults.append(Fault(path, found, f"set their axes more than {least_mm:g} mm apart"))
                break
    return faults


def _seat_faults(design: Design) -> list[Fault]:
    seat, boom, driven, faults = design.seat, design.boom, design.driven, []
    if seat is None or seat.kind != "through":
        return []
    if seat.bond == "insulated" and seat.sleeve_mm <= 0.0:
        fix = 'give the wall of the sleeve round each rod, above 0, or set bond = "bonded"'
        faults.append(Fault("seat.sleeve_mm", f"{seat.sleeve_mm:g} is no sleeve to insulate with", fix))
    if driven.form == "folded":
        fix = 'set form = "straight" or "loop", or seat.kind = "groove"'
        faults.append(Fault("driven.form", "a folded driven element cannot stand on through seats", fix))
    if boom is not None and driven.form == "straight" and driven.gap_mm < boom.width_mm + THROUGH_GAP_MM:
        least_mm = boom.width_mm + THROUGH_GAP_MM
        found = f"{driven.gap_mm:g} leaves no room for the boom of {boom.width_mm:g} between the halves"
        faults.append(Fault("driven.gap_mm", found, f"give at least {least_mm:g} mm (boom.width_mm + 2)"))
    return faults


def fed_span_mm(driven: Driven) -> tuple[float, ...]:
    """Axis positions along the boom of the driven element's conductors on the datum plane, rearmost first [mm]."""
    if driven.form == "folded" and driven.plane == "flat" and driven.spacing_mm is not None:
        return driven.at_mm, driven.at_mm + driven.spacing_mm
    return (driven.at_mm,)
