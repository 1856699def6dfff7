"""The output folder: swapped in at the end, or nothing changed."""

import signal
import subprocess
import sys
import textwrap
from pathlib import Path

import pytest

from boomwright.errors import AccessError, InputFault
from boomwright.folder import MARKER, fresh_folder, previous_of, staging_of


def fill(folder: Path, text: str) -> None:
    (folder / MARKER).write_text(text)
    (folder / "print").mkdir()
    (folder / "print" / "part.stl").write_text(text)


def text_of(folder: Path) -> str:
    return (folder / "print" / "part.stl").read_text()


def litter(parent: Path) -> list[str]:
    return sorted(p.name for p in parent.iterdir() if p.name.startswith("."))


def test_new_folder_appears_whole(tmp_path: Path) -> None:
    with fresh_folder(tmp_path / "a" / "beam") as folder:
        fill(folder, "one")
        assert not (tmp_path / "a" / "beam").exists()
    assert text_of(tmp_path / "a" / "beam") == "one"
    assert litter(tmp_path / "a") == []


def test_second_run_replaces_the_first(tmp_path: Path) -> None:
    target = tmp_path / "beam"
    for text in ("one", "two"):
        with fresh_folder(target) as folder:
            fill(folder, text)
    assert text_of(target) == "two"
    assert litter(tmp_path) == []


def test_failing_run_leaves_the_previous_output(tmp_path: Path) -> None:
    target = tmp_path / "beam"
    with fresh_folder(target) as folder:
        fill(folder, "one")
    with pytest.raises(RuntimeError), fresh_folder(target) as folder:
        (folder / "half").write_text("half")
        raise RuntimeError
    assert text_of(target) == "one"
    assert litter(tmp_path) == []


def test_without_an_atomic_exchange(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr("boomwright.folder._exchange", lambda first, second: False)
    test_second_run_replaces_the_first(tmp_path)


def test_next_run_restores_after_a_cut_between_the_two_renames(tmp_path: Path) -> None:
    target = tmp_path / "beam"
    previous_of(target).mkdir()
    fill(previous_of(target), "one")
    with pytest.raises(RuntimeError), fresh_folder(target):
        assert text_of(target) == "one"
        raise RuntimeError
    assert text_of(target) == "one"
    assert litter(tmp_path) == []


KILLED = """
import sys, os, signal
from pathlib import Path
from boomwright.folder import fresh_folder
with fresh_folder(Path(sys.argv[1])) as folder:
    (folder / "half").write_text("half")
    os.kill(os.getpid(), signal.SIGKILL)
"""


def test_killed_run_leaves_the_previous_output_and_the_next_clears_up(tmp_path: Path) -> None:
    target = tmp_path / "beam"
    with fresh_folder(target) as folder:
        fill(folder, "one")
    done = subprocess.run([sys.executable, "-c", KILLED, str(target)], check=False)
    assert done.returncode == -signal.SIGKILL
    assert text_of(target) == "one"
    assert litter(tmp_path) == [staging_of(target).name]
    with fresh_folder(target) as folder:
        assert list(folder.iterdir()) == []
        fill(folder, "two")
    assert text_of(target) == "two"
    assert litter(tmp_path) == []


HOLDING = """
import sys
from pathlib import Path
from boomwright.folder import fresh_folder
with fresh_folder(Path(sys.argv[1])) as folder:
    (folder / "manifest.json").write_text("held")
    print("ready", flush=True)
    sys.stdin.readline()
"""


def test_second_run_at_one_target_is_refused_clearly(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr("boomwright.folder.PATIENCE_S", 0.1)
    target = tmp_path / "beam"
    command = [sys.executable, "-c", HOLDING, str(target)]
    with subprocess.Popen(command, stdin=subprocess.PIPE, stdout=subprocess.PIPE, text=True) as other:
        assert other.stdout is not None
        assert other.stdout.readline() == "ready\n"
        message = r"another run is writing .*beam: wait until it has ended"
        with pytest.raises(AccessError, match=message), fresh_folder(target):
            raise AssertionError("two runs at one target")
        other.communicate("\n")
    assert (target / MARKER).read_text() == "held"
    assert litter(tmp_path) == []


@pytest.mark.parametrize("kind", ["foreign folder", "file", "link"])
def test_what_is_not_ours_is_never_replaced(tmp_path: Path, kind: str) -> None:
    target = tmp_path / "beam"
    if kind == "file":
        target.write_text("mine")
    elif kind == "link":
        (tmp_path / "real").mkdir()
        target.symlink_to(tmp_path / "real")
    else:
        target.mkdir()
        (target / "notes.txt").write_text("mine")
    with pytest.raises(InputFault) as caught, fresh_folder(target):
        pass
    assert caught.value.faults[0].path == "--out"
    assert "beam" in caught.value.faults[0].found


SMALL_DISK = """
import resource, signal, sys
from pathlib import Path
from boomwright.errors import AccessError
from boomwright.folder import fresh_folder
signal.signal(signal.SIGXFSZ, signal.SIG_IGN)
resource.setrlimit(resource.RLIMIT_FSIZE, (1000, 1000))
try:
    with fresh_folder(Path(sys.argv[1])) as folder:
        (folder / "big").write_bytes(b"x" * 5000)
except AccessError as error:
    print(error.strerror)
"""


def test_disk_that_takes_no_more_leaves_the_previous_output(tmp_path: Path) -> None:
    target = tmp_path / "beam"
    with fresh_folder(target) as folder:
        fill(folder, "one")
    done = subprocess.run(
        [sys.executable, "-c", textwrap.dedent(SMALL_DISK), str(target)], check=True, capture_output=True, text=True
    )
    assert done.stdout.startswith("cannot write")
    assert text_of(target) == "one"
    assert litter(tmp_path) == []


def test_place_that_cannot_be_written_is_an_access_error(tmp_path: Path) -> None:
    blocked = tmp_path / "file"
    blocked.write_text("not a folder")
    with pytest.raises(AccessError, match="cannot write"), fresh_folder(blocked / "beam"):
        pass
    assert [p.name for p in tmp_path.iterdir()] == ["file"]
