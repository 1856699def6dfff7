"""Dimensions and table cells of a drawing as a reader of the file sees them, whatever the file's format.

A dimension is read twice: the number that stands on it, and how far the points it measures are apart on the drawing.
"""

from __future__ import annotations

import re
from collections import Counter
from collections.abc import Callable, Iterable, Mapping, Sequence
from dataclasses import dataclass
from typing import Any, Protocol

from boomwright.errors import MeasureError

NUMBER = re.compile(r"[RØ±]?(-?\d+(?:\.\d+)?)")
PAPER_MM = 0.003
"""How far rounding of coordinates may move the ends of a line on paper."""

SAME_PLACE = 0.3
"""Texts whose places differ by less than this share of their height stand in one row or column."""


@dataclass(frozen=True)
class SeenDimension:
    """Name, the text that stands on it, the true distance measured [mm], and millimetres of paper per millimetre."""

    name: str
    text: str
    length_mm: float
    scale: float = 1.0


@dataclass(frozen=True)
class SeenWords:
    """A text and the left end of its baseline, in the file's units."""

    text: str
    x: float
    y: float
    height: float


class Drawn(Protocol):
    """What a reading offers to be measured here."""

    @property
    def dimensions(self) -> Sequence[SeenDimension]:
        """All dimensions."""

    @property
    def words(self) -> Sequence[Any]:
        """All texts: strings or placed words."""


def number_in(text: str) -> float:
    """The number of a dimension's text or a table's cell: `Ø12`, `R1.6`, `±0.3`, `167.5`. MeasureError without one."""
    match = NUMBER.fullmatch(text.strip())
    if match is None:
        raise MeasureError(f"{text!r} is no size")
    return float(match[1])


def measure_text(reading: Any, arguments: Mapping[str, Any]) -> float:
    """The number that stands on the dimension `name`."""
    return number_in(_named(reading, arguments).text)


def measure_length(reading: Any, arguments: Mapping[str, Any]) -> float:
    """How far apart the points are that the dimension `name` measures [mm], the view's scale undone."""
    return _named(reading, arguments).length_mm


def measure_count(reading: Any, arguments: Mapping[str, Any]) -> float:
    """How many dimensions the drawing has."""
    return float(len(reading.dimensions))


def measure_cell(reading: Any, arguments: Mapping[str, Any]) -> float:
    """The number in the table whose first head is `key`: in the row that begins with `row`, under the head `column`."""
    key, row, column = (str(arguments[name]) for name in ("key", "row", "column"))
    words: Sequence[SeenWords] = reading.placed_words
    named = [w for w in words if w.text in (key, row, column)]
    for head in (w for w in named if w.text == key):
        heads = [w for w in named if w.text == column and _level(w, head) and w.x > head.x]
        rows = [w for w in named if w.text == row and abs(w.x - head.x) < SAME_PLACE * head.height and w.y < head.y]
        if not heads or not rows:
            continue
        under, start = min(heads, key=lambda w: w.x), max(rows, key=lambda w: w.y)
        for cell in words:
            if _level(cell, start) and abs(cell.x - under.x) < SAME_PLACE * head.height:
                return number_in(cell.text)
    raise MeasureError(f"{reading.path.name}: no {column!r} for {row!r} in the table of {key!r}")


def measure_mismatch(reading: Any, arguments: Mapping[str, Any], also: Sequence[Any]) -> float:
    """How many dimensions and texts differ from those of the first further file (same name, text and true length)."""
    other = also[0]
    mine = {d.name: d for d in reading.dimensions}
    theirs = {d.name: d for d in other.dimensions}
    wrong = len(mine.keys() ^ theirs.keys()) + len(reading.dimensions) - len(mine)
    for name in mine.keys() & theirs.keys():
        one, two = mine[name], theirs[name]
        near = abs(abs(one.length_mm) - abs(two.length_mm)) <= PAPER_MM / one.scale
        wrong += not near or one.text != two.text
    counts = Counter(_plain(reading.words)), Counter(_plain(other.words))
    return float(wrong + sum((counts[0] - counts[1]).values()) + sum((counts[1] - counts[0]).values()))


def _named(reading: Drawn, arguments: Mapping[str, Any]) -> SeenDimension:
    name = str(arguments["name"])
    found = [d for d in reading.dimensions if d.name == name]
    if len(found) != 1:
        raise MeasureError(f"{len(found)} dimensions named {name!r}, there should be one")
    return found[0]


def _level(one: SeenWords, other: SeenWords) -> bool:
    return abs(one.y - other.y) < SAME_PLACE * other.height


def _plain(words: Iterable[Any]) -> list[str]:
    """Texts in the letters that every format can show."""
    texts = (w.text if isinstance(w, SeenWords) else str(w) for w in words)
    return [text.encode("cp1252", "replace").decode("cp1252") for text in texts]


MEASURES: dict[str, Callable[[Any, Mapping[str, Any], Sequence[Any]], float]] = {
    "dimension_text": lambda reading, arguments, also: measure_text(reading, arguments),
    "dimension_length": lambda reading, arguments, also: measure_length(reading, arguments),
    "dimension_count": lambda reading, arguments, also: measure_count(reading, arguments),
    "table_cell": lambda reading, arguments, also: measure_cell(reading, arguments),
    "mismatch": measure_mismatch,
}
"""Measures that formats of drawings share."""
