"""Nesting on sheets: every part on one, none too near to another or to the edge."""

from itertools import combinations

import pytest

from boomwright.shop.nesting import fits_sheet, nest, sheet_margin_mm, sheet_room_mm
from boomwright.shop.profile import Laser

PARTS = [(211.4, 19.5), (8.0, 13.25), (180.0, 96.5), (30.0, 30.0), (13.25, 120.0), (60.0, 11.0), (19.5, 211.4)] * 3


def drawn(place, size, kerf_mm):
    """The rectangle as drawn: a kerf larger than the part."""
    x, y = size[::-1] if place.turned else size
    return place.x_mm, place.y_mm, place.x_mm + x + kerf_mm, place.y_mm + y + kerf_mm


@pytest.mark.parametrize("kerf_mm", [0.0, 0.1, 0.3])
@pytest.mark.parametrize("size_mm", [(600.0, 400.0), (300.0, 200.0), (200.0, 300.0)])
def test_parts_keep_two_kerfs_and_a_millimetre(kerf_mm, size_mm):
    laser = Laser(sheet_size_mm=size_mm, kerf_mm=kerf_mm)
    places = nest(PARTS, laser)
    assert len(places) == len(PARTS)
    least = 2.0 * kerf_mm + 1.0 - 1e-9
    boxes = [(p.sheet, drawn(p, size, kerf_mm)) for p, size in zip(places, PARTS, strict=True)]
    for _, (x0, y0, x1, y1) in boxes:
        assert min(x0, y0, size_mm[0] - x1, size_mm[1] - y1) >= least
    for (one, a), (other, b) in combinations(boxes, 2):
        assert one != other or max(b[0] - a[2], a[0] - b[2], b[1] - a[3], a[1] - b[3]) >= least
    assert {p.sheet for p in places} == set(range(1 + max(p.sheet for p in places)))


def test_the_same_parts_lie_the_same_way():
    laser = Laser(sheet_size_mm=(300.0, 200.0))
    assert nest(PARTS, laser) == nest(PARTS, laser)


def test_what_fills_a_sheet_exactly_takes_one_sheet():
    laser = Laser(sheet_size_mm=(103.0, 53.0), kerf_mm=0.0)
    assert sheet_room_mm(laser) == (101.0, 51.0)
    # Four quarters of the room, 1 mm apart.
    assert {p.sheet for p in nest([(50.0, 25.0)] * 4, laser)} == {0}
    assert {p.sheet for p in nest([(50.0, 25.0)] * 5, laser)} == {0, 1}


def test_a_long_part_is_turned():
    laser = Laser(sheet_size_mm=(100.0, 400.0), kerf_mm=0.2)
    (place,) = nest([(380.0, 20.0)], laser)
    assert place.turned
    assert place.x_mm == place.y_mm == pytest.approx(sheet_margin_mm(laser))


def test_a_part_larger_than_the_sheet_fits_neither_way():
    laser = Laser(sheet_size_mm=(300.0, 200.0), kerf_mm=0.0)
    assert fits_sheet((198.0, 298.0), laser)
    assert not fits_sheet((198.1, 298.0), laser)
    with pytest.raises(ValueError, match="larger than the sheet"):
        nest([(198.1, 298.0)], laser)
