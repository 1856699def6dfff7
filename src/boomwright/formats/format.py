"""What every format offers: the pieces it takes, a writer, a reader, measures, the rules any file of it must meet."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

from boomwright.pieces import Expectation, Matrix, Piece, Probe
from boomwright.shop.profile import Shop


@dataclass(frozen=True)
class FileEntry:
    """One written file as the manifest lists it; `path` is relative to the output folder, with forward slashes."""

    path: str
    part: str
    process: str
    format: str
    unit: str
    frame: Matrix
    offsets: Mapping[str, float] = field(default_factory=dict)


class Format:
    """Base of every format. One instance a format, in the catalogue of `formats/catalogue.py`."""

    name: str = ""
    suffix: str = ""
    unit: str = "mm"

    def takes(self, piece: Piece) -> bool:
        """Whether a piece is written in this format."""
        raise NotImplementedError

    def write(self, piece: Piece, path: Path) -> None:
        """Write one piece; the same piece gives the same bytes, in any process, on any day."""
        raise NotImplementedError

    def read(self, path: Path) -> Any:
        """Read a file once, for any number of measures. Raises MeasureError when it is not such a file."""
        raise NotImplementedError

    def measure(self, reading: Any, probe: Probe, also: Sequence[Any]) -> float:
        """One quantity; `also` holds the readings of `probe.also`. MeasureError when the file shows no such thing."""
        raise NotImplementedError

    def expect(self, entry: FileEntry, shop: Shop) -> tuple[Expectation, ...]:
        """The rules any file of this format must meet, whatever part it holds."""
        return ()
