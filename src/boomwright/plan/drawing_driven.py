"""The driven element's sheet: the finished shape with its sizes, the wire before bending with its marks, a table."""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import TYPE_CHECKING

from boomwright.design.centreline import (
    Run,
    bend_radius_mm,
    developed_length_mm,
    loop_drop_mm,
    square_loop_side_mm,
    trace,
)
from boomwright.design.model import Driven
from boomwright.plan.drawing_marks import Block, Point, shown
from boomwright.plan.drawing_rods import tolerance
from boomwright.plan.drawing_sheet import detail_scale, notes_block, scale_words, table_block
from boomwright.plan.drawing_view import View
from boomwright.plan.former import plan_former

if TYPE_CHECKING:
    from boomwright.plan.plan import Plan

SIZE_HEAD = ("size", "mm")
BEND_HEAD = ("bend", "mark at", "post radius", "turn, deg")
WIRE_MM = 200.0


def driven_blocks(plan: Plan, scale: float) -> Sequence[Block]:
    """What stands on the driven element's sheet at a scale."""
    driven = plan.design.driven
    blocks = [_shape(driven, scale)]
    if driven.form != "straight":
        blocks.append(_wire(plan))
        blocks.append(bend_table(plan))
    blocks.append(table_block(SIZE_HEAD, size_rows(driven)))
    return [*blocks, notes_block(_notes(driven))]


def size_rows(driven: Driven) -> list[tuple[str, str]]:
    """Sizes that no view shows."""
    length = developed_length_mm(driven)
    rows = [("wire diameter", shown(driven.diameter_mm)), ("place on the boom", shown(driven.at_mm))]
    if driven.coat_mm > 0.0:
        rows.append(("coat", shown(driven.coat_mm)))
    if driven.form == "straight":
        rows.append(("each half", shown(length / 2.0)))
        return [*rows, ("tolerance", tolerance(length / 2.0))]
    rows.append(("developed length", shown(length)))
    rows.append(("tolerance", tolerance(length)))
    if driven.perimeter_mm is not None:
        rows.append(("perimeter on the axis", shown(driven.perimeter_mm)))
    return rows


def bend_table(plan: Plan) -> Block:
    """Marks and posts as the former has them."""
    bends = plan_former(plan.design, plan.shop)[0].bends
    rows = [(str(i), shown(b.mark_mm), shown(b.post_mm), f"{b.turn_deg:.1f}") for i, b in enumerate(bends or (), 1)]
    return table_block(BEND_HEAD, rows)


def _notes(driven: Driven) -> list[str]:
    if driven.form == "straight":
        return ["Two halves in one line, ends flat, edges broken 0.2; the gap lies over the boom's middle plane."]
    view = {"flat": "Lies in the datum plane", "upright": "Stands upright, second conductor above"}
    where = view[driven.plane] if driven.plane is not None else "Stands across the boom, fed at its lowest side"
    return [
        f"{where}. Bend so that the wire's edge at each mark meets the start of the bend.",
        "Turn: how far to bend round the post before the wire springs back to the shape drawn.",
    ]


def _flat(driven: Driven, point: tuple[float, float, float]) -> Point:
    """Into the plane of the element: along the rods, and forward (flat) or up."""
    if driven.form == "straight" or driven.plane == "flat":
        return point[1], point[0] - driven.at_mm
    return point[1], point[2]


def _shape(driven: Driven, scale: float) -> Block:
    view, r = View(scale), driven.diameter_mm / 2.0
    for conductor in trace(driven):
        _tube(view, driven, conductor)
    {"straight": _straight, "folded": _folded, "loop": _loop}[driven.form](view, driven, r)
    box = view.block().box
    title = {"straight": "DRIVEN ELEMENT", "folded": "DRIVEN ELEMENT, FOLDED", "loop": "DRIVEN ELEMENT, LOOP"}[
        driven.form
    ]
    seen = ", seen from above" if driven.form == "straight" or driven.plane == "flat" else ", seen from the front"
    view.write(title + seen, ((box[0] + box[2]) / 2.0, box[1] - 6.0), middle=True)
    return view.block()


def _tube(view: View, driven: Driven, runs: Sequence[Run]) -> None:
    """Both edges of a wire, its axis, its ends."""
    r = driven.diameter_mm / 2.0
    for side, layer in ((r, "VISIBLE"), (-r, "VISIBLE"), (0.0, "CENTRE")):
        points: list[tuple[float, ...]] = []
        for run in runs:
            start, end, bulge, left = _bent(driven, run)
            (sx, sy), (ex, ey) = left
            points += [(start[0] + side * sx, start[1] + side * sy, bulge), (end[0] + side * ex, end[1] + side * ey)]
        if layer == "VISIBLE":
            view.run(_joined(points))
        else:
            view.run(_joined(points), "CENTRE")
    for run, last in ((runs[0], 0), (runs[-1], 1)):
        start, stop, _, left = _bent(driven, run)
        (x, y), (u, v) = (start, stop)[last], left[last]
        view.run([(x - r * u, y - r * v), (x + r * u, y + r * v)])


def _joined(points: list[tuple[float, ...]]) -> list[tuple[float, ...]]:
    """Each run's end is the next one's start: the former goes."""
    kept = [points[i] for i in range(0, len(points), 2)]
    return [*kept, points[-1]]


def _bent(driven: Driven, run: Run) -> tuple[Point, Point, float, tuple[Point, Point]]:
    """A run in the plane: start, end, bulge, and the unit vectors to the left of its way at both ends."""
    start, end = _flat(driven, run.start), _flat(driven, run.end)
    chord = math.atan2(end[1] - start[1], end[0] - start[0])
    if run.middle is None:
        left = (-math.sin(chord), math.cos(chord))
        return start, end, 0.0, (left, left)
    mx, my = _flat(driven, run.middle)
    cross = (end[0] - start[0]) * (my - start[1]) - (end[1] - start[1]) * (mx - start[0])
    turn = run.angle_rad if cross < 0.0 else -run.angle_rad
    first, last = chord - turn / 2.0, chord + turn / 2.0
    lefts = ((-math.sin(first), math.cos(first)), (-math.sin(last), math.cos(last)))
    return start, end, math.tan(turn / 4.0), lefts


def _straight(view: View, driven: Driven, r: float) -> None:
    assert driven.length_mm is not None
    half, gap = driven.length_mm / 2.0, driven.gap_mm / 2.0
    low, up = view.at((0.0, -r))[1], view.at((0.0, r))[1]
    view.straight("DE gap", "x", ((-gap, r), (gap, r)), up + 8.0)
    view.straight("DE half", "x", ((-half, -r), (-gap, -r)), low - 8.0)
    view.straight("DE length", "x", ((-half, -r), (half, -r)), low - 16.0)
    detail = detail_scale(driven.diameter_mm, 12.0)
    end = View(detail, (view.at((half, 0.0))[0] + 20.0, 0.0))
    end.circle((0.0, 0.0), r)
    end.diameter("DE diameter", (0.0, 0.0), r, 45.0)
    end.write(f"END ({scale_words(detail)})", (end.origin[0], low - 16.0), middle=True)
    view.take(end)


def _folded(view: View, driven: Driven, r: float) -> None:
    assert driven.length_mm is not None
    assert driven.spacing_mm is not None
    half, gap, spacing, rc = driven.length_mm / 2.0, driven.gap_mm / 2.0, driven.spacing_mm, bend_radius_mm(driven)
    low, up = view.at((0.0, -r))[1], view.at((0.0, spacing + r))[1]
    right = view.at((half, 0.0))[0]
    view.straight("DE gap", "x", ((-gap, -r), (gap, -r)), low - 8.0)
    view.straight("DE length", "x", ((-half, spacing / 2.0), (half, spacing / 2.0)), up + 10.0)
    straight = half - r - rc
    view.straight("DE spacing", "y", ((straight, 0.0), (straight, spacing)), right + 9.0)
    view.radius("DE bend radius", (-straight, spacing - rc), rc - r, 150.0, 7.0 + driven.diameter_mm * view.scale)


def _loop(view: View, driven: Driven, r: float) -> None:
    gap, drop, rc = driven.gap_mm / 2.0, loop_drop_mm(driven), bend_radius_mm(driven)
    low = view.at((0.0, -drop - r))[1]
    view.straight("DE gap", "x", ((-gap, -drop - r), (gap, -drop - r)), low - 8.0)
    if driven.shape == "circle":
        view.diameter("DE outside", (0.0, 0.0), drop + r, 40.0)
        return
    assert driven.perimeter_mm is not None
    side = square_loop_side_mm(driven.perimeter_mm, rc) / 2.0 + r
    view.straight("DE outside across", "x", ((-side, 0.0), (side, 0.0)), view.at((0.0, side))[1] + 9.0)
    view.straight("DE outside upright", "y", ((0.0, -side), (0.0, side)), view.at((side, 0.0))[0] + 9.0)
    corner = side - r - rc
    view.radius("DE bend radius", (-corner, corner), rc - r, 135.0, 7.0 + driven.diameter_mm * view.scale)


def _wire(plan: Plan) -> Block:
    """The wire before bending, its marks counted from the end that meets the stop."""
    driven = plan.design.driven
    length, r = developed_length_mm(driven), driven.diameter_mm / 2.0
    view = View(detail_scale(length, WIRE_MM))
    view.rectangle((0.0, length), (-r, r))
    more = 3.0 / view.scale
    view.run([(-more, 0.0), (length + more, 0.0)], "CENTRE")
    bends = plan_former(plan.design, plan.shop)[0].bends
    for bend in bends:
        view.run([(bend.mark_mm, -r - more / 2.0), (bend.mark_mm, r + more / 2.0)])
    up = view.at((0.0, r))[1]
    marks = [(f"bend {i} mark", f"bend {i}", b.mark_mm) for i, b in enumerate(bends, 1)]
    view.running([*marks, ("developed length", "end", length)], r, up + 6.0)
    words = f"WIRE BEFORE BENDING, marks from the end at the stop ({scale_words(view.scale)})"
    view.write(words, (view.at((0.0, 0.0))[0], view.at((0.0, -r))[1] - 8.0))
    return view.block()
