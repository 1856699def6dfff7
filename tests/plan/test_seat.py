"""Seats on the boom: the thickest conductor lies flush, every axis on the datum plane."""

from dataclasses import replace

import pytest
import samples

from boomwright.design.model import Boom, Design, Seat
from boomwright.plan.seat import SeatPlan, plan_seat
from boomwright.plan.size import Size


def seats(design: Design) -> tuple[SeatPlan, list[Size], list[str]]:
    assert design.boom is not None
    seat, sizes, faults = plan_seat(design, design.boom, design.seat or Seat())
    return seat, sizes, [str(fault) for fault in faults]


@pytest.mark.parametrize("design", [d for d in samples.FITTING if d.seat == Seat()], ids=lambda d: d.name)
def test_thickest_conductor_is_flush_and_every_groove_centres_its_rod(design: Design) -> None:
    seat, _, faults = seats(design)
    assert faults == []
    outer = {rod.tag: rod.outer_diameter_mm for rod in design.rods}
    for groove in seat.grooves:
        diameter = outer.get(groove.tag, design.driven.outer_diameter_mm)
        assert groove.radius_mm == pytest.approx(diameter / 2.0 + 0.1)
        assert seat.top_mm - groove.depth_mm == pytest.approx(-groove.radius_mm)
        assert diameter / 2.0 <= seat.top_mm + 1e-12
    assert max(outer.values()) / 2.0 == pytest.approx(seat.top_mm)


def test_origin_of_a_groove_depth_reads_as_a_sum() -> None:
    _, sizes, _ = seats(samples.GAUGE)
    words = {size.key: str(size) for size in sizes}
    assert words["groove.R.depth_mm"] == "groove.R.depth_mm = 3.1 mm: rod 3 + glue gap 0.1"
    assert words["groove.DE.depth_mm"] == "groove.DE.depth_mm = 2.6 mm: rod 2 + glue gap 0.1 + 0.5 below flush"


def test_through_seats_lie_in_the_booms_middle_and_hold_the_sleeve() -> None:
    seat, sizes, faults = seats(samples.TUBE_915)
    assert faults == []
    assert (seat.axis_mm, seat.top_mm) == (0.0, 7.5)
    assert [hole.tag for hole in seat.holes] == ["R", "D1"]
    assert seat.holes[0].diameter_mm == pytest.approx(4.0 + 2.0 * 1.0 + 0.1)
    assert "rod 4 + 2 x sleeve 1 + clearance 0.1" in {size.origin for size in sizes}


def test_a_coat_widens_the_groove() -> None:
    coated = replace(samples.GAUGE.rods[0], coat_mm=0.2, coat_material="acrylic paint")
    seat, _, _ = seats(replace(samples.GAUGE, rods=(coated, *samples.GAUGE.rods[1:])))
    assert seat.grooves[0].radius_mm == pytest.approx(1.5 + 0.2 + 0.1)
    assert seat.top_mm == pytest.approx(1.7)


def test_a_groove_deeper_than_half_the_boom_is_a_fault_of_its_width() -> None:
    _, _, faults = seats(replace(samples.GAUGE, boom=Boom("round", 6.0, "beech", 30.0, 20.0)))
    assert faults == [
        "boom.width_mm: the groove of R is 3.1 deep, over half of the 6 mm boom\n"
        "  fix: a boom of at least 6.2 mm, or thinner rods"
    ]


def test_a_thin_web_is_a_fault_that_says_what_would_fit() -> None:
    rods = (*samples.GAUGE.rods[:2], samples.rod("D2", 99.5, 145, 3, 2))
    _, _, faults = seats(replace(samples.GAUGE, rods=rods))
    assert faults == [
        "rod[2].at_mm: the web between the seats of D1 and D2 is 1.3 mm, at least 2.4 is needed\n"
        "  fix: set them at least 5.6 mm apart, or use thinner rods"
    ]


def test_a_seat_over_the_booms_end_is_a_fault_of_the_tail() -> None:
    boom = replace(samples.GAUGE.boom, tail_mm=1.0)
    _, _, faults = seats(replace(samples.GAUGE, boom=boom))
    assert faults == ["boom.tail_mm: the seat of R runs over the boom's end\n  fix: at least 2.6 mm"]


def test_the_pocket_leaves_a_seat_on_both_sides_of_a_narrow_boom() -> None:
    seat, _, _ = seats(samples.CAMERA)
    pocket = next(g.pocket for g in seat.grooves if g.tag == "DE")
    assert pocket is not None
    assert pocket.half_y_mm < seat.half_width_mm
