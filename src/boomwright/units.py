"""Every conversion between units, and the constants they rest on. Nothing else converts."""

from __future__ import annotations

SPEED_OF_LIGHT_M_S = 299_792_458.0
"""Speed of light in vacuum [m/s], exact by the SI definition of the metre."""

MM_PER_M = 1000.0
MM_PER_INCH = 25.4


def hz_from_mhz(frequency_mhz: float) -> float:
    """Frequency [MHz] as [Hz]."""
    return frequency_mhz * 1e6


def m_from_mm(length_mm: float) -> float:
    """Length [mm] as [m]."""
    return length_mm / MM_PER_M


def mm_from_m(length_m: float) -> float:
    """Length [m] as [mm]."""
    return length_m * MM_PER_M


def wavelength_mm(frequency_mhz: float) -> float:
    """Wavelength in vacuum [mm] of a frequency [MHz], above 0."""
    return SPEED_OF_LIGHT_M_S / hz_from_mhz(frequency_mhz) * MM_PER_M


def ml_from_mm3(volume_mm3: float) -> float:
    """Volume [mm³] as [ml]."""
    return volume_mm3 / 1000.0


def g_from_mm3(volume_mm3: float, density_g_cm3: float) -> float:
    """Mass [g] of a volume [mm³] at a density [g/cm³]."""
    return volume_mm3 * density_g_cm3 / 1000.0
