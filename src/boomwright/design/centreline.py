"""The driven element as the lines and arcs of its conductor's centreline.

Frame of the result: the design's own (x forward, y along the rods, z up, rod axes at z = 0), in millimetres.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

from boomwright.design.model import Driven

Point = tuple[float, float, float]


@dataclass(frozen=True)
class Run:
    """One straight or circular run of a conductor; `middle` is a point half-way along an arc, None on a line."""

    start: Point
    end: Point
    middle: Point | None = None
    radius_mm: float = 0.0
    angle_rad: float = 0.0

    @property
    def length_mm(self) -> float:
        """Length along the centreline [mm]."""
        return self.radius_mm * self.angle_rad if self.middle is not None else math.dist(self.start, self.end)


def bend_radius_mm(driven: Driven) -> float:
    """Radius of the bends on the centreline [mm], from the inside radius or its default; 0 for a straight element."""
    d = driven.diameter_mm
    if driven.form == "folded":
        assert driven.spacing_mm is not None
        inside = driven.bend_radius_mm if driven.bend_radius_mm is not None else (driven.spacing_mm - d) / 2.0
        return inside + d / 2.0
    if driven.form == "loop":
        if driven.shape == "circle":
            return _perimeter(driven) / (2.0 * math.pi)
        inside = driven.bend_radius_mm if driven.bend_radius_mm is not None else 2.0 * d
        return inside + d / 2.0
    return 0.0


def square_loop_side_mm(perimeter_mm: float, bend_mm: float) -> float:
    """Distance between opposite sides' axes [mm] of a square loop of this centreline perimeter and bend radius."""
    return (perimeter_mm + (8.0 - 2.0 * math.pi) * bend_mm) / 4.0


def loop_drop_mm(driven: Driven) -> float:
    """Distance of the fed side's axis below the loop's centre [mm]."""
    if driven.shape == "circle":
        return bend_radius_mm(driven)
    return square_loop_side_mm(_perimeter(driven), bend_radius_mm(driven)) / 2.0


def straight_half_mm(driven: Driven) -> float:
    """How far the straight part of a flat or straight element's conductor reaches from the boom's middle plane [mm]."""
    assert driven.length_mm is not None
    if driven.form == "straight":
        return driven.length_mm / 2.0
    return driven.length_mm / 2.0 - driven.diameter_mm / 2.0 - bend_radius_mm(driven)


def trace(driven: Driven) -> tuple[tuple[Run, ...], ...]:
    """The conductors of a driven element, each as its runs in order from one end to the other.

    A straight element is two conductors (its halves, -y first, each from the gap to its tip); a folded element or a
    loop is one, from the gap's +y end round to its -y end.
    """
    if driven.form == "straight":
        assert driven.length_mm is not None
        near, tip = driven.gap_mm / 2.0, driven.length_mm / 2.0
        halves = [(Run((driven.at_mm, s * near, 0.0), (driven.at_mm, s * tip, 0.0)),) for s in (-1.0, 1.0)]
        return tuple(halves)
    if driven.form == "folded":
        return (_folded(driven),)
    return (_circle(driven) if driven.shape == "circle" else _square(driven),)


def developed_length_mm(driven: Driven) -> float:
    """Length of the wire before bending [mm], along the centreline; for a straight element both halves together."""
    return sum(run.length_mm for conductor in trace(driven) for run in conductor)


def _perimeter(driven: Driven) -> float:
    assert driven.perimeter_mm is not None
    return driven.perimeter_mm


def _folded(driven: Driven) -> tuple[Run, ...]:
    assert driven.length_mm is not None
    assert driven.spacing_mm is not None
    rc, spacing = bend_radius_mm(driven), driven.spacing_mm
    tip = driven.length_mm / 2.0 - driven.diameter_mm / 2.0

    def place(across: float, y: float) -> Point:
        """`across` runs from the fed conductor to the second one."""
        return (driven.at_mm + across, y, 0.0) if driven.plane == "flat" else (driven.at_mm, y, across)

    s = rc * math.sqrt(0.5)
    runs = [Run(place(0.0, driven.gap_mm / 2.0), place(0.0, tip - rc))]
    for side in (1.0, -1.0):
        low, high = [
            Run(a, b, m, rc, math.pi / 2.0)
            for a, m, b in (
                (place(0.0, side * (tip - rc)), place(rc - s, side * (tip - rc + s)), place(rc, side * tip)),
                (
                    place(spacing - rc, side * tip),
                    place(spacing - rc + s, side * (tip - rc + s)),
                    place(spacing, side * (tip - rc)),
                ),
            )
        ]
        bends = [low]
        if spacing - 2.0 * rc > 1e-9:
            bends.append(Run(place(rc, side * tip), place(spacing - rc, side * tip)))
        bends.append(high)
        if side > 0.0:
            runs += [*bends, Run(place(spacing, tip - rc), place(spacing, rc - tip))]
        else:
            runs += [_back(run) for run in reversed(bends)]
    runs.append(Run(place(0.0, rc - tip), place(0.0, -driven.gap_mm / 2.0)))
    return tuple(runs)


def _back(run: Run) -> Run:
    return Run(run.end, run.start, run.middle, run.radius_mm, run.angle_rad)


def _circle(driven: Driven) -> tuple[Run, ...]:
    rho = bend_radius_mm(driven)
    open_angle = driven.gap_mm / (2.0 * rho)
    sweep = 2.0 * math.pi - 2.0 * open_angle

    def place(angle_from_feed: float) -> Point:
        """Angle from the lowest point, growing toward +y."""
        return (driven.at_mm, rho * math.sin(angle_from_feed), -rho * math.cos(angle_from_feed))

    half = [
        Run(place(a), place(a + sweep / 2.0), place(a + sweep / 4.0), rho, sweep / 2.0)
        for a in (open_angle, open_angle + sweep / 2.0)
    ]
    return tuple(half)


def _square(driven: Driven) -> tuple[Run, ...]:
    rc = bend_radius_mm(driven)
    h = square_loop_side_mm(_perimeter(driven), rc) / 2.0
    e = h - rc

    def place(y: float, z: float) -> Point:
        return (driven.at_mm, y, z)

    s = rc * math.sqrt(0.5)
    runs = [Run(place(driven.gap_mm / 2.0, -h), place(e, -h))]
    turns = [(1.0, -1.0), (1.0, 1.0), (-1.0, 1.0), (-1.0, -1.0)]
    for index, (sy, sz) in enumerate(turns):
        corner_in, corner_out = place(sy * e, sz * h), place(sy * h, sz * e)
        if index % 2 == 1:
            corner_in, corner_out = corner_out, corner_in
        runs.append(Run(corner_in, corner_out, place(sy * (e + s), sz * (e + s)), rc, math.pi / 2.0))
        next_y, next_z = [(h, e), (-e, h), (-h, -e), (-driven.gap_mm / 2.0, -h)][index]
        runs.append(Run(corner_out, place(next_y, next_z)))
    return tuple(runs)
