"""The mould's sheet: closed block from the side and from the rear, cavity and channels as hidden lines, its sizes."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

from boomwright.plan.drawing_marks import Block, Point, shown
from boomwright.plan.drawing_sheet import notes_block, table_block
from boomwright.plan.drawing_view import View
from boomwright.plan.mould_plan import MouldPlan, Opening

if TYPE_CHECKING:
    from boomwright.plan.plan import Plan

SIZE_HEAD = ("size", "mm")
SHOWN_SIZES = ("wall_rear_mm", "wall_front_mm", "conductor_channel_mm", "coax_channel_mm", "pin_diameter_mm")


def mould_blocks(plan: Plan, scale: float) -> Sequence[Block]:
    """What stands on the mould's sheet at a scale."""
    mould = plan.mould
    notes = [
        "Closed mould, both halves together, in its place on the antenna; heights count from the datum plane.",
        f"Drawn off along {mould.pull}; parting line: long chain. Channels are open along the pull. "
        f"Draft {plan.shop.mould.draft_deg:g} deg.",
    ]
    return [_views(plan, scale), table_block(SIZE_HEAD, mould_rows(plan)), notes_block(notes)]


def mould_rows(plan: Plan) -> list[tuple[str, str]]:
    """Sizes that no view shows, as the plan names them."""
    sizes = {size.key.removeprefix("mould."): size.value for size in plan.sizes if size.key.startswith("mould.")}
    return [(key.removesuffix("_mm").replace("_", " "), shown(sizes[key])) for key in SHOWN_SIZES if key in sizes]


def _views(plan: Plan, scale: float) -> Block:
    """From the side (x right), and to its right what is seen from the left, from the rear (first angle)."""
    mould = plan.mould
    (x0, x1), (y0, y1), (z0, z1) = mould.block
    (cx0, cx1), (cy0, cy1), (cz0, cz1) = mould.cavity.box_mm
    side = View(scale)
    side.rectangle((x0, x1), (z0, z1))
    side.rectangle((cx0, cx1), (cz0, cz1), "HIDDEN")
    _parting(mould, side, (x0, x1), (z0, z1))
    axis, half = mould.boom.axis_mm, mould.boom.half_mm
    for z in (axis - half, axis + half):
        if z0 < z < z1:
            side.run([(x0, z), (x1, z)], "HIDDEN")
    side.run([(x0 - 3.0 / scale, axis), (x1 + 3.0 / scale, axis)], "CENTRE")
    for x, z in _crossings(mould):
        side.circle((x, z), mould.conductor_channel_mm)
    left, low, up = side.at((x0, 0.0))[0], side.at((0.0, z0))[1], side.at((0.0, max(z1, axis + half)))[1]
    side.straight("cavity along", "x", ((cx0, z1), (cx1, z1)), up + 8.0)
    side.straight("block along", "x", ((x0, z1), (x1, z1)), up + 16.0)
    side.straight("cavity height", "y", ((x0, cz0), (x0, cz1)), left - 8.0)
    side.straight("block height", "y", ((x0, z0), (x0, z1)), left - 16.0)
    rear = View(scale, (side.at((x1, 0.0))[0] + 24.0 - y0 * scale, 0.0))
    rear.rectangle((y0, y1), (z0, z1))
    rear.rectangle((cy0, cy1), (cz0, cz1), "HIDDEN")
    if mould.pull == "z":
        _parting(mould, rear, (y0, y1), (z0, z1))
    if mould.boom.section == "round":
        rear.circle((0.0, axis), half)
    else:
        rear.rectangle((-half, half), (axis - half, axis + half))
        rear.run([(0.0, axis - half * 1.3), (0.0, axis + half * 1.3)], "CENTRE")
    for opening in (mould.funnel, mould.vent):
        _opening(rear, opening)
    rear.straight("cavity across", "x", ((cy0, z1), (cy1, z1)), up + 8.0)
    rear.straight("block across", "x", ((y0, z1), (y1, z1)), up + 16.0)
    rear.straight("datum above base", "y", ((y1, z0), (0.0, 0.0)), rear.at((y1, 0.0))[0] + 9.0)
    rear.run([(y0 - 2.0 / scale, 0.0), (y1 + 2.0 / scale, 0.0)], "CENTRE")
    low = min(low, side.at((0.0, axis - 1.3 * half))[1])
    side.write("FROM THE SIDE", (side.at(((x0 + x1) / 2.0, 0.0))[0], low - 7.0), middle=True)
    rear.write("FROM THE REAR", (rear.at((0.0, 0.0))[0], low - 7.0), middle=True)
    side.take(rear)
    return side.block()


def _parting(mould: MouldPlan, view: View, across: Point, upward: Point) -> None:
    """Where the halves part."""
    for at in dict.fromkeys(mould.parting_mm):
        if mould.pull == "z":
            view.run([(across[0], at), (across[1], at)], "CENTRE")
        else:
            view.run([(at, upward[0]), (at, upward[1])], "CENTRE")


def _crossings(mould: MouldPlan) -> list[Point]:
    """Where conductors pass through the block's wall at +y, in x and z."""
    found, (x, _, z), wall = [], mould.block, mould.cavity.along.span_mm[1]
    for run in (run for runs in mould.conductors for run in runs):
        low, high = sorted((run.start, run.end), key=lambda point: point[1])
        share = (wall - low[1]) / (high[1] - low[1]) if low[1] <= wall < high[1] else None
        if share is not None:
            at = (low[0] + share * (high[0] - low[0]), low[2] + share * (high[2] - low[2]))
            if x[0] < at[0] < x[1] and z[0] < at[1] < z[1]:
                found.append((round(at[0], 6), round(at[1], 6)))
    return list(dict.fromkeys(found))


def _opening(view: View, opening: Opening) -> None:
    """A funnel or vent as it is seen along the boom, where it does not run along it."""
    (_, y, z), (_, dy, dz) = opening.at, opening.direction
    if abs(dy) + abs(dz) < 0.5:
        return
    stages = [(0.0, opening.stages[0][1]), *opening.stages]
    for sign in (1.0, -1.0):
        points = [(y + s * dy - sign * r * dz, z + s * dz + sign * r * dy) for s, r in stages]
        view.run(points, "HIDDEN")
