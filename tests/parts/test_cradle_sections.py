"""A cradle in sections with outriggers, built, written and measured; and what is found when it is built wrongly."""

from collections.abc import Iterable
from dataclasses import replace
from pathlib import Path

import pytest
import samples

from boomwright.formats.catalogue import FORMATS
from boomwright.formats.format import FileEntry
from boomwright.judging import Bench, Finding
from boomwright.output import write_piece
from boomwright.parts.antenna import AntennaPart
from boomwright.parts.cradle import CradlePart
from boomwright.parts.cradle_expect import expect_together
from boomwright.parts.cradle_solid import section_shape
from boomwright.parts.solids import place
from boomwright.pieces import Body, Expectation, Probe, SolidPiece
from boomwright.plan.frame import turned_about_x
from boomwright.plan.plan import Plan, make_plan
from boomwright.shop.profile import Printer, Shop

pytestmark = pytest.mark.slow

DESIGN = replace(
    samples.MIXED_1296,
    name="two",
    driven=replace(samples.MIXED_1296.driven, length_mm=100.0),
    rods=(samples.MIXED_1296.rods[0], samples.MIXED_1296.rods[2]),
)
SHOP = Shop(printer=Printer(bed_mm=(100.0, 110.0, 60.0), outline_growth_mm=0.12, hole_shrink_mm=0.2))
"""A small bed: two sections along the boom, and the reflector's ends on outriggers."""


@pytest.fixture(scope="module")
def plan() -> Plan:
    made = make_plan(DESIGN, SHOP)
    assert made.faults["cradle"] == ()
    stems = [section.stem for section in made.cradle.sections]
    assert stems == ["cradle-1", "cradle-2", *(f"cradle-outrigger-{i}" for i in range(1, 3))]
    return made


@pytest.fixture(scope="module")
def written(plan: Plan, tmp_path_factory: pytest.TempPathFactory) -> tuple[Path, list[FileEntry]]:
    folder = tmp_path_factory.mktemp("cradle")
    write_piece("antenna", AntennaPart().build(plan)[0], folder)
    entries = [entry for piece in CradlePart().build(plan) for entry in write_piece("cradle", piece, folder)]
    return folder, entries


def failures(folder: Path, asked: Iterable[Expectation]) -> list[Finding]:
    return [finding for finding in Bench(folder).judge(asked) if not finding.ok]


def test_every_quantity_holds_on_the_written_files(plan: Plan, written: tuple[Path, list[FileEntry]]) -> None:
    folder, entries = written
    asked = list(CradlePart().expect(plan))
    whats = " ".join(e.what for e in asked)
    for word in ("position budget", "centring budget", "play of the joint", "overlap of all pieces", "rest at", "bore"):
        assert word in whats
    asked += [e for entry in entries for e in FORMATS[entry.format].expect(entry, plan.shop)]
    assert [str(finding) for finding in failures(folder, asked)] == []


def rewritten(plan: Plan, written: tuple[Path, list[FileEntry]], stem: str, piece: SolidPiece, folder: Path) -> Path:
    """A copy of the folder in which one piece's STEP file was made otherwise."""
    (folder / "print").mkdir()
    for path in written[0].rglob("*.step"):
        (folder / path.relative_to(written[0])).write_bytes(path.read_bytes())
    FORMATS["step"].write(piece, folder / f"print/{stem}.step")
    return folder


def piece_of(plan: Plan, stem: str, clearance_mm: float = 0.05, shift_x_mm: float = 0.0) -> SolidPiece:
    section = plan.cradle.section(stem)
    shape = section_shape(section, plan.cradle.axis_height_mm, clearance_mm)
    x, y = section.shift_mm
    frame = turned_about_x(plan.cradle.axis_height_mm, (x + shift_x_mm, y))
    return SolidPiece(stem, "print", (Body(stem, place(shape, plan.cradle.frame)),), frame)


def test_too_much_play_is_found_and_counted(plan: Plan, written: tuple[Path, list[FileEntry]], tmp_path: Path) -> None:
    """A socket drawn 0.2 wider on every face: 0.25 x root 2 = 0.3536 of play, which the section behind it inherits."""
    folder = rewritten(plan, written, "cradle-2", piece_of(plan, "cradle-2", clearance_mm=0.25), tmp_path)
    found = {(f.file, f.what): f.measured for f in failures(folder, expect_together(plan))}
    assert found[("print/cradle-1.step", "play of the joint with cradle-2")] == pytest.approx(0.25 * 2**0.5, abs=1e-4)
    budget = ("print/cradle-2.step", "position budget, behind 1 joint (one standard deviation)")
    assert found[budget] == pytest.approx((0.125 / 12.0 + 0.01**2 / 3.0) ** 0.5, abs=1e-4)


def test_a_moved_section_is_found(plan: Plan, written: tuple[Path, list[FileEntry]], tmp_path: Path) -> None:
    folder = rewritten(plan, written, "cradle-2", piece_of(plan, "cradle-2", shift_x_mm=-0.05), tmp_path)
    wanted = ("axis position", "put together")
    asked = [e for e in CradlePart().expect(plan) if e.file.endswith(".step") and any(w in e.what for w in wanted)]
    found = failures(folder, asked)
    assert "overlap of all pieces put together" in {f.what for f in found}
    assert {f.file for f in found if "axis position" in f.what} == {"print/cradle-2.step"}


def test_tenon_and_socket_are_drawn_by_the_printers_growth(plan: Plan, written: tuple[Path, list[FileEntry]]) -> None:
    """The tenon's end and the outermost sides are drawn 0.12 in, so that what prints is the plan's."""
    bench = Bench(written[0])
    for stem in ("cradle-1", "cradle-outrigger-1"):
        for quantity, sign in (("max_x_mm", 1.0), ("min_x_mm", -1.0), ("max_y_mm", 1.0), ("min_y_mm", -1.0)):
            probe = Probe("extent", {"quantity": quantity})
            nominal, drawn = (bench.measure(f"print/{stem}.{suffix}", probe) for suffix in ("step", "stl"))
            assert nominal - drawn == pytest.approx(sign * 0.12, abs=1e-4), (stem, quantity)
