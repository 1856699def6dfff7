"""CSV: what is written comes back, and no spreadsheet takes a cell for a formula."""

import csv

import pytest
from specimens import TABLE

from boomwright.errors import MeasureError
from boomwright.formats.csvtable import CSV
from boomwright.pieces import Probe, TablePiece


def saved(tmp_path, *cells):
    piece = TablePiece("t", "bench", tuple(f"c{i}" for i in range(len(cells))), (cells,))
    CSV.write(piece, tmp_path / "t.csv")
    return CSV.read(tmp_path / "t.csv")


def test_a_table_comes_back_as_it_was(tmp_path):
    CSV.write(TABLE, tmp_path / "t.csv")
    reading = CSV.read(tmp_path / "t.csv")
    assert (reading.columns, reading.rows) == (TABLE.columns, TABLE.rows)
    data = (tmp_path / "t.csv").read_bytes()
    assert b"\r" not in data
    assert data.decode("utf-8").endswith("''ready µm\n")


@pytest.mark.parametrize("cell", ["=1+1", "+cmd|' /C calc'!A0", "-2+3", "@SUM(A1)", "\t=1", "- note"])
def test_formulas_are_kept_as_text(tmp_path, cell):
    assert saved(tmp_path, cell).rows == ((cell,),)
    with (tmp_path / "t.csv").open(newline="", encoding="utf-8") as file:
        assert list(csv.reader(file))[1] == [f"'{cell}"]


@pytest.mark.parametrize("cell", ["-2.5", "+3", "1e-3", "-0", "plain", ""])
def test_numbers_and_plain_text_stay_bare(tmp_path, cell):
    saved(tmp_path, cell, "end")
    assert (tmp_path / "t.csv").read_text().splitlines()[1] == f"{cell},end"


def test_cells_as_numbers(tmp_path):
    reading = saved(tmp_path, "-2.5", "nan", "word")
    assert CSV.measure(reading, Probe("cell", {"row": 0, "column": "c0"}), []) == -2.5
    assert CSV.measure(reading, Probe("row_count"), []) == 1.0
    for row, column in ((0, "c1"), (0, "c2"), (1, "c0"), (0, "c9")):
        with pytest.raises(MeasureError):
            CSV.measure(reading, Probe("cell", {"row": row, "column": column}), [])


def test_a_row_too_short_is_no_table(tmp_path):
    (tmp_path / "t.csv").write_text("a,b\n1,2\n3\n")
    with pytest.raises(MeasureError, match="as many cells in every row"):
        CSV.read(tmp_path / "t.csv")
