"""What stands on the base of the laser-cut cradle along and between the rails: rails, feet, spreaders. Millimetres."""

from __future__ import annotations

from boomwright.plan.sheet_base import FOOT_MM, SIDES, BaseRoom, fishplate, sided, stop_foot_mm
from boomwright.plan.sheet_lines import WEB_MM, Lines
from boomwright.plan.sheet_plate import (
    LeftOutError,
    Plate,
    Rect,
    Span,
    Standing,
    TooLargeError,
    Vee,
    across,
    across_turned,
    along_x,
    free_spans,
    lying_beside,
    spans_meet,
)
from boomwright.plan.sheet_splice import cut_line
from boomwright.shop.nesting import longest_mm, sheet_room_mm
from boomwright.shop.profile import Laser

LEAST_FOOT_MM = 3.0
FEET_WISHES_MM = ((2.0, FOOT_MM), (1.0, FOOT_MM), (1.0, 5.0), (1.0, LEAST_FOOT_MM))
"""From a rail's end to its outermost foot, and the width of a foot: the first that leaves room for enough feet."""

FEET_EVERY_MM, SPREADERS_EVERY_MM, SPREADERS_APART_MM = 80.0, 250.0, 100.0
MOST_SPREADER_MM, BRACKET_MM = 300.0, 40.0
OVER_BASE_MM = 3.0
"""Sheet below the holes of a rail."""


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
        half = prop.half_mm
        if whole or spans_meet(prop.y_mm, (lines.rails_mm[0] - BRACKET_MM - clear, lines.rails_mm[0])):
            taken.append((prop.held.at_mm - half - clear, prop.held.at_mm + half + clear))
    if lines.window_mm is not None:
        taken.append((lines.window_mm[0] - clear, lines.window_mm[1] + clear))
    found: list[float] = []
    for number, room in enumerate(rooms, 1):
        # Of many sleepers not every one needs a spreader: rails between them stay free for joints.
        apart = SPREADERS_APART_MM if 1 < number < len(rooms) else t + clear
        low = max(room.rect.u[0] + clear, lines.rail_x_mm[0] + clear)
        high = min(room.rect.u[1] - clear, lines.rail_x_mm[1] - clear)
        free = [s for s in free_spans((low, high), taken) if s[1] - s[0] >= t] if high - low >= t else []
        count = max(2, round((high - low) / SPREADERS_EVERY_MM) + 1)
        targets = [low + (high - low) * i / (count - 1) for i in range(count)]
        if len(rooms) > 1 and high - low < FEET_EVERY_MM:
            targets = [(low + high) / 2.0 + 10.0]
        for target in targets if free else []:
            at = _nearest(free, target, t)[0]
            if all(abs(at - other) > apart for other in found):
                found.append(at)
    return sorted(found)


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
        y = sided(lines.rails_mm, side)
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


def _in_y(y_mm: Span, beside: Span) -> bool:
    return any(spans_meet(y_mm, sided(beside, side)) for side in SIDES)
