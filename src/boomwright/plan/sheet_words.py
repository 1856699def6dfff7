"""Words scored on flat plates: where there is room for them. Millimetres."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import replace

from boomwright.data.lettering import text_width_mm
from boomwright.plan.sheet_plate import Plate, Rect, Words

STEP_MM = 2.0
CLEAR_MM = 0.8
HEIGHTS_MM = (3.0, 2.4, 1.8)


def with_words(plate: Plate, wishes: Sequence[tuple[str, float, float]]) -> Plate:
    """The plate with every text, as near to its wished middle (u, v) as there is room; what finds none is left off."""
    taken = [r.grown(CLEAR_MM) for r in (*plate.slots, *plate.windows)]
    top = plate.body.v[1]
    taken += [
        Rect((v.at_mm - (top - v.apex_mm), v.at_mm + (top - v.apex_mm)), (v.apex_mm, top)).grown(CLEAR_MM)
        for v in plate.vees
    ]
    if plate.top and not plate.vees:
        us, vs = zip(*plate.top, strict=True)
        taken.append(Rect((min(us), max(us)), (min(vs), top)).grown(CLEAR_MM))
    found: list[Words] = []
    for text, u, v in wishes:
        place = _place(plate.body, taken, text, (u, v))
        if place is not None:
            found.append(place)
            taken.append(words_rect(place).grown(CLEAR_MM))
    return replace(plate, words=tuple(found))


def words_rect(words: Words) -> Rect:
    """The rectangle that a text covers."""
    width = text_width_mm(words.text, words.height_mm)
    return Rect((words.u_mm, words.u_mm + width), (words.v_mm, words.v_mm + words.height_mm))


def _place(body: Rect, taken: Sequence[Rect], text: str, wish: tuple[float, float]) -> Words | None:
    for height in HEIGHTS_MM:
        width = text_width_mm(text, height)
        room = body.grown(-CLEAR_MM)
        span_u, span_v = room.u[1] - room.u[0] - width, room.v[1] - room.v[0] - height
        if span_u < 0.0 or span_v < 0.0:
            continue
        us = _steps(room.u[0], span_u, wish[0] - width / 2.0)
        vs = list(_steps(room.v[0], span_v, wish[1] - height / 2.0))
        wish_u, wish_v = wish[0] - width / 2.0, wish[1] - height / 2.0
        places = sorted(((u - wish_u) ** 2 + (v - wish_v) ** 2, u, v) for u in us for v in vs)
        for _, u, v in places:
            words = Words(text, u, v, height)
            if not any(words_rect(words).meets(other) for other in taken):
                return words
    return None


REACH_STEPS = 30
"""How far from its wished place a text is looked for, in steps."""


def _steps(low: float, span: float, wish: float) -> Iterator[float]:
    """Places for a text's left or lower end, the wished one first."""
    first = min(max(wish, low), low + span)
    yield first
    for i in range(1, REACH_STEPS):
        for at in (first - i * STEP_MM, first + i * STEP_MM):
            if low <= at <= low + span:
                yield at
