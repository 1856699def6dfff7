"""Charts of one quantity over frequency, the band shaded, the spec's limit dashed, the figures below."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Literal

from boomwright.design.model import Band
from boomwright.plots.axes import BELOW, Axes, Span, span_of
from boomwright.plots.sheet import MARGIN, Sheet

COLUMN = 150.0


@dataclass(frozen=True)
class Quantity:
    """What a chart over frequency shows.

    name         of the file and the curve: "front-to-back"
    title        with its unit
    axis         the y axis' label
    unit         of the figures, empty = a ratio
    worst        which end of the values is the bad one
    limit        the spec's bound, None = none
    floor        the least value there is, None = none
    beyond       how far outside the band's values the axis goes at most
    """

    name: str
    title: str
    axis: str
    unit: str
    worst: Literal["least", "most"]
    limit: float | None = None
    floor: float | None = None
    beyond: float = 6.0


def draw_sweep(
    quantity: Quantity, frequency_mhz: Sequence[float], values: Sequence[float], band: Band, subtitle: str
) -> str:
    """A chart as SVG text.

    frequency_mhz  ascending [MHz], (F,)
    values         in the quantity's unit, (F,)
    band           shaded; its edges and centre, where they were solved, stand in the table
    subtitle       whose figures these are
    """
    sheet = Sheet(quantity.title, subtitle)
    inside = [i for i, f in enumerate(frequency_mhz) if band.low_mhz <= f <= band.high_mhz]
    across = span_of(frequency_mhz[0], frequency_mhz[-1], ticks=5, whole=len(frequency_mhz) == 1)
    axes = Axes(sheet, across, _y_span(quantity, [values[i] for i in inside] or values, values))
    axes.shade(band.low_mhz, band.high_mhz)
    axes.draw("frequency [MHz]", quantity.axis)
    if quantity.limit is not None:
        axes.draw_limit(quantity.limit, "spec")
    axes.draw_curve(quantity.name, frequency_mhz, values)
    sheet.add_table(_table(quantity, frequency_mhz, values, inside, band), (MARGIN, MARGIN + COLUMN), BELOW)
    return sheet.text()


def _y_span(quantity: Quantity, wanted: Sequence[float], values: Sequence[float]) -> Span:
    """All of the band's values, and of the others what is not too far from them."""
    low, high = min(wanted), max(wanted)
    low, high = max(min(values), low - quantity.beyond), min(max(values), high + quantity.beyond)
    if quantity.limit is not None:
        low, high = min(low, quantity.limit), max(high, quantity.limit)
    if quantity.floor is not None:
        low, high = quantity.floor, max(high, quantity.floor + 1.0)
    return span_of(low, max(high, low + 1.0))


def _table(
    quantity: Quantity, frequency_mhz: Sequence[float], values: Sequence[float], inside: Sequence[int], band: Band
) -> list[tuple[str, str]]:
    rows = [("frequency", quantity.title)]
    for mark in sorted({band.low_mhz, band.centre_mhz, band.high_mhz}):
        if mark in frequency_mhz:
            rows.append((f"{mark:g} MHz", _figure(values[list(frequency_mhz).index(mark)], quantity)))
    if inside:
        choose = min if quantity.worst == "least" else max
        worst = choose(inside, key=lambda i: values[i])
        what = f"{_figure(values[worst], quantity)} at {frequency_mhz[worst]:g} MHz"
        rows.append(("worst in the band", what))
    elif len(rows) == 1:
        rows += [(f"{f:g} MHz", _figure(v, quantity)) for f, v in list(zip(frequency_mhz, values, strict=True))[:6]]
    if quantity.limit is not None:
        side = "at least" if quantity.worst == "least" else "at most"
        rows.append(("spec", f"{side} {quantity.limit:g} {quantity.unit}".rstrip()))
    return rows


def _figure(value: float, quantity: Quantity) -> str:
    return f"{value:.2f} {quantity.unit}".rstrip()
