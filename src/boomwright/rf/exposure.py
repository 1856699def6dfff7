"""How far away the field of an antenna falls to an exposure limit, by the far-field formula, and where that holds.

The formula takes the whole radiated power as if it left from one point: nearer than the far field it overstates the
beam's power density, in the reactive near field it says nothing. It is an estimate; local rules decide.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Literal

from boomwright.data.exposure import ExposureLimit, limits_at
from boomwright.units import SPEED_OF_LIGHT_M_S

GROUND_REFLECTION = 2.56
"""Field 1.6 times that in free space, the power density its square [Cleveland1997] eq. 6."""

Region = Literal["reactive near field", "radiating near field", "far field"]


@dataclass(frozen=True)
class Source:
    """What radiates: EIRP [W], share of the time on the air (0 to 1), band [Hz], largest size of the antenna [m]."""

    eirp_w: float
    duty: float
    band_hz: tuple[float, float]
    size_m: float


@dataclass(frozen=True)
class Distance:
    """How far to stay from a source under one limit.

    limit_w_m2       the limit, the lowest in the band
    free_m           where a free field falls to it, by the formula alone
    ground_m         the same with the ground's reflection added
    region           where `free_m` lies
    stated_m         what to keep: `ground_m`, never inside the reactive near field
    """

    limit: ExposureLimit
    limit_w_m2: float
    free_m: float
    ground_m: float
    region: Region
    stated_m: float


def eirp_w(power_w: float, gain_dbi: float) -> float:
    """Equivalent isotropically radiated power [W] of a power at the feed [W] and a gain [dBi], mismatch out."""
    return float(power_w * 10.0 ** (gain_dbi / 10.0))


def power_density_w_m2(source: Source, distance_m: float, reflection: float = 1.0) -> float:
    """Mean power density in the beam [W/m²]: S = reflection x EIRP x duty / (4 pi r^2).

    source       what radiates
    distance_m   from the antenna [m], above 0; the far field is taken
    reflection   factor on the power density: 1 = free space, `GROUND_REFLECTION` = with the ground's

    [Cleveland1997] eq. 4 and 6.
    """
    return reflection * source.eirp_w * source.duty / (4.0 * math.pi * distance_m**2)


def distance_m(source: Source, limit_w_m2: float, reflection: float = 1.0) -> float:
    """Distance [m] where the mean power density falls to a limit [W/m²], above 0: `power_density_w_m2` turned round."""
    return math.sqrt(reflection * source.eirp_w * source.duty / (4.0 * math.pi * limit_w_m2))


def reactive_m(source: Source) -> float:
    """Reach of the reactive near field [m]: lambda / 2 pi at the lowest frequency. [Balanis2016] sec. 4.2."""
    return SPEED_OF_LIGHT_M_S / source.band_hz[0] / (2.0 * math.pi)


def far_field_m(source: Source) -> float:
    """Where the far field begins [m]: 2 D^2 / lambda at the highest frequency, not nearer than lambda / 2 pi.

    [Balanis2016] sec. 2.2.4.
    """
    return max(2.0 * source.size_m**2 * source.band_hz[1] / SPEED_OF_LIGHT_M_S, reactive_m(source))


def distances(source: Source) -> tuple[Distance, ...]:
    """A distance for every guideline and population with a limit over the whole band; none where none is stated."""
    low_mhz, high_mhz = (value / 1e6 for value in source.band_hz)
    found = []
    for limit in limits_at(low_mhz):
        upper = [one for one in limits_at(high_mhz) if _same(one, limit)]
        if not upper:
            continue
        # Between its corners every limit only rises or only falls, and the rows join: the lowest is at an end.
        lowest = min(limit.power_density_w_m2(low_mhz), upper[0].power_density_w_m2(high_mhz))
        free, ground = distance_m(source, lowest), distance_m(source, lowest, GROUND_REFLECTION)
        found.append(Distance(limit, lowest, free, ground, region(source, free), max(ground, reactive_m(source))))
    return tuple(found)


def region(source: Source, at_m: float) -> Region:
    """Which field stands at a distance [m]."""
    if at_m < reactive_m(source):
        return "reactive near field"
    return "radiating near field" if at_m < far_field_m(source) else "far field"


def _same(one: ExposureLimit, other: ExposureLimit) -> bool:
    return (one.guideline, one.population) == (other.guideline, other.population)
