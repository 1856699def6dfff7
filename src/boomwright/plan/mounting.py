"""What the finished antenna weighs, where it balances, and what the wind finds of it: arithmetic on the plan, no solid.

Cable, connector, fixings and adhesive are not counted. All in the design's frame.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from itertools import pairwise
from typing import Literal

import numpy as np

from boomwright.data.tables import density_g_cm3
from boomwright.design.centreline import Run, trace
from boomwright.plan.plan import Plan
from boomwright.plan.seat import Groove, Hole, SeatPlan
from boomwright.units import g_from_mm3

View = Literal["front", "side", "flat"]
VIEWS: dict[View, int] = {"front": 0, "side": 1, "flat": 2}
"""The axis along which the wind blows: the boom's, the rods', or across both, as on rods that stand upright."""

ROUND_DRAG, SQUARE_DRAG = 1.2, 2.1
"""Force coefficients of a long round bar below the critical Reynolds number and of a sharp-edged square one, without
credit for their ends ([EN 1991-1-4] fig. 7.28 and 7.23, value from memory)."""

AIR_KG_M3 = 1.25
"""[EN 1991-1-4] 4.5, recommended value."""

GUSTS_M_S = (20.0, 30.0, 40.0)
STRIPS = 2000
ARC_STEPS = 64


@dataclass(frozen=True)
class Mass:
    """One member: its name, volume [mm³], mass [g] and the place of its centre along x [mm]."""

    name: str
    material: str
    volume_mm3: float
    mass_g: float
    at_mm: float


@dataclass(frozen=True)
class Area:
    """One member's outline as the wind finds it from each view [mm²], and its drag coefficient."""

    name: str
    drag: float
    mm2: dict[View, float]


@dataclass(frozen=True)
class Mounting:
    """Masses and wind areas of an antenna.

    masses      every member
    areas       every member; nothing taken off for one standing behind another
    """

    masses: tuple[Mass, ...]
    areas: tuple[Area, ...]

    @property
    def mass_g(self) -> float:
        """Of everything [g]."""
        return sum(one.mass_g for one in self.masses)

    @property
    def balance_mm(self) -> float:
        """Where it balances along x [mm]; by volume where every member is of the perfect conductor, without mass."""
        weights = [one.mass_g if self.mass_g > 0.0 else one.volume_mm3 for one in self.masses]
        return sum(w * one.at_mm for w, one in zip(weights, self.masses, strict=True)) / sum(weights)

    def area_mm2(self, view: View) -> float:
        """What the wind finds from a view [mm²]."""
        return sum(one.mm2[view] for one in self.areas)

    def wind_n(self, view: View, speed_m_s: float) -> float:
        """Force of a wind [m/s] from a view [N]: half the air's density x speed² x the sum of drag x area."""
        pressure_n_m2 = 0.5 * AIR_KG_M3 * speed_m_s**2
        return pressure_n_m2 * sum(one.drag * one.mm2[view] for one in self.areas) * 1e-6


def plan_mounting(plan: Plan, with_resin: bool = True) -> Mounting:
    """Masses and wind areas of a plan's antenna.

    with_resin   whether the resin block is cast
    """
    masses = [_boom(plan), *_rods(plan), *_driven(plan), *_sleeves(plan)]
    if with_resin:
        (low, high), _, _ = plan.mould.cavity.box_mm
        volume = plan.mould.resin_mm3
        mass = g_from_mm3(volume, plan.design.resin.density_g_cm3)
        masses.append(Mass("resin block", plan.design.resin.name, volume, mass, (low + high) / 2.0))
    return Mounting(tuple(masses), tuple(_areas(plan, with_resin)))


def _mass(name: str, material: str, volume_mm3: float, at_mm: float) -> Mass:
    return Mass(name, material, volume_mm3, g_from_mm3(volume_mm3, density_g_cm3(material)), at_mm)


def _boom(plan: Plan) -> Mass:
    """The bar less its seats, each taken off at its own place."""
    boom, seat = plan.boom, plan.seat
    length, bore = seat.end_mm - seat.start_mm, seat.half_width_mm - boom.wall_mm if boom.wall_mm > 0.0 else 0.0
    share = math.pi if boom.section == "round" else 4.0
    full = share * (seat.half_width_mm**2 - bore**2) * length
    cuts = [(g.at_mm, groove_mm3(g, plan)) for g in seat.grooves] + [(h.at_mm, hole_mm3(h, plan)) for h in seat.holes]
    volume = full - sum(cut for _, cut in cuts)
    moment = full * (seat.start_mm + seat.end_mm) / 2.0 - sum(at * cut for at, cut in cuts)
    return _mass("boom", boom.material, volume, moment / volume)


def groove_mm3(groove: Groove, plan: Plan) -> float:
    """What a groove and its pocket take off the boom [mm³], by strips along z."""
    z = _strips(-groove.radius_mm, plan.seat.top_mm)
    half_x = np.where(z >= 0.0, groove.radius_mm, np.sqrt(np.maximum(groove.radius_mm**2 - z**2, 0.0)))
    chord = _chord_mm(plan, z)
    taken = 2.0 * half_x * chord
    if groove.pocket is not None:
        wide = np.maximum(groove.pocket.half_x_mm - half_x, 0.0)
        taken += 2.0 * wide * _chord_mm(plan, z, groove.pocket.half_y_mm)
    return float(taken.sum() * (z[1] - z[0]))


def hole_mm3(hole: Hole, plan: Plan) -> float:
    """What a hole takes off the boom [mm³], by strips along z."""
    r = hole.diameter_mm / 2.0
    z = _strips(-r, r)
    return float((2.0 * np.sqrt(r**2 - z**2) * _chord_mm(plan, z)).sum() * (z[1] - z[0]))


def _strips(low_mm: float, high_mm: float) -> np.ndarray[tuple[int], np.dtype[np.float64]]:
    return low_mm + (np.arange(STRIPS) + 0.5) * (high_mm - low_mm) / STRIPS


def _chord_mm(
    plan: Plan, z_mm: np.ndarray[tuple[int], np.dtype[np.float64]], within_mm: float = math.inf
) -> np.ndarray[tuple[int], np.dtype[np.float64]]:
    """How much of the boom's stuff lies along y at each height, at most `within_mm` from the middle."""

    def half(width_mm: float) -> np.ndarray[tuple[int], np.dtype[np.float64]]:
        off = np.abs(z_mm - plan.seat.axis_mm)
        if plan.boom.section == "round":
            reach = np.sqrt(np.maximum(width_mm**2 - off**2, 0.0))
        else:
            reach = np.where(off <= width_mm, width_mm, 0.0)
        return np.minimum(reach, within_mm)

    outer = half(plan.seat.half_width_mm)
    if plan.boom.wall_mm > 0.0:
        outer = outer - half(plan.seat.half_width_mm - plan.boom.wall_mm)
    return 2.0 * outer


def _rods(plan: Plan) -> list[Mass]:
    return [
        _mass(rod.tag, rod.material, math.pi / 4.0 * rod.diameter_mm**2 * rod.length_mm, rod.at_mm)
        for rod in plan.design.rods
    ]


def _driven(plan: Plan) -> list[Mass]:
    driven = plan.design.driven
    runs = [run for conductor in trace(driven) for run in conductor]
    length = sum(run.length_mm for run in runs)
    at = sum(run.length_mm * _middle_x(run) for run in runs) / length
    return [_mass("DE", driven.material, math.pi / 4.0 * driven.diameter_mm**2 * length, at)]


def _middle_x(run: Run) -> float:
    points = _points(run)
    return float(((points[1:, 0] + points[:-1, 0]) / 2.0).mean())


def _sleeves(plan: Plan) -> list[Mass]:
    """Tubes as long as the boom is wide, taken as PTFE."""
    return [
        _mass(
            f"sleeve {hole.tag}",
            "PTFE",
            math.pi / 4.0 * (hole.sleeve_outer_mm**2 - hole.sleeve_inner_mm**2) * plan.boom.width_mm,
            hole.at_mm,
        )
        for hole in plan.seat.holes
        if hole.sleeve_outer_mm > 0.0
    ]


def _areas(plan: Plan, with_resin: bool) -> list[Area]:
    boom, seat, driven = plan.boom, plan.seat, plan.design.driven
    length, width = seat.end_mm - seat.start_mm, boom.width_mm
    end = math.pi / 4.0 * width**2 if boom.section == "round" else width**2
    drag = ROUND_DRAG if boom.section == "round" else SQUARE_DRAG
    found = [Area("boom", drag, {"front": end, "side": length * width, "flat": length * width})]
    for rod in plan.design.rods:
        d = rod.outer_diameter_mm
        # What lies within the boom is not seen a second time.
        free = rod.length_mm - _hidden_mm(plan.seat, rod.tag)
        found.append(Area(rod.tag, ROUND_DRAG, {"front": free * d, "side": math.pi / 4.0 * d**2, "flat": free * d}))
    runs = [run for conductor in trace(driven) for run in conductor]
    across = {view: sum(_seen_mm(run, axis) for run in runs) for view, axis in VIEWS.items()}
    d = driven.outer_diameter_mm
    end_mm2 = math.pi / 4.0 * d**2
    found.append(Area("DE", ROUND_DRAG, {view: max(d * seen_mm, end_mm2) for view, seen_mm in across.items()}))
    if with_resin:
        x, y, z = (high - low for low, high in plan.mould.cavity.box_mm)
        found.append(Area("resin block", SQUARE_DRAG, {"front": y * z, "side": x * z, "flat": x * y}))
    return found


def _hidden_mm(seat: SeatPlan, tag: str) -> float:
    seated = {g.tag for g in seat.grooves} | {h.tag for h in seat.holes}
    return 2.0 * seat.half_width_mm if tag in seated else 0.0


def _seen_mm(run: Run, axis: int) -> float:
    """Length of a run as seen along an axis [mm]: what of each step lies across it."""
    steps = np.diff(_points(run), axis=0)
    steps[:, axis] = 0.0
    return float(np.linalg.norm(steps, axis=1).sum())


def _points(run: Run) -> np.ndarray[tuple[int, int], np.dtype[np.float64]]:
    """Points along a run (n, 3) [mm], both ends among them."""
    if run.middle is None:
        return np.array([run.start, run.end])
    start, middle, end = (np.array(point) for point in (run.start, run.middle, run.end))
    outward = middle - (start + end) / 2.0
    centre = middle - outward / np.linalg.norm(outward) * run.radius_mm
    along = (end - start) / np.linalg.norm(end - start)
    up = (middle - centre) / run.radius_mm
    angles = np.linspace(-run.angle_rad / 2.0, run.angle_rad / 2.0, ARC_STEPS + 1)[:, None]
    return np.asarray(centre + run.radius_mm * (np.cos(angles) * up + np.sin(angles) * along))


def balance_from_nearest(plan: Plan, mounting: Mounting) -> tuple[str, float]:
    """The seat nearest behind or ahead of the balance point, by tag, and how far ahead of it that point lies [mm]."""
    places = [(g.tag, g.at_mm) for g in plan.seat.grooves] + [(h.tag, h.at_mm) for h in plan.seat.holes]
    places = places or [("DE", plan.design.driven.at_mm)]
    tag, at = min(places, key=lambda place: abs(place[1] - mounting.balance_mm))
    return tag, mounting.balance_mm - at


def clamp_room_mm(plan: Plan, mounting: Mounting) -> tuple[float, float]:
    """The free stretch of boom between two seats that holds the balance point, or lies nearest to it: from, to [mm]."""
    kept = sorted((b.at_mm - b.half_x_mm, b.at_mm + b.half_x_mm) for b in plan.seat.bond_lines)
    kept.append(plan.mould.block[0])
    kept.sort()
    edges = [(-math.inf, plan.seat.start_mm), *_joined(kept), (plan.seat.end_mm, math.inf)]
    free = [(a[1], b[0]) for a, b in pairwise(edges) if b[0] > a[1]]
    return min(free, key=lambda span: max(span[0] - mounting.balance_mm, mounting.balance_mm - span[1], 0.0))


def _joined(spans: list[tuple[float, float]]) -> list[tuple[float, float]]:
    joined: list[tuple[float, float]] = []
    for low, high in spans:
        if joined and low <= joined[-1][1]:
            joined[-1] = (joined[-1][0], max(high, joined[-1][1]))
        else:
            joined.append((low, high))
    return joined
