"""The laser-cut cradle's files: measured with the kerf undone, put together, and read by general libraries alone."""

import math
from dataclasses import dataclass, replace
from itertools import combinations

import ezdxf
import pytest
import shapely
from samples import CAMERA, GAUGE, LOOP_2450, MIXED_1296, TUBE_915, rod

from boomwright.design.model import Boom, Design, Seat
from boomwright.errors import MeasureError
from boomwright.formats.dxf import DXF
from boomwright.formats.format import FileEntry
from boomwright.formats.step import STEP
from boomwright.parts.antenna import AntennaPart
from boomwright.parts.sheet_cradle import SheetCradlePart
from boomwright.pieces import Contour, Mark
from boomwright.plan.seat import SeatPlan, plan_seat
from boomwright.plan.sheet_cradle import SheetCradlePlan, plan_sheet_cradle
from boomwright.shop.profile import Laser, Layers, Shop

LAYERS = Layers("Schnitt", "Ritz", "Gravur")
LONG = replace(
    TUBE_915,
    name="long-145",
    driven=replace(GAUGE.driven, length_mm=900.0, at_mm=300.0, spacing_mm=30.0, diameter_mm=5.0),
    rods=(rod("R", 0, 1000, 6), rod("D1", 800, 930, 6, 1), rod("D2", 1930, 900, 5, 2)),
    boom=Boom("round", 25.0, "beech", 40.0, 30.0),
    seat=Seat(),
)


@dataclass(frozen=True)
class Bench:
    """As much of a plan as the sheet cradle and the antenna ask for."""

    design: Design
    shop: Shop
    seat: SeatPlan
    sheet_cradle: SheetCradlePlan

    @property
    def boom(self):
        return self.design.boom

    @property
    def wished_seat(self):
        return self.design.seat


def planned(design, **laser):
    shop = Shop(laser=Laser(**laser))
    seat, _, _ = plan_seat(design, design.boom, design.seat)
    return Bench(design, shop, seat, plan_sheet_cradle(design, design.boom, shop, seat)[0])


def written(plan, folder, pieces=None):
    (folder / "laser").mkdir(exist_ok=True)
    entries = []
    for piece in pieces or SheetCradlePart().build(plan):
        path = f"laser/{piece.stem}.dxf"
        DXF.write(piece, folder / path)
        entries.append(FileEntry(path, "sheet-cradle", "laser", "dxf", "mm", piece.frame, piece.offsets))
    return entries


def wrong(plan, folder, entries):
    """What does not hold, and how many quantities were measured; the antenna only where its file is there."""
    readings = {entry.path: DXF.read(folder / entry.path) for entry in entries}
    antenna = folder / "antenna.step"
    if antenna.is_file():
        readings["antenna.step"] = STEP.read(antenna)
    expected = [*SheetCradlePart().expect(plan), *(e for entry in entries for e in DXF.expect(entry, plan.shop))]
    expected = [e for e in expected if antenna.is_file() or "antenna.step" not in e.probe.also]
    found = []
    for e in expected:
        try:
            value = DXF.measure(readings[e.file], e.probe, [readings[path] for path in e.probe.also])
        except MeasureError as error:
            found.append((e.what, str(error)))
            continue
        low = e.rule == "at_most" or value >= e.expected - e.allowed - 1e-12
        high = e.rule == "at_least" or value <= e.expected + e.allowed + 1e-12
        if not (low and high):
            found.append((e.what, value))
    return found, len(expected)


@pytest.mark.slow
@pytest.mark.parametrize(
    ("design", "sheet_mm", "size_mm", "kerf_mm"),
    [
        (GAUGE, 3.0, (600.0, 400.0), 0.16),
        (CAMERA, 5.0, (300.0, 200.0), 0.0),
        (MIXED_1296, 3.0, (300.0, 200.0), 0.1),
        (TUBE_915, 5.0, (600.0, 400.0), 0.3),
    ],
    ids=lambda value: getattr(value, "name", str(value)),
)
def test_it_goes_together_round_the_antenna(design, sheet_mm, size_mm, kerf_mm, tmp_path):
    plan = planned(design, sheet_mm=sheet_mm, sheet_size_mm=size_mm, kerf_mm=kerf_mm)
    (piece,) = AntennaPart().build(plan)
    STEP.write(piece, tmp_path / "antenna.step")
    found, count = wrong(plan, tmp_path, written(plan, tmp_path))
    assert found == []
    assert count > 60


@pytest.mark.parametrize("kerf_mm", [0.0, 0.1, 0.3])
def test_it_goes_together_with_every_kerf(kerf_mm, tmp_path):
    plan = planned(LOOP_2450, kerf_mm=kerf_mm)
    entries = written(plan, tmp_path)
    assert [entry.offsets for entry in entries] == [{"kerf_mm": kerf_mm}]
    assert wrong(plan, tmp_path, entries)[0] == []


@pytest.mark.slow
def test_two_metres_on_small_sheets(tmp_path):
    plan = planned(LONG, sheet_size_mm=(300.0, 200.0), kerf_mm=0.1)
    entries = written(plan, tmp_path)
    assert len(entries) > 5
    found, count = wrong(plan, tmp_path, entries)
    assert found == []
    assert count > 200


@pytest.mark.parametrize("fit_mm", [-0.1, 0.2])
def test_a_fit_makes_slots_wider_or_tighter(fit_mm, tmp_path):
    plan = planned(LOOP_2450, fit_mm=fit_mm)
    assert wrong(plan, tmp_path, written(plan, tmp_path))[0] == []
    squeeze = plan.sheet_cradle.squeeze_mm3
    assert (squeeze > 0.0) == (fit_mm < 0.0)
    slots = [slot for s in plan.sheet_cradle.plates for slot in s.plate.slots]
    # A foot of 3 x w in a slot of 2.9 x (w - 0.1), through 3 mm of sheet.
    by_hand = sum((3.0 * (w + 0.1) - 2.9 * w) * 3.0 for w in (max(r.u[1] - r.u[0], r.v[1] - r.v[0]) for r in slots))
    assert squeeze == pytest.approx(by_hand if fit_mm < 0.0 else 0.0)


def redrawn(plan, change):
    """The pieces with one mark of the first sheet changed."""
    first, *rest = SheetCradlePart().build(plan)
    return [replace(first, marks=change(first.marks)), *rest]


def test_a_moved_contour_is_found(tmp_path):
    plan = planned(LOOP_2450)
    cut = plan.shop.laser.layers.cut

    def largest_hole_moved(marks):
        holes = [m for m in marks if m.layer == cut and shapely.Polygon(points(m.contour)).area < 40.0]
        hole = max(holes, key=lambda m: shapely.Polygon(points(m.contour)).area)
        moved = Contour(tuple((x + 0.05, y, b) for x, y, b in hole.contour.vertices))
        return tuple(Mark(moved, m.layer) if m is hole else m for m in marks)

    found = wrong(plan, tmp_path, written(plan, tmp_path, redrawn(plan, largest_hole_moved)))[0]
    whats = " / ".join(what for what, _ in found)
    assert "farthest side of a hole from its plan" in whats
    assert "overlap of the plates put together" in whats


def test_a_kerf_taken_twice_is_found(tmp_path):
    once, twice = planned(LOOP_2450, kerf_mm=0.2), planned(LOOP_2450, kerf_mm=0.4)
    twice = replace(twice, sheet_cradle=replace(twice.sheet_cradle, places=once.sheet_cradle.places))
    found = dict(wrong(once, tmp_path, written(once, tmp_path, SheetCradlePart().build(twice)))[0])
    assert found["base: slot width, the worst of 16"] == pytest.approx(2.8)
    assert found["R axis height resting on the assembled rail at +y"] != pytest.approx(15.5, abs=0.01)
    assert found["overlap of the plates put together"] > 10.0


def test_a_lost_part_is_found(tmp_path):
    plan = planned(LOOP_2450)
    cut = plan.shop.laser.layers.cut
    found = wrong(
        plan,
        tmp_path,
        written(plan, tmp_path, redrawn(plan, lambda marks: tuple(m for m in marks[:-1] if m.layer == cut))),
    )[0]
    assert any("no plate between" in str(value) for _, value in found)


def points(contour):
    """A contour's vertices and, on arcs, a middle point: by the definition of the bulge."""
    out = []
    run = contour.vertices
    for (x0, y0, bulge), (x1, y1, _) in zip(run, (*run[1:], run[0]), strict=True):
        out.append((x0, y0))
        if bulge:
            out.append(((x0 + x1 + bulge * (y1 - y0)) / 2.0, (y0 + y1 - bulge * (x1 - x0)) / 2.0))
    return out


@pytest.mark.parametrize("kerf_mm", [0.0, 0.3])
def test_read_by_general_libraries_alone(kerf_mm, tmp_path):
    plan = planned(CAMERA, kerf_mm=kerf_mm, sheet_size_mm=(150.0, 100.0), layers=LAYERS)
    rings, outers = [], 0
    for entry in written(plan, tmp_path):
        document = ezdxf.readfile(tmp_path / entry.path)
        assert document.header["$INSUNITS"] == 4
        assert {e.dxftype() for e in document.modelspace()} == {"LWPOLYLINE"}
        assert {e.dxf.layer for e in document.modelspace()} == {"Schnitt", "Ritz"}
        cut = document.modelspace().query("LWPOLYLINE[layer=='Schnitt']")
        assert all(e.closed for e in cut)
        rings = [shapely.Polygon(points(Contour(tuple(e.get_points("xyb"))))) for e in cut]
        assert all(r.is_valid and r.area > 1.0 for r in rings)
        assert shapely.union_all([shapely.box(*r.bounds) for r in rings]).within(shapely.box(1, 1, 149, 99))
        outer = [r for r in rings if not any(o is not r and o.contains(r) for o in rings)]
        assert all(a.distance(b) >= 2.0 * kerf_mm + 1.0 - 0.01 for a, b in combinations(outer, 2))
        assert not any(a.exterior.intersects(b.exterior) for a, b in combinations(rings, 2))
        bulges = {round(b, 9) for e in cut for *_, b in e.get_points("xyb")}
        # Quarter circles at outer corners, three eighths of a half where a notch of 45 degrees begins.
        assert bulges <= (
            {0.0, round(math.tan(math.pi / 8), 9), round(math.tan(math.pi / 16), 9)} if kerf_mm else {0.0}
        )
        outers += len(outer)
    assert outers == len(plan.sheet_cradle.plates)


def test_every_part_says_what_it_is_and_notches_whose_they_are():
    plan = planned(GAUGE)
    texts = {s.plate.name: {w.text for w in s.plate.words} for s in plan.sheet_cradle.plates}
    assert {"R", "DE", "DE-FRONT", "D1", "D2", "RAIL FORWARD →", "gauge-868"} <= {
        text.replace("front", "FRONT") for text in texts["RAIL"]
    }
    assert {"BASE", "FORWARD →", "gauge-868", "R", "D1", "D2"} <= texts["BASE"]
    for name in ("SADDLE", "SPREADER", "STOP"):
        assert name in texts[name]
