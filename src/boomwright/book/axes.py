"""The axes that can be measured between, as the plan has them: never taken from a mesh. Design's frame, millimetres."""

from __future__ import annotations

from dataclasses import dataclass

from boomwright.design.centreline import Point, bend_radius_mm, trace
from boomwright.design.model import Driven
from boomwright.plan.plan import Plan

SAME_MM = 1e-9


@dataclass(frozen=True)
class Axis:
    """A straight axis.

    key        for look-up
    label      in words
    part       key of the part it belongs to
    start, end its ends [mm]
    radius_mm  of what lies about it [mm]
    """

    key: str
    label: str
    part: str
    start: Point
    end: Point
    radius_mm: float


def axes_of(plan: Plan) -> tuple[Axis, ...]:
    """Rods, straight runs of the driven element along the rods, the boom; in order along the boom, the boom last."""
    found = [
        Axis(
            rod.tag,
            f"rod {rod.tag}",
            rod.tag,
            (rod.at_mm, -rod.length_mm / 2.0, 0.0),
            (rod.at_mm, rod.length_mm / 2.0, 0.0),
            rod.diameter_mm / 2.0,
        )
        for rod in plan.design.rods
    ]
    found += _driven_axes(plan.design.driven)
    found.sort(key=lambda axis: axis.start[0])
    seat = plan.seat
    ends = ((seat.start_mm, 0.0, seat.axis_mm), (seat.end_mm, 0.0, seat.axis_mm))
    return (*found, Axis("boom", "boom", "boom", *ends, seat.half_width_mm))


def _driven_axes(driven: Driven) -> list[Axis]:
    radius = driven.diameter_mm / 2.0
    if driven.form == "loop" and driven.shape == "circle":
        reach = bend_radius_mm(driven)
        ends = ((driven.at_mm, -reach, 0.0), (driven.at_mm, reach, 0.0))
        return [Axis("DE", "driven element DE, across its middle", "DE", *ends, radius)]
    spans: dict[tuple[float, float], list[float]] = {}
    for run in (run for conductor in trace(driven) for run in conductor):
        (x, y, z), end = run.start, run.end
        if run.middle is None and abs(end[0] - x) < SAME_MM and abs(end[2] - z) < SAME_MM:
            spans.setdefault((round(x, 9), round(z, 9)), []).extend((y, end[1]))
    names = {"straight": ("",), "folded": (", fed conductor", ", second conductor")}.get(
        driven.form, (", fed side", ", side opposite the feed")
    )
    return [
        Axis(f"DE-{i + 1}" if i else "DE", f"driven element DE{name}", "DE", (x, min(y), z), (x, max(y), z), radius)
        for i, (((x, z), y), name) in enumerate(zip(spans.items(), names, strict=True))
    ]
