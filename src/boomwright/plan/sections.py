"""The printed cradle parted along x: where it is cut, so that every section fits the bed and carries the boom."""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass
from itertools import pairwise

from boomwright.plan.cradle_model import ROOT_2, Bearer, Ground, Saddle, Span, Stop
from boomwright.plan.joint import NECK_MM, WALL_MM, Dovetail, dovetail_mm
from boomwright.plan.outrigger import Group
from boomwright.plan.rails import NOTCH_WALL_MM, STOPS_APART_MM
from boomwright.plan.saddle import clipped

BACK_MM = 8.0
"""The bar behind a joint's face, which carries the tenon and its screw."""

NUMBER_ROOM_MM = 5.0
FROM_RAIL_MM = 0.3
STEP_MM = 5.0
"""Where a cut midway between conductors will not do, places this far apart are tried."""


@dataclass(frozen=True)
class Splice:
    """The joint of two sections: |y| of its dovetails (0: one; else one at each side), their half tip and flank."""

    y_mm: float
    tip_half_mm: float
    flank_mm: float
    clearance_mm: float

    @property
    def tenon_mm(self) -> float:
        """How far a tenon reaches beyond the face [mm]."""
        return 2.0 * NECK_MM + self.flank_mm

    @property
    def hollow_mm(self) -> float:
        """How deep the socket is [mm]."""
        return self.tenon_mm + self.clearance_mm

    @property
    def front_mm(self) -> float:
        """The bar ahead of the face, with the socket and the section's number [mm]."""
        return self.hollow_mm + WALL_MM + NUMBER_ROOM_MM

    @property
    def reach_mm(self) -> float:
        """The largest |y| of a socket [mm]."""
        return self.y_mm + self.tip_half_mm + self.clearance_mm

    def dovetails(self, x_mm: float) -> tuple[Dovetail, ...]:
        """The tenons of a joint whose face stands at x; they point forward."""
        places = (0.0,) if self.y_mm == 0.0 else (self.y_mm, -self.y_mm)
        return tuple(Dovetail((x_mm, y), (1, 0), self.tip_half_mm, self.flank_mm) for y in places)


def plan_splice(wall_mm: float, clearance_mm: float) -> Splice | None:
    """Dovetails between walls that stand at this |y|: near them where both have room, else one in the middle."""
    found = dovetail_mm(wall_mm - FROM_RAIL_MM - clearance_mm)
    if found is None:
        return None
    tip, flank = found
    y = wall_mm - FROM_RAIL_MM - clearance_mm - tip
    room = y - tip - clearance_mm - WALL_MM / 2.0
    return Splice(y if room >= 0.0 else 0.0, tip, flank, clearance_mm)


@dataclass(frozen=True)
class Spread:
    """What the cuts must keep clear of: outer x of the whole, stops, troughs, groups, the saddles at the ends; and x
    between which the boom may be carried.
    """

    ends_mm: Span
    stops: tuple[Stop, ...]
    troughs: tuple[Bearer, ...]
    groups: tuple[Group, ...]
    saddles: tuple[Saddle, ...]
    free_mm: tuple[Span, ...]


def choose_cuts(ground: Ground, spread: Spread, splice: Splice, room_mm: float) -> tuple[float, ...] | None:
    """x of the joints' faces [mm]: fewest sections, then most cuts midway, then the evenest lengths; None: no way."""
    kept = list(_kept(ground, spread, splice))
    middles = [(a + b) / 2.0 for a, b in pairwise(_marks(ground))]
    rear, front = spread.ends_mm
    others = [STEP_MM * i for i in range(math.ceil(rear / STEP_MM), math.floor(front / STEP_MM) + 1)]
    places = [(x, True) for x in middles] + [(x, False) for x in others if x not in middles]
    free = sorted(place for place in places if not any(low < place[0] < high for low, high in kept))
    nodes = [(rear, True), *(place for place in free if rear < place[0] < front), (front, True)]
    best: list[tuple[int, int, float]] = [(0, 0, 0.0)] + [(len(nodes), 0, math.inf)] * (len(nodes) - 1)
    before = [-1] * len(nodes)
    for j in range(1, len(nodes)):
        last = j == len(nodes) - 1
        for i in range(j - 1, -1, -1):
            length = nodes[j][0] - nodes[i][0]
            if length + (0.0 if last else splice.tenon_mm) > room_mm + 1e-9:
                break
            count, off, square = best[i]
            cost = (count + 1, off + (not nodes[j][1]), square + length**2)
            inner = inner_span((nodes[i][0], nodes[j][0]), splice, i == 0, last)
            if math.isfinite(square) and cost < best[j] and _carries(spread, inner):
                best[j], before[j] = cost, i
    if before[-1] < 0:
        return None
    cuts, at = list[float](), before[-1]
    while at > 0:
        cuts.append(nodes[at][0])
        at = before[at]
    return tuple(reversed(cuts))


def inner_span(section: Span, splice: Splice, first: bool, last: bool) -> Span:
    """x of a section less the bars of its joints [mm]."""
    return section[0] + (0.0 if first else splice.front_mm), section[1] - (0.0 if last else BACK_MM)


def _carries(spread: Spread, inner: Span) -> bool:
    """Whether a saddle stands in a section, or has room there."""
    standing = any(inner[0] <= s.x_mm[0] and s.x_mm[1] <= inner[1] for s in spread.saddles)
    return standing or bool(clipped(spread.free_mm, inner))


def _marks(ground: Ground) -> list[float]:
    """x of all conductors, the driven element's window too [mm]."""
    fitted_later = [ground.design.driven.at_mm] if ground.window_mm else []
    return sorted([*(h.at_mm for h in ground.held), *fitted_later])


def _kept(ground: Ground, spread: Spread, splice: Splice) -> Iterable[Span]:
    """x that no joint's face may lie in [mm]."""
    whole = [(min(s.x_mm[0], s.beam_mm[0]), max(s.x_mm[1], s.beam_mm[1])) for s in spread.saddles]
    for low, high in [*whole, *([ground.window_mm] if ground.window_mm else [])]:
        yield low - splice.front_mm, high + BACK_MM
    for stop in spread.stops:
        yield stop.x_mm[0] - STOPS_APART_MM / 4.0, stop.x_mm[1] + STOPS_APART_MM / 4.0
    for group in spread.groups:
        yield group.x_mm[0] - splice.hollow_mm - NOTCH_WALL_MM, group.x_mm[1] + BACK_MM
    for h in ground.held:
        half = h.radius_mm * ROOT_2 + NOTCH_WALL_MM
        yield h.at_mm - half, h.at_mm + half
    if splice.reach_mm > ground.inner_mm:
        for trough in spread.troughs:
            yield trough.x_mm[0] - splice.hollow_mm - NOTCH_WALL_MM, trough.x_mm[1]


def where(ground: Ground, x_mm: float) -> str:
    """Where a cut lies, in words."""
    later = [(ground.design.driven.at_mm, "DE")] if ground.window_mm else []
    marks = sorted([*((h.at_mm, h.tag) for h in ground.held), *later])
    behind, ahead = [m for m in marks if m[0] < x_mm], [m for m in marks if m[0] > x_mm]
    if not behind or not ahead:
        return f"behind {ahead[0][1]}" if ahead else f"ahead of {behind[-1][1]}"
    middle = abs(behind[-1][0] + ahead[0][0] - 2.0 * x_mm) < 1e-9
    return f"{'midway ' if middle else ''}between {behind[-1][1]} and {ahead[0][1]}"
