"""Drawings read back: numbers and lengths are the plan's, in every format, and a falsified file is noticed."""

from dataclasses import replace

import ezdxf
import pytest
import samples
from drawing_cases import DENSE, LONG_145

from boomwright.judging import Bench
from boomwright.output import write_piece
from boomwright.parts.drawings import DrawingsPart
from boomwright.plan.plan import make_plan
from boomwright.shop.profile import Printer, Shop

PART = DrawingsPart()
HOSTILE = 'a) Tj ET /DIMENSION << /Name (x) >> BDC \\( <b>&"%%d\n漢字 ä'


def write(design, folder, shop=None):
    plan = make_plan(design, shop or Shop())
    entries = [entry for piece in PART.build(plan) for entry in write_piece(PART.name, piece, folder)]
    return plan, entries


def asked(plan, sheet):
    """What is expected of one sheet, or of all."""
    file = f"bench/drawing-{sheet}.dxf"
    return [e for e in PART.expect(plan) if not sheet or e.file == file or file in e.probe.also]


def wrong(plan, folder, sheet=""):
    return [(f.file, f.what) for f in Bench(folder).judge(asked(plan, sheet)) if not f.ok]


@pytest.fixture(scope="module")
def camera(tmp_path_factory):
    folder = tmp_path_factory.mktemp("camera")
    plan, _ = write(samples.CAMERA, folder)
    return plan, folder


@pytest.fixture
def copied(camera, tmp_path):
    plan, folder = camera
    (tmp_path / "bench").mkdir()
    for file in (folder / "bench").iterdir():
        (tmp_path / "bench" / file.name).write_bytes(file.read_bytes())
    return plan, tmp_path


def test_the_files_of_every_sheet(camera):
    _, folder = camera
    stems = [f"drawing-{name}" for name in ("boom", "rods", "driven", "cradle", "mould", "former")]
    names = [f"{stem}{suffix}" for stem in stems for suffix in (".dxf", ".svg")]
    assert sorted(file.name for file in (folder / "bench").iterdir()) == sorted([*names, "drawings.pdf"])


def test_every_quantity_is_the_plans(camera):
    plan, folder = camera
    assert len(PART.expect(plan)) > 100
    assert wrong(plan, folder) == []


@pytest.mark.slow
@pytest.mark.parametrize(
    "design",
    [samples.GAUGE, samples.TUBE_915, samples.UPRIGHT_868, samples.LOOP_2450, LONG_145, DENSE],
    ids=lambda d: d.name,
)
def test_every_quantity_of_every_design(design, tmp_path):
    plan, entries = write(design, tmp_path)
    assert wrong(plan, tmp_path) == []
    rules = [rule for entry in entries for rule in _rules(entry)]
    assert [str(f) for f in Bench(tmp_path).judge(rules) if not f.ok] == []


def _rules(entry):
    from boomwright.formats.catalogue import FORMATS

    return next(form for form in FORMATS if form.name == entry.format).expect(entry, Shop())


def test_the_formats_own_rules_hold(camera):
    plan, folder = camera
    entries = [entry for piece in PART.build(plan) for entry in write_piece(PART.name, piece, folder)]
    rules = [rule for entry in entries for rule in _rules(entry)]
    assert [str(f) for f in Bench(folder).judge(rules) if not f.ok] == []


def test_a_cad_program_measures_the_same(camera):
    """By ezdxf's own measurement of its DIMENSION entities, with the factor of the dimension's style."""
    _, folder = camera
    document = ezdxf.readfile(folder / "bench/drawing-boom.dxf")
    found = {}
    for entity in document.modelspace().query("DIMENSION"):
        measured = entity.get_measurement()
        value = measured.x if hasattr(measured, "x") else measured
        found[entity.get_xdata("BOOMWRIGHT")[0].value] = value * entity.get_dim_style().dxf.dimlfac
    assert document.header["$INSUNITS"] == 4
    assert found["D1 at"] == pytest.approx(17.0, abs=1e-6)
    assert found["boom start"] == pytest.approx(-10.0, abs=1e-6)
    assert found["boom length"] == pytest.approx(42.0, abs=1e-6)
    assert found["boom width"] == pytest.approx(6.0, abs=1e-6)
    assert found["R groove depth"] == pytest.approx(2.1, abs=1e-6)


def test_the_main_view_is_true_to_size_about_the_datum(camera):
    _, folder = camera
    document = ezdxf.readfile(folder / "bench/drawing-boom.dxf")
    runs = [e for e in document.modelspace().query("LWPOLYLINE") if e.dxf.layer == "VISIBLE" and e.closed]
    xs = [x for x, _ in runs[0].get_points("xy")]
    assert (min(xs), max(xs)) == pytest.approx((-10.0, 32.0), abs=1e-9)
    layers = {layer.dxf.name: layer for layer in document.layers}
    assert {"VISIBLE", "CENTRE", "DIMENSION", "FRAME", "TEXT"} <= layers.keys()
    assert (layers["VISIBLE"].dxf.lineweight, layers["DIMENSION"].dxf.lineweight) == (50, 25)
    assert layers["CENTRE"].dxf.linetype == "DRAWING-CENTRE"


def test_the_same_bytes_twice(camera, tmp_path):
    _, folder = camera
    write(samples.CAMERA, tmp_path)
    for file in (folder / "bench").iterdir():
        assert file.read_bytes() == (tmp_path / "bench" / file.name).read_bytes(), file.name


def _edit(folder, name, change):
    path = folder / "bench/drawing-boom.dxf"
    document = ezdxf.readfile(path)
    for entity in document.modelspace().query("DIMENSION"):
        if entity.get_xdata("BOOMWRIGHT")[0].value == name:
            change(entity)
    document.saveas(path)


def test_a_moved_dimension_point_is_noticed(copied):
    plan, folder = copied

    def move(entity):
        entity.dxf.defpoint2 += (0.1, 0.0)
        line = next(e for e in entity.get_geometry_block() if e.dxftype() == "LINE")
        line.dxf.end += (0.1, 0.0)

    _edit(folder, "D1 at", move)
    found = [what for file, what in wrong(plan, folder, "boom") if file == "bench/drawing-boom.dxf"]
    assert found == ["D1 at as drawn"]


def test_a_wrong_text_is_noticed(copied):
    plan, folder = copied

    def misstate(entity):
        entity.dxf.text = "17.1"
        next(e for e in entity.get_geometry_block() if e.dxftype() == "TEXT").dxf.text = "17.1"

    _edit(folder, "D1 at", misstate)
    found = wrong(plan, folder, "boom")
    assert ("bench/drawing-boom.dxf", "D1 at as written") in found
    assert ("bench/drawings.pdf", "what differs from drawing-boom.dxf") in found
    assert len(found) == 3


def test_a_text_that_is_not_what_the_entity_states_is_noticed(copied):
    plan, folder = copied

    def misdraw(entity):
        next(e for e in entity.get_geometry_block() if e.dxftype() == "TEXT").dxf.text = "17.1"

    _edit(folder, "D1 at", misdraw)
    reasons = [f.reason for f in Bench(folder).judge(asked(plan, "boom")) if f.file == "bench/drawing-boom.dxf"]
    assert set(reasons) == {"the dimension 'D1 at' states '17' and draws ['17.1']"}


@pytest.mark.parametrize(
    ("file", "old", "new", "what"),
    [
        ("drawing-rods.dxf", b"\n25\n", b"\n26\n", "R length in the table"),
        ("drawings.pdf", b"(D1 at) /Scale 2 >>", b"(D1 at) /Scale 3 >>", "what differs from drawing-boom.dxf"),
        ("drawings.pdf", b"(17) Tj", b"(71) Tj", "what differs from drawing-boom.dxf"),
        ("drawing-boom.svg", b">17<", b">71<", "what differs from drawing-boom.dxf"),
        (
            "drawing-boom.svg",
            b'data-curve="D1 at" points="',
            b'data-curve="D1 at" points="1,1 ',
            "what differs from drawing-boom.dxf",
        ),
    ],
)
def test_a_falsified_number_or_line_is_noticed(file, old, new, what, copied):
    plan, folder = copied
    path = folder / "bench" / file
    data = path.read_bytes()
    assert old in data
    path.write_bytes(data.replace(old, new))
    sheet = "rods" if "rods" in file else "boom"
    assert (f"bench/{file}", what) in wrong(plan, folder, sheet)


def test_another_plan_is_noticed(camera):
    _, folder = camera
    rods = (*samples.CAMERA.rods[:2], replace(samples.CAMERA.rods[2], at_mm=24.2))
    found = {what for file, what in wrong(make_plan(replace(samples.CAMERA, rods=rods), Shop()), folder)}
    assert {
        "D2 at as written",
        "D2 at as drawn",
        "D2 axis as drawn",
        "D2 at x in the table",
        "boom end as drawn",
    } <= found
    assert not {"D1 at as written", "R groove depth as drawn"} & found


def test_a_hostile_title_stays_words(tmp_path):
    plan, _ = write(replace(samples.CAMERA, title=HOSTILE), tmp_path)
    assert wrong(plan, tmp_path) == []
    assert b"<b>" not in (tmp_path / "bench/drawing-boom.svg").read_bytes()


def test_the_printers_offsets_do_not_change_the_drawing():
    shop = Shop(printer=Printer(outline_growth_mm=0.2, hole_shrink_mm=0.3))
    assert PART.build(make_plan(samples.CAMERA, shop)) == PART.build(make_plan(samples.CAMERA, Shop()))
