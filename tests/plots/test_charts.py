"""The charts: what they show is what was solved; any title is safe; text fits and is read on light and dark ground."""

import re
from dataclasses import replace
from xml.etree import ElementTree

import numpy as np
import pytest
import samples

from boomwright.design.model import Band, Design, Driven, Spec
from boomwright.formats.svg import SVG
from boomwright.pieces import Probe
from boomwright.plots.axes import span_of
from boomwright.plots.currents import draw_currents
from boomwright.plots.gallery import pictures
from boomwright.plots.pattern import Cut, draw_pattern
from boomwright.plots.sheet import STYLE, WIDTH, number
from boomwright.plots.sweep import Quantity, draw_sweep
from boomwright.prediction import predict

NAMES = ["vswr", "return-loss", "gain", "front-to-back", "e-plane", "h-plane", "currents"]
SPEC = Spec(gain_dbi_min=9.0, front_to_back_db_min=11.0, vswr_max=1.6)
BEAM = replace(samples.GAUGE, name="beam-charts", spec=SPEC)
DIPOLE = Design("dipole-300", Band(298.0, 302.0, 300.0), Driven("straight", 0.0, 2.0, "ideal", 4.0, length_mm=474.0))
SVG_NAME = "{http://www.w3.org/2000/svg}"


def charts(design, at_mhz=()):
    return {piece.stem: piece.svg for piece in pictures(predict(design, at_mhz))}


@pytest.fixture(scope="module")
def drawn():
    return charts(BEAM)


def reading(text, tmp_path):
    path = tmp_path / "chart.svg"
    path.write_text(text, "utf-8")
    return SVG.read(path)


def shown(text, curve, at, tmp_path):
    return SVG.measure(reading(text, tmp_path), Probe("value", {"curve": curve, "at": at}), [])


def test_there_is_one_chart_a_quantity(drawn):
    assert list(drawn) == NAMES


@pytest.mark.parametrize(
    ("curve", "quantity"),
    [
        ("vswr", "vswr"),
        ("return-loss", "return_loss_db"),
        ("gain", "gain_dbi"),
        ("front-to-back", "front_to_back_db"),
    ],
)
def test_a_curve_holds_the_sweep(drawn, curve, quantity, tmp_path):
    found = predict(BEAM)
    values = getattr(found.sweep, quantity)
    for index in (found.in_band[0], found.middle, found.in_band[-1]):
        assert shown(drawn[curve], curve, found.frequency_mhz[index], tmp_path) == pytest.approx(
            values[index], abs=0.01 + 0.002 * abs(values[index])
        )


@pytest.mark.parametrize("plane", ["e", "h"])
def test_a_cut_holds_the_pattern(drawn, plane, tmp_path):
    found = predict(BEAM)
    cut = getattr(found.sweep.solutions[found.middle], f"{plane}_plane")
    read = reading(drawn[f"{plane}-plane"], tmp_path)
    for degrees in (0, 30, 45, 180, 330):
        probe = Probe("level", {"curve": f"{plane}-plane", "at_deg": float(degrees)})
        assert SVG.measure(read, probe, []) == pytest.approx(cut[degrees], abs=0.02)


def test_the_stems_hold_the_currents(drawn, tmp_path):
    found = predict(BEAM)
    places = {"R": 0.0, "DE": 62.0, "D1": 95.0, "D2": 150.0}
    for tag, ratio in found.sweep.solutions[found.middle].current_ratios:
        assert shown(drawn["currents"], "currents", places[tag], tmp_path) == pytest.approx(abs(ratio), abs=0.005)


def test_a_wrong_curve_is_seen(drawn, tmp_path):
    found = predict(BEAM)
    text = re.sub(
        r'points="[^"]*"', lambda m: re.sub(r",([\d.]+)", lambda n: f",{float(n[1]) - 12}", m[0]), drawn["gain"]
    )
    value = found.sweep.gain_dbi[found.middle]
    assert abs(shown(text, "gain", found.frequency_mhz[found.middle], tmp_path) - value) > 0.02


def test_the_same_figures_give_the_same_bytes(drawn):
    assert charts(BEAM) == drawn


HOSTILE = "<script>alert('x')</script> & \"]]>\u202e\u0000\u0007\ufffe" + "w" * 150


@pytest.mark.parametrize("title", [HOSTILE, "\u6c34\u4f4d\u8a08" * 60, "</text></svg>", " "])
def test_any_title_stays_text(title, tmp_path):
    for text in charts(replace(BEAM, title=title), (866.5,)).values():
        assert "<script" not in text
        read = reading(text, tmp_path)
        assert SVG.measure(read, Probe("active_count"), []) == 0.0
        assert_inside(text)


def assert_inside(text):
    """No text leaves the sheet: letters counted at 0.62 of their size, wide ones at 1.1."""
    for element in ElementTree.fromstring(text).iter(f"{SVG_NAME}text"):
        if "transform" in element.attrib:
            continue
        size = 15.0 if element.get("class") == "head" else 12.0
        width = sum((1.1 if ord(letter) > 0x2E80 else 0.62) * size for letter in element.text or "")
        at = float(element.get("x"))
        anchor = element.get("text-anchor", "start")
        left = at - {"start": 0.0, "middle": width / 2.0, "end": width}[anchor]
        assert left >= -1.0, element.text
        assert left + width <= WIDTH + 1.0, element.text


@pytest.mark.parametrize(
    "design",
    [
        DIPOLE,
        samples.CAMERA,
        samples.UPRIGHT_868,
        replace(BEAM, name="narrow", band=Band(866.49, 866.51, 866.5)),
        replace(BEAM, name="wide", band=Band(500.0, 1200.0, 866.5)),
    ],
    ids=lambda design: design.name,
)
def test_charts_of_any_design_can_be_read(design, tmp_path):
    found = predict(design)
    for name, text in charts(design).items():
        assert_inside(text)
        read = reading(text, tmp_path)
        assert SVG.measure(read, Probe("point_count", {"curve": name}), []) >= 1.0
    for index in found.in_band:
        value = shown(charts(design)["gain"], "gain", found.frequency_mhz[index], tmp_path)
        assert value == pytest.approx(found.sweep.gain_dbi[index], abs=0.15)


@pytest.mark.parametrize("at_mhz", [(866.5,), (500.0,), (863.0, 866.5, 870.0)])
def test_a_few_frequencies_are_dots(at_mhz, tmp_path):
    text = charts(BEAM, at_mhz)["vswr"]
    assert text.count('class="dot"') == len(at_mhz)
    found = predict(BEAM, at_mhz)
    assert shown(text, "vswr", at_mhz[0], tmp_path) == pytest.approx(found.sweep.vswr[0], rel=5e-3)


@pytest.mark.parametrize("values", [[1.0, 1.0, 1.0], [1.5, 2e12, 3.0], [0.0, -200.0, 12.0], [5.0, 5.0, 5.0 + 1e-12]])
def test_odd_values_make_a_sound_chart(values, tmp_path):
    quantity = Quantity("odd", "Odd", "odd", "dB", "least", floor=1.0 if values[1] == 2e12 else None)
    text = draw_sweep(quantity, [100.0, 150.0, 200.0], values, Band(90.0, 110.0, 100.0), "odd")
    assert "nan" not in text.lower()
    assert "inf" not in text.lower()
    assert shown(text, "odd", 100.0, tmp_path) == pytest.approx(values[0], abs=0.01)
    assert all(len(coordinate) < 12 for coordinate in re.findall(r"-?[\d.]+", text.split("</style>")[1]))


def test_sixty_five_conductors_find_room(tmp_path):
    currents = [(f"D{i}", 10.0 * i, complex(0.5, -0.1)) for i in range(65)]
    text = draw_currents("Currents", currents, "long")
    assert SVG.measure(reading(text, tmp_path), Probe("point_count", {"curve": "currents"}), []) == 65.0
    height = float(re.search(r'viewBox="0 0 400 ([\d.]+)"', text)[1])
    assert height > max(float(y) for y in re.findall(r'<text[^>]* y="([\d.]+)"', text))


def test_one_conductor_stands_alone(tmp_path):
    text = draw_currents("Currents", [("DE", 0.0, 1.0 + 0.0j)], "lone")
    assert shown(text, "currents", 0.0, tmp_path) == pytest.approx(1.0, abs=0.005)


def test_a_deep_null_lies_at_the_middle():
    gain = [10.0] * 90 + [-200.0] + [10.0] * 269
    text = draw_pattern(Cut("e-plane", "E", "y", gain, ()), "null")
    points = re.search(r'points="([^"]*)"', text)[1].split()
    assert points[90] == "200,232"


@pytest.mark.parametrize(("low", "high"), [(0.0, 1.0), (863.0, 870.0), (5575.0, 6025.0), (-30.0, 12.0), (0.0, 0.03)])
def test_ticks_are_round_numbers_and_ends_lie_on_them(low, high):
    span = span_of(low, high)
    assert span.low <= low <= high <= span.high
    assert 3 <= len(span.ticks) <= 8
    for tick in span.ticks:
        assert float(span.label(tick).replace("\u2212", "-")) == pytest.approx(tick)
        mantissa = span.step / 10.0 ** np.floor(np.log10(span.step) + 1e-9)
        assert mantissa == pytest.approx(round(mantissa))


def test_every_class_that_is_used_has_its_colours(drawn):
    used = {name for text in drawn.values() for name in re.findall(r'class="([^"]*)"', text)}
    light, dark = (set(re.findall(r"\.([\w-]+)", half)) for half in STYLE.split("@media"))
    assert used <= light
    assert used - {"head"} <= dark


def contrast(first, second):
    """Contrast ratio of two colours (WCAG 2.1, 1.4.3)."""
    levels = []
    for colour in (first, second):
        digits = colour[1:] if len(colour) == 7 else "".join(c * 2 for c in colour[1:])
        parts = [int(digits[i : i + 2], 16) / 255.0 for i in (0, 2, 4)]
        linear = [p / 12.92 if p <= 0.04045 else ((p + 0.055) / 1.055) ** 2.4 for p in parts]
        levels.append(0.2126 * linear[0] + 0.7152 * linear[1] + 0.0722 * linear[2])
    return (max(levels) + 0.05) / (min(levels) + 0.05)


@pytest.mark.parametrize("scheme", ["light", "dark"])
def test_text_and_curves_stand_out_from_the_paper(scheme):
    half = STYLE.split("@media")[scheme == "dark"]
    paper = re.search(r"\.paper\{fill:(#\w+)", half)[1]
    colours = re.findall(r"^(text|\.sub|\.limit-name|\.curve|\.dot)[^{\n]*\{[^}]*?(?:fill|stroke):(#\w+)", half, re.M)
    assert len(colours) >= 4
    for name, colour in colours:
        assert contrast(colour, paper) >= 4.5, (name, colour)


def test_coordinates_are_short_and_never_minus_zero():
    assert [number(value) for value in (1.0, 1.239, -0.001, 0.5)] == ["1", "1.24", "0", "0.5"]
