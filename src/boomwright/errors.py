"""Every error the package raises on purpose, and the fault: one thing wrong in what the user gave."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass, replace


@dataclass(frozen=True)
class Fault:
    """One thing wrong in a file or an argument.

    path   key path in the file (`rod[3].length_mm`), or the argument's name
    found  what was found and what is allowed, in words
    fix    what to do about it, in words
    file   the file as the user named it; empty while it is not known
    """

    path: str
    found: str
    fix: str
    file: str = ""

    def __str__(self) -> str:
        where = ": ".join(part for part in (self.file, self.path) if part)
        return f"{where}: {self.found}\n  fix: {self.fix}"


class BoomwrightError(Exception):
    """Base of every error raised on purpose."""


class InputFault(BoomwrightError, ValueError):
    """What the user gave cannot be used (exit status 2). Carries all faults found at once."""

    def __init__(self, faults: Iterable[Fault]) -> None:
        self.faults = tuple(faults)
        super().__init__("\n".join(str(fault) for fault in self.faults))

    def __reduce__(self) -> tuple[type[InputFault], tuple[tuple[Fault, ...]]]:
        """Faults travel between processes whole."""
        return type(self), (self.faults,)

    def in_file(self, file: str) -> InputFault:
        """The same faults, each naming `file` where it named none."""
        return type(self)(fault if fault.file else replace(fault, file=file) for fault in self.faults)


class DesignFault(InputFault):
    """A design that cannot be read, or whose figures contradict one another."""


class ShopFault(InputFault):
    """A shop file that cannot be read or used."""


class PlanFault(InputFault):
    """A sound design that this shop, or nobody, can build as it stands."""


class AccessError(BoomwrightError, OSError):
    """Something could not be read or written: disk, permission, a missing system library (exit status 4)."""


class ShapeError(BoomwrightError, RuntimeError):
    """The CAD kernel gave no sound solid for a sound plan: names the part; a fault of the program, worth reporting."""


class MeasureError(BoomwrightError, ValueError):
    """A written file does not hold what a measurement looks for; becomes a finding, never a traceback."""


class CatalogueError(BoomwrightError, LookupError):
    """A name is unknown to a catalogue, or entered twice."""
