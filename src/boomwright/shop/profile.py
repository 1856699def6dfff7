"""What the user's machines do: the shop, as frozen values with the built-in shop as defaults."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True)
class Printer:
    """A filament printer: bed [mm], nozzle and layer [mm], clearances per side [mm], measured offsets [mm]."""

    bed_mm: tuple[float, float, float] = (220.0, 220.0, 240.0)
    nozzle_mm: float = 0.4
    layer_mm: float = 0.2
    material: str = "PETG"
    slide_clearance_mm: float = 0.15
    press_clearance_mm: float = 0.05
    outline_growth_mm: float = 0.0
    hole_shrink_mm: float = 0.10


@dataclass(frozen=True)
class Layers:
    """The layer names the laser cutter's own software expects, by operation."""

    cut: str = "CUT"
    score: str = "SCORE"
    engrave: str = "ENGRAVE"


@dataclass(frozen=True)
class Laser:
    """A laser cutter and its sheet stock [mm]."""

    sheet_mm: float = 3.0
    sheet_size_mm: tuple[float, float] = (600.0, 400.0)
    material: str = "birch plywood"
    kerf_mm: float = 0.16
    fit_mm: float = 0.0
    layers: Layers = Layers()


@dataclass(frozen=True)
class Saw:
    """What a saw cut takes [mm]."""

    kerf_mm: float = 1.0
    dress_mm: float = 0.3


@dataclass(frozen=True)
class Accuracy:
    """One standard deviation of what this shop holds."""

    length_mm: float = 0.10
    position_mm: float = 0.10
    height_mm: float = 0.10
    diameter_mm: float = 0.02
    permittivity_percent: float = 10.0


@dataclass(frozen=True)
class CradleShop:
    """Wishes for the cradle: least distance from adhesive, rail thickness along y [mm]."""

    relief_mm: float = 1.5
    rail_mm: float = 4.0


@dataclass(frozen=True)
class MouldShop:
    """Wishes for the mould: resin round every joint [mm], draft [deg], clearance of channels [mm]."""

    wall_mm: float = 3.0
    draft_deg: float = 2.0
    channel_clearance_mm: float = 0.1


@dataclass(frozen=True)
class FormerShop:
    """Wishes for the bending former."""

    springback_percent: float = 3.0


@dataclass(frozen=True)
class Bar:
    """A kind of bar on the shelf."""

    diameter_mm: float
    material: str
    length_mm: float
    count: int


@dataclass(frozen=True)
class Shop:
    """A whole shop; every field defaults to the built-in shop. No stock = buy what is needed."""

    printer: Printer = Printer()
    laser: Laser = Laser()
    saw: Saw = Saw()
    accuracy: Accuracy = Accuracy()
    cradle: CradleShop = CradleShop()
    mould: MouldShop = MouldShop()
    former: FormerShop = FormerShop()
    stock: tuple[Bar, ...] = ()
