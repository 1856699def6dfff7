"""A proven design carried to another band and other stock: scaled, rods made as reactive as they were, trimmed."""

from __future__ import annotations

import json
import math
from dataclasses import dataclass, replace

import numpy as np

from boomwright.design.model import Design
from boomwright.design.rules import check_design
from boomwright.design.tomlfile import LEAST_MHZ, MOST_MHZ
from boomwright.errors import Fault, InputFault
from boomwright.prediction import Prediction, predict
from boomwright.rf.arrays import Floats
from boomwright.search.carry import RodChange, Target, carried, on_steps
from boomwright.search.limits import build_faults, least_room_mm
from boomwright.search.tries import Progress
from boomwright.search.trim import Keep, trimmed
from boomwright.shop.profile import Shop
from boomwright.spec import Shortfall
from boomwright.units import wavelength_mm

SAMPLES = 3
VSWR_MOST = 1.5
"""A carried design is matched at least as well as this, or as its spec asks."""

MARGINS = (0.1, 0.2, 0.3)
SPEC_SPARE_DB = 0.1
MOST_ROD_WL, MOST_WIDTH_WL = 0.08, 0.25


@dataclass(frozen=True)
class Rescaled:
    """What `rescale` made.

    design         carried, trimmed, as cut
    before, after  predictions over the old and the new band
    rods           what became of each rod before trimming
    unbuilt        why this shop could not make parts of it, empty when it can
    """

    design: Design
    before: Prediction
    after: Prediction
    rods: tuple[RodChange, ...]
    unbuilt: tuple[Fault, ...]

    @property
    def shortfalls(self) -> tuple[Shortfall, ...]:
        """What of the spec is not met over the new band."""
        return self.after.shortfalls

    @property
    def lines(self) -> list[str]:
        """Before and after, and what became of the rods, in words."""
        found = [f"before: {self.before.band_line}", f"after:  {self.after.band_line}"]
        for change, rod in zip(self.rods, self.design.rods, strict=True):
            found.append(
                f"{change.tag}: {change.scaled_mm:.2f} mm scaled, {change.length_mm:.2f} with "
                f"{change.reactance_ohm:.1f} ohm of its own at {change.diameter_mm:g} mm, {rod.length_mm:g} trimmed"
            )
        found += [f"this shop cannot make it as it stands: {fault}" for fault in self.unbuilt]
        return found

    def as_json(self) -> str:
        """Before and after as one JSON document."""
        document = {
            "name": self.design.name,
            "before": worst_figures(self.before),
            "after": worst_figures(self.after),
            "rods": [
                {
                    "tag": change.tag,
                    "scaled_mm": round(change.scaled_mm, 4),
                    "own_reactance_ohm": round(change.reactance_ohm, 4),
                    "corrected_mm": round(change.length_mm, 4),
                    "length_mm": rod.length_mm,
                    "diameter_mm": rod.diameter_mm,
                }
                for change, rod in zip(self.rods, self.design.rods, strict=True)
            ],
            "not_met": [str(each) for each in self.shortfalls],
            "not_buildable": [str(each) for each in self.unbuilt],
        }
        return json.dumps(document, indent=1, ensure_ascii=True, allow_nan=False) + "\n"


def worst_figures(prediction: Prediction) -> dict[str, float]:
    """The worst figures over the band, and the band."""
    inside, found = list(prediction.in_band), prediction.sweep
    return {
        "low_mhz": prediction.design.band.low_mhz,
        "high_mhz": prediction.design.band.high_mhz,
        "gain_dbi": round(float(found.gain_dbi[inside].min()), 4),
        "front_to_back_db": round(float(found.front_to_back_db[inside].min()), 4),
        "vswr_max": round(float(found.vswr[inside].max()), 4),
    }


def rescale(
    design: Design, target: Target, shop: Shop | None = None, progress: Progress = lambda step: None
) -> Rescaled:
    """Carry a design to another frequency and stock.

    design    proven at its own band
    target    the new centre frequency [MHz], rods and boom
    shop      whose machines and shelf it must suit, None = the built-in shop
    progress  called with a word or two before each step

    Raises InputFault with everything wrong in the target, DesignFault where it cannot be done.
    """
    check_target(target)
    shop = shop or Shop()
    before = predict(design)
    moved, changes = carried(design, target, shop)
    room = least_room_mm(moved, shop) if moved.boom is not None else (0.0, 0.0)
    moved = _cleared(moved, room)
    best: tuple[float, Design, Prediction] | None = None
    for margin in MARGINS:
        progress("trimming")
        keep = _keep(design, moved, margin, room)
        new = on_steps(trimmed(moved, keep))
        check_design(new)
        after = predict(new)
        over = _over(new, before, after)
        if best is None or over < best[0]:
            best = over, new, after
        if over <= 0.0:
            break
    assert best is not None
    unbuilt = build_faults(best[1], shop) if best[1].boom is not None else ()
    return Rescaled(best[1], before, best[2], changes, unbuilt)


def check_target(target: Target) -> None:
    """Raises InputFault with everything wrong in a target."""
    faults, mhz = [], target.to_mhz
    if not (math.isfinite(mhz) and LEAST_MHZ <= mhz <= MOST_MHZ):
        fix = f"give {LEAST_MHZ:g} to {MOST_MHZ:g} MHz"
        raise InputFault([Fault("--to-mhz", f"{mhz:g} is not a frequency in use", fix)])
    wave = wavelength_mm(mhz)
    for option, value, most_wl in (
        ("--rod-mm", target.rod_mm, MOST_ROD_WL),
        ("--boom-width-mm", target.boom_width_mm, MOST_WIDTH_WL),
    ):
        if value is not None and not (math.isfinite(value) and 0.0 < value <= most_wl * wave):
            fix = f"give millimetres above 0, at most {most_wl * wave:.3g} ({most_wl:g} wavelengths)"
            faults.append(Fault(option, f"{value:g} does not suit {mhz:g} MHz", fix))
    if faults:
        raise InputFault(faults)


def _samples_mhz(design: Design) -> tuple[float, ...]:
    band = design.band
    return tuple(float(value) for value in np.linspace(band.low_mhz, band.high_mhz, SAMPLES))


def _keep(design: Design, moved: Design, margin: float, room: tuple[float, float]) -> Keep:
    """What trimming holds to: the old figures at the same places of the band, the spec with a little to spare."""
    old = predict(design, _samples_mhz(design)).sweep
    spec = design.spec
    gain: Floats = old.gain_dbi
    ratio: Floats = np.minimum(old.front_to_back_db, 25.0)
    most = VSWR_MOST
    if spec is not None:
        most = min(most, spec.vswr_max or most)
        gain = np.maximum(gain, (spec.gain_dbi_min or -math.inf) + SPEC_SPARE_DB)
        ratio = np.maximum(ratio, (spec.front_to_back_db_min or -math.inf) + 1.0 + SPEC_SPARE_DB)
    return Keep(_samples_mhz(moved), gain, ratio, 1.0 + (1.0 - margin) * (most - 1.0), room)


def _over(design: Design, before: Prediction, after: Prediction) -> float:
    """By how much the carried design misses: VSWR over its bound, gain lost beyond a tenth of a decibel."""
    was, now = worst_figures(before), worst_figures(after)
    most = min(VSWR_MOST, design.spec.vswr_max or VSWR_MOST) if design.spec is not None else VSWR_MOST
    lost = was["gain_dbi"] - 0.1 - now["gain_dbi"]
    return max(now["vswr_max"] - most, lost, 1.0 if after.shortfalls else 0.0)


def _cleared(design: Design, room_mm: tuple[float, float]) -> Design:
    """The design with its neighbours no nearer to the driven element than its mould allows."""
    behind = [rod.at_mm for rod in design.rods if rod.at_mm < design.driven.at_mm]
    ahead = [rod.at_mm for rod in design.rods if rod.at_mm > design.driven.at_mm]
    at = design.driven.at_mm
    if behind:
        at = max(at, max(behind) + room_mm[0])
    rods = design.rods
    if ahead and min(ahead) < at + room_mm[1]:
        shift = at + room_mm[1] - min(ahead)
        rods = tuple(replace(r, at_mm=r.at_mm + shift) if r.at_mm > design.driven.at_mm else r for r in rods)
    return replace(design, rods=rods, driven=replace(design.driven, at_mm=at))
