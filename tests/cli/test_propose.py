"""`propose` and `rescale` as commands: exit status, one JSON document, faults at once, files kept."""

import json
import subprocess
import sys
from pathlib import Path

import pytest

from boomwright.design.tomlfile import load_design

EXAMPLE = Path(__file__).parents[2] / "examples" / "stream-gauge-868.toml"


def boomwright(*arguments: str, cwd: Path) -> subprocess.CompletedProcess[str]:
    return subprocess.run(
        [sys.executable, "-m", "boomwright", *arguments], cwd=cwd, capture_output=True, text=True, check=False
    )


def test_faults_of_the_arguments_at_once(tmp_path: Path) -> None:
    done = boomwright("propose", "--band", "870:863", "--rods", "70", "--ohm", "0", "--out", "a.toml", cwd=tmp_path)
    assert done.returncode == 2
    assert [line.split(":")[0] for line in done.stderr.splitlines() if not line.startswith(" ")] == [
        "--band", "--rods", "--ohm",
    ]  # fmt: skip
    assert list(tmp_path.iterdir()) == []


def test_faults_of_rescale_name_their_file_and_a_file_that_no_run_wrote_is_kept(tmp_path: Path) -> None:
    done = boomwright("rescale", "none.toml", "--to-mhz", "433", "--out", "b.toml", cwd=tmp_path)
    assert done.returncode == 2
    assert "none.toml: no such file" in done.stderr
    assert list(tmp_path.iterdir()) == []
    (tmp_path / "mine.toml").write_text("# mine\n")
    done = boomwright("rescale", str(EXAMPLE), "--to-mhz", "433", "--out", "mine.toml", cwd=tmp_path)
    assert done.returncode == 2
    assert "mine.toml exists and no run has written it" in done.stderr
    assert (tmp_path / "mine.toml").read_text() == "# mine\n"


@pytest.mark.slow
def test_rescale_writes_a_design_and_one_document(tmp_path: Path) -> None:
    for _ in range(2):  # a file that a run has written is replaced
        done = boomwright(
            "rescale", str(EXAMPLE), "--to-mhz", "915", "--rod-mm", "3", "--out", "b.toml", "--json", cwd=tmp_path
        )
        assert done.returncode == 0, done.stderr
    document = json.loads(done.stdout)
    assert document["after"]["vswr_max"] <= 1.5
    assert abs(document["after"]["gain_dbi"] - document["before"]["gain_dbi"]) < 0.15
    design = load_design(tmp_path / "b.toml")
    assert design.band.centre_mhz == 915.0
    assert [rod.length_mm for rod in design.rods] == [each["length_mm"] for each in document["rods"]]


@pytest.mark.slow
def test_a_wish_that_is_not_met_leaves_the_best_and_says_so(tmp_path: Path) -> None:
    command = ("propose", "--band", "433:435", "--rods", "1", "--driven", "straight", "--gain-min", "12", "-q")
    done = boomwright(*command, "--out", "c.toml", cwd=tmp_path)
    assert done.returncode == 3, done.stderr
    assert done.stdout == ""
    assert done.stderr.startswith("not met: spec.gain_dbi_min: gain is ")
    assert load_design(tmp_path / "c.toml").spec.gain_dbi_min == 12.0
