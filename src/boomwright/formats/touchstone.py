"""Touchstone .s1p: the reflection of a one-port over frequency [Touchstone1.1].

Written in hertz, real and imaginary parts; read in every unit and number form that the format knows for S.
"""

from __future__ import annotations

import cmath
import math
from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from boomwright.errors import CatalogueError, MeasureError
from boomwright.formats.format import FileEntry, Format
from boomwright.pieces import Expectation, NetworkPiece, Piece, Probe
from boomwright.shop.profile import Shop
from boomwright.units import hz_from_mhz

UNITS_HZ = {"HZ": 1.0, "KHZ": 1e3, "MHZ": 1e6, "GHZ": 1e9}
OTHER_PARAMETERS = ("Y", "Z", "G", "H")
FORMS: dict[str, Callable[[float, float], complex]] = {
    "RI": complex,
    "MA": lambda size, degrees: cmath.rect(size, math.radians(degrees)),
    "DB": lambda level, degrees: cmath.rect(10.0 ** (level / 20.0), math.radians(degrees)),
}
SAME_FREQUENCY = 1e-9
LARGEST_BYTES = 16 << 20


@dataclass(frozen=True)
class NetworkReading:
    """A one-port, read once: frequencies [Hz] ascending, reflection coefficients, the impedance they refer to [ohm]."""

    path: Path
    frequency_hz: tuple[float, ...]
    reflection: tuple[complex, ...]
    system_ohm: float

    def reflection_at(self, frequency_mhz: float) -> complex:
        """The coefficient at a frequency of the file [MHz]. Raises MeasureError when the file has no such point."""
        wanted = hz_from_mhz(frequency_mhz)
        nearest = min(range(len(self.frequency_hz)), key=lambda i: abs(self.frequency_hz[i] - wanted))
        if abs(self.frequency_hz[nearest] - wanted) > SAME_FREQUENCY * wanted:
            raise MeasureError(f"{self.path.name}: no point at {frequency_mhz:g} MHz")
        return self.reflection[nearest]


class Touchstone(Format):
    """The Touchstone format for one port."""

    name = "touchstone"
    suffix = ".s1p"
    unit = "Hz"

    def takes(self, piece: Piece) -> bool:
        """One-ports."""
        return isinstance(piece, NetworkPiece)

    def write(self, piece: Piece, path: Path) -> None:
        """Option line, then a line a frequency."""
        assert isinstance(piece, NetworkPiece)
        lines = ["! reflection at the feed, predicted", f"# Hz S RI R {piece.system_ohm:.12g}"]
        for frequency_hz, value in zip(piece.frequency_hz, piece.reflection, strict=True):
            lines.append(f"{frequency_hz:.12g} {value.real:.9f} {value.imag:.9f}")
        path.write_bytes(("\n".join(lines) + "\n").encode("ascii"))

    def read(self, path: Path) -> NetworkReading:
        """Frequencies and coefficients. Raises MeasureError for what is no such file, naming the line."""
        try:
            if path.stat().st_size > LARGEST_BYTES:
                raise MeasureError(f"{path.name}: larger than {LARGEST_BYTES >> 20} MiB")
            text = path.read_bytes().decode("utf-8-sig")
        except OSError as error:
            raise MeasureError(f"{path.name}: cannot be read ({error.strerror})") from error
        except UnicodeDecodeError as error:
            raise MeasureError(f"{path.name}: not a Touchstone file (not text)") from error
        return _parsed(text, path)

    def measure(self, reading: Any, probe: Probe, also: Sequence[Any]) -> float:
        """`point_count`; or at `at_mhz`: `resistance_ohm`, `reactance_ohm`, `vswr`, `return_loss_db`."""
        if probe.measure == "point_count":
            return float(len(reading.frequency_hz))
        if probe.measure not in _QUANTITIES:
            known = ", ".join(("point_count", *_QUANTITIES))
            raise CatalogueError(f"unknown Touchstone measure {probe.measure!r} (known: {known})")
        value = reading.reflection_at(float(probe.arguments["at_mhz"]))
        return _QUANTITIES[probe.measure](value, reading.system_ohm)

    def expect(self, entry: FileEntry, shop: Shop) -> tuple[Expectation, ...]:
        """At least one point."""
        return (Expectation(entry.path, "number of points", 1.0, 0.0, "", Probe("point_count"), "at_least"),)


def _impedance_ohm(reflection: complex, system_ohm: float) -> complex:
    apart = 1.0 - reflection
    return system_ohm * (1.0 + reflection) / apart if apart != 0.0 else complex(math.inf, 0.0)


def _vswr(reflection: complex, system_ohm: float) -> float:
    size = abs(reflection)
    return (1.0 + size) / (1.0 - size) if size < 1.0 else math.inf


_QUANTITIES: dict[str, Callable[[complex, float], float]] = {
    "resistance_ohm": lambda value, ohm: _impedance_ohm(value, ohm).real,
    "reactance_ohm": lambda value, ohm: _impedance_ohm(value, ohm).imag,
    "vswr": _vswr,
    "return_loss_db": lambda value, ohm: -20.0 * math.log10(max(abs(value), 1e-12)),
}


def _parsed(text: str, path: Path) -> NetworkReading:
    unit_hz, form, system_ohm = UNITS_HZ["GHZ"], FORMS["MA"], 50.0
    points: list[tuple[float, complex]] = []
    options_read = False
    for place, line in _lines(text, path):
        if line.startswith("#"):
            if not options_read:
                unit_hz, form, system_ohm = _options(line[1:].upper().split(), place)
            options_read = True
            continue
        if line.startswith("["):
            raise MeasureError(f"{place}: only version 1 files are read, without {line.split(']')[0]}]")
        numbers = _numbers(line, place)
        if len(numbers) != 3:
            raise MeasureError(f"{place}: {len(numbers)} numbers where a one-port has 3")
        points.append((numbers[0] * unit_hz, form(numbers[1], numbers[2])))
        if len(points) > 1 and points[-1][0] <= points[-2][0]:
            raise MeasureError(f"{place}: frequencies must ascend")
    if not points:
        raise MeasureError(f"{path.name}: holds no point")
    return NetworkReading(path, tuple(f for f, _ in points), tuple(value for _, value in points), system_ohm)


def _lines(text: str, path: Path) -> Iterator[tuple[str, str]]:
    """Place and text of every line that says something, comments taken off."""
    for index, line in enumerate(text.splitlines(), start=1):
        bare = line.partition("!")[0].strip()
        if bare:
            yield f"{path.name} line {index}", bare


def _options(words: Sequence[str], place: str) -> tuple[float, Callable[[float, float], complex], float]:
    unit_hz, form, system_ohm = UNITS_HZ["GHZ"], FORMS["MA"], 50.0
    given = iter(words)
    for word in given:
        if word in UNITS_HZ:
            unit_hz = UNITS_HZ[word]
        elif word in FORMS:
            form = FORMS[word]
        elif word == "R":
            system_ohm = _numbers(next(given, ""), place)[0]
        elif word in OTHER_PARAMETERS:
            raise MeasureError(f"{place}: holds {word} parameters; only S is read")
        elif word != "S":
            raise MeasureError(f"{place}: unknown option {word!r}")
    if system_ohm <= 0.0:
        raise MeasureError(f"{place}: {system_ohm:g} is no reference impedance")
    return unit_hz, form, system_ohm


def _numbers(line: str, place: str) -> list[float]:
    try:
        numbers = [float(word) for word in line.split()]
    except ValueError as error:
        raise MeasureError(f"{place}: {line[:40]!r} is not a row of numbers") from error
    if not numbers or not all(math.isfinite(value) for value in numbers):
        raise MeasureError(f"{place}: {line[:40]!r} is not a row of finite numbers")
    return numbers


TOUCHSTONE = Touchstone()
