"""Where every conductor sits on the boom: grooves, pockets, holes, and the bond lines that fixtures keep clear of."""

from __future__ import annotations

import math
from dataclasses import dataclass
from itertools import pairwise

from boomwright.design.driven_rules import boom_top_mm
from boomwright.design.model import Boom, Design, Seat
from boomwright.errors import Fault
from boomwright.plan.size import Size

WEB_PER_RADIUS = 1.5
"""Least web between two grooves as a multiple of the larger groove's radius (product rule)."""

JOINT_ROOM_PER_DIAMETER = 0.5
LEAST_JOINT_ROOM_MM = 1.0
POCKET_SHARE_MOST = 0.7
"""Most of the boom's width that a pocket may take: the groove beside it still seats the conductor."""


@dataclass(frozen=True)
class Pocket:
    """The widened middle of the driven element's groove, room for the gap and the solder joints [mm]."""

    half_x_mm: float
    half_y_mm: float


@dataclass(frozen=True)
class Groove:
    """A round-bottomed slot straight through the boom in y, its round centred on the datum plane."""

    tag: str
    at_mm: float
    radius_mm: float
    depth_mm: float
    pocket: Pocket | None = None

    @property
    def half_x_mm(self) -> float:
        """Half the width at the widest [mm], the pocket included."""
        return max(self.radius_mm, self.pocket.half_x_mm if self.pocket else 0.0)


@dataclass(frozen=True)
class Hole:
    """A hole through the boom in y at the datum plane; `sleeve_outer_mm` 0 = no sleeve."""

    tag: str
    at_mm: float
    diameter_mm: float
    sleeve_outer_mm: float = 0.0
    sleeve_inner_mm: float = 0.0


@dataclass(frozen=True)
class BondLine:
    """The box that holds the adhesive film of one crossing [mm]; z is the design's, `half_y` the boom's half width."""

    tag: str
    at_mm: float
    half_x_mm: float
    half_y_mm: float
    low_z_mm: float
    high_z_mm: float


@dataclass(frozen=True)
class SeatPlan:
    """The boom and every seat on it, in the design's frame [mm]."""

    start_mm: float
    end_mm: float
    top_mm: float
    axis_mm: float
    half_width_mm: float
    grooves: tuple[Groove, ...]
    holes: tuple[Hole, ...]
    bond_lines: tuple[BondLine, ...]

    @property
    def bottom_mm(self) -> float:
        """z of the boom's lowest line [mm]."""
        return self.top_mm - 2.0 * self.half_width_mm


@dataclass(frozen=True)
class _Crossing:
    """A conductor that crosses the boom on the datum plane."""

    tag: str
    path: str
    at_mm: float
    outer_mm: float
    gap_mm: float | None = None


def plan_seat(design: Design, boom: Boom, seat: Seat) -> tuple[SeatPlan, list[Size], list[Fault]]:
    """Seats of a design on its boom, the sizes with their origins, and what cannot be built."""
    crossings = _crossings(design)
    ends = [*(c.at_mm for c in crossings), design.driven.at_mm]
    start, end = min(ends) - boom.tail_mm, max(ends) + boom.nose_mm
    half = boom.width_mm / 2.0
    sizes = [
        Size(
            "boom.length_mm",
            end - start,
            "mm",
            f"tail {boom.tail_mm:g} + span {max(ends) - min(ends):g} + nose {boom.nose_mm:g}",
        )
    ]
    top = boom_top_mm(design, boom)
    if seat.kind == "groove":
        sizes.append(Size("boom.top_mm", top, "mm", "datum + half the thickest conductor, which lies flush"))
    else:
        sizes.append(Size("boom.top_mm", top, "mm", "half the boom's width: datum plane = the boom's middle"))
    grooves = _grooves(crossings, seat, top, half) if seat.kind == "groove" else ()
    holes = tuple(_hole(c, seat) for c in crossings if c.gap_mm is None) if seat.kind == "through" else ()
    bonds = tuple(_groove_bond(g, half, top) for g in grooves) + tuple(_hole_bond(h, half) for h in holes)
    for groove, crossing in zip(grooves, crossings, strict=False):
        flush = "" if crossing.outer_mm / 2.0 == top else f" + {top - crossing.outer_mm / 2.0:g} below flush"
        origin = f"rod {crossing.outer_mm:g} + glue gap {seat.glue_gap_mm:g}{flush}"
        sizes.append(Size(f"groove.{groove.tag}.depth_mm", groove.depth_mm, "mm", origin))
    for hole, crossing in zip(holes, [c for c in crossings if c.gap_mm is None], strict=False):
        sleeve = f" + 2 x sleeve {seat.sleeve_mm:g}" if seat.bond == "insulated" else ""
        origin = f"rod {crossing.outer_mm:g}{sleeve} + clearance {seat.hole_clearance_mm:g}"
        sizes.append(Size(f"hole.{hole.tag}.diameter_mm", hole.diameter_mm, "mm", origin))
    faults = _faults(crossings, grooves, holes, boom, (start, end))
    return SeatPlan(start, end, top, top - half, half, grooves, holes, bonds), sizes, faults


def _crossings(design: Design) -> list[_Crossing]:
    found = [_Crossing(r.tag, f"rod[{r.file_index}]", r.at_mm, r.outer_diameter_mm) for r in design.rods]
    driven = design.driven
    if driven.form != "loop":
        found.append(_Crossing("DE", "driven", driven.at_mm, driven.outer_diameter_mm, driven.gap_mm))
    if driven.form == "folded" and driven.plane == "flat":
        assert driven.spacing_mm is not None
        found.append(_Crossing("DE-front", "driven", driven.at_mm + driven.spacing_mm, driven.outer_diameter_mm))
    return sorted(found, key=lambda c: c.at_mm)


def _grooves(crossings: list[_Crossing], seat: Seat, top_mm: float, half_width_mm: float) -> tuple[Groove, ...]:
    grooves = []
    for crossing in crossings:
        radius = crossing.outer_mm / 2.0 + seat.glue_gap_mm
        pocket = None
        if crossing.gap_mm is not None:
            room = max(LEAST_JOINT_ROOM_MM, JOINT_ROOM_PER_DIAMETER * crossing.outer_mm)
            others = [c for c in crossings if c is not crossing]
            free = [abs(c.at_mm - crossing.at_mm) - c.outer_mm / 2.0 - seat.glue_gap_mm - radius for c in others]
            # The pocket weakens the web only in the middle: half of the bare web stays.
            half_x = radius + max(0.0, min([room, *(f / 2.0 for f in free)]))
            half_y = min(crossing.gap_mm / 2.0 + 2.0 * room, POCKET_SHARE_MOST * half_width_mm)
            pocket = Pocket(half_x, half_y)
        grooves.append(Groove(crossing.tag, crossing.at_mm, radius, top_mm + radius, pocket))
    return tuple(grooves)


def _hole(crossing: _Crossing, seat: Seat) -> Hole:
    bore = crossing.outer_mm + seat.hole_clearance_mm
    if seat.bond == "bonded":
        return Hole(crossing.tag, crossing.at_mm, bore)
    outer = crossing.outer_mm + 2.0 * seat.sleeve_mm
    return Hole(crossing.tag, crossing.at_mm, outer + seat.hole_clearance_mm, outer, crossing.outer_mm)


def _groove_bond(groove: Groove, half_y_mm: float, top_mm: float) -> BondLine:
    return BondLine(groove.tag, groove.at_mm, groove.radius_mm, half_y_mm, -groove.radius_mm, top_mm)


def _hole_bond(hole: Hole, half_y_mm: float) -> BondLine:
    half = hole.diameter_mm / 2.0
    return BondLine(hole.tag, hole.at_mm, half, half_y_mm, -half, half)


def _faults(
    crossings: list[_Crossing],
    grooves: tuple[Groove, ...],
    holes: tuple[Hole, ...],
    boom: Boom,
    span: tuple[float, float],
) -> list[Fault]:
    faults = []
    deepest = max(grooves, key=lambda g: g.depth_mm, default=None)
    if deepest is not None and deepest.depth_mm > boom.width_mm / 2.0 + 1e-9:
        faults.append(
            Fault(
                "boom.width_mm",
                f"the groove of {deepest.tag} is {deepest.depth_mm:g} deep, over half of the {boom.width_mm:g} mm boom",
                f"a boom of at least {_round_up(2.0 * deepest.depth_mm):g} mm, or thinner rods",
            )
        )
    widest = max(holes, key=lambda h: h.diameter_mm, default=None)
    if widest is not None and widest.diameter_mm > boom.width_mm / 2.0 + 1e-9:
        faults.append(
            Fault(
                "boom.width_mm",
                f"the hole of {widest.tag} is {widest.diameter_mm:g}, over half of the {boom.width_mm:g} mm boom",
                f"a boom of at least {_round_up(2.0 * widest.diameter_mm):g} mm, or thinner rods",
            )
        )
    cuts = [(g.tag, g.at_mm, g.radius_mm) for g in grooves]
    cuts += [(h.tag, h.at_mm, h.diameter_mm / 2.0) for h in holes]
    paths = {c.tag: c.path for c in crossings}
    for (tag_a, at_a, r_a), (tag_b, at_b, r_b) in pairwise(cuts):
        web, least = at_b - at_a - r_a - r_b, WEB_PER_RADIUS * max(r_a, r_b)
        if web < least - 1e-9:
            key = f"{paths[tag_b]}.at_mm" if tag_b != "DE-front" or tag_a != "DE" else "driven.spacing_mm"
            faults.append(
                Fault(
                    key,
                    f"the web between the seats of {tag_a} and {tag_b} is {web:.3g} mm, at least {least:.3g} is needed",
                    f"set them at least {_round_up(at_b - at_a + least - web, 0.01):g} mm apart, or use thinner rods",
                )
            )
    for tag, at, half in cuts:
        if at - half < span[0] or at + half > span[1]:
            key = "boom.tail_mm" if at - half < span[0] else "boom.nose_mm"
            faults.append(Fault(key, f"the seat of {tag} runs over the boom's end", f"at least {half + 1.0:.3g} mm"))
    return faults


def _round_up(value_mm: float, step_mm: float = 0.1) -> float:
    return math.ceil(value_mm / step_mm - 1e-9) * step_mm
