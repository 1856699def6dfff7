"""The manifest: every file of an output folder with its part, process, format, frame and sum, and the plan's sizes."""

from __future__ import annotations

import hashlib
import json
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any, Literal

from boomwright import __version__
from boomwright.errors import MeasureError
from boomwright.formats.format import FileEntry
from boomwright.plan.frame import IDENTITY
from boomwright.plan.size import Size

FILE = "manifest.json"
SCHEMA = 1
BOOK_PROCESS = "book"
"""Of files that people read: they have a sum, and nothing in them is measured."""
MadeFrom = Literal["design", "shop"]
"""What the files of a folder follow from: a design (and a shop), or a shop alone (its calibration pieces)."""


@dataclass(frozen=True)
class Manifest:
    """What a manifest says: files with their sums, parts, sizes with their origins, and what all of it follows from."""

    entries: tuple[FileEntry, ...]
    sums: Mapping[str, str]
    parts: tuple[str, ...]
    left_out: Mapping[str, str] = field(default_factory=dict)
    sizes: tuple[Size, ...] = ()
    made_from: MadeFrom = "design"


def sum_of(path: Path) -> str:
    """The sha256 of a file, as hexadecimal digits."""
    with path.open("rb") as file:
        return hashlib.file_digest(file, "sha256").hexdigest()


def write_manifest(
    folder: Path,
    entries: Sequence[FileEntry],
    parts: Sequence[str],
    left_out: Mapping[str, str],
    sizes: Sequence[Size],
    *,
    made_from: MadeFrom = "design",
) -> Manifest:
    """Write the manifest of what stands in `folder`, and return it."""
    entries = sorted(entries, key=lambda entry: entry.path)
    sums = {entry.path: sum_of(folder / entry.path) for entry in entries}
    files = [
        {
            "path": entry.path,
            "part": entry.part,
            "process": entry.process,
            "format": entry.format,
            "unit": entry.unit,
            "sha256": sums[entry.path],
            "bytes": (folder / entry.path).stat().st_size,
            "frame": [list(row) for row in entry.frame],
            "offsets": dict(entry.offsets),
        }
        for entry in entries
    ]
    plan = [{"key": s.key, "value": s.value, "unit": s.unit, "origin": s.origin} for s in sizes]
    document = {
        "schema": SCHEMA,
        "version": __version__,
        "made_from": made_from,
        "files": files,
        "parts": list(parts),
        "left_out": dict(left_out),
        "plan": plan,
    }
    (folder / FILE).write_text(json.dumps(document, indent=1, ensure_ascii=True, allow_nan=False) + "\n", "utf-8")
    return Manifest(tuple(entries), sums, tuple(parts), dict(left_out), tuple(sizes), made_from)


def read_manifest(folder: Path) -> Manifest:
    """Read a folder's manifest. Raises MeasureError when it is missing or not what we write."""
    try:
        document: Any = json.loads((folder / FILE).read_text("utf-8"))
        entries = tuple(_entry(item) for item in document["files"])
        sums = {item["path"]: str(item["sha256"]) for item in document["files"]}
        sizes = tuple(
            Size(str(s["key"]), float(s["value"]), str(s["unit"]), str(s["origin"])) for s in document["plan"]
        )
        parts = tuple(str(name) for name in document["parts"])
        left_out = {str(k): str(v) for k, v in document["left_out"].items()}
        made_from: MadeFrom = "shop" if document.get("made_from", "design") == "shop" else "design"
    except (OSError, ValueError, KeyError, TypeError, AttributeError, RecursionError) as error:
        raise MeasureError(f"{FILE} cannot be read: {error}") from error
    return Manifest(entries, sums, parts, left_out, sizes, made_from)


def _entry(item: Any) -> FileEntry:
    path = str(item["path"])
    if path.startswith("/") or ".." in Path(path).parts:
        raise ValueError(f"{path!r} is not a path in the folder")
    rows = tuple((float(r[0]), float(r[1]), float(r[2]), float(r[3])) for r in item.get("frame", IDENTITY))
    offsets = {str(k): float(v) for k, v in item.get("offsets", {}).items()}
    return FileEntry(
        path, str(item["part"]), str(item["process"]), str(item["format"]), str(item["unit"]), rows, offsets
    )
