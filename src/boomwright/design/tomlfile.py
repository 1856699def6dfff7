"""The design file: its keys, declared once, and the way from text to Design and back."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path
from typing import Any

from boomwright.data.tables import boom_material_names, cable_names, conductor_names, material_names
from boomwright.design.document import escaped, parse, read_text
from boomwright.design.keys import LEAST_MM, MOST_MM, REQUIRED, Default, Key, Only, Table
from boomwright.design.model import (
    Adhesive,
    Band,
    Boom,
    Design,
    Driven,
    Feed,
    Resin,
    Rod,
    Seat,
    Spec,
    Transmitter,
    arranged,
)
from boomwright.design.reader import read_table
from boomwright.design.rules import design_faults
from boomwright.design.writer import table_text
from boomwright.errors import DesignFault, Fault, InputFault

LEAST_MHZ = 10.0
MOST_MHZ = 20_000.0
MOST_RODS = 64


def _length(
    name: str, what: str, *, noun: str = "a length", default: Default = REQUIRED, only: Only | None = None
) -> Key:
    return Key(name, "number", noun, what, "mm", LEAST_MM, MOST_MM, default, only=only)


def _thickness(name: str, what: str, *, default: Default, only: Only | None = None) -> Key:
    return Key(name, "number", "a thickness", what, "mm", 0.0, 1000.0, default, only=only)


def _diameter(what: str) -> Key:
    return Key("diameter_mm", "number", "a diameter", what, "mm", LEAST_MM, 1000.0)


def _position(name: str, what: str) -> Key:
    return Key(name, "number", "a position", what, "mm", -MOST_MM, MOST_MM)


def _frequency(name: str, what: str, *, default: Default = REQUIRED) -> Key:
    return Key(name, "number", "a frequency", what, "MHz", LEAST_MHZ, MOST_MHZ, default)


def _one_of(name: str, what: str, names: tuple[str, ...], default: Default = REQUIRED, only: Only | None = None) -> Key:
    return Key(name, "name", f"a {name}", what, names=lambda: names, default=default, only=only)


def _free_text(name: str, what: str, default: Default) -> Key:
    return Key(name, "text", "a text", what, high=200, default=default)


_COAT = (
    _thickness("coat_mm", "the thickness of paint or insulation", default=0.0),
    Key("coat_material", "name", "a known material", "the coat's material", names=material_names, default=None),
)
_CONDUCTOR = Key("material", "name", "a known conductor", "the conductor", names=conductor_names)
_STRAIGHT_OR_FOLDED = Only("form", ("straight", "folded"))
_FOLDED = Only("form", ("folded",))
_FOLDED_OR_LOOP = Only("form", ("folded", "loop"))
_LOOP = Only("form", ("loop",))
_GROOVE = Only("kind", ("groove",))
_THROUGH = Only("kind", ("through",))

BAND = Table(
    "band",
    "the band of use",
    (
        _frequency("low_mhz", "the lowest frequency of the band"),
        _frequency("high_mhz", "the highest frequency of the band"),
        _frequency("centre_mhz", "the design frequency", default=None),
    ),
    absent="fault",
)
FEED = Table(
    "feed",
    "where the power comes from",
    (
        Key("system_ohm", "number", "an impedance", "the system impedance", "ohm", 1.0, 10_000.0, 50.0),
        Key("coax", "name", "a known cable", "the coaxial cable", names=cable_names, default=None),
    ),
    absent="defaults",
)
BOOM = Table(
    "boom",
    "the bar that carries the rods",
    (
        _one_of("section", "the boom's cross-section", ("round", "square")),
        Key("width_mm", "number", "a width", "the boom's diameter or side", "mm", LEAST_MM, 1000.0),
        Key("wall_mm", "number", "a thickness", "the boom's wall, 0 = solid", "mm", 0.0, 500.0, 0.0),
        Key("material", "name", "a known material", "the boom's material", names=boom_material_names),
        _length("tail_mm", "the length of boom behind the rearmost axis"),
        _length("nose_mm", "the length of boom ahead of the foremost axis"),
    ),
)
SEAT = Table(
    "seat",
    "how a rod sits on the boom",
    (
        _one_of("kind", "how a rod sits on the boom", ("groove", "through"), "groove"),
        Key("glue_gap_mm", "number", "a gap", "the adhesive film in the groove", "mm", 0.0, 10.0, 0.1, only=_GROOVE),
        _one_of("bond", "how a rod meets the boom", ("bonded", "insulated"), "bonded", _THROUGH),
        _thickness("sleeve_mm", "the sleeve's wall", default=0.0, only=Only("bond", ("insulated",))),
        Key(
            "hole_clearance_mm", "number", "a clearance", "the play in the hole, on the diameter", "mm", 0.0, 10.0, 0.1,
            only=_THROUGH,
        ),
    ),
)  # fmt: skip
ROD = Table(
    "rod",
    "one for every reflector and director",
    (
        _one_of("role", "the rod's role", ("reflector", "director")),
        _position("at_mm", "the axis position along the boom"),
        _length("length_mm", "the tip-to-tip length"),
        _diameter("the rod's diameter without coat"),
        _CONDUCTOR,
        *_COAT,
    ),
    most=MOST_RODS,
    field="rods",
)
DRIVEN = Table(
    "driven",
    "the fed element",
    (
        _one_of("form", "the driven element's form", ("straight", "folded", "loop")),
        _position("at_mm", "the position of the fed conductor's axis along the boom"),
        _diameter("the conductor's diameter without coat"),
        _CONDUCTOR,
        _length("gap_mm", "the opening at the feed", noun="a gap"),
        _length("length_mm", "the tip-to-tip length over the outside", only=_STRAIGHT_OR_FOLDED),
        _length("spacing_mm", "the distance between the two conductors' axes", noun="a spacing", only=_FOLDED),
        _one_of("plane", "the plane of the fold", ("flat", "upright"), only=_FOLDED),
        _length("perimeter_mm", "the closed centreline of the loop", only=_LOOP),
        _one_of("shape", "the loop's shape", ("circle", "square"), only=_LOOP),
        _length("bend_radius_mm", "the inside bend radius", noun="a radius", default=None, only=_FOLDED_OR_LOOP),
        *_COAT,
    ),
    absent="fault",
)
ADHESIVE = Table(
    "adhesive", "what bonds the rods", (_free_text("name", "the adhesive's name", Adhesive.name),), absent="defaults"
)
RESIN = Table(
    "resin",
    "what fills the mould",
    (
        _free_text("name", "the resin's name", Resin.name),
        Key("density_g_cm3", "number", "a density", "the cured density", "g/cm3", 0.1, 25.0, Resin.density_g_cm3),
    ),
    absent="defaults",
)
SPEC = Table(
    "spec",
    "what the finished antenna must do over the whole band",
    (
        Key("gain_dbi_min", "number", "a gain", "the least gain", "dBi", -30.0, 40.0, None),
        Key("front_to_back_db_min", "number", "a ratio", "the least front-to-back ratio", "dB", 0.0, 100.0, None),
        Key("vswr_max", "number", "a standing wave ratio", "the greatest standing wave ratio", "", 1.001, 100.0, None),
    ),
)
TRANSMITTER = Table(
    "transmitter",
    "for the exposure distances",
    (
        Key("power_w", "number", "a power", "the power at the feed", "W", 1e-6, 1e6),
        Key("duty", "number", "a share of time", "the share of time on the air", "", 0.0, 1.0, 1.0),
    ),
)
DESIGN = Table(
    "design",
    "an electrical design of a small beam antenna",
    (
        Key("schema", "whole", "a schema this version reads", "the version of the file's form", "", 1, 1),
        Key(
            "name",
            "text",
            "a name",
            "the name of the output folder",
            high=64,
            pattern=("[a-z0-9-]+", "1 to 64 of the characters a-z, 0-9 and -"),
        ),
        _free_text("title", "the title printed in the build book", None),
    ),
    (BAND, FEED, BOOM, SEAT, ROD, DRIVEN, ADHESIVE, RESIN, SPEC, TRANSMITTER),
)


def load_design(path: Path) -> Design:
    """The design in a file. Raises InputFault (no such file), DesignFault with every fault, AccessError."""
    return read_design(read_text(path), escaped(str(path)))


def read_design(text: str, file: str = "design.toml") -> Design:
    """The design in a TOML text; `file` names it in faults. Raises DesignFault with every fault found."""
    try:
        document = parse(text, file)
    except InputFault as fault:
        raise DesignFault(fault.faults) from None
    return design_from(document, file)


def design_from(document: dict[str, Any], file: str = "design.toml") -> Design:
    """The design in a parsed document. Raises DesignFault with every fault found, each naming `file`."""
    faults: list[Fault] = []
    draft = _draft(read_table(DESIGN, document, "", faults))
    faults += design_faults(draft)
    if faults:
        raise DesignFault(replace(fault, file=file) for fault in faults)
    return replace(draft, rods=arranged(draft.rods))


def write_design(design: Design) -> str:
    """A design as normalised TOML: every key in its place, rods sorted; reads back equal."""
    return table_text(DESIGN, design, {"schema": 1})


def _draft(values: dict[str, Any]) -> Design:
    """The design of whatever could be read; rods keep the file's order until they are known to be sound."""
    band = dict(values["band"])
    if band["centre_mhz"] is None:
        band["centre_mhz"] = (band["low_mhz"] + band["high_mhz"]) / 2.0
    boom = Boom(**values["boom"]) if values["boom"] is not None else None
    seat = Seat(**values["seat"]) if values["seat"] is not None else None
    return Design(
        name=values["name"],
        title=values["title"],
        band=Band(**band),
        feed=Feed(**values["feed"]),
        boom=boom,
        seat=seat if seat is not None or boom is None else Seat(),
        rods=tuple(Rod(tag="", file_index=index, **rod) for index, rod in enumerate(values["rod"])),
        driven=Driven(**values["driven"]),
        adhesive=Adhesive(**values["adhesive"]),
        resin=Resin(**values["resin"]),
        spec=Spec(**values["spec"]) if values["spec"] is not None else None,
        transmitter=Transmitter(**values["transmitter"]) if values["transmitter"] is not None else None,
    )
