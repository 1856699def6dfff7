"""The audit: what the written files show, held against what design and shop ask for. Knows no format and no part.

It takes nothing from the run that wrote the files: the plan is worked out again from the `design.toml` and `shop.toml`
that stand beside them, and every quantity is measured on the file.
"""

from __future__ import annotations

import json
import math
from collections.abc import Iterable
from concurrent.futures import Executor
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from boomwright import electrical
from boomwright.crew import Alone
from boomwright.design.model import Design
from boomwright.design.tomlfile import load_design
from boomwright.electrical import Electrical, read_back
from boomwright.errors import AccessError, Fault, InputFault, MeasureError
from boomwright.formats.catalogue import FORMATS
from boomwright.judging import DIGITS, Finding, bench_for, judge_all
from boomwright.manifest import BOOK_PROCESS, Manifest, read_manifest, sum_of
from boomwright.manifest import FILE as MANIFEST_FILE
from boomwright.parts.catalogue import PARTS
from boomwright.parts.coupon import COUPONS
from boomwright.pieces import Expectation
from boomwright.plan.coupon import plan_coupon
from boomwright.plan.plan import Plan, make_plan
from boomwright.plan.size import Size
from boomwright.shop.profile import Shop
from boomwright.shop.tomlfile import load_shop

FILE = "audit.json"
DESIGN_FILE, SHOP_FILE = "design.toml", "shop.toml"


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


def audit_folder(folder: Path, executor: Executor | None = None) -> Audit:
    """Measure every file of an output folder.

    executor  who measures, None = this process; others must not have measured a folder of that name before

    Raises InputFault when `folder` is no output folder at all.
    """
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
    if manifest.made_from == "shop":
        return Audit((*findings, *_coupon_findings(folder, manifest, executor or Alone())))
    try:
        plan = make_plan(load_design(folder / DESIGN_FILE), load_shop(folder / SHOP_FILE))
    except (InputFault, AccessError) as error:
        file = next((f.file for f in getattr(error, "faults", ()) if f.file), DESIGN_FILE)
        return Audit((*findings, _broken(Path(file).name, "readable", str(error))))
    findings += _plan_findings(plan, manifest)
    folder, executor = folder.absolute(), executor or Alone()
    bench_for.cache_clear()
    solved = executor.submit(_solve, folder, plan.design)
    findings += judge_all(folder, list(_expectations(plan, manifest)), executor)
    bench_for.cache_clear()
    findings += _electrical_findings(solved.result())
    return Audit(tuple(findings), solved.result())


def _coupon_findings(folder: Path, manifest: Manifest, executor: Executor) -> Iterable[Finding]:
    """Of calibration pieces: their plan follows from the shop alone."""
    try:
        plan = plan_coupon(load_shop(folder / SHOP_FILE))
    except (InputFault, AccessError) as error:
        return [_broken(SHOP_FILE, "readable", str(error))]
    asked = [e for name in manifest.parts if name in COUPONS for e in COUPONS[name].expect(plan)]
    asked += _of_formats(manifest, plan.shop)
    bench_for.cache_clear()
    found = judge_all(folder.absolute(), asked, executor)
    bench_for.cache_clear()
    return [*_size_findings(SHOP_FILE, plan.sizes, manifest), *found]


def _expectations(plan: Plan, manifest: Manifest) -> Iterable[Expectation]:
    for name in manifest.parts:
        if name in PARTS and PARTS[name].left_out(plan) is None:
            yield from PARTS[name].expect(plan)
    yield from _of_formats(manifest, plan.shop)


def _of_formats(manifest: Manifest, shop: Shop) -> Iterable[Expectation]:
    for entry in manifest.entries:
        if entry.format in FORMATS and entry.process != BOOK_PROCESS:
            yield from FORMATS[entry.format].expect(entry, shop)


def _solve(folder: Path, design: Design) -> Electrical:
    return read_back(design, lambda probe: bench_for(folder).measure(electrical.FILE, probe))


def _sums(folder: Path, manifest: Manifest) -> Iterable[Finding]:
    for path, expected in manifest.sums.items():
        if not (folder / path).is_file():
            yield Finding(path, "file", "present", None, 0.0, "", False, "missing")
            continue
        measured = sum_of(folder / path)
        yield Finding(path, "sha256", expected, measured, 0.0, "", measured == expected)


def _plan_findings(plan: Plan, manifest: Manifest) -> Iterable[Finding]:
    """Sizes as the files were made with, and nothing left out that the design asks for."""
    yield from _size_findings(DESIGN_FILE, plan.sizes, manifest)
    missing = [part.name for part in PARTS if part.name in manifest.left_out and part.left_out(plan) is None]
    for name in missing:
        yield Finding(DESIGN_FILE, f"part {name}", "made", "left out", 0.0, "", False)


def _size_findings(file: str, sizes: Iterable[Size], manifest: Manifest) -> Iterable[Finding]:
    """The sizes that follow from the file beside the others are the sizes these were made with."""
    made = {size.key: size for size in manifest.sizes}
    for size in sizes:
        was = made.pop(size.key, None)
        same = was is not None and math.isclose(was.value, size.value, rel_tol=0.0, abs_tol=1e-9)
        measured = round(was.value, DIGITS) if was else None
        reason = "" if was else "the files were made without it"
        yield Finding(file, size.key, round(size.value, DIGITS), measured, 1e-9, size.unit, same, reason)
    for key, size in made.items():
        yield Finding(file, key, "absent", round(size.value, DIGITS), 0.0, size.unit, False)


def _electrical_findings(found: Electrical) -> Iterable[Finding]:
    if found.reason:
        yield _broken(electrical.FILE, "conductors read back and solved", found.reason)
    for each in found.comparisons:
        expected, measured = round(each.design, DIGITS), round(each.from_file, DIGITS)
        yield Finding(electrical.FILE, each.what, expected, measured, each.allowed, each.unit, each.ok)


def _broken(file: str, what: str, reason: str) -> Finding:
    return Finding(file, what, "yes", None, 0.0, "", False, reason)
