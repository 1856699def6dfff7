"""The V notch and the round rod that rests in it. Geometry by hand: two tangents to a circle."""

from __future__ import annotations

import math

from boomwright.errors import Fault, PlanFault

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
