"""What the user wants: the design, as frozen values. Files, rules and key names live beside it, not in it."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass, field, replace
from typing import Literal

Role = Literal["reflector", "director"]
Form = Literal["straight", "folded", "loop"]
FoldPlane = Literal["flat", "upright"]
LoopShape = Literal["circle", "square"]
Section = Literal["round", "square"]
SeatKind = Literal["groove", "through"]
Bond = Literal["bonded", "insulated"]


@dataclass(frozen=True)
class Band:
    """The band of use [MHz]."""

    low_mhz: float
    high_mhz: float
    centre_mhz: float


@dataclass(frozen=True)
class Feed:
    """Where the power comes from: system impedance [ohm] and the coax by its name in the cable table."""

    system_ohm: float = 50.0
    coax: str | None = None


@dataclass(frozen=True)
class Boom:
    """The bar that carries the rods; width is its diameter or side [mm], wall 0 = solid."""

    section: Section
    width_mm: float
    material: str
    tail_mm: float
    nose_mm: float
    wall_mm: float = 0.0


@dataclass(frozen=True)
class Seat:
    """How a rod sits on the boom: in a groove, or through a hole."""

    kind: SeatKind = "groove"
    glue_gap_mm: float = 0.1
    bond: Bond = "bonded"
    sleeve_mm: float = 0.0
    hole_clearance_mm: float = 0.1


@dataclass(frozen=True)
class Rod:
    """A parasitic element. `tag` is R, D1, D2, ...; `file_index` its place in the user's file, for faults."""

    tag: str
    role: Role
    at_mm: float
    length_mm: float
    diameter_mm: float
    material: str
    coat_mm: float = 0.0
    coat_material: str | None = None
    file_index: int = field(default=0, compare=False)

    @property
    def outer_diameter_mm(self) -> float:
        """Diameter over the coat [mm]: what a notch, a groove or a hole meets."""
        return self.diameter_mm + 2.0 * self.coat_mm


def arranged(rods: Iterable[Rod]) -> tuple[Rod, ...]:
    """Rods sorted by position, tagged R and D1, D2, ... counted forward."""
    tagged: list[Rod] = []
    for rod in sorted(rods, key=lambda rod: rod.at_mm):
        directors = sum(1 for earlier in tagged if earlier.role == "director")
        tagged.append(replace(rod, tag="R" if rod.role == "reflector" else f"D{directors + 1}"))
    return tuple(tagged)


@dataclass(frozen=True)
class Driven:
    """The fed element (tag DE). Keys that its form does not use are None."""

    form: Form
    at_mm: float
    diameter_mm: float
    material: str
    gap_mm: float
    length_mm: float | None = None
    spacing_mm: float | None = None
    plane: FoldPlane | None = None
    bend_radius_mm: float | None = None
    perimeter_mm: float | None = None
    shape: LoopShape | None = None
    coat_mm: float = 0.0
    coat_material: str | None = None

    @property
    def outer_diameter_mm(self) -> float:
        """Diameter over the coat [mm]."""
        return self.diameter_mm + 2.0 * self.coat_mm


@dataclass(frozen=True)
class Adhesive:
    """What bonds the rods; the cure time is always its data sheet's."""

    name: str = "non-slump two-part adhesive"


@dataclass(frozen=True)
class Resin:
    """What fills the mould."""

    name: str = "potting resin"
    density_g_cm3: float = 1.15


@dataclass(frozen=True)
class Spec:
    """What the finished antenna must do over the whole band; None = not asked for."""

    gain_dbi_min: float | None = None
    front_to_back_db_min: float | None = None
    vswr_max: float | None = None


@dataclass(frozen=True)
class Transmitter:
    """Power at the antenna's feed [W] and share of the time on the air (0 to 1)."""

    power_w: float
    duty: float = 1.0


@dataclass(frozen=True)
class Design:
    """A whole design. Rods are sorted by position; lengths and positions are as cut and as built."""

    name: str
    band: Band
    driven: Driven
    feed: Feed = Feed()
    rods: tuple[Rod, ...] = ()
    boom: Boom | None = None
    seat: Seat | None = None
    title: str | None = None
    adhesive: Adhesive = Adhesive()
    resin: Resin = Resin()
    spec: Spec | None = None
    transmitter: Transmitter | None = None
