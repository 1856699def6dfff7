"""The design file: what it says, what it refuses and in which words."""

from __future__ import annotations

import os
from dataclasses import replace
from pathlib import Path

import pytest
from bases import BASES, DIPOLE, FOLDED, LOOP, RODS, STRAIGHT, designs
from hypothesis import given, settings
from hypothesis import strategies as st

from boomwright.design.model import Boom, Design, Seat
from boomwright.design.rules import check_design, require_boom
from boomwright.design.tomlfile import load_design, read_design, write_design
from boomwright.errors import AccessError, DesignFault, InputFault
from boomwright.shop.profile import Shop

EXAMPLES = Path(__file__).parents[2] / "examples"
TOO_LARGE = "larger than 1 MiB\n  fix: name the right file; a real one has a few kilobytes"
DESIGNS = ["stream-gauge-868", "camera-5g8", "gateway-433"]


def broken_cases() -> list[tuple[str, str, str]]:
    """(name, text, message) of every case in broken_designs.txt."""
    cases = []
    content = (Path(__file__).parent / "broken_designs.txt").read_text(encoding="utf-8")
    for block in content.split("\n== ")[1:]:
        title, *lines = block.rstrip("\n").split("\n")
        name, base = title.split(" | ")
        old = "\n".join(line[2:] for line in lines if line.startswith("- "))
        new = "\n".join(line[2:] for line in lines if line.startswith("+ "))
        message = [line for line in lines if not line.startswith(("- ", "+ "))]
        assert old in BASES[base], name
        cases.append((name, BASES[base].replace(old, new, 1), "\n".join(message)))
    return cases


def message_of(text: str) -> str:
    """The whole message of a broken design, without the file's name that starts each fault."""
    with pytest.raises(DesignFault) as caught:
        read_design(text, "beam.toml")
    assert all(fault.file == "beam.toml" for fault in caught.value.faults)
    return "\n".join(line.removeprefix("beam.toml: ") for line in str(caught.value).split("\n"))


@pytest.mark.parametrize(("text", "message"), [pytest.param(t, m, id=name) for name, t, m in broken_cases()])
def test_a_broken_design_is_refused_in_these_words(text: str, message: str) -> None:
    assert message_of(text) == message


def test_the_message_names_the_file_first() -> None:
    with pytest.raises(DesignFault) as caught:
        read_design(FOLDED.replace("length_mm = 148.0", "length_mm = -158"), "stream-gauge-868.toml")
    assert str(caught.value) == (
        "stream-gauge-868.toml: rod[1].length_mm: -158 is not a length\n"
        "  fix: give the tip-to-tip length in millimetres, above 0"
    )


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        (
            'name = "beam"',
            f'name = "{"b" * 65}"',
            "name: 65 characters are more than 64\n"
            "  fix: give the name of the output folder: 1 to 64 of the characters a-z, 0-9 and -",
        ),
        (
            'title = "A beam"',
            f'title = "{"t" * 10_000}"',
            "title: 10000 characters are more than 200\n"
            "  fix: give the title printed in the build book: at most 200 characters, no control characters",
        ),
        (
            "length_mm = 148.0",
            f"length_mm = {'9' * 5000}",
            "line 26: a number of 5000 digits\n  fix: give a number of a few digits",
        ),
        (
            "length_mm = 148.0",
            f"length_mm = 0x{'f' * 5000}",
            "rod[1].length_mm: a number beyond all bounds is more than 100000\n"
            "  fix: give the tip-to-tip length in millimetres, at most 100000",
        ),
        (
            'title = "A beam"',
            'title = "A \x1b[31m beam"',
            "line 3, column 12: is not TOML: Illegal character '\\x1b'\n"
            "  fix: correct the line; texts stand in quotes, numbers without",
        ),
        (
            'title = "A beam"',
            f"title = {'[' * 100_000}",
            "is nested too deeply\n  fix: keep tables and lists flat",
        ),
        (
            'title = "A beam"',
            f"{'a.' * 100_000}a = 1",
            "line 3: more than 300 dots in a line\n  fix: write one key a line",
        ),
        (
            "schema = 1",
            "\x00\x01\x02",
            "line 1, column 1: is not TOML: Invalid statement\n"
            "  fix: correct the line; texts stand in quotes, numbers without",
        ),
        ("schema = 1", "#" * (1 << 20), TOO_LARGE),
    ],
    ids=["long name", "10 kB title", "digits", "hex digits", "escape", "brackets", "dots", "binary", "2 MiB"],
)
def test_hostile_text_is_refused_in_these_words(old: str, new: str, message: str) -> None:
    assert message_of(FOLDED.replace(old, new, 1)) == message


def test_all_faults_of_a_file_come_at_once() -> None:
    text = (
        FOLDED.replace("863.0", "880.0")
        .replace("at_mm = 110.0", "at_mm = 40.0")
        .replace("length_mm = 166.0", "length_mm = nan")
        .replace('"brass"', '"bras"', 1)
        .replace("gap_mm = 4.0", "gap = 4.0")
        .replace('role = "director"', 'role = "reflector"')
        .replace("wall_mm", "wal_mm")
    )
    with pytest.raises(DesignFault) as caught:
        read_design(text, "beam.toml")
    assert [fault.path for fault in caught.value.faults] == [
        "rod[0].length_mm",
        "rod[0].material",
        "driven.gap",
        "band.high_mhz",
        "rod[1].role",
    ]


def test_sixty_four_rods_are_read_and_sixty_five_refused() -> None:
    rod = '[[rod]]\nrole = "director"\nat_mm = {}\nlength_mm = 148\ndiameter_mm = 3\nmaterial = "brass"\n'
    text = FOLDED + "".join(rod.format(120 + 10 * index) for index in range(62))
    assert len(read_design(text).rods) == 64
    assert message_of(text + rod.format(2000)) == "rod: 65 entries are more than 64\n  fix: at most 64 entries"


def test_unknown_keys_beyond_twenty_are_counted() -> None:
    with pytest.raises(DesignFault) as caught:
        read_design("".join(f"zz{index} = 1\n" for index in range(50)) + FOLDED)
    assert len(caught.value.faults) == 21
    assert str(caught.value.faults[-1]).startswith("design.toml: 30 more unknown keys\n")


def test_rods_are_sorted_and_tagged_and_remember_their_place_in_the_file() -> None:
    first, second = RODS.strip().split("\n\n")
    rod = '[[rod]]\nrole = "director"\nat_mm = 90.0\nlength_mm = 150.0\ndiameter_mm = 2.0\nmaterial = "ideal"\n'
    design = read_design(FOLDED.replace(RODS.strip(), f"{second}\n{first}\n{rod}"))
    assert [(rod.tag, rod.at_mm, rod.file_index) for rod in design.rods] == [("R", 0, 1), ("D1", 90, 2), ("D2", 110, 0)]


def test_defaults_of_a_short_file() -> None:
    design = read_design(DIPOLE)
    assert design.band.centre_mhz == 866.5
    assert (design.feed.system_ohm, design.feed.coax, design.rods, design.boom, design.seat) == (
        50.0,
        None,
        (),
        None,
        None,
    )
    assert (design.adhesive.name, design.resin.density_g_cm3) == ("non-slump two-part adhesive", 1.15)
    assert (design.spec, design.transmitter) == (None, None)
    assert read_design(FOLDED).seat == Seat("groove", 0.1, "bonded", 0.0, 0.1)


def test_whole_numbers_are_lengths_and_minus_zero_is_zero() -> None:
    design = read_design(FOLDED.replace("166.0", "166").replace("at_mm = 0.0", "at_mm = -0.0"))
    assert (design.rods[0].length_mm, str(design.rods[0].at_mm)) == (166.0, "0.0")


def test_every_key_of_the_seat_may_stand_at_its_default() -> None:
    seat = '[seat]\nkind = "groove"\nglue_gap_mm = 0.2\nbond = "bonded"\nsleeve_mm = 0.0\nhole_clearance_mm = 0.1\n'
    assert read_design(FOLDED + seat).seat == Seat("groove", 0.2)


def test_a_coat_of_no_thickness_may_name_its_material() -> None:
    text = FOLDED.replace("length_mm = 148.0", 'length_mm = 148.0\ncoat_mm = 0.0\ncoat_material = "acrylic paint"')
    assert read_design(text).rods[1].outer_diameter_mm == 3.0


@pytest.mark.parametrize("title", ["<script>alert(1)</script>", "%%EOF", 'quotes " and \\', "Größe 電波 🙂", "x" * 200])
def test_any_title_up_to_200_characters_is_read_and_written(title: str) -> None:
    escaped = title.replace("\\", "\\\\").replace('"', '\\"')
    design = read_design(FOLDED.replace('"A beam"', f'"{escaped}"'))
    assert design.title == title
    assert read_design(write_design(design)).title == title


def test_require_boom_says_what_is_missing() -> None:
    with pytest.raises(DesignFault) as caught:
        require_boom(read_design(DIPOLE))
    assert str(caught.value) == (
        "boom: missing: there is nothing to build the rods on\n"
        "  fix: add [boom] with section, width_mm, material, tail_mm and nose_mm"
    )
    assert require_boom(read_design(FOLDED)) == (Boom("round", 12.0, "beech", 20.0, 20.0), Seat())


def test_check_design_judges_a_design_that_no_file_was_read_for() -> None:
    design = read_design(STRAIGHT)
    check_design(design)
    with pytest.raises(DesignFault, match=r"^rod\[0\]\.at_mm: 51 touches the driven element at 52"):
        check_design(replace(design, rods=(replace(design.rods[0], at_mm=51.0), *design.rods[1:])))


@pytest.mark.parametrize(("section", "shape"), [(s, p) for s in ("round", "square") for p in ("circle", "square")])
@pytest.mark.parametrize("seat", ["groove", "through"])
def test_a_loop_of_the_size_that_the_fix_names_clears_the_boom(section: str, shape: str, seat: str) -> None:
    text = LOOP.replace('"round"', f'"{section}"').replace('shape = "square"', f'shape = "{shape}"')
    text += f'[seat]\nkind = "{seat}"\n'
    with pytest.raises(DesignFault) as caught:
        read_design(text.replace("360.0", "40.0").replace("gap_mm = 4.0", "gap_mm = 1.0"))
    (fault,) = caught.value.faults
    assert fault.path == "driven.perimeter_mm"
    named_mm = float(fault.fix.removeprefix("give more than ").partition(" mm")[0])
    read_design(text.replace("360.0", str(named_mm + 0.1)))
    if (section, shape) != ("square", "square"):  # where corner meets corner the named size has some room to spare
        with pytest.raises(DesignFault):
            read_design(text.replace("360.0", str(named_mm - 1.5)).replace("gap_mm = 4.0", "gap_mm = 1.0"))


@pytest.mark.parametrize("name", DESIGNS)
def test_examples_load_and_come_back_equal(name: str) -> None:
    design = load_design(EXAMPLES / f"{name}.toml")
    assert design.name == name
    assert read_design(write_design(design)) == design
    require_boom(design)


def test_the_gauge_fits_an_ordinary_bed_and_the_gateway_does_not() -> None:
    gauge, gateway = (load_design(EXAMPLES / f"{name}.toml") for name in ("stream-gauge-868", "gateway-433"))
    bed_mm = min(Shop().printer.bed_mm[:2])
    assert boom_length_mm(gauge) <= bed_mm - 10.0
    assert max(rod.length_mm for rod in gauge.rods) + 8.0 <= bed_mm - 5.0
    assert boom_length_mm(gateway) > 3.0 * bed_mm


def boom_length_mm(design: Design) -> float:
    """Tail, span and nose of a design whose outermost conductors are rods."""
    boom, _ = require_boom(design)
    return boom.tail_mm + design.rods[-1].at_mm - design.rods[0].at_mm + boom.nose_mm


def test_the_normalised_file_reads_like_this() -> None:
    assert write_design(read_design(FOLDED.replace('title = "A beam"\n', "").replace(RODS, ""))) == (
        'schema = 1\nname = "beam"\n\n[band]\nlow_mhz = 863.0\nhigh_mhz = 870.0\ncentre_mhz = 866.5\n\n'
        '[feed]\nsystem_ohm = 50.0\n\n[boom]\nsection = "round"\nwidth_mm = 12.0\nwall_mm = 0.0\nmaterial = "beech"\n'
        'tail_mm = 20.0\nnose_mm = 20.0\n\n[seat]\nkind = "groove"\nglue_gap_mm = 0.1\n\n[driven]\nform = "folded"\n'
        'at_mm = 52.0\ndiameter_mm = 2.0\nmaterial = "copper"\ngap_mm = 4.0\nlength_mm = 156.0\nspacing_mm = 12.0\n'
        'plane = "flat"\ncoat_mm = 0.0\n\n[adhesive]\nname = "non-slump two-part adhesive"\n\n[resin]\n'
        'name = "potting resin"\ndensity_g_cm3 = 1.15\n'
    )


@settings(max_examples=100, derandomize=True, deadline=None, database=None)
@given(designs())
def test_every_design_comes_back_equal_from_its_file(design: Design) -> None:
    text = write_design(design)
    again = read_design(text)
    assert again == design
    assert write_design(again) == text


VALUES = st.sampled_from(["nan", "-1", "0", "0.5", "64", "1e308", "true", '"x"', '"loop"', "[]", "{}", "1979-05-27"])


@settings(max_examples=200, derandomize=True, deadline=None, database=None)
@given(st.sampled_from(sorted(BASES)), st.lists(st.tuples(st.integers(0, 40), VALUES | st.none()), max_size=6))
def test_a_spoilt_file_is_read_or_refused_and_nothing_is_said_twice(
    base: str, spoils: list[tuple[int, str | None]]
) -> None:
    lines = BASES[base].split("\n")
    for index, value in spoils:
        if index < len(lines) and "=" in lines[index]:
            lines[index] = f"{lines[index].partition('=')[0]}= {value}" if value else ""
    try:
        design = read_design("\n".join(lines))
    except DesignFault as fault:
        paths = [fault.path for fault in fault.faults]
        assert len(paths) == len(set(paths))
    else:
        assert read_design(write_design(design)) == design


def test_a_missing_file_is_a_fault_of_the_argument(tmp_path: Path) -> None:
    for path in (tmp_path / "no.toml", tmp_path / "no" / "no.toml", tmp_path / ("n" * 300), Path("a\0b")):
        with pytest.raises(InputFault) as caught:
            load_design(path)
        (fault,) = caught.value.faults
        assert (fault.path, fault.found, fault.fix) == ("", "no such file", "check the path and the name")
        assert fault.file == str(path).replace("\0", "\\u0000")


def test_a_folder_is_no_design(tmp_path: Path) -> None:
    with pytest.raises(InputFault) as caught:
        load_design(tmp_path)
    assert str(caught.value) == f"{tmp_path}: is a folder\n  fix: name a file"


def test_a_file_that_cannot_be_read_is_an_access_error(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    path = tmp_path / "beam.toml"

    def refuse(*_: object) -> None:
        raise PermissionError(13, os.strerror(13))

    monkeypatch.setattr(Path, "open", refuse)
    with pytest.raises(AccessError) as caught:
        load_design(path)
    assert str(caught.value) == f"{path}: cannot be read: Permission denied"


def test_a_file_may_start_with_a_byte_order_mark_and_use_any_line_ends(tmp_path: Path) -> None:
    path = tmp_path / "beam.toml"
    path.write_bytes(b"\xef\xbb\xbf" + FOLDED.replace("\n", "\r\n").encode())
    assert load_design(path) == read_design(FOLDED)


@pytest.mark.parametrize(
    ("content", "message"),
    [
        (FOLDED.encode("utf-16"), "line 1: is not UTF-8 text\n  fix: save the file as UTF-8 text"),
        (b'schema = 1\nname = "\xff"\n', "line 2: is not UTF-8 text\n  fix: save the file as UTF-8 text"),
        (FOLDED.encode() + b"#" * (2 << 20), TOO_LARGE),
    ],
    ids=["utf-16", "latin-1", "2 MiB"],
)
def test_a_file_that_is_no_text_is_refused(tmp_path: Path, content: bytes, message: str) -> None:
    path = tmp_path / "beam.toml"
    path.write_bytes(content)
    with pytest.raises(InputFault) as caught:
        load_design(path)
    assert str(caught.value) == f"{path}: {message}"
