"""The printer's calibration pieces: outline block, hole ladder, plug, and the two ladders the plug tries."""

from __future__ import annotations

from collections.abc import Sequence
from functools import partial
from typing import TYPE_CHECKING

from boomwright.parts.coupon import CouponPart
from boomwright.parts.feet import CHAMFER_MM, expect_foot
from boomwright.parts.printed import chamfered_plate, expect_extent, label_tools, printed_piece
from boomwright.parts.solids import Shape, cut, prism_along_z
from boomwright.pieces import Expectation, Piece, Probe
from boomwright.plan.compensation import NOMINAL, Offsets
from boomwright.plan.coupon import OUTLINE_MM, PLUG_HEIGHT_MM, PLUG_MM, CouponPlan, Ladder, Opening
from boomwright.plan.label import Label

if TYPE_CHECKING:
    import cadquery as cq

ALLOWED_MM = 0.015
"""A chord of the mesh (0.01) and rounding."""

MOUTH_MM = 2.0 * CHAMFER_MM


class OutlineBlock(CouponPart):
    """A block to be measured with a calliper."""

    name = "outline-block"
    purpose = "measured with a calliper: how much the printer adds to every outline (printer.outline_growth_mm)"
    processes = ("print",)

    def build(self, plan: CouponPlan) -> tuple[Piece, ...]:
        """One block, drawn without any offset."""
        return (printed_piece("outline-block-1", _block, NOMINAL),)

    def expect(self, plan: CouponPlan) -> tuple[Expectation, ...]:
        """Its three sizes, in STEP and in STL alike."""
        return (*_sizes("outline-block-1", OUTLINE_MM, 0.0), expect_foot("outline-block-1"))


class HoleLadder(CouponPart):
    """Holes of stepped diameters."""

    name = "hole-ladder"
    purpose = "tried with a rod or a drill's shank: how much narrower holes come out (printer.hole_shrink_mm)"
    processes = ("print",)

    def build(self, plan: CouponPlan) -> tuple[Piece, ...]:
        """One plate, drawn without any offset."""
        return (printed_piece("hole-ladder-1", partial(_plate, plan.holes), NOMINAL),)

    def expect(self, plan: CouponPlan) -> tuple[Expectation, ...]:
        """Every hole's diameter, in STEP and in STL alike."""
        return tuple(_expect_ladder("hole-ladder-1", plan.holes, 0.0))


class FitPlug(CouponPart):
    """The plug of both fit ladders."""

    name = "fit-plug"
    purpose = "the square plug that tries the pockets of slide-ladder and press-ladder"
    processes = ("print",)

    def build(self, plan: CouponPlan) -> tuple[Piece, ...]:
        """One plug, the shop's outline growth taken."""
        return (printed_piece("fit-plug-1", _plug, _growth(plan)),)

    def expect(self, plan: CouponPlan) -> tuple[Expectation, ...]:
        """Its sizes in STEP, and in STL less the growth on each side."""
        size = (PLUG_MM, PLUG_MM, PLUG_HEIGHT_MM)
        return (*_sizes("fit-plug-1", size, plan.shop.printer.outline_growth_mm), expect_foot("fit-plug-1"))


class SlideLadder(CouponPart):
    """Pockets in which the plug slides."""

    name = "slide-ladder"
    purpose = "pockets for the plug: the clearance at which parts slide (printer.slide_clearance_mm)"
    processes = ("print",)

    def build(self, plan: CouponPlan) -> tuple[Piece, ...]:
        """One plate, the shop's outline growth taken, as in the kit's parts."""
        return (printed_piece("slide-ladder-1", partial(_plate, plan.slide), _growth(plan)),)

    def expect(self, plan: CouponPlan) -> tuple[Expectation, ...]:
        """Every pocket's width."""
        return tuple(_expect_ladder("slide-ladder-1", plan.slide, plan.shop.printer.outline_growth_mm))


class PressLadder(CouponPart):
    """Pockets in which the plug stays."""

    name = "press-ladder"
    purpose = "pockets for the plug: the clearance at which parts stay where pressed (printer.press_clearance_mm)"
    processes = ("print",)

    def build(self, plan: CouponPlan) -> tuple[Piece, ...]:
        """One plate, the shop's outline growth taken, as in the kit's parts."""
        return (printed_piece("press-ladder-1", partial(_plate, plan.press), _growth(plan)),)

    def expect(self, plan: CouponPlan) -> tuple[Expectation, ...]:
        """Every pocket's width."""
        return tuple(_expect_ladder("press-ladder-1", plan.press, plan.shop.printer.outline_growth_mm))


def _growth(plan: CouponPlan) -> Offsets:
    return Offsets(outline_growth_mm=plan.shop.printer.outline_growth_mm)


def _block(offsets: Offsets) -> Shape:
    import shapely

    long, short, high = OUTLINE_MM
    labels = [Label(f"{long:g}", 4.0, 3.0, 4.0, high), Label(f"{short:g}", long - 4.0, 10.0, 4.0, high, 1)]
    return cut(chamfered_plate(shapely.box(0.0, 0.0, long, short), high), label_tools(labels))


def _plug(offsets: Offsets) -> Shape:
    import shapely

    return chamfered_plate(shapely.box(0.0, 0.0, PLUG_MM, PLUG_MM), PLUG_HEIGHT_MM, offsets.outline_growth_mm)


def _plate(ladder: Ladder, offsets: Offsets) -> Shape:
    import shapely

    length, width, high = ladder.size_mm
    plate = chamfered_plate(shapely.box(0.0, 0.0, length, width), high, offsets.outline_growth_mm)
    tools = [tool for one in ladder.openings for tool in _tools(one, high, offsets.outline_growth_mm)]
    return cut(plate, tools + label_tools(ladder.labels))


def _tools(one: Opening, high_mm: float, growth_mm: float) -> list[cq.Shape]:
    """An opening, and its wider mouth at the bed, where the first layers squeeze inward and would falsify the try."""
    import cadquery as cq
    import shapely

    (x, y), half = one.at, one.width_mm / 2.0 + growth_mm
    below = cq.Vector(x, y, -CHAMFER_MM)
    if one.is_round:
        through = cq.Solid.makeCylinder(half, high_mm + 2.0, cq.Vector(x, y, -1.0))
        return [through, cq.Solid.makeCone(half + MOUTH_MM, half, MOUTH_MM, below)]
    through = prism_along_z(shapely.box(x - half, y - half, x + half, y + half), (-1.0, high_mm + 1.0))
    wires = []
    for reach, z in ((half + MOUTH_MM, -CHAMFER_MM), (half, CHAMFER_MM)):
        corners = [(x - reach, y - reach), (x + reach, y - reach), (x + reach, y + reach), (x - reach, y + reach)]
        wires.append(cq.Wire.makePolygon([cq.Vector(*corner, z) for corner in corners], close=True))
    return [through, cq.Solid.makeLoft(wires, True)]


def _expect_ladder(stem: str, ladder: Ladder, growth_mm: float) -> list[Expectation]:
    found = list[Expectation]()
    for one in ladder.openings:
        word = "hole" if one.is_round else "pocket"
        for suffix, moved in (("step", 0.0), ("stl", 2.0 * growth_mm)):
            for axis, along in (("x", (1.0, 0.0, 0.0)), ("y", (0.0, 1.0, 0.0))):
                probe = Probe("free_mm", {"at": (*one.at, ladder.size_mm[2] / 2.0), "along": along})
                what = f"{word} {one.width_mm:.6g}, step {one.step_mm:g}, width in {axis}"
                found.append(Expectation(f"print/{stem}.{suffix}", what, one.width_mm + moved, ALLOWED_MM, "mm", probe))
    return [*found, *expect_extent(f"print/{stem}.step", ladder.size_mm), expect_foot(stem)]


def _sizes(stem: str, size_mm: Sequence[float], growth_mm: float) -> list[Expectation]:
    drawn = [size - 2.0 * growth_mm for size in size_mm[:2]]
    return [
        *expect_extent(f"print/{stem}.step", size_mm),
        *expect_extent(f"print/{stem}.stl", [*drawn, size_mm[2]]),
    ]
