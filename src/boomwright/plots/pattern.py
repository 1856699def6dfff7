"""A pattern cut: gain against direction, round, with rings that are equal steps in decibels."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

from boomwright.plots.sheet import MARGIN, TOP, WIDTH, Sheet, number

RADIUS = 142.0
MIDDLE_X, MIDDLE_Y = WIDTH / 2.0, TOP + RADIUS + 34.0
DEPTH_DB = 40.0
RING_DB, TOP_STEP_DB = 10.0, 5.0
SPOKE_DEG = 30
NUMBERS_DEG = 105.0
COLUMN = 150.0


@dataclass(frozen=True)
class Cut:
    """One cut through a pattern.

    name      of the file and the curve
    title     which plane, at what frequency
    side      what 90 degrees points along, in words
    gain_dbi  every degree from +x toward that side [dBi], (360,)
    figures   rows of the table below: what, figure
    """

    name: str
    title: str
    side: str
    gain_dbi: Sequence[float]
    figures: Sequence[tuple[str, str]]


def draw_pattern(cut: Cut, subtitle: str) -> str:
    """A cut as SVG text, forward to the right; `subtitle` says whose pattern it is."""
    sheet = Sheet(cut.title, subtitle)
    top_dbi = TOP_STEP_DB * math.ceil(max(cut.gain_dbi) / TOP_STEP_DB - 1e-6)
    _draw_rings(sheet, top_dbi)
    _draw_spokes(sheet, cut.side)
    _name_rings(sheet, top_dbi)
    places = [_place(degrees, _radius(gain, top_dbi)) for degrees, gain in enumerate(cut.gain_dbi)]
    points = " ".join(f"{number(x)},{number(y)}" for x, y in places)
    sheet.add("polygon", points=points, css="curve", data_curve=cut.name)
    rows = [("figure", "value"), *cut.figures]
    sheet.add_table(rows, (MARGIN, MARGIN + COLUMN), MIDDLE_Y + RADIUS + 54.0)
    return sheet.text()


def _radius(gain_dbi: float, top_dbi: float) -> float:
    return RADIUS * max(0.0, 1.0 - (top_dbi - gain_dbi) / DEPTH_DB)


def _place(degrees: float, radius: float) -> tuple[float, float]:
    angle = math.radians(degrees)
    return MIDDLE_X + radius * math.cos(angle), MIDDLE_Y - radius * math.sin(angle)


def _draw_rings(sheet: Sheet, top_dbi: float) -> None:
    for ring in range(int(DEPTH_DB / RING_DB)):
        level = top_dbi - ring * RING_DB
        css = "ring" if ring else "frame"
        sheet.add("circle", cx=MIDDLE_X, cy=MIDDLE_Y, r=_radius(level, top_dbi), css=css, data_level=f"{level:g}")


def _draw_spokes(sheet: Sheet, side: str) -> None:
    for degrees in range(0, 360, SPOKE_DEG):
        x, y = _place(degrees, RADIUS)
        sheet.add("line", x1=MIDDLE_X, y1=MIDDLE_Y, x2=x, y2=y, css="spoke")
        signed = degrees if degrees <= 180 else degrees - 360
        x, y = _place(degrees, RADIUS + 17.0)
        sheet.write(_signed(signed) + "°", x, y + 4.0, text_anchor="middle")
    sheet.write("forward", WIDTH - 4.0, MIDDLE_Y + 20.0, "sub", text_anchor="end")
    sheet.write(side, MIDDLE_X + 20.0, MIDDLE_Y - RADIUS - 14.0, "sub")


def _name_rings(sheet: Sheet, top_dbi: float) -> None:
    """Ring numbers between two spokes, over the curve; the outermost one names the unit."""
    for ring in range(int(DEPTH_DB / RING_DB)):
        level = top_dbi - ring * RING_DB
        x, y = _place(NUMBERS_DEG, _radius(level, top_dbi) - 9.0)
        sheet.write(_signed(level) + ("" if ring else " dBi"), x, y + 4.0, "sub", text_anchor="middle")


def _signed(value: float) -> str:
    return f"{value:g}".replace("-", "\u2212")
