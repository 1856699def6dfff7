"""The spec: what the finished antenna must do over the whole band, held against what it is predicted to do."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from boomwright.design.model import Design


@dataclass(frozen=True)
class Shortfall:
    """One figure of the spec that is not met.

    key            the spec's key in the design file
    what           the figure in words, with its value and unit
    frequency_mhz  where in the band it is worst [MHz]
    value, wanted  the figure there, and the spec's bound
    unit           of both; empty = a ratio
    """

    key: str
    what: str
    frequency_mhz: float
    value: float
    wanted: float
    unit: str

    def __str__(self) -> str:
        side = "below" if self.value < self.wanted else "above"
        value, wanted = (f"{number:.4g} {self.unit}".rstrip() for number in (self.value, self.wanted))
        apart = f"{abs(self.value - self.wanted):.2g} {self.unit.removesuffix('i')}".rstrip()
        return f"spec.{self.key}: {self.what} is {value} at {self.frequency_mhz:g} MHz, {apart} {side} {wanted}"


def shortfalls(
    design: Design,
    frequency_mhz: Sequence[float],
    gain_dbi: Sequence[float],
    front_to_back_db: Sequence[float],
    vswr: Sequence[float],
) -> tuple[Shortfall, ...]:
    """What of a design's spec is not met at those of the frequencies that lie in its band; nothing without a spec.

    frequency_mhz     [MHz], (F,)
    gain_dbi          [dBi], (F,)
    front_to_back_db  [dB], (F,)
    vswr              at least 1, (F,)

    One Shortfall a figure, where it is worst.
    """
    spec = design.spec
    inside = [i for i, f in enumerate(frequency_mhz) if design.band.low_mhz <= f <= design.band.high_mhz]
    if spec is None or not inside:
        return ()
    found = []
    for key, what, wanted, values, unit, sense in (
        ("gain_dbi_min", "gain", spec.gain_dbi_min, gain_dbi, "dBi", 1.0),
        ("front_to_back_db_min", "front-to-back", spec.front_to_back_db_min, front_to_back_db, "dB", 1.0),
        ("vswr_max", "VSWR", spec.vswr_max, vswr, "", -1.0),
    ):
        worst = min(inside, key=lambda i: sense * values[i])
        if wanted is not None and sense * values[worst] < sense * wanted:
            found.append(Shortfall(key, what, frequency_mhz[worst], float(values[worst]), wanted, unit))
    return tuple(found)
