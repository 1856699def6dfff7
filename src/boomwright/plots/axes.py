"""Plain axes: scale, ticks, grid, frame, labels with units, a shaded band, a limit, and curves."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

from boomwright.plots.sheet import LEFT, RIGHT, TOP, Sheet, number

HEIGHT = 210.0
BOTTOM = TOP + HEIGHT
BELOW = BOTTOM + 62.0
"""Where the table of figures starts."""

OUTSIDE = 10.0
"""A curve that leaves the frame is followed for this many heights of it."""

DOTS_MOST = 12


@dataclass(frozen=True)
class Span:
    """What an axis shows: its ends and the distance of its ticks."""

    low: float
    high: float
    step: float

    @property
    def ticks(self) -> tuple[float, ...]:
        """Multiples of the step within the ends."""
        first = math.ceil(self.low / self.step - 1e-6)
        last = math.floor(self.high / self.step + 1e-6)
        return tuple(index * self.step for index in range(first, last + 1))

    def label(self, value: float) -> str:
        """A tick's number, with as many decimals as the step has."""
        decimals = max(0, -math.floor(math.log10(self.step) + 1e-9))
        return f"{value + 0.0:.{decimals}f}".replace("-", "\u2212")


def span_of(low: float, high: float, ticks: int = 5, whole: bool = True) -> Span:
    """An axis from `low` to `high` with about so many ticks; `whole` moves its ends out to ticks."""
    if high - low <= 1e-9 * max(abs(low), abs(high), 1e-3):
        middle = max(abs(low), 1.0)
        low, high = low - 0.01 * middle, high + 0.01 * middle
    raw = (high - low) / ticks
    power = 10.0 ** math.floor(math.log10(raw))
    step = power * next(nice for nice in (1.0, 2.0, 5.0, 10.0) if nice * power >= raw * (1.0 - 1e-9))
    if not whole:
        return Span(low, high, step)
    return Span(step * math.floor(low / step + 1e-6), step * math.ceil(high / step - 1e-6), step)


@dataclass(frozen=True)
class Axes:
    """A frame on a sheet, with its scales. `draw` comes first, curves after it."""

    sheet: Sheet
    x: Span
    y: Span

    def x_at(self, value: float) -> float:
        """Where a value stands across the sheet."""
        return LEFT + (RIGHT - LEFT) * (value - self.x.low) / (self.x.high - self.x.low)

    def y_at(self, value: float) -> float:
        """Where a value stands down the sheet."""
        share = (value - self.y.low) / (self.y.high - self.y.low)
        return BOTTOM - HEIGHT * min(max(share, -OUTSIDE), OUTSIDE)

    def draw(self, x_label: str, y_label: str) -> None:
        """Grid, ticks, frame and labels."""
        sheet = self.sheet
        for tick in self.x.ticks:
            at = self.x_at(tick)
            sheet.add("line", x1=at, y1=TOP, x2=at, y2=BOTTOM, css="grid")
            sheet.write(self.x.label(tick), at, BOTTOM + 16.0, text_anchor="middle", data_axis="x")
        for tick in self.y.ticks:
            at = self.y_at(tick)
            sheet.add("line", x1=LEFT, y1=at, x2=RIGHT, y2=at, css="grid")
            # The number stands 4 units below its line, so that the line runs through its middle.
            sheet.write(self.y.label(tick), LEFT - 6.0, at + 4.0, text_anchor="end", data_axis="y", data_shift=4.0)
        sheet.add("rect", x=LEFT, y=TOP, width=RIGHT - LEFT, height=HEIGHT, css="frame")
        sheet.write(x_label, (LEFT + RIGHT) / 2.0, BOTTOM + 34.0, text_anchor="middle")
        middle = (TOP + BOTTOM) / 2.0
        sheet.write(y_label, 14.0, middle, text_anchor="middle", transform=f"rotate(-90 14 {number(middle)})")

    def shade(self, low: float, high: float) -> None:
        """The part of the x axis that counts."""
        left, right = (self.x_at(min(max(value, self.x.low), self.x.high)) for value in (low, high))
        self.sheet.add("rect", x=left, y=TOP, width=right - left, height=HEIGHT, css="band")

    def draw_limit(self, value: float, name: str) -> None:
        """A dashed line that the curve should keep to one side of."""
        if self.y.low <= value <= self.y.high:
            at = self.y_at(value)
            self.sheet.add("line", x1=LEFT, y1=at, x2=RIGHT, y2=at, css="limit")
            below = at + 14.0 if at - TOP < 18.0 else at - 5.0
            self.sheet.write(name, RIGHT - 5.0, below, "limit-name", text_anchor="end")

    def draw_curve(self, name: str, xs: Sequence[float], ys: Sequence[float]) -> None:
        """A line through the points, cut to the frame; with few points also a dot at each."""
        clip = self.sheet.add_clip(f"frame-{name}", LEFT, TOP, RIGHT - LEFT, HEIGHT)
        places = [(self.x_at(x), self.y_at(y)) for x, y in zip(xs, ys, strict=True)]
        points = " ".join(f"{number(x)},{number(y)}" for x, y in places)
        self.sheet.add("polyline", points=points, css="curve", data_curve=name, clip_path=clip)
        if len(places) <= DOTS_MOST:
            for x, y in places:
                self.sheet.add("circle", cx=x, cy=y, r=3.0, css="dot", clip_path=clip)
