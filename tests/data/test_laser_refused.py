"""What a laser must not cut, under the names that stand on its wrapper (names: common practice)."""

import pytest

from boomwright.data.tables import refused_sheet, refused_sheets
from boomwright.errors import ShopFault
from boomwright.shop.tomlfile import read_shop


@pytest.mark.parametrize(
    ("writing", "name"),
    [
        ("Polyvinyl chloride, white", "PVC"),
        ("PVC-U 3 mm", "PVC"),
        ("uPVC", "PVC"),
        ("Teflon", "PTFE"),
        ("Lexan (clear)", "polycarbonate"),
        ("PC sheet", "polycarbonate"),
        ("PET-G", "PETG"),
        ("Styrofoam", "polystyrene foam"),
        ("fiberglass board", "glass fibre"),
        ("FR-4", "glass fibre"),
        ("leatherette", "faux leather"),
    ],
)
def test_a_refused_sheet_by_another_name(writing, name):
    sheet = refused_sheet(writing)
    assert sheet is not None
    assert sheet.name == name
    with pytest.raises(ShopFault) as caught:
        read_shop(f'[laser]\nmaterial = "{writing}"')
    assert str(caught.value) == (
        f'shop.toml: laser.material: "{writing}" must not be laser cut: {sheet.reason}\n'
        "  fix: choose another sheet, for instance birch plywood"
    )


@pytest.mark.parametrize("writing", ["birch plywood", "MDF", "cast acrylic", "PET felt", "cork", "Epsom board", "card"])
def test_other_sheets_may_be_cut(writing):
    assert refused_sheet(writing) is None


def test_no_name_stands_for_two_materials():
    names = [name.lower() for sheet in refused_sheets() for name in (sheet.name, *sheet.also)]
    assert all(names)
    assert len(names) == len(set(names))
