"""One test of writing and reading for all formats."""

import dataclasses

import pytest
from specimens import SHOP, TABLE, TURNED, antenna_piece, drawing_piece, judge, rail_piece, write

from boomwright.errors import CatalogueError, MeasureError
from boomwright.formats.catalogue import FORMATS
from boomwright.pieces import Probe
from boomwright.shop.profile import Printer

PIECES = {
    "antenna": antenna_piece,
    "printed": rail_piece,
    "turned": lambda: rail_piece(frame=TURNED),
    "nominal": lambda: rail_piece(Printer(hole_shrink_mm=0.0), printed=None, offsets={}),
    "drawing": drawing_piece,
    "table": lambda: TABLE,
}
SUFFIXES = {
    "antenna": [".step"],
    "printed": [".step", ".stl", ".3mf"],
    "turned": [".step", ".stl", ".3mf"],
    "nominal": [".step", ".stl", ".3mf"],
    "drawing": [".dxf"],
    "table": [".csv"],
}


@pytest.mark.parametrize("name", PIECES)
def test_every_piece_meets_the_rules_of_its_formats(name, tmp_path):
    entries = write(PIECES[name](), tmp_path)
    assert [f".{entry.path.rpartition('.')[2]}" for entry in entries] == SUFFIXES[name]
    assert judge(entries, tmp_path) == {}


@pytest.mark.parametrize("name", PIECES)
def test_the_same_piece_gives_the_same_bytes(name, tmp_path):
    (tmp_path / "a").mkdir()
    (tmp_path / "b").mkdir()
    for folder in ("a", "b"):
        write(PIECES[name](), tmp_path / folder)
    for path in (tmp_path / "a").iterdir():
        assert path.read_bytes() == (tmp_path / "b" / path.name).read_bytes(), path.name


JUNK = {
    "empty": b"",
    "text": b"hello, this is no such file\n",
    "binary": bytes(range(256)) * 40,
    "zip": b"PK\x03\x04" + bytes(400),
    "step head": b"ISO-10303-21;\nHEADER;\nnonsense\nEND-ISO-10303-21;\n",
    "step data": b"ISO-10303-21;\nHEADER;\nENDSEC;\nDATA;\n#1 = POINT('',(0.,0.\nENDSEC;\nEND-ISO-10303-21;\n",
}


@pytest.mark.parametrize("junk", JUNK)
@pytest.mark.parametrize("name", ["step", "stl", "3mf", "dxf"])
def test_junk_is_a_finding_not_a_crash(name, junk, tmp_path, capfd):
    form = FORMATS[name]
    path = tmp_path / f"junk{form.suffix}"
    path.write_bytes(JUNK[junk])
    with pytest.raises(MeasureError, match=r"^junk\."):
        form.read(path)
    assert capfd.readouterr().out == ""


@pytest.mark.parametrize("junk", ["empty", "binary"])
def test_junk_is_no_table(junk, tmp_path):
    path = tmp_path / "junk.csv"
    path.write_bytes(JUNK[junk])
    with pytest.raises(MeasureError, match=r"^junk\.csv: not a"):
        FORMATS["csv"].read(path)


@pytest.mark.parametrize("name", FORMATS.names())
def test_a_missing_file_is_a_finding(name, tmp_path):
    with pytest.raises(MeasureError):
        FORMATS[name].read(tmp_path / f"gone{FORMATS[name].suffix}")


@pytest.mark.parametrize("name", ["printed", "drawing"])
def test_a_file_cut_short_is_a_finding(name, tmp_path):
    for entry in write(PIECES[name](), tmp_path):
        path = tmp_path / entry.path
        path.write_bytes(path.read_bytes()[: path.stat().st_size * 2 // 3])
        with pytest.raises(MeasureError):
            FORMATS[entry.format].read(path)


@pytest.mark.parametrize("name", FORMATS.names())
def test_an_unknown_measure_names_the_known_ones(name):
    with pytest.raises(CatalogueError, match=r"unknown .* measure 'charm' \(known: "):
        FORMATS[name].measure(None, Probe("charm"), [])


def test_an_oversize_part_overruns_the_bed_either_way_round(tmp_path):
    entries = write(rail_piece(), tmp_path)
    for bed, overrun in (((60.0, 40.0, 20.0), 0.0), ((40.0, 60.0, 20.0), 0.0), ((59.0, 59.0, 20.0), 1.0)):
        shop = dataclasses.replace(SHOP, printer=dataclasses.replace(SHOP.printer, bed_mm=bed))
        wrong = judge(entries[:1], tmp_path, shop)
        expected = {("rail-1.step", "overrun of the bed"): pytest.approx(overrun)} if overrun else {}
        assert wrong == expected


def test_the_catalogue_lists_the_formats_without_reading_any_file():
    assert FORMATS.names() == ("step", "stl", "3mf", "dxf", "csv", "touchstone", "svg", "pdf")
    assert [form.suffix for form in FORMATS] == [".step", ".stl", ".3mf", ".dxf", ".csv", ".s1p", ".svg", ".pdf"]
