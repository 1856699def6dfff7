"""The rods: straight conductors with a small edge break at both ends, one file each."""

from __future__ import annotations

from typing import TYPE_CHECKING

from boomwright.parts.palette import colour_of
from boomwright.parts.solids import Shape
from boomwright.pieces import Body, Expectation, Part, Piece, Probe, SolidPiece

if TYPE_CHECKING:
    from boomwright.plan.plan import Plan

EDGE_BREAK_MM = 0.2
PLACE_ALLOWED_MM = 0.002


class RodPart(Part):
    """Reflector and directors."""

    name = "rod"
    purpose = "the parasitic elements: reflector and directors, cut to length"
    processes = ("cnc",)
    left_out_when = "the design has no rods"

    def left_out(self, plan: Plan) -> str | None:
        """A design may have no rods at all."""
        return None if plan.design.rods else "the design has no rods"

    def build(self, plan: Plan) -> tuple[Piece, ...]:
        """One STEP a rod, where it stands in the design."""
        return tuple(SolidPiece(f"rod-{body.name}", "cnc", (body,)) for body in rod_bodies(plan))

    def expect(self, plan: Plan) -> tuple[Expectation, ...]:
        """Place, length and diameter of every rod in its own file."""
        tags = [rod.tag for rod in plan.design.rods]
        return tuple(e for tag in tags for e in expect_rod(plan, tag, f"cnc/rod-{tag}.step"))


def straight_rod(at_mm: float, ends_mm: tuple[float, float], diameter_mm: float) -> Shape:
    """A round rod along y with its edges broken at both ends, axis on the datum plane."""
    import cadquery as cq

    r = diameter_mm / 2.0
    b = min(EDGE_BREAK_MM, r / 2.0)
    low, high = ends_mm
    profile = [(0.0, low), (r - b, low), (r, low + b), (r, high - b), (r - b, high), (0.0, high)]
    wire = cq.Wire.makePolygon([cq.Vector(at_mm + x, y, 0.0) for x, y in profile], close=True)
    axis = cq.Vector(at_mm, 0.0, 0.0), cq.Vector(at_mm, 1.0, 0.0)
    return cq.Solid.revolve(wire, [], 360.0, *axis)


def rod_bodies(plan: Plan) -> tuple[Body, ...]:
    """Every rod in its place, bare metal, named by its tag."""
    return tuple(
        Body(
            rod.tag,
            straight_rod(rod.at_mm, (-rod.length_mm / 2.0, rod.length_mm / 2.0), rod.diameter_mm),
            colour_of(rod.material),
        )
        for rod in plan.design.rods
    )


def expect_rod(plan: Plan, tag: str, file: str) -> tuple[Expectation, ...]:
    """What a file that holds this rod must show of it."""
    rod = next(r for r in plan.design.rods if r.tag == tag)
    sizes = {
        "at_mm": rod.at_mm,
        "height_mm": 0.0,
        "offset_y_mm": 0.0,
        "length_mm": rod.length_mm,
        "diameter_mm": rod.diameter_mm,
        "tilt_mm": 0.0,
    }
    words = {"at_mm": "axis position", "height_mm": "axis height", "offset_y_mm": "offset from the middle plane"}
    return tuple(
        Expectation(
            file,
            f"{tag} {words.get(quantity, quantity.removesuffix('_mm'))}",
            value,
            PLACE_ALLOWED_MM,
            "mm",
            Probe("rod", {"name": tag, "quantity": quantity}),
        )
        for quantity, value in sizes.items()
    )
