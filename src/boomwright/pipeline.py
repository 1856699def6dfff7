"""The main job from top to bottom: design file, plan, solids, files, audit, in a folder swapped in at the end."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace
from pathlib import Path

from boomwright.audit import DESIGN_FILE, SHOP_FILE, Audit, audit_folder
from boomwright.audit import FILE as AUDIT_FILE
from boomwright.crew import crew
from boomwright.design.model import Design
from boomwright.design.tomlfile import load_design, write_design
from boomwright.errors import CatalogueError, Fault, InputFault, PlanFault
from boomwright.folder import OUTPUTS, check_replaceable, fresh_folder
from boomwright.formats.format import FileEntry
from boomwright.manifest import Manifest, write_manifest
from boomwright.output import write_piece
from boomwright.parts.catalogue import BOOK, PARTS
from boomwright.pieces import IDENTITY, Part
from boomwright.plan.plan import Plan, make_plan
from boomwright.prediction import Prediction, predict
from boomwright.shop.profile import Shop
from boomwright.shop.tomlfile import load_shop, write_shop

ALWAYS = "antenna"
"""The part that is always made: the others are checked against it."""

PRELOAD = ("cadquery", "boomwright.audit")
"""What every process that builds or measures needs."""

SHOP_SECTIONS = ("printer", "laser", "saw", "accuracy", "cradle", "mould", "former", "stock")
Progress = Callable[[str], None]


@dataclass(frozen=True)
class Made:
    """What a run left: the folder, the plan, the manifest, the audit, and what the antenna is predicted to do."""

    folder: Path
    plan: Plan
    manifest: Manifest
    audit: Audit
    prediction: Prediction


def make(
    design_path: Path,
    shop_path: Path | None = None,
    out: Path | None = None,
    only: Sequence[str] = (),
    *,
    progress: Progress = lambda step: None,
    jobs: int = 1,
) -> Made:
    """Build, write and audit everything a design needs.

    design_path  the design file
    shop_path    the shop file, None = the built-in shop
    out          the output folder, None = outputs/NAME
    only         part names to make, none = all
    progress     called with a word or two before each step
    jobs         processes that build and measure; the files are the same whatever their number

    Raises InputFault for what the user gave, AccessError for what could not be read or written: nothing is changed.
    """
    design, shop = load_design(design_path), load_shop(shop_path)
    try:
        return make_design(design, shop, out, only, progress=progress, jobs=jobs)
    except InputFault as fault:
        raise _in_files(fault, design_path, shop_path) from None


def make_design(
    design: Design,
    shop: Shop,
    out: Path | None = None,
    only: Sequence[str] = (),
    *,
    progress: Progress = lambda step: None,
    jobs: int = 1,
) -> Made:
    """Build, write and audit everything a design in memory needs; arguments and errors as `make`."""
    chosen = _chosen(only)
    plan = make_plan(design, shop)
    left_out = {part.name: reason for part in chosen if (reason := part.left_out(plan)) is not None}
    parts = [part for part in chosen if part.name not in left_out]
    faults = [fault for part in parts for fault in plan.faults.get(part.name, ())]
    if faults:
        raise PlanFault(dict.fromkeys(faults))
    progress("solving")
    prediction = predict(design)
    target = out if out is not None else OUTPUTS / design.name
    check_replaceable(target)
    with crew(jobs, PRELOAD) as executor, fresh_folder(target) as folder:
        entries = [FileEntry(DESIGN_FILE, "design", "", "toml", "mm", IDENTITY)]
        entries.append(FileEntry(SHOP_FILE, "shop", "", "toml", "mm", IDENTITY))
        (folder / DESIGN_FILE).write_text(write_design(design), "utf-8")
        (folder / SHOP_FILE).write_text(write_shop(shop), "utf-8")
        built = []
        for part in parts:
            progress(f"building {part.name}")
            built.append(executor.submit(build_part, part.name, plan, folder))
        entries += [entry for files in built for entry in files.result()]
        manifest = write_manifest(folder, entries, [part.name for part in parts], left_out, plan.sizes)
        progress("measuring the files")
        audit = audit_folder(folder, executor)
        (folder / AUDIT_FILE).write_text(audit.as_json(), "utf-8")
        if not only or BOOK in only:
            from boomwright.book.binding import write_book

            progress("writing the build book")
            entries += write_book(folder, plan, prediction, manifest, audit)
            manifest = write_manifest(folder, entries, manifest.parts, left_out, plan.sizes)
        progress("")
    return Made(target, plan, manifest, audit, prediction)


def build_part(name: str, plan: Plan, folder: Path) -> list[FileEntry]:
    """Build a part of a plan and write its files into a folder; what the manifest says of them."""
    return [entry for piece in PARTS[name].build(plan) for entry in write_piece(name, piece, folder)]


def _chosen(only: Sequence[str]) -> list[Part]:
    try:
        wanted = {PARTS[name].name for name in only if name != BOOK}
    except CatalogueError as error:
        raise InputFault([Fault("--only", str(error), "give a name that `boomwright show parts` lists")]) from None
    return [part for part in PARTS if not only or part.name in wanted or part.name == ALWAYS]


def _in_files(fault: InputFault, design_path: Path, shop_path: Path | None) -> InputFault:
    """Faults of the plan, each naming the file whose key it is."""
    shop_file = str(shop_path) if shop_path else "built-in shop"
    named = []
    for one in fault.faults:
        if one.path.startswith("--"):
            named.append(one)
            continue
        of_shop = one.path.split(".")[0].split("[")[0] in SHOP_SECTIONS
        named.append(one if one.file else replace(one, file=shop_file if of_shop else str(design_path)))
    return type(fault)(named)
