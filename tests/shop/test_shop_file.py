"""The shop file: the built-in shop, what it refuses and in which words."""

from __future__ import annotations

from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from boomwright.data.tables import conductor_names, material_names, refused_sheets
from boomwright.errors import InputFault, ShopFault
from boomwright.shop.profile import Accuracy, Bar, Laser, Layers, Printer, Shop
from boomwright.shop.tomlfile import load_shop, read_shop, write_shop

EXAMPLE = Path(__file__).parents[2] / "examples" / "shop.toml"


def message_of(text: str) -> str:
    """The whole message of a broken shop, without the file's name that starts each fault."""
    with pytest.raises(ShopFault) as caught:
        read_shop(text, "shop.toml")
    return "\n".join(line.removeprefix("shop.toml: ") for line in str(caught.value).split("\n"))


def test_no_file_an_empty_file_and_the_example_are_the_built_in_shop() -> None:
    assert load_shop() == read_shop("") == load_shop(EXAMPLE) == Shop()


def test_the_normalised_built_in_shop_reads_back_and_never_changes() -> None:
    text = write_shop(Shop())
    assert read_shop(text) == Shop()
    assert write_shop(read_shop(text)) == text
    assert '[laser.layers]\ncut = "CUT"\n' in text


def test_a_shelf_is_read_in_its_order() -> None:
    bar = '[[stock]]\ndiameter_mm = {}\nmaterial = "brass"\nlength_mm = 1000\ncount = 5\n'
    shop = read_shop(bar.format(3) + bar.format(2))
    assert shop.stock == (Bar(3.0, "brass", 1000.0, 5), Bar(2.0, "brass", 1000.0, 5))


@pytest.mark.parametrize(
    ("text", "message"),
    [
        (
            "[printer]\nnozle_mm = 0.4",
            "printer.nozle_mm: unknown key; did you mean nozzle_mm?\n"
            "  fix: correct or delete it; the keys here are bed_mm, nozzle_mm, layer_mm, material, slide_clearance_mm, "
            "press_clearance_mm, outline_growth_mm, hole_shrink_mm",
        ),
        (
            "[printer]\nbed_mm = [220, 220]",
            "printer.bed_mm: a list of 2 is not a bed's size\n"
            "  fix: give a list of 3 numbers: the printable x, y and z in millimetres, from 10 to 10000",
        ),
        (
            "[printer]\nbed_mm = 220",
            "printer.bed_mm: 220 is not a bed's size\n"
            "  fix: give a list of 3 numbers: the printable x, y and z in millimetres, from 10 to 10000",
        ),
        (
            "[printer]\nbed_mm = [220, nan, 240]",
            "printer.bed_mm[1]: nan is not a bed's size\n"
            "  fix: give a list of 3 numbers: the printable x, y and z in millimetres, from 10 to 10000",
        ),
        (
            "[printer]\nlayer_mm = 0.6",
            "printer.layer_mm: 0.6 is more than the nozzle's 0.4\n  fix: give a layer height below the nozzle's bore",
        ),
        (
            '[printer]\nmaterial = "petg"',
            "printer.material: \"petg\" is not a known material; did you mean PETG?\n"
            f"  fix: give the filament: {', '.join(material_names())}",
        ),
        (
            '[laser]\nmaterial = "clear PVC"',
            'laser.material: "clear PVC" must not be laser cut: chlorine and hydrogen chloride\n'
            "  fix: choose another sheet, for instance birch plywood",
        ),
        (
            "[laser]\nkerf_mm = -0.1",
            "laser.kerf_mm: -0.1 is less than 0\n  fix: give the width that the beam takes in millimetres, from 0 to 2",
        ),
        (
            '[laser]\nlayers = { cut = "LINES", score = "lines" }',
            'laser.layers.score: "lines" names another operation too\n  fix: give each operation its own layer name',
        ),
        (
            '[laser]\nlayers = { cut = "a|b" }',
            'laser.layers.cut: "a|b" is not a layer name\n'
            "  fix: give the layer of cuts: 1 to 64 of the characters A-Z, a-z, 0-9, space, _ $ . + -",
        ),
        (
            "[cradle]\nrail_mm = 1.5",
            "cradle.rail_mm: 1.5 is less than 2\n"
            "  fix: give the rail's thickness along y in millimetres, from 2 to 100",
        ),
        (
            "[[stock]]\ndiameter_mm = 3\nmaterial = \"brass\"\nlength_mm = 1000\ncount = 2.5",
            "stock[0].count: 2.5 is not a whole number\n  fix: give the number of such bars, from 0 to 10000",
        ),
        (
            "[stock]\ncount = 5",
            "stock: a table is not a list of tables\n  fix: write [[stock]] for each, bars on the shelf",
        ),
        ("schema = 2", "schema: 2 is not a schema this version reads\n  fix: give the version of the file's form, 1"),
        (
            "[saw]\nkerf_mm = 1.0\nkerf_mm = 2.0",
            "line 3, column 14: a key or table is given twice\n  fix: keep one of them",
        ),
    ],
)  # fmt: skip
def test_a_broken_shop_is_refused_in_these_words(text: str, message: str) -> None:
    assert message_of(text) == message


@pytest.mark.parametrize("name", [sheet.name for sheet in refused_sheets()])
def test_no_refused_sheet_passes_under_any_writing(name: str) -> None:
    for writing in (name, name.upper(), f"3 mm {name.lower()}-sheet"):
        assert message_of(f'[laser]\nmaterial = "{writing}"').startswith("laser.material: ")


@pytest.mark.parametrize("name", ["birch plywood", "acrylic", "MDF", "absorbent felt", "cardboard"])
def test_other_sheets_may_be_cut(name: str) -> None:
    assert read_shop(f'[laser]\nmaterial = "{name}"').laser.material == name


def test_a_missing_shop_file_is_a_fault_of_the_argument(tmp_path: Path) -> None:
    with pytest.raises(InputFault) as caught:
        load_shop(tmp_path / "shop.toml")
    assert str(caught.value) == f"{tmp_path / 'shop.toml'}: no such file\n  fix: check the path and the name"


SHOPS = st.builds(
    Shop,
    printer=st.builds(
        Printer,
        bed_mm=st.tuples(*[st.floats(10.0, 10_000.0)] * 3),
        nozzle_mm=st.floats(0.3, 5.0),
        layer_mm=st.floats(0.01, 0.3),
        material=st.sampled_from(material_names()),
    ),
    laser=st.builds(
        Laser,
        fit_mm=st.floats(-1.0, 2.0).map(lambda value: value + 0.0),
        layers=st.builds(Layers, cut=st.from_regex("[A-Za-z0-9 _$.+-]{6,64}", fullmatch=True)),
    ),
    accuracy=st.builds(Accuracy, length_mm=st.floats(0.0, 100.0)),
    stock=st.lists(
        st.builds(
            Bar,
            st.floats(0.001, 1000.0),
            st.sampled_from(conductor_names()),
            st.floats(0.001, 100_000.0),
            st.integers(0, 10_000),
        ),
        max_size=5,
    ).map(tuple),
)


@settings(max_examples=100, derandomize=True, deadline=None, database=None)
@given(SHOPS)
def test_every_shop_comes_back_equal_from_its_file(shop: Shop) -> None:
    assert read_shop(write_shop(shop)) == shop
