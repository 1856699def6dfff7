"""The output folder: written beside its place and swapped in at the end, so that a run that fails changes nothing."""

from __future__ import annotations

import ctypes
import errno
import fcntl
import os
import shutil
import time
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path

from boomwright.errors import AccessError, Fault, InputFault

OUTPUTS = Path("outputs")
"""Where an output goes that nobody sent elsewhere."""

MARKER = "manifest.json"
"""The file by which a folder is known to be ours to replace."""

PATIENCE_S = 5.0
"""How long a run waits for another at the same target: one whose parent was killed takes a moment to notice."""

_AT_FDCWD = -100
_RENAME_EXCHANGE = 2


def staging_of(target: Path) -> Path:
    """The folder beside `target` that a run writes into."""
    return target.with_name(f".{target.name}.partial")


def previous_of(target: Path) -> Path:
    """Where the previous output waits for a moment on systems without an atomic exchange."""
    return target.with_name(f".{target.name}.previous")


@contextmanager
def fresh_folder(target: Path) -> Iterator[Path]:
    """A fresh folder to write into; it takes the place of `target` when the block ends without an error.

    What an earlier run left behind (killed, power cut) is cleared or restored first. Raises InputFault when `target`
    is not a folder of ours to replace, AccessError when it cannot be written or another run is writing it.
    """
    target = target.absolute()
    check_replaceable(target)
    try:
        target.parent.mkdir(parents=True, exist_ok=True)
        lock = _claim(target)
        try:
            _restore(target)
            staging = staging_of(target)
            _empty(staging)
            try:
                yield staging
                _swap(staging, target)
            finally:
                shutil.rmtree(staging, ignore_errors=True)
        finally:
            os.close(lock)
    except AccessError:
        raise
    except OSError as error:
        raise AccessError(error.errno, f"cannot write {error.filename or target}: {error.strerror or error}") from error


def check_replaceable(target: Path) -> None:
    """Raise InputFault unless `target` is missing, empty, or an output folder with nothing in it but what we wrote."""
    if not target.exists() and not target.is_symlink():
        return
    if not target.is_dir() or target.is_symlink():
        raise InputFault(
            [Fault("--out", f"{target} is not a folder", "name a folder that is new or holds an earlier output")]
        )
    if any(target.iterdir()) and not (target / MARKER).is_file():
        found = f"{target} holds files that no run has written"
        raise InputFault([Fault("--out", found, "name a folder that is new, empty, or holds an earlier output")])


def _claim(target: Path) -> int:
    """A lock on the staging folder; taken anew when a finished run moved the folder away under us."""
    staging = staging_of(target)
    deadline = time.monotonic() + PATIENCE_S
    while True:
        staging.mkdir(exist_ok=True)
        lock = os.open(staging, os.O_RDONLY | os.O_DIRECTORY)
        try:
            fcntl.flock(lock, fcntl.LOCK_EX | fcntl.LOCK_NB)
        except BlockingIOError as error:
            os.close(lock)
            if time.monotonic() < deadline:
                time.sleep(0.05)
                continue
            raise AccessError(errno.EBUSY, f"another run is writing {target}: wait until it has ended") from error
        try:
            if os.fstat(lock).st_ino == staging.stat().st_ino:
                return lock
        except FileNotFoundError:
            pass
        os.close(lock)


def _restore(target: Path) -> None:
    previous = previous_of(target)
    if previous.exists():
        if target.exists():
            shutil.rmtree(previous)
        else:
            previous.rename(target)


def _empty(folder: Path) -> None:
    for entry in folder.iterdir():
        if entry.is_dir() and not entry.is_symlink():
            shutil.rmtree(entry)
        else:
            entry.unlink()


def _swap(staging: Path, target: Path) -> None:
    for path in [*staging.rglob("*"), staging]:
        _flush(path)
    if not target.exists():
        staging.rename(target)
    elif not _exchange(staging, target):
        previous = previous_of(target)
        target.rename(previous)
        staging.rename(target)
        shutil.rmtree(previous)
    _flush(target.parent)


def _flush(path: Path) -> None:
    """Have the system put a file or a folder's entries on the disk, so that a power cut cannot swap in an empty one."""
    handle = os.open(path, os.O_RDONLY)
    try:
        os.fsync(handle)
    finally:
        os.close(handle)


def _exchange(first: Path, second: Path) -> bool:
    """Swap two folders in one step; False where the system or the file system has no such call."""
    try:
        renameat2 = ctypes.CDLL(None, use_errno=True).renameat2
    except (OSError, AttributeError):
        return False
    done = renameat2(_AT_FDCWD, os.fsencode(first), _AT_FDCWD, os.fsencode(second), _RENAME_EXCHANGE)
    return bool(done == 0)
