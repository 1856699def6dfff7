"""The guide that clamps on the boom: a slot over every groove, or a bore at every hole, at its place along x.

In each section's own frame, as printed: the roof lies on the bed and the two cheeks stand up, so the boom comes from
above. x as the design's; the roof is z = 0 to `roof_mm`, the boom's face lies on it. All in millimetres.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import lru_cache
from itertools import pairwise

from boomwright.design.model import Boom, Design, Seat
from boomwright.plan.label import Label
from boomwright.plan.seat import plan_seat
from boomwright.plan.size import Size
from boomwright.shop.profile import Shop

CHEEK_MM = 4.0
ROOF_MM = 4.0
DRILL_ROOF_MM = 8.0
"""A drill is led by its bore over this length."""

END_STOP_MM = 4.0
BEYOND_MM = 8.0
"""Guide beyond the outermost slot of a section."""

UNDER_MM = 4.0
"""Least cheek that is left beside the deepest slot."""

TEXT_MM = 3.0


@dataclass(frozen=True)
class GuideCut:
    """A slot as wide as its groove down to its depth, or (depth 0) a bore of the hole's diameter."""

    tag: str
    at_mm: float
    width_mm: float
    depth_mm: float


@dataclass(frozen=True)
class GuideSection:
    """One piece along the boom, with no seat where seats are far apart; the first has a wall at the boom's rear end."""

    start_mm: float
    end_mm: float
    has_stop: bool
    cuts: tuple[GuideCut, ...]


@dataclass(frozen=True)
class GuidePlan:
    """The sections, and the cross section they share: the boom's half channel, roof and cheeks."""

    sections: tuple[GuideSection, ...]
    inner_half_mm: float
    roof_mm: float
    top_mm: float
    boom_start_mm: float
    left_out: str | None = None

    @property
    def outer_half_mm(self) -> float:
        """Half the width over the cheeks [mm]."""
        return self.inner_half_mm + CHEEK_MM


@lru_cache(maxsize=8)
def plan_guide(design: Design, boom: Boom, seat: Seat, shop: Shop) -> tuple[GuidePlan, tuple[Size, ...]]:
    """The guide of a boom's seats on this shop's bed, and its sizes with their origins."""
    seats, _, _ = plan_seat(design, boom, seat)
    cuts = [GuideCut(g.tag, g.at_mm, 2.0 * g.radius_mm, g.depth_mm) for g in seats.grooves]
    cuts += [GuideCut(h.tag, h.at_mm, h.diameter_mm, 0.0) for h in seats.holes]
    inner = boom.width_mm / 2.0 + shop.printer.slide_clearance_mm
    roof = DRILL_ROOF_MM if seats.holes else ROOF_MM
    # A pointed slot ends higher than its round file by (root 2 - 1) of the radius; the cheeks end below the boom's far
    # face, so that a tie round both presses the boom into the guide.
    point = max((_point_mm(c) for c in cuts), default=0.0)
    top = roof + max(min(boom.width_mm - 1.0, max(0.75 * boom.width_mm, point + UNDER_MM)), point + 1.2)
    bed = max(shop.printer.bed_mm[:2])
    if not cuts:
        return GuidePlan((), inner, roof, top, seats.start_mm, "the boom has no seats"), ()
    widest = max(c.width_mm for c in cuts) + 2.0 * BEYOND_MM
    if widest + END_STOP_MM > bed:
        found = f"a section over one seat is {widest:g} mm long, the bed {bed:g} mm: use the wrap template"
        return GuidePlan((), inner, roof, top, seats.start_mm, found), ()
    sections = _sections(sorted(cuts, key=lambda c: c.at_mm), seats.start_mm, bed)
    butted = sum(1 for a, b in pairwise(sections) if b.start_mm >= a.end_mm - 1e-9)
    sizes = [Size("guide.sections", len(sections), "", _section_words(len(sections), butted))]
    sizes += [Size("guide.channel_mm", 2.0 * inner, "mm", f"boom {boom.width_mm:g} + 2 x slide clearance")]
    for cut in cuts:
        if cut.depth_mm > 0.0:
            words = f"groove {cut.width_mm:g}, its file bottoms {cut.depth_mm:g} under the boom's top"
        else:
            words = "the hole's own diameter, drilled from both sides"
        sizes.append(Size(f"guide.{cut.tag}.width_mm", cut.width_mm, "mm", words))
    return GuidePlan(sections, inner, roof, top, seats.start_mm), tuple(sizes)


def _section_words(count: int, butted: int) -> str:
    if count == 1:
        return "all seats on one bed"
    if butted == 0:
        return "each begins over the last seat of the one before: a drill or rod laid through both sets it"
    return f"{butted} of the joints butt face to face: hold the marks of the wrap template against each slot there"


def _point_mm(cut: GuideCut) -> float:
    """Where a slot's pointed end lies under the boom's top [mm]; 0 for a bore."""
    return cut.depth_mm + (math.sqrt(2.0) - 1.0) * cut.width_mm / 2.0 if cut.depth_mm > 0.0 else 0.0


def _sections(cuts: list[GuideCut], boom_start_mm: float, room_mm: float) -> tuple[GuideSection, ...]:
    """Sections no longer than the room, from the boom's rear end to the last seat.

    A section that can begins with the last seat of the one before: a drill or a rod laid in both seats sets it. Where
    the next seat is out of reach from there, sections butt face to face until it is met, some without any seat.
    """
    sections, first, done = list[GuideSection](), 0, 0
    begin = boom_start_mm - END_STOP_MM
    while done < len(cuts):
        reached = sum(1 for c in cuts[done:] if _end(c) - begin <= room_mm)
        if reached:
            done += reached
            last, end = cuts[done - 1], _end(cuts[done - 1])
            lapped = done < len(cuts) and _end(cuts[done]) - _begin(last) <= room_mm
            if done < len(cuts) and not lapped:
                end = min(end, (last.at_mm + cuts[done].at_mm) / 2.0)
            sections.append(GuideSection(begin, end, not sections, tuple(cuts[first:done])))
            first, begin = (done - 1, _begin(last)) if lapped else (done, end)
        else:
            # Ahead of the next seat's own room: no joint may cut into it.
            end = min(begin + room_mm, _begin(cuts[done]))
            sections.append(GuideSection(begin, end, not sections, ()))
            begin = end
    return tuple(sections)


def _begin(cut: GuideCut) -> float:
    return cut.at_mm - cut.width_mm / 2.0 - BEYOND_MM


def _end(cut: GuideCut) -> float:
    return cut.at_mm + cut.width_mm / 2.0 + BEYOND_MM


def guide_labels(plan: GuidePlan, number: int) -> tuple[Label, ...]:
    """Tags on the top of the cheek at +y of a section (counted from 1), in its frame, beside the slots.

    A section without seats has its number.
    """
    section = plan.sections[number - 1]
    y = plan.inner_half_mm + (CHEEK_MM - TEXT_MM) / 2.0
    if not section.cuts:
        return (Label(str(number), 2.0, y, TEXT_MM, plan.top_mm),) if section.end_mm - section.start_mm > 8.0 else ()
    labels = [
        Label(cut.tag, cut.at_mm - section.start_mm - 1.0, y, TEXT_MM, plan.top_mm)
        for cut in section.cuts[:1] + section.cuts[-1:]
    ]
    return tuple(dict.fromkeys(labels))
