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

    upright   reads along +y instead of +x
    """

    text: str
    x_mm: float
    y_mm: float
    height_mm: float
    top_mm: float
    upright: bool = False

    @property
    def lines(self) -> tuple[Polyline, ...]:
        """Its strokes in x and y [mm]."""
        placed = strokes(self.text, self.height_mm)
        if self.upright:
            return tuple(tuple((self.x_mm - v, self.y_mm + u) for u, v in line) for line in placed)
        return tuple(tuple((self.x_mm + u, self.y_mm + v) for u, v in line) for line in placed)


def fitting_height_mm(text: str, room_mm: float, wish_mm: float) -> float:
    """The height of capitals [mm], at most the wish, at which a text is no wider than the room."""
    return min(wish_mm, wish_mm * room_mm / max(text_width_mm(text, wish_mm), 1e-9))
