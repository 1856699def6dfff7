"""Distances between conductors: how near they are, and whether they touch, cross or lie inside one another."""

from __future__ import annotations

import math
from functools import lru_cache
from itertools import combinations

import numpy as np

from boomwright.errors import DesignFault, Fault
from boomwright.rf.arrays import Floats
from boomwright.rf.conductors import Conductor, Folded, Loop, Rod, Wires
from boomwright.rf.outline import facing_m, outline


def axis_distance_m(first: Conductor, second: Conductor) -> float:
    """Least distance between the axes of two conductors [m]."""
    if isinstance(first, Rod) and isinstance(second, Rod):
        return math.hypot(first.at_m - second.at_m, first.height_m - second.height_m)
    if isinstance(first, Rod):
        return _rod_distance_m(first, _axis(second)) if not isinstance(second, Rod) else math.nan
    if isinstance(second, Rod):
        return _rod_distance_m(second, _axis(first))
    one, two = _axis(first), _axis(second)
    return float(np.sqrt(((one[:, None, :] - two[None, :, :]) ** 2).sum(axis=-1)).min())


@lru_cache(maxsize=64)
def _axis(conductor: Folded | Loop) -> Floats:
    return outline(conductor).points()


def _rod_distance_m(rod: Rod, points: Floats) -> float:
    beyond = np.maximum(np.abs(points[:, 1]) - rod.length_m / 2.0, 0.0)
    across = (points[:, 0] - rod.at_m) ** 2 + (points[:, 2] - rod.height_m) ** 2
    return float(np.sqrt(across + beyond**2).min())


def thickest_m(conductor: Conductor) -> float:
    """Largest radius of a conductor, coat included [m]."""
    coat_m = conductor.coat.thickness_m if conductor.coat is not None else 0.0
    other_m = conductor.other_radius_m if isinstance(conductor, Folded) else None
    return max(conductor.radius_m, other_m or 0.0) + coat_m


@lru_cache(maxsize=16)
def spacings(wires: Wires) -> tuple[tuple[str, str, float, float, float], ...]:
    """Every pair of conductors: tags, axis distance, and the two radii [m]; a closed one with itself too."""
    found = []
    for first, second in combinations(wires.conductors, 2):
        distance_m = axis_distance_m(first, second)
        found.append((first.tag, second.tag, distance_m, thickest_m(first), thickest_m(second)))
    for conductor in wires.conductors:
        if not isinstance(conductor, Rod):
            other_m = conductor.other_radius_m if isinstance(conductor, Folded) else None
            radii = (conductor.radius_m, other_m or conductor.radius_m)
            found.append((conductor.tag, conductor.tag, facing_m(conductor), *radii))
    return tuple(found)


def least_spacing_radii(wires: Wires) -> float:
    """Least axis distance of two conductors, counted in the thicker one's radii; infinite for a lone rod."""
    return min((distance / max(a, b) for _, _, distance, a, b in spacings(wires)), default=math.inf)


def least_surface_gap_m(wires: Wires) -> float:
    """Least distance between surfaces [m], facing sides of one conductor included; infinite for a lone rod."""
    return min((distance - a - b for _, _, distance, a, b in spacings(wires)), default=math.inf)


def nearest_others(wires: Wires) -> tuple[dict[str, float], dict[str, float]]:
    """For each tag the least distance to another conductor [m], of axes and of surfaces; infinite for a lone one."""
    axes = {conductor.tag: math.inf for conductor in wires.conductors}
    surfaces = dict(axes)
    for first, second, distance_m, a, b in spacings(wires):
        for tag in (first, second) if first != second else ():
            axes[tag] = min(axes[tag], distance_m)
            surfaces[tag] = min(surfaces[tag], distance_m - a - b)
    return axes, surfaces


def refuse_impossible(wires: Wires) -> None:
    """Raise DesignFault, with all faults, for conductors that touch, cross, lie inside one another or cannot exist."""
    faults = [fault for conductor in wires.conductors for fault in _own_faults(conductor)]
    if not faults:
        for first, second, distance_m, a, b in spacings(wires):
            if distance_m <= a + b:
                names = f"{first} and {second} touch" if first != second else f"the two sides of {first} touch"
                what = f"{names}: axes {distance_m * 1e3:.3f} mm apart, radii {(a + b) * 1e3:.3f} mm together"
                faults.append(Fault(first, what, "move them apart or make them thinner"))
    fed = [conductor.tag for conductor in wires.conductors if conductor.gap_m > 0.0]
    if len(fed) != 1:
        faults.append(Fault("wires", f"{len(fed)} conductors are fed; exactly one is", "give one conductor a gap"))
    if faults:
        raise DesignFault(faults)


def _own_faults(conductor: Conductor) -> list[Fault]:
    sizes = {"length_m": conductor.length_m, "radius_m": conductor.radius_m}
    if isinstance(conductor, Folded):
        sizes["spacing_m"] = conductor.spacing_m
    faults = [
        Fault(f"{conductor.tag}.{name}", f"{value} is not a length", "give a length in metres, above 0")
        for name, value in sizes.items()
        if not (math.isfinite(value) and value > 0.0)
    ]
    if not (math.isfinite(conductor.at_m) and math.isfinite(conductor.height_m)):
        faults.append(Fault(f"{conductor.tag}.at_m", "not a number", "give its place in metres"))
    if faults:
        return faults
    room_m = conductor.length_m
    if isinstance(conductor, Folded | Loop):
        stretches = outline(conductor).stretches
        room_m = 2.0 * stretches[0].length_m
        if min(stretch.length_m for stretch in stretches) <= 0.0:
            found = f"{conductor.length_m * 1e3:g} mm leaves no straight part between its bends"
            faults.append(Fault(f"{conductor.tag}.length_m", found, "make it longer or the bends tighter"))
            return faults
    if not 0.0 <= conductor.gap_m < room_m:
        found = f"{conductor.gap_m * 1e3:g} mm does not fit its fed side of {room_m * 1e3:g} mm"
        faults.append(Fault(f"{conductor.tag}.gap_m", found, "make the gap narrower"))
    return faults
