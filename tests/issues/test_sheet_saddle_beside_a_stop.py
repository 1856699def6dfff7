"""A saddle right behind the last director ran into that rod's end stops: seen at a nose of 9.5 mm at 5.8 GHz."""

from dataclasses import replace
from pathlib import Path

import pytest

from boomwright.design.tomlfile import load_design
from boomwright.judging import Bench
from boomwright.output import write_piece
from boomwright.parts.sheet_cradle import SheetCradlePart
from boomwright.plan.plan import make_plan
from boomwright.shop.profile import Shop

EXAMPLE = Path(__file__).resolve().parents[2] / "examples" / "camera-5g8.toml"


@pytest.mark.parametrize("nose_mm", [8.0, 9.5, 11.0])
def test_the_plates_have_nothing_in_common(nose_mm: float, tmp_path: Path) -> None:
    camera = load_design(EXAMPLE)
    assert camera.boom is not None
    plan = make_plan(replace(camera, boom=replace(camera.boom, nose_mm=nose_mm)), Shop())
    part = SheetCradlePart()
    for piece in part.build(plan):
        write_piece(part.name, piece, tmp_path)
    asked = [one for one in part.expect(plan) if one.what == "overlap of the plates put together"]
    assert asked
    assert [str(found) for found in Bench(tmp_path).judge(asked) if not found.ok] == []
