"""A shop's calibration pieces from top to bottom: shop file, plan, files, audit, in a folder swapped in at the end."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path

from boomwright.audit import FILE as AUDIT_FILE
from boomwright.audit import SHOP_FILE, Audit, audit_folder
from boomwright.crew import crew
from boomwright.errors import InputFault
from boomwright.folder import OUTPUTS, check_replaceable, fresh_folder
from boomwright.formats.format import FileEntry
from boomwright.manifest import Manifest, write_manifest
from boomwright.output import write_piece
from boomwright.parts.coupon import COUPONS
from boomwright.pieces import IDENTITY
from boomwright.plan.coupon import CouponPlan, plan_coupon
from boomwright.shop.tomlfile import load_shop, write_shop

NAME = "coupon"
PRELOAD = ("cadquery", "boomwright.audit")


@dataclass(frozen=True)
class Coupon:
    """What a run left: the folder, the plan, the manifest, the audit."""

    folder: Path
    plan: CouponPlan
    manifest: Manifest
    audit: Audit


def make_coupon(
    shop_path: Path | None = None,
    out: Path | None = None,
    *,
    progress: Callable[[str], None] = lambda step: None,
    jobs: int = 1,
) -> Coupon:
    """Build, write and audit the calibration pieces for a shop's printer and laser.

    shop_path    the shop file, None = the built-in shop
    out          the output folder, None = outputs/coupon
    progress     called with a word or two before each step
    jobs         processes that build and measure; the files are the same whatever their number

    Raises InputFault for what the user gave, AccessError for what could not be read or written: nothing is changed.
    """
    shop = load_shop(shop_path)
    try:
        plan = plan_coupon(shop)
    except InputFault as fault:
        raise fault.in_file(str(shop_path) if shop_path else "built-in shop") from None
    target = out if out is not None else OUTPUTS / NAME
    check_replaceable(target)
    with crew(jobs, PRELOAD) as executor, fresh_folder(target) as folder:
        entries = [FileEntry(SHOP_FILE, "shop", "", "toml", "mm", IDENTITY)]
        (folder / SHOP_FILE).write_text(write_shop(shop), "utf-8")
        progress("building the calibration pieces")
        built = [executor.submit(build_piece, part.name, plan, folder) for part in COUPONS]
        entries += [entry for files in built for entry in files.result()]
        names = [part.name for part in COUPONS]
        manifest = write_manifest(folder, entries, names, {}, plan.sizes, made_from="shop")
        progress("measuring the files")
        audit = audit_folder(folder, executor)
        (folder / AUDIT_FILE).write_text(audit.as_json(), "utf-8")
        progress("")
    return Coupon(target, plan, manifest, audit)


def build_piece(name: str, plan: CouponPlan, folder: Path) -> list[FileEntry]:
    """Build a calibration piece and write its files into a folder; what the manifest says of them."""
    return [entry for piece in COUPONS[name].build(plan) for entry in write_piece(name, piece, folder)]
