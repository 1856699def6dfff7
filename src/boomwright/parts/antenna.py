"""The antenna as assembled: boom, rods, driven element and sleeves in one file."""

from __future__ import annotations

from typing import TYPE_CHECKING

from boomwright.parts.boom import boom_shape, expect_seats
from boomwright.parts.driven import driven_body, expect_driven
from boomwright.parts.palette import colour_of
from boomwright.parts.rod import expect_rod, rod_bodies
from boomwright.parts.sleeve import sleeve_bodies
from boomwright.pieces import Body, Expectation, Part, Piece, Probe, SolidPiece

if TYPE_CHECKING:
    from boomwright.plan.plan import Plan

FILE = "antenna.step"


class AntennaPart(Part):
    """The assembly."""

    name = "antenna"
    purpose = "the finished antenna as one assembly, every part in its place with its name and colour"
    processes = ("assembly",)

    def build(self, plan: Plan) -> tuple[Piece, ...]:
        """One STEP of all bodies."""
        return (SolidPiece("antenna", "assembly", antenna_bodies(plan)),)

    def expect(self, plan: Plan) -> tuple[Expectation, ...]:
        """Every conductor in its place, every seat in the boom, nothing overlapping."""
        found = [e for rod in plan.design.rods for e in expect_rod(plan, rod.tag, FILE)]
        found += expect_driven(plan, FILE)
        found += expect_seats(plan, FILE)
        halves = 1 if plan.design.driven.form == "straight" else 0
        solids = len(antenna_names(plan)) + halves
        found.append(Expectation(FILE, "number of solids", solids, 0.0, "solids", Probe("solid_count")))
        overlap = Probe("overlap_mm3", {"within": "all"})
        found.append(Expectation(FILE, "overlap of any two parts", 0.0, 1e-6, "mm3", overlap))
        return tuple(found)


def antenna_bodies(plan: Plan) -> tuple[Body, ...]:
    """Boom, rods, driven element and sleeves in the design's frame."""
    boom = Body("boom", boom_shape(plan), colour_of(plan.boom.material))
    return (boom, *rod_bodies(plan), driven_body(plan), *sleeve_bodies(plan))


def antenna_names(plan: Plan) -> tuple[str, ...]:
    """The names of the antenna's bodies, in their order."""
    sleeves = tuple(f"sleeve-{hole.tag}" for hole in plan.seat.holes if hole.sleeve_outer_mm > 0.0)
    return ("boom", *(rod.tag for rod in plan.design.rods), "DE", *sleeves)
