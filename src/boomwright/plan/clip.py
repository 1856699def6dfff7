"""The clip that holds a loop upright while its resin sets: two legs astride the upper side, standing on the boom."""

from __future__ import annotations

from dataclasses import dataclass

from boomwright.design.centreline import loop_drop_mm
from boomwright.design.model import Design, Section
from boomwright.errors import Fault
from boomwright.plan.frame import Matrix
from boomwright.plan.seat import SeatPlan
from boomwright.shop.profile import Shop

Span = tuple[float, float]

LEG_MM, LEAST_LEG_MM = 5.0, 2.0
CLEAR_OF_RODS_MM = 0.8
CLEAR_OF_MOULD_MM = 0.5
OVER_LOOP_MM = 0.5
BRIDGE_MM = 4.0
BESIDE_BOOM_MM = 3.0


@dataclass(frozen=True)
class ClipPlan:
    """The clip in the design's frame [mm]: it comes on and off from above.

    x_mm       outer faces of the rear and the front leg
    slot_mm    the slot between the legs that holds the conductor
    half_y_mm  half its width along the rods
    foot_mm    z of the legs' lower ends, beside the boom
    bridge_mm  z of the bridge's underside, over the loop
    top_mm     z of the top
    """

    x_mm: Span
    slot_mm: Span
    half_y_mm: float
    foot_mm: float
    bridge_mm: float
    top_mm: float
    section: Section
    boom_half_mm: float
    boom_axis_mm: float
    boom_clearance_mm: float

    @property
    def frame(self) -> Matrix:
        """Design's frame to print orientation: bridge on the bed, legs up."""
        x = sum(self.slot_mm) / 2.0
        return (
            (1.0, 0.0, 0.0, -x),
            (0.0, -1.0, 0.0, 0.0),
            (0.0, 0.0, -1.0, self.top_mm),
            (0.0, 0.0, 0.0, 1.0),
        )


def plan_clip(design: Design, shop: Shop, seat: SeatPlan, mould_top_mm: float) -> tuple[ClipPlan, list[Fault]]:
    """The clip of a loop; a fault where a rod leaves no room for a leg."""
    driven, boom = design.driven, design.boom
    assert boom is not None
    r, play = driven.outer_diameter_mm / 2.0, shop.printer.slide_clearance_mm
    slot = (driven.at_mm - r - play, driven.at_mm + r + play)
    faults, outer = [], []
    for sign, inner in ((-1.0, slot[0]), (1.0, slot[1])):
        leg = LEG_MM
        for rod in design.rods:
            if (rod.at_mm - driven.at_mm) * sign > 0.0:
                free = abs(rod.at_mm - inner) - rod.outer_diameter_mm / 2.0 - CLEAR_OF_RODS_MM
                leg = min(leg, free)
                if free < LEAST_LEG_MM:
                    found = f"{rod.tag} leaves {max(free, 0.0):.3g} mm for a leg of the clip that holds the loop"
                    fix = f"set it {LEAST_LEG_MM - free:.3g} mm farther from the driven element"
                    faults.append(Fault(f"rod[{rod.file_index}].at_mm", found, fix))
        outer.append(inner + sign * max(leg, LEAST_LEG_MM))
    over = loop_drop_mm(driven) + r + OVER_LOOP_MM
    clip = ClipPlan(
        x_mm=(outer[0], outer[1]),
        slot_mm=slot,
        half_y_mm=seat.half_width_mm + BESIDE_BOOM_MM,
        foot_mm=max(seat.axis_mm, mould_top_mm + CLEAR_OF_MOULD_MM),
        bridge_mm=over,
        top_mm=over + BRIDGE_MM,
        section=boom.section,
        boom_half_mm=seat.half_width_mm,
        boom_axis_mm=seat.axis_mm,
        boom_clearance_mm=shop.mould.channel_clearance_mm,
    )
    return clip, faults
