"""Where the cradle carries the boom: at both ends, in every section, and wherever the way between is long."""

from __future__ import annotations

import math
from collections.abc import Sequence
from itertools import pairwise

from boomwright.errors import Fault
from boomwright.plan.cradle_model import ROOT_2, Ground, Saddle, Span

SADDLE_MM = 10.0
LEAST_SADDLE_MM = 2.0
SADDLE_WALL_MM = 2.4
TIE_SLOT_MM = (4.2, 2.0)
TIE_GROOVE_DEPTH_MM = 2.5
FLOOR_MM = 1.2
MOST_SADDLE_SPAN_MM = 250.0


def free_spans(ground: Ground) -> list[Span]:
    """x between which the boom may be carried, clear of the adhesive and of a driven element fitted later [mm]."""
    relief = ground.shop.cradle.relief_mm
    kept = [(b.at_mm - b.half_x_mm - relief, b.at_mm + b.half_x_mm + relief) for b in ground.seat.bond_lines]
    kept += [ground.window_mm] if ground.window_mm else []
    free, at = list[Span](), ground.seat.start_mm
    for low, high in sorted([*kept, (ground.seat.end_mm, math.inf)]):
        if low - at >= LEAST_SADDLE_MM:
            free.append((at, low))
        at = max(at, high)
    return free


def end_spans(ground: Ground, free: Sequence[Span]) -> tuple[list[Span], list[Fault]]:
    """The saddles nearest to the boom's ends [mm]."""
    if len(free) >= 2:
        first, last = free[0], free[-1]
        return [(max(first[0], first[1] - SADDLE_MM), first[1]), (last[0], min(last[1], last[0] + SADDLE_MM))], []
    need = max(b.half_x_mm for b in ground.seat.bond_lines) + ground.shop.cradle.relief_mm + LEAST_SADDLE_MM
    found = "leaves no room for a saddle under the boom clear of the adhesive"
    key = "boom.tail_mm" if not free or free[0][0] > ground.seat.start_mm else "boom.nose_mm"
    return [], [Fault(key, found, f"give it at least {need:.3g} mm")]


def all_spans(ends: Sequence[Span], free: Sequence[Span], sections: Sequence[Span] = ()) -> list[Span]:
    """The end saddles, one in every section that has none, and more until no way between two is long [mm].

    free      x between which a saddle may stand, clear of joints
    sections  x of every section, its joints left out
    """
    spans, rooms = list(ends), list(free)
    for section in sections:
        if any(section[0] <= low and high <= section[1] for low, high in spans):
            continue
        inside = clipped(rooms, section)
        if inside:
            spans.append(_in_room(max(inside, key=lambda r: (min(r[1] - r[0], SADDLE_MM), -_off(r, section)))))
    while True:
        spans.sort()
        wide = [(a, b) for a, b in pairwise(spans) if b[0] - a[1] > MOST_SADDLE_SPAN_MM]
        middles = [(sum(room) / 2.0, room) for room in rooms]
        choices = [(abs(m - (a[1] + b[0]) / 2.0), m, room) for a, b in wide for m, room in middles if a[1] < m < b[0]]
        if not choices:
            return spans
        spans.append(_in_room(min(choices)[2]))


def clipped(rooms: Sequence[Span], to: Span) -> list[Span]:
    """What of the rooms lies within a span and is long enough for a saddle [mm]."""
    inside = [(max(low, to[0]), min(high, to[1])) for low, high in rooms]
    return [room for room in inside if room[1] - room[0] >= LEAST_SADDLE_MM]


def _off(room: Span, section: Span) -> float:
    return abs(sum(room) - sum(section)) / 2.0


def _in_room(room: Span) -> Span:
    middle, half = sum(room) / 2.0, min(SADDLE_MM, room[1] - room[0]) / 2.0
    return middle - half, middle + half


def make_saddles(ground: Ground, rails: Span | None, spans: Sequence[Span]) -> tuple[Saddle, ...]:
    """Saddles over these spans of x: heights from the boom's section, slots for ties beside them or past the rails."""
    axis, half = ground.height_mm - ground.seat.axis_mm, ground.seat.half_width_mm
    if ground.boom.section == "round":
        low, top = axis - half * ROOT_2, axis - half / ROOT_2 + max(1.0, half / 6.0)
        channel = top - low
    else:
        low = ground.height_mm - ground.seat.top_mm
        top, channel = low + min(half, 4.0), half + ground.shop.printer.slide_clearance_mm
    outer = channel + SADDLE_WALL_MM
    tie = outer + 0.8
    if rails is not None and tie + TIE_SLOT_MM[1] + 0.8 > rails[0]:
        tie = max(tie, rails[1] + 0.8)
    tie_y = (tie, tie + TIE_SLOT_MM[1])
    return tuple(Saddle(span, low, top, channel, outer, tie_y) for span in spans)
