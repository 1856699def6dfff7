"""The cut block: a trough that holds any rod, saw slots square to it, and a stop at the exact length.

In the block's own frame: the trough along x, the stop's face at x = 0, the bed at z = 0. A V of 90 degrees takes every
diameter and needs no support; a bore would take one and hang over. Rods longer than the bed are cut on two blocks
screwed to a straight board, one with the stop and one with the slot, a stated distance apart. All in millimetres.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from functools import lru_cache

from boomwright.data.lettering import text_width_mm
from boomwright.design.model import Design
from boomwright.plan.label import Label, fitting_height_mm
from boomwright.plan.size import Size
from boomwright.shop.profile import Shop

STOP_MM = 8.0
BEYOND_MM = 15.0
"""Trough beyond the last slot: it holds the bar that is sawn."""

SIDE_MM = 8.0
"""Block beside the trough's mouth: room for a clamp and for words."""

FLOOR_MM = 5.0
"""Block under the trough; slots end half of it above the bed."""

LEAST_LEAF_MM = 6.0
"""Block between two slots: stiff enough for the blade, and wide enough for a length to be read."""

SLOT_PLAY_MM = 0.2
TEXT_MM, LEAST_TEXT_MM = 4.0, 2.0
PAIR_MM = 40.0
"""Length of each of two blocks on a board."""

SCREW_MM = 4.5
"""Hole for a wood screw of 4 mm (common practice)."""


@dataclass(frozen=True)
class SawSlot:
    """The slot for one length: its wall toward the stop stands that far from the stop's face."""

    tags: str
    length_mm: float


@dataclass(frozen=True)
class CutBlock:
    """One block.

    x_mm      its span; the trough is closed at x = 0 where there is a stop, else open
    shift_mm  how far the lengths of its slots are reduced: 0, or where the block stands on the board
    screws    places of screw holes beside the trough (x, y)
    """

    x_mm: tuple[float, float]
    has_stop: bool
    slots: tuple[SawSlot, ...]
    shift_mm: float
    screws: tuple[tuple[float, float], ...]
    labels: tuple[Label, ...]


@dataclass(frozen=True)
class CutBlockPlan:
    """The blocks and the section they share: trough's apex and half mouth, outer half width, top, slot width."""

    blocks: tuple[CutBlock, ...]
    apex_mm: float
    mouth_half_mm: float
    outer_half_mm: float
    top_mm: float
    slot_mm: float
    left_out: str | None = None


@lru_cache(maxsize=8)
def plan_cut_block(design: Design, shop: Shop) -> tuple[CutBlockPlan, tuple[Size, ...]]:
    """The blocks for a design's rods and straight halves on this shop's bed, and their sizes with their origins."""
    lengths, thickest = _lengths(design)
    slot = shop.saw.kerf_mm + SLOT_PLAY_MM
    mouth = thickest / 2.0 * math.sqrt(2.0) + 0.5
    top, outer = FLOOR_MM + mouth, mouth + SIDE_MM
    if not lengths:
        return CutBlockPlan((), FLOOR_MM, mouth, outer, top, slot, "the design has no straight rod to cut"), ()
    room = max(shop.printer.bed_mm[:2]) - STOP_MM - slot - BEYOND_MM
    near = [one for one in lengths if one.length_mm <= room]
    blocks = [_block(group, slot, mouth, top) for group in _groups(near, slot)]
    far = [one for one in lengths if one.length_mm > room]
    if any(one.length_mm < 2.0 * PAIR_MM for one in far):
        why = f"a bed of {max(shop.printer.bed_mm[:2]):g} mm takes no block for its rods: saw them in a mitre box"
        return CutBlockPlan((), FLOOR_MM, mouth, outer, top, slot, why), ()
    if far:
        blocks += _pair(far, slot, outer)
    sizes = [
        Size("cut-block.slot_mm", slot, "mm", f"saw kerf {shop.saw.kerf_mm:g} + play {SLOT_PLAY_MM:g}"),
        *(
            Size(f"cut-block.{one.tags.replace(' ', '+')}.stop_mm", one.length_mm, "mm", _origin(one, one in far))
            for one in lengths
        ),
    ]
    return CutBlockPlan(tuple(blocks), FLOOR_MM, mouth, outer, top, slot), tuple(sizes)


def _origin(slot: SawSlot, is_far: bool) -> str:
    if not is_far:
        return "from the stop to the slot's wall on the stop's side: keep the blade on that wall"
    apart = slot.length_mm - 2.0 * PAIR_MM + STOP_MM
    return f"longer than the bed: two blocks on a straight board, {apart:g} mm between their facing ends"


def _lengths(design: Design) -> tuple[list[SawSlot], float]:
    """Distinct lengths, the longest first, and the largest diameter."""
    found: dict[float, list[str]] = {}
    thickest = 0.0
    for rod in design.rods:
        found.setdefault(rod.length_mm, []).append(rod.tag)
        thickest = max(thickest, rod.diameter_mm)
    driven = design.driven
    if driven.form == "straight":
        assert driven.length_mm is not None
        found.setdefault((driven.length_mm - driven.gap_mm) / 2.0, []).append("DE")
        thickest = max(thickest, driven.diameter_mm)
    return [SawSlot(" ".join(tags), length) for length, tags in sorted(found.items(), reverse=True)], thickest


def _groups(slots: Sequence[SawSlot], slot_mm: float) -> list[list[SawSlot]]:
    """Slots on as few blocks as leave a leaf between neighbours: each goes to the first block with room."""
    groups = list[list[SawSlot]]()
    for one in slots:
        for group in groups:
            if group[-1].length_mm - one.length_mm >= slot_mm + LEAST_LEAF_MM:
                group.append(one)
                break
        else:
            groups.append([one])
    return groups


def _block(slots: Sequence[SawSlot], slot_mm: float, mouth_mm: float, top_mm: float) -> CutBlock:
    end = slots[0].length_mm + slot_mm + BEYOND_MM
    labels = []
    for index, one in enumerate(slots):
        # Words keep clear of the next slot, or of the stop.
        before = slots[index + 1].length_mm + slot_mm if index + 1 < len(slots) else -STOP_MM + 1.0
        text = f"{one.length_mm:g}"
        height = fitting_height_mm(text, one.length_mm - before - 2.0, TEXT_MM)
        if height >= LEAST_TEXT_MM:
            x = one.length_mm - 1.0 - text_width_mm(text, height)
            labels.append(Label(text, x, mouth_mm + 1.0, height, top_mm))
    return CutBlock((-STOP_MM, end), True, tuple(slots), 0.0, (), tuple(labels))


def _pair(far: Sequence[SawSlot], slot_mm: float, outer_mm: float) -> list[CutBlock]:
    """A block with the stop and one with a slot; the same two serve every long rod, set anew for each length."""
    screws = tuple(
        (x, y) for x in (6.0, PAIR_MM - STOP_MM - 6.0) for y in (outer_mm - SIDE_MM / 2.0, SIDE_MM / 2.0 - outer_mm)
    )
    stop = CutBlock((-STOP_MM, PAIR_MM - STOP_MM), True, (), 0.0, screws, ())
    # The slot's wall is PAIR_MM from this block's first end, wherever on the board the block is screwed.
    saw_end = PAIR_MM + slot_mm + BEYOND_MM
    tags = " ".join(one.tags for one in far)
    slot = SawSlot(tags, PAIR_MM)
    holes = tuple((x, y) for x in (6.0, saw_end - 6.0) for y in (outer_mm - SIDE_MM / 2.0, SIDE_MM / 2.0 - outer_mm))
    return [stop, CutBlock((0.0, saw_end), False, (slot,), far[0].length_mm - PAIR_MM, holes, ())]
