"""What `predict` states about a design: its frequencies, its sweep, and the document that other programs read."""

from __future__ import annotations

import math
from typing import Any

import numpy as np

from boomwright.design.model import Design
from boomwright.rf.sensitivity import Sensitivity, sensitivities
from boomwright.rf.solve import Model
from boomwright.rf.sweep import Sweep
from boomwright.rf.wires import design_warnings, wires_of
from boomwright.units import MM_PER_M, hz_from_mhz

POINTS = 61


def design_sensitivities(design: Design, at_mhz: float | None = None) -> tuple[Sensitivity, ...]:
    """Sensitivities at a frequency [MHz], default the band's centre."""
    frequency_hz = hz_from_mhz(design.band.centre_mhz if at_mhz is None else at_mhz)
    return sensitivities(Model(wires_of(design), frequency_hz), frequency_hz)[1]


def document(design: Design, found: Sweep, sensitive: tuple[Sensitivity, ...] = ()) -> dict[str, Any]:
    """The document of `predict --json`: plain lists and numbers, None where a quantity does not exist."""
    middle = found.solutions[int(np.argmin(np.abs(found.frequency_hz - hz_from_mhz(design.band.centre_mhz))))]
    result: dict[str, Any] = {
        "name": design.name,
        "frequency_mhz": [round(float(value) / 1e6, 9) for value in found.frequency_hz],
        "impedance_ohm": [[float(z.real), float(z.imag)] for z in found.impedance_ohm],
        "vswr": numbers(found.vswr),
        "return_loss_db": numbers(found.return_loss_db),
        "gain_dbi": numbers(found.gain_dbi),
        "directivity_dbi": numbers(found.directivity_dbi),
        "efficiency": numbers(found.efficiency),
        "front_to_back_db": numbers(found.front_to_back_db),
        "front_to_rear_db": numbers(found.front_to_rear_db),
        "half_power_beamwidth_deg": {"e_plane": list(found.beamwidth_e_deg), "h_plane": list(found.beamwidth_h_deg)},
        "conductors": [{"tag": tag, "current_ratio": [ratio.real, ratio.imag]} for tag, ratio in middle.current_ratios],
        "warnings": [*found.warnings, *design_warnings(design)],
    }
    if sensitive:
        result["sensitivity"] = [_row(each) for each in sensitive]
    return result


def _row(each: Sensitivity) -> dict[str, Any]:
    change = each.impedance_ohm_m / MM_PER_M
    return {
        "tag": each.tag,
        "dimension": each.dimension.replace("_m", "_mm"),
        "impedance_ohm_per_mm": [change.real, change.imag],
        "gain_db_per_mm": each.gain_db_m / MM_PER_M,
        "front_to_back_db_per_mm": each.front_to_back_db_m / MM_PER_M,
    }


def numbers(values: Any) -> list[float | None]:
    """Floats for a document; None for one that is not finite."""
    return [float(value) if math.isfinite(value) else None for value in values]
