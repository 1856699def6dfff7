"""The base of the laser-cut cradle: one plate where the sheet takes it, else sleepers under the rails. Millimetres."""

from __future__ import annotations

from dataclasses import dataclass

from boomwright.plan.sheet_lines import STANDING_MM, Lines
from boomwright.plan.sheet_plate import (
    Box,
    Plate,
    Rect,
    Span,
    Standing,
    TooLargeError,
    across,
    flat,
    free_spans,
    spans_meet,
)
from boomwright.plan.sheet_splice import cut_line, feet_of
from boomwright.shop.nesting import fits_sheet, longest_mm, sheet_room_mm
from boomwright.shop.profile import Laser

EDGE_MM = 4.0
"""Sheet between a slot and the base's edge."""

APART_MM = 0.5
"""Between base plates side by side under one row of conductors."""

SLEEPER_HALF_MM = 16.0
FOOT_MM = 8.0
SIDES = (1.0, -1.0)
LETTERS = "ABCDEFGHIJKLMNOPQRSTUVWXYZ"


@dataclass(frozen=True)
class BaseRoom:
    """One base plate before it is cut: its rectangle, and the window in it."""

    rect: Rect
    window: Rect | None = None


def stop_foot_mm(lines: Lines) -> float:
    """Width of a stop's foot [mm]."""
    return min(max(lines.stop_width_mm / 2.0, 2.0), FOOT_MM)


def base_rooms(lines: Lines, laser: Laser) -> list[BaseRoom]:
    """One plate under everything where the sheet takes it, else a sleeper under each conductor and saddle."""
    lows = [lines.rail_x_mm[0], *(s.x_mm[0] for s in lines.saddles), *(_stop_x(lines, s.at_mm)[0] for s in lines.stops)]
    highs = [
        lines.rail_x_mm[1],
        *(s.x_mm[1] for s in lines.saddles),
        *(_stop_x(lines, s.at_mm)[1] for s in lines.stops),
    ]
    x = (min(lows) - EDGE_MM, max(highs) + EDGE_MM)
    half = _half_width(lines, x)
    if fits_sheet((x[1] - x[0], 2.0 * half), laser):
        return [BaseRoom(Rect(x, (-half, half)), _window(lines))]
    rooms = []
    for span in (part for wide in _sleepers(lines) for part in _narrow(lines, wide, laser)):
        half = _half_width(lines, span)
        rooms.append(BaseRoom(Rect(span, (-half, half))))
    return rooms


def _narrow(lines: Lines, span: Span, laser: Laser) -> list[Span]:
    """A wide plate under conductors close together, cut between them: the rails hold its parts."""
    widest = max(sheet_room_mm(laser))
    foot = stop_foot_mm(lines) / 2.0 + EDGE_MM
    taken = [(s.at_mm - foot, s.at_mm + foot) for s in lines.stops]
    taken += [(s.x_mm[0] - EDGE_MM, s.x_mm[1] + EDGE_MM) for s in lines.saddles]
    taken += [(p.held.at_mm - FOOT_MM, p.held.at_mm + FOOT_MM) for p in lines.props]
    parts = cut_line(span, widest, taken, lines.fishplate_mm)
    if parts is None:
        raise TooLargeError(f"a base plate under conductors close together is {span[1] - span[0]:.4g} mm wide")
    inner = [at for low, high in parts for at in (low + APART_MM / 2.0, high - APART_MM / 2.0)]
    inner[0], inner[-1] = span
    return list(zip(inner[::2], inner[1::2], strict=True))


def _half_width(lines: Lines, x_mm: Span) -> float:
    """From the middle plane to the edge of a base plate."""
    reaches = [s.inner_mm for s in lines.stops if x_mm[0] <= s.at_mm <= x_mm[1]]
    props = [p.y_mm[1] - lines.sheet_mm for p in lines.props if x_mm[0] <= p.held.at_mm <= x_mm[1]]
    saddles = [s.half_mm - lines.sheet_mm for s in lines.saddles if spans_meet(s.x_mm, x_mm)]
    return max([lines.rails_mm[0], *reaches, *props, *saddles]) + lines.sheet_mm + EDGE_MM


def _window(lines: Lines) -> Rect | None:
    half = lines.rails_mm[0] - EDGE_MM
    return Rect(lines.window_mm, (-half, half)) if lines.window_mm and half > EDGE_MM else None


def _stop_x(lines: Lines, at_mm: float) -> Span:
    return at_mm - lines.stop_width_mm / 2.0, at_mm + lines.stop_width_mm / 2.0


def _sleepers(lines: Lines) -> list[Span]:
    spans = [(h.at_mm - SLEEPER_HALF_MM, h.at_mm + SLEEPER_HALF_MM) for h in lines.held]
    spans += [(s.at_mm - SLEEPER_HALF_MM, s.at_mm + SLEEPER_HALF_MM) for s in lines.stops]
    for saddle in lines.saddles:
        x = saddle.x_mm
        inside = lines.rail_x_mm[0] <= x[0] and x[1] <= lines.rail_x_mm[1]
        # One beyond the rails' end shares the sleeper of the conductor beside it.
        reach = SLEEPER_HALF_MM - lines.sheet_mm / 2.0 if inside else EDGE_MM + 2.0
        spans.append((x[0] - reach, x[1] + reach))
    if lines.saddles[0].x_mm[0] < lines.rail_x_mm[0]:
        spans.append((lines.saddles[0].x_mm[0], lines.held[0].at_mm))
    if lines.saddles[-1].x_mm[1] > lines.rail_x_mm[1]:
        spans.append((lines.held[-1].at_mm, lines.saddles[-1].x_mm[1]))
    merged: list[Span] = []
    for low, high in sorted(spans):
        if merged and low < merged[-1][1] + EDGE_MM:
            merged[-1] = (merged[-1][0], max(high, merged[-1][1]))
        else:
            merged.append((low, high))
    if lines.window_mm is None:
        return merged
    taken = [_stop_x(lines, s.at_mm) for s in lines.stops]
    if any(spans_meet((lines.window_mm[0] - 3.0, lines.window_mm[1] + 3.0), stop) for stop in taken):
        return merged
    return [s for span in merged for s in free_spans(span, [lines.window_mm]) if s[1] - s[0] >= 2.0 * EDGE_MM]


def fishplate(lines: Lines) -> Plate:
    """The plate that bridges a joint of two base plates or two rails, its feet in both."""
    depth = min(STANDING_MM, lines.rails_mm[0] - 0.5)
    half = lines.fishplate_mm / 2.0
    feet = tuple(Rect(u, (-lines.sheet_mm, 0.0)) for u in feet_of(lines.fishplate_mm))
    return Plate("fishplate", "FISHPLATE", Rect((-half, half), (0.0, depth)), feet)


def base_pieces(lines: Lines, rooms: list[BaseRoom], standing: list[Standing], laser: Laser) -> list[Standing]:
    """The base plates, cut where the sheet is short, and the fishplates that stand on their joints."""
    t, bridge = lines.sheet_mm, fishplate(lines)
    inner = lines.rails_mm[0] - bridge.body.v[1] - 1.0
    rails: list[Box] = [(lines.rail_x_mm, sided((inner, lines.rails_mm[1] + 1.0), side), (t, t)) for side in SIDES]
    found = []
    for number, room in enumerate(rooms, 1):
        u = room.rect.u
        blocks = [b for b in [*rails, *(s.reach(t) for s in standing)] if spans_meet(b[0], u)]
        feet = [f for s in standing for f in s.feet(t) if spans_meet(f[0], u)]
        pieces, at = _cut_base(room.rect, blocks, [*rails, *feet], (lines, laser))
        for index, piece in enumerate(pieces):
            letter = LETTERS[index] if len(pieces) > 1 else ""
            name = f"BASE {number}{letter}" if len(rooms) > 1 or letter else "BASE"
            windows = (room.window,) if room.window else ()
            found.append(Standing(Plate("base", name, Rect(u, piece), windows=windows), flat()))
        found += [Standing(bridge, across(at, piece[1], t)) for piece in pieces[:-1]]
    return found


def _cut_base(rect: Rect, blocks: list[Box], feet: list[Box], given: tuple[Lines, Laser]) -> tuple[list[Span], float]:
    """The pieces along y, and x of the fishplates' rear faces; no joint in a slot, no fishplate in a plate."""
    lines, laser = given
    u, v, t, half = rect.u, rect.v, lines.sheet_mm, lines.fishplate_mm / 2.0
    longest = longest_mm(u[1] - u[0], laser)
    middle = (u[0] + u[1] - t) / 2.0
    for at in (middle, middle - 8.0, middle + 8.0, u[0] + EDGE_MM, u[1] - EDGE_MM - t):
        forbidden = [(y[0] - 2.5, y[1] + 2.5) for _, y, _ in feet]
        near = [b for b in blocks if spans_meet(b[0], (at - 2.0, at + t + 2.0))]
        forbidden += [(y[0] - half - 2.0, y[1] + half + 2.0) for _, y, _ in near]
        pieces = cut_line(v, longest, forbidden, lines.fishplate_mm)
        if pieces is not None and u[0] + 2.0 <= at <= u[1] - t - 2.0:
            return pieces, at
    need = f"a base plate {u[1] - u[0]:.4g} mm wide and {v[1] - v[0]:.4g} long cannot be cut into pieces that fit"
    raise TooLargeError(need)


def sided(y_mm: Span, side: float) -> Span:
    """A span of |y| on one side."""
    low, high = sorted((side * y_mm[0], side * y_mm[1]))
    return low, high
