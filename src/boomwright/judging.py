"""One quantity expected, measured on a file, and judged. Knows no format and no part but by their catalogues."""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence
from concurrent.futures import Executor
from dataclasses import dataclass
from functools import lru_cache
from pathlib import Path
from typing import Any

from boomwright.errors import CatalogueError, MeasureError
from boomwright.formats.catalogue import FORMATS
from boomwright.formats.format import Format
from boomwright.pieces import Expectation, Probe

DIGITS = 6
"""Decimals of a measured figure in the report: a nanometre is noise."""


@dataclass(frozen=True)
class Finding:
    """One quantity of one file: what was expected, what was measured (None = it could not be), and whether it holds."""

    file: str
    what: str
    expected: float | str
    measured: float | str | None
    allowed: float
    unit: str
    ok: bool
    reason: str = ""

    def as_json(self) -> dict[str, Any]:
        """The finding as the report writes it."""
        document = {
            "file": self.file,
            "what": self.what,
            "expected": self.expected,
            "measured": self.measured,
            "allowed": self.allowed,
            "unit": self.unit,
            "ok": self.ok,
        }
        return document | ({"reason": self.reason} if self.reason else {})

    def __str__(self) -> str:
        if self.measured is None:
            return f"{self.file}: {self.what}: {self.reason or 'missing'}"
        unit = f" {self.unit}" if self.unit else ""
        expected, measured = _shown(self.expected), _shown(self.measured)
        return (
            f"{self.file}: {self.what}: expected {expected}{unit}, measured {measured}{unit}, allowed {self.allowed:g}"
        )


def judge_all(folder: Path, asked: Sequence[Expectation], executor: Executor) -> list[Finding]:
    """A finding for every expectation, in order; the files are measured beside each other, the largest first."""
    by_file: dict[str, list[int]] = {}
    for index, expectation in enumerate(asked):
        by_file.setdefault(expectation.file, []).append(index)

    def weight(file: str) -> int:
        return (folder / file).stat().st_size if (folder / file).is_file() else 0

    files = sorted(by_file, key=lambda file: (-weight(file), file))
    futures = {file: executor.submit(_judge, folder, [asked[i] for i in by_file[file]]) for file in files}
    found = {i: f for file in files for i, f in zip(by_file[file], futures[file].result(), strict=True)}
    return [found[index] for index in range(len(asked))]


def _judge(folder: Path, asked: Sequence[Expectation]) -> list[Finding]:
    return list(bench_for(folder).judge(asked))


@lru_cache(maxsize=1)
def bench_for(folder: Path) -> Bench:
    """The bench this process measures a folder on. Whoever is done with the folder calls `bench_for.cache_clear()`."""
    return Bench(folder)


class Bench:
    """Opens each file once and measures it as often as asked."""

    def __init__(self, folder: Path) -> None:
        self._folder = folder
        self._readings: dict[str, Any] = {}
        self._formats = {entry.suffix: entry for entry in FORMATS}

    def judge(self, expectations: Iterable[Expectation]) -> Iterable[Finding]:
        """A finding for every expectation."""
        for expectation in expectations:
            yield self._judge_one(expectation)

    def _judge_one(self, e: Expectation) -> Finding:
        expected = round(e.expected, DIGITS)
        try:
            measured = self.measure(e.file, e.probe)
        except MeasureError as error:
            return Finding(e.file, e.what, expected, None, e.allowed, e.unit, False, str(error))
        if not math.isfinite(measured):
            return Finding(e.file, e.what, expected, None, e.allowed, e.unit, False, "no finite value")
        low = e.rule == "at_most" or measured >= e.expected - e.allowed
        high = e.rule == "at_least" or measured <= e.expected + e.allowed
        # A zero that came out as -0.0 must not change the report's bytes.
        return Finding(e.file, e.what, expected, round(measured, DIGITS) + 0.0, e.allowed, e.unit, low and high)

    def measure(self, file: str, probe: Probe) -> float:
        """One quantity of one file; MeasureError when the file shows no such thing."""
        reading = self._read(file)
        also = [self._read(path) for path in probe.also]
        return float(self._format(file).measure(reading, probe, also))

    def _format(self, path: str) -> Format:
        suffix = Path(path).suffix
        if suffix not in self._formats:
            raise MeasureError(f"no format reads {suffix} files")
        return self._formats[suffix]

    def _read(self, path: str) -> Any:
        if path not in self._readings:
            try:
                if not (self._folder / path).is_file():
                    raise MeasureError(f"{path} is missing")
                self._readings[path] = self._format(path).read(self._folder / path)
            except (MeasureError, CatalogueError) as error:
                self._readings[path] = MeasureError(str(error))
        reading = self._readings[path]
        if isinstance(reading, MeasureError):
            raise reading
        return reading


def _shown(value: float | str) -> str:
    return value if isinstance(value, str) else f"{value:.6g}"
