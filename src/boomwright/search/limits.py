"""How near conductors may stand: grooves that leave a web, a feed point that leaves room for its mould."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass, replace

from boomwright.design.model import Design
from boomwright.design.rules import require_boom
from boomwright.errors import Fault, InputFault
from boomwright.plan.mould import plan_mould
from boomwright.plan.plan import make_plan
from boomwright.plan.seat import plan_seat
from boomwright.search.stock import Stock, least_web_gap_mm
from boomwright.shop.profile import Shop
from boomwright.units import wavelength_mm

LEAST_WL = 0.045
"""Least distance of two neighbours [wavelengths]: nearer ones work against one another, and a hair moves the gain."""

LEAST_DIAMETERS = 1.75
"""Least distance of two axes in diameters of the thicker: nearer, current crowds more than the equations carry."""

SEARCH_STEPS = 12
FAR_WL = 0.45


@dataclass(frozen=True)
class Gaps:
    """Least distances of neighbours' places [mm], and what sets each.

    behind    reflector to driven element
    ahead     driven element's fed conductor to first director
    between   two directors
    """

    behind_mm: float
    ahead_mm: float
    between_mm: float
    why: tuple[str, str, str]


def least_gaps(stock: Stock, wavelength: float, trial: Callable[[float, float], Design], shop: Shop) -> Gaps:
    """Least distances for this stock.

    wavelength  at the band's centre [mm]
    trial       a design with the driven element at these distances from reflector and first director [mm]
    """
    glue, wire, floor = stock.seat.glue_gap_mm, stock.driven.outer_diameter_mm, LEAST_WL * wavelength
    thick = max(stock.reflector_mm, stock.director_mm, wire)
    floor = max(floor, LEAST_DIAMETERS * thick)
    if stock.driven.form == "loop":
        wire = 0.0
    spacing = stock.spacing_mm
    behind = max(floor, least_web_gap_mm(stock.reflector_mm, wire, glue))
    ahead = max(floor, least_web_gap_mm(wire, stock.director_mm, glue))
    between = max(floor, least_web_gap_mm(stock.director_mm, stock.director_mm, glue))
    far = FAR_WL * wavelength
    usual = _mould_faults(trial(far, spacing + far), shop)

    def least(build: Callable[[float], Design], low_mm: float) -> tuple[float, str]:
        def hinders(gap_mm: float) -> bool:
            return not _mould_faults(build(gap_mm), shop) <= usual

        if not hinders(low_mm):
            return low_mm, "the grooves' web" if low_mm > floor else "electrical"
        high_mm = far
        for _ in range(SEARCH_STEPS):
            middle = (low_mm + high_mm) / 2.0
            low_mm, high_mm = (middle, high_mm) if hinders(middle) else (low_mm, middle)
        return high_mm, "room for the feed-point mould"

    back, back_why = least(lambda gap: trial(gap, spacing + far), behind)
    front, front_why = least(lambda gap: trial(far, spacing + gap), ahead)
    step = stock.step_mm
    rounded = [round(math.ceil(value / step - 1e-6) * step, 3) for value in (back, spacing + front, between)]
    why = "the grooves' web" if between > floor else "electrical"
    return Gaps(rounded[0], rounded[1], rounded[2], (back_why, front_why, why))


def least_room_mm(design: Design, shop: Shop) -> tuple[float, float]:
    """Least distances of the driven element's place from the rod behind and the rod ahead of it [mm] in a design.

    What its seats and its mould need; 0 where no rod stands.
    """
    far = FAR_WL * wavelength_mm(design.band.centre_mhz)
    usual = _mould_faults(_spread(design, far, far), shop)

    def least(behind: bool) -> float:
        low, high = 0.0, far
        for _ in range(SEARCH_STEPS + 2):
            middle = (low + high) / 2.0
            trial = _spread(design, middle if behind else far, far if behind else middle)
            low, high = (low, middle) if _mould_faults(trial, shop) <= usual else (middle, high)
        return high

    sides = (any(rod.at_mm < design.driven.at_mm for rod in design.rods), any(_ahead(design)))
    return least(True) if sides[0] else 0.0, least(False) if sides[1] else 0.0


def _ahead(design: Design) -> list[bool]:
    return [rod.at_mm > design.driven.at_mm for rod in design.rods]


def _spread(design: Design, behind_mm: float, ahead_mm: float) -> Design:
    """The design with its neighbours' rows moved to these distances from the driven element's place."""
    at = design.driven.at_mm
    back = max((rod.at_mm for rod in design.rods if rod.at_mm < at), default=at)
    front = min((rod.at_mm for rod in design.rods if rod.at_mm > at), default=at)
    rods = tuple(
        replace(rod, at_mm=rod.at_mm + (at - behind_mm - back if rod.at_mm < at else at + ahead_mm - front))
        for rod in design.rods
    )
    return replace(design, rods=rods)


def _mould_faults(design: Design, shop: Shop) -> frozenset[str]:
    """Key paths that the plans of seats and mould complain of; without sound seats there is no mould to plan."""
    boom, wished = require_boom(design)
    seat, _, faults = plan_seat(design, boom, wished)
    if faults:
        return frozenset(f"seat: {fault.path}" for fault in faults)
    return frozenset(fault.path for fault in plan_mould(design, shop, seat)[2])


def build_faults(design: Design, shop: Shop) -> tuple[Fault, ...]:
    """Why this shop cannot make parts of a design; empty when it can."""
    try:
        return tuple(fault for faults in make_plan(design, shop).faults.values() for fault in faults)
    except InputFault as fault:
        return tuple(replace(each) for each in fault.faults)
