"""The former: posts less spring-back touch the wire where bends begin, marks follow the wire's length, gaps stay."""

import math
from dataclasses import replace

import pytest
import samples

from boomwright.design.centreline import developed_length_mm
from boomwright.parts.former import FormerPart
from boomwright.plan.former import plan_former
from boomwright.plan.plan import make_plan
from boomwright.shop.profile import FormerShop, Printer, Shop

GAUGE_QUARTERS = replace(samples.GAUGE, driven=replace(samples.GAUGE.driven, bend_radius_mm=3.0))


def sizes_of(design):
    return {s.key: s.value for s in plan_former(design, Shop())[1]}


def test_marks_of_a_folded_element_by_hand():
    """158 long, 12 spacing, wire 2, gap 4: legs of 70 and 144, half turns of 6 pi; post (12 - 2) / 2 less 3 %."""
    sizes = sizes_of(samples.GAUGE)
    assert sizes["former.bend.1.mark_mm"] == pytest.approx(70.0)
    assert sizes["former.bend.2.mark_mm"] == pytest.approx(70.0 + 6.0 * math.pi + 144.0)
    assert sizes["former.bend.1.post_mm"] == pytest.approx(5.0 * 0.97)
    assert sizes["former.developed_mm"] == pytest.approx(developed_length_mm(samples.GAUGE.driven))
    # As much wire lies on the smaller post as on the finished bend.
    on_post = math.radians(sizes["former.bend.1.turn_deg"]) * (5.0 * 0.97 + 1.0)
    assert on_post == pytest.approx(6.0 * math.pi)


def test_a_square_loop_has_four_posts_at_its_corners():
    former, _ = plan_former(samples.LOOP_2450, Shop())
    driven = samples.LOOP_2450.driven
    assert len(former.posts) == 4
    inside, wire = 2.0 * driven.diameter_mm, driven.diameter_mm
    side = (126.0 + (8.0 - 2.0 * math.pi) * (inside + wire / 2.0)) / 4.0
    straight = side - 2.0 * (inside + wire / 2.0)
    quarter = math.pi / 2.0 * (inside + wire / 2.0)
    marks = [bend.mark_mm for bend in former.bends]
    first = straight / 2.0 - driven.gap_mm / 2.0
    assert marks == pytest.approx([first + i * (straight + quarter) for i in range(4)])
    assert all(0.0 < bend.middle(wire)[1] < side for bend in former.posts)


def test_no_springback_leaves_the_bend_as_it_is():
    shop = Shop(former=FormerShop(springback_percent=0.0))
    former, _ = plan_former(GAUGE_QUARTERS, shop)
    assert [bend.turn_deg for bend in former.bends] == pytest.approx([90.0] * 4)
    # Centres of the bends of the element itself: 3 + 1 inside both conductors and the tips.
    assert [bend.middle(2.0) for bend in former.posts] == [
        pytest.approx(p, abs=1e-9) for p in ((74.0, 4.0), (74.0, 8.0), (-74.0, 8.0), (-74.0, 4.0))
    ]


def test_an_element_longer_than_the_bed_is_bent_on_one_post():
    long = replace(samples.GAUGE, driven=replace(samples.GAUGE.driven, length_mm=900.0))
    former, sizes = plan_former(long, Shop())
    assert former.is_corner
    assert (len(former.posts), len(former.bends)) == (1, 2)
    assert former.x_mm[1] - former.x_mm[0] < 220.0
    assert sum(s.key.endswith("mark_mm") for s in sizes) == 2


def test_a_loop_larger_than_the_bed_is_left_out_with_the_reason():
    wide = replace(samples.LOOP_868, driven=replace(samples.LOOP_868.driven, perimeter_mm=900.0))
    reason = FormerPart().left_out(make_plan(wide, Shop()))
    assert reason is not None
    assert "is larger than the bed: bend the loop round a drum" in reason


def test_the_jig_of_a_straight_element():
    former, sizes = plan_former(samples.TUBE_915, Shop())
    assert (former.bends, former.closed, former.gap_mm) == ((), True, 22.0)
    assert [s.key for s in sizes] == ["former.gap_mm", "former.length_mm"]
    small = plan_former(samples.TUBE_915, Shop(printer=Printer(bed_mm=(150.0, 150.0, 100.0))))[0]
    assert not small.closed
    assert small.x_mm[1] - small.x_mm[0] <= 150.0


@pytest.mark.parametrize("name", ["gauge-868", "camera-folded", "loop-868", "loop-2450", "tube-915"])
def test_one_sound_solid_that_leaves_the_wire_its_place(name):
    """The first leg of the wire, on the base between the walls and at the stop, overlaps nothing of the former."""
    from boomwright.parts.former import _former, _jig
    from boomwright.parts.solids import cylinder
    from boomwright.plan.compensation import NOMINAL, Offsets
    from boomwright.plan.former import BASE_MM

    design = next(d for d in samples.FITTING if d.name == name)
    former, _ = plan_former(design, Shop())
    for offsets in (NOMINAL, Offsets(outline_growth_mm=0.12)):
        solid = (_former if former.bends else _jig)(former, offsets)
        assert solid.isValid()
        assert solid.BoundingBox().zmin == pytest.approx(0.0, abs=1e-6)
        if former.leg_mm > 0.0:
            r = former.wire_mm / 2.0
            leg = cylinder((former.gap_mm / 2.0, 0.0, BASE_MM + r), (1, 0, 0), r, former.leg_mm)
            assert sum(s.Volume() for s in solid.intersect(leg).Solids()) < 1e-6


def test_a_round_loop_by_hand_and_its_post_where_it_winds_past_itself():
    """Perimeter 350 less the gap of 4 is 346 of wire; wire 2 on a post of 350 / (2 pi) - 1 less 3 %."""
    former, sizes = plan_former(samples.LOOP_868, Shop())
    values = {size.key: size.value for size in sizes}
    assert values["former.developed_mm"] == pytest.approx(346.0)
    post_mm = (350.0 / (2.0 * math.pi) - 1.0) * 0.97
    assert values["former.bend.1.post_mm"] == pytest.approx(post_mm)
    turn_deg = math.degrees(346.0 / (post_mm + 1.0))
    assert values["former.bend.1.turn_deg"] == pytest.approx(turn_deg)
    assert turn_deg > 360.0
    assert former.post_top_mm == pytest.approx(4.0 + 2 * 2.0 + 2.0)  # base, two layers of wire, and what holds them
    assert any(label.text == "=346.0" for label in former.labels)
    assert plan_former(samples.GAUGE, Shop())[0].post_top_mm == pytest.approx(4.0 + 2.0 + 2.0)
