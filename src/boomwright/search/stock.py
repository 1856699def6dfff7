"""What a proposal is made of: rods, wire and boom, chosen from the shelf or from common sizes by the wavelength."""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass, replace

from boomwright.design.model import Boom, Driven, Form, Seat
from boomwright.plan.seat import WEB_PER_RADIUS
from boomwright.shop.profile import Bar, Shop
from boomwright.units import wavelength_mm

ROD_WL, WIDE_ROD_WL = 0.0085, 0.0165
"""Wished diameters [wavelengths]: that of the published arrays, and one for wide bands, which thicker rods hold."""

WIRE_WL = 0.009
"""The same for a wire that bends into a folded element."""

STIFF_ROD_MM, STIFF_ROD_WL = 1.3, 0.03
"""A thinner rod bends in the hand: it is wished at least so thick, where the wavelength allows it."""

NARROW, WIDE = 0.015, 0.04
"""Relative bandwidths between which rods are chosen thicker."""

ROD_SIZES_MM = (1.0, 1.5, 2.0, 3.0, 4.0, 5.0, 6.0, 8.0)
WIRE_SIZES_MM = (0.6, 0.8, 1.0, 1.5, 2.0, 3.0, 4.0, 5.0, 6.0)
BOOM_SIZES_MM = (5.0, 6.0, 8.0, 10.0, 12.0, 15.0, 18.0, 20.0, 25.0, 30.0, 35.0, 40.0, 50.0, 60.0, 80.0, 100.0)
"""Sizes on sale [mm] (common practice)."""

ROD_MATERIAL = "aluminium"
"""On sale as rod in all these sizes, light, and at several gigahertz it loses less than brass (common practice)."""

SOLDERED_UP_TO_MM = 3.0
"""A straight driven rod up to this diameter is of copper, so that the feed can be soldered to it."""

BOOM_SLENDERNESS = 80.0
BOOM_MOST_FOR_LENGTH_MM = 40.0
BOOM_PER_DEPTH = 2.4
FINE_ABOVE_MHZ = 3000.0
GAP_WL, LEAST_GAP_MM, MOST_GAP_MM = 0.012, 1.5, 12.0
MOST_SPACING_MM = 80.0
LEAST_BEND_DIAMETERS = 4.1
"""Spacing of a folded element in diameters: bends of its wire stay above four radii, where the equations hold."""

SEATING_MM = 1.5
SADDLE_MM = 14.0
"""Boom beyond the outermost seat: the cradle's relief and saddle."""


@dataclass(frozen=True)
class Stock:
    """What an array is made of, apart from its lengths and places.

    driven  a template: form, wire, gap, spacing; lengths are filled in later
    """

    reflector_mm: float
    reflector_material: str
    director_mm: float
    director_material: str
    driven: Driven
    boom: Boom
    seat: Seat
    step_mm: float

    @property
    def spacing_mm(self) -> float:
        """How far the driven element reaches ahead of its fed conductor's axis [mm]."""
        return self.driven.spacing_mm or 0.0 if self.driven.form == "folded" else 0.0


@dataclass(frozen=True)
class Wish:
    """What the user asked of the stock; None = free. Lengths [mm].

    boom_mm         the expected length of the array
    relative_width  of the band
    """

    centre_mhz: float
    boom_mm: float
    relative_width: float = 0.0
    rod_mm: float | None = None
    reflector_mm: float | None = None
    boom_width_mm: float | None = None


def step_of_mm(centre_mhz: float) -> float:
    """What a workshop can cut to at a frequency [MHz]: a tenth of a millimetre, half of it above 3 GHz."""
    return 0.05 if centre_mhz > FINE_ABOVE_MHZ else 0.1


def choose_stock(wish: Wish, form: Form, spacing_wl: float, shop: Shop) -> Stock:
    """Stock for an array.

    wish        what the user asked for
    form        of the driven element
    spacing_wl  of a folded one, at least [wavelengths]
    shop        its shelf is preferred
    """
    wave = wavelength_mm(wish.centre_mhz)
    share = min(max((wish.relative_width - NARROW) / (WIDE - NARROW), 0.0), 1.0)
    free_mm = max((ROD_WL + share * (WIDE_ROD_WL - ROD_WL)) * wave, min(STIFF_ROD_MM, STIFF_ROD_WL * wave))
    director, material = _rod(wish.rod_mm, free_mm, shop.stock)
    reflector, reflector_material = director, material
    if wish.reflector_mm is not None:
        reflector, reflector_material = _rod(wish.reflector_mm, wish.reflector_mm, shop.stock)
    glue = 0.05 if wish.centre_mhz > FINE_ABOVE_MHZ else 0.1
    wire_mm = director if form == "straight" else WIRE_WL * wave
    driven = _driven(form, wave, spacing_wl, (wire_mm, shop.stock))
    thickest = max(director, reflector, driven.diameter_mm if form != "loop" else 0.0)
    depth = thickest + glue
    width = wish.boom_width_mm
    if width is None:
        slender = min(wish.boom_mm / BOOM_SLENDERNESS, BOOM_MOST_FOR_LENGTH_MM)
        least = max(BOOM_PER_DEPTH * depth, slender)
        width = next((size for size in BOOM_SIZES_MM if size >= least), math.ceil(least))
    end = math.ceil(thickest / 2.0 + glue + shop.cradle.relief_mm + SADDLE_MM)
    boom = Boom("round" if width <= 15.0 else "square", float(width), "beech", float(end), float(end))
    return Stock(
        reflector, reflector_material, director, material, driven, boom, Seat(glue_gap_mm=glue),
        step_of_mm(wish.centre_mhz),
    )  # fmt: skip


def least_web_gap_mm(first_mm: float, second_mm: float, glue_mm: float) -> float:
    """Least distance of two seats' axes [mm] for conductors of these diameters: the web between the grooves stays."""
    a, b = first_mm / 2.0 + glue_mm, second_mm / 2.0 + glue_mm
    return a + b + WEB_PER_RADIUS * max(a, b)


def _rod(wished_mm: float | None, free_mm: float, shelf: tuple[Bar, ...]) -> tuple[float, str]:
    """Diameter and material of rods: the shelf's nearest, or a common size."""
    if wished_mm is not None:
        held = [bar for bar in shelf if abs(bar.diameter_mm - wished_mm) < 1e-9]
        return wished_mm, held[0].material if held else ROD_MATERIAL
    if shelf:
        bar = min(shelf, key=lambda bar: (_apart(bar.diameter_mm, free_mm), bar.material))
        return bar.diameter_mm, bar.material
    return nearest_size_mm(ROD_SIZES_MM, free_mm), ROD_MATERIAL


def _driven(form: Form, wave_mm: float, spacing_wl: float, near: tuple[float, tuple[Bar, ...]]) -> Driven:
    wish, shelf = near
    if shelf:
        bar = min(shelf, key=lambda bar: (_apart(bar.diameter_mm, wish), bar.material != "copper", bar.material))
        wire, material = bar.diameter_mm, bar.material
    elif form == "straight":
        wire, material = wish, "copper" if wish <= SOLDERED_UP_TO_MM else ROD_MATERIAL
    else:
        wire, material = nearest_size_mm(WIRE_SIZES_MM, wish), "copper"
    gap = round(2.0 * min(max(GAP_WL * wave_mm, LEAST_GAP_MM, 1.5 * wire), MOST_GAP_MM)) / 2.0
    driven = Driven(form, 0.0, wire, material, gap)
    if form == "folded":
        wished = max(min(spacing_wl * wave_mm, MOST_SPACING_MM), LEAST_BEND_DIAMETERS * wire)
        parts = 10.0 if wave_mm < wavelength_mm(FINE_ABOVE_MHZ) else 2.0
        return replace(driven, spacing_mm=math.ceil(parts * wished - 1e-9) / parts, plane="flat")
    if form == "loop":
        return replace(driven, shape="square")
    return driven


def _apart(size_mm: float, wish_mm: float) -> float:
    return abs(math.log(size_mm / wish_mm))


def nearest_size_mm(sizes_mm: Iterable[float], wish_mm: float) -> float:
    """The size nearest to a wish, by ratio [mm]."""
    return min(sizes_mm, key=lambda size: _apart(size, wish_mm))
