"""Outriggers: pieces along y that carry the ends of conductors wider than the bed, in a chain on each side.

The rails give a conductor its place along the boom; an outrigger carries its end on a level rest at the height of the
rails' notches, so that it does not sag, and stops it. A second notch out there would bend the conductor by what the
joints' play lets the chain turn.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator
from dataclasses import dataclass, replace
from itertools import pairwise

from boomwright.errors import Fault
from boomwright.plan.cradle_labels import tag_label
from boomwright.plan.cradle_model import BASE_MM, ROOT_2, STOP_MM, Block, Ground, Held, Section, Span, Stop, mirrored
from boomwright.plan.joint import (
    BORE_FROM_FACE_MM,
    FLANK_MM,
    NECK_MM,
    TIP_HALF_MM,
    WALL_MM,
    Dovetail,
    Joint,
    flank_play_mm,
    joint_box,
)
from boomwright.plan.label import Label
from boomwright.plan.rails import NOTCH_WALL_MM, STOPS_APART_MM

REST_MM = 6.0
BORE_ROOM_MM = 8.0
LABEL_ROOM_MM = 10.0
HEAD_MM = BORE_ROOM_MM + LABEL_ROOM_MM + REST_MM
"""From a joint's face to the first tip beyond it: bore, label, rest."""

TENON_MM = 2.0 * NECK_MM + FLANK_MM
TAG_ROOM_MM = 7.0
INSIDE_RAIL_MM = 6.0
"""How far an arm reaches inside the rails, where it bears the tag."""


@dataclass(frozen=True)
class Group:
    """Neighbours whose ends one chain carries on each side: x of its pieces, |y| of its joint with the cradle [mm]."""

    held: tuple[Held, ...]
    x_mm: Span
    face_mm: float

    def tenons(self, y_mm: float, side: int) -> tuple[Dovetail, ...]:
        """The tenons by which a piece that begins at |y| holds on to what stands nearer to the middle."""
        (low, high), pad = self.x_mm, TIP_HALF_MM + WALL_MM
        places = [(low + high) / 2.0] if high - low < 4.0 * pad else [low + pad, high - pad]
        return tuple(Dovetail((x, side * y_mm), (0, -side)) for x in places)

    @property
    def units(self) -> list[tuple[tuple[Held, ...], Span]]:
        """What lies between the same stops, with the x of their blocks: a conductor, or both of a flat folded one."""
        parted: list[list[Held]] = []
        for h in self.held:
            if h.tag == "DE-front" and parted:
                parted[-1].append(h)
            else:
                parted.append([h])
        middles = [(a[-1].at_mm + b[0].at_mm) / 2.0 for a, b in pairwise(parted)]
        lows = [self.x_mm[0], *(m + STOPS_APART_MM / 2.0 for m in middles)]
        highs = [*(m - STOPS_APART_MM / 2.0 for m in middles), self.x_mm[1]]
        return [(tuple(unit), (lo, hi)) for unit, lo, hi in zip(parted, lows, highs, strict=True)]


def socket_depth_mm(clearance_mm: float) -> float:
    """Material along the pull [mm] that a socket takes, its end wall included."""
    return TENON_MM + clearance_mm + WALL_MM


def plan_groups(ground: Ground, stops: tuple[Stop, ...], bed_mm: float) -> tuple[Group, ...]:
    """The conductors whose stops do not fit a bed this wide in y, and those whose stops would be in a joint's way."""
    needing = {stop.tag for stop in stops if stop.y_mm[1] > bed_mm / 2.0 + 1e-9}
    while True:
        groups = _grouped(ground, needing, bed_mm / 2.0)
        depth = socket_depth_mm(ground.shop.printer.press_clearance_mm)
        more = {
            stop.tag
            for stop in stops
            for group in groups
            if stop.tag not in needing
            and stop.x_mm[0] < group.x_mm[1]
            and stop.x_mm[1] > group.x_mm[0]
            and stop.y_mm[1] > group.face_mm - depth
        }
        if not more:
            return groups
        needing |= more


def _grouped(ground: Ground, needing: set[str], most_mm: float) -> tuple[Group, ...]:
    members = [h for h in ground.held if h.tag.removesuffix("-front") in needing]
    pad = TIP_HALF_MM + WALL_MM + ground.shop.printer.press_clearance_mm
    parted: list[list[Held]] = []
    for h in members:
        near = parted and _low(h, pad) < _high(parted[-1][-1], pad) + 1.0
        if parted and (near or h.tag == "DE-front"):
            parted[-1].append(h)
        else:
            parted.append([h])
    return tuple(
        Group(tuple(g), (_low(g[0], pad), _high(g[-1], pad)), min(most_mm, min(h.tip_mm for h in g) - HEAD_MM))
        for g in parted
    )


def _half(h: Held, pad_mm: float) -> float:
    """Room for the joint, and on the arm for a tag beside the conductor or its trough [mm]."""
    return max(pad_mm, h.radius_mm * ROOT_2 + NOTCH_WALL_MM + TAG_ROOM_MM)


def _low(h: Held, pad_mm: float) -> float:
    return h.at_mm - _half(h, pad_mm)


def _high(h: Held, pad_mm: float) -> float:
    return h.at_mm + _half(h, pad_mm)


def plan_outriggers(
    ground: Ground, groups: tuple[Group, ...], parent: Callable[[Group], str]
) -> tuple[tuple[Section, ...], tuple[Joint, ...], list[Fault]]:
    """Every outrigger, +y before -y, from the cradle outward, and the joints; `parent` names a group's section."""
    sections, joints, faults = list[Section](), list[Joint](), list[Fault]()
    play, bed = flank_play_mm(ground.shop.printer.press_clearance_mm), ground.shop.printer.bed_mm
    for group in groups:
        cuts = _chain(ground, group)
        if cuts is None or group.x_mm[1] - group.x_mm[0] > min(bed[:2]):
            tags = ", ".join(h.tag for h in group.held)
            found = f"the outriggers of {tags} do not fit the bed of {bed[0]:g} x {bed[1]:g}"
            faults.append(Fault("printer.bed_mm", found, "use a printer with a larger bed"))
            continue
        for side in (1, -1):
            inner = parent(group)
            for start, end in pairwise(cuts):
                number = len(sections) + 1
                section = _piece(ground, group, side, (start, end), number)
                if end != cuts[-1]:
                    section = replace(section, sockets=group.tenons(end, side))
                sections.append(_on_bed(section))
                way = (0, side)
                joints.append(Joint(section.stem, inner, way, joint_box(section.tenons), play))
                inner = section.stem
    return tuple(sections), tuple(joints), faults


def _chain(ground: Ground, group: Group) -> list[float] | None:
    """|y| of the faces between the pieces of a chain, from the cradle to the end of the last stop; None: no room."""
    printer = ground.shop.printer
    longest = max(printer.bed_mm[:2]) - TENON_MM
    depth = socket_depth_mm(printer.press_clearance_mm)
    tips = [h.tip_mm for h in group.held]
    end, cuts = max(tips) + printer.slide_clearance_mm + STOP_MM, [group.face_mm]
    kept = [(tip - HEAD_MM, tip + printer.slide_clearance_mm + STOP_MM + depth) for tip in sorted(tips, reverse=True)]
    while end - cuts[-1] > longest + 1e-9:
        left = end - cuts[-1]
        cut = cuts[-1] + left / math.ceil(left / longest - 1e-9)
        for low, high in kept:
            cut = low if low < cut < high else cut
        if cut < cuts[-1] + BORE_ROOM_MM + LABEL_ROOM_MM + depth:
            return None
        cuts.append(cut)
    return [*cuts, end]


def _piece(ground: Ground, group: Group, side: int, y_mm: Span, number: int) -> Section:
    start, end = y_mm
    slide = ground.shop.printer.slide_clearance_mm
    tenons = group.tenons(start, side)
    blocks = []
    for unit, x in group.units:
        tip, radius = max(h.tip_mm for h in unit), max(h.radius_mm for h in unit)
        if start < tip < end:
            inner, outer, low = tip + slide, tip + slide + STOP_MM, ground.height_mm - radius
            # The rest runs on under the stop: two blocks side by side would part when they are drawn for a printer.
            blocks.append(Block(unit[0].tag, "rest", x, mirrored((tip - REST_MM, outer), side), low))
            stop = mirrored((inner, outer), side)
            blocks.append(Block(unit[0].tag, "stop", x, stop, ground.height_mm + radius / 2.0))
    return Section(
        f"cradle-outrigger-{number}",
        ((group.x_mm, mirrored(y_mm, side)),),
        tenons,
        bores=tuple((d.at_mm[0], side * (start + BORE_FROM_FACE_MM)) for d in tenons),
        blocks=tuple(blocks),
        labels=tuple(_labels(group, side, start, number)),
        serves=tuple(h.tag for h in group.held if h.tag != "DE-front"),
        side=side,
    )


def _labels(group: Group, side: int, start_mm: float, number: int) -> Iterator[Label]:
    """Which conductors and which side it serves, and its number, in two rows behind the bore; read along x."""
    tags = [unit[0].tag for unit, _ in group.units]
    words = ("-".join(dict.fromkeys((tags[0], tags[-1]))) + ("+Y" if side > 0 else "-Y"), str(number))
    low = start_mm + BORE_ROOM_MM
    rows = (low + LABEL_ROOM_MM / 2.0, low + LABEL_ROOM_MM), (low, low + LABEL_ROOM_MM / 2.0)
    for word, y in zip(words, rows if side > 0 else reversed(rows), strict=True):
        label = tag_label(word, group.x_mm, mirrored(y, side), BASE_MM)
        if label is not None:
            yield label


def _on_bed(section: Section) -> Section:
    (x, _), (y, _) = section.plan_extent_mm
    return replace(section, shift_mm=(-x, -y))


def arm_labels(group: Group, rail_mm: float, numbers: tuple[int, int]) -> Iterator[Label]:
    """On the arm inside the rails: each tag behind its conductor; before the last the numbers of the outriggers."""
    before = group.x_mm[0]
    for side, number in zip((1, -1), numbers, strict=True):
        y = mirrored((rail_mm - INSIDE_RAIL_MM, rail_mm), side)
        before = group.x_mm[0]
        for unit, _ in group.units:
            reach = unit[0].radius_mm * ROOT_2 + NOTCH_WALL_MM
            label = tag_label(unit[0].tag, (before, unit[0].at_mm - reach), y, BASE_MM)
            if label is not None:
                yield label
            before = unit[-1].at_mm + unit[-1].radius_mm * ROOT_2 + NOTCH_WALL_MM
        label = tag_label(str(number), (before, group.x_mm[1]), y, BASE_MM)
        if label is not None:
            yield label
