"""The spacing comb: a flat plate that drops over the finished antenna and shows every rod's place.

The plate stands in the xz plane beside the boom, its slots open downward; in the design's frame, in millimetres.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

from boomwright.data.lettering import text_width_mm
from boomwright.design.centreline import loop_drop_mm, straight_half_mm
from boomwright.design.model import Design
from boomwright.plan.seat import SeatPlan
from boomwright.plan.size import Size
from boomwright.shop.nesting import Place, longest_mm, nest, sheet_room_mm
from boomwright.shop.profile import Shop

CLEARANCE_MM = 0.2
"""Room of a conductor in its slot, each side: a conductor farther out of place keeps the comb from dropping."""

LEAST_TOOTH_MM = 1.0
"""Between two slots; conductors nearer than that share one."""

END_MM = 12.0
"""Plate beyond the outermost slots: room to hold it by."""

SKIRT_MM = 8.0
"""Plate below the thickest rod: how far the slots guide before they seat."""

TALLEST_SLOT_MM = 60.0
"""A conductor higher above the datum plane gets no slot; the comb then goes in under it."""

TAG_HEIGHT_MM = 4.0
TAG_ROOM_MM = 1.5
TITLE_HEIGHT_MM = 4.0


@dataclass(frozen=True)
class CombSlot:
    """One slot: the tags it takes, its two walls, and the height of its end [mm]; a lone conductor's end is round."""

    tags: tuple[str, ...]
    left_mm: float
    right_mm: float
    end_mm: float
    row: int = 0

    @property
    def at_mm(self) -> float:
        """Middle of the slot [mm]."""
        return (self.left_mm + self.right_mm) / 2.0

    @property
    def width_mm(self) -> float:
        """Distance between the walls [mm]."""
        return self.right_mm - self.left_mm

    @property
    def is_round(self) -> bool:
        """Whether the slot ends in a half circle."""
        return len(self.tags) == 1

    @property
    def label(self) -> str:
        """The tags as the plate shows them."""
        return "+".join(self.tags)


@dataclass(frozen=True)
class CombSection:
    """One plate: its extent along x [mm] and its slots."""

    start_mm: float
    end_mm: float
    slots: tuple[CombSlot, ...]


@dataclass(frozen=True)
class CombPlan:
    """All plates; `top_mm` and `bottom_mm` are their upper and lower edge.

    places        where each plate is cut
    passed_under  tags of conductors too high for a slot
    left_out      why there is no comb, in words; None when there is one
    """

    sections: tuple[CombSection, ...]
    top_mm: float
    bottom_mm: float
    tag_rows_mm: float
    passed_under: tuple[str, ...]
    left_out: str | None = None
    places: tuple[Place, ...] = ()

    @property
    def sheets(self) -> int:
        """Number of sheets."""
        return 1 + max((place.sheet for place in self.places), default=-1)


def plan_comb(design: Design, shop: Shop, seat: SeatPlan) -> tuple[CombPlan, list[Size]]:
    """The comb of a design, its sizes with their origins. Sections share one conductor where the sheet is short."""
    crossings = sorted(_crossings(design), key=lambda c: c[1])
    slots = _with_rows(_merged([c for c in crossings if c[3] <= TALLEST_SLOT_MM]))
    passed = tuple(c[0] for c in crossings if c[3] > TALLEST_SLOT_MM)
    reach = min([rod.length_mm / 2.0 for rod in design.rods] + _driven_reach(design), default=math.inf)
    if reach < seat.half_width_mm + shop.laser.sheet_mm:
        return _none("a conductor is too short to pass a plate beside the boom", passed), []
    if len(slots) < 2:
        return _none("fewer than two conductors give a place to compare", passed), []
    bottom = -max(outer for _, _, outer, _ in crossings) / 2.0 - SKIRT_MM
    tag_rows = max(slot.end_mm for slot in slots) + TAG_ROOM_MM
    rows = 1 + max(slot.row for slot in slots)
    top = tag_rows + rows * (TAG_HEIGHT_MM + TAG_ROOM_MM) + TITLE_HEIGHT_MM + 2.0 * TAG_ROOM_MM
    longest = longest_mm(top - bottom, shop.laser)
    if longest <= 0.0:
        most = max(sheet_room_mm(shop.laser))
        return _none(f"its plate is {top - bottom:.4g} mm high, the laser's sheet takes {most:.5g}", passed), []
    sections = _sections(slots, longest)
    if sections is None:
        return _none(f"two conductors stand farther apart than the laser's sheet takes, {longest:.5g} mm", passed), []
    places = nest([(s.end_mm - s.start_mm, top - bottom) for s in sections], shop.laser, turn=False)
    plan = CombPlan(sections, top, bottom, tag_rows, passed, places=places)
    return plan, _sizes(plan, design)


def _none(reason: str, passed: tuple[str, ...]) -> CombPlan:
    return CombPlan((), 0.0, 0.0, 0.0, passed, reason)


def _driven_reach(design: Design) -> list[float]:
    """How far the driven element's straight part reaches in y, if the comb has to meet it there."""
    return [] if design.driven.form == "loop" else [straight_half_mm(design.driven)]


def _crossings(design: Design) -> list[tuple[str, float, float, float]]:
    """Tag, place along x, outer diameter and highest axis of everything the comb has to pass."""
    driven = design.driven
    found = [(rod.tag, rod.at_mm, rod.outer_diameter_mm, 0.0) for rod in design.rods]
    outer, at = driven.outer_diameter_mm, driven.at_mm
    if driven.form == "loop":
        return [*found, ("DE", at, outer, loop_drop_mm(driven))]
    if driven.form == "folded":
        assert driven.spacing_mm is not None
        if driven.plane == "upright":
            return [*found, ("DE", at, outer, driven.spacing_mm)]
        found.append(("DE", at + driven.spacing_mm, outer, 0.0))
    return [*found, ("DE", at, outer, 0.0)]


def _merged(crossings: list[tuple[str, float, float, float]]) -> list[CombSlot]:
    slots: list[CombSlot] = []
    for tag, at, outer, high in crossings:
        half = outer / 2.0 + CLEARANCE_MM
        one = CombSlot((tag,), at - half, at + half, high + half)
        if slots and one.left_mm - slots[-1].right_mm < LEAST_TOOTH_MM:
            last = slots.pop()
            right, end = max(last.right_mm, one.right_mm), max(last.end_mm, one.end_mm)
            one = CombSlot((*last.tags, tag), min(last.left_mm, one.left_mm), right, end)
        slots.append(one)
    return slots


def _with_rows(slots: list[CombSlot]) -> list[CombSlot]:
    """Each label in the lowest row where it keeps clear of its neighbours."""
    ends: list[float] = []
    placed = []
    for slot in slots:
        half = text_width_mm(slot.label, TAG_HEIGHT_MM) / 2.0
        row = next((i for i, end in enumerate(ends) if slot.at_mm - half >= end + TAG_ROOM_MM), len(ends))
        ends[row : row + 1] = [slot.at_mm + half]
        placed.append(CombSlot(slot.tags, slot.left_mm, slot.right_mm, slot.end_mm, row))
    return placed


def _sections(slots: list[CombSlot], room_mm: float) -> tuple[CombSection, ...] | None:
    """Plates no longer than the room, each beginning with the last slot of the one before; None when none fits."""
    sections, first = [], 0
    while first < len(slots) - 1:
        start = slots[first].left_mm - END_MM
        last = max((i for i, slot in enumerate(slots) if slot.right_mm + END_MM - start <= room_mm), default=first)
        if last <= first:
            return None
        sections.append(CombSection(start, slots[last].right_mm + END_MM, tuple(slots[first : last + 1])))
        first = last
    return tuple(sections)


def _sizes(plan: CombPlan, design: Design) -> list[Size]:
    lengths = " + ".join(f"{section.end_mm - section.start_mm:.6g}" for section in plan.sections)
    total = sum(section.end_mm - section.start_mm for section in plan.sections)
    sizes = [
        Size("comb.length_mm", total, "mm", f"sections {lengths}, {END_MM:g} beyond the outermost slots"),
        Size("comb.height_mm", plan.top_mm - plan.bottom_mm, "mm", "skirt, deepest slot, and rows of tags above it"),
    ]
    outer = {rod.tag: rod.outer_diameter_mm for rod in design.rods} | {"DE": design.driven.outer_diameter_mm}
    seen: set[str] = set()
    for slot in (slot for section in plan.sections for slot in section.slots):
        tag = slot.tags[0]
        if slot.is_round and tag not in seen:
            seen.add(tag)
            origin = f"conductor {outer[tag]:g} + 2 x clearance {CLEARANCE_MM:g}"
            sizes.append(Size(f"comb.slot.{tag}.width_mm", slot.width_mm, "mm", origin))
    return sizes
