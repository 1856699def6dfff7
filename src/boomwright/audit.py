"""The audit: what the written files show, held against what design and shop ask for. Knows no format and no part.

It takes nothing from the run that wrote the files: the plan is worked out again from the `design.toml` and `shop.toml`
that stand beside them, and every quantity is measured on the file.
"""

from __future__ import annotations

import json
import math
from collections.abc import Iterable
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from boomwright import electrical
from boomwright.design.tomlfile import load_design
from boomwright.electrical import Electrical, read_back
from boomwright.errors import AccessError, CatalogueError, Fault, InputFault, MeasureError
from boomwright.formats.catalogue import FORMATS
from boomwright.formats.format import Format
from boomwright.manifest import FILE as MANIFEST_FILE
from boomwright.manifest import Manifest, read_manifest, sum_of
from boomwright.parts.catalogue import PARTS
from boomwright.pieces import Expectation, Probe
from boomwright.plan.plan import Plan, make_plan
from boomwright.shop.tomlfile import load_shop

FILE = "audit.json"
DESIGN_FILE, SHOP_FILE = "design.toml", "shop.toml"
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


@dataclass(frozen=True)
class Audit:
    """All findings of a folder, and what the electrical read-back found (None = it never came to that)."""

    findings: tuple[Finding, ...]
    electrical: Electrical | None = None

    @property
    def ok(self) -> bool:
        """Whether every finding holds."""
        return all(finding.ok for finding in self.findings)

    @property
    def failures(self) -> tuple[Finding, ...]:
        """The findings that do not hold."""
        return tuple(finding for finding in self.findings if not finding.ok)

    def as_json(self) -> str:
        """The report as `audit.json` holds it."""
        document: dict[str, Any] = {"ok": self.ok, "findings": [finding.as_json() for finding in self.findings]}
        if self.electrical is not None:
            document["electrical"] = self.electrical.as_json()
        return json.dumps(document, indent=1, ensure_ascii=True, allow_nan=False) + "\n"


def audit_folder(folder: Path) -> Audit:
    """Measure every file of an output folder. Raises InputFault when `folder` is no output folder at all."""
    if not folder.is_dir():
        raise InputFault([Fault("DIR", f"{folder} is not a folder", "name the folder that make wrote")])
    if not (folder / MANIFEST_FILE).is_file() and not (folder / DESIGN_FILE).is_file():
        found = f"{folder} holds neither {MANIFEST_FILE} nor {DESIGN_FILE}"
        raise InputFault([Fault("DIR", found, "name the folder that make wrote")])
    try:
        manifest = read_manifest(folder)
    except MeasureError as error:
        return Audit((_broken(MANIFEST_FILE, "readable", str(error)),))
    findings = list(_sums(folder, manifest))
    try:
        plan = make_plan(load_design(folder / DESIGN_FILE), load_shop(folder / SHOP_FILE))
    except (InputFault, AccessError) as error:
        file = next((f.file for f in getattr(error, "faults", ()) if f.file), DESIGN_FILE)
        return Audit((*findings, _broken(Path(file).name, "readable", str(error))))
    findings += _plan_findings(plan, manifest)
    bench = _Bench(folder)
    findings += bench.judge(_expectations(plan, manifest))
    solved = read_back(plan.design, lambda probe: bench.measure(electrical.FILE, probe))
    findings += _electrical_findings(solved)
    return Audit(tuple(findings), solved)


def _expectations(plan: Plan, manifest: Manifest) -> Iterable[Expectation]:
    for name in manifest.parts:
        if name in PARTS and PARTS[name].left_out(plan) is None:
            yield from PARTS[name].expect(plan)
    for entry in manifest.entries:
        if entry.format in FORMATS:
            yield from FORMATS[entry.format].expect(entry, plan.shop)


def _sums(folder: Path, manifest: Manifest) -> Iterable[Finding]:
    for path, expected in manifest.sums.items():
        if not (folder / path).is_file():
            yield Finding(path, "file", "present", None, 0.0, "", False, "missing")
            continue
        measured = sum_of(folder / path)
        yield Finding(path, "sha256", expected, measured, 0.0, "", measured == expected)


def _plan_findings(plan: Plan, manifest: Manifest) -> Iterable[Finding]:
    """The sizes that follow from the design beside the files are the sizes the files were made with."""
    made = {size.key: size for size in manifest.sizes}
    for size in plan.sizes:
        was = made.pop(size.key, None)
        same = was is not None and math.isclose(was.value, size.value, rel_tol=0.0, abs_tol=1e-9)
        measured = round(was.value, DIGITS) if was else None
        reason = "" if was else "the files were made without it"
        yield Finding(DESIGN_FILE, size.key, round(size.value, DIGITS), measured, 1e-9, size.unit, same, reason)
    for key, size in made.items():
        yield Finding(DESIGN_FILE, key, "absent", round(size.value, DIGITS), 0.0, size.unit, False)
    missing = [part.name for part in PARTS if part.name in manifest.left_out and part.left_out(plan) is None]
    for name in missing:
        yield Finding(DESIGN_FILE, f"part {name}", "made", "left out", 0.0, "", False)


def _electrical_findings(found: Electrical) -> Iterable[Finding]:
    if found.reason:
        yield _broken(electrical.FILE, "conductors read back and solved", found.reason)
    for each in found.comparisons:
        expected, measured = round(each.design, DIGITS), round(each.from_file, DIGITS)
        yield Finding(electrical.FILE, each.what, expected, measured, each.allowed, each.unit, each.ok)


class _Bench:
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


def _broken(file: str, what: str, reason: str) -> Finding:
    return Finding(file, what, "yes", None, 0.0, "", False, reason)


def _shown(value: float | str) -> str:
    return value if isinstance(value, str) else f"{value:.6g}"
