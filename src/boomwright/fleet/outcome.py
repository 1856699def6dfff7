"""What became of one variant, and how it is kept beside its folder so that a later run knows."""

from __future__ import annotations

import json
import math
from dataclasses import asdict, dataclass, fields, replace
from pathlib import Path
from typing import TYPE_CHECKING, Any, Literal

from boomwright.errors import InputFault, MeasureError
from boomwright.fleet.recipe import Recipe, design_and_shop
from boomwright.manifest import FILE as MANIFEST_FILE
from boomwright.manifest import read_manifest, sum_of

if TYPE_CHECKING:
    from boomwright.pipeline import Made

State = Literal["made", "unchanged", "failed"]
DIGITS = 6


@dataclass(frozen=True)
class Outcome:
    """One variant.

    reason            why it failed, empty when it did not
    gain_dbi, front_to_back_db  least over the band; vswr_max greatest; None where nothing was solved
    mass_g            of the antenna
    print_h           hours of printing, fewest and most of the estimate
    files             number of files
    audit_ok          whether every measured quantity holds; None where nothing was made
    """

    name: str
    state: State
    reason: str = ""
    gain_dbi: float | None = None
    vswr_max: float | None = None
    front_to_back_db: float | None = None
    mass_g: float | None = None
    print_h: tuple[float, float] | None = None
    files: int = 0
    audit_ok: bool | None = None

    def as_json(self) -> dict[str, Any]:
        """As `fleet.json` lists it."""
        return asdict(self)


@dataclass(frozen=True)
class Record:
    """An outcome with the sums that tell whether it still holds: of its inputs, and of the manifest of its folder."""

    key: str
    manifest: str
    outcome: Outcome


def make_variant(recipe: Recipe, folder: Path) -> Outcome:
    """Make one variant into `folder`/NAME; its faults become its outcome, what the disk does is raised."""
    from boomwright.pipeline import make_design

    name = recipe.variant.name
    try:
        design, shop = design_and_shop(recipe)
        return _outcome(name, make_design(design, shop, folder / name))
    except InputFault as fault:
        return Outcome(name, "failed", str(fault))


def _outcome(name: str, made: Made) -> Outcome:
    from boomwright.plan.estimate import print_estimates
    from boomwright.plan.mounting import plan_mounting

    found, inside = made.prediction.sweep, list(made.prediction.in_band)
    volumes = {
        Path(finding.file).stem: float(finding.measured)
        for finding in made.audit.findings
        if finding.file.endswith(".stl") and finding.what == "volume" and isinstance(finding.measured, float)
    }
    hours = [one.hours for one in print_estimates(volumes, made.plan.shop.printer)]
    wrong = [*made.audit.failures, *made.prediction.shortfalls]
    more = f" (and {len(wrong) - 1} more)" if len(wrong) > 1 else ""
    return Outcome(
        name,
        "failed" if wrong else "made",
        f"not met: {wrong[0]}{more}" if wrong else "",
        _rounded(found.gain_dbi[inside].min()),
        _rounded(found.vswr[inside].max()),
        _rounded(found.front_to_back_db[inside].min()),
        _rounded(plan_mounting(made.plan).mass_g),
        (round(sum(low for low, _ in hours), 2), round(sum(high for _, high in hours), 2)),
        len(made.manifest.entries),
        made.audit.ok,
    )


def _rounded(value: float) -> float | None:
    return round(float(value), DIGITS) if math.isfinite(value) else None


def write_record(record: Record, path: Path) -> None:
    """Keep a record; there is never a half-written one."""
    document = {"key": record.key, "manifest": record.manifest, "outcome": record.outcome.as_json()}
    partial = path.with_suffix(".partial")
    partial.write_text(json.dumps(document, indent=1, allow_nan=False) + "\n", "utf-8")
    partial.replace(path)


def read_record(path: Path) -> Record | None:
    """The record that is kept there, None when there is none that can be read."""
    try:
        document = json.loads(path.read_text("utf-8"))
        given = {one.name: document["outcome"][one.name] for one in fields(Outcome)}
        hours = given["print_h"]
        outcome = Outcome(**given | {"print_h": None if hours is None else (float(hours[0]), float(hours[1]))})
        return Record(str(document["key"]), str(document["manifest"]), outcome)
    except (OSError, ValueError, KeyError, TypeError, IndexError):
        return None


def record_of(recipe: Recipe, outcome: Outcome, folder: Path) -> Record:
    """The record of a variant just made into `folder`/NAME."""
    manifest = folder / outcome.name / MANIFEST_FILE
    return Record(recipe.key, sum_of(manifest) if outcome.files else "", outcome)


def still_holds(record: Record | None, recipe: Recipe, folder: Path) -> bool:
    """Whether a variant's inputs, the program and every one of its files are what they were."""
    if record is None or record.key != recipe.key:
        return False
    if not record.outcome.files:
        return True
    place = folder / record.outcome.name
    try:
        if sum_of(place / MANIFEST_FILE) != record.manifest:
            return False
        return all(sum_of(place / path) == expected for path, expected in read_manifest(place).sums.items())
    except (OSError, MeasureError):
        return False


def unchanged(outcome: Outcome) -> Outcome:
    """The same outcome in a later run."""
    return replace(outcome, state="unchanged") if outcome.state == "made" else outcome
