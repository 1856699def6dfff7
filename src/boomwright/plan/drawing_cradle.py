"""The cradle's sheet: side view with the height of the axes, plan with rails and pockets, and the notches' table."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

from boomwright.plan.cradle import CradlePlan
from boomwright.plan.drawing_marks import Block, shown
from boomwright.plan.drawing_sheet import notes_block, table_block
from boomwright.plan.drawing_view import View

if TYPE_CHECKING:
    from boomwright.plan.plan import Plan

NOTCH_HEAD = ("notch", "at x", "rod dia.", "apex height", "stop to stop")


def cradle_blocks(plan: Plan, scale: float) -> Sequence[Block]:
    """What stands on the cradle's sheet at a scale."""
    notes = [
        "DATUM: x = 0 of the boom. The antenna lies upside down; FORWARD is to the right. Long dashes: outer sizes.",
        "Notches: 90 degrees; every rod's axis lies at the axis height whatever its diameter.",
    ]
    return [_views(plan.cradle, scale), table_block(NOTCH_HEAD, notch_rows(plan), 32), notes_block(notes)]


def notch_rows(plan: Plan) -> list[tuple[str, str, str, str, str]]:
    """A row for every conductor that is held; the front one of a folded element lies between the same stops."""
    cradle, slide = plan.cradle, plan.shop.printer.slide_clearance_mm
    apexes = {n.tag: n.apex_mm for b in cradle.bearers for n in b.notches}
    pockets = {h.tag: shown(2.0 * (h.tip_mm + slide)) for h in cradle.held if h.tag != "DE-front"}
    return [
        (h.tag, shown(h.at_mm), shown(2.0 * h.radius_mm), shown(apexes[h.tag]), pockets.get(h.tag, "-"))
        for h in cradle.held
    ]


def _views(cradle: CradlePlan, scale: float) -> Block:
    (x0, x1), (y0, y1), (_, z1) = cradle.extent_mm
    side = View(scale)
    _side(cradle, side)
    marks = [(f"{h.tag} axis", h.tag, h.at_mm) for h in cradle.held]
    side.running(marks, cradle.axis_height_mm, side.at((0.0, z1))[1] + 7.0)
    right = side.at((x1, 0.0))[0]
    side.straight("axis height", "y", ((x1, 0.0), (cradle.held[-1].at_mm, cradle.axis_height_mm)), right + 8.0)
    below = View(scale, (0.0, side.at((0.0, 0.0))[1] - 12.0 - y1 * scale))
    below.rectangle((x0, x1), (y0, y1), "HIDDEN")
    below.run([(x0 - 3.0 / scale, 0.0), (x1 + 3.0 / scale, 0.0)], "CENTRE")
    for sign in (1.0, -1.0):
        for bearer in cradle.bearers:
            below.rectangle(bearer.x_mm, (sign * bearer.y_mm[0], sign * bearer.y_mm[1]))
        for stop in cradle.stops:
            below.rectangle(stop.x_mm, (sign * stop.y_mm[0], sign * stop.y_mm[1]))
    for held in cradle.held:
        below.run([(held.at_mm, -held.tip_mm), (held.at_mm, held.tip_mm)], "CENTRE")
    for saddle in cradle.saddles:
        below.rectangle(saddle.x_mm, (-saddle.outer_half_mm, saddle.outer_half_mm))
    low = below.at((0.0, y0))[1]
    below.straight("cradle length", "x", ((x0, y0), (x1, y0)), low - 8.0)
    below.straight("cradle width", "y", ((x1, y0), (x1, y1)), right + 24.0)
    if cradle.rails is not None:
        inner, outer = cradle.rails
        end = cradle.bearers[0].x_mm[1]
        below.straight("rails outside", "y", ((end, -outer), (end, outer)), right + 16.0)
        below.straight("rails inside", "y", ((end, -inner), (end, inner)), right + 8.0)
    below.write("PLAN (seen from above)", (below.at((x0, 0.0))[0], low - 15.0))
    side.take(below)
    return side.block()


def _side(cradle: CradlePlan, view: View) -> None:
    """Seen from the side: bearers with their notches, stops and saddles behind them."""
    (x0, x1), _, _ = cradle.extent_mm
    height = cradle.axis_height_mm
    view.run([(x0, 0.0), (x1, 0.0)])
    view.run([(x0 - 3.0 / view.scale, height), (x1 + 3.0 / view.scale, height)], "CENTRE")
    for bearer in cradle.bearers[:1] if cradle.rails is not None else cradle.bearers:
        low, high = bearer.x_mm
        points = [(low, 0.0), (low, height)]
        for notch in sorted(bearer.notches, key=lambda n: n.at_mm):
            half = height - notch.apex_mm
            left, right = max(notch.at_mm - half, low), min(notch.at_mm + half, high)
            points += [(left, notch.apex_mm + notch.at_mm - left), (notch.at_mm, notch.apex_mm)]
            points += [(right, notch.apex_mm + right - notch.at_mm)]
        first, last = bearer.notches[0], bearer.notches[-1]
        if first.at_mm - low <= height - first.apex_mm:
            points.remove((low, height))
        if high - last.at_mm > height - last.apex_mm:
            points.append((high, height))
        view.run([*points, (high, 0.0)], closed=True)
    for saddle in cradle.saddles:
        view.rectangle(saddle.x_mm, (0.0, saddle.top_mm), "HIDDEN")
