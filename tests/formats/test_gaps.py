"""Free length along a line, on the exact faces of a STEP file and on the triangles of a mesh."""

import pytest
from specimens import BORE_MM, measure, rail_piece, write

from boomwright.errors import MeasureError
from boomwright.pieces import Probe
from boomwright.shop.profile import Printer


@pytest.mark.parametrize(("growth", "shrink"), [(0.0, 0.0), (0.12, 0.1)])
def test_between_the_rails_and_across_the_bore(growth, shrink, tmp_path):
    """Rails stand from |y| = 14 on; the mesh's are drawn thinner by the growth, its bore wider by the shrink."""
    write(rail_piece(Printer(outline_growth_mm=growth, hole_shrink_mm=shrink)), tmp_path)
    between = Probe("free_mm", {"at": (30.0, 1.0, 8.0), "along": (0.0, 2.0, 0.0)})
    bore = Probe("free_mm", {"at": (30.0, 0.0, 2.0), "along": (1.0, 0.0, 0.0)})
    for suffix, wider, bored in (("step", 0.0, 0.0), ("stl", 2.0 * growth, shrink), ("3mf", 2.0 * growth, shrink)):
        path = tmp_path / f"rail-1.{suffix}"
        assert measure(path, between) == pytest.approx(28.0 + wider, abs=1e-5)
        assert measure(path, bore) == pytest.approx(BORE_MM + bored, abs=0.01)
    side = Probe("free_mm", {"at": (30.0, 1.0, 8.0), "along": (0.0, 1.0, 0.0), "side": "ahead"})
    assert measure(tmp_path / "rail-1.step", side) == pytest.approx(13.0, abs=1e-9)


def test_open_space_is_no_gap(tmp_path):
    write(rail_piece(), tmp_path)
    for suffix in ("step", "stl"):
        with pytest.raises(MeasureError, match="nothing on one side"):
            measure(tmp_path / f"rail-1.{suffix}", Probe("free_mm", {"at": (0, 0, 50), "along": (0, 0, 1)}))
