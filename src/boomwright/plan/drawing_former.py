"""The former's sheet: its plate from above with posts, channel and gap, and the table of its bends."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

from boomwright.plan.drawing_driven import bend_table
from boomwright.plan.drawing_marks import Block, shown
from boomwright.plan.drawing_sheet import notes_block, table_block
from boomwright.plan.drawing_view import View
from boomwright.plan.former import BASE_MM, JIG_END_MM, JIG_FLOOR_MM, OVER_MM, FormerPlan, plan_former

if TYPE_CHECKING:
    from boomwright.plan.plan import Plan

SIZE_HEAD = ("size", "mm")
LEAST_LEG_MM = 1.0
"""A shorter run from the stop to the first post is none: the loop begins at the stop."""


def former_blocks(plan: Plan, scale: float) -> Sequence[Block]:
    """What stands on the former's sheet at a scale."""
    former, _ = plan_former(plan.design, plan.shop)
    blocks = [_plate(former, scale) if former.bends else _jig(former, scale)]
    if former.bends:
        blocks.append(bend_table(plan))
        note = "Lay the wire's end against the stop, its marks at the lines, and bend counter-clockwise."
        if former.is_corner:
            note = "One post for all: push the wire along to its next mark, then bend counter-clockwise."
    else:
        note = "Lay the rod in the channel and saw along both walls of the cross slot: what falls out is the gap."
    return [*blocks, table_block(SIZE_HEAD, former_rows(former)), notes_block([note])]


def former_rows(former: FormerPlan) -> list[tuple[str, str]]:
    """Sizes that no view shows."""
    rows = [("channel width", shown(former.channel_mm)), ("wire diameter", shown(former.wire_mm))]
    if former.bends:
        return [*rows, ("base", shown(BASE_MM)), ("posts above base", shown(former.wire_mm + OVER_MM))]
    return [*rows, ("floor of the channel", shown(JIG_FLOOR_MM)), ("height", shown(JIG_FLOOR_MM + former.wire_mm))]


def _plate(former: FormerPlan, scale: float) -> Block:
    view = View(scale)
    (x0, x1), (y0, y1) = former.x_mm, former.y_mm
    view.rectangle(former.x_mm, former.y_mm)
    for wall in former.walls:
        view.rectangle(*wall)
    r = former.wire_mm / 2.0
    for bend in former.posts:
        (x, y), (u, v) = bend.start, bend.inward
        view.circle(bend.middle(former.wire_mm), bend.post_mm)
        view.run([(x - (r + 4.0) * u, y - (r + 4.0) * v), (x - r * u, y - r * v)])
    left, low = view.at((x0, 0.0))[0], view.at((0.0, y0))[1]
    if not former.is_corner:
        half = former.gap_mm / 2.0
        view.run([(-half, -former.channel_mm / 2.0), (-half, r), (half, r), (half, -former.channel_mm / 2.0)])
        view.straight("gap feeler", "x", ((-half, y0), (half, y0)), low - 8.0)
        if former.leg_mm > LEAST_LEG_MM:
            view.straight("stop to post 1", "x", ((half, y0), (former.posts[0].start[0], y0)), low - 16.0)
    middles = [bend.middle(former.wire_mm) for bend in former.posts]
    if len(middles) > 1:
        a, b = middles[0], middles[-1]
        up = view.at((0.0, y1))[1]
        if abs(a[0] - b[0]) > 1.0:
            view.straight("posts apart", "x", ((a[0], y1), (b[0], y1)), up + 8.0)
    view.diameter("post 1", middles[0], former.posts[0].post_mm, 60.0, 8.0)
    view.straight("plate length", "x", ((x0, y0), (x1, y0)), low - 24.0)
    view.straight("plate width", "y", ((x0, y0), (x0, y1)), left - 8.0)
    view.write("PLAN (seen from above)", (left, low - 31.0))
    return view.block()


def _jig(former: FormerPlan, scale: float) -> Block:
    view = View(scale)
    (x0, x1), (y0, y1) = former.x_mm, former.y_mm
    half, end = former.channel_mm / 2.0, JIG_END_MM if former.closed else 0.0
    gap = former.gap_mm / 2.0
    view.rectangle(former.x_mm, former.y_mm)
    view.rectangle((x0 + end, x1 - end), (-half, half))
    for x in (-gap, gap):
        view.run([(x, y0), (x, y1)])
    view.run([(x0 - 3.0 / scale, 0.0), (x1 + 3.0 / scale, 0.0)], "CENTRE")
    left, low, up = view.at((x0, 0.0))[0], view.at((0.0, y0))[1], view.at((0.0, y1))[1]
    view.straight("gap slot", "x", ((-gap, y1), (gap, y1)), up + 8.0)
    if former.closed:
        view.straight("stop to stop", "x", ((x0 + end, y0), (x1 - end, y0)), low - 8.0)
    view.straight("jig length", "x", ((x0, y0), (x1, y0)), low - 16.0)
    view.straight("jig width", "y", ((x0, y0), (x0, y1)), left - 8.0)
    view.write("PLAN (seen from above)", (left, low - 23.0))
    return view.block()
