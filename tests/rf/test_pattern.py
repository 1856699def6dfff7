"""The far field: two ways to the same pattern, cuts, beamwidths and lobes of known shapes."""

import numpy as np
import pytest
from antennas import ONE_METRE_HZ, gauge_868, thick_five

from boomwright.rf.conductors import Folded, Rod, Wires
from boomwright.rf.pattern import half_power_beamwidth_deg, side_lobe_db
from boomwright.rf.solve import solve_at

UPRIGHT = Wires((Folded("DE", 0.0, 0.47, 0.02, 1e-3, 5e-3, upright=True), Rod("D1", 0.1, 0.44, 2e-3)))


@pytest.mark.parametrize(
    "build, frequency_hz",
    [(gauge_868, 866.5e6), (lambda: thick_five(9.0), 5.8e9), (lambda: UPRIGHT, ONE_METRE_HZ)],
    ids=["thin", "thick", "upright"],
)
def test_cuts_are_the_general_pattern(build, frequency_hz):
    solution = solve_at(build(), frequency_hz)
    angle = np.radians(np.arange(360))
    zero = np.zeros(360)
    e_plane = solution.gain_toward_dbi(np.column_stack([np.cos(angle), np.sin(angle), zero]))
    h_plane = solution.gain_toward_dbi(np.column_stack([np.cos(angle), zero, np.sin(angle)]))
    strong = e_plane > solution.gain_dbi - 40
    assert solution.e_plane[strong] == pytest.approx(e_plane[strong], abs=1e-3)
    assert solution.h_plane == pytest.approx(h_plane, abs=1e-3)
    assert solution.e_plane[0] == pytest.approx(solution.gain_dbi, abs=1e-5)


def test_the_full_sphere_holds_the_radiated_power():
    """The mean of the gain over the sphere is the efficiency."""
    solution = solve_at(gauge_868(), 866.5e6)
    theta, phi, gain = solution.sphere_dbi(3)
    assert gain.shape == (len(theta), len(phi)) == (61, 120)
    weight = np.sin(np.radians(theta))
    mean = ((10 ** (gain / 10)).mean(axis=1) * weight).sum() / weight.sum()
    assert mean == pytest.approx(solution.efficiency, rel=2e-3)
    assert gain[30, 0] == pytest.approx(solution.gain_dbi)


def test_front_to_rear_is_never_above_front_to_back():
    for wires, frequency_hz in ((gauge_868(), 866.5e6), (thick_five(9.0), 5.8e9), (UPRIGHT, ONE_METRE_HZ)):
        solution = solve_at(wires, frequency_hz)
        assert solution.front_to_rear_db <= solution.front_to_back_db + 0.05


def cosine_power(order):
    return np.maximum(np.cos(np.radians(np.arange(360))), 0.0) ** order + 1e-9


def test_beamwidth_of_a_cosine():
    """cos^n falls to half at arccos(2^(-1/n)) (closed form)."""
    for order in (2, 10):
        expected = 2 * np.degrees(np.arccos(0.5 ** (1 / order)))
        assert half_power_beamwidth_deg(cosine_power(order)) == pytest.approx(expected, abs=0.02)


def test_a_circle_has_no_beamwidth_and_no_side_lobe():
    assert half_power_beamwidth_deg(np.ones(360)) is None
    assert side_lobe_db(np.ones(360)) is None or side_lobe_db(np.ones(360)) == 0.0


def test_side_lobe_is_the_highest_outside_the_beam():
    angle = np.radians(np.arange(360))
    shape = cosine_power(20) + 0.01 * np.maximum(np.cos(angle - 2.0), 0) ** 40
    assert side_lobe_db(shape) == pytest.approx(-20.0, abs=0.1)


def test_beam_off_axis_is_found_by_climbing():
    shifted = np.roll(cosine_power(10), 12)
    assert half_power_beamwidth_deg(shifted) == pytest.approx(half_power_beamwidth_deg(cosine_power(10)), abs=1e-9)
