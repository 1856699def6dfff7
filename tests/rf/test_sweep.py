"""Sweeps: interpolated matrices against direct solutions, order, warnings, faults."""

import numpy as np
import pytest
from antennas import camera_5g8, gauge_868, thick_five

from boomwright.errors import DesignFault
from boomwright.rf.feed import return_loss_db, vswr
from boomwright.rf.solve import solve_at
from boomwright.rf.sweep import nodes_needed, sweep


@pytest.mark.parametrize(
    "build, low_hz, high_hz",
    [(gauge_868, 840e6, 890e6), (gauge_868, 600e6, 1100e6), (camera_5g8, 5.5e9, 6.1e9), (gauge_868, 50e6, 1900e6)],
    ids=["narrow", "wide", "thick", "decades"],
)
def test_interpolation_is_invisible(build, low_hz, high_hz):
    frequencies = tuple(np.linspace(low_hz, high_hz, 41))
    found = sweep(build(), frequencies)
    assert nodes_needed(found.solutions[0].pieces, low_hz, high_hz) < 41
    for index in (0, 13, 27, 40):
        direct = found.solutions[index]
        alone = sweep(build(), (frequencies[index], high_hz)).solutions[0]
        assert direct.impedance_ohm == pytest.approx(alone.impedance_ohm, rel=1e-4)
        assert direct.gain_dbi == pytest.approx(alone.gain_dbi, abs=1e-4)


def test_properties_run_with_the_frequencies_in_ascending_order():
    found = sweep(gauge_868(), (870e6, 863e6, 866.5e6, 863e6), system_ohm=75.0)
    assert list(found.frequency_hz) == [863e6, 866.5e6, 870e6]
    for name in ("impedance_ohm", "vswr", "return_loss_db", "gain_dbi", "directivity_dbi", "efficiency"):
        assert getattr(found, name).shape == (3,)
    for name in ("front_to_back_db", "front_to_rear_db"):
        assert np.isfinite(getattr(found, name)).all()
    assert len(found.beamwidth_e_deg) == len(found.beamwidth_h_deg) == len(found.side_lobe_db) == 3
    assert found.vswr[1] == pytest.approx(vswr(found.impedance_ohm[1], 75.0))
    assert found.directivity_dbi == pytest.approx(found.gain_dbi - 10 * np.log10(found.efficiency))
    assert found.warnings == ()


def test_one_frequency_alone_is_the_same_as_solve_at():
    found = sweep(gauge_868(), (866.5e6,)).solutions[0]
    assert found.impedance_ohm == solve_at(gauge_868(), 866.5e6).impedance_ohm


def test_leaving_the_design_frequency_is_said():
    found = sweep(gauge_868(), (400e6, 866.5e6), design_frequency_hz=866.5e6)
    assert found.warnings == ("1 of 2 frequencies lie outside 0.5 to 1.5 of the design frequency 866.5 MHz",)


def test_close_thick_rods_are_said_once():
    found = sweep(thick_five(5.0), (5.7e9, 5.8e9, 9.0e9))
    assert sum("R and DE: axes 5.00 mm apart" in warning for warning in found.warnings) == 1
    assert any("k a > 0.3" in warning for warning in found.warnings)


@pytest.mark.parametrize("frequency_hz", [0.0, -1.0, float("nan"), float("inf"), 10.0])
def test_frequencies_that_are_none(frequency_hz):
    with pytest.raises(DesignFault) as caught:
        sweep(gauge_868(), (866e6, frequency_hz))
    assert str(caught.value) == (
        f"frequency_hz: {frequency_hz} is not a frequency\n  fix: give it in hertz, 100 kHz or more"
    )


def test_no_frequency_at_all():
    with pytest.raises(DesignFault):
        sweep(gauge_868(), ())


def test_match_figures():
    """Closed forms: 100 ohm in 50 is 2 : 1 and 9.54 dB."""
    assert vswr(100, 50) == pytest.approx(2.0)
    assert return_loss_db(100, 50) == pytest.approx(9.5424, abs=1e-4)
    assert vswr(50, 50) == 1.0
    assert return_loss_db(50, 50) == pytest.approx(240.0)
    assert vswr(-1j, 50) > 1e11
