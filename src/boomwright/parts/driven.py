"""The driven element: straight, folded or loop, as bent."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

from boomwright.design.centreline import developed_length_mm, loop_drop_mm, trace
from boomwright.parts.palette import colour_of
from boomwright.parts.rod import EDGE_BREAK_MM, PLACE_ALLOWED_MM, straight_rod
from boomwright.parts.solids import Shape, conductor
from boomwright.pieces import Body, Expectation, Part, Piece, Probe, SolidPiece

if TYPE_CHECKING:
    from boomwright.plan.plan import Plan

VOLUME_ALLOWED_SHARE = 1e-4


class DrivenPart(Part):
    """The fed element."""

    name = "driven"
    purpose = "the fed element, cut and bent"
    processes = ("cnc",)

    def build(self, plan: Plan) -> tuple[Piece, ...]:
        """One STEP, where the element stands in the design."""
        return (SolidPiece("driven", "cnc", (driven_body(plan),)),)

    def expect(self, plan: Plan) -> tuple[Expectation, ...]:
        """The element's sizes in its own file."""
        return expect_driven(plan, "cnc/driven.step")


def driven_body(plan: Plan) -> Body:
    """The driven element in its place, bare metal, named DE; a straight one is a compound of its two halves."""
    import cadquery as cq

    driven = plan.design.driven
    shapes: list[Shape] = []
    for runs in trace(driven):
        if driven.form == "straight":
            ends = sorted((runs[0].start[1], runs[0].end[1]))
            shapes.append(straight_rod(driven.at_mm, (ends[0], ends[1]), driven.diameter_mm))
        else:
            shapes.append(conductor(runs, driven.diameter_mm / 2.0))
    shape = shapes[0] if len(shapes) == 1 else cq.Compound.makeCompound(shapes)
    return Body("DE", shape, colour_of(driven.material))


def expect_driven(plan: Plan, file: str) -> tuple[Expectation, ...]:
    """What a file that holds the driven element must show of it."""
    driven = plan.design.driven
    sizes = {"at_mm": driven.at_mm, "diameter_mm": driven.diameter_mm, "gap_mm": driven.gap_mm}
    if driven.form == "loop":
        sizes["drop_mm"] = loop_drop_mm(driven)
        if driven.shape == "circle":  # the gap counts along the arc, a file shows the chord between its ends
            sizes["gap_mm"] = 2.0 * loop_drop_mm(driven) * math.sin(driven.gap_mm / (2.0 * loop_drop_mm(driven)))
    else:
        assert driven.length_mm is not None
        sizes |= {"height_mm": 0.0, "length_mm": driven.length_mm}
        if driven.form == "folded":
            assert driven.spacing_mm is not None
            sizes["spacing_mm"] = driven.spacing_mm
    found = [
        Expectation(
            file,
            f"DE {quantity.removesuffix('_mm')}",
            value,
            PLACE_ALLOWED_MM,
            "mm",
            Probe("driven", {"name": "DE", "quantity": quantity}),
        )
        for quantity, value in sizes.items()
    ]
    r = driven.diameter_mm / 2.0
    volume = developed_length_mm(driven) * math.pi * r * r
    if driven.form == "straight":
        b = min(EDGE_BREAK_MM, r / 2.0)
        volume -= 4.0 * math.pi * b * b * (r - b / 3.0)
    probe = Probe("volume_mm3", {"name": "DE"})
    found.append(Expectation(file, "DE volume", volume, VOLUME_ALLOWED_SHARE * volume, "mm3", probe))
    return tuple(found)
