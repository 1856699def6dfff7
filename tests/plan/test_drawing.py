"""Sheets: everything inside the frame, no text on another text or on a line, sizes and scales of the standards."""

import itertools
import math
from functools import cache

import pytest
import samples
from drawing_cases import DENSE, DRAWN, LONG_145

from boomwright.plan.drawing import plan_drawings
from boomwright.plan.drawing_boom import in_short
from boomwright.plan.drawing_marks import Stroke, fitted, overlap, shown, stroke_box, words_width_mm
from boomwright.plan.drawing_sheet import scale_words, table_block
from boomwright.plan.drawing_view import PITCH_MM, View, spread
from boomwright.plan.plan import make_plan
from boomwright.shop.profile import Shop


@cache
def sheets_of(design):
    return plan_drawings(make_plan(design, Shop()))


def words_of(sheet):
    return [*sheet.words, *(d.words for d in sheet.dimensions)]


def crosses(stroke, box):
    """Whether a stroke enters a box, looked at in steps of 0.2 mm."""
    low_x, low_y, high_x, high_y = box
    for (x0, y0), (x1, y1) in itertools.pairwise(stroke.points):
        count = max(2, int(math.dist((x0, y0), (x1, y1)) / 0.2))
        for i in range(count + 1):
            x, y = x0 + (x1 - x0) * i / count, y0 + (y1 - y0) * i / count
            if low_x + 0.05 < x < high_x - 0.05 and low_y + 0.05 < y < high_y - 0.05:
                return True
    return False


@pytest.mark.parametrize("design", DRAWN, ids=lambda d: d.name)
def test_every_text_stands_clear_and_inside_the_frame(design):
    for sheet in sheets_of(design):
        x0, y0, x1, y1 = sheet.frame
        words = words_of(sheet)
        strokes = [(s, stroke_box(s)) for s in sheet.content.all_strokes]
        for one, other in itertools.combinations(words, 2):
            assert not overlap(one.box, other.box), (sheet.title.stem, one.text, other.text)
        for text in words:
            box = text.box
            assert box[0] >= x0 and box[1] >= y0 and box[2] <= x1 and box[3] <= y1, (sheet.title.stem, text)
            assert text.height_mm >= 2.5
            crossing = [s.layer for s, around in strokes if overlap(around, box) and crosses(s, box)]
            assert crossing == [], (sheet.title.stem, text.text)


@pytest.mark.parametrize("design", DRAWN, ids=lambda d: d.name)
def test_every_line_stays_inside_the_frame_and_off_the_title_block(design):
    for sheet in sheets_of(design):
        x0, y0, x1, y1 = sheet.frame
        title = (x1 - 180.0, y0, x1, y0 + 34.0)
        for stroke in sheet.content.all_strokes:
            box = stroke_box(stroke)
            assert box[0] > x0 and box[1] > y0 and box[2] < x1 and box[3] < y1, (sheet.title.stem, stroke)
            assert not overlap(box, title), (sheet.title.stem, stroke)


@pytest.mark.parametrize("design", DRAWN, ids=lambda d: d.name)
def test_dimensions_start_and_end_on_what_is_drawn(design):
    for sheet in sheets_of(design):
        for one in sheet.dimensions:
            if one.kind not in ("x", "y"):
                continue
            axis = 0 if one.kind == "x" else 1
            drawn = [c for s in sheet.content.strokes for c in _coordinates(s, axis)]
            for end in one.ends:
                assert min(abs(end[axis] - c) for c in drawn) < 0.02, (sheet.title.stem, one.name)


def _coordinates(stroke: Stroke, axis: int):
    box = stroke_box(stroke)
    return [*(vertex[axis] for vertex in stroke.vertices), box[axis], box[axis + 2]]


def test_a_line_is_as_long_as_its_value_at_its_scale():
    for design in (samples.GAUGE, samples.LOOP_2450, LONG_145):
        for sheet in sheets_of(design):
            assert sheet.dimensions
            for one in sheet.dimensions:
                assert math.dist(*one.line) == pytest.approx(abs(one.value_mm) * one.scale, abs=1e-9), one.name
            assert len({one.name for one in sheet.dimensions}) == len(sheet.dimensions)


def test_sheets_and_scales_are_of_the_standards():
    """ISO 216: A4 is 210 x 297, A3 297 x 420. ISO 5457: 20 mm left, 10 mm elsewhere. ISO 5455: 1, 2, 5 by tens."""
    sizes = set()
    for design in DRAWN:
        sheets = sheets_of(design)
        assert [s.number for s in sheets] == list(range(1, len(sheets) + 1))
        assert {s.count for s in sheets} == {len(sheets)}
        for sheet in sheets:
            sizes.add(sheet.size_mm)
            width, height = sheet.size_mm
            assert sheet.frame == (20.0, 10.0, width - 10.0, height - 10.0)
            ratio = sheet.scale if sheet.scale >= 1.0 else 1.0 / sheet.scale
            assert ratio / 10.0 ** math.floor(math.log10(ratio) + 1e-9) == pytest.approx(
                round(ratio / 10.0 ** math.floor(math.log10(ratio) + 1e-9))
            )
            assert scale_words(sheet.scale) in [w.text for w in sheet.words]
    assert sizes == {(297.0, 210.0), (420.0, 297.0)}


def test_a_dense_boom_fans_its_figures_out():
    boom = sheets_of(DENSE)[0]
    places = sorted(d.words.x_mm for d in boom.dimensions if d.kind == "running")
    assert len(places) == 67
    assert min(b - a for a, b in itertools.pairwise(places)) == pytest.approx(PITCH_MM, abs=1e-9)


def test_what_a_shop_cannot_make_is_not_drawn():
    stems = [s.title.stem for s in sheets_of(DENSE)]
    assert "drawing-boom" in stems
    assert "drawing-cradle" not in stems


def test_spread_keeps_order_and_pitch_and_moves_nothing_that_has_room():
    assert spread([0.0, 10.0, 20.0], 4.0) == [0.0, 10.0, 20.0]
    assert spread([10.0, 11.0, 30.0], 4.0) == pytest.approx([8.5, 12.5, 30.0])
    crowded = spread([0.0, 1.0, 2.0, 2.0, 9.0], 4.0)
    assert [b - a for a, b in itertools.pairwise(crowded)] == pytest.approx([4.0] * 4)
    assert sum(crowded) == pytest.approx(14.0)


@pytest.mark.parametrize(
    ("value", "text"), [(167.5, "167.5"), (3.0, "3"), (0.0, "0"), (-0.001, "0"), (12.345, "12.35"), (-30.0, "-30")]
)
def test_sizes_read_as_on_a_drawing(value, text):
    assert shown(value) == (text if value != 12.345 else f"{value:.2f}")


def test_long_titles_are_cut_to_their_room():
    text = fitted("A very long title\nof two lines " * 9, 60.0)
    assert text.endswith("...")
    assert "\n" not in text
    assert words_width_mm(text, 2.5) <= 60.0


def test_directors_in_a_row_are_named_in_short():
    assert in_short(["R", "D1", "D2", "D3", "D5", "D7", "D8"]) == "R, D1-D3, D5, D7, D8"


def test_a_width_is_the_fonts_own():
    """Helvetica: H 722, digits 556 thousandths of the size; capitals 718 (published font metrics, from memory)."""
    assert words_width_mm("H10", 2.5) == pytest.approx((722 + 2 * 556) / 718 * 2.5)


def test_a_table_goes_on_beside_itself():
    short, long = table_block(("a", "b"), [("1", "2")] * 10, 10), table_block(("a", "b"), [("1", "2")] * 11, 10)
    assert [w.text for w in short.words].count("a") == 1
    assert [w.text for w in long.words].count("a") == 2
    assert long.box[1] == pytest.approx(short.box[1])


def test_hatching_stays_in_the_region_and_out_of_its_holes():
    view = View(1.0)
    view.hatch(
        [(0.0, 0.0), (20.0, 0.0), (20.0, 20.0), (0.0, 20.0)], [[(5.0, 5.0), (15.0, 5.0), (15.0, 15.0), (5.0, 15.0)]]
    )
    assert len(view.strokes) > 10
    for stroke in view.strokes:
        (x0, y0, _), (x1, y1, _) = stroke.vertices
        assert y1 - y0 == pytest.approx(x1 - x0)
        x, y = (x0 + x1) / 2.0, (y0 + y1) / 2.0
        assert 0.0 <= x <= 20.0 and 0.0 <= y <= 20.0
        assert not (5.0 < x < 15.0 and 5.0 < y < 15.0)
