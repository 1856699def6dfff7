"""Conductor loss and thin coats: closed-form limits, and coats that vanish."""

from dataclasses import replace
from math import inf, log, pi

import numpy as np
import pytest
from antennas import ONE_METRE_HZ, gauge_868, thick_five

from boomwright.rf.arrays import VACUUM_PERMEABILITY_H_M, VACUUM_PERMITTIVITY_F_M
from boomwright.rf.basis import Options
from boomwright.rf.coat import coat_elastance_m_f
from boomwright.rf.conductors import Coat, Rod, Wires
from boomwright.rf.loss import round_impedance_ohm_m, skin_depth_m, surface_impedance_ohm
from boomwright.rf.solve import solve_at

COPPER_S_M = 5.8e7


def test_low_frequency_is_direct_current_resistance_and_inner_inductance():
    """1 / (sigma pi a^2) and mu / (8 pi) per metre (closed forms)."""
    value = round_impedance_ohm_m(1e-3, COPPER_S_M, 50.0)
    assert value.real == pytest.approx(1 / (COPPER_S_M * pi * 1e-6), rel=1e-3)
    assert value.imag == pytest.approx(2 * pi * 50.0 * VACUUM_PERMEABILITY_H_M / (8 * pi), rel=1e-3)


def test_high_frequency_is_a_flat_skin_with_its_first_curvature_term():
    """Z = Zs / (2 pi a) + 1 / (4 pi a^2 sigma), the next term of the Bessel ratio (closed form)."""
    radius, frequency_hz = 1e-3, 868e6
    flat = surface_impedance_ohm(COPPER_S_M, frequency_hz) / (2 * pi * radius)
    value = round_impedance_ohm_m(radius, COPPER_S_M, frequency_hz)
    assert value == pytest.approx(flat + 1 / (4 * pi * radius**2 * COPPER_S_M), rel=1e-5)
    assert skin_depth_m(COPPER_S_M, frequency_hz) < 0.01 * radius


def test_perfect_conductors_lose_nothing():
    assert round_impedance_ohm_m(1e-3, inf, 1e9) == 0
    assert surface_impedance_ohm(inf, 1e9) == 0
    assert solve_at(thick_five(9.0), 5.8e9).efficiency == 1.0


@pytest.mark.parametrize("azimuthal", [False, True])
def test_lost_power_is_that_of_the_current_along_the_rod(azimuthal):
    """The resistance per metre times the square of the current, by the trapezoid over the nodes."""
    radius, conductivity = 1e-3, 1e6
    wires = Wires((Rod("DE", 0.0, 0.48, radius, gap_m=2e-3, conductivity_s_m=conductivity),))
    solution = solve_at(wires, ONE_METRE_HZ, Options(azimuthal=azimuthal))
    piece = solution.pieces[0]
    side = ~piece.mesh.cap
    square = np.abs(solution.currents[: piece.nodes][side]) ** 2
    resistance = round_impedance_ohm_m(radius, conductivity, ONE_METRE_HZ).real
    lost_w = resistance * np.trapezoid(square, piece.mesh.start[side, 1])
    assert solution.lost_w == pytest.approx(lost_w, rel=0.005)
    assert abs(solution.imbalance) < 1e-4


def coated(wires, coat):
    return Wires(tuple(replace(conductor, coat=coat) for conductor in wires.conductors))


@pytest.mark.parametrize("coat", [Coat(0.0, 3.0), Coat(1e-12, 3.0), Coat(2e-4, 1.0)], ids=["none", "thin", "air"])
@pytest.mark.parametrize("build, frequency_hz", [(gauge_868, 866.5e6), (lambda: thick_five(9.0), 5.8e9)])
def test_a_coat_that_is_not_there_does_nothing(build, frequency_hz, coat):
    bare = solve_at(build(), frequency_hz, Options(azimuthal=frequency_hz > 1e9))
    found = solve_at(coated(build(), coat), frequency_hz, Options(azimuthal=frequency_hz > 1e9))
    assert found.impedance_ohm == pytest.approx(bare.impedance_ohm, abs=1e-3)
    assert found.gain_dbi == pytest.approx(bare.gain_dbi, abs=1e-3)


def test_a_coat_makes_a_rod_electrically_longer():
    bare = Rod("DE", 0.0, 0.47, 1e-3, gap_m=2e-3)
    reactances = [
        solve_at(Wires((replace(bare, coat=coat),)), ONE_METRE_HZ).impedance_ohm.imag
        for coat in (None, Coat(1e-4, 3.0), Coat(3e-4, 3.0))
    ]
    assert reactances[0] < reactances[1] < reactances[2]


def test_a_coat_is_an_equivalent_radius_with_a_series_inductance():
    """Richmond & Newman 1976: a_eq = b (a / b)^(1 / eps) for the charge, and mu / (2 pi) ln(a_eq / a) in series.

    A conductor of that radius has the changed elastance; the inductance it lost is what stands in series.
    """
    radius, coat = 1e-3, Coat(5e-5, 3.0)
    outer = radius + coat.thickness_m
    equivalent = outer * (radius / outer) ** (1 / coat.permittivity)
    assert coat_elastance_m_f(coat, radius).real == pytest.approx(
        -log(equivalent / radius) / (2 * pi * VACUUM_PERMITTIVITY_F_M), rel=1e-9
    )


def test_lossy_coat_takes_power():
    wires = Wires((Rod("DE", 0.0, 0.47, 1e-3, gap_m=2e-3, coat=Coat(3e-4, 3.5, 0.03)),))
    solution = solve_at(wires, ONE_METRE_HZ)
    assert 0.9 < solution.efficiency < 0.9999
    assert abs(solution.imbalance) < 1e-4
