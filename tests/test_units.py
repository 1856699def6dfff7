"""Conversions, and the wavelengths everybody in the trade knows."""

import pytest

from boomwright import units


def test_wavelength_and_quarter_wave_at_5800_mhz() -> None:
    """51.7 mm and 12.9 mm: common practice."""
    assert units.wavelength_mm(5800.0) == pytest.approx(51.7, abs=0.05)
    assert units.wavelength_mm(5800.0) / 4.0 == pytest.approx(12.9, abs=0.05)


def test_wavelength_times_frequency_is_the_speed_of_light() -> None:
    """c = 299 792 458 m/s exactly, by the SI definition of the metre."""
    for frequency_mhz in (30.0, 145.0, 868.0, 10_000.0):
        product = units.m_from_mm(units.wavelength_mm(frequency_mhz)) * units.hz_from_mhz(frequency_mhz)
        assert product == pytest.approx(299_792_458.0, rel=1e-12)


def test_lengths_go_there_and_back() -> None:
    assert units.mm_from_m(units.m_from_mm(12.5)) == pytest.approx(12.5, rel=1e-15)


def test_volume_and_mass() -> None:
    assert units.ml_from_mm3(1000.0) == 1.0
    assert units.g_from_mm3(1000.0, 8.96) == pytest.approx(8.96)


def test_an_inch_is_25_4_mm() -> None:
    """Exact by the international yard and pound agreement of 1959."""
    assert units.MM_PER_INCH == 25.4
