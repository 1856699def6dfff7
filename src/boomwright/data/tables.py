"""The tables the program ships, as typed rows: materials, conductors, cables, gauges, tolerances, threads.

Each CSV file beside this module keeps its `source` and `provenance` columns: `seen` in a printed copy, `memory` for a
value recalled from the source, `computed` from the closed form named there.
"""

from __future__ import annotations

import csv
import math
import re
from dataclasses import dataclass
from functools import cache
from importlib.resources import files
from typing import Literal

from boomwright.errors import CatalogueError
from boomwright.registry import Catalogue

Grade = Literal["fine", "medium", "coarse", "very coarse"]
ItGrade = Literal["IT6", "IT7", "IT8", "IT9", "IT10", "IT11", "IT12", "IT13", "IT14"]
Span = tuple[float, float]

IDEAL = "ideal"
"""Name of the perfect conductor: no loss and no mass."""


@dataclass(frozen=True)
class Material:
    """A material as working ranges (low, high); None where the property means nothing, as for a metal."""

    name: str
    permittivity: Span | None
    loss_tangent: Span | None
    density_g_cm3: Span
    heat_deflection_c: Span | None
    source: str
    provenance: str


@dataclass(frozen=True)
class Conductor:
    """A metal's conductivity at room temperature [S/m]; infinite for the perfect conductor."""

    name: str
    conductivity_s_m: float
    source: str
    provenance: str


@dataclass(frozen=True)
class Cable:
    """A coaxial cable: impedance [ohm], diameters over jacket, dielectric and centre [mm], velocity factor."""

    name: str
    impedance_ohm: float
    outer_diameter_mm: float
    dielectric_diameter_mm: float
    centre_diameter_mm: float
    velocity_factor: float
    source: str
    provenance: str


@dataclass(frozen=True)
class WireGauge:
    """One gauge of a wire system (AWG, SWG) and its bare diameter [mm]."""

    system: str
    gauge: int
    diameter_mm: float
    source: str
    provenance: str


@dataclass(frozen=True)
class Thread:
    """A metric coarse thread: clearance holes fine, medium, coarse [mm], pitch [mm], tapping drill [mm]."""

    name: str
    clearance_fine_mm: float
    clearance_medium_mm: float
    clearance_coarse_mm: float
    pitch_mm: float
    tap_drill_mm: float
    source: str
    provenance: str


@dataclass(frozen=True)
class RefusedSheet:
    """A sheet material no laser cutter should cut, and why; `also` are the trade's other names for it."""

    name: str
    also: tuple[str, ...]
    reason: str
    source: str
    provenance: str


@cache
def materials() -> Catalogue[Material]:
    """Every material by name, metals included."""
    catalogue: Catalogue[Material] = Catalogue("material")
    for row in _rows("materials.csv"):
        density = _span(row, "density_low_g_cm3", "density_high_g_cm3")
        if density is None:
            raise CatalogueError(f"materials.csv: {row['material']} has no density")
        catalogue.enter(
            row["material"],
            Material(
                row["material"],
                _span(row, "permittivity_low", "permittivity_high"),
                _span(row, "loss_tangent_low", "loss_tangent_high"),
                density,
                _span(row, "heat_deflection_low_c", "heat_deflection_high_c"),
                row["source"],
                row["provenance"],
            ),
        )
    return catalogue


@cache
def conductors() -> Catalogue[Conductor]:
    """Every conductor a rod may be made of, by name, the perfect one (`ideal`) last."""
    catalogue: Catalogue[Conductor] = Catalogue("conductor")
    for row in _rows("conductors.csv"):
        conductivity_s_m = float(row["conductivity_s_m"])
        catalogue.enter(row["metal"], Conductor(row["metal"], conductivity_s_m, row["source"], row["provenance"]))
    catalogue.enter(IDEAL, Conductor(IDEAL, math.inf, "definition", "computed"))
    return catalogue


@cache
def cables() -> Catalogue[Cable]:
    """Every coaxial cable by name."""
    catalogue: Catalogue[Cable] = Catalogue("cable")
    for row in _rows("cables.csv"):
        catalogue.enter(
            row["cable"],
            Cable(
                row["cable"],
                float(row["impedance_ohm"]),
                float(row["outer_diameter_mm"]),
                float(row["dielectric_diameter_mm"]),
                float(row["centre_diameter_mm"]),
                float(row["velocity_factor"]),
                row["source"],
                row["provenance"],
            ),
        )
    return catalogue


@cache
def wire_gauges() -> tuple[WireGauge, ...]:
    """Every wire gauge, thickest first within its system."""
    return tuple(
        WireGauge(row["system"], int(row["gauge"]), float(row["diameter_mm"]), row["source"], row["provenance"])
        for row in _rows("wire_gauges.csv")
    )


@cache
def threads() -> Catalogue[Thread]:
    """Every metric thread by name (`M3`)."""
    catalogue: Catalogue[Thread] = Catalogue("thread")
    for row in _rows("metric_threads.csv"):
        catalogue.enter(
            row["thread"],
            Thread(
                row["thread"],
                float(row["clearance_fine_mm"]),
                float(row["clearance_medium_mm"]),
                float(row["clearance_coarse_mm"]),
                float(row["pitch_mm"]),
                float(row["tap_drill_mm"]),
                row["source"],
                row["provenance"],
            ),
        )
    return catalogue


@cache
def refused_sheets() -> tuple[RefusedSheet, ...]:
    """Every sheet material that workshops' laser rules refuse."""
    return tuple(
        RefusedSheet(
            row["material"],
            tuple(name.strip() for name in row["also"].split(";")),
            row["reason"],
            row["source"],
            row["provenance"],
        )
        for row in _rows("laser_refused.csv")
    )


def refused_sheet(material: str) -> RefusedSheet | None:
    """The refusal that a sheet's name falls under ("clear pvc sheet" is PVC), None when it may be cut.

    Names go by whole words, whatever stands between them, and include those of `RefusedSheet.also` (common practice).
    """
    words = _words(material)
    return next((s for s in refused_sheets() if any(_words(name) in words for name in (s.name, *s.also))), None)


def _words(name: str) -> str:
    return f" {' '.join(re.split(r'[^0-9a-z]+', name.lower()))} "


def general_tolerance_mm(length_mm: float, grade: Grade = "fine") -> float:
    """General tolerance of a length without its own, as plus and minus [mm].

    length_mm  nominal length [mm], 0.5 to 4000
    grade      fine (f), medium (m), coarse (c) or very coarse (v)

    Returns the deviation allowed on either side [mm]. Raises CatalogueError for a length or a grade without one.
    Source: [ISO 2768-1] table 1.
    """
    column = f"{grade.replace(' ', '_')}_mm"
    for index, row in enumerate(_rows("general_tolerances.csv")):
        low_mm, high_mm = float(row["over_mm"]), float(row["to_mm"])
        inside = low_mm <= length_mm <= high_mm if index == 0 else low_mm < length_mm <= high_mm
        if inside and row.get(column):
            return float(row[column])
    raise CatalogueError(f"no {grade} general tolerance for {length_mm:g} mm (ISO 2768-1: 0.5 to 4000 mm)")


def it_tolerance_um(size_mm: float, grade: ItGrade) -> float:
    """Width of a standard tolerance grade [µm].

    size_mm  nominal size [mm], above 0 to 315
    grade    IT6 to IT14

    Raises CatalogueError outside the table. Source: [ISO 286-1] table 1.
    """
    for row in _rows("it_grades.csv"):
        if float(row["over_mm"]) < size_mm <= float(row["to_mm"]):
            width = row.get(f"{grade}_um")
            if width:
                return float(width)
    raise CatalogueError(f"no {grade} tolerance for {size_mm:g} mm (ISO 286-1, above 0 to 315 mm)")


def density_g_cm3(material: str) -> float:
    """Middle of a material's density range [g/cm³]; 0 for the perfect conductor. Raises CatalogueError."""
    if material == IDEAL:
        return 0.0
    low, high = materials()[material].density_g_cm3
    return (low + high) / 2.0


def conductor_names() -> tuple[str, ...]:
    """What a rod or a driven element may be made of."""
    return conductors().names()


def material_names() -> tuple[str, ...]:
    """Every material of the table."""
    return materials().names()


def boom_material_names() -> tuple[str, ...]:
    """What a boom may be made of: every material, and every conductor."""
    return tuple(dict.fromkeys((*material_names(), *conductor_names())))


def cable_names() -> tuple[str, ...]:
    """Every cable of the table."""
    return cables().names()


@cache
def _rows(name: str) -> tuple[dict[str, str], ...]:
    text = (files("boomwright.data") / name).read_text(encoding="utf-8")
    return tuple(csv.DictReader(text.splitlines()))


def _span(row: dict[str, str], low: str, high: str) -> Span | None:
    return (float(row[low]), float(row[high])) if row[low] else None
