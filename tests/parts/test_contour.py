"""Offsets of contours against exact areas (Steiner's formula) and shapely's buffer."""

import math

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from boomwright.errors import PlanFault
from boomwright.parts.contour import (
    area_mm2,
    as_polygon,
    circle,
    moved,
    offset_contour,
    polygon,
    rectangle,
    reversed_contour,
    round_slot,
)
from boomwright.pieces import Contour


def perimeter_mm(contour):
    total = 0.0
    ends = contour.vertices[1:] + contour.vertices[:1]
    for (x0, y0, bulge), (x1, y1, _) in zip(contour.vertices, ends, strict=True):
        chord = math.dist((x0, y0), (x1, y1))
        angle = 4.0 * math.atan(abs(bulge))
        total += chord if bulge == 0.0 else chord / (2.0 * math.sin(angle / 2.0)) * angle
    return total


CONVEX = {
    "rectangle": rectangle((1.0, 9.0), (2.0, 5.0)),
    "circle": circle((3.0, 4.0), 5.0),
    "slot": round_slot((0.0, 0.0), (10.0, 5.0), 3.0),
    "triangle": polygon([(0.0, 0.0), (9.0, 1.0), (2.0, 7.0)]),
}


@pytest.mark.parametrize("name", CONVEX)
@pytest.mark.parametrize("distance_mm", [0.05, 0.08, 1.0])
def test_steiners_formula_for_convex_outlines(name, distance_mm):
    """Area grows by perimeter x d + pi d², the perimeter by 2 pi d."""
    contour = CONVEX[name]
    grown = offset_contour(contour, distance_mm)
    expected = area_mm2(contour) + perimeter_mm(contour) * distance_mm + math.pi * distance_mm**2
    assert area_mm2(grown) == pytest.approx(expected, rel=1e-12)
    assert perimeter_mm(grown) == pytest.approx(perimeter_mm(contour) + 2.0 * math.pi * distance_mm, rel=1e-12)


@pytest.mark.parametrize("name", CONVEX)
def test_growing_and_shrinking_back_returns_to_the_outline(name):
    contour = CONVEX[name]
    back = offset_contour(offset_contour(contour, 0.5), -0.5 + 1e-6)
    assert area_mm2(back) == pytest.approx(area_mm2(contour), abs=1e-4)


def test_a_hole_run_the_other_way_shrinks():
    hole = reversed_contour(circle((0.0, 0.0), 4.0))
    assert area_mm2(hole) == pytest.approx(-4.0 * math.pi)
    assert area_mm2(offset_contour(hole, 0.08)) == pytest.approx(-math.pi * 1.92**2)


def test_lines_stay_lines_and_arcs_keep_their_centre():
    comb = Contour(
        ((0.0, 0.0, 0.0), (8.0, 0.0, 0.0), (8.0, 6.0, -1.0), (12.0, 6.0, 0.0), (12.0, 0.0, 0.0), (20.0, 0.0, 0.0),
         (20.0, 10.0, 0.0), (0.0, 10.0, 0.0))
    )  # fmt: skip
    grown = offset_contour(comb, 0.1)
    arcs = [
        (start, end)
        for start, end in zip(grown.vertices, grown.vertices[1:], strict=False)
        if start[2] == pytest.approx(-1.0)
    ]
    assert len(arcs) == 1
    (x0, y0, _), (x1, y1, _) = arcs[0]
    assert ((x0 + x1) / 2.0, y0, y1, x1 - x0) == pytest.approx((10.0, 6.0, 6.0, 3.8))
    # Six convex corners get an arc each, the slot's end keeps its own.
    assert sum(bulge != 0.0 for *_, bulge in grown.vertices) == 7


def test_inner_corners_are_cut_short():
    ell = polygon([(0, 0), (10, 0), (10, 4), (4, 4), (4, 10), (0, 10)])
    grown = offset_contour(ell, 0.5)
    assert any((x, y) == pytest.approx((4.5, 4.5)) for x, y, _ in grown.vertices)


@pytest.mark.parametrize("distance_mm", [-1.5, -2.0, 50.0])
def test_an_outline_that_collapses_is_refused(distance_mm):
    dumbbell = polygon(
        [(0, 0), (10, 0), (10, 4), (20, 4), (20, 0), (30, 0), (30, 11), (20, 11), (20, 7), (10, 7), (10, 11), (0, 11)]
    )
    with pytest.raises(PlanFault, match=r"laser\.kerf_mm: an outline collapses when it is moved by"):
        offset_contour(dumbbell if distance_mm < 0 else reversed_contour(circle((0, 0), 4.0)), distance_mm)


def test_a_slot_that_the_kerf_would_close_is_refused():
    comb = polygon([(0, 0), (8, 0), (8, 6), (8.15, 6), (8.15, 0), (20, 0), (20, 10), (0, 10)])
    with pytest.raises(PlanFault):
        offset_contour(comb, 0.08)


def test_an_open_contour_has_no_inside():
    with pytest.raises(PlanFault):
        offset_contour(Contour(((0.0, 0.0, 0.0), (1.0, 0.0, 0.0)), closed=False), 0.1)


def test_turning_round_twice_and_moving():
    slot = round_slot((0.0, 0.0), (10.0, 3.0), 4.0)
    assert reversed_contour(reversed_contour(slot)) == slot
    assert area_mm2(moved(slot, 3.0, -8.0)) == pytest.approx(area_mm2(slot))
    line = Contour(((0.0, 0.0, 0.3), (5.0, 0.0, 0.0), (5.0, 2.0, 0.0)), closed=False)
    assert reversed_contour(reversed_contour(line)) == line


@settings(max_examples=40, deadline=None)
@given(
    st.lists(st.tuples(st.floats(0.5, 6.0), st.floats(2.0, 9.0)), min_size=1, max_size=6),
    st.floats(0.01, 0.2),
    st.floats(0.0, 6.28),
)
def test_random_combs_agree_with_shapelys_buffer(slots, distance_mm, turn_rad):
    vertices, x = [(0.0, 0.0, 0.0)], 0.0
    for width, depth in slots:
        x += 2.0
        vertices += [(x, 0.0, 0.0), (x, depth, -1.0), (x + width, depth, 0.0), (x + width, 0.0, 0.0)]
        x += width
    vertices += [(x + 2.0, 0.0, 0.0), (x + 2.0, 20.0, 0.0), (0.0, 20.0, 0.0)]
    c, s = math.cos(turn_rad), math.sin(turn_rad)
    contour = Contour(tuple((c * x - s * y, s * x + c * y, bulge) for x, y, bulge in vertices))
    grown = as_polygon(offset_contour(contour, distance_mm))
    expected = as_polygon(contour).buffer(distance_mm, quad_segs=64)
    assert grown.symmetric_difference(expected).area < 1e-3 * expected.length
