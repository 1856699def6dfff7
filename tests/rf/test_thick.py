"""Thick, close rods against the independent full-surface solution (`full_surface`)."""

import pytest
from antennas import MM, thick_five
from full_surface import solve_rods

from boomwright.rf.basis import Options
from boomwright.rf.conductors import Folded, Rod, Wires
from boomwright.rf.solve import solve_at


def agree(wires, frequency_hz, around=3, along=8):
    """Gain within 0.1 dB, front-to-back within 0.6 dB, both power balances within 0.5 %."""
    found = solve_at(wires, frequency_hz)
    reference = solve_rods(wires.conductors, frequency_hz, around, along)
    assert found.mode.families == 1
    assert found.gain_dbi == pytest.approx(reference.gain_dbi, abs=0.1)
    assert found.front_to_back_db == pytest.approx(reference.front_to_back_db, abs=0.6)
    assert reference.balance == pytest.approx(1.0, abs=1e-3)
    assert abs(found.imbalance) < 1e-3


@pytest.mark.slow
@pytest.mark.parametrize("frequency_hz", [5.45e9, 5.55e9, 5.7e9, 5.8e9])
@pytest.mark.parametrize("spacing_mm", [7.0, 11.0])
def test_four_millimetre_rods_at_5g8(spacing_mm, frequency_hz):
    agree(thick_five(spacing_mm), frequency_hz)


@pytest.mark.slow
@pytest.mark.parametrize("frequency_hz", [2.35e9, 2.45e9, 2.5e9, 2.55e9])
def test_six_millimetre_rods_at_2g45(frequency_hz):
    agree(thick_five(16.0, diameter_mm=6.0, scale=2.4), frequency_hz)


@pytest.mark.slow
def test_thick_folded_driven_element():
    """2 mm wire folded 5 mm wide at 5.8 GHz: gain and front-to-back as for rods; its impedance is warned about."""
    rods = (Rod("R", 0.0, 25 * MM, MM), Rod("D1", 22 * MM, 19 * MM, MM), Rod("D2", 29 * MM, 19 * MM, MM))
    wires = Wires((*rods, Folded("DE", 10 * MM, 22 * MM, 5 * MM, MM, 2 * MM)))
    agree(wires, 5.8e9, around=4, along=10)
    assert solve_at(wires, 5.8e9).warnings == (
        "DE: bends of 2.5 conductor radii on the axis, tighter than 4; "
        "crowding inside them is not solved, impedance may be several percent off",
    )


@pytest.mark.slow
@pytest.mark.parametrize("frequency_hz", [866.5e6, 900e6])
def test_folded_dipole_impedance(frequency_hz):
    """2 mm wire folded 12 mm wide at 868 MHz: within 2 %, what bends of six radii cost, taken by the chord."""
    folded = Folded("DE", 0.0, 158 * MM, 12 * MM, MM, 4 * MM)
    found = solve_at(Wires((folded,)), frequency_hz)
    reference = solve_rods([folded], frequency_hz, 4, 24)
    assert abs(found.impedance_ohm - reference.impedance_ohm) < 0.02 * abs(reference.impedance_ohm)
    assert found.gain_dbi == pytest.approx(reference.gain_dbi, abs=0.02)


def test_a_coarse_full_surface_solution_agrees_already():
    agree(thick_five(9.0), 5.8e9, around=3, along=6)


def test_without_azimuthal_variation_close_rods_are_wrong():
    """The short cut that the full path is there for: m = 0 alone is over 0.3 dB off and unbalanced."""
    wires = thick_five(9.0)
    plain, full = (solve_at(wires, 5.8e9, Options(azimuthal=azimuthal)) for azimuthal in (False, True))
    assert abs(plain.gain_dbi - full.gain_dbi) > 0.3
    assert abs(plain.imbalance) > 0.003
    assert abs(full.imbalance) < 1e-4


@pytest.mark.parametrize("spacing_mm", [7.0, 9.0])
def test_thick_rods_settle(spacing_mm):
    coarse, fine = (solve_at(thick_five(spacing_mm), 5.8e9, Options(refinement)) for refinement in (0, 1))
    assert coarse.gain_dbi == pytest.approx(fine.gain_dbi, abs=0.01)
    assert abs(coarse.impedance_ohm - fine.impedance_ohm) < 0.5
