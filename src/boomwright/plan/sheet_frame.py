"""The frame of the laser-cut cradle: base plates, the rails' feet and joints, spreaders, fishplates. Millimetres."""

from __future__ import annotations

from dataclasses import dataclass

from boomwright.plan.sheet_lines import ROOT_2, STANDING_MM, WEB_MM, LeftOutError, Lines
from boomwright.plan.sheet_plate import (
    Box,
    Plate,
    Rect,
    Span,
    Standing,
    Vee,
    across,
    across_turned,
    along_x,
    flat,
    free_spans,
    lying_beside,
    spans_meet,
)
from boomwright.plan.sheet_splice import cut_line, feet_of
from boomwright.shop.nesting import fits_sheet, longest_mm, sheet_room_mm
from boomwright.shop.profile import Laser

EDGE_MM = 4.0
APART_MM = 0.5
"""Between base plates side by side under one row of conductors."""

SLEEPER_HALF_MM = 16.0
FOOT_MM, LEAST_FOOT_MM = 8.0, 3.0
FEET_WISHES_MM = ((2.0, FOOT_MM), (1.0, FOOT_MM), (1.0, 5.0), (1.0, LEAST_FOOT_MM))
"""From a rail's end to its outermost foot, and the width of a foot: the first that leaves room for enough feet."""

FEET_EVERY_MM, SPREADERS_EVERY_MM = 80.0, 250.0
MOST_SPREADER_MM, BRACKET_MM = 300.0, 40.0
OVER_BASE_MM = 3.0
"""Sheet below the holes of a rail."""

SIDES = (1.0, -1.0)


class TooLargeError(Exception):
    """A part is larger than the sheet however it is cut: what it needs, in words."""


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


def rail_feet(lines: Lines, rooms: list[BaseRoom], fit_mm: float) -> list[Span]:
    """x of the rails' feet: on every base plate, clear of the stops' slots where those are close."""
    web = WEB_MM + max(fit_mm, 0.0)
    half = stop_foot_mm(lines) / 2.0
    close = [s for s in lines.stops if s.inner_mm - lines.rails_mm[1] < web]
    taken = [(s.at_mm - half - web, s.at_mm + half + web) for s in close]
    for end, wide in FEET_WISHES_MM:
        rail = (lines.rail_x_mm[0] + end, lines.rail_x_mm[1] - end)
        on_plates = [_feet_on(room, rail, taken, wide) for room in rooms]
        feet = sorted(foot for found in on_plates for foot in found)
        if all(on_plates) and len(feet) >= 2:
            return feet
    raise LeftOutError("the end stops leave no room between them for the feet of the rails")


def _feet_on(room: BaseRoom, rail_x_mm: Span, taken: list[Span], wide_mm: float) -> list[Span]:
    """The feet on one base plate, evenly spaced as far as there is room."""
    low, high = max(room.rect.u[0] + 2.5, rail_x_mm[0]), min(room.rect.u[1] - 2.5, rail_x_mm[1])
    free = [s for s in free_spans((low, high), taken) if s[1] - s[0] >= LEAST_FOOT_MM] if high > low else []
    count = max(2, round((high - low) / FEET_EVERY_MM) + 1)
    feet: list[Span] = []
    for i in range(count if free else 0):
        foot = _nearest(free, low + (high - low) * i / (count - 1), wide_mm)
        if all(not spans_meet((foot[0] - OVER_BASE_MM, foot[1] + OVER_BASE_MM), other) for other in feet):
            feet.append(foot)
    return feet


def _nearest(free: list[Span], target: float, wish_mm: float) -> Span:
    """The place nearest to a target, as wide as wished where its span allows."""
    found = []
    for low, high in free:
        half = min(wish_mm, high - low) / 2.0
        at = min(max(target, low + half), high - half)
        found.append((abs(at - target), at, half))
    _, at, half = min(found)
    return at - half, at + half


def spreaders(lines: Lines, rooms: list[BaseRoom], laser: Laser) -> list[Standing]:
    """Cross plates between the rails, or, where those stand far apart, a short one at each."""
    t, inner = lines.sheet_mm, lines.rails_mm[0]
    whole = 2.0 * (inner + t) <= min(MOST_SPREADER_MM, max(sheet_room_mm(laser)))
    shape = _spreader(lines, whole)
    found = []
    for x in _spreader_places(lines, rooms, whole):
        if whole:
            found.append(Standing(shape, across(x)))
        else:
            found.append(Standing(shape, across(x, inner - BRACKET_MM)))
            found.append(Standing(shape, across_turned(x + t, BRACKET_MM - inner)))
    return found


def _spreader(lines: Lines, whole: bool) -> Plate:
    t, inner = lines.sheet_mm, lines.rails_mm[0]
    v = (t, lines.under_boom_mm)
    tongue = (t + OVER_BASE_MM, t + OVER_BASE_MM + lines.web_mm - 2.0 * OVER_BASE_MM)
    if not whole:
        body = Rect((0.0, BRACKET_MM), v)
        feet = [Rect((3.0, 11.0), (0.0, t)), Rect((BRACKET_MM - 11.0, BRACKET_MM - 3.0), (0.0, t))]
        return Plate("spreader", "SPREADER", body, (*feet, Rect((BRACKET_MM, BRACKET_MM + t), tongue)))
    feet = [Rect((inner, inner + t), tongue), Rect((-inner - t, -inner), tongue)]
    if inner >= 20.0:
        feet += [Rect((inner - 11.0, inner - 3.0), (0.0, t)), Rect((3.0 - inner, 11.0 - inner), (0.0, t))]
    elif inner - OVER_BASE_MM >= LEAST_FOOT_MM / 2.0:
        half = min(5.0, inner - OVER_BASE_MM)
        feet.append(Rect((-half, half), (0.0, t)))
    return Plate("spreader", "SPREADER", Rect((-inner, inner), v), tuple(feet))


def _spreader_places(lines: Lines, rooms: list[BaseRoom], whole: bool) -> list[float]:
    """x of each spreader's rear face."""
    t, clear = lines.sheet_mm, 2.5
    taken = [(s.x_mm[0] - clear, s.x_mm[1] + clear) for s in lines.saddles]
    for prop in lines.props:
        half = prop_half_mm(prop.held.radius_mm)
        if whole or spans_meet(prop.y_mm, (lines.rails_mm[0] - BRACKET_MM - clear, lines.rails_mm[0])):
            taken.append((prop.held.at_mm - half - clear, prop.held.at_mm + half + clear))
    if lines.window_mm is not None:
        taken.append((lines.window_mm[0] - clear, lines.window_mm[1] + clear))
    found: list[float] = []
    for room in rooms:
        low = max(room.rect.u[0] + clear, lines.rail_x_mm[0] + clear)
        high = min(room.rect.u[1] - clear, lines.rail_x_mm[1] - clear)
        free = [s for s in free_spans((low, high), taken) if s[1] - s[0] >= t] if high - low >= t else []
        count = max(2, round((high - low) / SPREADERS_EVERY_MM) + 1)
        targets = [low + (high - low) * i / (count - 1) for i in range(count)]
        if len(rooms) > 1 and high - low < FEET_EVERY_MM:
            targets = [(low + high) / 2.0 + 10.0]
        for target in targets if free else []:
            at = _nearest(free, target, t)[0]
            if all(abs(at - other) > t + clear for other in found):
                found.append(at)
    return sorted(found)


def prop_half_mm(radius_mm: float) -> float:
    """Half the length of a prop along x [mm]."""
    return radius_mm * ROOT_2 + 5.0


def fishplate(lines: Lines) -> Plate:
    """The plate that bridges a joint of two base plates or two rails, its feet in both."""
    depth = min(STANDING_MM, lines.rails_mm[0] - 0.5)
    half = lines.fishplate_mm / 2.0
    feet = tuple(Rect(u, (-lines.sheet_mm, 0.0)) for u in feet_of(lines.fishplate_mm))
    return Plate("fishplate", "FISHPLATE", Rect((-half, half), (0.0, depth)), feet)


def rail_pieces(lines: Lines, feet: list[Span], crossing: list[Standing], laser: Laser) -> list[Standing]:
    """Both rails, in as many pieces as the sheet asks for, and the fishplates on their inner faces."""
    t, bridge, half = lines.sheet_mm, fishplate(lines), lines.fishplate_mm / 2.0
    depth = bridge.body.v[1]
    vees = [lines.vee(h) for h in lines.held]
    forbidden = [(v.at_mm - v.radius_mm * 1.5 - 2.5, v.at_mm + v.radius_mm * 1.5 + 2.5) for v in vees]
    forbidden += [(a - 2.5, b + 2.5) for a, b in feet]
    beside = (lines.rails_mm[0] - depth - 0.5, lines.rails_mm[0])
    blocks = [one.reach(t) for one in crossing]
    forbidden += [(x[0] - half - 2.0, x[1] + half + 2.0) for x, y, _ in blocks if _in_y(y, beside)]
    height = lines.axis_height_mm
    longest = longest_mm(height, laser)

    def holds(piece: Span) -> bool:
        return any(piece[0] <= low and high <= piece[1] for low, high in feet)

    pieces = cut_line(lines.rail_x_mm, longest, forbidden, lines.fishplate_mm, holds)
    if pieces is None:
        raise TooLargeError(f"a rail is {height:g} mm high and cannot be cut between the rods into pieces that fit")
    found = []
    z = (t + 4.0, 2.0 * t + 4.0)
    for side in SIDES:
        y = _sided(lines.rails_mm, side)
        for number, (low, high) in enumerate(pieces, 1):
            own = tuple(v for v in vees if low < v.at_mm < high)
            plate = Plate(
                "rail",
                f"RAIL {number}" if len(pieces) > 1 else "RAIL",
                Rect((low, high), (t, height)),
                tuple(Rect(f, (0.0, t)) for f in feet if low <= f[0] and f[1] <= high),
                notched_top(own, height),
                own,
            )
            found.append(Standing(plate, along_x(0.0, y)))
        face = side * lines.rails_mm[0]
        found += [Standing(bridge, lying_beside(piece[1], face, z)) for piece in pieces[:-1]]
    return found


def notched_top(vees: tuple[Vee, ...], top_mm: float) -> tuple[tuple[float, float], ...]:
    """The upper edge with its notches; where two run into each other, they meet below the top."""
    points: list[tuple[float, float]] = []
    for v in vees:
        left, right = v.at_mm - (top_mm - v.apex_mm), v.at_mm + (top_mm - v.apex_mm)
        if points and left <= points[-1][0] + 1e-9:
            points.pop()
            apex_u, apex_v = points[-1]
            points.append(
                ((apex_u + v.at_mm + v.apex_mm - apex_v) / 2.0, (v.at_mm - apex_u + v.apex_mm + apex_v) / 2.0)
            )
        else:
            points.append((left, top_mm))
        points += [(v.at_mm, v.apex_mm), (right, top_mm)]
    return tuple(points)


def base_pieces(lines: Lines, rooms: list[BaseRoom], standing: list[Standing], laser: Laser) -> list[Standing]:
    """The base plates, cut where the sheet is short, and the fishplates that stand on their joints."""
    t, bridge = lines.sheet_mm, fishplate(lines)
    inner = lines.rails_mm[0] - bridge.body.v[1] - 1.0
    rails: list[Box] = [(lines.rail_x_mm, _sided((inner, lines.rails_mm[1] + 1.0), side), (t, t)) for side in SIDES]
    found = []
    for number, room in enumerate(rooms, 1):
        u = room.rect.u
        blocks = [b for b in [*rails, *(s.reach(t) for s in standing)] if spans_meet(b[0], u)]
        pieces, at = _cut_base(room.rect, blocks, lines, laser)
        for index, piece in enumerate(pieces):
            letter = "ABCDEFGHIJ"[index] if len(pieces) > 1 else ""
            name = f"BASE {number}{letter}" if len(rooms) > 1 or letter else "BASE"
            windows = (room.window,) if room.window else ()
            found.append(Standing(Plate("base", name, Rect(u, piece), windows=windows), flat()))
        found += [Standing(bridge, across(at, piece[1], t)) for piece in pieces[:-1]]
    return found


def _cut_base(rect: Rect, blocks: list[Box], lines: Lines, laser: Laser) -> tuple[list[Span], float]:
    """The pieces along y, and x of the fishplates' rear faces."""
    u, v, t, half = rect.u, rect.v, lines.sheet_mm, lines.fishplate_mm / 2.0
    longest = longest_mm(u[1] - u[0], laser)
    middle = (u[0] + u[1] - t) / 2.0
    for at in (middle, middle - 8.0, middle + 8.0, u[0] + EDGE_MM, u[1] - EDGE_MM - t):
        forbidden = [(y[0] - 2.5, y[1] + 2.5) for _, y, _ in blocks]
        near = [b for b in blocks if spans_meet(b[0], (at - 2.0, at + t + 2.0))]
        forbidden += [(y[0] - half - 2.0, y[1] + half + 2.0) for _, y, _ in near]
        pieces = cut_line(v, longest, forbidden, lines.fishplate_mm)
        if pieces is not None and u[0] + 2.0 <= at <= u[1] - t - 2.0:
            return pieces, at
    need = f"a base plate {u[1] - u[0]:.4g} mm wide and {v[1] - v[0]:.4g} long cannot be cut into pieces that fit"
    raise TooLargeError(need)


def _sided(y_mm: Span, side: float) -> Span:
    low, high = sorted((side * y_mm[0], side * y_mm[1]))
    return low, high


def _in_y(y_mm: Span, beside: Span) -> bool:
    return any(spans_meet(y_mm, _sided(beside, side)) for side in SIDES)
