"""CSV: tables for people and spreadsheets; UTF-8, one line a row, lines ended by a bare line feed."""

from __future__ import annotations

import csv
import io
import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from boomwright.errors import CatalogueError, MeasureError
from boomwright.formats.format import FileEntry, Format
from boomwright.pieces import Expectation, Piece, Probe, TablePiece
from boomwright.shop.profile import Shop

FORMULA_STARTS = ("=", "+", "-", "@", "\t", "\r")
"""A spreadsheet takes a cell that begins so for a formula (common practice: a leading apostrophe makes it text)."""


@dataclass(frozen=True)
class CsvReading:
    """One table, read once."""

    path: Path
    columns: tuple[str, ...]
    rows: tuple[tuple[str, ...], ...]


class Csv(Format):
    """The CSV format."""

    name = "csv"
    suffix = ".csv"
    unit = ""

    def takes(self, piece: Piece) -> bool:
        """Tables."""
        return isinstance(piece, TablePiece)

    def write(self, piece: Piece, path: Path) -> None:
        """Columns, then rows; text that looks like a formula gets an apostrophe."""
        assert isinstance(piece, TablePiece)
        text = io.StringIO(newline="")
        writer = csv.writer(text, lineterminator="\n")
        for row in (piece.columns, *piece.rows):
            writer.writerow([_guarded(cell) for cell in row])
        path.write_bytes(text.getvalue().encode("utf-8"))

    def read(self, path: Path) -> CsvReading:
        """The table, without the apostrophes."""
        try:
            text = path.read_bytes().decode("utf-8")
            lines = list(csv.reader(io.StringIO(text, newline=""), strict=True))
        except (OSError, UnicodeDecodeError, csv.Error) as error:
            raise MeasureError(f"{path.name}: not a readable table ({error})") from error
        rows = [tuple(_bare(cell) for cell in line) for line in lines]
        if not rows or any(len(row) != len(rows[0]) for row in rows):
            raise MeasureError(f"{path.name}: not a table with as many cells in every row")
        return CsvReading(path, rows[0], tuple(rows[1:]))

    def measure(self, reading: Any, probe: Probe, also: Sequence[Any]) -> float:
        """`row_count`, `cell` {row (from 0), column (its name)}, or `column_sum` {column, where {column: text}}."""
        if probe.measure == "row_count":
            return float(len(reading.rows))
        if probe.measure == "cell":
            return _cell(reading, probe.arguments)
        if probe.measure == "column_sum":
            return _column_sum(reading, probe.arguments)
        raise CatalogueError(f"unknown CSV measure {probe.measure!r} (known: row_count, cell, column_sum)")

    def expect(self, entry: FileEntry, shop: Shop) -> tuple[Expectation, ...]:
        """At least a heading: what else a table must show is its part's to say."""
        return (Expectation(entry.path, "number of rows", 0.0, 0.0, "", Probe("row_count"), "at_least"),)


def _cell(reading: CsvReading, arguments: Mapping[str, Any]) -> float:
    row, column = int(arguments["row"]), str(arguments["column"])
    if column not in reading.columns or not 0 <= row < len(reading.rows):
        raise MeasureError(f"{reading.path.name}: no cell in row {row} of column {column!r}")
    text = reading.rows[row][reading.columns.index(column)]
    if not _is_number(text) or not math.isfinite(float(text)):
        raise MeasureError(f"{reading.path.name}: {text!r} in row {row} of column {column!r} is not a number")
    return float(text)


def _column_sum(reading: CsvReading, arguments: Mapping[str, Any]) -> float:
    """Sum of a column over the rows whose other columns hold these texts; MeasureError when there is no such row."""
    where = {str(column): str(text) for column, text in arguments["where"].items()}
    unknown = [column for column in where if column not in reading.columns]
    if unknown:
        raise MeasureError(f"{reading.path.name}: no column {unknown[0]!r}")
    places = {reading.columns.index(column): text for column, text in where.items()}
    chosen = [i for i, row in enumerate(reading.rows) if all(row[place] == text for place, text in places.items())]
    if not chosen:
        raise MeasureError(f"{reading.path.name}: no row where {where}")
    return math.fsum(_cell(reading, {"row": index, "column": arguments["column"]}) for index in chosen)


def _is_number(text: str) -> bool:
    try:
        float(text)
    except ValueError:
        return False
    return True


def _guarded(cell: str) -> str:
    # An apostrophe of the text's own is doubled, so that reading gives back what was written.
    own = cell.startswith("'")
    return f"'{cell}" if own or (cell.startswith(FORMULA_STARTS) and not _is_number(cell)) else cell


def _bare(cell: str) -> str:
    return cell[1:] if cell.startswith("'") else cell


CSV = Csv()
