"""What a file may say: its tables and keys as declarations, from which reader, writer and schema follow."""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from enum import Enum
from typing import Any, Final, Literal

LEAST_MM = 0.001
MOST_MM = 100_000.0
_UNIT_WORDS = {
    "mm": " in millimetres",
    "MHz": " in MHz",
    "ohm": " in ohms",
    "deg": " in degrees",
    "%": " in percent",
    "W": " in watts",
    "g/cm3": " in g/cm³",
    "dBi": " in dBi",
    "dB": " in dB",
}


class _Required(Enum):
    REQUIRED = "required"


REQUIRED: Final = _Required.REQUIRED
Default = float | int | str | tuple[float, ...] | None | _Required
Names = Callable[[], tuple[str, ...]]


@dataclass(frozen=True)
class Only:
    """A key that only some values of another key of its table give a meaning."""

    key: str
    values: tuple[str, ...]


@dataclass(frozen=True)
class Key:
    """One key of a file.

    name     as it stands in the file, with its unit
    kind     number, whole (number), text, name (of a closed list) or numbers (a list of `count`)
    noun     what its value is ("a length"), for messages
    what     what it says, in one line ("the tip-to-tip length")
    unit     of the value; empty = none
    low      least value; at LEAST_MM the message says "above 0"
    high     greatest value; for a text the most characters
    default  taken when the key is absent; None = optional; REQUIRED = a fault
    names    of a closed list: gives what is allowed
    pattern  a text must match whole, and how the message says so
    only     when the key means something at all
    """

    name: str
    kind: Literal["number", "whole", "text", "name", "numbers"]
    noun: str
    what: str
    unit: str = ""
    low: float = -math.inf
    high: float = math.inf
    default: Default = REQUIRED
    names: Names | None = None
    pattern: tuple[str, str] | None = None
    only: Only | None = None
    count: int = 0

    @property
    def range_words(self) -> str:
        """What values are allowed, in words."""
        if self.low == LEAST_MM:
            return "above 0"
        if self.low == self.high:
            return f"{self.low:g}"
        return f"from {self.low:g} to {self.high:g}"

    @property
    def fix(self) -> str:
        """What to write, in words."""
        if self.kind == "name":
            assert self.names is not None
            return f"give {self.what}: {', '.join(self.names())}"
        if self.kind == "text":
            words = self.pattern[1] if self.pattern else f"at most {self.high:g} characters, no control characters"
            return f"give {self.what}: {words}"
        words = f"{self.what}{_UNIT_WORDS.get(self.unit, '')}, {self.range_words}"
        return f"give {words}" if self.kind != "numbers" else f"give a list of {self.count} numbers: {words}"


@dataclass(frozen=True)
class Table:
    """One table of a file: its keys and the tables in it.

    absent  what a missing table means: a fault, None, or a table of defaults
    most    of a list of tables ([[rod]]) the most entries; 0 = a single table
    field   of the model, where it is not called as the table
    """

    name: str
    what: str
    keys: tuple[Key, ...]
    tables: tuple[Table, ...] = ()
    absent: Literal["fault", "none", "defaults"] = "none"
    most: int = 0
    field: str = ""

    @property
    def model_field(self) -> str:
        """Name of the model's field that holds it."""
        return self.field or self.name


def applies(key: Key, values: Mapping[str, Any]) -> bool:
    """Whether a key means anything beside the other values of its table."""
    return key.only is None or values[key.only.key] in key.only.values
