"""What `propose` is asked for, checked as a whole: every fault at once, named by its option."""

from __future__ import annotations

import math
import re
from dataclasses import dataclass

from boomwright.design.document import escaped
from boomwright.design.model import Form
from boomwright.design.tomlfile import LEAST_MHZ, MOST_MHZ
from boomwright.errors import Fault, InputFault
from boomwright.units import wavelength_mm

MOST_ROD_WL = 0.08
MOST_BOOM_WIDTH_WL = 0.25
MOST_BOOM_WL = 25.0
MOST_RODS = 64
WIDEST_RATIO = 1.5
"""Widest band, upper edge over lower: no array of this kind covers more."""

FORMS: tuple[Form, ...] = ("straight", "folded", "loop")
NAME = re.compile(r"[a-z0-9-]{1,64}")


@dataclass(frozen=True)
class Request:
    """What is wanted; None = free. Lengths [mm], frequencies [MHz].

    low_mhz, high_mhz    the band
    boom_mm              reflector to last director
    rods                 number of reflector and directors
    rod_mm, reflector_mm diameters; the reflector's defaults to the directors'
    boom_width_mm        of the bar
    driven               form of the driven element; None = whichever does better, folded or straight
    ohm                  the system's impedance
    gain_min_dbi, front_to_back_min_db, vswr_max  wishes over the whole band
    seed                 of the starts
    name                 of the design; None = from the band
    """

    low_mhz: float
    high_mhz: float
    boom_mm: float | None = None
    rods: int | None = None
    rod_mm: float | None = None
    reflector_mm: float | None = None
    boom_width_mm: float | None = None
    driven: Form | None = None
    ohm: float = 50.0
    gain_min_dbi: float | None = None
    front_to_back_min_db: float | None = None
    vswr_max: float = 1.5
    seed: int = 0
    name: str | None = None

    @property
    def centre_mhz(self) -> float:
        """Middle of the band [MHz]."""
        return (self.low_mhz + self.high_mhz) / 2.0

    @property
    def wavelength_mm(self) -> float:
        """Wavelength at the middle of the band [mm]."""
        return wavelength_mm(self.centre_mhz)

    @property
    def design_name(self) -> str:
        """The name asked for, or one that says the band."""
        return self.name or f"beam-{self.centre_mhz:.0f}"


def band_of(text: str) -> tuple[float, float]:
    """The band in LOW:HIGH [MHz]; NaN for what is no number. Raises InputFault without exactly one colon."""
    parts = text.split(":")
    if len(parts) != 2:
        raise InputFault([Fault("--band", f'"{escaped(text)}" is not LOW:HIGH', "give it as 863:870, in MHz")])
    numbers = []
    for part in parts:
        try:
            numbers.append(float(part))
        except ValueError:
            numbers.append(math.nan)
    return numbers[0], numbers[1]


def form_of(name: str | None) -> Form | None:
    """The form of this name, None for none. Raises InputFault for any other."""
    for form in FORMS:
        if name == form:
            return form
    if name is None:
        return None
    raise InputFault([Fault("--driven", f'"{escaped(name)}" is no form', f"give one of {', '.join(FORMS)}")])


def check_request(request: Request) -> None:
    """Raises InputFault with everything that is wrong with a request."""
    faults = _band_faults(request)
    if not faults:
        faults = _size_faults(request)
    faults += _count_faults(request)
    faults += _wish_faults(request)
    if faults:
        raise InputFault(faults)


def _band_faults(request: Request) -> list[Fault]:
    low, high = request.low_mhz, request.high_mhz
    fix = f"give LOW:HIGH in MHz, each from {LEAST_MHZ:g} to {MOST_MHZ:g}, the lower first"
    if not all(math.isfinite(value) and LEAST_MHZ <= value <= MOST_MHZ for value in (low, high)):
        return [Fault("--band", f"{low:g}:{high:g} is no band in use", fix)]
    if high <= low:
        return [Fault("--band", f"{high:g} is not above {low:g}", fix)]
    if high > WIDEST_RATIO * low:
        found = f"{low:g}:{high:g} is wider than an array of rods covers"
        return [Fault("--band", found, f"give an upper edge of at most {WIDEST_RATIO:g} times the lower")]
    return []


def _count_faults(request: Request) -> list[Fault]:
    faults = []
    if request.boom_mm is None and request.rods is None:
        faults.append(Fault("--boom-mm", "missing, and --rods too", "give the boom's length or the number of rods"))
    if request.rods is not None and not 1 <= request.rods <= MOST_RODS:
        found = f"{request.rods} rods"
        faults.append(Fault("--rods", found, f"give 1 to {MOST_RODS}: reflector and directors together"))
    return faults


def _size_faults(request: Request) -> list[Fault]:
    wave, faults = request.wavelength_mm, []
    for option, value, most_wl, what in (
        ("--boom-mm", request.boom_mm, MOST_BOOM_WL, "a boom"),
        ("--rod-mm", request.rod_mm, MOST_ROD_WL, "a rod"),
        ("--reflector-mm", request.reflector_mm, MOST_ROD_WL, "a rod"),
        ("--boom-width-mm", request.boom_width_mm, MOST_BOOM_WIDTH_WL, "a width"),
    ):
        if value is not None and not (math.isfinite(value) and 0.0 < value <= most_wl * wave):
            fix = f"give millimetres above 0, at most {most_wl * wave:.3g} ({most_wl:g} wavelengths)"
            faults.append(Fault(option, f"{value:g} is not {what} for {request.centre_mhz:g} MHz", fix))
    return faults


def _wish_faults(request: Request) -> list[Fault]:
    faults = []
    for option, value, low, high, unit in (
        ("--ohm", request.ohm, 1.0, 10_000.0, "ohms"),
        ("--gain-min", request.gain_min_dbi, -30.0, 40.0, "dBi"),
        ("--front-to-back-min", request.front_to_back_min_db, 0.0, 100.0, "dB"),
        ("--vswr-max", request.vswr_max, 1.05, 100.0, ""),
    ):
        if value is not None and not low <= value <= high:
            fix = f"give {low:g} to {high:g} {unit}".rstrip()
            faults.append(Fault(option, f"{value:g} is out of range", fix))
    if request.seed < 0:
        faults.append(Fault("--seed", f"{request.seed} is negative", "give a whole number, 0 or more"))
    if request.name is not None and not NAME.fullmatch(request.name):
        faults.append(Fault("--name", "not a name", "give 1 to 64 of the characters a-z, 0-9 and -"))
    return faults
