"""Runs without files: the manifest of what a design's parts would write, and no audit."""

from functools import lru_cache

from boomwright.book.run import Run
from boomwright.design.model import Design
from boomwright.formats.format import FileEntry
from boomwright.manifest import Manifest
from boomwright.parts.catalogue import PARTS
from boomwright.pieces import IDENTITY
from boomwright.plan.plan import make_plan
from boomwright.prediction import predict
from boomwright.shop.profile import Shop

SHOP = Shop()
FILES = {
    "print": ("stl",),
    "laser": ("dxf",),
    "cnc": ("step",),
    "bench": ("csv",),
    "rf": ("svg",),
    "assembly": ("step",),
}


@lru_cache(maxsize=16)
def run_of(design: Design, shop: Shop = SHOP, without: tuple[str, ...] = ()) -> Run:
    """A run that made every part the design can have, but `without` these, asked for by nobody."""
    plan = make_plan(design, shop)
    left_out = {part.name: why for part in PARTS if (why := part.left_out(plan)) is not None}
    made = [part for part in PARTS if part.name not in left_out and part.name not in without]
    entries = [
        FileEntry(f"{process}/{part.name}-1.{suffix}", part.name, process, suffix, "mm", IDENTITY)
        for part in made
        for process in part.processes
        for suffix in FILES[process]
    ]
    manifest = Manifest(tuple(entries), {}, tuple(part.name for part in made), left_out, plan.sizes)
    volumes = {f"{part.name}-1": 1000.0 * (1 + i) for i, part in enumerate(made) if "print" in part.processes}
    return Run(plan, predict(design), manifest, None, volumes)
