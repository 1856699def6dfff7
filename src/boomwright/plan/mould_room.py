"""How much room the mould has along the boom: what stands before and behind the fed conductor, and what gives way.

Where neighbours leave too little, first the mould's wall shrinks, then the resin, then the clearance.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

from boomwright.data.tables import cables
from boomwright.design.centreline import bend_radius_mm, straight_half_mm
from boomwright.design.model import Design, Driven
from boomwright.errors import Fault
from boomwright.plan.cavity import Pull, Span
from boomwright.plan.seat import JOINT_ROOM_PER_DIAMETER, LEAST_JOINT_ROOM_MM, SeatPlan
from boomwright.shop.profile import Shop

MOULD_WALL_MM = 3.0
LEAST_RESIN_MM = 1.5
CLEARANCE_MM, LEAST_CLEARANCE_MM = 1.8, 0.8
UNDER_RODS_MM = 0.5
TRAVEL_SPARE_MM = 0.5
"""How much farther than its cavity is deep a half is drawn along x before it leaves the boom."""

COAX_RESIN_MM = 1.5
POCKET_MARGIN_MM = 0.4
ENCLOSED_SPACING_MM = 24.0
"""Widest upright element whose second conductor stands in the resin too."""

BEND_MARGIN_MM = 0.5


@dataclass(frozen=True)
class Neighbour:
    """A conductor before or behind the driven element: x of its surface that faces it [mm], tag, key path."""

    surface_mm: float
    tag: str
    path: str


@dataclass(frozen=True)
class Ends:
    """Front and rear of cavity and block along x [mm]; pairs are (rear, front). `why` says what shrank."""

    cavity_mm: Span
    block_mm: Span
    resin_mm: Span
    wall_mm: Span
    clearance_mm: tuple[float | None, float | None]
    neighbours: tuple[Neighbour | None, Neighbour | None]
    travel_mm: Span
    why: tuple[str, str]


@dataclass(frozen=True)
class MouldRoom:
    """What decides the mould's extent along the boom."""

    pull: Pull
    design: Design
    shop: Shop
    seat: SeatPlan

    @property
    def driven(self) -> Driven:
        """The driven element."""
        return self.design.driven

    @property
    def radius_mm(self) -> float:
        """Radius of the fed conductor over its coat [mm]."""
        return self.driven.outer_diameter_mm / 2.0

    @property
    def slope(self) -> float:
        """Tangent of the draft."""
        return math.tan(math.radians(self.shop.mould.draft_deg))

    @property
    def encloses_second(self) -> bool:
        """Whether the second conductor of an upright element stands in the resin."""
        return self.driven.spacing_mm is not None and self.driven.spacing_mm <= ENCLOSED_SPACING_MM

    @property
    def least_depth_mm(self) -> float:
        """Depth of the cavity either side of the parting plane, drawn along x, with the resin wished for [mm]."""
        return self.depth_along_x_mm(self.shop.mould.wall_mm) if self.pull == "x" else 0.0

    def depth_along_x_mm(self, resin_mm: float) -> float:
        """Depth of the cavity either side of the parting plane, drawn along x [mm]."""
        coax = self.design.feed.coax
        beside_coax = cables()[coax].outer_diameter_mm / 2.0 + COAX_RESIN_MM if coax else 0.0
        return max(self.radius_mm + resin_mm, beside_coax, *self._pockets_mm())

    def _pockets_mm(self) -> list[float]:
        """What the cavity must reach beyond to cover the pocket in the boom."""
        return [g.pocket.half_x_mm + POCKET_MARGIN_MM for g in self.seat.grooves if g.pocket is not None] or [0.0]

    @property
    def least_resin_mm(self) -> float:
        """Least resin before and behind the conductor: 1.5, the wish if that is less, and over the pocket."""
        least = min(LEAST_RESIN_MM, self.shop.mould.wall_mm)
        return max(least, *(reach - self.radius_mm for reach in self._pockets_mm()))

    @property
    def least_wall_mm(self) -> float:
        """Least wall of the mould: three passes of the nozzle."""
        return min(MOULD_WALL_MM, 3.0 * self.shop.printer.nozzle_mm)


def joint_mm(driven: Driven) -> float:
    """Length of the solder joint beside the gap [mm], the same that the boom's pocket leaves room for."""
    return 2.0 * max(LEAST_JOINT_ROOM_MM, JOINT_ROOM_PER_DIAMETER * driven.outer_diameter_mm)


def neighbours(design: Design, behind: bool) -> list[Neighbour]:
    """The rods behind or ahead of the fed conductor, nearest first."""
    at, sign = design.driven.at_mm, 1.0 if behind else -1.0
    found = [
        Neighbour(rod.at_mm + sign * rod.outer_diameter_mm / 2.0, rod.tag, f"rod[{rod.file_index}].at_mm")
        for rod in design.rods
        if (rod.at_mm < at) == behind
    ]
    return sorted(found, key=lambda n: abs(n.surface_mm - at))


def cavity_ends(room: MouldRoom, inner_half_mm: float) -> tuple[Ends, list[Fault]]:
    """Where cavity and block end in front and behind, and a fault for each side that has too little room.

    inner_half_mm  half width of the cavity in y [mm]: decides whether a flat element's bend could pass a side wall
    """
    driven = room.driven
    rear = next(iter(neighbours(room.design, behind=True)), None)
    front = next(iter(neighbours(room.design, behind=False)), None)
    first = last = driven.at_mm
    if driven.form == "loop":
        rear = front = None  # its mould stays below the rods
    sides = [_fit(room, rear, first, -1.0)]
    if room.pull == "z" and driven.form == "folded":
        assert driven.spacing_mm is not None
        surface = driven.at_mm + driven.spacing_mm - room.radius_mm
        second = Neighbour(surface, "the second conductor", "driven.spacing_mm")
        alone = _fit(room, second, driven.at_mm, 1.0)
        if not alone.fault and _bend_passes_beside(room, alone, inner_half_mm):
            sides.append(alone)
        else:
            last = driven.at_mm + driven.spacing_mm
    if len(sides) == 1:
        sides.append(_fit(room, front, last, 1.0))
    return _joined(room, sides, (first, last)), [side.fault for side in sides if side.fault]


@dataclass(frozen=True)
class _Side:
    resin_mm: float
    wall_mm: float
    clearance_mm: float | None
    depth_mm: float
    why: str
    neighbour: Neighbour | None
    fault: Fault | None = None


def _fit(room: MouldRoom, neighbour: Neighbour | None, axis_mm: float, sign: float) -> _Side:
    """Resin, wall and clearance on one side of a conductor's axis."""
    wished = [room.shop.mould.wall_mm, MOULD_WALL_MM, CLEARANCE_MM if room.pull == "z" else TRAVEL_SPARE_MM]
    least = [room.least_resin_mm, room.least_wall_mm, LEAST_CLEARANCE_MM if room.pull == "z" else TRAVEL_SPARE_MM]
    wished[0] = max(wished[0], least[0])
    sizes, why, fault = list(wished), ["resin and wall as wished"], None
    if wished[0] > room.shop.mould.wall_mm:
        why = [f"{wished[0]:.4g} of resin to cover the pocket in the boom; wall as wished"]
    if neighbour is not None:
        free = abs(neighbour.surface_mm - axis_mm)
        why = [f"{free:.4g} mm from the axis to {neighbour.tag}"]
        for index, word in ((1, "the mould's wall"), (0, "the resin"), (2, "the clearance")):
            short = _length_mm(room, sizes) - free
            if short > 1e-9 and sizes[index] > least[index]:
                # Drawn along x the resin counts twice: the half must leave it before it meets the neighbour.
                per = 2.0 if index == 0 and room.pull == "x" else 1.0
                sizes[index] = max(least[index], sizes[index] - short / per)
                why.append(f"{word} shrank from {wished[index]:g} to {sizes[index]:.4g}")
        short = _length_mm(room, sizes) - free
        if short > 1e-9:
            fault = _no_room(room, neighbour, free, short)
    resin, wall, _ = sizes
    depth = _depth_mm(room, resin)
    gap = None if neighbour is None else abs(neighbour.surface_mm - axis_mm) - depth - wall
    return _Side(resin, wall, gap, depth, "; ".join(why), neighbour, fault)


def _depth_mm(room: MouldRoom, resin_mm: float) -> float:
    """From the conductor's axis to the cavity's widest place [mm]."""
    if room.pull == "x":
        return room.depth_along_x_mm(resin_mm)
    return room.radius_mm + resin_mm + room.slope * (room.radius_mm - room.seat.axis_mm)


def _length_mm(room: MouldRoom, sizes: list[float]) -> float:
    """From the conductor's axis to where the neighbour's surface must be at least [mm]."""
    resin, wall, clearance = sizes
    depth = _depth_mm(room, resin)
    travel = depth + TRAVEL_SPARE_MM if room.pull == "x" else 0.0
    return depth + wall + clearance + travel


def _no_room(room: MouldRoom, neighbour: Neighbour, free_mm: float, short_mm: float) -> Fault:
    found = f"{free_mm:.4g} mm between the fed conductor's axis and {neighbour.tag} hold no mould"
    more = math.ceil(short_mm * 100.0 - 1e-6) / 100.0
    fix = f"set them {more:g} mm farther apart"
    if room.pull == "x":
        found += ", whose half must slide off along the boom"
        fix += ', or set driven.plane = "flat"'
    return Fault(neighbour.path, found, fix)


def _bend_passes_beside(room: MouldRoom, side: _Side, inner_half_mm: float) -> bool:
    """Whether a flat element's bends cross the front wall where the halves part at z = 0."""
    driven = room.driven
    assert driven.spacing_mm is not None
    bend, spacing = bend_radius_mm(driven), driven.spacing_mm
    tube = room.radius_mm + room.shop.mould.channel_clearance_mm

    def reach_mm(x_mm: float) -> float:
        """y of the centreline at x ahead of the fed conductor."""
        off = max(bend - x_mm, x_mm - (spacing - bend), 0.0)
        return straight_half_mm(driven) + math.sqrt(max(bend**2 - min(off, bend) ** 2, 0.0))

    wall = (side.depth_mm - tube, side.depth_mm + side.wall_mm + tube)
    return min(map(reach_mm, wall)) - tube >= inner_half_mm + BEND_MARGIN_MM


def _joined(room: MouldRoom, sides: list[_Side], axes_mm: Span) -> Ends:
    rear, front = sides
    cavity = (axes_mm[0] - rear.depth_mm, axes_mm[1] + front.depth_mm)
    travel = (0.0, 0.0)
    if room.pull == "x":
        travel = (rear.depth_mm + TRAVEL_SPARE_MM, front.depth_mm + TRAVEL_SPARE_MM)
    return Ends(
        cavity_mm=cavity,
        block_mm=(cavity[0] - rear.wall_mm, cavity[1] + front.wall_mm),
        resin_mm=(rear.resin_mm, front.resin_mm),
        wall_mm=(rear.wall_mm, front.wall_mm),
        clearance_mm=(rear.clearance_mm, front.clearance_mm),
        neighbours=(rear.neighbour, front.neighbour),
        travel_mm=travel,
        why=(rear.why, front.why),
    )
