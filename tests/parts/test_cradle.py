"""The cradle as a solid, checked with the kernel directly: it carries every conductor and touches nothing else."""

from dataclasses import dataclass, replace
from functools import cache

import cadquery as cq
import pytest
import samples

from boomwright.design.model import Design, Seat
from boomwright.parts.antenna import antenna_bodies
from boomwright.parts.cradle_solid import section_shape
from boomwright.parts.solids import box, cylinder, place
from boomwright.plan.compensation import NOMINAL, Offsets
from boomwright.plan.cradle import CradlePlan, plan_cradle
from boomwright.plan.seat import SeatPlan, plan_seat
from boomwright.shop.profile import Shop

PRESS_MM = 0.01
"""A rod pushed down by this much must bite into both faces of its notch."""


@dataclass(frozen=True)
class Laid:
    """As much of a plan as the antenna's bodies need."""

    design: Design
    seat: SeatPlan
    cradle: CradlePlan

    @property
    def boom(self) -> object:
        return self.design.boom


@cache
def laid(design: Design) -> Laid:
    assert design.boom is not None
    seat, _, _ = plan_seat(design, design.boom, design.seat or Seat())
    cradle, _, faults = plan_cradle(design, design.boom, Shop(), seat)
    assert faults == []
    return Laid(design, seat, cradle)


@cache
def shape_of(cradle: CradlePlan, offsets: Offsets = NOMINAL, lettered: bool = True) -> cq.Shape:
    (section,) = cradle.sections
    section = section if lettered else replace(section, labels=())
    return section_shape(section, cradle.axis_height_mm, Shop().printer.press_clearance_mm, offsets)


def common_mm3(first: cq.Shape, second: cq.Shape) -> float:
    common = first.intersect(second)
    return sum(solid.Volume() for solid in common.Solids())


@pytest.mark.slow
@pytest.mark.parametrize("design", samples.FITTING, ids=lambda d: d.name)
def test_one_sound_solid_on_the_bed_that_overlaps_nothing(design: Design) -> None:
    plan = laid(design)
    solid = shape_of(plan.cradle)
    assert solid.isValid()
    assert solid.ShapeType() == "Solid"
    assert solid.BoundingBox().zmin == pytest.approx(0.0, abs=1e-6)
    lying = {h.tag for h in plan.cradle.held}
    bodies = antenna_bodies(plan)  # type: ignore[arg-type]
    bare = shape_of(plan.cradle, lettered=False)  # letters only take away
    for body in bodies:
        if body.name != "DE" or "DE" in lying:
            assert common_mm3(bare, place(body.shape, plan.cradle.frame)) < 1e-6, body.name


@pytest.mark.slow
@pytest.mark.parametrize(
    ("design", "growth_mm"),
    [
        (samples.GAUGE, 0.0),
        (samples.GAUGE, 0.12),
        (samples.CAMERA, 0.0),
        (samples.MIXED_1296, 0.0),
        (samples.TUBE_915, 0.12),
    ],
    ids=lambda value: getattr(value, "name", value),
)
def test_every_conductor_rests_in_every_notch(design: Design, growth_mm: float) -> None:
    """Drawn for a printer that grows outlines, each notch lies lower by the growth (faces at 45 degrees)."""
    plan = laid(design)
    offsets = Offsets(outline_growth_mm=growth_mm) if growth_mm else NOMINAL
    solid = shape_of(plan.cradle, offsets, lettered=False)
    height = plan.cradle.axis_height_mm - growth_mm
    for bearer in plan.cradle.bearers:
        middle, length = sum(bearer.y_mm) / 2.0, 0.5
        for notch in bearer.notches:
            for side in (1.0, -1.0):
                y = (side * middle - length / 2.0, side * middle + length / 2.0)
                rod = cylinder((notch.at_mm, y[0], height), (0, 1, 0), notch.radius_mm, length)
                around = (notch.at_mm - 2.0 * notch.radius_mm, notch.at_mm + 2.0 * notch.radius_mm)
                near = solid.intersect(box(around, y, (0.0, 2.0 * height)))
                assert common_mm3(near, rod) < 1e-9
                for x, z in ((0.0, -PRESS_MM), (-PRESS_MM, 0.0), (PRESS_MM, 0.0)):
                    assert common_mm3(near, rod.translate(cq.Vector(x, 0.0, z))) > 1e-6


@pytest.mark.parametrize("design", [samples.GAUGE, samples.CAMERA, samples.TUBE_915], ids=lambda d: d.name)
def test_relief_measured_from_every_bond_line(design: Design) -> None:
    plan = laid(design)
    solid = shape_of(plan.cradle)
    height = plan.cradle.axis_height_mm
    for bond in plan.seat.bond_lines:
        low = cq.Vector(bond.at_mm - bond.half_x_mm, -bond.half_y_mm, height - bond.high_z_mm)
        film = cq.Solid.makeBox(2.0 * bond.half_x_mm, 2.0 * bond.half_y_mm, bond.high_z_mm - bond.low_z_mm, pnt=low)
        assert solid.distance(film) >= plan.cradle.relief_mm - 1e-6


@pytest.mark.parametrize("design", [samples.GAUGE, samples.CAMERA], ids=lambda d: d.name)
def test_no_face_hangs_over_more_than_45_degrees(design: Design) -> None:
    solid = shape_of(laid(design).cradle)
    for face in solid.Faces():
        centre = face.Center()
        down = -face.normalAt(centre).z
        assert down <= 0.7072 or centre.z < 1e-6, (centre.toTuple(), down)
