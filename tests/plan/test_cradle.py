"""The cradle's plan: one plane for every diameter, clear of the adhesive, as wide apart as the rods allow."""

import math
from dataclasses import replace

import pytest
import samples

from boomwright.design.model import Band, Boom, Design, Driven, Seat
from boomwright.plan.cradle import CradlePlan, cradle_left_out, held_conductors, plan_cradle
from boomwright.plan.notch import resting_axis_height_mm
from boomwright.plan.seat import SeatPlan, plan_seat
from boomwright.shop.profile import CradleShop, Printer, Shop


def cradle_of(design: Design, shop: Shop | None = None) -> tuple[CradlePlan, SeatPlan, list[str]]:
    assert design.boom is not None
    assert design.seat is not None
    seat, _, faults = plan_seat(design, design.boom, design.seat)
    assert faults == []
    cradle, _, found = plan_cradle(design, design.boom, shop or Shop(), seat)
    return cradle, seat, [str(fault) for fault in found]


@pytest.mark.parametrize("design", samples.FITTING, ids=lambda d: d.name)
def test_every_axis_rests_on_one_plane(design: Design) -> None:
    cradle, _, faults = cradle_of(design)
    assert faults == []
    for bearer in cradle.bearers:
        for notch in bearer.notches:
            height = resting_axis_height_mm(notch.apex_mm, 2.0 * notch.radius_mm)
            assert height == pytest.approx(cradle.axis_height_mm, abs=1e-12)
    assert {n.tag for b in cradle.bearers for n in b.notches} == {h.tag for h in held_conductors(design)}


@pytest.mark.parametrize("design", samples.FITTING, ids=lambda d: d.name)
def test_nothing_comes_nearer_to_a_bond_line_than_the_relief(design: Design) -> None:
    cradle, seat, _ = cradle_of(design)
    lowest = cradle.axis_height_mm - max(b.high_z_mm for b in seat.bond_lines)
    assert lowest - 4.0 >= cradle.relief_mm - 1e-9  # the base plate is 4 mm thick
    for bearer in cradle.bearers:
        assert bearer.y_mm[0] - seat.half_width_mm >= cradle.relief_mm - 1e-9
    for saddle in cradle.saddles:
        for bond in seat.bond_lines:
            gap = max(bond.at_mm - bond.half_x_mm - saddle.x_mm[1], saddle.x_mm[0] - bond.at_mm - bond.half_x_mm)
            assert gap >= cradle.relief_mm - 1e-9


def test_short_rods_on_a_six_millimetre_boom_keep_full_rails() -> None:
    """Worked case of the product's rules: 6 mm boom, 2 mm rods of 19 mm: rails between |y| = 4.5 and 8.5."""
    cradle, _, _ = cradle_of(samples.CAMERA)
    assert cradle.rails == pytest.approx((4.5, 8.5))


def test_rods_too_short_for_rails_lie_in_end_pockets() -> None:
    design = replace(samples.CAMERA, boom=Boom("round", 12.0, "beech", 10.0, 8.0))
    cradle, _, faults = cradle_of(design)
    assert cradle.rails is None
    assert faults == []
    for bearer in cradle.bearers:
        assert bearer.y_mm[0] == pytest.approx(7.5)


def test_rods_too_short_to_hold_are_refused_with_the_figures() -> None:
    design = replace(samples.CAMERA, boom=Boom("round", 14.0, "beech", 10.0, 8.0))
    _, _, faults = cradle_of(design)
    assert faults == [
        "rod[1].length_mm: D1 reaches 9.5 mm from the middle, boom and relief take 8.5 of it: 1 is left to hold it by, "
        "at least 1.5 is needed\n  fix: use a narrower boom, or a smaller cradle.relief_mm in the shop file"
    ]


@pytest.mark.parametrize("design", samples.FITTING, ids=lambda d: d.name)
def test_rails_are_at_least_two_fifths_of_the_shortest_rod_apart(design: Design) -> None:
    cradle, _, _ = cradle_of(design)
    assert cradle.rails is not None
    shortest = min(2.0 * h.reach_mm for h in cradle.held)
    assert sum(cradle.rails) >= 0.4 * shortest


def test_stops_centre_each_rod_with_the_slide_clearance() -> None:
    cradle, _, _ = cradle_of(samples.GAUGE)
    inner = {stop.tag: stop.y_mm[0] for stop in cradle.stops}
    assert inner == pytest.approx({"R": 84.15, "DE": 79.15, "D1": 74.15, "D2": 72.65})


def test_round_saddle_touches_the_boom_where_the_film_is_the_glue_gap() -> None:
    cradle, seat, _ = cradle_of(samples.GAUGE)
    axis = cradle.axis_height_mm - seat.axis_mm
    for saddle in cradle.saddles:
        distance_to_face = (axis - saddle.low_mm) / math.sqrt(2.0)
        assert distance_to_face == pytest.approx(seat.half_width_mm, abs=1e-12)


def test_square_saddle_carries_the_booms_face() -> None:
    cradle, seat, _ = cradle_of(samples.SQUARE_915)
    for saddle in cradle.saddles:
        assert saddle.low_mm == pytest.approx(cradle.axis_height_mm - seat.top_mm)
        assert saddle.channel_half_mm == pytest.approx(seat.half_width_mm + 0.15)


def test_a_bed_is_used_either_way_round() -> None:
    wide = cradle_of(samples.CAMERA, Shop(printer=Printer(bed_mm=(70.0, 40.0, 50.0))))[2]
    deep = cradle_of(samples.CAMERA, Shop(printer=Printer(bed_mm=(40.0, 70.0, 50.0))))[2]
    assert wide == deep == []


def test_a_cradle_higher_than_the_printer_builds_is_refused() -> None:
    _, _, faults = cradle_of(samples.GAUGE, Shop(printer=Printer(bed_mm=(220.0, 220.0, 9.0))))
    assert faults == [
        "printer.bed_mm: the cradle is 9.8 mm high, the printer builds 9\n  fix: use a printer that builds higher"
    ]


@pytest.mark.parametrize("design", samples.FITTING, ids=lambda d: d.name)
def test_what_fits_the_bed_stays_one_piece(design: Design) -> None:
    cradle, _, _ = cradle_of(design)
    assert [section.stem for section in cradle.sections] == ["cradle-1"]
    assert cradle.joints == ()
    assert cradle.frame_of(cradle.sections[0]) == cradle.frame


def test_no_room_for_a_saddle_is_a_fault_of_the_tail() -> None:
    boom = replace(samples.GAUGE.boom, tail_mm=3.0)
    design = replace(samples.GAUGE, boom=boom, rods=samples.GAUGE.rods[:1], driven=samples.MIXED_1296.driven)
    design = replace(design, driven=replace(design.driven, at_mm=6.0), boom=replace(boom, nose_mm=3.0))
    _, _, faults = cradle_of(design)
    assert [fault.split(":")[0] for fault in faults] == ["boom.tail_mm"]


def test_short_tail_moves_the_saddle_between_rods() -> None:
    design = replace(samples.GAUGE, boom=replace(samples.GAUGE.boom, tail_mm=3.0))
    cradle, _, faults = cradle_of(design)
    assert faults == []
    assert len(cradle.saddles) == 2
    assert cradle.saddles[0].x_mm[0] > 0.0


def test_a_wide_relief_moves_the_rails_out() -> None:
    near, _, _ = cradle_of(samples.CAMERA, Shop(cradle=CradleShop(relief_mm=1.5, rail_mm=8.0)))
    assert near.rails == pytest.approx((4.5, 8.5))
    far, _, _ = cradle_of(samples.CAMERA, Shop(cradle=CradleShop(relief_mm=2.5)))
    assert far.rails == pytest.approx((5.5, 8.5))


def test_without_a_conductor_on_the_datum_plane_there_is_no_cradle() -> None:
    lone = Design(
        "loop",
        Band(863.0, 870.0, 866.5),
        Driven("loop", 0.0, 2.0, "copper", 4.0, perimeter_mm=350.0, shape="circle"),
        boom=Boom("round", 12.0, "beech", 30.0, 20.0),
        seat=Seat(),
    )
    assert cradle_left_out(lone) is not None
    assert cradle_left_out(samples.GAUGE) is None
