"""The insulating sleeves round rods that pass through the boom."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

from boomwright.parts.palette import colour_of
from boomwright.parts.solids import cut, cylinder
from boomwright.pieces import Body, Expectation, Part, Piece, Probe, SolidPiece

if TYPE_CHECKING:
    from boomwright.plan.plan import Plan

VOLUME_ALLOWED_SHARE = 1e-4


class SleevePart(Part):
    """Sleeves for an insulated through seat."""

    name = "sleeve"
    purpose = "the tube that keeps a rod from touching the boom it passes through"
    processes = ("cnc",)
    left_out_when = "no rod passes through the boom in an insulating sleeve"

    def left_out(self, plan: Plan) -> str | None:
        """Only insulated rods have sleeves."""
        if any(hole.sleeve_outer_mm > 0.0 for hole in plan.seat.holes):
            return None
        return "no rod passes through the boom in a sleeve"

    def build(self, plan: Plan) -> tuple[Piece, ...]:
        """One STEP a sleeve, where it sits."""
        return tuple(SolidPiece(body.name, "cnc", (body,)) for body in sleeve_bodies(plan))

    def expect(self, plan: Plan) -> tuple[Expectation, ...]:
        """Length and volume of every sleeve."""
        found = []
        width = 2.0 * plan.seat.half_width_mm
        for hole in plan.seat.holes:
            file = f"cnc/sleeve-{hole.tag}.step"
            area = math.pi / 4.0 * (hole.sleeve_outer_mm**2 - hole.sleeve_inner_mm**2)
            sizes = {"size_y_mm": width, "size_x_mm": hole.sleeve_outer_mm}
            for quantity, value in sizes.items():
                probe = Probe("extent", {"quantity": quantity})
                found.append(Expectation(file, f"{hole.tag} sleeve {quantity}", value, 0.002, "mm", probe))
            volume = area * width
            probe = Probe("volume_mm3")
            allowed = VOLUME_ALLOWED_SHARE * volume
            found.append(Expectation(file, f"{hole.tag} sleeve volume", volume, allowed, "mm3", probe))
        return tuple(found)


def sleeve_bodies(plan: Plan) -> tuple[Body, ...]:
    """Every sleeve in its place, as long as the boom is wide."""
    half = plan.seat.half_width_mm
    bodies = []
    for hole in plan.seat.holes:
        if hole.sleeve_outer_mm > 0.0:
            ends = (hole.at_mm, -half, 0.0), (0, 1, 0)
            outer = cylinder(*ends, hole.sleeve_outer_mm / 2.0, 2.0 * half)
            inner = cylinder(*ends, hole.sleeve_inner_mm / 2.0, 2.0 * half)
            bodies.append(Body(f"sleeve-{hole.tag}", cut(outer, [inner]), colour_of("PTFE")))
    return tuple(bodies)
