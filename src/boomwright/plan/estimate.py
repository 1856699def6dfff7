"""Material and time of printed and sheet parts. Times are estimates from one stated rate, not a slicer's."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass

from boomwright.data.tables import density_g_cm3, materials
from boomwright.plan.comb import CombPlan, CombSlot
from boomwright.shop.profile import Laser, Printer
from boomwright.units import g_from_mm3

MEAN_SPEED_MM_S = 40.0
"""Mean speed of the nozzle over a print, corners, travel and first layer counted (common practice: 30 to 60)."""

SPEED_SPAN = (0.7, 1.5)
"""Slowest and fastest of that common practice, as shares of the mean."""

FILAMENT_DENSITY_LEAST, FILAMENT_DENSITY_MOST = 1.0, 1.3
"""What ordinary filaments without fillers weigh [g/cm³] (common practice), for one that is not in the table."""


@dataclass(frozen=True)
class PrintEstimate:
    """One printed piece, taken as solid: its volume [mm³], mass [g] and time [h], each from and to."""

    stem: str
    volume_mm3: float
    mass_g: tuple[float, float]
    hours: tuple[float, float]


@dataclass(frozen=True)
class SheetEstimate:
    """One sheet part: its pieces' area [mm²], their number, and their mass [g], None for an unknown material."""

    stem: str
    pieces: int
    area_mm2: float
    mass_g: float | None


def rate_mm3_s(printer: Printer) -> float:
    """What a printer lays down [mm³/s]: nozzle x layer x mean speed."""
    return printer.nozzle_mm * printer.layer_mm * MEAN_SPEED_MM_S


def filament_density_g_cm3(material: str) -> tuple[float, float]:
    """Density of a filament, from and to [g/cm³]; of one that is not in the table the span of ordinary ones."""
    found = next((m for m in materials() if m.name.lower() == material.lower()), None)
    return found.density_g_cm3 if found else (FILAMENT_DENSITY_LEAST, FILAMENT_DENSITY_MOST)


def print_estimate(stem: str, volume_mm3: float, printer: Printer) -> PrintEstimate:
    """Mass and time of a printed piece of this volume [mm³], printed solid: less with a sparse filling."""
    low, high = filament_density_g_cm3(printer.material)
    hours = volume_mm3 / rate_mm3_s(printer) / 3600.0
    masses = g_from_mm3(volume_mm3, low), g_from_mm3(volume_mm3, high)
    return PrintEstimate(stem, volume_mm3, masses, (hours / SPEED_SPAN[1], hours / SPEED_SPAN[0]))


def print_estimates(volumes_mm3: Mapping[str, float], printer: Printer) -> tuple[PrintEstimate, ...]:
    """An estimate for every piece, by stem."""
    return tuple(print_estimate(stem, volume, printer) for stem, volume in sorted(volumes_mm3.items()))


def comb_estimate(comb: CombPlan, laser: Laser) -> SheetEstimate:
    """The spacing comb's plates, their slots taken off."""
    height = comb.top_mm - comb.bottom_mm
    area = 0.0
    for section in comb.sections:
        area += (section.end_mm - section.start_mm) * height - sum(_slot_mm2(s, comb) for s in section.slots)
    return sheet_estimate("spacing-comb", len(comb.sections), area, laser)


def sheet_estimate(stem: str, pieces: int, area_mm2: float, laser: Laser) -> SheetEstimate:
    """A sheet part of this area [mm²] in the shop's sheet."""
    known = any(material.name == laser.material for material in materials())
    mass = g_from_mm3(area_mm2 * laser.sheet_mm, density_g_cm3(laser.material)) if known else None
    return SheetEstimate(stem, pieces, area_mm2, mass)


def _slot_mm2(slot: CombSlot, comb: CombPlan) -> float:
    """From the plate's lower edge to the slot's end, which is a half circle for a lone conductor."""
    whole = slot.width_mm * (slot.end_mm - comb.bottom_mm)
    return whole - (2.0 - math.pi / 2.0) * (slot.width_mm / 2.0) ** 2 if slot.is_round else whole
