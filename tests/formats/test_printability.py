"""Overhang, walls and the chamfer at the foot, on solids whose answers are known by arithmetic."""

import math

import pytest
import specimens

from boomwright.formats import walls
from boomwright.formats.stl import STL
from boomwright.parts.solids import box, cut, cylinder, prism_along_y, unite
from boomwright.pieces import Body, Probe, SolidPiece

LEDGE = {"ledge_mm": 0.4}


@pytest.fixture
def measured(tmp_path):
    """Measure a solid's STL."""

    def measure(shape, name, **arguments):
        STL.write(SolidPiece("x", "print", (Body("x", shape),)), tmp_path / "x.stl")
        return STL.measure(STL.read(tmp_path / "x.stl"), Probe(name, arguments), ())

    return measure


def table(span_mm):
    return cut(box((0, span_mm + 6), (0, 8), (0, 6)), [box((3, 3 + span_mm), (-1, 9), (-1, 4))])


def block(*tools):
    return cut(box((0, 10), (0, 8), (0, 10)), list(tools))


def along_y(diameter_mm):
    return cylinder((5, -1, 5), (0, 1, 0), diameter_mm / 2.0, 10)


@pytest.mark.parametrize(
    ("shape", "hanging_mm2"),
    [
        (table(9.9), 0.0),
        (table(12.0), 12.0 * 8.0),
        (unite(box((0, 4), (0, 8), (0, 10)), [box((0, 9), (0, 8), (7, 10))]), 5.0 * 8.0),
        (unite(box((0, 4), (0, 8), (0, 10)), [box((0, 4.3), (0, 8), (7, 10))]), 0.0),
        (block(along_y(5.9)), 0.0),
        (block(prism_along_y([(1, -1), (9, -1), (9, 1), (5, 5), (1, 1)], (-1, 9))), 0.0),
        (block(prism_along_y([(1, -1), (9, -1), (9, 1), (5, 3), (1, 1)], (-1, 9))), 8.0 * 8.0),
    ],
    ids=["bridge", "too long a bridge", "shelf", "one line wide", "small bore", "roof at 45", "roof at 27"],
)
def test_ceilings_that_need_support(measured, shape, hanging_mm2):
    assert measured(shape, "unsupported_mm2", **LEDGE) == pytest.approx(hanging_mm2, abs=1e-3)


def test_a_large_bores_crown_needs_support(measured):
    crown_mm2 = 8.0 * 8.0 * math.sin(math.radians(45.0))  # diameter 8, 8 long: what is flatter than 45 degrees
    assert measured(block(along_y(8.0)), "unsupported_mm2", **LEDGE) == pytest.approx(crown_mm2, rel=0.1)


def test_a_ring_shaped_ceiling_hangs_where_no_line_crosses_it(measured):
    """A counterbore from below: lines beside the hole are bridges, those that end at the hole hang."""
    shape = cut(box((0, 20), (0, 20), (0, 10)), [cylinder((10, 10, -1), (0, 0, 1), r, h) for r, h in ((4, 5), (2, 20))])
    # Lines that pass the axis by less than 2, from radius 2 to radius 4 on both sides of the hole.
    strip_mm2 = 2.0 * (2.0 * math.sqrt(12.0) + 16.0 * math.asin(0.5)) - 4.0 * math.pi
    assert measured(shape, "unsupported_mm2", **LEDGE) == pytest.approx(strip_mm2, rel=0.05)


def test_a_wedge_that_hangs_point_down_begins_in_the_air(measured):
    post, wedge = box((0, 4), (0, 8), (0, 10)), prism_along_y([(4, 8), (6, 6), (8, 8), (8, 10), (4, 10)], (0, 8))
    assert measured(unite(post, [wedge]), "midair_starts") == 1.0
    assert measured(post, "midair_starts") == 0.0
    notched = cut(post, [prism_along_y([(2, 7), (6, 11), (-2, 11)], (-1, 9))])
    assert measured(notched, "midair_starts") == 0.0


@pytest.mark.parametrize("wall_mm", [0.5, 0.9, 1.3])
def test_walls_webs_and_pillars(measured, wall_mm):
    base = box((0, 30), (0, 20), (0, 3))
    wall = unite(base, [box((5, 25), (5, 5 + wall_mm), (2, 12))])
    bores = [cylinder((x, 10, -1), (0, 0, 1), 3.0, 20) for x in (12.0, 18.0 + wall_mm)]
    web = cut(box((0, 30), (0, 20), (0, 10)), bores)
    pillar = unite(base, [cylinder((15, 10, 2), (0, 0, 1), wall_mm / 2.0, 10)])
    for shape in (wall, web, pillar):
        assert measured(shape, "thinnest_wall_mm", up_to_mm=2.0) == pytest.approx(wall_mm, abs=0.05)
        assert measured(shape, "thinnest_wall_mm", up_to_mm=0.4) == 0.4


def test_a_printers_growth_is_undone(measured):
    wall = unite(box((0, 30), (0, 20), (0, 3)), [box((5, 25), (5, 6.0), (2, 12))])
    assert measured(wall, "thinnest_wall_mm", up_to_mm=2.0, growth_mm=0.15) == pytest.approx(1.3, abs=0.05)


def test_what_is_no_wall(measured):
    """Corners, a sharp ridge between two notches, and the islands of engraved letters."""
    ridge = cut(
        box((0, 30), (0, 20), (0, 10)),
        [prism_along_y([(at, 5), (at + 6, 11), (at - 6, 11)], (-1, 21)) for at in (10.0, 20.0)],
    )
    engraved = cut(box((0, 30), (0, 20), (0, 5)), [box((x, x + 0.5), (5, 15), (4.4, 6)) for x in (5.0, 6.0, 7.0, 8.0)])
    railed = unite(engraved, [box((x, x + 3), (0, 20), (4, 9)) for x in (0.0, 27.0)])
    for shape in (box((0, 30), (0, 20), (0, 5)), ridge, engraved, railed):
        assert measured(shape, "thinnest_wall_mm", up_to_mm=1.2) == 1.2
    deep = cut(box((0, 30), (0, 20), (0, 5)), [box((x, x + 0.5), (5, 15), (3.0, 6)) for x in (5.0, 6.0)])
    assert measured(deep, "thinnest_wall_mm", up_to_mm=1.2) == pytest.approx(0.5, abs=0.05)


def test_an_acute_corner_is_no_wall_and_a_long_spike_is():
    import shapely

    for height, count in ((15, 0), (8, 1)):
        corner = shapely.Polygon([(0, 0), (20, 0), (20, height)])
        assert len(walls.thin_places(walls.Section(corner, corner), 1.2)) == count


def chamfered(body, chamfer_mm):
    edges = [e for e in body.Edges() if abs(e.startPoint().z) < 1e-9 and abs(e.endPoint().z) < 1e-9]
    return body.chamfer(chamfer_mm, None, edges)


@pytest.mark.parametrize("chamfer_mm", [0.2, 0.4])
def test_the_foot(measured, chamfer_mm):
    plate = chamfered(box((0, 30), (0, 20), (0, 5)), chamfer_mm)
    slotted = cut(plate, [box((10, 14), (-1, 8), (-1, 6)), cylinder((22, 10, -1), (0, 0, 1), 3.0, 9)])
    for shape in (plate, slotted):
        assert measured(shape, "foot_chamfer_mm", chamfer_mm=0.4) == pytest.approx(chamfer_mm, abs=0.01)


def test_one_sharp_edge_is_enough_to_fail_the_foot(measured):
    plate = cut(chamfered(box((0, 30), (0, 20), (0, 5)), 0.4), [box((25, 31), (-1, 21), (-1, 6))])
    assert measured(plate, "foot_chamfer_mm", chamfer_mm=0.4) < 0.05


def test_the_rules_follow_the_printer(tmp_path):
    entries = specimens.write(specimens.rail_piece(), tmp_path)
    (entry,) = [e for e in entries if e.format == "stl"]
    rules = {e.what: e for e in STL.expect(entry, specimens.SHOP)}
    assert rules["thinnest wall"].expected == pytest.approx(3 * specimens.SHOP.printer.nozzle_mm)
    assert rules["thinnest wall"].probe.arguments["growth_mm"] == specimens.SHOP.printer.outline_growth_mm
    assert specimens.judge(entries, tmp_path) == {}
