"""What is engraved in the cradle: tags on the stops; on the name plate arrow, FORWARD, name and number."""

from __future__ import annotations

from collections.abc import Iterable

from boomwright.data.lettering import text_width_mm
from boomwright.plan.cradle_model import BASE_MM, Rectangle, Stop
from boomwright.plan.label import Label, fitting_height_mm
from boomwright.plan.rails import TAG_HEIGHT_MM

LEAST_TAG_HEIGHT_MM = 1.8
NAME_HEIGHT_MM = 3.0
LINE_PITCH = 1.6
ARROW = "→"


def tag_label(tag: str, x_mm: tuple[float, float], y_mm: tuple[float, float], top_mm: float) -> Label | None:
    """A tag in the middle of a top face, or None where the face is too short to read it."""
    height = fitting_height_mm(tag, x_mm[1] - x_mm[0] - 1.2, TAG_HEIGHT_MM)
    if height < LEAST_TAG_HEIGHT_MM:
        return None
    return Label(
        tag, sum(x_mm) / 2.0 - text_width_mm(tag, height) / 2.0, sum(y_mm) / 2.0 - height / 2.0, height, top_mm
    )


def stop_labels(stops: Iterable[Stop]) -> tuple[Label, ...]:
    """Every stop's tag, at +y and -y."""
    found = [
        tag_label(s.tag, s.x_mm, (side * s.y_mm[0], side * s.y_mm[1]), s.top_mm) for s in stops for side in (1.0, -1.0)
    ]
    return tuple(label for label in found if label is not None)


def name_plate(words: Iterable[str], rear_mm: float, reach_mm: float) -> tuple[Rectangle, tuple[Label, ...]]:
    """A plate behind `rear_mm` with the arrow, and words in lines along y no longer than twice the reach [mm]."""
    width = 2.0 * reach_mm - 3.0
    lines = [ARROW, *(line for word in words for line in _wrapped(word, width))]
    half = min(reach_mm, max(text_width_mm(line, NAME_HEIGHT_MM) for line in lines) / 2.0 + 1.5)
    pitch = LINE_PITCH * NAME_HEIGHT_MM
    depth = pitch * len(lines) + 1.5
    labels = []
    for row, line in enumerate(lines):
        foot = rear_mm - pitch * (row + 1)
        wide = text_width_mm(line, NAME_HEIGHT_MM)
        if line == ARROW:
            labels.append(
                Label(line, foot + (NAME_HEIGHT_MM - wide) / 2.0, -NAME_HEIGHT_MM / 2.0, NAME_HEIGHT_MM, BASE_MM)
            )
        else:
            labels.append(Label(line, foot, wide / 2.0, NAME_HEIGHT_MM, BASE_MM, quarter_turns=-1))
    return ((rear_mm - depth, rear_mm), (-half, half)), tuple(labels)


def number_label(number: int, x_mm: float) -> Label:
    """A section's number, its feet at x, in the middle of the base."""
    text = str(number)
    return Label(text, x_mm, text_width_mm(text, NAME_HEIGHT_MM) / 2.0, NAME_HEIGHT_MM, BASE_MM, quarter_turns=-1)


def _wrapped(text: str, width_mm: float) -> list[str]:
    """Text in lines no wider than `width_mm` (one character a line at least)."""
    lines = [""]
    for letter in text:
        if lines[-1] and text_width_mm(lines[-1] + letter, NAME_HEIGHT_MM) > width_mm:
            lines.append("")
        lines[-1] += letter
    return lines
