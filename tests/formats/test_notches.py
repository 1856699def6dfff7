"""The axis of a rod in a V notch, from faces and from triangles, against plane geometry done by hand."""

import math

import numpy as np
import pytest
from specimens import box, measure, prism

from boomwright.errors import MeasureError
from boomwright.formats.catalogue import FORMATS
from boomwright.pieces import Body, Probe, SolidPiece


def notched(apex, left_deg, right_deg, depth=6.0, top=16.0):
    """A block with one notch; angles of the two faces from the vertical."""
    x, z = apex
    left, right = math.tan(math.radians(left_deg)), math.tan(math.radians(right_deg))
    rise = top - z + 1.0
    cut = prism([(x, z), (x + rise * right, z + rise), (x - rise * left, z + rise)], (-depth, depth))
    return box((0.0, 80.0), (-5.0, 5.0), (0.0, top)).cut(cut).Solids()[0]


def resting(folder, solid, at_mm, diameter_mm, **more):
    piece = SolidPiece("block-1", "print", (Body("block-1", solid),))
    found = {}
    for suffix in ("step", "stl"):
        path = folder / f"block-1.{suffix}"
        FORMATS[suffix].write(piece, path)
        arguments = {"at_mm": at_mm, "side_y_mm": (-5.0, 5.0), "diameter_mm": diameter_mm} | more
        found[suffix] = tuple(
            measure(path, Probe("resting_axis", arguments | {"quantity": quantity}))
            for quantity in ("at_mm", "height_mm")
        )
    return found


@pytest.mark.parametrize(
    ("diameter_mm", "included_deg"), [(0.9, 90.0), (2.0, 60.0), (3.0, 90.0), (3.0, 120.0), (6.35, 90.0)]
)
def test_symmetric_notch(tmp_path, diameter_mm, included_deg):
    """apex + r / sin(half angle): a right triangle between apex, axis and contact."""
    half = included_deg / 2.0
    found = resting(tmp_path, notched((40.0, 8.0), half, half), 40.0, diameter_mm)
    height = 8.0 + diameter_mm / 2.0 / math.sin(math.radians(half))
    assert found["step"] == pytest.approx((40.0, height), abs=1e-9)
    assert found["stl"] == pytest.approx((40.0, height), abs=2e-5)


def test_unequal_slopes_put_the_axis_on_the_bisector(tmp_path):
    """A left wall 30° and a right one 60° from the vertical: 90° between, the bisector leans 15° to the right."""
    found = resting(tmp_path, notched((40.0, 8.0), 30.0, 60.0), 40.0, 3.0)
    reach, lean = 1.5 / math.sin(math.radians(45.0)), math.radians(15.0)
    expected = (40.0 + reach * math.sin(lean), 8.0 + reach * math.cos(lean))
    assert found["step"] == pytest.approx(expected, abs=1e-9)
    assert found["stl"] == pytest.approx(expected, abs=2e-5)


@pytest.mark.parametrize("included_deg", [60.0, 90.0])
def test_growth_is_undone_on_triangles(tmp_path, included_deg):
    """Each face drawn g into the material along x lowers the apex by g / tan(half angle)."""
    half, growth = math.radians(included_deg / 2.0), 0.1
    drawn = notched((40.0, 8.0 - growth / math.tan(half)), included_deg / 2.0, included_deg / 2.0)
    found = resting(tmp_path, drawn, 40.0, 3.0, growth_mm=growth)
    assert found["stl"] == pytest.approx((40.0, 8.0 + 1.5 / math.sin(half)), abs=2e-5)


def test_the_nearest_notch_counts_and_none_is_an_error(tmp_path):
    solid = notched((20.0, 8.0), 45.0, 45.0)
    with pytest.raises(MeasureError, match=r"^block-1\.step: no notch near x = 70 between y = -5 and 5$"):
        resting(tmp_path, solid, 70.0, 3.0)


def test_a_rod_too_thick_for_its_notch_does_not_rest_in_it(tmp_path):
    """12 mm rod, notch 4 mm deep: it would lie on the edges, 5.66 mm deep contact is in the air."""
    with pytest.raises(MeasureError, match="no notch"):
        resting(tmp_path, notched((40.0, 12.0), 45.0, 45.0), 40.0, 14.0)


def test_the_other_rail_does_not_stand_in(tmp_path):
    solid = notched((40.0, 8.0), 45.0, 45.0)
    with pytest.raises(MeasureError, match="no notch near x = 40 between y = 20 and 25"):
        resting(tmp_path, solid, 40.0, 3.0, side_y_mm=(20.0, 25.0))


def test_many_notches_keep_apart_on_triangles(tmp_path):
    solid = box((0.0, 80.0), (-5.0, 5.0), (0.0, 16.0))
    cuts = [prism([(at, 10.0), (at + 7, 17.0), (at - 7, 17.0)], (-6.0, 6.0)) for at in np.arange(10.0, 75.0, 12.5)]
    solid = solid.cut(*cuts).Solids()[0]
    for at in np.arange(10.0, 75.0, 12.5):
        found = resting(tmp_path, solid, float(at), 2.0)
        assert found["stl"] == pytest.approx((at, 10.0 + math.sqrt(2.0)), abs=2e-5)
