"""From a variant to the design and shop it is made of: files, rescale or propose, then what it sets by key path."""

from __future__ import annotations

import hashlib
import json
import re
import tomllib
from dataclasses import asdict, dataclass
from functools import cache
from pathlib import Path
from typing import Any

import boomwright
from boomwright.design.document import parse, read_text
from boomwright.design.model import Design
from boomwright.design.tomlfile import design_from, read_design, write_design
from boomwright.errors import Fault, InputFault
from boomwright.fleet.table import Variant
from boomwright.shop.profile import Shop
from boomwright.shop.tomlfile import read_shop

_STEP = re.compile(r"([A-Za-z_][A-Za-z0-9_]*)(?:\[(\d{1,4})\])?")
_REQUEST = {"gain_min": "gain_min_dbi", "front_to_back_min": "front_to_back_min_db"}
"""Keys of the table that stand for fields of a request by another name: as the options of `propose` are called."""


@dataclass(frozen=True)
class Recipe:
    """All a variant is made of, read once by the process that runs the fleet; any other can work from it.

    design_file, shop_file  as the user named them, for messages
    design, shop            the texts; None = proposed, the built-in shop
    """

    variant: Variant
    design_file: str = ""
    design: str | None = None
    shop_file: str = ""
    shop: str | None = None

    @property
    def key(self) -> str:
        """A sum over every input and the program: the same key, the same files."""
        entry = asdict(self.variant) | {"design": self.design, "shop": self.shop, "place": ""}
        text = json.dumps({"program": program_sum(), "variant": entry}, sort_keys=True, default=str)
        return hashlib.sha256(text.encode()).hexdigest()


def recipe_of(variant: Variant, shop: Path | None = None) -> Recipe:
    """Read a variant's files; `shop` is the fleet's, for one without its own. Raises InputFault, AccessError."""
    shop = variant.shop or shop
    return Recipe(
        variant,
        str(variant.design or ""),
        None if variant.design is None else read_text(variant.design),
        str(shop or ""),
        None if shop is None else read_text(shop),
    )


@cache
def program_sum() -> str:
    """A sum over the program's version and every source and table file of it."""
    root = Path(boomwright.__file__).parent
    found = hashlib.sha256(boomwright.__version__.encode())
    for path in sorted(root.rglob("*")):
        if path.is_file() and path.suffix != ".pyc":
            found.update(path.relative_to(root).as_posix().encode() + b"\0" + path.read_bytes())
    return found.hexdigest()


def design_and_shop(recipe: Recipe) -> tuple[Design, Shop]:
    """Work a variant out. Raises InputFault naming its files, keys or its place in the table."""
    variant = recipe.variant
    shop = Shop() if recipe.shop is None else read_shop(recipe.shop, recipe.shop_file)
    if variant.propose is not None:
        document = _document(_proposed(variant, shop))
    else:
        assert recipe.design is not None
        document = parse(recipe.design, recipe.design_file)
        if variant.rescale is not None:
            from boomwright.search.carry import Target
            from boomwright.search.rescale import rescale

            design = read_design(recipe.design, recipe.design_file)
            document = _document(rescale(design, Target(**variant.rescale), shop).design)
    document["name"] = variant.name
    for path, value in variant.changes.items():
        _set(document, path, value, f"{variant.place}.set")
    return design_from(document, recipe.design_file or f"{variant.name} (proposed)"), shop


def _proposed(variant: Variant, shop: Shop) -> Design:
    from boomwright.search.propose import propose
    from boomwright.search.request import Request, band_of, form_of

    assert variant.propose is not None
    keys = {_REQUEST.get(key, key): value for key, value in variant.propose.items() if value is not None}
    low_mhz, high_mhz = band_of(keys.pop("band"))
    form = form_of(keys.pop("driven", None))
    return propose(Request(low_mhz, high_mhz, driven=form, name=variant.name, **keys), shop).design


def _document(design: Design) -> dict[str, Any]:
    """A design as a parsed document, its rods in the order of the file it came from."""
    document = tomllib.loads(write_design(design))
    order = sorted(range(len(design.rods)), key=lambda i: design.rods[i].file_index)
    if "rod" in document:
        document["rod"] = [document["rod"][i] for i in order]
    return document


def _set(document: dict[str, Any], path: str, value: object, place: str) -> None:
    """Put a value at a key path (`boom.material`, `rod[2].length_mm`); the design's own rules judge it afterwards."""
    here: Any = document
    steps = [_STEP.fullmatch(step) for step in path.split(".")]
    for number, step in enumerate(steps):
        if step is None:
            raise InputFault([Fault(f'{place}."{path}"', "is not a key path", "write it as boom.material")])
        name, index = step[1], step[2]
        last = number == len(steps) - 1
        if last and index is None:
            here[name] = value
            return
        here = here.setdefault(name, [] if index is not None else {})
        if index is not None:
            if not isinstance(here, list) or int(index) >= len(here):
                count = len(here) if isinstance(here, list) else 0
                found = f"{name} has {count} entries, counted from 0"
                raise InputFault([Fault(f'{place}."{path}"', found, "name one that the design has")])
            if last:
                here[int(index)] = value
                return
            here = here[int(index)]
        if not isinstance(here, dict):
            raise InputFault([Fault(f'{place}."{path}"', f"{name} is no table", "name a key of the design file")])
