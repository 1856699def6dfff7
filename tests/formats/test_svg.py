"""SVG: a chart is read back against the numbers on its axes and rings, and nothing in it may act."""

import pytest

from boomwright.errors import MeasureError
from boomwright.formats.svg import SVG
from boomwright.pieces import PicturePiece, Probe

CHART = """<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 100 100">
<text x="10" y="95" data-axis="x">860</text><text x="90" y="95" data-axis="x">880</text>
<text x="4" y="84" data-axis="y" data-shift="4">\u221210</text><text x="4" y="24" data-axis="y" data-shift="4">10</text>
<polyline data-curve="gain" points="10,80 50,20 90,50"/>
<circle data-curve="currents" cx="10" cy="50" r="2"/><circle data-curve="currents" cx="90" cy="20" r="2"/>
</svg>
"""
ROUND = """<svg xmlns="http://www.w3.org/2000/svg">
<circle cx="50" cy="50" r="40" data-level="10"/><circle cx="50" cy="50" r="20" data-level="-10"/>
<polygon data-curve="e-plane" points="90,50 50,30 40,50 50,70"/>
</svg>
"""


def read(text, tmp_path):
    path = tmp_path / "chart.svg"
    SVG.write(PicturePiece("chart", "rf", text), path)
    return SVG.read(path)


@pytest.mark.parametrize(
    ("curve", "at", "value"),
    [
        ("gain", 860.0, -10.0),
        ("gain", 870.0, 10.0),
        ("gain", 880.0, 0.0),
        ("gain", 865.0, 0.0),
        ("currents", 860.0, 0.0),
        ("currents", 880.0, 10.0),
    ],
)
def test_a_curve_is_read_by_the_numbers_on_the_axes(curve, at, value, tmp_path):
    found = SVG.measure(read(CHART, tmp_path), Probe("value", {"curve": curve, "at": at}), [])
    assert found == pytest.approx(value, abs=1e-9)


@pytest.mark.parametrize(("at_deg", "level"), [(0.0, 10.0), (90.0, -10.0), (180.0, -20.0), (-90.0, -10.0)])
def test_a_cut_is_read_by_the_numbers_of_the_rings(at_deg, level, tmp_path):
    probe = Probe("level", {"curve": "e-plane", "at_deg": at_deg})
    assert SVG.measure(read(ROUND, tmp_path), probe, []) == pytest.approx(level)


def test_counts(tmp_path):
    reading = read(CHART, tmp_path)
    assert SVG.measure(reading, Probe("curve_count"), []) == 2.0
    assert SVG.measure(reading, Probe("point_count", {"curve": "gain"}), []) == 3.0
    assert SVG.measure(reading, Probe("active_count"), []) == 0.0


@pytest.mark.parametrize(
    "active",
    [
        "<script>alert(1)</script>",
        '<rect onclick="alert(1)"/>',
        '<a href="https://example.org"><rect/></a>',
        "<foreignObject/>",
        '<image xmlns:xlink="http://www.w3.org/1999/xlink" xlink:href="x.png"/>',
    ],
)
def test_what_acts_or_leads_elsewhere_is_counted(active, tmp_path):
    reading = read(CHART.replace("</svg>", f"{active}</svg>"), tmp_path)
    assert SVG.measure(reading, Probe("active_count"), []) >= 1.0


WRONG = {
    "no curve": (CHART, Probe("value", {"curve": "loss", "at": 860.0}), "chart.svg: no curve 'loss'"),
    "beside": (CHART, Probe("value", {"curve": "gain", "at": 890.0}), "chart.svg: the curve does not reach there"),
    "no axis": (
        CHART.replace('data-axis="y"', ""),
        Probe("value", {"curve": "gain", "at": 870.0}),
        "chart.svg: fewer than two numbers on the y axis",
    ),
    "no rings": (CHART, Probe("level", {"curve": "gain", "at_deg": 0.0}), "chart.svg: fewer than two rings"),
}


@pytest.mark.parametrize("case", WRONG)
def test_what_a_chart_does_not_show_is_a_finding(case, tmp_path):
    text, probe, message = WRONG[case]
    with pytest.raises(MeasureError) as caught:
        SVG.measure(read(text, tmp_path), probe, [])
    assert str(caught.value) == message


@pytest.mark.parametrize(
    ("text", "start"),
    [
        ("", "chart.svg: not a readable SVG"),
        (CHART[: len(CHART) * 2 // 3], "chart.svg: not a readable SVG"),
        (CHART.replace(">880<", ">much<"), "chart.svg: not a readable SVG"),
        (CHART.replace("50,20", "50"), "chart.svg: not a readable SVG"),
        (CHART.replace('data-axis="x"', 'data-axis="z"'), "chart.svg: not a readable SVG"),
        ("<html/>", "chart.svg: not an SVG"),
        ("<!DOCTYPE svg [<!ENTITY a 'b'>]>" + CHART, "chart.svg: declares entities"),
    ],
    ids=["empty", "cut short", "no number", "no point", "odd axis", "other root", "entities"],
)
def test_what_is_no_chart_is_a_finding(text, start, tmp_path):
    with pytest.raises(MeasureError) as caught:
        read(text, tmp_path)
    assert str(caught.value).startswith(start)
