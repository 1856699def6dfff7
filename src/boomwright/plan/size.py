"""One planned size, with where it came from in words."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True)
class Size:
    """A size of the plan: key (`groove.R.depth_mm`), value, unit, and its origin in words."""

    key: str
    value: float
    unit: str
    origin: str

    def __str__(self) -> str:
        return f"{self.key} = {self.value:g} {self.unit}: {self.origin}"
