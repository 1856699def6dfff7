"""Stroke lettering: every glyph inside its box, distinct from every other, and the same on any machine."""

from __future__ import annotations

import itertools
import string

import pytest

from boomwright.data.lettering import strokes, text_width_mm

WANTED = string.ascii_letters + string.digits + " -.,:+/()<>→←_%±×°"


@pytest.mark.parametrize("character", WANTED)
def test_a_glyph_stays_between_baseline_and_capital_height(character: str) -> None:
    width_mm = text_width_mm(character, 4.0)
    for line in strokes(character, 4.0):
        assert len(line) >= 2
        assert all(a != b for a, b in itertools.pairwise(line))
        assert all(0.0 <= x <= width_mm and 0.0 <= y <= 4.0 for x, y in line)


def test_no_two_glyphs_look_alike_but_small_letters_and_capitals() -> None:
    shapes = {
        character: str(strokes(character, 8.0)) for character in WANTED if character not in string.ascii_lowercase
    }
    assert len(set(shapes.values())) == len(shapes)
    assert strokes("boom", 5.0) == strokes("BOOM", 5.0)


def test_a_character_without_a_glyph_is_an_empty_box() -> None:
    box = [[(0.0, 0.0), (5.0, 0.0), (5.0, 8.0), (0.0, 8.0), (0.0, 0.0)]]
    assert strokes("電", 8.0) == strokes("\x1b", 8.0) == box


def test_text_runs_forward_by_its_widths_and_gaps() -> None:
    assert text_width_mm("", 8.0) == 0.0
    assert text_width_mm("D1", 8.0) == 5.0 + 2.0 + 4.0
    second = strokes("D1", 8.0)[1:]
    assert second == [[(x + 7.0, y) for x, y in line] for line in strokes("1", 8.0)]


@pytest.mark.parametrize("height_mm", [0.5, 3.0, 20.0])
def test_lettering_scales_with_its_height(height_mm: float) -> None:
    text = "stream-gauge-868 →"
    assert text_width_mm(text, height_mm) == pytest.approx(text_width_mm(text, 1.0) * height_mm)
    right_mm = max(x for line in strokes(text, height_mm) for x, _ in line)
    assert right_mm == pytest.approx(text_width_mm(text, height_mm))
    assert max(y for line in strokes(text, height_mm) for _, y in line) == pytest.approx(height_mm)
