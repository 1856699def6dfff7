"""`predict` as a user runs it: document, table, files, exit status, start-up, and every bad input."""

import contextlib
import io
import json
import os
import subprocess
import sys
from dataclasses import replace
from pathlib import Path
from unittest import mock

import pytest
import samples
import skrf

from boomwright import cli
from boomwright.design.model import Spec
from boomwright.design.tomlfile import write_design

BEAM = replace(samples.GAUGE, name="beam-868", title="<script>alert(1)</script> & co")
GOOD = write_design(BEAM)
LONE = """schema = 1
name = "dipole-300"
[band]
low_mhz = 298.0
high_mhz = 302.0
[driven]
form = "straight"
at_mm = 0.0
diameter_mm = 2.0
material = "ideal"
gap_mm = 4.0
length_mm = 474.0
"""
FILES = {
    "sweep.csv",
    "pattern.csv",
    "predicted.s1p",
    *(f"{name}.svg" for name in ("vswr", "return-loss", "gain", "front-to-back", "e-plane", "h-plane", "currents")),
}


def boomwright(*arguments: str, cwd: Path) -> subprocess.CompletedProcess[str]:
    """The command line from its entry point on, in this process: a start a case would take most of the time."""
    out, err = io.StringIO(), io.StringIO()
    argv = ["boomwright", *arguments]
    with (
        contextlib.chdir(cwd),
        contextlib.redirect_stdout(out),
        contextlib.redirect_stderr(err),
        mock.patch.object(sys, "argv", argv),
        pytest.raises(SystemExit) as end,
    ):
        cli.main()
    status = end.value.code if isinstance(end.value.code, int) else 0
    return subprocess.CompletedProcess(argv, status, out.getvalue(), err.getvalue())


@pytest.fixture
def place(tmp_path: Path) -> Path:
    (tmp_path / "good.toml").write_text(GOOD)
    (tmp_path / "lone.toml").write_text(LONE)
    return tmp_path


def refuse(constant: str) -> float:
    raise AssertionError(f"{constant} in the document")


def test_json_is_one_document_and_nothing_else(place: Path) -> None:
    done = boomwright("predict", "good.toml", "--at-mhz", "870", "--at-mhz", "863.5", "--json", cwd=place)
    assert (done.returncode, done.stderr) == (0, "")
    document = json.loads(done.stdout, parse_constant=refuse)
    assert document["frequency_mhz"] == [863.5, 870.0]
    assert len(document["gain_dbi"]) == 2
    assert {row["tag"] for row in document["sensitivity"]} == {"R", "DE", "D1", "D2"}


def test_points_and_a_lone_dipole(place: Path) -> None:
    done = boomwright("predict", "lone.toml", "--points", "7", "--json", cwd=place)
    document = json.loads(done.stdout, parse_constant=refuse)
    assert len(document["frequency_mhz"]) == 7
    assert {298.0, 300.0, 302.0} <= set(document["frequency_mhz"])
    assert document["half_power_beamwidth_deg"]["h_plane"] == [None] * 7
    assert document["warnings"] == []


def test_the_table_is_the_document(place: Path) -> None:
    done = boomwright("predict", "good.toml", "--at-mhz", "866.5", cwd=place)
    assert (done.returncode, done.stderr) == (0, "")
    lines = done.stdout.splitlines()
    figures = json.loads(boomwright("predict", "good.toml", "--at-mhz", "866.5", "--json", cwd=place).stdout)
    row = [float(cell) for cell in lines[1].split()]
    assert row[1:3] == pytest.approx(figures["impedance_ohm"][0], abs=0.006)
    assert row[3] == pytest.approx(figures["vswr"][0], abs=0.006)
    assert row[5:7] == pytest.approx([figures["gain_dbi"][0], figures["front_to_back_db"][0]], abs=0.006)
    assert [line for line in lines if line.startswith("warning: ")] == [f"warning: {w}" for w in figures["warnings"]]


def test_out_holds_tables_charts_and_a_file_a_general_library_reads(place: Path) -> None:
    done = boomwright("predict", "good.toml", "--out", "rf", "--json", cwd=place)
    assert (done.returncode, done.stderr) == (0, "")
    assert {path.name for path in (place / "rf").iterdir()} == FILES
    document = json.loads(done.stdout)
    network = skrf.Network(str(place / "rf/predicted.s1p"))
    assert network.f / 1e6 == pytest.approx(document["frequency_mhz"], rel=1e-9)
    impedance = network.z[:, 0, 0]
    expected = [complex(*pair) for pair in document["impedance_ohm"]]
    assert impedance == pytest.approx(expected, rel=1e-6)
    for path in (place / "rf").glob("*.svg"):
        assert "<script" not in path.read_text("utf-8")
    first = {path.name: path.read_bytes() for path in (place / "rf").iterdir()}
    assert boomwright("predict", "good.toml", "--out", "rf", "-q", cwd=place).returncode == 0
    assert {path.name: path.read_bytes() for path in (place / "rf").iterdir()} == first


def test_a_spec_that_is_not_met_is_status_3_and_says_where(place: Path) -> None:
    design = replace(BEAM, spec=Spec(gain_dbi_min=12.0, front_to_back_db_min=0.5))
    (place / "hard.toml").write_text(write_design(design))
    done = boomwright("predict", "hard.toml", "--at-mhz", "866.5", "--json", cwd=place)
    assert done.returncode == 3
    gain = json.loads(done.stdout)["gain_dbi"][0]
    expected = f"{gain:.4g} dBi at 866.5 MHz, {12.0 - gain:.2g} dB below 12 dBi"
    assert done.stderr == f"not met: spec.gain_dbi_min: gain is {expected}\n"
    beside = boomwright("predict", "hard.toml", "--at-mhz", "880", "-q", cwd=place)
    assert (beside.returncode, beside.stdout, beside.stderr) == (0, "", "")


@pytest.mark.parametrize(
    ("arguments", "text"),
    [
        (["missing.toml"], "missing.toml"),
        (["good.toml", "--at-mhz", "nan"], "--at-mhz: nan is not a frequency in use\n  fix: give 10 to 20000 MHz\n"),
        (["good.toml", "--at-mhz", "-5"], "--at-mhz: -5 is not a frequency in use\n  fix: give 10 to 20000 MHz\n"),
        (["good.toml", "--points", "2"], "--points: 2 points\n  fix: give 4 to 2001\n"),
        (["good.toml", "--at-mhz", "much"], "Invalid value for '--at-mhz'"),
        (["good.toml", "--out", "lone.toml"], "--out: lone.toml is not a folder\n  fix: name a folder, new or not\n"),
    ],
    ids=lambda value: " ".join(value) if isinstance(value, list) else "",
)
def test_bad_input_is_status_2_with_its_fix(arguments: list[str], text: str, place: Path) -> None:
    done = boomwright("predict", *arguments, cwd=place)
    assert done.returncode == 2, done.stderr
    assert text in done.stderr
    assert "Traceback" not in done.stderr
    assert done.stdout == ""
    assert {path.name for path in place.iterdir()} == {"good.toml", "lone.toml"}


def test_touching_conductors_name_file_and_key(place: Path) -> None:
    (place / "touching.toml").write_text(GOOD.replace("at_mm = 95.0", "at_mm = 148.0"))
    done = boomwright("predict", "touching.toml", cwd=place)
    assert done.returncode == 2
    assert done.stderr.startswith("touching.toml: rod[2].at_mm: 150 touches rod[1] at 148\n  fix: ")


def test_a_folder_below_a_file_cannot_be_written(place: Path) -> None:
    done = boomwright("predict", "good.toml", "--at-mhz", "866.5", "--out", "lone.toml/rf", cwd=place)
    assert done.returncode == 4
    assert done.stderr.startswith("boomwright: cannot write lone.toml/rf")
    assert "Traceback" not in done.stderr


HEAVY = ("cadquery", "OCP", "ezdxf", "trimesh", "lib3mf", "manifold3d", "shapely", "matplotlib", "skrf", "pandas")
SPY = """
import sys
from boomwright import cli
sys.argv = ["boomwright", *{arguments!r}]
try:
    cli.main()
except SystemExit as end:
    assert end.code in (0, None), end.code
loaded = [name for name in {heavy!r} if name in sys.modules]
sys.exit(f"loaded: {{loaded}}" if loaded else 0)
"""


@pytest.mark.parametrize("arguments", [["--at-mhz", "866.5"], ["--at-mhz", "866.5", "--out", "rf"]], ids=" ".join)
def test_nothing_heavy_is_loaded(arguments: list[str], place: Path) -> None:
    code = SPY.format(arguments=["predict", "good.toml", *arguments], heavy=HEAVY)
    environment = os.environ | {"PYTHONWARNINGS": "ignore"}
    done = subprocess.run(
        [sys.executable, "-c", code], cwd=place, capture_output=True, text=True, check=False, env=environment
    )
    assert done.returncode == 0, done.stderr
