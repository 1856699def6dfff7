"""Limits of exposure to radio fields, as power density of a plane wave; sources stand in the table's rows."""

from __future__ import annotations

import csv
import re
from dataclasses import dataclass
from functools import cache
from importlib.resources import files

from boomwright.errors import CatalogueError
from boomwright.units import hz_from_mhz

_LAW = re.compile(
    r"(?:(?P<times>[0-9.]+)\*)?f_(?P<unit>[mg])hz(?:\^(?P<power>[0-9.]+))?(?:/(?P<by>[0-9.]+))?$"
    r"|(?P<over>[0-9.]+)/f_(?P<over_unit>[mg])hz(?:\^(?P<over_power>[0-9.]+))?$"
    r"|(?P<constant>[0-9.]+)$"
)
_UNIT_MHZ = {"m": 1.0, "g": 1000.0}


@dataclass(frozen=True)
class ExposureLimit:
    """One row: who set it, for whom, over which frequencies [MHz], as factor x (f / unit)^power [W/m²].

    averaging   over which time exposure is averaged, in words
    """

    guideline: str
    population: str
    low_mhz: float
    high_mhz: float
    factor_w_m2: float
    power: float
    unit_mhz: float
    averaging: str
    source: str
    provenance: str

    def holds_at(self, frequency_mhz: float) -> bool:
        """Whether the row is stated for a frequency [MHz]; its lower end belongs to the row below."""
        return self.low_mhz < frequency_mhz <= self.high_mhz

    def power_density_w_m2(self, frequency_mhz: float) -> float:
        """The limit at a frequency [MHz]; raises CatalogueError where the row does not hold."""
        if not self.holds_at(frequency_mhz):
            raise CatalogueError(f"{self.guideline}, {self.population}: no limit stated at {frequency_mhz:g} MHz")
        return self.factor_w_m2 * float((frequency_mhz / self.unit_mhz) ** self.power)

    @property
    def span_hz(self) -> tuple[float, float]:
        """From and to [Hz]."""
        return hz_from_mhz(self.low_mhz), hz_from_mhz(self.high_mhz)


@cache
def exposure_limits() -> tuple[ExposureLimit, ...]:
    """Every row, in the table's order."""
    text = (files("boomwright.data") / "exposure.csv").read_text(encoding="utf-8")
    return tuple(_limit(row) for row in csv.DictReader(text.splitlines()))


def limits_at(frequency_mhz: float) -> tuple[ExposureLimit, ...]:
    """The rows that are stated for a frequency [MHz], one a guideline and population."""
    return tuple(limit for limit in exposure_limits() if limit.holds_at(frequency_mhz))


def _limit(row: dict[str, str]) -> ExposureLimit:
    factor, power, unit_mhz = _law(row["power_density_w_m2"])
    return ExposureLimit(
        row["guideline"],
        row["population"],
        float(row["low_mhz"]),
        float(row["high_mhz"]),
        factor,
        power,
        unit_mhz,
        row["averaging"],
        row["source"],
        row["provenance"],
    )


def _law(text: str) -> tuple[float, float, float]:
    """Factor, power and unit [MHz] of `40`, `f_mhz/200`, `0.058*f_mhz^0.86` or `55/f_ghz^0.177`."""
    found = _LAW.match(text)
    if found is None:
        raise CatalogueError(f"exposure.csv: {text!r} is no limit")
    if found["constant"]:
        return float(found["constant"]), 0.0, 1.0
    if found["over"]:
        return float(found["over"]), -float(found["over_power"] or 1.0), _UNIT_MHZ[found["over_unit"]]
    factor = float(found["times"] or 1.0) / float(found["by"] or 1.0)
    return factor, float(found["power"] or 1.0), _UNIT_MHZ[found["unit"]]
