"""Currents along the boom: what each conductor carries at its middle, against what the feed delivers."""

from __future__ import annotations

import cmath
import math
from collections.abc import Sequence

from boomwright.plots.axes import BELOW, BOTTOM, Axes, span_of
from boomwright.plots.sheet import MARGIN, Sheet

COLUMNS = (0.0, 60.0, 150.0, 240.0)
NAME_ROOM = 30.0


def draw_currents(title: str, currents: Sequence[tuple[str, float, complex]], subtitle: str) -> str:
    """A chart as SVG text: a stem a conductor.

    title     what is shown, at what frequency
    currents  tag, place along the boom [mm], current over the feed current; in order of place
    subtitle  whose currents these are
    """
    sheet = Sheet(title, subtitle)
    places = [at_mm for _, at_mm, _ in currents]
    edge = max(0.06 * (places[-1] - places[0]), 1.0)
    most = max(abs(ratio) for _, _, ratio in currents)
    axes = Axes(sheet, span_of(places[0] - edge, places[-1] + edge, whole=False), span_of(0.0, max(1.1 * most, 0.5)))
    axes.draw("place along the boom [mm]", "current / feed current")
    named = -math.inf
    for tag, at_mm, ratio in currents:
        x, y = axes.x_at(at_mm), axes.y_at(abs(ratio))
        sheet.add("line", x1=x, y1=BOTTOM, x2=x, y2=y, css="stem")
        sheet.add("circle", cx=x, cy=y, r=4.0, css="dot", data_curve="currents")
        if x - named >= NAME_ROOM:
            sheet.write(tag, x, y - 8.0, text_anchor="middle")
            named = x
    rows = [("tag", "place", "size", "phase")]
    rows += [
        (tag, f"{at_mm:g} mm", f"{abs(ratio):.3f}", f"{math.degrees(cmath.phase(ratio)):.1f}°".replace("-", "\u2212"))
        for tag, at_mm, ratio in currents
    ]
    sheet.add_table(rows, [MARGIN + column for column in COLUMNS], BELOW)
    return sheet.text()
