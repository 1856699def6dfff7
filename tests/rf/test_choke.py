"""The choke for a frequency and cable: its kind by the rules of the trade, its lengths by the speed of light."""

import pytest

from boomwright.data.tables import cables
from boomwright.rf.choke import choose_choke, sleeve

RG58, RG316 = cables()["RG-58"], cables()["RG-316"]


def figure(choke, words):
    return next(value for name, value, _ in choke.figures if words in name)


def test_a_high_resistance_gets_half_a_wave_of_cable():
    """868 MHz in RG-316: 299792458 / 868e6 / 2 x 0.695 = 120.02 mm; 200 ohm becomes 50."""
    choke = choose_choke(200.0 + 10.0j, 50.0, 868e6, RG316)
    assert (choke.kind, choke.divides) == ("half-wave balun", 4.0)
    assert figure(choke, "length of the loop") == pytest.approx(120.02, abs=0.01)
    assert figure(choke, "behind the balun") == pytest.approx(50.0)


def test_ferrite_below_300_mhz_and_a_sleeve_above():
    low = choose_choke(50.0, 50.0, 145e6, RG58)
    assert low.kind == "ferrite choke"
    assert (figure(low, "pieces"), figure(low, "turns"), figure(low, "wanted")) == (5.0, 1.0, 500.0)
    six_metres = choose_choke(50.0, 50.0, 50e6, RG58)
    assert (figure(six_metres, "pieces"), figure(six_metres, "turns")) == (1.0, 3.0)
    high = choose_choke(50.0, 50.0, 868e6, RG316)
    assert high.kind == "sleeve"
    # A quarter wave in air at 868 MHz: 299.792458 / 868 / 4 = 86.35 mm.
    assert figure(high, "inside length") == pytest.approx(86.35, abs=0.005)


def test_a_filling_shortens_the_sleeve_and_its_impedance():
    air, foam = sleeve(868e6, RG316), sleeve(868e6, RG316, 0.8)
    for words in ("inside length", "impedance between"):
        assert figure(foam, words) == pytest.approx(0.8 * figure(air, words))


def test_a_sleeve_as_wide_as_long_is_said_to_be_one():
    assert not any("hardly longer" in rule for rule in choose_choke(50.0, 50.0, 5.8e9, cables()["RG-405"]).rules)
    assert any("hardly longer" in rule for rule in choose_choke(50.0, 50.0, 10.5e9, RG58).rules)
