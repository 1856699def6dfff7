"""The groove guide: on the boom a file of the groove's width comes to rest at the groove's bottom."""

from dataclasses import replace
from itertools import pairwise

import pytest
import samples

from boomwright.parts.guide import GrooveGuide, _shape
from boomwright.parts.solids import box, cylinder
from boomwright.plan.compensation import NOMINAL, Offsets
from boomwright.plan.guide import plan_guide
from boomwright.plan.plan import make_plan
from boomwright.plan.seat import plan_seat
from boomwright.shop.profile import Printer, Shop

LONG = replace(samples.GAUGE, name="long", rods=(*samples.GAUGE.rods, samples.rod("D3", 330.0, 140, 3, 3)))


def planned(design, shop=None):
    return plan_guide(design, design.boom, design.seat, shop or Shop())[0]


def common(solid, tool):
    return sum(s.Volume() for s in solid.intersect(tool).Solids())


@pytest.mark.parametrize("design", [samples.GAUGE, samples.CAMERA, samples.MIXED_1296], ids=lambda d: d.name)
def test_the_file_rests_where_the_groove_ends(design):
    guide = planned(design)
    seats, _, _ = plan_seat(design, design.boom, design.seat)
    (section,) = guide.sections
    solid = _shape(guide, 1, NOMINAL)
    assert solid.isValid()
    boom = box(
        (guide.boom_start_mm - section.start_mm, 500.0),
        (-seats.half_width_mm, seats.half_width_mm),
        (guide.roof_mm, 99.0),
    )
    assert common(solid, boom) < 1e-6
    for groove in seats.grooves:
        x, r = groove.at_mm - section.start_mm, groove.radius_mm
        # The groove's axis under the boom's top line is as deep in the guide over its roof.
        z = guide.roof_mm + groove.depth_mm - r
        y = guide.outer_half_mm - 3.0
        assert common(solid, cylinder((x, y, z - 0.001), (0, 1, 0), r - 0.001, 2.0)) < 1e-6
        assert common(solid, cylinder((x, y, z + 0.01), (0, 1, 0), r, 2.0)) > 1e-6


def test_growth_is_taken_from_every_face():
    guide = planned(samples.GAUGE)
    nominal, drawn = (_shape(guide, 1, o) for o in (NOMINAL, Offsets(outline_growth_mm=0.12)))
    assert common(drawn, nominal) == pytest.approx(drawn.Volume(), rel=1e-9)
    assert drawn.Volume() < nominal.Volume()


def test_a_drilled_boom_gets_bores_led_over_eight_millimetres():
    guide = planned(samples.TUBE_915)
    assert guide.roof_mm == 8.0
    assert [(c.tag, c.width_mm, c.depth_mm) for c in guide.sections[0].cuts] == [
        ("R", pytest.approx(6.1), 0.0),
        ("D1", pytest.approx(5.1), 0.0),
    ]


def test_sections_share_a_seat_and_fit_the_bed():
    sections = planned(LONG).sections
    assert [[c.tag for c in s.cuts] for s in sections] == [["R", "DE", "DE-front", "D1", "D2"], ["D2", "D3"]]
    assert [s.has_stop for s in sections] == [True, False]
    assert all(s.end_mm - s.start_mm <= 220.0 for s in sections)


@pytest.mark.parametrize("bed_mm", [40.0, 60.0, 100.0, 150.0])
@pytest.mark.parametrize("design", [LONG, samples.TUBE_915, samples.MIXED_1296], ids=lambda d: d.name)
def test_seats_farther_apart_than_the_bed_are_reached_by_sections_that_butt(design, bed_mm):
    sections = planned(design, Shop(printer=Printer(bed_mm=(bed_mm, bed_mm, 100.0)))).sections
    assert all(0.0 < s.end_mm - s.start_mm <= bed_mm + 1e-9 for s in sections)
    seen = dict.fromkeys(c.tag for s in sections for c in s.cuts)
    seats, _, _ = plan_seat(design, design.boom, design.seat)
    assert list(seen) == [one.tag for one in (*seats.grooves, *seats.holes)]
    for before, after in pairwise(sections):
        butts = after.start_mm == pytest.approx(before.end_mm)
        laps = bool(after.cuts) and after.cuts[0] == (before.cuts or (None,))[-1]
        assert butts != laps
    for section in sections:
        for cut in section.cuts:
            assert section.start_mm < cut.at_mm - cut.width_mm / 2.0 < cut.at_mm + cut.width_mm / 2.0 < section.end_mm


def test_a_bed_shorter_than_one_seat():
    shop = Shop(printer=Printer(bed_mm=(20.0, 20.0, 100.0)))
    reason = GrooveGuide().left_out(make_plan(LONG, shop))
    assert reason == "a section over one seat is 19.2 mm long, the bed 20 mm: use the wrap template"


@pytest.mark.parametrize("design", [samples.GAUGE, samples.TUBE_915], ids=lambda d: d.name)
def test_no_face_hangs_over_more_than_45_degrees(design):
    guide = planned(design)
    for face in _shape(guide, 1, NOMINAL).Faces():
        assert -face.normalAt().z <= 0.7072 or face.Center().z < 1e-6
