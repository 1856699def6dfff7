"""The electrical read-back: the antenna that a file shows, solved and held against the antenna of the design.

Places, heights, lengths and diameters come from the file alone; the design says what each conductor is made of, which
form the driven element has, and in what system it is judged.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from dataclasses import dataclass, replace
from typing import Any

from boomwright.design.model import Design, Driven
from boomwright.errors import InputFault, MeasureError
from boomwright.pieces import Probe
from boomwright.prediction import band_points_mhz, solve_apart, sweep_frequencies_mhz
from boomwright.rf.conductors import Wires
from boomwright.rf.feed import vswr
from boomwright.rf.solve import Solution
from boomwright.rf.wires import FED_TAG, wires_of
from boomwright.units import m_from_mm

FILE = "antenna.step"
GAIN_ALLOWED_DB = 0.02
VSWR_ALLOWED = 0.02
ASIDE_ALLOWED_MM = 0.01
"""A conductor further off the middle plane, or tilted by more, is not what the equations are for."""
DIGITS = 6
"""Decimals of a measured size [mm]: a nanometre is the kernel's noise."""

Measure = Callable[[Probe], float]


@dataclass(frozen=True)
class Comparison:
    """One figure at one frequency: of the design, and of what the file shows."""

    what: str
    design: float
    from_file: float
    allowed: float
    unit: str

    @property
    def ok(self) -> bool:
        """Whether they are near enough."""
        return abs(self.from_file - self.design) <= self.allowed


@dataclass(frozen=True)
class Electrical:
    """What the read-back found.

    comparisons  gain and VSWR at the band's edges and centre; none when it could not be done
    summary      gain at the centre [dBi] and highest VSWR, each of the design and from the file
    reason       why it could not be done, empty when it was
    """

    comparisons: tuple[Comparison, ...]
    summary: Mapping[str, Mapping[str, float | None]]
    reason: str = ""

    @property
    def ok(self) -> bool:
        """Whether every figure of the file is near enough to the design's."""
        return not self.reason and all(each.ok for each in self.comparisons)

    def as_json(self) -> dict[str, Any]:
        """The read-back as the report writes it."""
        found: dict[str, Any] = {name: dict(values) for name, values in self.summary.items()}
        return found | {"ok": self.ok} | ({"reason": self.reason} if self.reason else {})


def read_back(design: Design, measure: Measure) -> Electrical:
    """Solve what a file shows and what the design asks for, at the band's edges and centre.

    measure  takes one quantity off the file; may raise MeasureError
    """
    nothing = {"gain_dbi": {"design": None, "from_file": None}, "vswr_max": {"design": None, "from_file": None}}
    marks, highest_mhz = band_points_mhz(design), sweep_frequencies_mhz(design)[-1]
    try:
        wires = recovered_wires(design, measure)
        wanted = solve_apart(wires_of(design), marks, highest_mhz)
        found = solve_apart(wires, marks, highest_mhz)
    except (MeasureError, InputFault) as error:
        return Electrical((), nothing, " ".join(str(error).split("\n")[0].split()))
    return _compared(design, wanted, found)


def recovered_wires(design: Design, measure: Measure) -> Wires:
    """The conductors as a file shows them. Raises MeasureError for one that is missing or stands aside."""
    heights_mm: dict[str, float] = {}
    rods = []
    for rod in design.rods:
        take = _taker(measure, "rod", rod.tag)
        for quantity in ("offset_y_mm", "tilt_mm"):
            if abs(take(quantity)) > ASIDE_ALLOWED_MM:
                what = quantity.removesuffix("_mm").replace("offset_y", "offset from the middle plane")
                raise MeasureError(f"{rod.tag}: {what} is {take(quantity):g} mm; the equations take upright rods only")
        at_mm, length_mm, diameter_mm = take("at_mm"), take("length_mm"), take("diameter_mm")
        rods.append(replace(rod, at_mm=at_mm, length_mm=length_mm, diameter_mm=diameter_mm))
        heights_mm[rod.tag] = take("height_mm")
    driven, heights_mm[FED_TAG] = _driven(design.driven, _taker(measure, "driven", FED_TAG))
    wires = wires_of(replace(design, rods=tuple(rods), driven=driven))
    return Wires(
        tuple(replace(conductor, height_m=m_from_mm(heights_mm[conductor.tag])) for conductor in wires.conductors)
    )


def _taker(measure: Measure, kind: str, tag: str) -> Callable[[str], float]:
    return lambda quantity: round(measure(Probe(kind, {"name": tag, "quantity": quantity})), DIGITS) + 0.0


def _driven(driven: Driven, take: Callable[[str], float]) -> tuple[Driven, float]:
    """The driven element as the file shows it, and the height of its axis, of a loop that of its middle [mm]."""
    diameter_mm = take("diameter_mm")
    seen = replace(driven, at_mm=take("at_mm"), diameter_mm=diameter_mm, gap_mm=take("gap_mm"))
    height_mm = take("height_mm")
    if driven.form == "straight":
        return replace(seen, length_mm=take("length_mm")), height_mm
    if driven.form == "folded":
        spacing_mm = take("spacing_mm")
        bend_mm = _bend(take("bend_radius_mm"), (spacing_mm - diameter_mm) / 2.0)
        upright = take("extent_z_mm") > diameter_mm + spacing_mm / 2.0
        seen = replace(seen, plane="upright" if upright else "flat", length_mm=take("length_mm"))
        return replace(seen, spacing_mm=spacing_mm, bend_radius_mm=bend_mm), height_mm
    perimeter_mm = take("perimeter_mm")
    if driven.shape == "square":
        bend_mm = _bend(take("bend_radius_mm"), 2.0 * diameter_mm)
        middle_mm = round(height_mm + take("spacing_mm") / 2.0, DIGITS)
        return replace(seen, perimeter_mm=perimeter_mm, bend_radius_mm=bend_mm), middle_mm
    radius_mm = perimeter_mm / (2.0 * math.pi)
    # The gap counts along the arc; a file shows the chord between the conductor's ends.
    gap_mm = round(2.0 * radius_mm * math.asin(min(seen.gap_mm / (2.0 * radius_mm), 1.0)), DIGITS)
    return replace(seen, perimeter_mm=perimeter_mm, gap_mm=gap_mm), round(height_mm + radius_mm, DIGITS - 1)


def _bend(measured_mm: float, default_mm: float) -> float | None:
    """An inside radius, None where it is the one that a design has without naming it."""
    return None if abs(measured_mm - default_mm) < 10.0**-DIGITS * 5.0 else measured_mm


def _compared(design: Design, wanted: tuple[Solution, ...], found: tuple[Solution, ...]) -> Electrical:
    marks, ohm = band_points_mhz(design), design.feed.system_ohm
    gains = [[solution.gain_dbi for solution in side] for side in (wanted, found)]
    ratios = [[vswr(solution.impedance_ohm, ohm) for solution in side] for side in (wanted, found)]
    comparisons = []
    for what, sides, allowed, unit in (
        ("gain", gains, GAIN_ALLOWED_DB, "dBi"),
        ("VSWR", ratios, VSWR_ALLOWED, ""),
    ):
        for mark, design_value, file_value in zip(marks, *sides, strict=True):
            what_where = f"{what} at {mark:g} MHz of the conductors read back"
            comparisons.append(Comparison(what_where, design_value, file_value, allowed, unit))
    middle = marks.index(design.band.centre_mhz)
    summary = {
        "gain_dbi": {"design": gains[0][middle], "from_file": gains[1][middle]},
        "vswr_max": {"design": max(ratios[0]), "from_file": max(ratios[1])},
    }
    rounded = {name: {side: round(value, DIGITS) for side, value in pair.items()} for name, pair in summary.items()}
    return Electrical(tuple(comparisons), rounded)
