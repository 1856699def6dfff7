"""Published arrays as starts: measured lengths and spacings of NBS Technical Note 688 [Viezbicke1976]."""

from __future__ import annotations

import csv
from dataclasses import dataclass
from functools import cache
from importlib.resources import files

import numpy as np

from boomwright.rf.arrays import Floats
from boomwright.rf.conductors import Rod, Wires
from boomwright.rf.solve import solve_at
from boomwright.units import SPEED_OF_LIGHT_M_S

DIAMETER_WL = 0.0085
"""Diameter of the published elements [wavelengths]."""

REFLECTOR_SPACING_WL = 0.2


@dataclass(frozen=True)
class PublishedArray:
    """A row of the table: everything in wavelengths; boom from reflector to last director."""

    boom_wl: float
    reflector_wl: float
    directors_wl: tuple[float, ...]
    director_spacing_wl: float
    source: str


@cache
def published_arrays() -> tuple[PublishedArray, ...]:
    """The table's rows, shortest boom first."""
    text = (files("boomwright.data") / "yagi_arrays.csv").read_text("utf-8")
    rows = [
        PublishedArray(
            float(row["boom_wl"]),
            float(row["reflector_wl"]),
            tuple(float(part) for part in row["directors_wl"].split()),
            float(row["director_spacing_wl"]),
            f"{row['source']}, boom {row['boom_wl']} wavelengths",
        )
        for row in csv.DictReader(text.splitlines())
    ]
    return tuple(sorted(rows, key=lambda row: row.boom_wl))


@cache
def _solved_gain_dbi(row: int) -> float:
    """Gain of a row as printed, at the frequency whose wavelength is a metre, driven element of its own diameter."""
    array = published_arrays()[row]
    spacing, radius_m = array.director_spacing_wl, DIAMETER_WL / 2.0
    rods = [Rod("R", -REFLECTOR_SPACING_WL, array.reflector_wl, radius_m), Rod("DE", 0.0, 0.47, radius_m, gap_m=0.01)]
    rods += [Rod(f"D{n}", n * spacing, length, radius_m) for n, length in enumerate(array.directors_wl, start=1)]
    return solve_at(Wires(tuple(rods)), SPEED_OF_LIGHT_M_S).gain_dbi


def published_gain_dbi(boom_wl: float) -> float:
    """Gain of the published array of a boom [wavelengths], between rows in proportion; beyond them the last row's."""
    rows = published_arrays()
    booms = [row.boom_wl for row in rows]
    upper = next((n for n, boom in enumerate(booms) if boom >= boom_wl), len(rows) - 1)
    lower = max(upper - 1, 0) if booms[upper] > boom_wl else upper
    pair = [_solved_gain_dbi(lower), _solved_gain_dbi(upper)]
    return float(np.interp(boom_wl, [booms[lower], booms[upper]], pair)) if lower != upper else pair[0]


@dataclass(frozen=True)
class Start:
    """An array between the table's rows, in wavelengths at the table's diameter: reflector, directors, places.

    places_wl of reflector, driven element, directors; lengths_wl of reflector and directors
    """

    lengths_wl: Floats
    places_wl: Floats
    source: str


def start_of(boom_wl: float, directors: int) -> Start:
    """A start for a boom [wavelengths] with a number of directors, interpolated between the rows beside it."""
    rows = published_arrays()
    booms = np.array([row.boom_wl for row in rows])
    upper = int(np.clip(np.searchsorted(booms, boom_wl), 1, len(rows) - 1))
    pair = rows[upper - 1], rows[upper]
    share = float(np.clip((boom_wl - booms[upper - 1]) / (booms[upper] - booms[upper - 1]), 0.0, 1.0))
    along = np.linspace(0.0, 1.0, directors)
    tapers = [np.interp(along, np.linspace(0.0, 1.0, len(row.directors_wl)), row.directors_wl) for row in pair]
    reflector = (1.0 - share) * pair[0].reflector_wl + share * pair[1].reflector_wl
    lengths = np.concatenate([[reflector], (1.0 - share) * tapers[0] + share * tapers[1]])
    reflector_gap = min(REFLECTOR_SPACING_WL, boom_wl / 2.0)
    ahead = reflector_gap + (boom_wl - reflector_gap) * np.arange(1, directors + 1) / max(directors, 1)
    used = [row.source for row, part in zip(pair, (1.0 - share, share), strict=True) if part > 0.0]
    return Start(lengths, np.concatenate([[0.0, reflector_gap], ahead]), "; ".join(used))
