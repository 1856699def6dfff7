"""Where a cavity is highest, on a box whose ceiling has a step."""

import pytest
import specimens

from boomwright.formats.step import STEP
from boomwright.parts.solids import box, cut, cylinder
from boomwright.pieces import Body, Probe, SolidPiece

FUNNEL, VENT = (5.0, 16.0, 6.0), (5.0, 4.0, 6.0)


def ceiling(tmp_path, hollow, opening, quantity, up=(0.0, 0.0, 1.0)):
    mould = cut(box((-2, 12), (-2, 22), (-2, 10)), [*hollow, cylinder(FUNNEL, (0, 0, 1), 1.5, 9), _vent()])
    STEP.write(SolidPiece("x", "print", (Body("x", mould),)), tmp_path / "x.step")
    arguments = {"box": [[0, 0, 0], [10, 20, 10]], "up": up, "openings": [[FUNNEL, 1.6], [VENT, 0.8]]}
    probe = Probe("ceiling", arguments | {"opening": opening, "quantity": quantity})
    return STEP.measure(STEP.read(tmp_path / "x.step"), probe, ())


def _vent():
    return cylinder(VENT, (0, 0, 1), 0.75, 9)


FLAT = [box((0, 10), (0, 20), (0, 6))]
STEPPED = [*FLAT, box((0, 10), (8, 12), (5, 7.5))]


@pytest.mark.parametrize(("hollow", "above_mm"), [(FLAT, 0.0), (STEPPED, 1.5)], ids=["flat", "a pocket for air"])
def test_the_ceiling_above_the_openings(tmp_path, hollow, above_mm):
    for opening in (0, 1):
        assert ceiling(tmp_path, hollow, opening, "above_mm") == pytest.approx(above_mm, abs=0.01)


def test_how_far_the_openings_stand_from_the_ends(tmp_path):
    assert ceiling(tmp_path, FLAT, 0, "beside_mm") == pytest.approx(4.0, abs=0.01)
    assert ceiling(tmp_path, FLAT, 1, "beside_mm") == pytest.approx(16.0, abs=0.01)  # far side of y = 0 from the vent


def test_specimens_have_no_ceiling_without_a_room(tmp_path):
    piece = specimens.rail_piece()
    STEP.write(piece, tmp_path / "rail.step")
    arguments = {"box": [[5, -15, 1], [10, -14.5, 2]], "up": (0, 0, 1), "openings": [[[7, 0, 0], 1.0]], "opening": 0}
    from boomwright.errors import MeasureError

    with pytest.raises(MeasureError, match="no cavity is left"):
        STEP.measure(STEP.read(tmp_path / "rail.step"), Probe("ceiling", arguments | {"quantity": "above_mm"}), ())
