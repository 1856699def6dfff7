"""Words engraved into a flat top face of a printed aid."""

from __future__ import annotations

from dataclasses import dataclass

from boomwright.data.lettering import strokes, text_width_mm

Polyline = tuple[tuple[float, float], ...]

STROKE_MM = 0.5
DEPTH_MM = 0.6


@dataclass(frozen=True)
class Label:
    """A line of text: its left end on the baseline, height of capitals, and the face it is cut into [mm].

    quarter_turns   anticlockwise, about that end: 0 reads along +x, 1 along +y, -1 along -y
    """

    text: str
    x_mm: float
    y_mm: float
    height_mm: float
    top_mm: float
    quarter_turns: int = 0

    @property
    def lines(self) -> tuple[Polyline, ...]:
        """Its strokes in x and y [mm]."""
        a, b = ((1, 0), (0, 1), (-1, 0), (0, -1))[self.quarter_turns % 4]
        return tuple(
            tuple((self.x_mm + a * u - b * v, self.y_mm + b * u + a * v) for u, v in line)
            for line in strokes(self.text, self.height_mm)
        )


def fitting_height_mm(text: str, room_mm: float, wish_mm: float) -> float:
    """The height of capitals [mm], at most the wish, at which a text is no wider than the room."""
    return min(wish_mm, wish_mm * room_mm / max(text_width_mm(text, wish_mm), 1e-9))
