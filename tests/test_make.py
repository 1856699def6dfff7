"""The main job end to end: files, sums, the same bytes, and every seeded fault found by its file's name."""

import json
import shutil
import struct
import subprocess
import sys
from collections.abc import Callable
from pathlib import Path

import ezdxf
import pytest
import samples

from boomwright.audit import audit_folder
from boomwright.design.tomlfile import write_design
from boomwright.manifest import sum_of
from boomwright.pipeline import make

pytestmark = pytest.mark.slow


@pytest.fixture(scope="module")
def made(tmp_path_factory: pytest.TempPathFactory) -> Path:
    place = tmp_path_factory.mktemp("made")
    (place / "gauge.toml").write_text(write_design(samples.GAUGE))
    result = make(place / "gauge.toml", out=place / "out")
    assert [str(finding) for finding in result.audit.failures] == []
    return place / "out"


@pytest.fixture
def copy(made: Path, tmp_path: Path) -> Path:
    return Path(shutil.copytree(made, tmp_path / "copy"))


def files_of(folder: Path) -> dict[str, bytes]:
    return {p.relative_to(folder).as_posix(): p.read_bytes() for p in sorted(folder.rglob("*")) if p.is_file()}


def mend_sums(folder: Path) -> None:
    """Make the manifest agree with the files, as someone who edits a file and its sum would."""
    manifest = json.loads((folder / "manifest.json").read_text())
    manifest["files"] = [f for f in manifest["files"] if (folder / f["path"]).exists()]
    for file in manifest["files"]:
        file["sha256"] = sum_of(folder / file["path"])
        file["bytes"] = (folder / file["path"]).stat().st_size
    (folder / "manifest.json").write_text(json.dumps(manifest))


def test_every_file_is_in_the_manifest_with_its_sum(made: Path) -> None:
    manifest = json.loads((made / "manifest.json").read_text())
    listed = {f["path"] for f in manifest["files"]}
    assert listed == set(files_of(made)) - {"manifest.json", "audit.json"}
    for file in manifest["files"]:
        assert file["sha256"] == sum_of(made / file["path"])
        assert file["bytes"] == (made / file["path"]).stat().st_size
        assert set(file) >= {"path", "part", "process", "format", "sha256", "bytes", "frame", "unit"}
    origins = {size["key"]: size["origin"] for size in manifest["plan"]}
    assert origins["groove.R.depth_mm"] == "rod 3 + glue gap 0.1"


def test_the_folder_is_laid_out_as_agreed(made: Path) -> None:
    expected = {
        "antenna.step",
        "design.toml",
        "shop.toml",
        "manifest.json",
        "audit.json",
        "bench/cut-list.csv",
        "cnc/boom.step",
        "cnc/boom.dxf",
        "cnc/rod-R.step",
        "cnc/driven.step",
        "laser/spacing-comb-1.dxf",
        *(
            f"print/{stem}.{suffix}"
            for stem in ("cradle-1", "mould-upper", "mould-lower")
            for suffix in ("step", "stl", "3mf")
        ),
    }
    assert expected <= set(files_of(made))


def test_audit_report_says_what_was_measured(made: Path) -> None:
    report = json.loads((made / "audit.json").read_text())
    assert report["ok"] is True
    for finding in report["findings"]:
        assert set(finding) >= {"file", "what", "expected", "measured", "allowed", "unit", "ok"}


def test_another_process_writes_the_same_bytes(made: Path, tmp_path: Path) -> None:
    (tmp_path / "gauge.toml").write_text(write_design(samples.GAUGE))
    command = [sys.executable, "-m", "boomwright", "make", "gauge.toml", "--out", "again", "-q"]
    done = subprocess.run(command, cwd=tmp_path, capture_output=True, text=True, check=False)
    assert done.returncode == 0, done.stderr
    assert (done.stdout, done.stderr) == ("", "")
    first, second = files_of(made), files_of(tmp_path / "again")
    assert {path for path in first if first[path] != second.get(path)} == set()
    assert set(first) == set(second)


def test_without_a_change_a_second_audit_agrees(made: Path) -> None:
    again = json.loads(audit_folder(made).as_json())
    # The book is written after the first audit: the second finds its sums too.
    book = [one for one in again["findings"] if one["file"].startswith("build-book.")]
    assert [one["what"] for one in book] == ["sha256"] * 2 and all(one["ok"] for one in book)
    again["findings"] = [one for one in again["findings"] if one not in book]
    assert again == json.loads((made / "audit.json").read_text())


# --- faults seeded into written files, the manifest's sums mended -------------------------------------------------


def stl_vertices(path: Path) -> tuple[bytearray, int]:
    data = bytearray(path.read_bytes())
    return data, struct.unpack_from("<I", data, 80)[0]


def scale_stl_to_inches(folder: Path) -> str:
    path = folder / "print/cradle-1.stl"
    data, count = stl_vertices(path)
    for triangle in range(count):
        for value in range(12):
            at = 84 + 50 * triangle + 4 * value
            struct.pack_into("<f", data, at, struct.unpack_from("<f", data, at)[0] / 25.4)
    path.write_bytes(data)
    return "print/cradle-1.stl"


def move_a_vertex(folder: Path) -> str:
    path = folder / "print/mould-lower.stl"
    data, count = stl_vertices(path)
    vertex = bytes(data[84 + 12 : 84 + 24])
    x, y, z = struct.unpack("<3f", vertex)
    moved = struct.pack("<3f", x + 0.05, y + 0.05, z - 0.05)
    for triangle in range(count):
        for corner in range(3):
            at = 84 + 50 * triangle + 12 + 12 * corner
            if data[at : at + 12] == vertex:
                data[at : at + 12] = moved
    path.write_bytes(data)
    return "print/mould-lower.stl"


def drop_a_triangle(folder: Path) -> str:
    path = folder / "print/mould-upper.stl"
    data, count = stl_vertices(path)
    struct.pack_into("<I", data, 80, count - 1)
    path.write_bytes(data[:-50])
    return "print/mould-upper.stl"


def shift_a_dxf_notch(folder: Path) -> str:
    path = folder / "laser/spacing-comb-1.dxf"
    document = ezdxf.readfile(path)
    outline = max(document.modelspace().query("LWPOLYLINE[layer=='CUT']"), key=len)
    points = outline.get_points("xyb")
    at = len(points) // 2
    points[at] = (points[at][0] + 0.1, *points[at][1:])
    points[at + 1] = (points[at + 1][0] + 0.1, *points[at + 1][1:])
    outline.set_points(points, format="xyb")
    document.saveas(path)
    return "laser/spacing-comb-1.dxf"


def swap_a_layer(folder: Path) -> str:
    path = folder / "laser/spacing-comb-1.dxf"
    document = ezdxf.readfile(path)
    for entity in document.modelspace().query("LWPOLYLINE[layer=='SCORE']"):
        entity.dxf.layer = "CUT"
    document.saveas(path)
    return "laser/spacing-comb-1.dxf"


def lengthen_a_rod(folder: Path) -> str:
    from boomwright.formats.catalogue import FORMATS
    from boomwright.parts.rod import straight_rod
    from boomwright.pieces import Body, SolidPiece

    body = Body("D1", straight_rod(95.0, (-74.1, 74.1), 3.0))
    FORMATS["step"].write(SolidPiece("rod-D1", "cnc", (body,)), folder / "cnc/rod-D1.step")
    return "cnc/rod-D1.step"


def edit_the_design(folder: Path) -> str:
    path = folder / "design.toml"
    text = path.read_text()
    assert "length_mm = 148.0" in text
    path.write_text(text.replace("length_mm = 148.0", "length_mm = 148.3"))
    return "cnc/rod-D1.step"


def break_the_design(folder: Path) -> str:
    (folder / "design.toml").write_text("schema = 1\nname = 7\n")
    return "design.toml"


def delete_a_file(folder: Path) -> str:
    (folder / "print/cradle-1.3mf").unlink()
    return "print/cradle-1.3mf"


def delete_a_measured_file(folder: Path) -> str:
    (folder / "cnc/boom.dxf").unlink()
    return "cnc/boom.dxf"


def fill_a_file_with_junk(folder: Path) -> str:
    (folder / "antenna.step").write_bytes(b"\x00\xff junk" * 100)
    return "antenna.step"


def cut_a_file_short(folder: Path) -> str:
    path = folder / "print/mould-upper.step"
    path.write_bytes(path.read_bytes()[:5000])
    return "print/mould-upper.step"


def edit_the_cut_list(folder: Path) -> str:
    path = folder / "bench/cut-list.csv"
    path.write_text(path.read_text().replace("148.00", "148.50"))
    return "bench/cut-list.csv"


FAULTS: list[Callable[[Path], str]] = [
    scale_stl_to_inches,
    move_a_vertex,
    drop_a_triangle,
    shift_a_dxf_notch,
    swap_a_layer,
    lengthen_a_rod,
    edit_the_design,
    break_the_design,
    delete_a_file,
    delete_a_measured_file,
    fill_a_file_with_junk,
    cut_a_file_short,
    edit_the_cut_list,
]


@pytest.mark.parametrize("seed", FAULTS, ids=lambda seed: seed.__name__)
def test_a_seeded_fault_is_found_by_its_files_name(seed: Callable[[Path], str], copy: Path) -> None:
    file = seed(copy)
    mend_sums(copy)
    failures = audit_folder(copy).failures
    assert file in {finding.file for finding in failures}, [str(f) for f in failures]
    for finding in failures:
        assert finding.what
        assert finding.expected != finding.measured


def test_the_command_names_file_and_quantity_and_exits_3(copy: Path) -> None:
    lengthen_a_rod(copy)
    done = subprocess.run(
        [sys.executable, "-m", "boomwright", "audit", str(copy)], capture_output=True, text=True, check=False
    )
    assert done.returncode == 3
    assert "cnc/rod-D1.step: D1 length: expected 148 mm, measured 148.2 mm, allowed 0.002" in done.stderr
    assert "cnc/rod-D1.step: sha256" in done.stderr
    assert "Traceback" not in done.stderr


def test_a_file_altered_without_mending_its_sum_is_found(copy: Path) -> None:
    path = copy / "shop.toml"
    path.write_text(path.read_text() + "# a remark\n")
    assert [f.what for f in audit_folder(copy).failures] == ["sha256"]
