"""A new part is one class and one catalogue line; it is then built, written, audited and listed."""

import json
from collections.abc import Iterator
from pathlib import Path

import pytest
import samples

from boomwright.audit import audit_folder
from boomwright.design.tomlfile import write_design
from boomwright.listing import listing
from boomwright.parts.catalogue import PARTS
from boomwright.parts.solids import box
from boomwright.pieces import Body, Expectation, Part, Piece, Probe, SolidPiece
from boomwright.pipeline import make
from boomwright.plan.plan import Plan


class Brick(Part):
    """A block as long as the boom is wide."""

    name = "brick"
    purpose = "shows how little a new part needs"
    processes = ("print",)

    def build(self, plan: Plan) -> tuple[Piece, ...]:
        body = Body("brick-1", box((0.0, 10.0), (0.0, plan.boom.width_mm), (0.0, 5.0)))
        return (SolidPiece("brick-1", "print", (body,)),)

    def expect(self, plan: Plan) -> tuple[Expectation, ...]:
        volume = 10.0 * 5.0 * plan.boom.width_mm
        files = ("print/brick-1.step", "print/brick-1.stl", "print/brick-1.3mf")
        return tuple(Expectation(f, "brick volume", volume, 1e-3, "mm3", Probe("volume_mm3")) for f in files)


@pytest.fixture
def toy() -> Iterator[None]:
    PARTS.enter("brick", Brick())
    yield
    PARTS.remove("brick")


@pytest.mark.usefixtures("toy")
def test_a_toy_part_goes_all_the_way(tmp_path: Path) -> None:
    (tmp_path / "gauge.toml").write_text(write_design(samples.GAUGE))
    made = make(tmp_path / "gauge.toml", out=tmp_path / "out", only=["brick"])
    assert made.audit.ok
    manifest = json.loads((tmp_path / "out/manifest.json").read_text())
    files = {f["path"] for f in manifest["files"] if f["part"] == "brick"}
    assert files == {"print/brick-1.step", "print/brick-1.stl", "print/brick-1.3mf"}
    whats = {(f.file, f.what) for f in made.audit.findings}
    assert {(file, "brick volume") for file in files} <= whats
    assert "shows how little a new part needs" in listing("parts")
    (tmp_path / "out/print/brick-1.stl").write_bytes(b"junk")
    assert "print/brick-1.stl" in {f.file for f in audit_folder(tmp_path / "out").failures}
