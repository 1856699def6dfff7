"""The V notch: every diameter rests on one plane."""

import math

import pytest

from boomwright.errors import PlanFault
from boomwright.plan.notch import notch_apex_height_mm, resting_axis_height_mm


@pytest.mark.parametrize("diameter_mm", [0.9, 2.0, 3.0, 6.35])
def test_every_diameter_rests_on_one_plane(diameter_mm: float) -> None:
    apex_mm = notch_apex_height_mm(axis_height_mm=12.0, diameter_mm=diameter_mm)
    assert resting_axis_height_mm(apex_mm, diameter_mm) == pytest.approx(12.0, abs=1e-12)


def test_a_right_angle_lifts_the_axis_by_radius_times_root_2() -> None:
    assert resting_axis_height_mm(0.0, 2.0) == pytest.approx(math.sqrt(2.0), abs=1e-12)


@pytest.mark.parametrize("angle_deg", [20.0, 60.0, 90.0, 160.0])
def test_the_rod_touches_both_faces(angle_deg: float) -> None:
    height = resting_axis_height_mm(0.0, 4.0, angle_deg)
    half = math.radians(angle_deg) / 2.0
    distance_to_face = height * math.sin(half)
    assert distance_to_face == pytest.approx(2.0, abs=1e-12)


@pytest.mark.parametrize(
    ("diameter_mm", "angle_deg", "message"),
    [
        (0.0, 90.0, "diameter_mm: 0 is not a diameter\n  fix: give a value above 0"),
        (2.0, 19.9, "included_angle_deg: 19.9 is outside 20 to 160\n  fix: 90 is common practice"),
        (2.0, 161.0, "included_angle_deg: 161 is outside 20 to 160\n  fix: 90 is common practice"),
        (math.nan, 90.0, "diameter_mm: nan is not a diameter\n  fix: give a value above 0"),
    ],
)
def test_outside_its_range_it_says_so(diameter_mm: float, angle_deg: float, message: str) -> None:
    with pytest.raises(PlanFault) as caught:
        resting_axis_height_mm(0.0, diameter_mm, angle_deg)
    assert str(caught.value) == message
