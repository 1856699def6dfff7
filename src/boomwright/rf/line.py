"""Lossless lines between antenna and cable: what they make of an impedance, and the closed forms that match one.

Sections are listed from the antenna outward. A balanced element is taken as one impedance: the balun comes first.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Literal

import numpy as np

from boomwright.errors import Fault, InputFault
from boomwright.rf.arrays import Complexes, Floats
from boomwright.rf.feed import reflection
from boomwright.units import SPEED_OF_LIGHT_M_S

Role = Literal["series", "open stub", "short stub"]
Kind = Literal["series section", "shunt stub", "quarter-wave section"]
Ending = Literal["open", "short"]
ENDINGS: tuple[Ending, Ending] = ("open", "short")
NO_LENGTH = 1e-9
"""Shares of a wavelength below this are no section at all."""


@dataclass(frozen=True)
class Line:
    """A kind of line: its name, characteristic impedance [ohm] and velocity factor (0 to 1)."""

    name: str
    impedance_ohm: float
    velocity_factor: float


@dataclass(frozen=True)
class Section:
    """A piece of line: in series with what follows, or a stub across it; its length [m]."""

    role: Role
    line: Line
    length_m: float


@dataclass(frozen=True)
class Match:
    """A way to match: its sections, from the antenna outward."""

    kind: Kind
    sections: tuple[Section, ...]

    @property
    def length_m(self) -> float:
        """All line used [m]."""
        return sum(section.length_m for section in self.sections)


def wavelength_in_line_m(frequency_hz: float, velocity_factor: float) -> float:
    """Wavelength in a line [m] at a frequency [Hz], above 0; velocity factor above 0 to 1. [Pozar2012] ch. 2."""
    if not 0.0 < velocity_factor <= 1.0:
        found = f"{velocity_factor:g} is not a velocity factor"
        raise InputFault([Fault("velocity_factor", found, "give a value above 0, at most 1")])
    return velocity_factor * SPEED_OF_LIGHT_M_S / frequency_hz


def transformed_ohm(sections: tuple[Section, ...], frequency_hz: Floats, load_ohm: Complexes) -> Complexes:
    """Impedance seen through lossless sections.

    sections      from the load outward
    frequency_hz  [Hz], (F,), above 0
    load_ohm      impedance at each of them [ohm], (F,)

    Returns the impedance at the far end [ohm], (F,). [Pozar2012] ch. 2, equation of the terminated lossless line.
    """
    seen = np.asarray(load_ohm, dtype=np.complex128)
    for section in sections:
        line = section.line
        angle = 2.0 * np.pi * np.asarray(frequency_hz) * section.length_m
        angle = angle / (line.velocity_factor * SPEED_OF_LIGHT_M_S)
        ohm, cosine, sine = line.impedance_ohm, np.cos(angle), np.sin(angle)
        if section.role == "series":
            seen = ohm * (seen * cosine + 1j * ohm * sine) / (ohm * cosine + 1j * seen * sine)
        elif section.role == "open stub":
            seen = seen * ohm * cosine / (ohm * cosine + 1j * sine * seen)
        else:
            seen = seen * ohm * sine / (ohm * sine - 1j * cosine * seen)
    return seen


def series_sections(load_ohm: complex, frequency_hz: float, cable: Line, other: Line) -> tuple[Match, ...]:
    """Matches by one section of another line set into the cable, a little way from the antenna.

    load_ohm      impedance to match [ohm], real part above 0
    frequency_hz  at which it is matched [Hz]
    cable         the line that is to run matched
    other         the line of the section, of another impedance

    With n = other / cable, z = r + jx = load / cable: tan of the section is
    B = +-sqrt(((r - 1)^2 + x^2) / (r (n - 1/n)^2 - (r - 1)^2 - x^2)), of the cable before it
    A = ((n - r/n) B + x) / (r + x n B - 1). Two matches, the shorter first, or none where the root is not real.
    Raises InputFault for a load that takes no power. [Regier1971]; with z = n it is Bramham's pair of equal sections
    [Bramham1961].
    """
    _refuse_no_load(load_ohm)
    z, n = load_ohm / cable.impedance_ohm, other.impedance_ohm / cable.impedance_ohm
    r, x = z.real, z.imag
    off = (r - 1.0) ** 2 + x**2
    room = r * (n - 1.0 / n) ** 2 - off
    if off < 1e-18 or room <= 0.0:
        return ()
    found = []
    for tangent in (math.sqrt(off / room), -math.sqrt(off / room)):
        before = math.atan2((n - r / n) * tangent + x, r + x * n * tangent - 1.0)
        shares = (before / (2.0 * math.pi) % 0.5, math.atan(tangent) / (2.0 * math.pi) % 0.5)
        sections = _sections(frequency_hz, (("series", cable, shares[0]), ("series", other, shares[1])))
        found.append(Match("series section", sections))
    return tuple(sorted(found, key=lambda match: match.length_m))


def shunt_stubs(load_ohm: complex, frequency_hz: float, cable: Line, ending: Ending) -> tuple[Match, ...]:
    """Matches by one stub of the cable's own kind across it, open or shorted at its end.

    load_ohm      impedance to match [ohm], real part above 0
    frequency_hz  at which it is matched [Hz]
    cable         of the feed line and of the stub
    ending        open or short

    Two matches, the one with less line first; none for a load that is matched already. Raises InputFault for a load
    that takes no power. [Pozar2012] sec. 5.2.
    """
    _refuse_no_load(load_ohm)
    z = load_ohm / cable.impedance_ohm
    r, x = z.real, z.imag
    if abs(z - 1.0) < NO_LENGTH:
        return ()
    if abs(r - 1.0) < 1e-12:
        tangents = [-x / 2.0]
    else:
        root = math.sqrt(r * ((1.0 - r) ** 2 + x**2))
        tangents = [(x + root) / (r - 1.0), (x - root) / (r - 1.0)]
    found = []
    for t in tangents:
        susceptance = (r**2 * t - (1.0 - x * t) * (x + t)) / (r**2 + (x + t) ** 2)
        angle = -math.atan(susceptance) if ending == "open" else math.atan2(1.0, susceptance)
        shares = (math.atan(t) / (2.0 * math.pi) % 0.5, angle / (2.0 * math.pi) % 0.5)
        stub: Role = "open stub" if ending == "open" else "short stub"
        sections = _sections(frequency_hz, (("series", cable, shares[0]), (stub, cable, shares[1])))
        found.append(Match("shunt stub", sections))
    return tuple(sorted(found, key=lambda match: match.length_m))


def quarter_wave_sections(load_ohm: complex, frequency_hz: float, cable: Line) -> tuple[Match, ...]:
    """Matches by cable to the place where the impedance is real, then a quarter wave of the line that fits there.

    load_ohm      impedance to match [ohm], real part above 0
    frequency_hz  at which it is matched [Hz]
    cable         the line that is to run matched; the section has its velocity factor

    The section's impedance is the geometric mean of the cable's and the real one. Two matches, the one with less line
    first: from the voltage's maximum and from its minimum. Raises InputFault for a load that takes no power.
    [Pozar2012] sec. 5.4.
    """
    _refuse_no_load(load_ohm)
    gamma = reflection(load_ohm, cable.impedance_ohm)
    if abs(gamma) < NO_LENGTH:
        return ()
    ratio = (1.0 + abs(gamma)) / (1.0 - abs(gamma))
    to_most = math.atan2(gamma.imag, gamma.real) / (4.0 * math.pi) % 0.5
    found = []
    for share, times in ((to_most, math.sqrt(ratio)), ((to_most + 0.25) % 0.5, 1.0 / math.sqrt(ratio))):
        ohm = cable.impedance_ohm * times
        section = Line(f"{ohm:.3g} ohm line", ohm, cable.velocity_factor)
        sections = _sections(frequency_hz, (("series", cable, share), ("series", section, 0.25)))
        found.append(Match("quarter-wave section", sections))
    return tuple(sorted(found, key=lambda match: match.length_m))


def _refuse_no_load(load_ohm: complex) -> None:
    if not (math.isfinite(abs(load_ohm)) and load_ohm.real > 0.0):
        found = f"{load_ohm:.3g} ohm takes no power"
        raise InputFault([Fault("load_ohm", found, "give an impedance with a resistance above 0")])


def _sections(frequency_hz: float, parts: tuple[tuple[Role, Line, float], ...]) -> tuple[Section, ...]:
    """Sections of these shares of a wavelength; a share of nothing, or of half a wave but for rounding, is left out."""
    return tuple(
        Section(role, line, share * wavelength_in_line_m(frequency_hz, line.velocity_factor))
        for role, line, share in parts
        if NO_LENGTH < share < 0.5 - NO_LENGTH
    )
