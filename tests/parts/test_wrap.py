"""The wrap template: every seat's line at its place along the strip, on every page, and round the boom once."""

import math
from dataclasses import replace

import pytest
import samples

from boomwright.errors import MeasureError
from boomwright.formats.pdf import PDF
from boomwright.parts.wrap import WrapTemplate
from boomwright.plan.plan import make_plan
from boomwright.plan.wrap import MARGIN_MM
from boomwright.shop.profile import Shop

LONG = replace(samples.GAUGE, rods=(*samples.GAUGE.rods, samples.rod("D3", 900.0, 140, 3, 3)))


def written(design, folder):
    plan = make_plan(design, Shop())
    (piece,) = WrapTemplate().build(plan)
    PDF.write(piece, folder / "wrap-template.pdf")
    return plan, PDF.read(folder / "wrap-template.pdf")


@pytest.mark.parametrize("design", [*samples.FITTING, LONG], ids=lambda d: d.name)
def test_every_line_is_where_it_is_expected(design, tmp_path):
    plan, reading = written(design, tmp_path)
    found = WrapTemplate().expect(plan)
    assert sum(" line on page" in e.what for e in found) >= len(design.rods)
    for e in found:
        assert PDF.measure(reading, e.probe, []) == pytest.approx(e.expected, abs=e.allowed), e.what


def test_places_and_girth_read_by_hand(tmp_path):
    """Tail 30: R stands 30 mm from the left end, DE 92, D1 125; a 12 mm boom is 37.70 round."""
    _, reading = written(samples.GAUGE, tmp_path)
    (page,) = reading.pages
    seats = [line for line in page.lines if line.layer == "SEAT"]
    assert [s.start[0] - MARGIN_MM for s in seats] == pytest.approx([30.0, 92.0, 104.0, 125.0, 180.0], abs=1e-3)
    for s in seats:
        assert s.end[1] - s.start[1] == pytest.approx(12.0 * math.pi, abs=1e-3)


def test_pages_share_a_strip_and_its_lines(tmp_path):
    _, reading = written(LONG, tmp_path)
    assert len(reading.pages) == 4
    joins = [
        [line.start[0] for line in p.lines if line.layer == "MATCH" and line.start[0] == line.end[0]]
        for p in reading.pages
    ]
    assert [len(set(j)) for j in joins] == [1, 2, 2, 1]
    # From the middle of one join to the middle of the next is a page's strip less what it shares.
    assert max(joins[1]) - min(joins[1]) == pytest.approx(297.0 - 2 * 10.0 - 15.0, abs=1e-3)


def test_holes_are_marked_a_quarter_of_the_girth_from_the_top(tmp_path):
    _, reading = written(samples.TUBE_915, tmp_path)
    (page,) = reading.pages
    middle = next(line.start[1] for line in page.lines if line.layer == "MIDDLE")
    holes = [line.start[1] - middle for line in page.lines if line.layer == "HOLE"]
    assert holes == pytest.approx([15.0, -15.0] * 2, abs=1e-3)


def test_a_moved_rod_is_noticed(tmp_path):
    _, reading = written(samples.GAUGE, tmp_path)
    rods = (*samples.GAUGE.rods[:2], replace(samples.GAUGE.rods[2], at_mm=150.1))
    wrong = []
    for e in WrapTemplate().expect(make_plan(replace(samples.GAUGE, rods=rods), Shop())):
        try:
            good = abs(PDF.measure(reading, e.probe, []) - e.expected) <= e.allowed
        except MeasureError:
            good = False
        wrong += [] if good else [e.what]
    assert wrong == ["D2 line on page 1"]


def test_a_hostile_title_stays_words(tmp_path):
    plan, reading = written(replace(samples.GAUGE, title="a) Tj ET /SEAT BMC 1 1 m 9 9 l S \\("), tmp_path)
    assert next(w for w in reading.pages[0].words if "wrap template" in w).startswith(
        "a) Tj ET /SEAT BMC 1 1 m 9 9 l S \\(: wrap template"
    )
    assert sum(line.layer == "SEAT" for line in reading.pages[0].lines) == len(plan.seat.grooves)
