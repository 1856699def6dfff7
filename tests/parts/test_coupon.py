"""Calibration pieces: their laws by arithmetic, their folder made, audited, and found out when a width is wrong."""

import json
import shutil
import subprocess
import sys
from dataclasses import replace
from pathlib import Path

import ezdxf
import pytest
import shapely

from boomwright.coupon import make_coupon
from boomwright.errors import PlanFault
from boomwright.listing import listing
from boomwright.parts.catalogue import PARTS
from boomwright.parts.coupon import COUPONS
from boomwright.parts.coupon_laser import KerfCombPart
from boomwright.plan.coupon import BLOCK_MM, plan_coupon
from boomwright.shop.profile import Bar, Laser, Printer, Shop
from boomwright.shop.tomlfile import write_shop

SHOP = Shop(
    Printer(outline_growth_mm=0.08, hole_shrink_mm=0.2, nozzle_mm=0.6),
    Laser(kerf_mm=0.22, sheet_mm=4.0, fit_mm=-0.05),
    stock=(Bar(3.0, "brass", 1000.0, 2), Bar(6.35, "aluminium", 1000.0, 1)),
)


@pytest.mark.parametrize("kerf_mm", [0.0, 0.1, 0.31])
def test_the_gap_beside_the_blocks_is_so_many_kerfs(kerf_mm):
    """Cut the drawing with a beam of this width, by shapely, and push what falls out together."""
    plan = plan_coupon(replace(SHOP, laser=replace(SHOP.laser, kerf_mm=0.2)))
    (piece,) = KerfCombPart().build(plan)
    outer, window, *blocks = [
        shapely.Polygon([v[:2] for v in mark.contour.vertices])
        for mark in piece.marks
        if mark.layer == plan.shop.laser.layers.cut
    ]
    beam = {"distance": kerf_mm / 2.0, "join_style": "mitre"}
    opening = window.buffer(**beam).bounds
    widths = [b[2] - b[0] for b in (block.buffer(**(beam | {"distance": -kerf_mm / 2.0})).bounds for block in blocks)]
    gap_mm = opening[2] - opening[0] - sum(widths)
    assert gap_mm / plan.comb.cuts == pytest.approx(kerf_mm, abs=1e-9)
    assert outer.contains(window)


def test_the_comb_is_drawn_without_kerf_whatever_the_shop_says():
    drawn = [KerfCombPart().build(plan_coupon(Shop(laser=Laser(kerf_mm=k))))[0] for k in (0.05, 0.4)]
    assert drawn[0].marks[1] == drawn[1].marks[1]
    assert all(piece.offsets == {"kerf_mm": 0.0} for piece in drawn)


def test_ladders_step_round_what_the_shop_has():
    plan = plan_coupon(SHOP)
    assert plan.shanks_mm == (3.0, 6.35)
    widths = sorted(round(hole.width_mm, 6) for hole in plan.holes.openings)
    assert widths[0] == 3.0
    assert widths[-1] == pytest.approx(6.95)
    assert [round(p.width_mm - 2.0 * p.step_mm, 6) for p in plan.slide.openings] == [10.0] * len(plan.slide.openings)
    assert min(p.step_mm for p in plan.press.openings) < 0.0 < max(p.step_mm for p in plan.press.openings)
    assert plan_coupon(Shop()).shanks_mm == (3.0,)


@pytest.mark.parametrize("bed_mm", [80.0, 120.0, 400.0])
def test_ladders_fit_the_bed_and_keep_their_openings_apart(bed_mm):
    plan = plan_coupon(replace(SHOP, printer=replace(SHOP.printer, bed_mm=(bed_mm, bed_mm, 100.0))))
    for ladder in (plan.holes, plan.slide, plan.press):
        assert max(ladder.size_mm[:2]) <= bed_mm
        squares = [shapely.Point(o.at).buffer(o.width_mm / 2.0, cap_style="square") for o in ladder.openings]
        plate = shapely.box(0, 0, *ladder.size_mm[:2])
        for index, one in enumerate(squares):
            assert one.distance(plate.exterior) >= 1.8 - 1e-9
            assert plate.contains(one)
            assert all(one.distance(other) >= 1.8 - 1e-9 for other in squares[:index])
        count = {"steps": len(ladder.openings)}
        assert count["steps"] in (9, 26)


def test_machines_without_room_are_faults():
    shop = Shop(Printer(bed_mm=(60.0, 60.0, 60.0)), Laser(sheet_size_mm=(100.0, 60.0)))
    with pytest.raises(PlanFault) as caught:
        plan_coupon(shop)
    assert [fault.path for fault in caught.value.faults] == ["printer.bed_mm", "laser.sheet_size_mm"]


def test_no_name_is_both_a_part_and_a_calibration_piece():
    assert not {part.name for part in PARTS} & {part.name for part in COUPONS}
    text = listing("parts")
    assert all(part.name in text for part in COUPONS)
    assert "by boomwright coupon" in text


@pytest.fixture(scope="module")
def made(tmp_path_factory):
    place = tmp_path_factory.mktemp("coupon")
    (place / "shop.toml").write_text(write_shop(replace(SHOP, stock=SHOP.stock[:1])))
    result = make_coupon(place / "shop.toml", place / "out")
    assert [str(finding) for finding in result.audit.failures] == []
    return place / "out"


@pytest.mark.slow
def test_the_folder_says_what_it_holds_and_what_was_taken(made):
    manifest = json.loads((made / "manifest.json").read_text())
    assert manifest["made_from"] == "shop"
    offsets = {file["path"]: file["offsets"] for file in manifest["files"]}
    assert offsets["print/hole-ladder-1.stl"] == {"outline_growth_mm": 0.0, "hole_shrink_mm": 0.0}
    assert offsets["print/outline-block-1.stl"] == {"outline_growth_mm": 0.0, "hole_shrink_mm": 0.0}
    assert offsets["print/slide-ladder-1.stl"]["outline_growth_mm"] == SHOP.printer.outline_growth_mm
    assert offsets["laser/kerf-comb-1.dxf"] == {"kerf_mm": 0.0}
    assert offsets["laser/slot-ladder-1.dxf"] == {"kerf_mm": SHOP.laser.kerf_mm}
    assert (made / "bench/coupon-sheet.pdf").is_file()
    measured = {(f["file"], f["what"]) for f in json.loads((made / "audit.json").read_text())["findings"]}
    assert ("print/hole-ladder-1.stl", "hole 3.25, step 0.25, width in x") in measured
    assert ("print/press-ladder-1.step", "pocket 10.15, step 0.075, width in y") in measured
    assert ("laser/slot-ladder-1.dxf", "slot of fit -0.05, width") in measured


@pytest.mark.slow
def test_a_wrong_block_and_a_changed_shop_are_found_by_the_command(made, tmp_path):
    folder = Path(shutil.copytree(made, tmp_path / "copy"))
    path = folder / "laser/kerf-comb-1.dxf"
    document = ezdxf.readfile(path)
    block = max(document.modelspace().query("LWPOLYLINE[layer=='CUT']"), key=lambda outline: outline[0][1])
    points = block.get_points("xyb")
    middle = points[0][0] + BLOCK_MM / 2.0
    block.set_points([(x + 0.05 * (x > middle), y, bulge) for x, y, bulge in points], format="xyb")
    document.saveas(path)
    shop = (folder / "shop.toml").read_text()
    assert "sheet_mm = 4.0" in shop
    (folder / "shop.toml").write_text(shop.replace("sheet_mm = 4.0", "sheet_mm = 3.9"))
    command = [sys.executable, "-m", "boomwright", "audit", "copy", "--json"]
    done = subprocess.run(command, cwd=tmp_path, capture_output=True, text=True, check=False)
    assert (done.returncode, done.stderr) == (3, "")
    wrong = {(f["file"], f["what"]) for f in json.loads(done.stdout)["findings"] if not f["ok"]}
    assert any(file == "laser/kerf-comb-1.dxf" and what.startswith("block ") for file, what in wrong)
    assert ("shop.toml", "coupon.slots.sheet_mm") in wrong
    assert ("laser/slot-ladder-1.dxf", "slot of fit 0, width") in wrong
    assert ("laser/kerf-comb-1.dxf", "sha256") in wrong
    assert not [file for file, _ in wrong if file.startswith("print/")]


def test_the_command_refuses_a_sheet_that_must_not_be_cut(tmp_path):
    (tmp_path / "shop.toml").write_text('[laser]\nmaterial = "clear PVC"\n')
    command = [sys.executable, "-m", "boomwright", "coupon", "--shop", "shop.toml", "--out", "out"]
    done = subprocess.run(command, cwd=tmp_path, capture_output=True, text=True, check=False)
    assert done.returncode == 2
    assert done.stderr.startswith("shop.toml: laser.material: ")
    assert "must not be laser cut" in done.stderr
    assert not (tmp_path / "out").exists()
