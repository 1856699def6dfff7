"""Plates read back, kerf undone, and put together: against volumes and heights worked out by hand."""

import math

import pytest

from boomwright.errors import MeasureError
from boomwright.formats.dxf import DXF
from boomwright.formats.plates import as_cut
from boomwright.pieces import Contour, DrawingPiece, Mark, Probe

T = 3.0
FLAT = [[1, 0, 0, 0], [0, 1, 0, 0], [0, 0, 1, 0], [0, 0, 0, 1]]


def box(x0, x1, y0, y1):
    return [(x0, y0), (x1, y0), (x1, y1), (x0, y1)]


def grown(points, by):
    """A convex or concave right-angled outline moved outward by hand: corners of a box get a quarter circle."""
    (x0, y0), (x1, _), (_, y1), _ = points
    b = math.tan(math.pi / 8.0)
    return [
        (x0, y0 - by, 0.0),
        (x1, y0 - by, b),
        (x1 + by, y0, 0.0),
        (x1 + by, y1, b),
        (x1, y1 + by, 0.0),
        (x0, y1 + by, b),
        (x0 - by, y1, 0.0),
        (x0 - by, y0, b),
    ]


def sheet(tmp_path, *outlines):
    marks = [Mark(Contour(tuple(v if len(v) == 3 else (*v, 0.0) for v in outline)), "CUT") for outline in outlines]
    DXF.write(DrawingPiece("sheet", "laser", tuple(marks)), tmp_path / "sheet.dxf")
    return DXF.read(tmp_path / "sheet.dxf")


def of(reading, measure, plates, also=(), kerf_mm=0.0, **arguments):
    rows = [{"file": 0, "box": area, "frame": frame} for area, frame in plates]
    base = {"plates": rows, "sheet_mm": T, "kerf_mm": kerf_mm, "layer": "CUT"}
    return DXF.measure(reading, Probe(measure, base | arguments), list(also))


BASE = box(0.0, 40.0, 0.0, 20.0)
SLOT = box(15.0, 23.0, 8.5, 11.5)[::-1]
TONGUE = [(60, 3), (65, 3), (65, 0), (73, 0), (73, 3), (78, 3), (78, 15), (72.5, 15), (69, 11.5), (65.5, 15), (60, 15)]
UPRIGHT = [[1, 0, 0, -50], [0, 0, -1, 11.5], [0, 1, 0, 0], [0, 0, 0, 1]]
PLATES = [((-1, -1, 41, 21), FLAT), ((59, -1, 79, 16), UPRIGHT)]


def test_a_tab_in_its_slot(tmp_path):
    reading = sheet(tmp_path, BASE, SLOT, TONGUE)
    assert of(reading, "plates_overlap_mm3", PLATES) == 0.0
    joint = ((15.0, 8.5, 0.0), (23.0, 11.5, T))
    assert of(reading, "open_joints", PLATES, joints=[joint]) == 0.0
    assert of(reading, "open_joints", PLATES[:1], joints=[joint]) == 1.0


@pytest.mark.parametrize("shift", [0.02, 0.5])
def test_a_slot_out_of_place_is_an_overlap(shift, tmp_path):
    reading = sheet(tmp_path, BASE, [(x + shift, y) for x, y in SLOT], TONGUE)
    # The tab, 3 wide through 3 of sheet, cuts into the plate beside its slot by the shift.
    assert of(reading, "plates_overlap_mm3", PLATES) == pytest.approx(shift * 3.0 * T, rel=1e-9)


def test_without_a_slot_the_whole_tab_overlaps(tmp_path):
    reading = sheet(tmp_path, BASE, TONGUE)
    assert of(reading, "plates_overlap_mm3", PLATES) == pytest.approx(8.0 * 3.0 * T)


def test_where_a_bar_rests_in_the_assembly(tmp_path):
    reading = sheet(tmp_path, BASE, SLOT, TONGUE)
    arguments = {"at_mm": 19.2, "y_mm": (8.5, 11.5), "diameter_mm": 4.0}
    height = of(reading, "plates_rest", PLATES, quantity="height_mm", **arguments)
    assert height == pytest.approx(11.5 + 2.0 * math.sqrt(2.0))
    assert of(reading, "plates_rest", PLATES, quantity="at_mm", **arguments) == pytest.approx(19.0)
    thick = arguments | {"diameter_mm": 2.0 * 3.6 * math.sqrt(2.0)}
    with pytest.raises(MeasureError, match=r"holds a bar at x = 19\.2"):
        of(reading, "plates_rest", PLATES, quantity="at_mm", **thick)
    with pytest.raises(MeasureError, match="no plate between y = 1 and 4"):
        of(reading, "plates_rest", PLATES, quantity="at_mm", **(arguments | {"y_mm": (1.0, 4.0)}))


def test_a_bar_in_a_notch_of_a_drawn_plate(tmp_path):
    reading = sheet(tmp_path, TONGUE)
    base = {"layer": "CUT", "kerf_mm": 0.0, "plate": {"box": (59, -1, 79, 16), "frame": UPRIGHT}}
    plain = base | {"plate": {"box": (59, -1, 79, 16), "frame": FLAT}}
    for quantity, value in {
        "at_mm": 69.0,
        "height_mm": 11.5 + math.sqrt(2.0),
        "over_foot_mm": 8.5 + math.sqrt(2.0),
    }.items():
        probe = Probe("plate_vee", plain | {"at_mm": 68.0, "diameter_mm": 2.0, "quantity": quantity})
        assert DXF.measure(reading, probe, []) == pytest.approx(value), quantity
    feet = Probe("plate_feet", plain | {"rects": [[65.0, 73.1, 0.0, 3.0]]})
    assert DXF.measure(reading, feet, []) == pytest.approx(0.1)
    level = Probe("plate_level", plain | {"at_mm": 62.0, "v_mm": 14.0})
    assert DXF.measure(reading, level, []) == pytest.approx(15.0)


def test_clearance_to_a_box(tmp_path):
    reading = sheet(tmp_path, BASE, SLOT, TONGUE)
    near = ((0.0, 0.0, T + 1.2), (5.0, 5.0, T + 4.0))
    assert of(reading, "plates_clearance_mm", PLATES, solid_box=near, most_mm=3.0) == pytest.approx(1.2, abs=1e-6)
    assert of(reading, "plates_clearance_mm", PLATES, solid_box=near, most_mm=1.0) == 1.0


@pytest.mark.parametrize("kerf_mm", [0.1, 0.3])
def test_the_kerf_undone_is_the_part(kerf_mm, tmp_path):
    reading = sheet(tmp_path, grown(BASE, kerf_mm / 2.0), [(x, y) for x, y in box(15.05, 22.95, 8.55, 11.45)[::-1]])
    outer, hole = sorted(reading.outlines, key=lambda o: -o.polygon.area)
    assert {tuple(p) for p in as_cut(outer, kerf_mm / 2.0).round(9)} == {(float(x), float(y)) for x, y in BASE}
    assert {tuple(p) for p in as_cut(hole, -0.05).round(9)} == {(float(x), float(y)) for x, y in SLOT}


def test_slots_against_their_plan(tmp_path):
    reading = sheet(tmp_path, BASE, SLOT)
    plate = {"layer": "CUT", "kerf_mm": 0.0, "plate": {"box": (-1, -1, 41, 21), "frame": FLAT}}

    def slots(quantity, rects, **more):
        return DXF.measure(reading, Probe("plate_slots", plate | {"quantity": quantity, "rects": rects} | more), [])

    assert slots("count", []) == 1.0
    assert slots("error_mm", [[15.0, 23.2, 8.5, 11.5]]) == pytest.approx(0.2)
    assert slots("width_mm", [[15.0, 23.0, 8.5, 11.5]], width_mm=3.1) == pytest.approx(3.0)
    with pytest.raises(MeasureError, match=r"no slot within 3 mm of u 30, v 8\.5"):
        slots("error_mm", [[30.0, 38.0, 8.5, 11.5]])


def test_contours_that_cross_or_touch(tmp_path):
    beside = box(20.0, 23.0, 11.5, 14.0)
    assert DXF.measure(sheet(tmp_path, BASE, SLOT), Probe("crossings", {"layer": "CUT"}), []) == 0.0
    assert DXF.measure(sheet(tmp_path, BASE, SLOT, beside), Probe("crossings", {"layer": "CUT"}), []) == 1.0


def test_what_is_no_plate(tmp_path):
    reading = sheet(tmp_path, BASE)
    with pytest.raises(MeasureError, match=r"no plate between \(50, 0\) and \(60, 9\)"):
        of(reading, "plates_overlap_mm3", [((50, 0, 60, 9), FLAT)])
    disc = sheet(tmp_path, [(0.0, 0.0, 1.0), (10.0, 0.0, 1.0)])
    with pytest.raises(MeasureError, match="round side"):
        of(disc, "plates_overlap_mm3", [((-6, -6, 16, 6), FLAT)])
