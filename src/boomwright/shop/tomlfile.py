"""The shop file: its keys, declared once, and the way from text to Shop and back."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path
from typing import Any

from boomwright.data.tables import conductor_names, material_names, refused_sheet
from boomwright.design.document import escaped, parse, read_text
from boomwright.design.keys import LEAST_MM, MOST_MM, Key, Table
from boomwright.design.reader import read_table
from boomwright.design.writer import table_text
from boomwright.errors import Fault, InputFault, ShopFault
from boomwright.shop.profile import (
    Accuracy,
    Bar,
    CradleShop,
    FormerShop,
    Laser,
    Layers,
    MouldShop,
    Printer,
    Saw,
    Shop,
)

MOST_STOCK = 1000
_LAYER_PATTERN = (r"[A-Za-z0-9 _$.+-]{1,64}", "1 to 64 of the characters A-Z, a-z, 0-9, space, _ $ . + -")


def _mm(name: str, what: str, low: float, high: float, default: float) -> Key:
    return Key(name, "number", "a length", what, "mm", low, high, default)


def _layer(name: str, what: str) -> Key:
    default: str = getattr(Layers, name)
    return Key(name, "text", "a layer name", what, high=64, default=default, pattern=_LAYER_PATTERN)


PRINTER = Table(
    "printer",
    "the 3D printer",
    (
        Key(
            "bed_mm", "numbers", "a bed's size", "the printable x, y and z", "mm", 10.0, 10_000.0,
            Printer.bed_mm, count=3,
        ),
        _mm("nozzle_mm", "the nozzle's bore", 0.05, 5.0, Printer.nozzle_mm),
        _mm("layer_mm", "the layer height", 0.01, 5.0, Printer.layer_mm),
        Key("material", "name", "a known material", "the filament", names=material_names, default=Printer.material),
        _mm("slide_clearance_mm", "the clearance per side of parts that slide", 0.0, 2.0, Printer.slide_clearance_mm),
        _mm("press_clearance_mm", "the clearance per side of parts that stay", 0.0, 2.0, Printer.press_clearance_mm),
        _mm("outline_growth_mm", "the printed outline minus the drawn, per side", -1.0, 1.0, Printer.outline_growth_mm),
        _mm("hole_shrink_mm", "the drawn hole minus the printed, on the diameter", -1.0, 2.0, Printer.hole_shrink_mm),
    ),
    absent="defaults",
)  # fmt: skip
LAYERS = Table(
    "layers",
    "the layer names that the cutter's own software expects",
    (
        _layer("cut", "the layer of cuts"),
        _layer("score", "the layer of scored lines"),
        _layer("engrave", "the layer of engraved areas"),
    ),
    absent="defaults",
)
LASER = Table(
    "laser",
    "the laser cutter",
    (
        _mm("sheet_mm", "the sheet's thickness", 0.2, 50.0, Laser.sheet_mm),
        Key(
            "sheet_size_mm", "numbers", "a sheet's size", "the sheet's x and y", "mm", 10.0, 10_000.0,
            Laser.sheet_size_mm, count=2,
        ),
        Key("material", "text", "a material", "the sheet's material", high=64, default=Laser.material),
        _mm("kerf_mm", "the width that the beam takes", 0.0, 2.0, Laser.kerf_mm),
        _mm("fit_mm", "the extra play in slots, negative = tighter", -1.0, 2.0, Laser.fit_mm),
    ),
    (LAYERS,),
    absent="defaults",
)  # fmt: skip
SAW = Table(
    "saw",
    "the saw",
    (
        _mm("kerf_mm", "the width that the blade takes", 0.0, 20.0, Saw.kerf_mm),
        _mm("dress_mm", "what is left at each end for dressing square", 0.0, 50.0, Saw.dress_mm),
    ),
    absent="defaults",
)
ACCURACY = Table(
    "accuracy",
    "one standard deviation of what the shop holds",
    (
        _mm("length_mm", "the error of a cut length", 0.0, 100.0, Accuracy.length_mm),
        _mm("position_mm", "the error of a position along the boom", 0.0, 100.0, Accuracy.position_mm),
        _mm("height_mm", "the error of a height over the datum plane", 0.0, 100.0, Accuracy.height_mm),
        _mm("diameter_mm", "the error of a rod's diameter", 0.0, 100.0, Accuracy.diameter_mm),
        Key(
            "permittivity_percent", "number", "a percentage", "the uncertainty of permittivities", "%", 0.0, 100.0,
            Accuracy.permittivity_percent,
        ),
    ),
    absent="defaults",
)  # fmt: skip
CRADLE = Table(
    "cradle",
    "wishes for the cradle",
    (
        _mm("relief_mm", "the least distance of the cradle from any adhesive film", 0.1, 50.0, CradleShop.relief_mm),
        _mm("rail_mm", "the rail's thickness along y", 2.0, 100.0, CradleShop.rail_mm),
    ),
    absent="defaults",
)
MOULD = Table(
    "mould",
    "wishes for the mould",
    (
        _mm("wall_mm", "the resin round every joint", 1.5, 50.0, MouldShop.wall_mm),
        Key(
            "draft_deg", "number", "an angle", "the draft of the cavity's faces", "deg", 0.0, 15.0, MouldShop.draft_deg
        ),
        _mm("channel_clearance_mm", "the clearance of channels", 0.0, 2.0, MouldShop.channel_clearance_mm),
    ),
    absent="defaults",
)
FORMER = Table(
    "former",
    "wishes for the bending former",
    (
        Key(
            "springback_percent", "number", "a percentage", "the spring-back of the bent wire", "%", 0.0, 50.0,
            FormerShop.springback_percent,
        ),
    ),
    absent="defaults",
)  # fmt: skip
STOCK = Table(
    "stock",
    "bars on the shelf",
    (
        Key("diameter_mm", "number", "a diameter", "the bar's diameter", "mm", LEAST_MM, 1000.0),
        Key("material", "name", "a known conductor", "the bar's material", names=conductor_names),
        Key("length_mm", "number", "a length", "the bar's length", "mm", LEAST_MM, MOST_MM),
        Key("count", "whole", "a count", "the number of such bars", "", 0, 10_000),
    ),
    most=MOST_STOCK,
)
SHOP = Table(
    "shop",
    "what the machines of a workshop do",
    (Key("schema", "whole", "a schema this version reads", "the version of the file's form", "", 1, 1, 1),),
    (PRINTER, LASER, SAW, ACCURACY, CRADLE, MOULD, FORMER, STOCK),
)


def load_shop(path: Path | None = None) -> Shop:
    """The shop in a file, or the built-in shop for None.

    Raises InputFault (no such file), ShopFault with every fault, AccessError.
    """
    return Shop() if path is None else read_shop(read_text(path), escaped(str(path)))


def read_shop(text: str, file: str = "shop.toml") -> Shop:
    """The shop in a TOML text; `file` names it in faults. Raises ShopFault with every fault found."""
    try:
        document = parse(text, file)
    except InputFault as fault:
        raise ShopFault(fault.faults) from None
    faults: list[Fault] = []
    shop = _draft(read_table(SHOP, document, "", faults))
    faults += _rule_faults(shop)
    if faults:
        raise ShopFault(replace(fault, file=file) for fault in faults)
    return shop


def write_shop(shop: Shop) -> str:
    """A shop as normalised TOML, every key in its place; reads back equal."""
    return table_text(SHOP, shop, {"schema": 1})


def _draft(values: dict[str, Any]) -> Shop:
    laser = dict(values["laser"])
    laser["layers"] = Layers(**laser["layers"])
    return Shop(
        printer=Printer(**values["printer"]),
        laser=Laser(**laser),
        saw=Saw(**values["saw"]),
        accuracy=Accuracy(**values["accuracy"]),
        cradle=CradleShop(**values["cradle"]),
        mould=MouldShop(**values["mould"]),
        former=FormerShop(**values["former"]),
        stock=tuple(Bar(**bar) for bar in values["stock"]),
    )


def _rule_faults(shop: Shop) -> list[Fault]:
    """Rules between keys; a value that could not be read is NaN or empty and breaks none."""
    faults, layers = [], shop.laser.layers
    if shop.printer.layer_mm > shop.printer.nozzle_mm:
        found = f"{shop.printer.layer_mm:g} is more than the nozzle's {shop.printer.nozzle_mm:g}"
        faults.append(Fault("printer.layer_mm", found, "give a layer height below the nozzle's bore"))
    refused = refused_sheet(shop.laser.material)
    if refused is not None:
        found = f'"{shop.laser.material}" must not be laser cut: {refused.reason}'
        faults.append(Fault("laser.material", found, "choose another sheet, for instance birch plywood"))
    for name, others in (("score", [layers.cut]), ("engrave", [layers.cut, layers.score])):
        layer = getattr(layers, name)
        if layer and layer.casefold() in [other.casefold() for other in others]:
            found = f'"{layer}" names another operation too'
            faults.append(Fault(f"laser.layers.{name}", found, "give each operation its own layer name"))
    return faults
