"""Words scored on flat plates: where there is room for them. Millimetres."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from dataclasses import replace
from typing import NamedTuple

from boomwright.data.lettering import text_width_mm
from boomwright.plan.sheet_plate import Plate, Rect, Words

STEP_MM = 2.0
REACH_STEPS = 30
"""How far from its wished place a text is looked for, in steps."""

CLEAR_MM, BETWEEN_MM = 0.8, 1.6
"""Round a text, and between two along a line."""

NEAR_MM = 4.0
"""A tag that finds a place this near is not made smaller to come nearer still; other words never are."""

HEIGHTS_MM = (3.0, 2.4, 1.8)


class Wish(NamedTuple):
    """A text, where its middle should be (u, v), and how far from there it still says the right thing [mm]."""

    text: str
    u_mm: float
    v_mm: float
    farthest_mm: float = math.inf


def with_words(plate: Plate, wishes: Sequence[Wish]) -> Plate:
    """The plate with every text, as near to its wished place as there is room; what finds none is left off."""
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
    for wish in wishes:
        place = _place(plate.body, taken, wish)
        if place is not None:
            found.append(place)
            u, v = words_rect(place).u, words_rect(place).v
            taken.append(Rect((u[0] - BETWEEN_MM, u[1] + BETWEEN_MM), (v[0] - CLEAR_MM, v[1] + CLEAR_MM)))
    return replace(plate, words=tuple(found))


def words_rect(words: Words) -> Rect:
    """The rectangle that a text covers."""
    width = text_width_mm(words.text, words.height_mm)
    return Rect((words.u_mm, words.u_mm + width), (words.v_mm, words.v_mm + words.height_mm))


def _place(body: Rect, taken: Sequence[Rect], wish: Wish) -> Words | None:
    """The largest text that comes near its wished place; else the nearest there is."""
    best: tuple[float, Words] | None = None
    for height in HEIGHTS_MM:
        found = _nearest(body, taken, wish, height)
        if found is not None and (best is None or found[0] < best[0]):
            best = found
        if best is not None and (best[0] <= NEAR_MM or wish.farthest_mm == math.inf):
            break
    return best[1] if best is not None and best[0] <= wish.farthest_mm else None


def _nearest(body: Rect, taken: Sequence[Rect], wish: Wish, height_mm: float) -> tuple[float, Words] | None:
    width = text_width_mm(wish.text, height_mm)
    room = body.grown(-CLEAR_MM)
    span_u, span_v = room.u[1] - room.u[0] - width, room.v[1] - room.v[0] - height_mm
    if span_u < 0.0 or span_v < 0.0:
        return None
    wish_u, wish_v = wish.u_mm - width / 2.0, wish.v_mm - height_mm / 2.0
    us, vs = list(_steps(room.u[0], span_u, wish_u)), list(_steps(room.v[0], span_v, wish_v))

    def at(place: tuple[float, float]) -> tuple[float, Words]:
        return math.hypot(place[0] - wish_u, place[1] - wish_v), Words(wish.text, *place, height_mm)

    def is_free(found: tuple[float, Words]) -> bool:
        return not any(words_rect(found[1]).meets(other) for other in taken)

    # Most find room at once: the first of both rows is the nearest place.
    first = at((us[0], vs[0]))
    if is_free(first):
        return first
    places = sorted((at((u, v)) for u in us for v in vs), key=lambda found: (found[0], found[1].u_mm, found[1].v_mm))
    return next((found for found in places if is_free(found)), None)


def _steps(low: float, span: float, wish: float) -> Iterator[float]:
    """Places for a text's left or lower end, the wished one first."""
    first = min(max(wish, low), low + span)
    yield first
    for i in range(1, REACH_STEPS):
        for at in (first - i * STEP_MM, first + i * STEP_MM):
            if low <= at <= low + span:
                yield at
