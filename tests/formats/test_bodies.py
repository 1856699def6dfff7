"""Measures on STEP files against sizes the specimens were built with."""

import math
import subprocess
import sys

import cadquery as cq
import pytest
from specimens import TURNED, antenna_piece, boom, box, rod

from boomwright.design.centreline import loop_drop_mm, trace
from boomwright.design.model import Driven
from boomwright.errors import MeasureError
from boomwright.formats.step import STEP
from boomwright.parts.solids import conductor
from boomwright.pieces import Body, Probe, SolidPiece

TILTED = cq.Location(cq.Vector(0, 0, 0), cq.Vector(0, 0, 1), math.degrees(math.atan(0.01)))


@pytest.fixture(scope="module")
def antenna(tmp_path_factory):
    path = tmp_path_factory.mktemp("antenna") / "antenna.step"
    STEP.write(antenna_piece(), path)
    return STEP.read(path)


def of(reading, measure_name, **arguments):
    return STEP.measure(reading, Probe(measure_name, arguments), [])


def saved(tmp_path, *bodies, frame=None, name="one.step"):
    piece = SolidPiece(name, "cnc", bodies, **({"frame": frame} if frame else {}))
    STEP.write(piece, tmp_path / name)
    return STEP.read(tmp_path / name)


def test_a_rod_in_its_place(antenna):
    sizes = {
        "at_mm": 50.0,
        "height_mm": 0.0,
        "offset_y_mm": 0.0,
        "length_mm": 140.0,
        "diameter_mm": 3.0,
        "tilt_mm": 0.0,
    }
    for quantity, value in sizes.items():
        assert of(antenna, "rod", name="D1", quantity=quantity) == pytest.approx(value, abs=1e-9), quantity


def test_a_tilted_rod_is_measured_as_tilted(tmp_path):
    reading = saved(tmp_path, Body("R", rod(0.0, 100.0).moved(TILTED)))
    assert of(reading, "rod", quantity="tilt_mm") == pytest.approx(0.5, abs=2e-4)
    assert of(reading, "rod", quantity="at_mm") == pytest.approx(0.0, abs=1e-9)


def test_names_that_are_not_there_are_findings(antenna):
    with pytest.raises(MeasureError, match=r"one body named 'D9' expected, found boom, R, D1, DE$"):
        of(antenna, "rod", name="D9", quantity="at_mm")
    with pytest.raises(MeasureError, match="one body expected"):
        of(antenna, "rod", quantity="at_mm")
    with pytest.raises(MeasureError, match="no such quantity of a rod: 'mass'"):
        of(antenna, "rod", name="R", quantity="mass")


def test_grooves_and_their_depth(antenna):
    for at in (0.0, 50.0):
        sizes = {"at_mm": at, "radius_mm": 1.6, "height_mm": 0.0, "depth_mm": 3.1}
        for quantity, value in sizes.items():
            found = of(antenna, "groove", name="boom", at_mm=at + 0.2, quantity=quantity)
            assert found == pytest.approx(value, abs=1e-9), quantity
    with pytest.raises(MeasureError, match="no groove or hole within 1 mm of x = 25"):
        of(antenna, "groove", name="boom", at_mm=25.0, quantity="at_mm")


def test_holes_through_a_round_boom(tmp_path):
    bar = cq.Solid.makeCylinder(6.0, 80.0, cq.Vector(-20, 0, 0), cq.Vector(1, 0, 0))
    bored = bar.cut(cq.Solid.makeCylinder(1.55, 14.0, cq.Vector(3, -7, 0), cq.Vector(0, 1, 0)))
    reading = saved(tmp_path, Body("boom", bored.Solids()[0]))
    for quantity, value in {"at_mm": 3.0, "diameter_mm": 3.1, "height_mm": 0.0}.items():
        assert of(reading, "hole", at_mm=3.0, quantity=quantity) == pytest.approx(value, abs=1e-9)


def test_extents_volumes_and_counts(antenna, tmp_path):
    assert of(antenna, "extent", name="R", quantity="size_y_mm") == pytest.approx(160.0, abs=1e-9)
    assert of(antenna, "extent", quantity="min_x_mm") == pytest.approx(-30.0, abs=1e-9)
    assert of(antenna, "solid_count") == 5.0
    assert of(antenna, "solid_count", name="DE") == 2.0
    assert of(antenna, "lowest_mm") == pytest.approx(-10.5, abs=1e-9)
    ball = saved(tmp_path, Body("ball", cq.Solid.makeSphere(5.0, angleDegrees1=-90.0)))
    assert of(ball, "volume_mm3") == pytest.approx(4.0 / 3.0 * math.pi * 125.0, rel=1e-6)
    assert of(ball, "valid") == 1.0


FORMS = {
    "straight": Driven("straight", 10.0, 2.0, "copper", 4.0, length_mm=100.0),
    "flat": Driven("folded", 10.0, 2.0, "copper", 4.0, length_mm=100.0, spacing_mm=12.0, plane="flat"),
    "upright": Driven(
        "folded", 10.0, 2.0, "copper", 4.0, length_mm=100.0, spacing_mm=14.0, plane="upright", bend_radius_mm=4.0
    ),
    "circle": Driven("loop", 10.0, 2.0, "copper", 4.0, perimeter_mm=200.0, shape="circle"),
    "square": Driven("loop", 10.0, 2.0, "copper", 4.0, perimeter_mm=200.0, shape="square"),
}


@pytest.mark.parametrize("name", FORMS)
def test_driven_elements_of_every_form(name, tmp_path):
    driven = FORMS[name]
    solids = [conductor(runs, driven.diameter_mm / 2.0) for runs in trace(driven)]
    shape = solids[0] if len(solids) == 1 else cq.Compound.makeCompound(solids)
    reading = saved(tmp_path, Body("DE", shape))
    expected = {"at_mm": 10.0, "diameter_mm": 2.0, "gap_mm": 4.0}
    if driven.form == "loop":
        drop = loop_drop_mm(driven)
        expected |= {"drop_mm": drop, "height_mm": -drop, "perimeter_mm": 200.0, "extent_z_mm": 2.0 * drop + 2.0}
        if name == "circle":  # the gap counts along the wire, the file shows its chord
            expected["gap_mm"] = 2.0 * drop * math.sin(4.0 / (2.0 * drop))
            del expected["extent_z_mm"]
    else:
        expected |= {"height_mm": 0.0, "length_mm": 100.0}
        if driven.spacing_mm:
            expected["spacing_mm"] = driven.spacing_mm
    for quantity, value in expected.items():
        found = of(reading, "driven", name="DE", quantity=quantity)
        assert found == pytest.approx(value, abs=1e-6), quantity


def test_clearance_to_a_box_outside_touching_inside_and_across(tmp_path):
    reading = saved(tmp_path, Body("block", box((0, 10), (0, 10), (0, 10))))
    boxes = {
        (((13, 4, 4), (15, 6, 6))): 3.0,
        (((13, 14, 4), (15, 16, 6))): 5.0,
        (((10, 0, 0), (12, 5, 5))): 0.0,
        (((4, 4, 4), (5, 5, 5))): 0.0,
        (((-5, -5, -5), (15, 15, 15))): 0.0,
        (((9, 9, 9), (15, 15, 15))): 0.0,
        (((12, 5, 5), (12, 5, 5))): 2.0,
    }
    for corners, distance in boxes.items():
        assert of(reading, "clearance_mm", box=corners) == pytest.approx(distance, abs=2e-6), corners


def test_clearance_to_a_bore_is_to_its_wall(tmp_path):
    bored = box((-10, 10), (-10, 10), (0, 5)).cut(cq.Solid.makeCylinder(6.0, 5.0))
    reading = saved(tmp_path, Body("block", bored.Solids()[0]))
    distance = of(reading, "clearance_mm", box=((-1, -1, 1), (1, 1, 2)))
    assert distance == pytest.approx(6.0 - math.sqrt(2.0), abs=1e-6)


def test_bodies_that_touch_do_not_overlap(tmp_path):
    rod_in_bore = cq.Solid.makeCylinder(2.0, 20.0, cq.Vector(5, 5, -5), cq.Vector(0, 0, 1))
    bored = box((0, 10), (0, 10), (0, 10)).cut(rod_in_bore).Solids()[0]
    bodies = (Body("bored", bored), Body("rod", rod_in_bore), Body("side", box((10, 12), (0, 10), (0, 10))))
    assert of(saved(tmp_path, *bodies), "overlap_mm3", within="all") == 0.0


def test_the_common_volume_of_bodies_that_overlap(tmp_path):
    one, other = Body("one", box((0, 10), (0, 10), (0, 10))), Body("other", box((8, 18), (0, 10), (5, 15)))
    far = Body("far", box((50, 60), (0, 10), (0, 10)))
    reading = saved(tmp_path, one, other, far)
    assert of(reading, "overlap_mm3", within="all") == pytest.approx(100.0)
    assert of(reading, "overlap_mm3") == 0.0
    assert of(reading, "overlap_mm3", within="all", names=["one", "far"]) == 0.0


def test_overlap_with_another_file_is_taken_in_the_designs_frame(tmp_path):
    block = saved(tmp_path, Body("block", box((0, 10), (0, 10), (0, 10))), name="block.step")
    moved = saved(tmp_path, Body("bar", box((5, 6), (-5, 15), (4, 6))), Body("far", box((90, 91), (0, 1), (0, 1))),
                  frame=TURNED, name="moved.step")  # fmt: skip
    arguments = {"also_frames": [TURNED], "also_names": ["bar"]}
    common = STEP.measure(block, Probe("overlap_mm3", arguments), [moved])
    assert common == pytest.approx(20.0)
    assert STEP.measure(block, Probe("overlap_mm3", {"also_names": [["far"]], "also_frames": [TURNED]}), [moved]) == 0.0
    back = STEP.measure(moved, Probe("overlap_mm3", {"frame": TURNED, "names": ["bar"]}), [block])
    assert back == pytest.approx(20.0)


def test_equal_shapes_stay_separate_bodies(tmp_path):
    same = rod(0.0, 50.0)
    reading = saved(tmp_path, Body("a", same, (1.0, 0.0, 0.0)), Body("b", same, (0.0, 0.0, 1.0)))
    found = [(body.name, body.colour) for body in reading.bodies]
    assert found == [("a", (1.0, 0.0, 0.0)), ("b", (0.0, 0.0, 1.0))]


def test_names_and_positions_survive_odd_letters(tmp_path):
    reading = saved(tmp_path, Body("rod 'D1' (müll)", boom()))
    assert [body.name for body in reading.bodies] == ["rod 'D1' (müll)"]


def test_a_turned_file_is_turned(tmp_path):
    reading = saved(tmp_path, Body("R", rod(7.0, 50.0)), frame=TURNED)
    assert of(reading, "extent", quantity="mid_y_mm") == pytest.approx(37.0, abs=1e-9)
    assert of(reading, "extent", quantity="size_x_mm") == pytest.approx(50.0, abs=1e-9)


def test_the_catalogue_loads_no_cad():
    script = "import sys, boomwright.formats.catalogue as c; c.FORMATS.names()\n"
    script += "print(sorted({'cadquery', 'OCP', 'ezdxf', 'trimesh', 'shapely'} & set(sys.modules)))"
    done = subprocess.run([sys.executable, "-c", script], capture_output=True, text=True, check=True)
    assert done.stdout == "[]\n"
