"""A fleet: what is up to date is left, a fault stays alone, and a killed run ends as one that was not."""

import json
import random
import signal
import subprocess
import sys
import time
from collections.abc import Iterator
from pathlib import Path

import pytest
from samples import LONE_LOOP

from boomwright.design.tomlfile import write_design
from boomwright.errors import AccessError, InputFault
from boomwright.fleet import run
from boomwright.fleet.outcome import Outcome
from boomwright.fleet.recipe import Recipe
from boomwright.fleet.run import Fleet, run_fleet

VARIANT = '[[variant]]\nname = "{}"\ndesign = "beam.toml"\nset = {{ "boom.nose_mm" = {} }}\n'


@pytest.fixture
def table(tmp_path: Path) -> Path:
    """Four variants of one design, the third broken."""
    (tmp_path / "beam.toml").write_text(write_design(LONE_LOOP), "utf-8")
    names = [("a", "12.0"), ("b", "9.0"), ("broken", '"long"'), ("d", "10.0")]
    text = "schema = 1\n" + "".join(VARIANT.format(*each) for each in names)
    (tmp_path / "beams.toml").write_text(text, "utf-8")
    return tmp_path / "beams.toml"


@pytest.fixture
def built(monkeypatch: pytest.MonkeyPatch) -> Iterator[list[str]]:
    """Names of what is made, in a stand-in that writes one file and its manifest: runs are judged here, not beams."""
    names: list[str] = []

    def stand_in(recipe: Recipe, folder: Path) -> Outcome:
        name = recipe.variant.name
        names.append(name)
        if name == "broken":
            return Outcome(name, "failed", "too long")
        place = folder / name
        place.mkdir(exist_ok=True)
        (place / "rod.txt").write_text(recipe.key, "utf-8")
        entry = {"path": "rod.txt", "part": "rod", "process": "cnc", "format": "txt", "unit": "mm"}
        files = [entry | {"sha256": run_sum(place / "rod.txt")}]
        document = {"files": files, "plan": [], "parts": ["rod"], "left_out": {}}
        (place / "manifest.json").write_text(json.dumps(document), "utf-8")
        return Outcome(name, "made", files=1, audit_ok=True, gain_dbi=9.0)

    monkeypatch.setattr(run, "make_variant", stand_in)
    yield names


def run_sum(path: Path) -> str:
    from boomwright.manifest import sum_of

    return sum_of(path)


def states(fleet: Fleet) -> list[str]:
    return [one.state for one in fleet.outcomes]


def contents(folder: Path) -> dict[str, bytes]:
    return {path.relative_to(folder).as_posix(): path.read_bytes() for path in folder.rglob("*") if path.is_file()}


def test_a_fault_of_one_leaves_the_others(table: Path, built: list[str], tmp_path: Path) -> None:
    fleet = run_fleet(table, out=tmp_path / "out")
    assert states(fleet) == ["made", "made", "failed", "made"]
    assert [one.name for one in fleet.failed] == ["broken"]
    listed = json.loads((tmp_path / "out" / "fleet.json").read_text("utf-8"))["variants"]
    assert [one["state"] for one in listed] == states(fleet)
    assert listed[2]["reason"] == "too long" and listed[2]["gain_dbi"] is None


def test_a_second_run_makes_nothing(table: Path, built: list[str], tmp_path: Path) -> None:
    run_fleet(table, out=tmp_path / "out")
    built.clear()
    assert states(run_fleet(table, out=tmp_path / "out")) == ["unchanged", "unchanged", "failed", "unchanged"]
    assert built == []


def test_what_changed_is_made_again(table: Path, built: list[str], tmp_path: Path) -> None:
    out = tmp_path / "out"
    run_fleet(table, out=out)
    built.clear()
    table.write_text(table.read_text("utf-8").replace("9.0", "9.5"), "utf-8")
    (out / "d" / "rod.txt").write_text("scratched", "utf-8")
    assert states(run_fleet(table, out=out)) == ["unchanged", "made", "failed", "made"]
    assert built == ["b", "d"]


@pytest.mark.parametrize("stop_after", [0, 1, 2, 3])
def test_a_stopped_run_ends_as_one_that_was_not(table: Path, built: list[str], tmp_path: Path, stop_after: int) -> None:
    run_fleet(table, out=tmp_path / "straight")
    done: list[str] = []

    def stop(count: int, of: int, name: str) -> None:
        if len(done) == stop_after:
            raise KeyboardInterrupt
        done.append(name)

    with pytest.raises(KeyboardInterrupt):
        run_fleet(table, out=tmp_path / "stopped", progress=stop)
    assert not (tmp_path / "stopped" / "fleet.json").exists()
    run_fleet(table, out=tmp_path / "stopped")
    assert contents(tmp_path / "stopped") == contents(tmp_path / "straight")


def test_a_missing_design_is_its_variants_fault(table: Path, built: list[str], tmp_path: Path) -> None:
    text = table.read_text("utf-8").replace('name = "a"\ndesign = "beam.toml"', 'name = "a"\ndesign = "lost.toml"')
    table.write_text(text, "utf-8")
    fleet = run_fleet(table, out=tmp_path / "out")
    assert states(fleet) == ["failed", "made", "failed", "made"]
    assert "no such file" in fleet.outcomes[0].reason


def test_two_runs_at_one_folder(table: Path, built: list[str], tmp_path: Path) -> None:
    def another(done: int, of: int, name: str) -> None:
        with pytest.raises(AccessError, match="another run is making"):
            run_fleet(table, out=tmp_path / "out")

    run_fleet(table, out=tmp_path / "out", progress=another)


def test_a_folder_of_somebody_else_is_refused(table: Path, tmp_path: Path) -> None:
    with pytest.raises(InputFault, match="holds files that no fleet has written"):
        run_fleet(table, out=tmp_path)


def test_names_cannot_break_the_page(table: Path, built: list[str], tmp_path: Path) -> None:
    run.write_index([Outcome("a", "failed", "<script>alert(1)</script>")], "<b>title", tmp_path)
    page = (tmp_path / "index.html").read_text("utf-8")
    assert "<script" not in page and "&lt;script&gt;" in page and "&lt;b&gt;title" in page


@pytest.mark.slow
def test_killed_at_any_moment_and_resumed(table: Path, tmp_path: Path) -> None:
    """The real thing: variants made in processes of their own, the run killed twice on the way."""
    text = "schema = 1\n" + VARIANT.format("a", "12.0") + VARIANT.format("broken", '"long"')
    table.write_text(text, "utf-8")
    command = [sys.executable, "-m", "boomwright", "fleet", "beams.toml", "-q", "--jobs", "2", "--out"]
    began = time.monotonic()
    assert subprocess.run([*command, "straight"], cwd=tmp_path, capture_output=True, check=False).returncode == 3
    span_s = time.monotonic() - began
    moments = random.Random(7)
    for _ in range(2):
        killed = subprocess.Popen([*command, "killed"], cwd=tmp_path, stderr=subprocess.DEVNULL)
        time.sleep(moments.uniform(0.1, 0.9) * span_s)
        killed.send_signal(signal.SIGKILL)
        killed.wait()
    while subprocess.run([*command, "killed"], cwd=tmp_path, capture_output=True, check=False).returncode == 4:
        time.sleep(0.1)
    assert contents(tmp_path / "killed") == contents(tmp_path / "straight")
