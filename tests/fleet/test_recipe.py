"""A variant worked out: its file, what it sets by key path, and the sum that tells whether anything changed."""

from pathlib import Path

import pytest
from samples import GAUGE

from boomwright.design.tomlfile import write_design
from boomwright.errors import InputFault
from boomwright.fleet.recipe import Recipe, design_and_shop
from boomwright.fleet.table import Variant


def recipe(**changes: object) -> Recipe:
    variant = Variant("north", Path("gauge.toml"), None, changes=dict(changes), place="variant[2]")
    return Recipe(variant, "gauge.toml", write_design(GAUGE))


def test_what_is_set_is_changed_and_nothing_else() -> None:
    design, _ = design_and_shop(recipe(**{"boom.material": "birch", "rod[1].length_mm": 147.5, "feed.system_ohm": 75}))
    assert design.boom is not None and design.boom.material == "birch"
    assert design.rods[1].length_mm == 147.5 and design.rods[0] == GAUGE.rods[0]
    assert design.feed.system_ohm == 75.0
    assert design.name == "north"


@pytest.mark.parametrize(
    ("path", "message"),
    [
        ("rod[7].length_mm", 'variant[2].set."rod[7].length_mm": rod has 3 entries, counted from 0'),
        ("boom.", 'variant[2].set."boom.": is not a key path'),
        ("name.x", 'variant[2].set."name.x": name is no table'),
        ("boom.colour", "gauge.toml: boom.colour: unknown key"),
        ("boom.width_mm", "gauge.toml: boom.width_mm: -1 is not a width"),
    ],
)
def test_what_cannot_be_set(path: str, message: str) -> None:
    with pytest.raises(InputFault) as caught:
        design_and_shop(recipe(**{path: -1}))
    assert str(caught.value.faults[0]).startswith(message)


def test_the_key_follows_every_input() -> None:
    plain = recipe()
    assert plain.key == recipe().key
    others = [
        recipe(**{"boom.nose_mm": 25.0}),
        Recipe(plain.variant, plain.design_file, str(plain.design) + "\n"),
        Recipe(plain.variant, plain.design_file, plain.design, "shop.toml", "schema = 1\n"),
    ]
    assert len({plain.key, *(other.key for other in others)}) == 4
