"""The cradle parted: nothing is cut through, every piece fits the bed and carries the boom, play stays in budget."""

import math
from dataclasses import replace
from itertools import combinations, pairwise
from pathlib import Path

import pytest
import samples
import shapely

from boomwright.design.model import Boom, Design, Driven
from boomwright.design.tomlfile import load_design
from boomwright.plan.cradle import held_conductors, plan_cradle
from boomwright.plan.cradle_budget import joints_before
from boomwright.plan.cradle_model import CradlePlan, Section
from boomwright.plan.seat import plan_seat
from boomwright.plan.size import Size
from boomwright.shop.profile import Accuracy, Printer, Shop

EXAMPLES = Path(__file__).parents[2] / "examples"
GATEWAY = load_design(EXAMPLES / "gateway-433.toml")
STRAIGHT = replace(
    samples.LONG_145, name="straight", driven=Driven("straight", 420.0, 6.0, "aluminium", 10.0, length_mm=980.0)
)
DENSE = replace(
    samples.CAMERA,
    name="dense",
    rods=(samples.CAMERA.rods[0], *(samples.rod(f"D{i}", 9.0 + 8.0 * i, 19.0, 2.0, i) for i in range(1, 40))),
)
CLOSE = replace(  # two conductors whose ends one outrigger has to carry
    GATEWAY,
    name="close",
    driven=Driven("straight", 103.0, 6.0, "copper", 6.0, length_mm=321.0),
    rods=(*(r for r in GATEWAY.rods if r.tag != "D1"), replace(GATEWAY.rods[1], at_mm=121.0)),
)
SMALL_BED = Shop(printer=Printer(bed_mm=(120.0, 120.0, 120.0)))
CASES = [
    (GATEWAY, Shop()),
    (samples.LONG_145, Shop()),
    (STRAIGHT, Shop()),
    (DENSE, Shop()),
    (replace(CLOSE, rods=tuple(sorted(CLOSE.rods, key=lambda r: r.at_mm))), Shop()),
    (samples.GAUGE, SMALL_BED),
    (samples.LOOP_868, SMALL_BED),
    (samples.TUBE_915, SMALL_BED),
    (samples.LONG_145, Shop(printer=Printer(bed_mm=(300.0, 200.0, 200.0)))),
]
every_case = pytest.mark.parametrize(
    ("design", "shop"), CASES, ids=[f"{d.name}-{s.printer.bed_mm[0]:g}" for d, s in CASES]
)


def cradle_of(design: Design, shop: Shop | None = None) -> tuple[CradlePlan, list[Size], list[str]]:
    assert design.boom is not None
    assert design.seat is not None
    seat, _, faults = plan_seat(design, design.boom, design.seat)
    assert faults == []
    cradle, sizes, found = plan_cradle(design, design.boom, shop or Shop(), seat)
    return cradle, sizes, [str(fault) for fault in found]


def along_x(cradle: CradlePlan) -> list[Section]:
    return [section for section in cradle.sections if section.side == 0]


def cuts_of(cradle: CradlePlan) -> list[float]:
    return [section.tenons[0].at_mm[0] for section in along_x(cradle)[:-1]]


def base_of(section: Section, clearance_mm: float) -> shapely.Geometry:
    plates = [shapely.box(x[0], y[0], x[1], y[1]) for x, y in section.base]
    tenons = [shapely.Polygon(d.outline()) for d in section.tenons]
    sockets = [shapely.Polygon(d.outline(clearance_mm)) for d in section.sockets]
    return shapely.union_all([*plates, *tenons]).difference(shapely.union_all(sockets))


def walls_of(section: Section) -> list[shapely.Polygon]:
    """Outlines of all that stands on a section's base."""
    spans = [(b.x_mm, (side * b.y_mm[0], side * b.y_mm[1])) for b in section.bearers for side in (1, -1)]
    spans += [(b.x_mm, b.y_mm) for b in section.blocks]
    spans += [(s.x_mm, (-s.outer_half_mm, s.outer_half_mm)) for s in section.saddles]
    return [shapely.box(min(x), min(y), max(x), max(y)) for x, y in spans]


@every_case
def test_every_conductor_lies_in_one_section_and_nothing_is_cut(design: Design, shop: Shop) -> None:
    cradle, _, faults = cradle_of(design, shop)
    assert faults == []
    sections = [{n.tag for b in section.bearers for n in b.notches} for section in along_x(cradle)]
    assert set.union(*sections) == {h.tag for h in held_conductors(design)}
    assert all(one.isdisjoint(other) for one, other in combinations(sections, 2))
    for cut in cuts_of(cradle):
        for held in cradle.held:
            assert abs(held.at_mm - cut) >= held.radius_mm * math.sqrt(2.0) + 1.2 - 1e-9  # a wall of three nozzles
        for low, high in [*(s.x_mm for s in cradle.saddles), *(s.x_mm for s in cradle.stops)]:
            assert not low < cut < high


@every_case
def test_every_section_fits_the_bed_and_carries_the_boom(design: Design, shop: Shop) -> None:
    cradle, _, _ = cradle_of(design, shop)
    bed = sorted(shop.printer.bed_mm[:2])
    for section in cradle.sections:
        size = sorted(high - low for low, high in section.plan_extent_mm)
        assert size[0] <= bed[0] + 1e-9
        assert size[1] <= bed[1] + 1e-9
    assert all(section.saddles for section in along_x(cradle))
    middles = sorted(saddle.middle_mm for saddle in cradle.saddles)
    assert max(b - a for a, b in pairwise(middles)) <= 260.0


@every_case
def test_each_base_is_one_plate_under_all_that_stands_on_it_and_none_overlap(design: Design, shop: Shop) -> None:
    cradle, _, _ = cradle_of(design, shop)
    bases = [base_of(section, shop.printer.press_clearance_mm) for section in cradle.sections]
    for section, base in zip(cradle.sections, bases, strict=True):
        assert base.geom_type == "Polygon"
        for wall in walls_of(section):
            assert wall.difference(base).area < 1e-6
        for label in section.labels:
            assert all(base.contains(shapely.Point(point)) for line in label.lines for point in line)
    for one, other in combinations(bases, 2):
        assert one.intersection(other).area < 1e-9


@every_case
def test_both_ends_of_every_conductor_are_stopped_with_the_slide_clearance(design: Design, shop: Shop) -> None:
    cradle, _, _ = cradle_of(design, shop)
    found = {
        (block.tag, block.y_mm[0] > 0.0): min(abs(y) for y in block.y_mm)
        for section in cradle.sections
        for block in section.blocks
        if block.role == "stop"
    }
    tips = {(h.tag, up): h.tip_mm + shop.printer.slide_clearance_mm for h in cradle.held for up in (True, False)}
    del_front = {key: value for key, value in tips.items() if key[0] != "DE-front"}
    assert found == pytest.approx(del_front)


def test_cuts_lie_midway_between_conductors_where_that_will_do() -> None:
    cradle, sizes, _ = cradle_of(GATEWAY)
    origins = {size.key: size.origin for size in sizes}
    assert cuts_of(cradle)[:2] == pytest.approx([155.5, 338.5])
    assert origins["cradle.cut.1_mm"] == "midway between DE and D1"
    assert origins["cradle.cut.2_mm"] == "midway between D1 and D2"


def test_long_ways_without_rods_take_sections_of_their_own() -> None:
    cradle, _, _ = cradle_of(samples.LONG_145)
    bare = [section for section in along_x(cradle) if not any(b.notches for b in section.bearers)]
    assert len(bare) >= 3
    assert len(along_x(cradle)) == 10


def test_rods_wider_than_the_bed_lie_level_on_rests_before_their_stops() -> None:
    cradle, _, _ = cradle_of(samples.LONG_145)
    for held in (h for h in cradle.held if h.tag != "DE-front"):
        rests = [b for s in cradle.sections for b in s.blocks if b.role == "rest" and b.tag == held.tag]
        assert len(rests) == 2
        for rest in rests:
            assert rest.top_mm == pytest.approx(cradle.axis_height_mm - held.radius_mm)
            assert min(abs(y) for y in rest.y_mm) == pytest.approx(held.tip_mm - 6.0)
            assert rest.x_mm[0] < held.at_mm - held.radius_mm
            assert rest.x_mm[1] > held.at_mm + held.radius_mm


def test_close_neighbours_share_an_outrigger() -> None:
    cradle, _, _ = cradle_of(*CASES[4])
    assert ("DE", "D1") in {section.serves for section in cradle.sections}


def test_rails_stand_as_far_apart_as_the_bed_allows_and_the_tilt_is_stated() -> None:
    cradle, sizes, _ = cradle_of(GATEWAY)
    stated = {size.key: size.value for size in sizes}
    assert cradle.rails is not None
    assert 2.0 * cradle.rails[1] > 0.9 * 220.0
    apart = sum(cradle.rails)
    assert stated["cradle.tilt_mrad"] == pytest.approx(1e3 * 0.010 / apart)
    assert stated["cradle.tilt_at_tip_mm"] == pytest.approx(0.010 / apart * 174.5)


def test_two_metres_stay_within_the_budget_of_the_built_in_shop() -> None:
    cradle, sizes, faults = cradle_of(samples.LONG_145)
    assert faults == []
    last = along_x(cradle)[-1]
    assert len(joints_before(cradle, last)) == 9
    expected = math.sqrt(9 * (0.05 * math.sqrt(2.0)) ** 2 / 12.0 + 0.01**2 / 3.0)
    assert {s.key: s.value for s in sizes}["cradle.budget.position_mm"] == pytest.approx(expected)
    outermost = max(cradle.sections, key=lambda s: abs(s.side) * max(abs(y) for y in s.plan_extent_mm[1]))
    assert len(joints_before(cradle, outermost)) == 2


def test_a_budget_that_cannot_be_met_names_key_and_fix() -> None:
    shop = Shop(printer=Printer(press_clearance_mm=0.1), accuracy=Accuracy(position_mm=0.1))
    _, _, faults = cradle_of(samples.LONG_145, shop)
    assert faults == [
        "printer.press_clearance_mm: 0.1 gives the 9 joints before cradle-10 so much play that places there are "
        "0.123 mm off (one standard deviation), more than accuracy.position_mm 0.1\n"
        "  fix: a press clearance of at most 0.081, a printer with a larger bed, or a wider accuracy.position_mm"
    ]


def test_a_bed_that_takes_no_section_is_a_fault() -> None:
    _, _, faults = cradle_of(samples.CAMERA, Shop(printer=Printer(bed_mm=(34.0, 34.0, 100.0))))
    assert faults == [
        "printer.bed_mm: the cradle cannot be parted for a bed of 34 x 34: no section of it would hold rods, saddle "
        "and joint\n  fix: use a printer with a larger bed, shorten boom or rods, or name the other parts with --only"
    ]


def test_a_boom_too_wide_for_rails_on_the_bed_is_a_fault() -> None:
    design = replace(GATEWAY, boom=Boom("square", 60.0, "beech", 60.0, 60.0))
    _, _, faults = cradle_of(design, Shop(printer=Printer(bed_mm=(80.0, 80.0, 100.0))))
    assert faults == [
        "printer.bed_mm: leaves no room for rails: boom and relief take 31.5 mm on each side of the middle\n"
        "  fix: use a printer with a larger bed, or a narrower boom"
    ]
