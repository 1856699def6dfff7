"""Laws of physics that every solution keeps, and convergence shown by refinement."""

from dataclasses import replace
from math import log10, sqrt

import numpy as np
import pytest
from antennas import ONE_METRE_HZ, camera_5g8, gateway_433, gauge_868, thick_five

from boomwright.rf.basis import Options
from boomwright.rf.conductors import IDEAL, Folded, Loop, Rod, Wires
from boomwright.rf.impedance import coupling_block
from boomwright.rf.solve import Model, solve_at

EXAMPLES = {"868 MHz": (gauge_868, 866.5e6), "5.8 GHz": (camera_5g8, 5.8e9), "433 MHz": (gateway_433, 433.9e6)}
LOOPS = [Loop("DE", 0.0, 1.0, 1e-3, 5e-3, shape) for shape in ("circle", "square")]
MANY = {
    **EXAMPLES,
    "thick": (lambda: thick_five(8.0), 5.8e9),
    "dipole": (lambda: Wires((Rod("DE", 0.0, 0.48, 2e-3, gap_m=0.01),)), ONE_METRE_HZ),
    "circle": (lambda: Wires((LOOPS[0], Rod("D1", 0.15, 0.45, 2e-3))), ONE_METRE_HZ),
    "square": (lambda: Wires((LOOPS[1], Rod("D1", 0.15, 0.45, 2e-3))), ONE_METRE_HZ),
    "upright": (
        lambda: Wires((Folded("DE", 0.0, 0.47, 0.02, 1e-3, 5e-3, upright=True), Rod("D1", 0.1, 0.44, 2e-3))),
        ONE_METRE_HZ,
    ),
}
each = pytest.mark.parametrize("name", MANY)


@each
def test_power_is_balanced(name):
    build, frequency_hz = MANY[name]
    assert abs(solve_at(build(), frequency_hz).imbalance) < 0.005


@each
def test_the_matrix_is_symmetric(name):
    """Reciprocity."""
    build, frequency_hz = MANY[name]
    matrix = Model(build(), frequency_hz).impedance.matrix(frequency_hz)
    assert np.abs(matrix - matrix.T).max() < 1e-9 * np.abs(matrix).max()


def test_mutual_impedance_is_the_same_both_ways():
    """Reciprocity between unlike conductors, each block filled on its own."""
    for azimuthal in (False, True):
        model = Model(gauge_868(), 866.5e6, Options(azimuthal=azimuthal))
        first, second = model.pieces[0], model.pieces[1]
        there = coupling_block(first, second, 866.5e6, model.mode)
        back = coupling_block(second, first, 866.5e6, model.mode)
        # Sampling differs in which conductor is mirrored and halved; the difference is the sampling error.
        assert np.abs(there - back.T).max() < 1e-3 * np.abs(there).max()


@pytest.mark.parametrize("name", EXAMPLES)
def test_refining_twice_changes_nothing_that_matters(name):
    build, frequency_hz = EXAMPLES[name]
    coarse, fine = (solve_at(build(), frequency_hz, Options(refinement)) for refinement in (0, 2))
    change = abs(coarse.impedance_ohm - fine.impedance_ohm)
    assert coarse.gain_dbi == pytest.approx(fine.gain_dbi, abs=0.01)
    assert change < max(0.01 * abs(fine.impedance_ohm), 0.5)


@pytest.mark.parametrize("azimuthal", [False, True])
def test_observed_convergence_rate(azimuthal):
    """Piecewise-linear current in a stationary form: the error falls at least like the element size."""
    wires = Wires((Rod("DE", 0.0, 0.48, 5e-3, gap_m=0.01),))
    steps = [solve_at(wires, ONE_METRE_HZ, Options(r, azimuthal)).impedance_ohm for r in range(4)]
    changes = np.abs(np.diff(steps))
    assert changes[1] < changes[0] / 2.0
    assert changes[2] < changes[1] / 2.0
    assert changes[0] < 0.2


@pytest.mark.parametrize("build", [camera_5g8, gauge_868], ids=["straight", "folded"])
def test_scale_invariance(build):
    """Perfect conductors: sizes times s at frequency over s are the same antenna."""
    scale, frequency_hz = 7.3, 1e9
    wires = Wires(tuple(replace(c, conductivity_s_m=IDEAL) for c in build().conductors))
    lengths = ("at_m", "length_m", "radius_m", "gap_m", "height_m", "spacing_m")
    larger = Wires(
        tuple(replace(c, **{n: getattr(c, n) * scale for n in lengths if hasattr(c, n)}) for c in wires.conductors)
    )
    one, other = solve_at(wires, frequency_hz), solve_at(larger, frequency_hz / scale)
    assert other.impedance_ohm == pytest.approx(one.impedance_ohm, rel=1e-7)
    assert other.gain_dbi == pytest.approx(one.gain_dbi, abs=1e-7)


def test_place_does_not_matter():
    wires = camera_5g8()
    moved = Wires(tuple(replace(c, at_m=c.at_m + 0.3, height_m=-0.2) for c in wires.conductors))
    one, other = solve_at(wires, 5.8e9), solve_at(moved, 5.8e9)
    assert other.impedance_ohm == pytest.approx(one.impedance_ohm, rel=1e-4)
    assert other.gain_dbi == pytest.approx(one.gain_dbi, abs=1e-3)


@pytest.mark.parametrize("name", ["868 MHz", "thick", "circle"])
def test_mirrored_antenna_beams_backward(name):
    """x to -x swaps front and back; a flat folded element's second conductor goes with it, so loops and rods only."""
    build, frequency_hz = MANY[name]
    conductors = [c for c in build().conductors if not isinstance(c, Folded)]
    if not any(c.gap_m for c in conductors):
        conductors[0] = replace(conductors[0], gap_m=4e-3)
    one = solve_at(Wires(tuple(conductors)), frequency_hz)
    other = solve_at(Wires(tuple(replace(c, at_m=-c.at_m) for c in conductors)), frequency_hz)
    assert other.impedance_ohm == pytest.approx(one.impedance_ohm, rel=1e-9)
    assert other.gain_dbi == pytest.approx(one.gain_dbi - one.front_to_back_db, abs=1e-9)


def test_straight_rods_are_blind_to_up_and_down():
    solution = solve_at(gauge_868(), 866.5e6)
    assert solution.h_plane[1:] == pytest.approx(solution.h_plane[:0:-1], abs=1e-9)
    assert solution.e_plane[1:] == pytest.approx(solution.e_plane[:0:-1], abs=1e-9)


def test_a_dipole_is_the_same_all_round():
    """Rotation invariance: nothing distinguishes directions round a lone rod."""
    for azimuthal in (False, True):
        solution = solve_at(
            Wires((Rod("DE", 0.0, 0.48, 0.02, gap_m=0.01),)), ONE_METRE_HZ, Options(azimuthal=azimuthal)
        )
        assert np.ptp(solution.h_plane) < 1e-6


def test_half_wave_dipole():
    """2.15 dBi and 78 degrees (common practice)."""
    solution = solve_at(Wires((Rod("DE", 0.0, 0.48, 1e-4, gap_m=1e-3),)), ONE_METRE_HZ)
    assert solution.gain_dbi == pytest.approx(2.15, abs=0.03)
    assert solution.beamwidth_e_deg == pytest.approx(78.0, abs=1.0)
    assert solution.beamwidth_h_deg is None


def test_short_dipole_is_a_hertzian_one():
    """Gain 1.5, resistance 20 (pi L / lambda)^2 of the triangular current (common practice)."""
    solution = solve_at(Wires((Rod("DE", 0.0, 0.02, 1e-5, gap_m=1e-4),)), ONE_METRE_HZ)
    assert solution.gain_dbi == pytest.approx(10 * log10(1.5), abs=0.005)
    assert solution.impedance_ohm.real == pytest.approx(20 * (np.pi * 0.02) ** 2, rel=0.15)


@pytest.mark.parametrize("loop, gain_dbi", [(LOOPS[0], 3.45), (LOOPS[1], 3.1)], ids=["circle", "square"])
def test_full_wave_loops(loop, gain_dbi):
    """Gain of full-wave loops (values from memory)."""
    assert solve_at(Wires((loop,)), ONE_METRE_HZ).gain_dbi == pytest.approx(gain_dbi, abs=0.1)


def test_square_loop_impedance():
    """About 100 - j141 ohm at a = 0.001 wavelengths, one wavelength of perimeter, sharp corners (value from memory)."""
    loop = Loop("DE", 0.0, 1.0, 1e-3, 2e-3, "square", bend_radius_m=5e-4)
    impedance = solve_at(Wires((loop,)), ONE_METRE_HZ).impedance_ohm
    assert impedance.real == pytest.approx(100.0, abs=4.0)
    assert impedance.imag == pytest.approx(-141.0, abs=8.0)


@pytest.mark.parametrize("spacing_radii", [8.0, 12.0])
def test_folded_tends_to_four_dipoles(spacing_radii):
    """As the spacing tends to 0 a folded dipole is 4 x a dipole of the equivalent radius sqrt(a d), at resonance."""
    ratios = []
    for radius in (4e-4, 1e-4):
        spacing = spacing_radii * radius
        folded = lambda length, a=radius, d=spacing: Folded("DE", 0.0, length, d, a, 1e-3)  # noqa: E731
        dipole = lambda length, a=radius, d=spacing: Rod("DE", 0.0, length, sqrt(a * d), gap_m=1e-3)  # noqa: E731
        ratios.append(resonant_resistance(folded) / resonant_resistance(dipole))
    assert ratios[1] == pytest.approx(4.0, rel=0.03)
    assert abs(ratios[1] - 4.0) < abs(ratios[0] - 4.0)


def resonant_resistance(build):
    """Resistance where the reactance vanishes, by the secant through 0.47 and 0.48 wavelengths."""
    low, high = (solve_at(Wires((build(length),)), ONE_METRE_HZ).impedance_ohm for length in (0.47, 0.48))
    length = 0.47 + 0.01 * low.imag / (low.imag - high.imag)
    return solve_at(Wires((build(length),)), ONE_METRE_HZ).impedance_ohm.real


def test_both_ways_agree_where_either_holds():
    """Thin conductors apart: azimuthal variation changes nothing to speak of."""
    plain, full = (solve_at(gauge_868(), 866.5e6, Options(azimuthal=azimuthal)) for azimuthal in (False, True))
    assert plain.gain_dbi == pytest.approx(full.gain_dbi, abs=0.01)
    assert abs(plain.impedance_ohm - full.impedance_ohm) < 0.01 * abs(full.impedance_ohm)


def test_facing_sides_crowd_alike_both_ways():
    """A folded dipole 6 radii wide: the closed-form proximity term against the azimuthal solution."""
    wires = Wires((Folded("DE", 0.0, 0.47, 0.006, 1e-3, 5e-3, upright=True),))
    plain, full = (solve_at(wires, ONE_METRE_HZ, Options(azimuthal=azimuthal)) for azimuthal in (False, True))
    assert abs(plain.impedance_ohm - full.impedance_ohm) < 0.005 * abs(full.impedance_ohm)


def test_azimuth_is_carried_where_conductors_are_thick_or_close():
    assert Model(thick_five(8.0), 5.8e9).mode.families == 1
    assert Model(gauge_868(), 866.5e6).mode.families == 0
    upright = Wires((Folded("DE", 0.0, 0.47, 0.02, 4e-3, 5e-3, upright=True),))
    assert Model(upright, ONE_METRE_HZ).mode.families == 2
