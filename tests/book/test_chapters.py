"""The chapters: nothing empty, every number from the run, cautions beside their steps, words that follow the design."""

import ast
import re
from dataclasses import replace
from pathlib import Path

import pytest
import samples
from book_runs import run_of

from boomwright.audit import Audit, Finding
from boomwright.book import boom, checked, driven, exposure, feed, gluing, jigs, potting, shopping
from boomwright.book.chapters import CHAPTERS, needed_topics, write_chapters
from boomwright.book.content import Caution, Chapter, Facts, Figure, Heading, Paragraph, Picture, Steps, Table, Topic
from boomwright.book.words import rough, with_article
from boomwright.design.model import Adhesive, Band, Boom, Driven, Feed, Resin, Seat, Transmitter
from boomwright.shop.profile import (
    Accuracy,
    CradleShop,
    FormerShop,
    Laser,
    Layers,
    MouldShop,
    Printer,
    Saw,
    Shop,
)

BOOK = Path(__file__).parents[2] / "src" / "boomwright" / "book"
WORDED = [
    BOOK / f"{name}.py" for name in (*(c.__module__.split(".")[-1] for c in CHAPTERS), "run", "words", "measurement")
]
"""The modules that write words; page and paper lay them out."""

OTHER_SHOP = Shop(
    Printer((190.0, 185.0, 170.0), 0.65, 0.33, "ASA", 0.21, 0.07, 0.03, 0.17),
    Laser(2.7, (450.0, 330.0), "birch", 0.23, 0.06, Layers("OUT", "LINE", "DEEP")),
    Saw(1.37, 0.45),
    Accuracy(0.17, 0.19, 0.21, 0.034),
    CradleShop(1.8, 4.6),
    MouldShop(2.65, 2.7, 0.13),
    FormerShop(4.2),
)
SENT = replace(samples.GAUGE, transmitter=Transmitter(0.5, 0.1))


def text_of(chapter: Chapter) -> str:
    return "\n".join(chapter.texts)


def steps_of(chapter: Chapter) -> list:
    return [step for block in chapter.blocks if isinstance(block, Steps) for step in block.steps]


def check_whole(chapters, run) -> None:
    assert len({chapter.key for chapter in chapters}) == len(chapters) == 14
    for chapter in chapters:
        assert any(isinstance(block, Paragraph | Steps | Table | Facts) for block in chapter.blocks), chapter.key
        assert not isinstance(chapter.blocks[-1], Heading), chapter.key
        for block in chapter.blocks:
            if isinstance(block, Table):
                assert block.rows, f"{chapter.key}: {block.caption}"
                assert {len(row) for row in block.rows} == {len(block.head)}, f"{chapter.key}: {block.caption}"
            if isinstance(block, Steps | Facts):
                assert block.steps if isinstance(block, Steps) else block.facts, chapter.key
            if isinstance(block, Figure):
                assert block.picture in Picture
        for text in chapter.texts:
            assert text.strip(), chapter.key
            assert not re.search(r"\bnan\b|\binf\b|None|\.\.|  |\{|-0 mm|\de[+-]\d", text), f"{chapter.key}: {text}"
    found = {caution.topic for chapter in chapters for caution in chapter.cautions}
    assert found == needed_topics(run)


def test_the_book_of_one_design_is_whole() -> None:
    run = run_of(SENT, Shop())
    chapters = write_chapters(run)
    check_whole(chapters, run)
    assert {picture for chapter in chapters for picture in chapter.pictures} == set(Picture)


@pytest.mark.slow
@pytest.mark.parametrize("design", samples.FITTING[1:], ids=lambda d: d.name)
def test_the_book_of_every_design_is_whole(design) -> None:
    run = run_of(design, Shop())
    check_whole(write_chapters(run), run)


def strings_with_digits(path: Path) -> list[str]:
    """String constants with a digit, docstrings and format specifications aside."""
    tree = ast.parse(path.read_text("utf-8"))
    aside = set()
    for node in ast.walk(tree):
        body = getattr(node, "body", None)
        if isinstance(body, list):
            aside |= {id(s.value) for s in body if isinstance(s, ast.Expr) and isinstance(s.value, ast.Constant)}
        if isinstance(node, ast.FormattedValue) and node.format_spec is not None:
            aside |= {id(part) for part in ast.walk(node.format_spec)}
    constants = [n for n in ast.walk(tree) if isinstance(n, ast.Constant) and isinstance(n.value, str)]
    return [n.value for n in constants if re.search(r"\d", n.value) and id(n) not in aside]


@pytest.mark.parametrize("path", WORDED, ids=lambda p: p.stem)
def test_no_number_is_typed_in_the_words(path) -> None:
    """But the names of two lines that are not the design's, and what a number in writing begins with or leaves."""
    allowed = {"run": 2, "words": 5}
    assert len(strings_with_digits(path)) == allowed.get(path.stem, 0), strings_with_digits(path)


def odd(rod, length_mm: float, at_mm: float):
    return replace(rod, length_mm=length_mm, at_mm=at_mm, diameter_mm=3.35, material="aluminium")


ODD = replace(
    samples.GAUGE,
    name="ridge",
    band=Band(841.3, 847.9, 844.6),
    driven=Driven("folded", 64.41, 2.15, "brass", 4.35, length_mm=161.77, spacing_mm=12.93, plane="flat"),
    feed=Feed(50.0, "RG-58"),
    rods=tuple(
        odd(rod, *size)
        for rod, size in zip(samples.GAUGE.rods, ((171.37, 0.0), (152.11, 98.57), (149.43, 156.83)), strict=True)
    ),
    boom=Boom("round", 13.73, "birch", 31.91, 22.37),
    seat=Seat(glue_gap_mm=0.13),
    resin=Resin("clear cast", 1.27),
    adhesive=Adhesive("putty"),
    transmitter=Transmitter(0.73, 0.31),
)


def test_another_design_in_another_shop_leaves_no_number_of_the_first() -> None:
    """Every number with a unit in the first book, but 0 at the datum, a general tolerance, cuts of coax, the stated
    speed of a print, bars on sale."""
    first = "\n".join(map(text_of, write_chapters(run_of(SENT, Shop()))))
    second = "\n".join(map(text_of, write_chapters(run_of(ODD, OTHER_SHOP))))
    pattern = re.compile(r"(\d+(?:\.\d+)?) (?:mm|ml|g|MHz|W|dBi)\b")
    old, new = set(pattern.findall(first)), set(pattern.findall(second))
    assert old & new == {"0", "0.2", "0.5", "40", "1000"}
    assert len(old) > 80
    for words in ("gauge-868", "RG-316", "beech", "plywood", "non-slump", "potting resin", "layers ENGRAVE"):
        assert words.lower() in first.lower(), words
        assert words.lower() not in second.lower(), words


def test_cautions_stand_beside_the_step_they_belong_to() -> None:
    run = run_of(SENT, Shop())
    beside = {
        step.caution.topic: step.text.lower()
        for chapter in write_chapters(run)
        for step in steps_of(chapter)
        if step.caution is not None
    }
    for topic, word in {
        Topic.SOLDER: "tin both sides",
        Topic.ADHESIVE: "solvent",
        Topic.RESIN: "mix",
        Topic.LASER: "cut last",
        Topic.ROD_ENDS: "cap",
        Topic.OVERHEAD_LINES: "raise",
        Topic.LIGHTNING: "earth",
        Topic.WIND: "calm day",
        Topic.STRUCTURE: "mast",
        Topic.EXPOSURE: "nobody can stand",
        Topic.LICENCE: "regulator",
    }.items():
        assert word in beside[topic], topic


def test_the_joint_that_hangs_upside_down_must_not_slump_and_cures_by_its_data_sheet() -> None:
    chapter = gluing.chapter(run_of(SENT, Shop()))
    joint = next(step for step in steps_of(chapter) if "slump" in step.text)
    assert "upside down" in joint.text
    cure = next(step for step in steps_of(chapter) if "cure" in step.text)
    assert "its own data sheet" in cure.text
    assert not re.search(r"\d+ (hours|minutes|h\b|min\b)", text_of(chapter))


@pytest.mark.slow
def test_words_follow_the_seat_and_the_boom() -> None:
    sleeves = run_of(samples.TUBE_915, Shop())
    words = text_of(boom.chapter(sleeves)) + text_of(gluing.chapter(sleeves))
    assert "must not touch it" in words
    assert "Push a sleeve into each hole" in words
    assert "Plug the tube's bore" in words
    bonded = run_of(replace(samples.TUBE_915, seat=Seat("through")), Shop())
    words = text_of(boom.chapter(bonded)) + text_of(gluing.chapter(bonded))
    assert "reads high in frequency" in words
    assert "sleeve" not in words.replace("sleeves of", "")
    metal = replace(samples.GAUGE, boom=replace(samples.GAUGE.boom, material="aluminium"))
    assert "all must touch or none" in text_of(boom.chapter(run_of(metal, Shop())))
    assert "reads high" not in text_of(boom.chapter(run_of(samples.GAUGE, Shop())))


@pytest.mark.slow
def test_words_follow_the_driven_element() -> None:
    texts = {
        design.name: text_of(driven.chapter(run_of(design, Shop())))
        for design in (samples.GAUGE, samples.CAMERA, samples.UPRIGHT_868, samples.LOOP_868)
    }
    assert "lies over the pocket" in texts["gauge-868"]
    assert "saw along both walls" in texts["camera-5g8"].lower()
    assert "Set the second conductor 12 mm above the fed one" in texts["upright-868"]
    upright = run_of(samples.UPRIGHT_868, Shop())
    assert "grooves of R, D1 and D2, none" in text_of(gluing.chapter(upright))
    assert "Leave the groove of DE empty: it is glued later." in text_of(gluing.chapter(upright))
    assert Topic.ADHESIVE in {caution.topic for caution in driven.chapter(upright).cautions}
    assert "pass the loop over the boom from above at 62 mm" in texts["loop-868"]
    assert "all braids together" in texts["gauge-868"]
    assert "shows no contact between inner conductor and braid" in texts["camera-5g8"]


@pytest.mark.slow
def test_without_cable_or_mould_or_cradle_the_book_says_why_and_what_instead() -> None:
    without = ("mould", "cradle", "sheet-cradle", "spacing-comb", "former")
    bare = run_of(replace(samples.GAUGE, feed=Feed()), Shop(), without)
    words = text_of(feed.chapter(bare))
    assert "names no cable" in words
    assert "RG-58" in words  # the table then lists every cable
    assert "This run has no mould (not asked for in this run)" in text_of(potting.chapter(bare))
    assert "This run has no cradle (not asked for in this run)" in text_of(gluing.chapter(bare))
    needed = needed_topics(bare)
    assert Topic.RESIN not in needed
    chapters = write_chapters(bare)
    check_whole(chapters, bare)
    shown = {picture for chapter in chapters for picture in chapter.pictures}
    assert not [picture for picture in shown if picture.split("-")[0] in ("cradle", "mould", "former")]
    upright = replace(samples.UPRIGHT_868, rods=())
    alone = run_of(upright, Shop())
    assert "no conductor lies on the datum plane" in text_of(jigs.chapter(alone))
    check_whole(write_chapters(alone), alone)
    assert "No rod is glued to this boom: see the next chapter" in text_of(gluing.chapter(alone))


def test_a_cradle_of_sections_is_joined_first() -> None:
    run = run_of(samples.GAUGE, Shop())
    entry = next(e for e in run.manifest.entries if e.path == "print/cradle-1.stl")
    paths = ("print/cradle-2.stl", "print/cradle-outrigger-1.stl")
    more = (*run.manifest.entries, *(replace(entry, path=path) for path in paths))
    parted = replace(run, manifest=replace(run.manifest, entries=more))
    assert "let the 2 sections of the cradle down into each other's joints" in text_of(gluing.chapter(parted))
    assert "Set the 1 outrigger to the rails" in text_of(gluing.chapter(parted))
    assert "section" not in text_of(gluing.chapter(run))


def test_a_sheet_cradle_is_put_together_and_gives_its_own_heights() -> None:
    both, sheet = run_of(samples.GAUGE, Shop()), run_of(samples.GAUGE, Shop(), ("cradle",))
    words = text_of(jigs.chapter(sheet))
    assert f"Sort the {sheet.size('sheet-cradle.plates'):.0f} plates of the sheet cradle" in words
    assert f"{sheet.size('sheet-cradle.axis_height_mm') + 1.5:g} mm at both ends" in words
    assert f"{both.size('cradle.axis_height_mm') + 1.5:g} mm at both ends" in text_of(jigs.chapter(both))
    assert "2 saddles" in text_of(gluing.chapter(sheet))
    assert "upside down" in text_of(gluing.chapter(sheet))


@pytest.mark.slow
def test_adhesive_is_what_the_grooves_leave_round_the_rods() -> None:
    """Square boom of 15, rod of 4 in a groove of 4.2, flush: (pi r^2 / 2 + 2 r top - pi 2^2) x 15, r = 2.1, top = 2;
    the thinner driven of 3 in 3.2 lies wholly below the top: (pi 1.6^2 / 2 + 3.2 x 2 - pi 1.5^2) x 15."""
    from math import pi

    run = run_of(samples.SQUARE_915, Shop())
    rod = (pi * 2.1**2 / 2.0 + 4.2 * 2.0 - pi * 4.0) * 15.0
    wire = (pi * 1.6**2 / 2.0 + 3.2 * 2.0 - pi * 2.25) * 15.0
    assert shopping.adhesive_ml(run.plan) == pytest.approx((2.0 * rod + 2.0 * wire) / 1000.0, rel=1e-4)


def test_exposure_is_for_the_stated_transmitter_or_for_three_powers() -> None:
    stated = exposure.chapter(run_of(SENT, Shop()))
    assert len([b for b in stated.blocks if isinstance(b, Table)]) == 1
    assert "For 0.5 W at the feed, 10 percent" in text_of(stated)
    free = exposure.chapter(run_of(samples.GAUGE, Shop()))
    captions = [b.caption for b in free.blocks if isinstance(b, Table)]
    assert [c.split(" W,")[0] for c in captions] == ["0.1", "1", "10"]
    assert "local rules go first" in text_of(free).lower()


def test_the_audit_is_told_as_it_is() -> None:
    run = run_of(samples.GAUGE, Shop())
    good = Finding("print/cradle-1.stl", "R axis height", 8.5, 8.5, 0.01, "mm", True)
    bad = replace(good, what="D1 axis height", measured=8.6, ok=False)
    told = text_of(checked.chapter(replace(run, audit=Audit((good,)))))
    assert "1 quantity. All are as planned." in told
    told = text_of(checked.chapter(replace(run, audit=Audit((good, bad)))))
    assert "2 quantities. Not as planned: 1." in told
    assert "D1 axis height: expected 8.5 mm, measured 8.6 mm" in told
    assert "were not measured" in text_of(checked.chapter(run))


def test_a_chapter_gives_its_cautions_and_pictures_in_order() -> None:
    one = Caution("Mind it.", Topic.DUST)
    chapter = Chapter("T", "t", (one, Figure(Picture.CRADLE, "c"), Facts((("a", "b"),)), Figure(Picture.CRADLE, "c")))
    assert chapter.cautions == (one,)
    assert chapter.pictures == (Picture.CRADLE,)
    assert chapter.texts == ("T", "Mind it.", "c", "a", "b", "c")


@pytest.mark.parametrize(
    ("words", "whole"),
    [
        ("beam", "a beam"),
        ("upright", "an upright"),
        ("8 mm", "an 8 mm"),
        ("18.5 mm", "an 18.5 mm"),
        ("1.8 mm", "a 1.8 mm"),
    ],
)
def test_the_article_is_the_one_that_is_spoken(words, whole) -> None:
    assert with_article(words) == whole


def test_rough_figures_never_show_a_power_of_ten() -> None:
    assert [rough(x) for x in (0.0, -1.8e-14, 0.00444, -0.0978, 12.34, 1234.5)] == [
        "0",
        "0",
        "0.0044",
        "-0.098",
        "12",
        "1234",
    ]
