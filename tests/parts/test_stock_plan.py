"""The stock plan's table: what is on it adds up to the bars and to the design."""

from pathlib import Path

import pytest
import samples

from boomwright.errors import MeasureError
from boomwright.formats.csvtable import CSV
from boomwright.parts.stock_plan import FILE, StockPlanPart
from boomwright.pieces import Probe
from boomwright.plan.plan import make_plan
from boomwright.shop.profile import Shop


def written(design, folder):
    plan = make_plan(design, Shop())
    (piece,) = StockPlanPart().build(plan)
    path = folder / Path(FILE).name
    CSV.write(piece, path)
    return plan, CSV.read(path)


@pytest.mark.parametrize("design", samples.FITTING, ids=lambda d: d.name)
def test_the_table_holds_what_is_expected_of_it(design, tmp_path):
    plan, reading = written(design, tmp_path)
    for e in StockPlanPart().expect(plan):
        assert CSV.measure(reading, e.probe, []) == pytest.approx(e.expected, abs=e.allowed), e.what


def test_a_rod_of_another_length_is_noticed(tmp_path):
    plan, _ = written(samples.GAUGE, tmp_path)
    path = tmp_path / Path(FILE).name
    path.write_text(path.read_text().replace("D1,148.00", "D1,147.00"))
    reading = CSV.read(path)
    wrong = [
        e.what for e in StockPlanPart().expect(plan) if abs(CSV.measure(reading, e.probe, []) - e.expected) > e.allowed
    ]
    assert wrong == ["D1 finished length, 1 piece"]


def test_a_sum_over_no_rows_is_no_zero(tmp_path):
    _, reading = written(samples.GAUGE, tmp_path)
    for where, message in (({"tag": "D9"}, "no row where"), ({"colour": "red"}, "no column 'colour'")):
        with pytest.raises(MeasureError, match=message):
            CSV.measure(reading, Probe("column_sum", {"column": "length_mm", "where": where}), [])
