"""What `show parts` tells: every part with its purpose, its process, and when it is left out, on 100 columns."""

from dataclasses import replace

import samples

from boomwright.design.model import Band, Boom, Design, Driven, Feed, Seat
from boomwright.listing import listing
from boomwright.parts.catalogue import PARTS
from boomwright.pieces import NEVER, Part
from boomwright.plan.plan import make_plan
from boomwright.shop.profile import Laser, Printer, Shop

LONE = Design(
    "lone-loop",
    Band(863.0, 870.0, 866.5),
    Driven("loop", 0.0, 2.0, "ideal", 4.0, perimeter_mm=900.0, shape="circle"),
    Feed(50.0, None),
    (),
    Boom("round", 12.0, "beech", 30.0, 20.0),
    Seat(),
)
SMALL = Shop(Printer(bed_mm=(20.0, 20.0, 60.0)), Laser(sheet_size_mm=(60.0, 40.0)))


def test_a_part_that_can_be_left_out_says_when():
    for part in PARTS:
        can_be = type(part).left_out is not Part.left_out
        assert can_be == (part.left_out_when != NEVER), part.name


def test_those_that_say_so_are_left_out_of_a_design_that_needs_hardly_any():
    """One of these leaves out every part that says when; what says never is never left out."""
    plans = [make_plan(LONE, SMALL), make_plan(samples.GAUGE, SMALL), make_plan(samples.TUBE_915, SMALL)]
    for part in PARTS:
        reasons = [reason for plan in plans if (reason := part.left_out(plan))]
        assert bool(reasons) == (part.left_out_when != NEVER), (part.name, reasons)


def test_the_listing_fits_a_terminal_and_tells_all():
    text = listing("parts")
    assert max(map(len, text.splitlines())) <= 100
    flat = " ".join(text.split())
    for part in PARTS:
        assert f"{part.name} ({', '.join(part.processes)}) {part.purpose} left out when: {part.left_out_when}" in flat


def test_nobody_is_told_to_buy_a_perfect_conductor():
    design = replace(samples.GAUGE, driven=replace(samples.GAUGE.driven, material="ideal"))
    keys = {size.key for size in make_plan(design, Shop()).sizes}
    assert not any("ideal" in key for key in keys)
    assert "stock.brass.3.bars" in keys


def test_a_rod_longer_than_the_bed_is_to_be_checked_with_a_rule():
    sizes = {size.key: size for size in make_plan(samples.GAUGE, Shop(Printer(bed_mm=(165.0, 165.0, 100.0)))).sizes}
    rule = sizes["gauge.R.rule_mm"]
    assert rule.value == 168.0
    assert rule.origin == "longer than the bed of 165 takes: check it with a steel rule, within 0.2 (ISO 2768 fine)"
    assert "gauge.D1.go_mm" in sizes
    assert "gauge.R.go_mm" not in sizes
