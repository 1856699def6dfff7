"""The fleet table: what it may say, and every fault of it at once."""

from pathlib import Path

import pytest

from boomwright.errors import InputFault
from boomwright.fleet.table import read_fleet

GOOD = """
schema = 1
[[variant]]
name = "gauge-433"
design = "gauge.toml"
shop = "shop.toml"
rescale = { to_mhz = 433.9, rod_mm = 4.0 }
set = { "boom.material" = "birch", "rod[1].length_mm" = 310.0 }
[[variant]]
name = "video"
propose = { band = "5725:5875", boom_mm = 60.0, rod_mm = 2.0, driven = "folded" }
"""


def faults_of(text: str) -> list[str]:
    with pytest.raises(InputFault) as caught:
        read_fleet(text, Path("beams"))
    return [str(fault) for fault in caught.value.faults]


def test_every_key_is_read() -> None:
    gauge, video = read_fleet(GOOD, Path("beams"))
    assert gauge.name == "gauge-433"
    assert gauge.design == Path("beams/gauge.toml") and gauge.shop == Path("beams/shop.toml")
    assert gauge.rescale == {"to_mhz": 433.9, "rod_mm": 4.0, "boom_width_mm": None}
    assert gauge.changes == {"boom.material": "birch", "rod[1].length_mm": 310.0}
    assert video.design is None and video.propose is not None
    assert (video.propose["band"], video.propose["boom_mm"], video.propose["driven"]) == ("5725:5875", 60.0, "folded")


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        (
            "schema = 1",
            ["fleet.toml: variant: missing\n  fix: add a [[variant]] for each antenna, with name and design"],
        ),
        (
            'schema = 1\n[[variant]]\nname = "a"',
            [
                "fleet.toml: variant[0]: neither design nor propose\n"
                "  fix: give one of them: a design file, or what to propose"
            ],
        ),
        (
            GOOD + '[[variant]]\nname = "video"\ndesign = "x.toml"\n',
            [
                f'fleet.toml: variant[{i}].name: "video" is the name of 2 variants\n'
                "  fix: give each variant a name of its own"
                for i in (1, 2)
            ],
        ),
        (
            'schema = 1\n[[variant]]\nname = "a"\ndesign = "x.toml"\nset = 3\n',
            ['fleet.toml: variant[0].set: 3 is not a table\n  fix: write it as { "boom.material" = "birch" }'],
        ),
        (
            'schema = 1\n[[variant]]\nname = "a"\ndesign = "x.toml"\nscale = {}\n',
            [
                "fleet.toml: variant[0].scale: unknown key; did you mean rescale?\n"
                "  fix: correct or delete it; the keys here are name, design, shop, rescale, propose"
            ],
        ),
        (
            'schema = 1\n[[variant]]\nname = "fleet"\ndesign = "x.toml"\n',
            ['fleet.toml: variant[0].name: "fleet" is a file of the fleet\n  fix: give it another name'],
        ),
        (
            'schema = 1\n[[variant]]\nname = "a"\npropose = { band = "1:2" }\nrescale = { to_mhz = 500 }\n',
            [
                "fleet.toml: variant[0].rescale: beside propose\n"
                "  fix: propose for the band that is wanted"
            ],
        ),
    ],
)  # fmt: skip
def test_faults(text: str, expected: list[str]) -> None:
    assert faults_of(text) == expected


def test_a_name_that_leads_out_of_the_folder_is_refused() -> None:
    (fault,) = faults_of('schema = 1\n[[variant]]\nname = "../a"\ndesign = "x.toml"\n')
    assert fault.startswith('fleet.toml: variant[0].name: "../a" is not a name')
