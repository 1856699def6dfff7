"""The mould's plan: room between neighbours, the parting face, and the resin by arithmetic."""

import math
from dataclasses import replace
from functools import cache

import mould_cases
import numpy as np
import pytest
import samples
import shapely
from design.bases import designs
from hypothesis import HealthCheck, assume, given, settings
from samples import rod
from scipy.spatial import cKDTree

from boomwright.design.centreline import trace
from boomwright.design.model import Boom, Design, Driven, Feed
from boomwright.errors import Fault
from boomwright.plan.cavity import Cavity, Taper, places_along, straight, wire_mm3
from boomwright.plan.mould import HALVES, MouldPlan, plan_mould
from boomwright.plan.mould_room import neighbours
from boomwright.plan.seat import plan_seat
from boomwright.plan.size import Size
from boomwright.shop.profile import MouldShop, Printer, Shop


def planned(design: Design, shop: Shop | None = None) -> tuple[MouldPlan, dict[str, Size], list[Fault]]:
    assert design.boom is not None
    assert design.seat is not None
    seat, _, faults = plan_seat(design, design.boom, design.seat)
    assert not faults
    mould, sizes, found = plan_mould(design, shop or Shop(), seat)
    return mould, {size.key: size for size in sizes}, found


@cache
def planned_case(name: str) -> MouldPlan:
    mould, _, faults = planned(mould_cases.ALL[name])
    assert not faults
    return mould


def straight_beside(director_mm: float) -> Design:
    """A 2 mm straight element at x = 10 on a 6 mm boom, a director this far ahead."""
    rods = (rod("R", 0, 25, 2), rod("D1", 10.0 + director_mm, 19, 2, 1))
    return replace(samples.CAMERA, rods=rods)


def test_the_worked_case_leaves_1_8_before_the_first_director() -> None:
    """Common practice for this size: rods 7 mm apart at 5.8 GHz, 1.8 mm between the mould's wall and the director."""
    mould, sizes, faults = planned(straight_beside(7.0))
    assert not faults
    assert 17.0 - 1.0 - mould.block[0][1] == pytest.approx(1.8)
    assert sizes["mould.wall_front_mm"].value == pytest.approx(1.2)
    draft = math.tan(math.radians(2.0)) * 3.0
    assert sizes["mould.resin_front_mm"].value == pytest.approx(7.0 - 2.0 - 1.2 - 1.8 - draft)
    assert sizes["mould.resin_front_mm"].origin == (
        "6 mm from the axis to D1; the mould's wall shrank from 3 to 1.2; the resin shrank from 3 to 1.895"
    )


@pytest.mark.parametrize("director_mm", [6.0, 6.4, 7.0, 8.0, 9.0, 10.0, 12.0])
def test_first_the_wall_gives_way_then_the_resin_then_the_clearance(director_mm: float) -> None:
    mould, _, faults = planned(straight_beside(director_mm))
    resin, wall, clearance = (pair[1] for pair in (mould.ends.resin_mm, mould.ends.wall_mm, mould.ends.clearance_mm))
    assert not faults
    assert clearance is not None
    assert resin == 3.0 or wall == pytest.approx(1.2)
    assert clearance >= 1.8 - 1e-9 or resin == pytest.approx(1.5)
    assert resin >= 1.5 - 1e-9
    assert clearance >= 0.8 - 1e-9


def test_too_near_a_director_is_a_fault_of_its_place() -> None:
    _, _, faults = planned(straight_beside(5.0))
    draft = math.tan(math.radians(2.0)) * 3.0
    short = math.ceil((2.0 + 1.5 + 1.2 + 0.8 + draft - 5.0) * 100.0) / 100.0
    assert [str(fault) for fault in faults] == [
        "rod[1].at_mm: 4 mm between the fed conductor's axis and D1 hold no mould\n"
        f"  fix: set them {short:g} mm farther apart"
    ]
    _, _, mended = planned(straight_beside(5.0 + short))
    assert not mended


def test_upright_between_near_rods_is_refused_with_two_ways_out() -> None:
    upright = Driven("folded", 10.0, 2.0, "copper", 2.0, length_mm=22.0, spacing_mm=8.0, plane="upright")
    _, _, faults = planned(replace(straight_beside(7.0), driven=upright))
    assert [str(fault) for fault in faults] == [
        "rod[1].at_mm: 6 mm between the fed conductor's axis and D1 hold no mould, "
        "whose half must slide off along the boom\n"
        '  fix: set them 1.4 mm farther apart, or set driven.plane = "flat"',
    ]


def test_an_upright_half_leaves_the_resin_before_it_meets_a_rod() -> None:
    mould, _, _ = planned(samples.UPRIGHT_868)
    for place, sign, behind in ((0, -1.0, True), (1, 1.0, False)):
        near = neighbours(samples.UPRIGHT_868, behind)[0]
        travelled = mould.block[0][place] + sign * mould.ends.travel_mm[place]
        assert mould.ends.travel_mm[place] > abs(mould.cavity.depth_mm[place] - mould.at_mm)
        assert sign * (near.surface_mm - travelled) >= 0.5


@pytest.mark.parametrize("name", ["flat, both conductors inside", "flat, 7 mm to the second conductor"])
def test_a_second_conductor_too_near_is_taken_in(name: str) -> None:
    design = mould_cases.ALL[name]
    mould, _, faults = planned(design)
    assert not faults
    assert design.driven.spacing_mm is not None
    assert mould.cavity.box_mm[0][1] >= 7.0 + design.driven.spacing_mm + 1.0 + 1.5


def test_larger_than_the_bed_is_refused_with_the_overrun() -> None:
    small = Shop(printer=Printer(bed_mm=(50.0, 40.0, 15.0)))
    mould, sizes, faults = planned(samples.GAUGE, small)
    y, z = (sizes[f"mould.size_{axis}_mm"].value for axis in "yz")
    assert y == pytest.approx(2.0 * mould.face.outer_mm)
    assert [fault.path for fault in faults] == ["printer.bed_mm", "printer.bed_mm"]
    assert faults[1].found == f"mould-lower is {y:.4g} x 14.38 x 16.5, {y - 50.0:.4g} mm more than the bed"
    assert z == pytest.approx(24.0)


def test_a_rod_beside_the_loop_leaves_no_leg_for_the_clip() -> None:
    near = replace(samples.LOOP_868, rods=(rod("R", 0, 168, 3), rod("D1", 67.0, 148, 3, 1)))
    _, _, faults = planned(near)
    assert [str(fault) for fault in faults] == [
        "rod[1].at_mm: D1 leaves 1.55 mm for a leg of the clip that holds the loop\n"
        "  fix: set it 0.45 mm farther from the driven element"
    ]


def test_no_coax_no_channel() -> None:
    for name in ("flat without coax", "loop without coax"):
        mould, sizes, _ = planned(mould_cases.ALL[name])
        assert mould.coax is None
        assert "mould.coax_channel_mm" not in sizes


@pytest.mark.parametrize("name", mould_cases.ALL)
def test_resin_lies_round_the_joint_as_thick_as_wished_or_said(name: str) -> None:
    """Straight up from the conductor, sideways past the joint, and along the boom: nowhere less than planned."""
    design = mould_cases.ALL[name]
    mould = planned_case(name)
    r = design.driven.outer_diameter_mm / 2.0
    z = trace(design.driven)[0][0].start[2]
    for place, sign in ((0, -1.0), (1, 1.0)):
        reach = mould.at_mm + sign * (r + mould.ends.resin_mm[place])
        assert mould.cavity.holds(np.array([[reach - sign * 1e-9, 0.0, z]])).all()
    y = design.driven.gap_mm / 2.0 + max(2.0, design.driven.outer_diameter_mm) + 3.0
    far = -1.0 if design.driven.form == "loop" else 1.0
    points = np.array([[mould.at_mm, y - 1e-9, z], [mould.at_mm, 0.0, z + far * (r + 3.0 - 1e-9)]])
    assert mould.cavity.holds(points).all()


@pytest.mark.parametrize("name", mould_cases.ALL)
def test_pins_keep_clear_of_channels_and_edges_and_show_the_way_round(name: str) -> None:
    mould = planned_case(name)
    u = mould.block[0 if mould.pull == "z" else 2]
    outline = shapely.box(u[0], -mould.face.outer_mm, u[1], mould.face.outer_mm)
    taken = [outline.exterior, *(notch.polygon for notch in (*mould.face.ties, *mould.face.pries))]
    axes = [0, 1] if mould.pull == "z" else [2, 1]
    for runs in mould.conductors:
        for run in runs:
            line = places_along(run, np.linspace(0.0, 1.0, 200))[:, axes]
            taken.append(shapely.LineString(line).buffer(mould.conductor_channel_mm))
    inner = mould.cavity.along.span_mm[1]
    taken.append(shapely.box(u[0], -inner, u[1], inner))
    assert len(mould.face.pins) == 4
    assert len(mould.face.ties) == 4
    for pin in mould.face.pins:
        socket = shapely.Point(pin.u_mm, pin.y_mm).buffer(pin.diameter_mm / 2.0 + mould.play_mm)
        assert 1.2 <= pin.diameter_mm <= 4.0
        assert min(socket.distance(one) for one in taken) >= 1.2 - 0.01
    middle = sum(u)
    turned = {(round(middle - pin.u_mm, 3), round(-pin.y_mm, 3)) for pin in mould.face.pins}
    assert turned != {(round(pin.u_mm, 3), round(pin.y_mm, 3)) for pin in mould.face.pins}


@pytest.mark.parametrize("name", mould_cases.ALL)
def test_every_half_lies_on_the_bed_parting_face_up(name: str) -> None:
    mould = planned_case(name)
    axis = 0 if mould.pull == "x" else 2
    for half in HALVES:
        frame = np.array(mould.frame(half))
        assert np.linalg.det(frame[:3, :3]) == pytest.approx(1.0)
        spans = [list(span) for span in mould.block]
        spans[axis] = list(mould.half_span_mm(half))
        corners = np.array([[x, y, z, 1.0] for x in spans[0] for y in spans[1] for z in spans[2]])
        heights = (corners @ frame.T)[:, 2]
        assert heights.min() == pytest.approx(0.0, abs=1e-12)
        assert heights.max() == pytest.approx(spans[axis][1] - spans[axis][0])
        first_move = np.array([*mould.legs[half][0], 0.0])
        assert (frame @ first_move)[2] < 0.0


COUNTED = [*mould_cases.FAST, "grooves through a round tube", "circular loop", "foremost, the boom ends in the wall"]


@pytest.mark.parametrize("name", COUNTED)
def test_resin_by_counting_points(name: str) -> None:
    """The plan's resin against a count of points in a fine lattice, each asked whether resin could be there."""
    design, mould = mould_cases.ALL[name], planned_case(name)
    rng = np.random.default_rng(20240518)
    low, high = (np.array([span[end] for span in mould.cavity.box_mm]) for end in (0, 1))
    strata = np.stack(np.meshgrid(*[np.arange(60.0)] * 3, indexing="ij"), axis=-1).reshape(-1, 3)
    points = low + (strata + rng.random(strata.shape)) / 60.0 * (high - low)
    free = mould.cavity.holds(points) & ~_in_boom(design, points) & ~_in_wires(design, mould, points)
    counted = free.mean() * np.prod(high - low)
    assert mould.resin_mm3 == pytest.approx(counted, rel=0.005)


def _in_boom(design: Design, points: np.ndarray) -> np.ndarray:
    boom, seat_wish = design.boom, design.seat
    assert boom is not None
    assert seat_wish is not None
    seat, _, _ = plan_seat(design, boom, seat_wish)
    x, y, z = points.T
    up = z - seat.axis_mm
    if boom.section == "round":
        inside = y**2 + up**2 <= seat.half_width_mm**2
    else:
        inside = (np.abs(y) <= seat.half_width_mm) & (np.abs(up) <= seat.half_width_mm)
    inside &= (x >= seat.start_mm) & (x <= seat.end_mm)
    for groove in seat.grooves:
        off = x - groove.at_mm
        in_slot = (off**2 + z**2 <= groove.radius_mm**2) | ((np.abs(off) <= groove.radius_mm) & (z >= 0.0))
        inside &= ~in_slot
        if groove.pocket:
            near = (np.abs(off) <= groove.pocket.half_x_mm) & (np.abs(y) <= groove.pocket.half_y_mm)
            inside &= ~(near & (z >= -groove.radius_mm))
    return inside


def _in_wires(design: Design, mould: MouldPlan, points: np.ndarray) -> np.ndarray:
    inside = np.zeros(len(points), dtype=bool)
    wires = [(run, design.driven.diameter_mm / 2.0) for runs in trace(design.driven) for run in runs]
    if mould.coax is not None:
        wires.append((straight(mould.coax.start, mould.coax.end), mould.coax.radius_mm))
    for run, radius in wires:
        on = places_along(run, np.linspace(0.0, 1.0, 2 + int(run.length_mm / 0.1)))
        away, nearest = cKDTree(on).query(points, distance_upper_bound=radius)
        hit = np.flatnonzero(np.isfinite(away))
        inside[hit[~_beyond_an_end(on, points[hit], nearest[hit])]] = True
    return inside


def _beyond_an_end(on: np.ndarray, points: np.ndarray, nearest: np.ndarray) -> np.ndarray:
    """Whether points near a line of vertices lie beyond its flat ends."""
    first, last = (points - on[0]) @ (on[1] - on[0]), (points - on[-1]) @ (on[-1] - on[-2])
    return ((nearest == 0) & (first < 0.0)) | ((nearest == len(on) - 1) & (last > 0.0))


def test_a_tapered_box_has_its_volume_by_hand() -> None:
    """Two frusta base to base: 20 x 10 narrowing by 1 a side over a depth of 10, twice."""
    cavity = Cavity("z", Taper((-10.0, 10.0), 0.0), Taper((-5.0, 5.0), 0.0), (-10.0, 10.0), 0.1)
    frustum = 10.0 / 3.0 * (200.0 + 18.0 * 8.0 + math.sqrt(200.0 * 144.0))
    middle = 10.0 / 6.0 * (200.0 + 4.0 * 19.0 * 9.0 + 144.0)
    assert cavity.volume_mm3() == pytest.approx(2.0 * middle, rel=1e-12)
    assert cavity.volume_mm3() == pytest.approx(2.0 * frustum, rel=2e-3)


@pytest.mark.parametrize("slope", [0.0, 0.1])
def test_a_wire_right_through_has_its_section_times_the_width(slope: float) -> None:
    cavity = Cavity("z", Taper((-10.0, 10.0), 0.0), Taper((-5.0, 5.0), 0.0), (-4.0, 4.0), slope)
    run = straight((0.0, -20.0, 0.0), (0.0, 20.0, 0.0))
    # A half disc's centroid lies 4 r / (3 pi) from its diameter: so much lower stands the leaning wall, on average.
    width = 10.0 - 2.0 * slope * 4.0 * 1.5 / (3.0 * math.pi)
    assert wire_mm3(cavity, (run,), 1.5) == pytest.approx(math.pi * 1.5**2 * width, rel=1e-3)


def test_a_wire_along_the_wall_has_half_its_section_inside() -> None:
    cavity = Cavity("z", Taper((-10.0, 10.0), 0.0), Taper((-5.0, 5.0), 0.0), (-4.0, 4.0), 0.0)
    run = straight((-6.0, 5.0, 0.0), (6.0, 5.0, 0.0))
    assert wire_mm3(cavity, (run,), 1.5) == pytest.approx(math.pi * 1.5**2 * 12.0 / 2.0, rel=1e-3)


@pytest.mark.parametrize("draft_deg", [0.0, 1.0, 5.0])
@pytest.mark.parametrize("wall_mm", [1.0, 2.0, 5.0])
def test_the_shops_wishes_are_kept(draft_deg: float, wall_mm: float) -> None:
    shop = Shop(mould=MouldShop(wall_mm=wall_mm, draft_deg=draft_deg))
    mould, sizes, faults = planned(replace(samples.GAUGE, rods=(), feed=Feed()), shop)
    assert not faults
    assert mould.cavity.slope == pytest.approx(math.tan(math.radians(draft_deg)))
    assert sizes["mould.resin_rear_mm"].value == pytest.approx(max(wall_mm, 2.1 + 0.4 - 1.0))
    if wall_mm < 1.5:
        assert sizes["mould.resin_rear_mm"].origin == "1.5 of resin to cover the pocket in the boom; wall as wished"


def test_a_tube_is_to_be_plugged() -> None:
    mould, _, _ = planned(samples.TUBE_915)
    assert any(note.startswith("plug the boom's bore") for note in mould.notes)


@settings(max_examples=25, deadline=None, derandomize=True, suppress_health_check=list(HealthCheck))
@given(designs())
def test_any_sound_design_is_planned_or_refused(design: Design) -> None:
    assume(design.boom is not None)
    assert isinstance(design.boom, Boom)
    design = design if design.seat else replace(design, seat=samples.GAUGE.seat)
    assert design.seat is not None
    seat, _, seat_faults = plan_seat(design, design.boom, design.seat)
    assume(not seat_faults)
    mould, sizes, faults = plan_mould(design, Shop(), seat)
    assert all(math.isfinite(size.value) for size in sizes)
    assert all(fault.path and fault.found and fault.fix for fault in faults)
    if not faults:
        assert mould.resin_mm3 > 0.0
        assert all(low < high for low, high in mould.block)
