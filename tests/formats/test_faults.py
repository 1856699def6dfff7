"""Faults seeded into written files: each is found by a rule that holds for any file of the format."""

import re
import shutil
import struct
import zipfile

import numpy as np
import pytest
from specimens import (
    BORE_MM,
    NOTCHES_MM,
    ROD_MM,
    antenna_piece,
    drawing_piece,
    judge,
    measure,
    rail,
    rail_piece,
    write,
)

from boomwright.formats.stl import HEADER_BYTES, RECORD
from boomwright.pieces import Body, Probe
from boomwright.shop.profile import Printer, Shop

STL = "rail-1.stl"


@pytest.fixture(scope="module")
def sound(tmp_path_factory):
    folder = tmp_path_factory.mktemp("sound")
    return folder, write(rail_piece(), folder)


@pytest.fixture
def printed(sound, tmp_path):
    """Files of its own for each test to spoil, and their entries."""
    folder, entries = sound
    shutil.copytree(folder, tmp_path, dirs_exist_ok=True)
    return tmp_path, entries


def edit_stl(path, change):
    data = path.read_bytes()
    records = change(np.frombuffer(data[HEADER_BYTES + 4 :], dtype=RECORD).copy())
    path.write_bytes(data[:HEADER_BYTES] + struct.pack("<I", len(records)) + records.tobytes())


def found(printed, file=STL):
    folder, entries = printed
    return {what: value for (_, what), value in judge([e for e in entries if e.path == file], folder).items()}


def test_an_inch_scaled_stl(printed):
    def scale(records):
        records["corners"] /= 25.4
        return records

    edit_stl(printed[0] / STL, scale)
    wrong = found(printed)
    assert wrong["distance from the STEP"] > 0.3
    assert wrong["surface of the STEP missing"] > 0.3


def test_an_stl_moved_by_a_twentieth(printed):
    def move(records):
        records["corners"][:, :, 0] += 0.05
        return records

    edit_stl(printed[0] / STL, move)
    assert found(printed)["distance from the STEP"] == pytest.approx(0.05, abs=0.012)


@pytest.mark.parametrize("axis", [0, 1, 2])
@pytest.mark.parametrize("corner", [0, 40])
def test_one_moved_vertex(printed, axis, corner):
    def move(records):
        corners = records["corners"].copy()
        points = np.unique(corners.reshape(-1, 3), axis=0)
        target = points[corner]
        inward = -np.sign(target[axis] - points[:, axis].mean()) or 1.0
        corners[np.all(corners == target, axis=2), axis] += np.float32(0.05 * inward)
        records["corners"] = corners
        return records

    edit_stl(printed[0] / STL, move)
    wrong = found(printed)
    # Moved along z it also tilts a face that had lain on the bed.
    follows = {"surface of the STEP missing", "lowest point above the bed", "ceilings that need support"}
    assert set(wrong) <= {"distance from the STEP", *follows}
    assert wrong["distance from the STEP"] > 0.02
    other = found(printed, "rail-1.3mf")
    assert other == {"difference from the STL": pytest.approx(0.05, abs=1e-5)}


def test_a_missing_triangle(printed):
    edit_stl(printed[0] / STL, lambda records: records[1:])
    assert found(printed)["closed surface, one orientation"] == 0.0


def test_a_flipped_triangle(printed):
    def flip(records):
        records["corners"][7] = records["corners"][7][::-1].copy()
        return records

    edit_stl(printed[0] / STL, flip)
    assert found(printed) == {"closed surface, one orientation": 0.0}


def test_a_mesh_inside_out(printed):
    def flip(records):
        records["corners"] = records["corners"][:, ::-1].copy()
        return records

    edit_stl(printed[0] / STL, flip)
    assert found(printed)["volume"] < 0.0


def test_a_second_body(printed):
    def add(records):
        speck = records.copy()
        speck["corners"] = speck["corners"] * 0.01 + np.float32([30.0, 0.0, 20.0])
        return np.concatenate([records, speck])

    edit_stl(printed[0] / STL, add)
    wrong = found(printed)
    assert wrong["number of bodies"] == 2.0
    assert wrong["distance from the STEP"] > 0.5


def test_a_part_that_floats(printed):
    def lift(records):
        records["corners"][:, :, 2] += 2.0
        return records

    edit_stl(printed[0] / STL, lift)
    assert found(printed)["lowest point above the bed"] == 2.0


def faulty(tmp_path, solid):
    entries = write(rail_piece(printed=(Body("rail-1", solid),)), tmp_path)
    return found((tmp_path, entries))


def test_a_bore_left_out_of_the_mesh(tmp_path):
    wrong = faulty(tmp_path, rail(0.12, 0.1, bore=False))
    assert list(wrong) == ["surface of the STEP missing"]
    assert wrong["surface of the STEP missing"] > 0.2


def test_an_offset_taken_twice(tmp_path):
    twice = faulty(tmp_path, rail(0.24, 0.1))
    assert twice["distance from the STEP"] == pytest.approx(0.12, abs=0.001)
    assert faulty(tmp_path, rail(-0.12, 0.1))["distance from the STEP"] == pytest.approx(0.12, abs=0.001)


def test_a_hole_widened_twice(tmp_path):
    printer = Printer(hole_shrink_mm=0.1)
    entries = write(rail_piece(printer, printed=(Body("rail-1", rail(0.0, 0.2)),)), tmp_path)
    wrong = judge(entries, tmp_path, Shop(printer=printer))
    assert wrong[STL, "distance from the STEP"] == pytest.approx(0.05, abs=0.001)


def test_an_offset_that_the_manifest_does_not_list(tmp_path):
    entries = write(rail_piece(offsets={}), tmp_path)
    wrong = found((tmp_path, entries))
    assert wrong["distance from the STEP"] == pytest.approx(0.12, abs=1e-3)


def test_an_offset_that_is_not_the_shops(tmp_path):
    entries = write(rail_piece(Printer(outline_growth_mm=0.2, hole_shrink_mm=0.1)), tmp_path)
    wrong = found((tmp_path, entries))
    assert wrong["distance from the STEP"] == pytest.approx(0.08, abs=1e-3)


def edit_3mf(path, old, new):
    with zipfile.ZipFile(path) as archive:
        files = {name: archive.read(name) for name in archive.namelist()}
    model = files["3D/3dmodel.model"]
    assert old in model
    files["3D/3dmodel.model"] = model.replace(old, new, 1)
    with zipfile.ZipFile(path, "w") as archive:
        for name, data in files.items():
            archive.writestr(name, data)


def test_a_3mf_in_inches(printed):
    edit_3mf(printed[0] / "rail-1.3mf", b'unit="millimeter"', b'unit="inch"')
    wrong = found(printed, "rail-1.3mf")
    assert wrong["size of the unit"] == 25.4
    assert wrong["difference from the STL"] > 100.0


def test_a_3mf_with_a_triangle_too_few(printed):
    path = printed[0] / "rail-1.3mf"
    with zipfile.ZipFile(path) as archive:
        line = re.search(rb"<triangle [^>]*/>", archive.read("3D/3dmodel.model"))[0]
    edit_3mf(path, line, b"")
    wrong = found(printed, "rail-1.3mf")
    assert wrong["closed surface, one orientation"] == 0.0
    assert "triangles, rail-1.stl has" in wrong["difference from the STL"]


@pytest.mark.parametrize("bad", [b'x="nan"', b'x="1e999"', b'x="left"', b'y="0"'])
def test_a_3mf_with_a_bad_vertex_is_a_finding(printed, bad):
    path = printed[0] / "rail-1.3mf"
    with zipfile.ZipFile(path) as archive:
        line = re.search(rb'<vertex (x="[^"]*")', archive.read("3D/3dmodel.model"))[1]
    edit_3mf(path, line, bad)
    assert any("rail-1.3mf: " in str(value) for value in found(printed, "rail-1.3mf").values())


def test_a_step_part_that_does_not_lie_on_the_bed(tmp_path):
    lifted = ((1.0, 0.0, 0.0, 0.0), (0.0, 1.0, 0.0, 0.0), (0.0, 0.0, 1.0, 0.5), (0.0, 0.0, 0.0, 1.0))
    entries = write(rail_piece(frame=lifted), tmp_path)
    wrong = judge(entries, tmp_path)
    assert wrong["rail-1.step", "lowest point above the bed"] == pytest.approx(0.5)


def test_a_step_of_another_size_than_its_mesh(printed):
    write(rail_piece(bodies=(Body("rail-1", rail().scale(1.002)),)), printed[0] / "..")
    (printed[0] / ".." / "rail-1.step").replace(printed[0] / "rail-1.step")
    assert found(printed)["distance from the STEP"] > 0.02


def test_a_rod_a_fifth_too_long(tmp_path):
    write(antenna_piece(length_mm=160.2), tmp_path)
    probe = Probe("rod", {"name": "R", "quantity": "length_mm"})
    assert measure(tmp_path / "antenna.step", probe) == pytest.approx(160.2, abs=1e-9)


def test_a_shifted_slot(tmp_path):
    write(drawing_piece(shift_mm=0.03), tmp_path)
    arguments = {"at_mm": 40.0, "kerf_mm": 0.16, "layer": "CUT", "quantity": "at_mm"}
    assert measure(tmp_path / "comb-1.dxf", Probe("slot", arguments)) == pytest.approx(40.03, abs=1e-9)


def test_a_swapped_layer(tmp_path):
    wrong = judge(write(drawing_piece(cut="SCORE"), tmp_path), tmp_path)
    assert wrong == {}  # scoring what should be cut is sound by itself: the part's own count of contours tells
    count = Probe("layer_count", {"layer": "CUT", "closed": True})
    assert measure(tmp_path / "comb-1.dxf", count) == 0.0
    wrong = judge(write(drawing_piece(cut="0"), tmp_path), tmp_path)
    assert wrong["comb-1.dxf", "layers the shop does not know"] == 3.0


def test_notches_of_the_specimen_are_where_the_faults_leave_them(printed):
    """The specimen itself: nominal rods rest on the axis plane in STEP, and in STL with the growth undone."""
    for name, growth in (("rail-1.step", 0.0), (STL, 0.12), ("rail-1.3mf", 0.12)):
        for at in NOTCHES_MM:
            arguments = {"at_mm": at, "side_y_mm": (13.0, 21.0), "diameter_mm": ROD_MM, "growth_mm": growth}
            height = measure(printed[0] / name, Probe("resting_axis", arguments | {"quantity": "height_mm"}))
            place = measure(printed[0] / name, Probe("resting_axis", arguments | {"quantity": "at_mm"}))
            assert (place, height) == (pytest.approx(at, abs=1e-4), pytest.approx(12.0, abs=1e-4)), name
    assert BORE_MM > 0.0
