"""The fleet table: its keys, declared once, and the way from text to variants."""

from __future__ import annotations

from collections import Counter
from dataclasses import dataclass, field, replace
from pathlib import Path
from typing import Any

from boomwright.design.document import escaped, is_table, parse, read_text, shown
from boomwright.design.keys import LEAST_MM, MOST_MM, Key, Table
from boomwright.design.reader import read_table
from boomwright.errors import Fault, InputFault

MOST_VARIANTS = 1000
TAKEN_NAMES = ("index", "fleet")
_NAME = ("[a-z0-9-]+", "1 to 64 of the characters a-z, 0-9 and -")


def _mm(name: str, what: str) -> Key:
    return Key(name, "number", "a length", what, "mm", LEAST_MM, MOST_MM, None)


RESCALE = Table(
    "rescale",
    "carry the design to another band and stock",
    (
        Key("to_mhz", "number", "a frequency", "the new centre of the band", "MHz", 10.0, 20_000.0),
        _mm("rod_mm", "the new rods' diameter"),
        _mm("boom_width_mm", "the new boom's diameter or side"),
    ),
)
PROPOSE = Table(
    "propose",
    "find a design for a band, as the command of that name does",
    (
        Key("band", "text", "a band", "LOW:HIGH in MHz", high=40),
        _mm("boom_mm", "the distance from reflector to last director"),
        Key("rods", "whole", "a number", "the number of rods", "", 1, 64, None),
        _mm("rod_mm", "the rods' diameter"),
        _mm("reflector_mm", "the reflector's diameter"),
        _mm("boom_width_mm", "the boom's diameter or side"),
        Key("driven", "text", "a form", "straight, folded or loop", high=20, default=None),
        Key("ohm", "number", "an impedance", "the system impedance", "ohm", 1.0, 10_000.0, 50.0),
        Key("gain_min", "number", "a gain", "the least gain", "dBi", -30.0, 40.0, None),
        Key("front_to_back_min", "number", "a ratio", "the least front-to-back ratio", "dB", 0.0, 100.0, None),
        Key("vswr_max", "number", "a standing wave ratio", "the greatest standing wave ratio", "", 1.001, 100.0, None),
        Key("seed", "whole", "a seed", "the seed of the starts", "", 0, 2**31 - 1, 0),
    ),
)
VARIANT = Table(
    "variant",
    "one antenna of the fleet",
    (
        Key("name", "text", "a name", "the variant's name and folder", high=64, pattern=_NAME),
        Key("design", "text", "a path", "the design file, relative to the table", high=1000, default=None),
        Key("shop", "text", "a path", "the shop file, relative to the table", high=1000, default=None),
    ),
    (RESCALE, PROPOSE),
    most=MOST_VARIANTS,
)
FLEET = Table(
    "fleet",
    "a table of variants",
    (Key("schema", "whole", "a schema this version reads", "the version of the file's form", "", 1, 1),),
    (VARIANT,),
)


@dataclass(frozen=True)
class Variant:
    """One antenna of the fleet.

    design   its design file; None = it is proposed
    shop     its shop file; None = the fleet's
    rescale  keys of the table's `rescale`, or None
    propose  keys of the table's `propose`, or None
    changes  values by key path of the design file, made last
    place    key path of its entry in the table
    """

    name: str
    design: Path | None
    shop: Path | None
    rescale: dict[str, Any] | None = None
    propose: dict[str, Any] | None = None
    changes: dict[str, Any] = field(default_factory=dict)
    place: str = ""


def load_table(path: Path) -> tuple[Variant, ...]:
    """The variants of a table file, in its order. Raises InputFault with every fault of the table, AccessError."""
    return read_fleet(read_text(path), path.parent, escaped(str(path)))


def read_fleet(text: str, folder: Path, file: str = "fleet.toml") -> tuple[Variant, ...]:
    """The variants of a TOML text.

    folder  what paths are relative to
    file    names the table in faults

    Raises InputFault with every fault found.
    """
    document, faults = parse(text, file), list[Fault]()
    changes = _taken_changes(document, faults)
    values = read_table(FLEET, document, "", faults)["variant"]
    if not values and not faults:
        faults.append(Fault("variant", "missing", "add a [[variant]] for each antenna, with name and design"))
    for index, value in enumerate(values):
        faults += _variant_faults(value, f"variant[{index}]")
    names = Counter(value["name"] for value in values if value["name"])
    for index, value in enumerate(values):
        if names[value["name"]] > 1:
            found = f'"{value["name"]}" is the name of {names[value["name"]]} variants'
            faults.append(Fault(f"variant[{index}].name", found, "give each variant a name of its own"))
    if faults:
        raise InputFault(replace(fault, file=file) for fault in faults)
    return tuple(_variant(value, changes[i], folder, f"variant[{i}]") for i, value in enumerate(values))


def _taken_changes(document: dict[str, Any], faults: list[Fault]) -> list[dict[str, Any]]:
    """Each variant's `set`, taken out of the document: its keys are those of the design file, judged there."""
    entries = document.get("variant")
    found = []
    for index, entry in enumerate(entries if isinstance(entries, list) else []):
        given = entry.pop("set", {}) if is_table(entry) else {}
        if not is_table(given):
            fix = 'write it as { "boom.material" = "birch" }'
            faults.append(Fault(f"variant[{index}].set", f"{shown(given)} is not a table", fix))
            given = {}
        found.append(given)
    return found


def _variant_faults(value: dict[str, Any], place: str) -> list[Fault]:
    faults = []
    if (value["design"] is None) == (value["propose"] is None):
        found = "neither design nor propose" if value["design"] is None else "both design and propose"
        faults.append(Fault(place, found, "give one of them: a design file, or what to propose"))
    if value["rescale"] is not None and value["propose"] is not None:
        faults.append(Fault(f"{place}.rescale", "beside propose", "propose for the band that is wanted"))
    if value["name"] in TAKEN_NAMES:
        faults.append(Fault(f"{place}.name", f'"{value["name"]}" is a file of the fleet', "give it another name"))
    return faults


def _variant(value: dict[str, Any], changes: dict[str, Any], folder: Path, place: str) -> Variant:
    paths = {key: None if value[key] is None else folder / value[key] for key in ("design", "shop")}
    return Variant(value["name"], paths["design"], paths["shop"], value["rescale"], value["propose"], changes, place)
