"""The hollow of a mould: a block drafted both ways, and the resin it takes by arithmetic. No solid is asked.

`pull` is the coordinate along which the halves are drawn off (z, or x), `across` the other one of x and z.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace
from itertools import pairwise
from typing import Literal

import numpy as np
from numpy.typing import NDArray

from boomwright.design.centreline import Point, Run
from boomwright.design.model import Section
from boomwright.plan.seat import Groove

Span = tuple[float, float]
Pull = Literal["x", "z"]
Array = NDArray[np.float64]

ROWS, COLUMNS = 1200, 400
"""Strips along the pull and points across it of the integral over the boom: good to 1e-4 of the boom's volume."""

RINGS, THREADS, STEPS_PER_THREAD = 4, 12, 1000
STEPS_PER_RUN = 20_000
"""Points along one run of a conductor: a step of 0.05 mm on a run of a metre."""


@dataclass(frozen=True)
class Taper:
    """A span [mm] that is widest at one place along the pull and narrows both ways by the draft."""

    span_mm: Span
    widest_mm: float

    def at(self, pull_mm: float, slope: float) -> Span:
        """The span at a place along the pull; `slope` is the tangent of the draft."""
        less = slope * abs(pull_mm - self.widest_mm)
        return self.span_mm[0] + less, self.span_mm[1] - less

    def outline(self, pull_mm: Span, slope: float, growth_mm: float = 0.0) -> tuple[tuple[float, float], ...]:
        """Corners (across, pull) [mm] between two places along the pull, every side moved out by `growth_mm`."""
        places = [pull_mm[0], *([self.widest_mm] if pull_mm[0] < self.widest_mm < pull_mm[1] else []), pull_mm[1]]
        spans = [self.at(place, slope) for place in places]
        right = [(span[1] + growth_mm, place) for span, place in zip(spans, places, strict=True)]
        left = [(span[0] - growth_mm, place) for span, place in zip(spans, places, strict=True)]
        return (*right, *reversed(left))


@dataclass(frozen=True)
class Cavity:
    """The hollow: where both tapers hold, over a depth along the pull [mm]. `slope` is the tangent of the draft."""

    pull: Pull
    across: Taper
    along: Taper
    depth_mm: Span
    slope: float

    @property
    def box_mm(self) -> tuple[Span, Span, Span]:
        """The least box round it in x, y and z [mm]."""
        across, depth = self.across.span_mm, self.depth_mm
        x, z = (depth, across) if self.pull == "x" else (across, depth)
        return x, self.along.span_mm, z

    @property
    def taper_mm(self) -> float:
        """The most that the draft brings a side in from where it is widest [mm]."""
        widest = (self.across.widest_mm, self.along.widest_mm)
        return self.slope * max(abs(end - place) for end in self.depth_mm for place in widest)

    def holds(self, points_mm: Array) -> NDArray[np.bool_]:
        """Which of the points (n, 3) [mm] lie inside."""
        pull, across = (0, 2) if self.pull == "x" else (2, 0)
        depth = points_mm[:, pull]
        inside = (depth >= self.depth_mm[0]) & (depth <= self.depth_mm[1])
        for taper, axis in ((self.across, across), (self.along, 1)):
            less = self.slope * np.abs(depth - taper.widest_mm)
            inside &= points_mm[:, axis] >= taper.span_mm[0] + less
            inside &= points_mm[:, axis] <= taper.span_mm[1] - less
        return inside

    def volume_mm3(self) -> float:
        """Volume of the empty hollow [mm³]: the section is quadratic between the bends, so Simpson's rule is exact."""
        bends = {self.across.widest_mm, self.along.widest_mm}
        places = [self.depth_mm[0], *sorted(b for b in bends if self.depth_mm[0] < b < self.depth_mm[1])]
        total = 0.0
        for low, high in pairwise([*places, self.depth_mm[1]]):
            middle = self._section_mm2((low + high) / 2.0)
            total += (high - low) / 6.0 * (self._section_mm2(low) + 4.0 * middle + self._section_mm2(high))
        return total

    def _section_mm2(self, pull_mm: float) -> float:
        across, along = self.across.at(pull_mm, self.slope), self.along.at(pull_mm, self.slope)
        return (across[1] - across[0]) * (along[1] - along[0])


@dataclass(frozen=True)
class BoomBar:
    """What of the boom matters inside the mould: its section, size and ends [mm], and the grooves across it."""

    section: Section
    half_mm: float
    axis_mm: float
    ends_mm: Span
    grooves: tuple[Groove, ...]


def boom_mm3(cavity: Cavity, boom: BoomBar) -> float:
    """Volume of the boom in the cavity [mm³]: the resin fills grooves and pockets; a tube counts as full."""
    low, high = cavity.depth_mm
    pulls = low + (np.arange(ROWS) + 0.5) * (high - low) / ROWS
    less = cavity.slope * np.abs(pulls - cavity.across.widest_mm)
    first, last = cavity.across.span_mm[0] + less, cavity.across.span_mm[1] - less
    shares = (np.arange(COLUMNS) + 0.5) / COLUMNS
    across = first[:, None] + (last - first)[:, None] * shares
    pull = np.broadcast_to(pulls[:, None], across.shape)
    x, z = (pull, across) if cavity.pull == "x" else (across, pull)
    cells = (last - first) / COLUMNS * (high - low) / ROWS
    return float((_kept_width_mm(boom, x, z) * cells[:, None]).sum())


def _kept_width_mm(boom: BoomBar, x: Array, z: Array) -> Array:
    """Width in y of the boom's material along the lines through (x, z) [mm]."""
    off = np.abs(z - boom.axis_mm)
    if boom.section == "round":
        width = 2.0 * np.sqrt(np.maximum(boom.half_mm**2 - off**2, 0.0))
    else:
        width = np.where(off <= boom.half_mm, 2.0 * boom.half_mm, 0.0)
    width = np.where((x >= boom.ends_mm[0]) & (x <= boom.ends_mm[1]), width, 0.0)
    for groove in boom.grooves:
        from_axis = np.abs(x - groove.at_mm)
        round_bottom = -np.sqrt(np.maximum(groove.radius_mm**2 - from_axis**2, 0.0))
        width = np.where((from_axis <= groove.radius_mm) & (z >= round_bottom), 0.0, width)
        if groove.pocket is not None:
            pocketed = (from_axis <= groove.pocket.half_x_mm) & (z >= -groove.radius_mm)
            width = np.where(pocketed, np.maximum(width - 2.0 * groove.pocket.half_y_mm, 0.0), width)
    return width


def wire_mm3(cavity: Cavity, runs: Sequence[Run], radius_mm: float) -> float:
    """Volume of a round conductor in the cavity [mm³]: threads of its section, each as long as it runs inside.

    A thread each, because a wall may run along a bend and leave part of the section outside.
    """
    inside_mm = 0.0
    for run in (part for visit in within(runs, cavity.box_mm, radius_mm) for part in visit):
        points = points_along(run, STEPS_PER_THREAD)
        across, upright = _normals(run, points)
        for share in (np.arange(RINGS) + 0.5) / RINGS:
            for angle in (np.arange(THREADS) + 0.5) * (2.0 * math.pi / THREADS):
                off = radius_mm * math.sqrt(share) * (math.cos(angle) * across + math.sin(angle) * upright)
                thread = points + off
                steps_mm = np.linalg.norm(np.gradient(thread, axis=0), axis=1)
                inside_mm += float((steps_mm * cavity.holds(thread)).sum())
    return math.pi * radius_mm**2 * inside_mm / (RINGS * THREADS)


def _normals(run: Run, points_mm: Array) -> tuple[Array, Array]:
    """Two unit vectors across a run, square to each other, at each of its points (n, 3)."""
    along = np.array(run.end) - np.array(run.start)
    if run.middle is None:
        least = np.eye(3)[int(np.argmin(np.abs(along)))]
        across = np.cross(along, least)
        across = across / np.linalg.norm(across)
        upright = np.cross(along / np.linalg.norm(along), across)
        return np.broadcast_to(across, points_mm.shape), np.broadcast_to(upright, points_mm.shape)
    radial = points_mm - _centre(run)
    radial = radial / np.linalg.norm(radial, axis=1)[:, None]
    normal = np.cross(np.array(run.start) - _centre(run), np.array(run.middle) - _centre(run))
    return radial, np.broadcast_to(normal / np.linalg.norm(normal), points_mm.shape)


def points_along(run: Run, count: int) -> Array:
    """`count` points evenly along a run, each in the middle of its step: (count, 3) [mm]."""
    shares = (np.arange(count) + 0.5) / count
    return places_along(run, shares)


def places_along(run: Run, shares: Array) -> Array:
    """Points at these shares (0 to 1) of a run's length: (n, 3) [mm]."""
    start, end = np.array(run.start), np.array(run.end)
    if run.middle is None:
        return np.asarray(start + shares[:, None] * (end - start))
    centre, first = _centre(run), start - _centre(run)
    normal = np.cross(first, np.array(run.middle) - centre)
    second = np.cross(normal / np.linalg.norm(normal), first)
    angles = shares[:, None] * run.angle_rad
    return np.asarray(centre + np.cos(angles) * first + np.sin(angles) * second)


def within(runs: Sequence[Run], box_mm: tuple[Span, Span, Span], margin_mm: float) -> tuple[tuple[Run, ...], ...]:
    """The parts of a conductor's centreline inside a box and a margin round it: for each visit the runs in order."""
    low, high = (np.array([span[end] for span in box_mm]) for end in (0, 1))
    shares = np.linspace(0.0, 1.0, STEPS_PER_RUN // 4)
    visits: list[list[Run]] = []
    for run in runs:
        points = places_along(run, shares)
        inside = np.all((points > low - margin_mm) & (points < high + margin_mm), axis=1)
        turns = np.flatnonzero(np.diff(np.concatenate([[0], inside.astype(int), [0]])))
        for first, last in zip(turns[::2], turns[1::2] - 1, strict=True):
            if last > first:
                part = _part(run, float(shares[first]), float(shares[last]))
                if visits and math.dist(visits[-1][-1].end, part.start) < 1e-6:
                    visits[-1].append(part)
                else:
                    visits.append([part])
    return tuple(map(tuple, visits))


def _part(run: Run, first: float, last: float) -> Run:
    """A run between two shares of its length."""
    if first == 0.0 and last == 1.0:
        return run
    places = places_along(run, np.array([first, (first + last) / 2.0, last]))
    start, middle, end = ((float(x), float(y), float(z)) for x, y, z in places)
    return replace(
        run,
        start=start,
        end=end,
        middle=None if run.middle is None else middle,
        angle_rad=run.angle_rad * (last - first),
    )


def _centre(run: Run) -> Array:
    """Centre of an arc: on the line from the chord's middle through the arc's middle, one radius behind the latter."""
    start, middle, end = np.array(run.start), np.array(run.middle), np.array(run.end)
    toward = middle - (start + end) / 2.0
    return np.asarray(middle - run.radius_mm * toward / np.linalg.norm(toward))


def straight(start: Point, end: Point) -> Run:
    """A straight run between two points [mm]."""
    return Run(start, end)
