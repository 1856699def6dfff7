"""The values of a mould's plan: what the parts draw and the audit expects. Everything in the design's frame [mm]."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from boomwright.design.centreline import Point, Run
from boomwright.design.model import Section
from boomwright.plan.cavity import Cavity, Pull, Span
from boomwright.plan.clip import ClipPlan
from boomwright.plan.frame import Matrix
from boomwright.plan.mould_room import Ends
from boomwright.plan.parting import PartingFace

Half = Literal["upper", "lower"]
HALVES: tuple[Half, Half] = ("upper", "lower")


@dataclass(frozen=True)
class Wire:
    """A straight round thing: from, to, radius [mm]."""

    start: Point
    end: Point
    radius_mm: float


@dataclass(frozen=True)
class Opening:
    """A round way from the cavity to the outside: from `at` along `direction` (distance, radius) by stages [mm]."""

    at: Point
    direction: Point
    stages: tuple[tuple[float, float], ...]

    @property
    def mouth(self) -> Point:
        """The middle of its outer end [mm]."""
        x, y, z = (a + d * self.stages[-1][0] for a, d in zip(self.at, self.direction, strict=True))
        return x, y, z


@dataclass(frozen=True)
class BoomChannel:
    """The boom's way through the walls: its outline widened by the clearance, `open` up or down beyond its axis."""

    section: Section
    half_mm: float
    axis_mm: float
    x_mm: Span
    open: Literal["", "up", "down"] = ""


@dataclass(frozen=True)
class MouldPlan:
    """The mould in the design's frame [mm].

    block        spans in x, y and z of the closed mould
    parting_mm   where the halves part along the pull: in front and rear walls, and in side walls and flanges
    legs         by half: the way it goes off, as moves one after the other
    resin_mm3    cavity less boom, conductors and coax; funnel and vent not counted
    notes        what the builder must know about this mould, in words
    """

    pull: Pull
    at_mm: float
    block: tuple[Span, Span, Span]
    parting_mm: tuple[float, float]
    cavity: Cavity
    ends: Ends
    clearance_mm: float
    boom: BoomChannel
    conductors: tuple[tuple[Run, ...], ...]
    conductor_channel_mm: float
    coax: Wire | None
    funnel: Opening
    vent: Opening
    face: PartingFace
    play_mm: float
    legs: dict[Half, tuple[Point, ...]]
    resin_mm3: float
    notes: tuple[str, ...] = ()
    clip: ClipPlan | None = None

    def frame(self, half: Half) -> Matrix:
        """Design's frame to print orientation: parting face up, on the bed, in the middle of x and y."""
        (x0, x1), _, (z0, z1) = self.block
        x, z = (x0 + x1) / 2.0, (z0 + z1) / 2.0
        last = (0.0, 0.0, 0.0, 1.0)
        if self.pull == "z" and half == "lower":
            return ((1.0, 0.0, 0.0, -x), (0.0, 1.0, 0.0, 0.0), (0.0, 0.0, 1.0, -z0), last)
        if self.pull == "z":
            return ((1.0, 0.0, 0.0, -x), (0.0, -1.0, 0.0, 0.0), (0.0, 0.0, -1.0, z1), last)
        if half == "upper":
            return ((0.0, 0.0, 1.0, -z), (0.0, 1.0, 0.0, 0.0), (-1.0, 0.0, 0.0, x1), last)
        return ((0.0, 0.0, -1.0, z), (0.0, 1.0, 0.0, 0.0), (1.0, 0.0, 0.0, -x0), last)

    def half_span_mm(self, half: Half) -> Span:
        """Extent of a half along the pull [mm]."""
        low, high = self.block[0 if self.pull == "x" else 2]
        return (min(self.parting_mm), high) if half == "upper" else (low, max(self.parting_mm))

    def bed_mm(self, half: Half) -> float:
        """Where along the pull the face of a half lies that is printed on the bed [mm]."""
        return self.half_span_mm(half)[1 if half == "upper" else 0]
