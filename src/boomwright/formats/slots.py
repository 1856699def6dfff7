"""Slots in a flat outline, open toward -y or +y: place, width and depth, with the laser's kerf undone. Millimetres.

The drawing stands half a kerf outside what is left of the sheet, so that a slot is drawn a kerf narrower; its depth
is as drawn, since mouth and end have moved alike.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from typing import Any

from boomwright.errors import MeasureError
from boomwright.formats.outlines import DxfReading, Outline, Segment, outlines_of

FARTHEST_MM = 5.0
"""How far from the asked place a slot may be found, so that a shifted one is measured, not missed."""

MOST_END_SEGMENTS = 3


@dataclass(frozen=True)
class Slot:
    """As drawn: its walls' x, and y of its mouth and its end [mm]."""

    left_mm: float
    right_mm: float
    mouth_mm: float
    end_mm: float


def measure_slot(reading: DxfReading, arguments: Mapping[str, Any], also: Sequence[Any]) -> float:
    """Of the slot nearest to `at_mm` on `layer`: `quantity` at_mm, width_mm or depth_mm, with `kerf_mm` undone.

    plate   optional: on one plate of several, as in `outlines_of`
    y_mm    optional: only slots between whose mouth and end this y lies, where several stand one above the other
    """
    at, kerf = float(arguments["at_mm"]), float(arguments.get("kerf_mm", 0.0))
    y = arguments.get("y_mm")
    slots = [
        slot
        for outline in outlines_of(reading, arguments)
        for slot in find_slots(outline)
        if y is None or min(slot.mouth_mm, slot.end_mm) <= y <= max(slot.mouth_mm, slot.end_mm)
    ]
    nearest = min(slots, key=lambda s: abs(s.left_mm + s.right_mm - 2.0 * at), default=None)
    if nearest is None or abs(nearest.left_mm + nearest.right_mm - 2.0 * at) > 2.0 * FARTHEST_MM:
        raise MeasureError(f"{reading.path.name}: no slot within {FARTHEST_MM:g} mm of x = {at:g}")
    values = {
        "at_mm": (nearest.left_mm + nearest.right_mm) / 2.0,
        "width_mm": nearest.right_mm - nearest.left_mm + kerf,
        "depth_mm": abs(nearest.end_mm - nearest.mouth_mm),
    }
    quantity = str(arguments["quantity"])
    if quantity not in values:
        raise MeasureError(f"no such quantity of a slot: {quantity!r}")
    return values[quantity]


def find_slots(outline: Outline) -> Iterator[Slot]:
    """Every slot of a closed outline: two walls along y, run in opposite senses, with a short end between them.

    A slot lies outside the material: between its walls an anticlockwise outline turns clockwise.
    """
    if not outline.closed:
        return
    segments = outline.segments
    count = len(segments)
    anticlockwise = outline.polygon.exterior.is_ccw
    for index, first in enumerate(segments):
        if not first.is_vertical:
            continue
        for length in range(1, MOST_END_SEGMENTS + 1):
            second = segments[(index + length + 1) % count]
            between = [segments[(index + i) % count] for i in range(1, length + 1)]
            if any(segment.is_vertical for segment in between):
                break
            if not second.is_vertical or (second.y1 - second.y0) * (first.y1 - first.y0) >= 0.0:
                continue
            upward = first.y1 > first.y0
            if ((second.x0 > first.x1) == upward) == anticlockwise:
                before, after = segments[index - 1], segments[(index + length + 2) % count]
                yield _slot(first, between, second, (before, after))


def _slot(first: Segment, between: list[Segment], second: Segment, beside: tuple[Segment, Segment]) -> Slot:
    upward = first.y1 > first.y0
    reaches = [segment.reach(1) for segment in between]
    end = max(high for _, high in reaches) if upward else min(low for low, _ in reaches)
    # The kerf rounds the mouth's corners: the mouth is where that rounding ends.
    corners = [segment.reach(1) for segment in beside if segment.bulge != 0.0] + [(first.y0, first.y0)]
    mouth = min(low for low, _ in corners) if upward else max(high for _, high in corners)
    left, right = sorted((first.x0, second.x0))
    return Slot(left, right, mouth, end)
