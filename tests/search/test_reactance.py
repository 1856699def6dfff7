"""A rod's own reactance, and lengths that keep it in other stock."""

import csv
from dataclasses import replace
from pathlib import Path

import pytest

from boomwright.rf.conductors import Rod
from boomwright.search.reactance import length_of_reactance_m, own_impedance_ohm

ONE_METRE_HZ = 299_792_458.0
PUBLISHED = Path(__file__).parents[1] / "published" / "element_diameter.csv"


def rows():
    with PUBLISHED.open(encoding="utf-8") as file:
        return list(csv.DictReader(file))


@pytest.mark.parametrize("row", rows(), ids=lambda row: row["length_at_0.0085_wl"])
def test_published_diameter_compensation(row):
    """NBS TN 688, worked example (values from memory): the same element in another diameter, within 0.002 lambda."""
    before = Rod("D1", 0.0, float(row["length_at_0.0085_wl"]), 0.0085 / 2)
    reactance = own_impedance_ohm(before, ONE_METRE_HZ).imag
    after = Rod("D1", 0.0, 1.0, float(row["diameter_wl"]) / 2)
    assert length_of_reactance_m(after, reactance, ONE_METRE_HZ) == pytest.approx(float(row["length_wl"]), abs=0.002)


@pytest.mark.parametrize("length_m", [0.38, 0.43, 0.49])
def test_the_same_stock_keeps_its_length(length_m):
    rod = Rod("D1", 0.0, length_m, 0.004)
    reactance = own_impedance_ohm(rod, ONE_METRE_HZ).imag
    assert length_of_reactance_m(rod, reactance, ONE_METRE_HZ) == pytest.approx(length_m, abs=1e-5)


def test_reactance_does_not_depend_on_scale_or_place():
    rod = Rod("D1", 0.0, 0.44, 0.004)
    wanted = own_impedance_ohm(rod, ONE_METRE_HZ)
    small = Rod("D1", 0.3, 0.044, 0.0004)
    assert own_impedance_ohm(small, 10.0 * ONE_METRE_HZ) == pytest.approx(wanted, rel=1e-6)


def test_thin_half_wave_rod():
    """73.1 + j42.5 ohm by the induced-electromotive-force method, a/lambda -> 0: Carter 1932 (closed form)."""
    found = own_impedance_ohm(Rod("D1", 0.0, 0.5, 1e-6), ONE_METRE_HZ)
    assert found.real == pytest.approx(73.1, abs=5.0)
    assert found.imag == pytest.approx(42.5, abs=5.0)


def test_a_longer_rod_is_more_inductive():
    rod = Rod("D1", 0.0, 0.4, 0.004)
    values = [own_impedance_ohm(replace(rod, length_m=length), ONE_METRE_HZ).imag for length in (0.3, 0.4, 0.5, 0.6)]
    assert values == sorted(values)
