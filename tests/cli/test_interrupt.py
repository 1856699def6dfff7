"""A run that is interrupted, killed or short of disk leaves the previous output as it was."""

import resource
import signal
import subprocess
import sys
import time
from pathlib import Path

import pytest
import samples

from boomwright.design.tomlfile import write_design
from boomwright.folder import MARKER, staging_of

pytestmark = pytest.mark.slow
COMMAND = [sys.executable, "-m", "boomwright", "make", "gauge.toml", "--out", "beam", "--only", "boom", "-q"]


@pytest.fixture
def place(tmp_path: Path) -> Path:
    """A folder with a design and an earlier output."""
    (tmp_path / "gauge.toml").write_text(write_design(samples.GAUGE))
    (tmp_path / "beam").mkdir()
    (tmp_path / "beam" / MARKER).write_text("earlier")
    return tmp_path


def begin(place: Path) -> subprocess.Popen[str]:
    """Start a run and wait until it has begun to write."""
    run = subprocess.Popen(COMMAND, cwd=place, stdout=subprocess.PIPE, stderr=subprocess.PIPE, text=True)
    while not (staging_of(place / "beam") / "design.toml").exists():
        assert run.poll() is None
        time.sleep(0.01)
    return run


def left(place: Path) -> list[str]:
    return sorted(entry.name for entry in place.iterdir())


def test_interrupt_exits_130_and_leaves_nothing(place: Path) -> None:
    run = begin(place)
    run.send_signal(signal.SIGINT)
    _, errors = run.communicate()
    assert run.returncode == 130
    assert "Traceback" not in errors
    assert (place / "beam" / MARKER).read_text() == "earlier"
    assert left(place) == ["beam", "gauge.toml"]


def test_killed_run_is_cleared_by_the_next(place: Path) -> None:
    run = begin(place)
    run.kill()
    run.communicate()
    assert (place / "beam" / MARKER).read_text() == "earlier"
    done = subprocess.run(COMMAND, cwd=place, capture_output=True, text=True, check=False)
    assert done.returncode == 0, done.stderr
    assert (place / "beam" / "antenna.step").is_file()
    assert left(place) == ["beam", "gauge.toml"]


def small_disk() -> None:
    """No file may grow beyond 20 kB: the system answers as a full disk does, in the middle of a write."""
    signal.signal(signal.SIGXFSZ, signal.SIG_IGN)
    resource.setrlimit(resource.RLIMIT_FSIZE, (20_000, 20_000))


def test_full_disk_exits_4_and_leaves_the_previous_output(place: Path) -> None:
    done = subprocess.run(COMMAND, cwd=place, capture_output=True, text=True, check=False, preexec_fn=small_disk)
    assert done.returncode == 4, done.stderr
    assert done.stderr.startswith("boomwright: ")
    assert "Traceback" not in done.stderr
    assert (place / "beam" / MARKER).read_text() == "earlier"
    assert left(place) == ["beam", "gauge.toml"]
