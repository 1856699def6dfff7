"""A mesh against its solid on every kind of surface, with and without the printer's offsets."""

import math

import cadquery as cq
import numpy as np
import pytest
from specimens import box, measure

from boomwright.formats.deviation import closest_on_triangles
from boomwright.formats.meshes import is_watertight
from boomwright.formats.meshing import CHORD_MM, mesh_piece
from boomwright.formats.step import STEP
from boomwright.formats.stl import STL
from boomwright.pieces import Body, Probe, SolidPiece

UP = cq.Vector(0, 0, 1)


def on_plate(solid):
    return box((-20, 20), (-20, 20), (0, 5)).fuse(solid).clean().Solids()[0]


def in_plate(solid):
    return box((-20, 20), (-20, 20), (0, 15)).cut(solid).Solids()[0]


def ellipse_bar():
    edge = cq.Edge.makeEllipse(8.0, 5.0, cq.Vector(0, 0, 0), UP)
    return cq.Solid.extrudeLinear(cq.Wire.assembleEdges([edge]), [], cq.Vector(0, 0, 12))


SHAPES = {
    "sphere": lambda: on_plate(cq.Solid.makeSphere(4.0, cq.Vector(0, 0, 5), UP, -90, 90, 360)),
    "hollow sphere": lambda: in_plate(cq.Solid.makeSphere(4.0, cq.Vector(0, 0, 15), UP, -90, 90, 360)),
    "cone": lambda: on_plate(cq.Solid.makeCone(9.0, 4.0, 10.0, cq.Vector(0, 0, 5), UP)),
    "hollow cone": lambda: in_plate(cq.Solid.makeCone(3.0, 9.0, 15.0, cq.Vector(0, 0, 0), UP)),
    "torus": lambda: on_plate(cq.Solid.makeTorus(5.0, 2.0, cq.Vector(0, 0, 5), UP)),
    "lying cylinder": lambda: in_plate(cq.Solid.makeCylinder(4.0, 40.0, cq.Vector(-20, 0, 15), cq.Vector(1, 0, 0))),
    "fillets": lambda: cq.Workplane(box((-20, 20), (-20, 20), (0, 15))).edges(">Z").fillet(3.0).val(),
    "ellipse": lambda: on_plate(ellipse_bar()),
}


def compare(tmp_path, solid, printed=None, **offsets):
    bodies = (Body("p", solid),)
    piece = SolidPiece("p-1", "print", bodies, printed=(Body("p", printed),) if printed else None)
    STEP.write(piece, tmp_path / "p-1.step")
    STL.write(piece, tmp_path / "p-1.stl")
    return tuple(
        measure(tmp_path / "p-1.stl", Probe(name, offsets, ("p-1.step",))) for name in ("deviation_mm", "coverage_mm")
    )


@pytest.mark.parametrize("name", SHAPES)
def test_every_surface_is_met_within_the_chord(name, tmp_path):
    solid = SHAPES[name]()
    deviation, coverage = compare(tmp_path, solid)
    assert 0.0 <= deviation <= CHORD_MM
    assert 0.0 <= coverage <= CHORD_MM
    assert is_watertight(mesh_piece(SolidPiece("p-1", "print", (Body("p", solid),))).triangles)


@pytest.mark.parametrize("name", ["hollow sphere", "hollow cone", "lying cylinder", "ellipse", "fillets"])
def test_a_mesh_of_another_size_is_far_from_every_surface(name, tmp_path):
    solid = SHAPES[name]()
    deviation, _ = compare(tmp_path, solid, solid.scale(1.01))
    assert deviation > 0.03


@pytest.mark.parametrize("widened_mm", [0.0, 0.05])
def test_a_lying_channel_may_be_widened_once(tmp_path, widened_mm):
    channel = cq.Solid.makeCylinder(4.0 + widened_mm, 40.0, cq.Vector(-20, 0, 15), cq.Vector(1, 0, 0))
    found = compare(tmp_path, SHAPES["lying cylinder"](), in_plate(channel), hole_shrink_mm=0.1)
    assert max(found) <= CHORD_MM
    if widened_mm:
        assert compare(tmp_path, SHAPES["lying cylinder"](), in_plate(channel))[0] == pytest.approx(0.05, abs=0.006)


def test_a_tapered_bore_widens_by_its_radius(tmp_path):
    widened = in_plate(cq.Solid.makeCone(3.05, 9.05, 15.0, cq.Vector(0, 0, 0), UP))
    assert max(compare(tmp_path, SHAPES["hollow cone"](), widened, hole_shrink_mm=0.1)) <= CHORD_MM
    assert compare(tmp_path, SHAPES["hollow cone"](), widened, hole_shrink_mm=0.2)[0] > 0.02


def test_a_peg_keeps_its_radius_where_bores_widen(tmp_path):
    peg, thicker = (on_plate(cq.Solid.makeCylinder(r, 10.0, cq.Vector(0, 0, 5), UP)) for r in (4.0, 4.05))
    assert compare(tmp_path, peg, thicker, hole_shrink_mm=0.1)[0] == pytest.approx(0.05, abs=0.006)
    thinner = on_plate(cq.Solid.makeCylinder(3.95, 10.0, cq.Vector(0, 0, 5), UP))
    assert compare(tmp_path, peg, thinner, hole_shrink_mm=0.1)[0] == pytest.approx(0.05, abs=0.006)


def test_a_leaning_wall_moves_by_the_growth_along_the_level(tmp_path):
    """A wall 30° from the vertical drawn 0.1 further in along x lies 0.1 cos 30° off its own plane."""

    def wedge(growth):
        points = [(-10, 0), (10, 0), (10, 10), (-10 + 10 * math.tan(math.radians(30)), 10)]
        moved = [(x + growth if x < 0 or z else x, z) for x, z in points]
        moved[1], moved[2] = (10 - growth, 0), (10 - growth, 10)
        moved[3] = (points[3][0] + growth, 10)
        wire = cq.Wire.makePolygon([cq.Vector(x, -8 + growth, z) for x, z in moved], close=True)
        return cq.Solid.extrudeLinear(wire, [], cq.Vector(0, 16 - 2 * growth, 0))

    assert max(compare(tmp_path, wedge(0.0), wedge(0.1), growth_mm=0.1)) < 1e-5
    assert compare(tmp_path, wedge(0.0), wedge(0.2), growth_mm=0.1)[0] == pytest.approx(0.1, abs=1e-5)
    assert compare(tmp_path, wedge(0.0), wedge(0.1))[0] == pytest.approx(0.1, abs=1e-5)


def test_a_boss_left_out_is_missing(tmp_path):
    plate = box((-20, 20), (-20, 20), (0, 5))
    boss = on_plate(cq.Solid.makeCylinder(4.0, 10.0, cq.Vector(0, 0, 5), UP))
    _, coverage = compare(tmp_path, boss, plate)
    assert coverage > 4.0
    deviation, _ = compare(tmp_path, plate, boss)
    assert deviation > 0.4


def test_closest_points_against_a_dense_search():
    random = np.random.default_rng(7)
    triangles, points = random.normal(size=(40, 3, 3)), random.normal(size=(40, 3)) * 2.0
    found = np.linalg.norm(closest_on_triangles(points, triangles) - points, axis=1)
    u, v = (grid.ravel() for grid in np.meshgrid(np.linspace(0, 1, 201), np.linspace(0, 1, 201)))
    u, v = u[u + v <= 1.0], v[u + v <= 1.0]
    for point, (a, b, c), distance in zip(points, triangles, found, strict=True):
        dense = a + u[:, None] * (b - a) + v[:, None] * (c - a)
        nearest = np.linalg.norm(dense - point, axis=1).min()
        assert distance <= nearest + 1e-12
        assert distance == pytest.approx(nearest, abs=0.03)
