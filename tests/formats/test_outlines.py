"""Measures on DXF files against the coordinates the drawing was made with."""

import math

import ezdxf
import pytest
from specimens import drawing_piece, judge, write

from boomwright.errors import MeasureError
from boomwright.formats.dxf import DXF
from boomwright.formats.format import FileEntry
from boomwright.pieces import IDENTITY, Contour, DrawingPiece, Mark, Probe
from boomwright.shop.profile import Laser, Shop

KERF = 0.16


def drawn(tmp_path, *marks, name="sheet"):
    piece = DrawingPiece(name, "laser", tuple(Mark(Contour(tuple(v), closed), layer) for v, closed, layer in marks))
    DXF.write(piece, tmp_path / f"{name}.dxf")
    return DXF.read(tmp_path / f"{name}.dxf")


def of(reading, measure_name, **arguments):
    return DXF.measure(reading, Probe(measure_name, arguments), [])


def square(x, y, size=10.0):
    return [(x, y, 0.0), (x + size, y, 0.0), (x + size, y + size, 0.0), (x, y + size, 0.0)]


def wrong(tmp_path, reading, shop=None):
    entry = FileEntry(reading.path.name, "sheet", "laser", "dxf", "mm", IDENTITY)
    return {what: value for (_, what), value in judge([entry], tmp_path, shop or Shop()).items()}


@pytest.fixture
def comb(tmp_path):
    write(drawing_piece(), tmp_path)
    return DXF.read(tmp_path / "comb-1.dxf")


def test_a_round_slot_with_the_kerf_undone(comb):
    sizes = {"at_mm": 40.0, "width_mm": 3.4, "depth_mm": 18.3 + 1.62 - (10.0 - 0.08)}
    for quantity, value in sizes.items():
        found = of(comb, "slot", at_mm=41.0, kerf_mm=KERF, layer="CUT", quantity=quantity)
        assert found == pytest.approx(value, abs=1e-9), quantity
    with pytest.raises(MeasureError, match=r"no slot within 5 mm of x = 70"):
        of(comb, "slot", at_mm=70.0, kerf_mm=KERF, quantity="at_mm")


@pytest.mark.parametrize("turned", [False, True])
@pytest.mark.parametrize("up", [False, True])
def test_a_square_slot_open_either_way_and_drawn_either_way(tmp_path, turned, up):
    points = [(0, 0), (20, 0), (20, 8), (23, 8), (23, 0), (50, 0), (50, 20), (0, 20)]
    if up:
        points = [(x, 20 - y) for x, y in points][::-1]
    vertices = [(float(x), float(y), 0.0) for x, y in (points[::-1] if turned else points)]
    reading = drawn(tmp_path, (vertices, True, "CUT"))
    for quantity, value in {"at_mm": 21.5, "width_mm": 3.16, "depth_mm": 8.0}.items():
        assert of(reading, "slot", at_mm=21.5, kerf_mm=KERF, quantity=quantity) == pytest.approx(value)


def test_a_tooth_is_no_slot(tmp_path):
    points = [(0, 0), (20, 0), (20, -8), (23, -8), (23, 0), (50, 0), (50, 20), (0, 20)]
    reading = drawn(tmp_path, ([(float(x), float(y), 0.0) for x, y in points], True, "CUT"))
    with pytest.raises(MeasureError, match="no slot"):
        of(reading, "slot", at_mm=21.5, kerf_mm=KERF, quantity="at_mm")


def test_extent_is_exact_for_arcs(tmp_path):
    reading = drawn(tmp_path, ([(10.0, 10.0, 1.0), (20.0, 10.0, 0.5)], True, "CUT"))
    assert of(reading, "extent", quantity="min_y_mm") == pytest.approx(5.0)
    # Bulge 0.5 over a chord of 10: sagitta 0.5 * 10 / 2 = 2.5.
    assert of(reading, "extent", quantity="max_y_mm") == pytest.approx(12.5)


def test_circles_lines_and_counts(comb, tmp_path):
    for quantity, value in {"x_mm": 60.0, "y_mm": 20.0, "diameter_mm": 4.0 - KERF}.items():
        assert of(comb, "circle", x_mm=60.3, y_mm=20.0, layer="CUT", quantity=quantity) == pytest.approx(value)
    with pytest.raises(MeasureError, match="no circle"):
        of(comb, "circle", x_mm=10.0, y_mm=10.0, quantity="x_mm")
    assert of(comb, "layer_count", layer="CUT", closed=True) == 3.0
    assert of(comb, "layer_count", layer="SCORE") == 1.0
    lines = drawn(tmp_path, ([(31.25, 0.0, 0.0), (31.25, 12.0, 0.0)], False, "AXIS"))
    assert of(lines, "line_at", x_mm=31.0, layer="AXIS") == 31.25
    with pytest.raises(MeasureError, match="no line along y within 1 mm of x = 40"):
        of(lines, "line_at", x_mm=40.0, layer="AXIS")


def test_spacing_counts_between_parts_not_to_their_holes(comb):
    assert of(comb, "spacing_mm", layer="CUT") == pytest.approx(33.0 - 30.08)


@pytest.mark.parametrize(("gap_mm", "pairs"), [(1.33, 0.0), (1.31, 1.0)])
def test_parts_keep_two_kerfs_and_a_millimetre(tmp_path, gap_mm, pairs):
    reading = drawn(tmp_path, (square(5, 5), True, "CUT"), (square(15 + gap_mm, 5), True, "CUT"))
    assert wrong(tmp_path, reading) == ({"parts nearer than 2 kerfs + 1": pairs} if pairs else {})


def test_overlapping_parts_and_equal_parts_are_too_near(tmp_path):
    reading = drawn(tmp_path, (square(5, 5), True, "CUT"), (square(12, 7), True, "CUT"))
    crossing = {"parts nearer than 2 kerfs + 1": 1.0, "contours that cross or touch": 1.0}
    assert wrong(tmp_path, reading) == crossing
    reading = drawn(tmp_path, (square(5, 5), True, "CUT"), (square(5, 5), True, "CUT"))
    assert wrong(tmp_path, reading) == crossing | {"entities twice": 4.0}


def test_a_line_drawn_back_over_another_is_found(tmp_path):
    back = [(15.0, 5.0, 0.0), (5.0, 5.0, 0.0)]
    reading = drawn(tmp_path, (square(5, 5), True, "SCORE"), (back, False, "SCORE"))
    assert wrong(tmp_path, reading) == {"entities twice": 1.0}


def test_open_contours_and_points_without_length(tmp_path):
    reading = drawn(tmp_path, (square(5, 5), False, "CUT"))
    assert wrong(tmp_path, reading) == {"open contours on the cutting layer": 1.0}
    reading = drawn(tmp_path, ([(5.0, 5.0, 0.0), (5.0, 5.0, 0.0), (9.0, 5.0, 0.0)], False, "SCORE"))
    assert wrong(tmp_path, reading) == {"entities without length": 1.0}


def test_a_part_over_the_sheets_edge(tmp_path):
    reading = drawn(tmp_path, (square(93, 5), True, "CUT"))
    shop = Shop(laser=Laser(sheet_size_mm=(100.0, 60.0)))
    assert wrong(tmp_path, reading, shop) == {"overrun of the sheet": pytest.approx(3.0)}
    reading = drawn(tmp_path, (square(-2, 5), True, "CUT"))
    assert wrong(tmp_path, reading, shop) == {"overrun of the sheet": pytest.approx(2.0)}


def test_entities_of_other_writers_are_read(tmp_path):
    document = ezdxf.new("R2010")
    document.header["$INSUNITS"] = 1
    space = document.modelspace()
    space.add_line((0, 0), (10, 0))
    space.add_circle((20, 5), 2)
    space.add_arc((0, 0), 5, 0, 90)
    document.saveas(tmp_path / "foreign.dxf")
    reading = DXF.read(tmp_path / "foreign.dxf")
    assert of(reading, "unit_code") == 1.0
    assert of(reading, "circle", x_mm=20.0, y_mm=5.0, quantity="diameter_mm") == pytest.approx(4.0)
    (arc,) = reading.outlines[2].segments
    assert (arc.radius_mm, *arc.middle) == pytest.approx((5.0, 5.0 * math.sqrt(0.5), 5.0 * math.sqrt(0.5)))
