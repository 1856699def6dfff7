"""Designs carried to other bands and stock."""

from dataclasses import replace
from pathlib import Path

import pytest

from boomwright.design.tomlfile import load_design
from boomwright.errors import InputFault
from boomwright.rf.wires import rod_of
from boomwright.search.carry import Target, carried
from boomwright.search.reactance import own_impedance_ohm
from boomwright.search.rescale import rescale, worst_figures
from boomwright.shop.profile import Shop

EXAMPLES = Path(__file__).parents[2] / "examples"


def gauge():
    return load_design(EXAMPLES / "stream-gauge-868.toml")


def test_rods_stay_as_reactive_as_they_were():
    design = gauge()
    moved, _ = carried(design, Target(2450.0, 2.0), Shop())
    for old, new in zip(design.rods, moved.rods, strict=True):
        before = own_impedance_ohm(rod_of(old), 866.5e6).imag
        assert own_impedance_ohm(rod_of(new), 2450e6).imag == pytest.approx(before, abs=0.05)
        assert new.at_mm == pytest.approx(old.at_mm * 866.5 / 2450.0)


def test_to_its_own_band_and_stock_nothing_moves():
    design = gauge()
    moved, changes = carried(design, Target(866.5, 3.0, 12.0), Shop())
    for old, new, change in zip(design.rods, moved.rods, changes, strict=True):
        assert new.length_mm == pytest.approx(old.length_mm, abs=1e-3)
        assert change.scaled_mm == old.length_mm
        assert (new.at_mm, new.diameter_mm) == (old.at_mm, old.diameter_mm)
    assert moved.driven == design.driven
    assert moved.boom == design.boom


def test_bends_stay_makeable():
    tight = replace(gauge(), driven=replace(gauge().driven, bend_radius_mm=2.0))
    driven = carried(tight, Target(5800.0), Shop())[0].driven
    # The axis bends at 4 conductor radii or more: tighter, the solver doubts its own impedance.
    assert driven.spacing_mm / 2.0 >= 4.0 * driven.diameter_mm / 2.0
    assert driven.bend_radius_mm is None or driven.bend_radius_mm >= 1.5 * driven.diameter_mm - 1e-9


@pytest.mark.slow
def test_from_868_to_2450_the_figures_stay():
    found = rescale(gauge(), Target(2450.0, 2.0))
    before, after = worst_figures(found.before), worst_figures(found.after)
    assert after["gain_dbi"] == pytest.approx(before["gain_dbi"], abs=0.15)
    assert after["vswr_max"] <= 1.5
    assert found.unbuilt == ()
    assert found.shortfalls == ()
    assert {rod.diameter_mm for rod in found.design.rods} == {2.0}


def test_faults_come_in_one_go():
    with pytest.raises(InputFault) as caught:
        rescale(gauge(), Target(2450.0, 50.0, -1.0))
    assert [fault.path for fault in caught.value.faults] == ["--rod-mm", "--boom-width-mm"]
    with pytest.raises(InputFault, match="--to-mhz"):
        rescale(gauge(), Target(float("nan")))
