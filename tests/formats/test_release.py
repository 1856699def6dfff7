"""The mould's measures on shapes whose answer is plain."""

import math
from pathlib import Path

import cadquery as cq
import pytest

from boomwright.errors import MeasureError
from boomwright.formats.brep import ReadBody, StepReading
from boomwright.formats.release import MEASURES

BLOCK = {"box": [[-10.0, -10.0, 0.0], [10.0, 10.0, 8.0]], "taper_mm": 1.0}


def reading(*shapes: cq.Shape) -> StepReading:
    bodies = tuple(ReadBody(f"body-{i}", None, shape.wrapped) for i, shape in enumerate(shapes))
    return StepReading(Path("made.step"), bodies)


def box(low: tuple[float, float, float], high: tuple[float, float, float]) -> cq.Shape:
    size = [b - a for a, b in zip(low, high, strict=True)]
    return cq.Solid.makeBox(*size, pnt=cq.Vector(*low))


def cup(draft_deg: float) -> cq.Shape:
    """A block with a hollow 20 x 20 at its rim and 8 deep that narrows downward by the draft."""
    hollow = cq.Workplane("XY", origin=(0, 0, 8)).rect(20, 20).extrude(-8, taper=draft_deg).val()
    return box((-15, -15, -4), (15, 15, 8)).cut(hollow)


def measure(name: str, *readings: StepReading, **arguments: object) -> float:
    return MEASURES[name](readings[0], arguments, readings[1:])


@pytest.mark.parametrize("draft_deg", [0.5, 2.0, 7.0])
def test_draft_of_a_cup_is_its_taper(draft_deg: float) -> None:
    found = measure("draft_deg", reading(cup(draft_deg)), pull=[0, 0, -1], **BLOCK)
    assert found == pytest.approx(draft_deg, abs=1e-6)


def test_an_undercut_is_negative() -> None:
    found = measure("draft_deg", reading(cup(-3.0)), pull=[0, 0, -1], **BLOCK)
    assert found == pytest.approx(-3.0, abs=1e-6)


def test_draft_is_taken_in_the_designs_frame() -> None:
    turned = cup(2.0).rotate(cq.Vector(0, 0, 0), cq.Vector(1, 0, 0), 180.0).translate(cq.Vector(5, 0, 30))
    frame = [[1, 0, 0, 5], [0, -1, 0, 0], [0, 0, -1, 30], [0, 0, 0, 1]]
    found = measure("draft_deg", reading(turned), frame=frame, pull=[0, 0, -1], **BLOCK)
    assert found == pytest.approx(2.0, abs=1e-6)


def test_draft_without_a_cavity_is_an_error() -> None:
    with pytest.raises(MeasureError, match=r"made\.step: no face bounds the cavity"):
        measure("draft_deg", reading(box((50, 50, 50), (60, 60, 60))), pull=[0, 0, 1], **BLOCK)


def test_a_plate_that_rises_through_a_cube_meets_it() -> None:
    plate, cube = box((-5, -5, 0), (5, 5, 3)), box((-2, -2, 10), (2, 2, 14))
    found = measure("sweep_overlap_mm3", reading(plate), reading(cube), legs=[[0, 0, 30]])
    assert 0.5 * 4 * 4 * 3 <= found <= 4 * 4 * 3 + 1e-6


def test_thin_things_are_met_between_the_even_places() -> None:
    plate, foil = box((-5, -5, 0), (5, 5, 0.1)), box((-2, -2, 10.3), (2, 2, 10.4))
    found = measure("sweep_overlap_mm3", reading(plate), reading(foil), legs=[[0, 0, 30]])
    assert found == pytest.approx(4 * 4 * 0.1, rel=0.6)


@pytest.mark.parametrize("legs", [[[0, 0, -30]], [[30, 0, 0]], [[20, 0, 0], [0, 0, 30]]])
def test_a_way_round_meets_nothing(legs: list[list[float]]) -> None:
    plate, cube = box((-5, -5, 0), (5, 5, 3)), box((-2, -2, 10), (2, 2, 14))
    assert measure("sweep_overlap_mm3", reading(plate), reading(cube), legs=legs) == 0.0


def test_the_second_leg_starts_where_the_first_ends() -> None:
    plate, cube = box((-5, -5, 0), (5, 5, 3)), box((18, -2, 10), (22, 2, 14))
    met = measure("sweep_overlap_mm3", reading(plate), reading(cube), legs=[[20, 0, 0], [0, 0, 30]])
    assert 0.5 * 4 * 4 * 3 <= met <= 4 * 4 * 3 + 1e-6


def test_a_half_channel_lets_a_rod_go_and_a_full_bore_does_not() -> None:
    rod = {"kind": "cylinder", "start": [0, -9, 0], "end": [0, 9, 0], "radius_mm": 1.0}
    bore = cq.Solid.makeCylinder(1.1, 20, cq.Vector(0, -10, 0), cq.Vector(0, 1, 0))
    half = box((-4, -5, 0), (4, 5, 4)).cut(bore)
    whole = box((-4, -5, -4), (4, 5, 4)).cut(bore)
    assert measure("sweep_overlap_mm3", reading(half), legs=[[0, 0, 20]], solids=[rod]) == 0.0
    assert measure("sweep_overlap_mm3", reading(whole), legs=[[0, 0, 20]], solids=[rod]) > 1.0
    assert measure("interference_mm3", reading(whole), solids=[rod]) == 0.0


@pytest.mark.parametrize("gap_mm", [0.2, 0.03, 0.001, 0.0, -0.001, -0.03])
def test_a_rod_in_a_bore_is_decided_to_the_micron(gap_mm: float) -> None:
    """Meshes are off by more than these gaps; the answer is not."""
    rod = reading(cq.Solid.makeCylinder(2.0, 20, cq.Vector(0, 0, -10), cq.Vector(0, 0, 1)))
    bore = cq.Solid.makeCylinder(2.0 + gap_mm, 20, cq.Vector(0, 0, -10), cq.Vector(0, 0, 1))
    found = measure("interference_mm3", reading(box((-4, -4, 0), (4, 4, 4)).cut(bore)), rod)
    ring = math.pi * 4.0 * (2.0**2 - (2.0 + gap_mm) ** 2)
    assert found == pytest.approx(max(0.0, ring), abs=1e-5)


def test_common_volume_with_a_solid_of_no_file() -> None:
    rod = {"kind": "cylinder", "start": [0, 0, -9], "end": [0, 0, 9], "radius_mm": 1.0}
    found = measure("interference_mm3", reading(box((-4, -4, 0), (4, 4, 4))), solids=[rod])
    assert found == pytest.approx(4.0 * math.pi, rel=1e-6)
    with pytest.raises(MeasureError, match="no such solid: 'torus'"):
        measure("interference_mm3", reading(box((-4, -4, 0), (4, 4, 4))), solids=[{"kind": "torus"}])


def test_room_is_the_box_less_everything_in_it() -> None:
    floor, lid = reading(box((-5, -5, -1), (5, 5, 0))), reading(box((-5, -5, 4), (5, 5, 5)))
    post = {"kind": "box", "corners": [[0, 0, -1], [2, 2, 9]]}
    whole = {"box": [[-3, -3, -0.5], [3, 3, 4.5]], "solids": [post]}
    assert measure("cavity_volume_mm3", floor, lid, **whole) == pytest.approx(6 * 6 * 4 - 2 * 2 * 4)
    assert measure("cavity_volume_mm3", floor, lid, density_g_mm3=0.5, **whole) == pytest.approx(64.0)


def test_a_plug_is_hollow_where_grooves_go_through_it() -> None:
    floor = reading(box((-5, -5, -1), (5, 5, 0)))
    plug = {"kind": "box", "corners": [[-3, -1, 0], [3, 1, 2]]}
    groove = {"kind": "box", "corners": [[-1, -9, 0], [1, 9, 9]]}
    room = {"box": [[-3, -3, 0], [3, 3, 4]], "fill": [plug], "hollows": [groove]}
    assert measure("cavity_volume_mm3", floor, **room) == pytest.approx(6 * 6 * 4 - (6 * 2 * 2 - 2 * 2 * 2))


@pytest.mark.parametrize(("low_mm", "spaces"), [(-5.0, 2.0), (-4.9, 1.0)])
def test_a_wall_across_parts_the_room_in_two(low_mm: float, spaces: float) -> None:
    wall = reading(box((-0.5, low_mm, -5), (0.5, 5, 5)))
    room = {"box": [[-5, -5, -5], [5, 5, 5]], "points": [[-3, 0, 0], [3, 0, 0]]}
    assert measure("cavity_connected", wall, **room) == spaces


def test_a_point_in_the_material_is_in_no_space() -> None:
    wall = reading(box((-0.5, -5, -5), (0.5, 5, 5)))
    room = {"box": [[-5, -5, -5], [5, 5, 5]], "points": [[0, 0, 0], [3, 0, 0]]}
    assert measure("cavity_connected", wall, **room) == 0.0


@pytest.mark.parametrize("offset_mm", [0.0, 0.08])
def test_play_of_a_pin_is_what_its_place_leaves(offset_mm: float) -> None:
    bore = cq.Solid.makeCylinder(1.65, 9, cq.Vector(0, 0, -1), cq.Vector(0, 0, 1))
    socket = reading(box((-5, -5, 0), (5, 5, 5)).cut(bore))
    pin = reading(cq.Solid.makeCylinder(1.5, 4, cq.Vector(offset_mm, 0, 0), cq.Vector(0, 0, 1)))
    axes = [[[0, 0, 0], [0, 0, 1]]]
    assert measure("pin_play_mm", socket, pin, axes=axes) == pytest.approx(0.15 - offset_mm, abs=1e-9)
    with pytest.raises(MeasureError, match="no pin or socket at 9, 0, 0"):
        measure("pin_play_mm", socket, pin, axes=[[[9, 0, 0], [0, 0, 1]]])
    with pytest.raises(MeasureError, match="no pins to measure"):
        measure("pin_play_mm", socket, pin, axes=[])
