"""The V notch and the round rod that rests in it. Geometry by hand: two tangents to a circle."""

from __future__ import annotations

import math
from collections.abc import Mapping

from boomwright.errors import Fault, PlanFault
from boomwright.plan.size import Size

LEAST_ANGLE_DEG, MOST_ANGLE_DEG = 20.0, 160.0


def resting_axis_height_mm(apex_height_mm: float, diameter_mm: float, included_angle_deg: float = 90.0) -> float:
    """Height of a round rod's axis when it rests in a symmetric V notch.

    apex_height_mm      height of the notch's sharp bottom above the bed [mm]
    diameter_mm         rod diameter [mm], above 0
    included_angle_deg  angle between the notch faces [deg], 20 to 160

    Returns the height of the rod axis above the bed [mm]: apex + r / sin(angle / 2).
    Raises PlanFault outside those ranges.
    """
    return apex_height_mm + _rise_mm(diameter_mm, included_angle_deg)


def notch_apex_height_mm(axis_height_mm: float, diameter_mm: float, included_angle_deg: float = 90.0) -> float:
    """Height of a symmetric V notch's sharp bottom [mm] that holds a round rod's axis at `axis_height_mm`.

    Arguments, ranges and errors as `resting_axis_height_mm`, whose inverse this is.
    """
    return axis_height_mm - _rise_mm(diameter_mm, included_angle_deg)


def _rise_mm(diameter_mm: float, included_angle_deg: float) -> float:
    if not diameter_mm > 0.0:
        raise PlanFault([Fault("diameter_mm", f"{diameter_mm:g} is not a diameter", "give a value above 0")])
    if not LEAST_ANGLE_DEG <= included_angle_deg <= MOST_ANGLE_DEG:
        found = f"{included_angle_deg:g} is outside {LEAST_ANGLE_DEG:g} to {MOST_ANGLE_DEG:g}"
        raise PlanFault([Fault("included_angle_deg", found, "90 is common practice")])
    return diameter_mm / 2.0 / math.sin(math.radians(included_angle_deg) / 2.0)


def axis_height(needs_mm: Mapping[str, float], radii_mm: Mapping[str, float], key: str) -> tuple[float, list[Size]]:
    """The height at which every axis lies: what the most demanding need asks for, rounded up to half a millimetre.

    needs_mm  heights, by what asks for each in words
    radii_mm  of what rests in notches, by tag
    key       first part of the sizes' keys

    Returns the height [mm], and its size with those of the notches' apexes.
    """
    reason = max(needs_mm, key=lambda words: needs_mm[words])
    height = math.ceil(needs_mm[reason] * 2.0 - 1e-9) / 2.0
    sizes = [Size(f"{key}.axis_height_mm", height, "mm", f"{reason}, rounded up to half a millimetre")]
    for tag, radius in radii_mm.items():
        apex = notch_apex_height_mm(height, 2.0 * radius)
        sizes.append(
            Size(f"{key}.notch.{tag}.apex_mm", apex, "mm", f"axis height {height:g} - radius {radius:g} x root 2")
        )
    return height, sizes
