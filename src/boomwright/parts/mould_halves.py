"""The solids of the feed-point mould: two halves and, for a loop, the clip."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

import numpy as np

from boomwright.parts.solids import (
    Shape,
    Span,
    box,
    conductor,
    cut,
    cylinder,
    prism_along_x,
    prism_along_y,
    prism_along_z,
)
from boomwright.plan.cavity import Pull
from boomwright.plan.compensation import NOMINAL, Offsets
from boomwright.plan.mould_plan import BoomChannel, Half, MouldPlan, Opening
from boomwright.plan.parting import PRY_DEPTH_MM, SOCKET_SPARE_MM, Notch, Pin

if TYPE_CHECKING:
    from boomwright.plan.clip import ClipPlan

OVERRUN_MM = 1.0
CHAMFER_MM = 0.4
INTO_CAVITY_MM = 0.3
PIN_ROOT_MM = 1.0
PIN_LEAD_MM = 0.3


def half_shape(mould: MouldPlan, half: Half, offsets: Offsets = NOMINAL) -> Shape:
    """One half in the design's frame, drawn with these offsets."""
    growth, widening = offsets.outline_growth_mm, offsets.hole_shrink_mm / 2.0
    blank = _blank_along_z(mould, half, growth) if mould.pull == "z" else _blank_along_x(mould, half, growth)
    tools = [cavity_shape(mould, growth), boom_channel(mould.boom, mould.clearance_mm, widening, mould.pull)]
    if mould.pull == "x":
        tools += _lead_in(mould, mould.bed_mm(half), widening)
    tools += [conductor(runs, mould.conductor_channel_mm + widening) for runs in mould.conductors]
    if mould.coax is not None:
        start, end = mould.coax.start, mould.coax.end
        tools.append(_rod(start, end, mould.coax.radius_mm + mould.clearance_mm + widening))
    tools += [_notch(mould, notch, mould.half_span_mm(half), growth, OVERRUN_MM) for notch in mould.face.ties]
    if half == "upper" or mould.pull == "x":
        tools += [cone for opening in (mould.funnel, mould.vent) for cone in _opening(opening)]
    if half == "lower":
        depth = (mould.parting_mm[1] - PRY_DEPTH_MM, mould.parting_mm[1])
        tools += [_notch(mould, notch, depth, growth, 0.0) for notch in mould.face.pries]
        pins = [_pin(mould, pin, growth) for pin in mould.face.pins]
        body = blank.fuse(*pins) if pins else blank
    else:
        tools += [_socket(mould, pin, widening) for pin in mould.face.pins]
        body = blank
    return cut(body, tools).clean()


def _blank_along_z(mould: MouldPlan, half: Half, growth_mm: float) -> Shape:
    """The outside of a half with its step: the upper one's tongues come down between the lower one's side walls."""
    (x0, x1), (_, y1), (low, high) = mould.block
    axis, level = mould.parting_mm
    outer, far = y1 - growth_mm, high if half == "upper" else low
    points = [(-outer, far), (outer, far), (outer, level)]
    if axis < level:
        # Both follow the cavity's drafted side planes, so the tongue wedges in with the clearance all the way.
        inset = mould.clearance_mm + growth_mm if half == "upper" else -growth_mm
        step = [(mould.cavity.along.at(z, mould.cavity.slope)[1] - inset, z) for z in (level, axis)]
        points += [*step, *((-y, z) for y, z in reversed(step))]
    points.append((-outer, level))
    return _chamfered(prism_along_x(points, (x0 + growth_mm, x1 - growth_mm)), 2, far)


def _blank_along_x(mould: MouldPlan, half: Half, growth_mm: float) -> Shape:
    _, (_, y1), (z0, z1) = mould.block
    span = mould.half_span_mm(half)
    y = (-y1 + growth_mm, y1 - growth_mm)
    blank = box(span, y, (z0 + growth_mm, z1 - growth_mm))
    return _chamfered(blank, 0, span[1] if half == "upper" else span[0])


def _chamfered(blank: Shape, axis: int, level_mm: float) -> Shape:
    """The blank with the edges that lie on the bed broken."""
    edges = [
        edge
        for edge in blank.Edges()
        if all(abs(point.toTuple()[axis] - level_mm) < 1e-9 for point in (edge.startPoint(), edge.endPoint()))
    ]
    return blank.chamfer(CHAMFER_MM, None, edges)


def cavity_shape(mould: MouldPlan, growth_mm: float = 0.0) -> Shape:
    """The hollow as a solid, its side faces moved out by `growth_mm`."""
    import shapely

    cavity = mould.cavity
    across = cavity.across.outline(cavity.depth_mm, cavity.slope, growth_mm)
    along = cavity.along.outline(cavity.depth_mm, cavity.slope, growth_mm)
    (x0, x1), (y0, y1), (z0, z1) = [(low - OVERRUN_MM, high + OVERRUN_MM) for low, high in cavity.box_mm]
    if cavity.pull == "z":
        return prism_along_y(across, (y0, y1)).intersect(prism_along_x(along, (x0, x1)))
    in_xz = [(x, z) for z, x in across]
    in_xy = shapely.Polygon([(x, y) for y, x in along])
    return prism_along_y(in_xz, (y0, y1)).intersect(prism_along_z(in_xy, (z0, z1)))


def _lead_in(mould: MouldPlan, bed_mm: float, widening_mm: float) -> list[Shape]:
    """The boom's channel wider where it meets the bed, as the outer edges are broken there; none if it ends before."""
    import cadquery as cq
    import shapely

    channel, c = mould.boom, CHAMFER_MM
    if not channel.x_mm[0] < bed_mm < channel.x_mm[1]:
        return []
    inward = -1.0 if bed_mm > mould.at_mm else 1.0
    narrow = channel.half_mm + mould.clearance_mm + widening_mm
    outside, inside = bed_mm - inward * c, bed_mm + inward * c
    far = channel.axis_mm + (4.0 * channel.half_mm + OVERRUN_MM) * (1.0 if channel.open == "up" else -1.0)
    wide = narrow + 2.0 * c
    outline = shapely.Polygon([(outside, -wide), (inside, -narrow), (inside, narrow), (outside, wide)])
    if channel.section == "round":
        start, along = cq.Vector(outside, 0.0, channel.axis_mm), cq.Vector(inward, 0.0, 0.0)
        cone = cq.Solid.makeCone(wide, narrow, 2.0 * c, start, along)
        return [cone, prism_along_z(outline, (min(channel.axis_mm, far), max(channel.axis_mm, far)))]
    closed = channel.axis_mm + (-1.0 if channel.open == "up" else 1.0) * np.array([wide, narrow])
    profile = [(outside, closed[0]), (inside, closed[1]), (inside, far), (outside, far)]
    across = prism_along_y([(float(x), float(z)) for x, z in profile], (-wide, wide))
    reach = (min(far, *closed.tolist()), max(far, *closed.tolist()))
    return [across.intersect(prism_along_z(outline, reach))]


def boom_channel(channel: BoomChannel, clearance_mm: float, widening_mm: float, printed_along: Pull) -> Shape:
    """The boom's outline widened by a clearance, drawn out along x; open: straight sides from the axis on.

    The printer's widening is for faces that stand upright on its bed: a flat floor that lies level keeps its height.
    """
    import cadquery as cq

    half, axis, (x0, x1) = channel.half_mm + clearance_mm + widening_mm, channel.axis_mm, channel.x_mm
    beyond = 4.0 * channel.half_mm + OVERRUN_MM
    if channel.section == "square":
        level = half if printed_along == "x" else half - widening_mm
        z = (axis - level - beyond * (channel.open == "down"), axis + level + beyond * (channel.open == "up"))
        return box((x0, x1), (-half, half), z)
    if not channel.open:
        return cylinder((x0, 0.0, axis), (1, 0, 0), half, x1 - x0)
    sign = 1.0 if channel.open == "up" else -1.0
    far = axis + sign * beyond
    a, b, c, d = (cq.Vector(x0, y, z) for y, z in ((half, axis), (half, far), (-half, far), (-half, axis)))
    bottom = cq.Vector(x0, 0.0, axis - sign * half)
    edges = [cq.Edge.makeLine(a, b), cq.Edge.makeLine(b, c), cq.Edge.makeLine(c, d)]
    edges.append(cq.Edge.makeThreePointArc(d, bottom, a))
    return cq.Solid.extrudeLinear(cq.Wire.assembleEdges(edges), [], cq.Vector(x1 - x0, 0.0, 0.0))


def _rod(start: Sequence[float], end: Sequence[float], radius_mm: float) -> Shape:
    direction = [b - a for a, b in zip(start, end, strict=True)]
    return cylinder(start, direction, radius_mm, sum(d * d for d in direction) ** 0.5)


def _opening(opening: Opening) -> list[Shape]:
    """Cones from just inside the cavity to just outside the mould."""
    import cadquery as cq

    origin, direction = cq.Vector(*opening.at), cq.Vector(*opening.direction)
    cones, last = [], len(opening.stages) - 2
    for index, ((d0, r0), (d1, r1)) in enumerate(zip(opening.stages, opening.stages[1:], strict=False)):
        lean = (r1 - r0) / (d1 - d0)
        before = INTO_CAVITY_MM if index == 0 else 0.0
        after = INTO_CAVITY_MM if index == last else 0.0
        ends = (r0 - lean * before, r1 + lean * after)
        length, start = d1 - d0 + before + after, origin + direction * (d0 - before)
        if abs(lean) < 1e-9:
            cones.append(cq.Solid.makeCylinder(ends[0], length, start, direction))
        else:
            cones.append(cq.Solid.makeCone(ends[0], ends[1], length, start, direction))
    return cones


def _point(mould: MouldPlan, u_mm: float, y_mm: float, pull_mm: float) -> tuple[float, float, float]:
    """A point of the parting face's coordinates in the design's frame."""
    return (u_mm, y_mm, pull_mm) if mould.pull == "z" else (pull_mm, y_mm, u_mm)


def _notch(mould: MouldPlan, notch: Notch, pull_mm: Span, growth_mm: float, over_mm: float) -> Shape:
    """A notch over part of the pull: its own sides move into the material, those on the mould's outside run over."""
    faces = (mould.block[0 if mould.pull == "z" else 2], mould.block[1])
    spans = []
    for (low, high), (least, most) in zip((notch.u_mm, notch.y_mm), faces, strict=True):
        over = OVERRUN_MM
        spans.append((low - (over if low <= least else growth_mm), high + (over if high >= most else growth_mm)))
    along_pull = (pull_mm[0] - over_mm, pull_mm[1] + (over_mm if over_mm else OVERRUN_MM))
    u, y = spans
    return box(u, y, along_pull) if mould.pull == "z" else box(along_pull, y, u)


def _pin(mould: MouldPlan, pin: Pin, growth_mm: float) -> Shape:
    """A pin with its root in the body and a lead-in at its tip."""
    import cadquery as cq

    radius, lead = pin.diameter_mm / 2.0 - growth_mm, min(PIN_LEAD_MM, pin.diameter_mm / 4.0)
    profile = [
        (0.0, -PIN_ROOT_MM),
        (radius, -PIN_ROOT_MM),
        (radius, pin.height_mm - lead),
        (radius - lead, pin.height_mm),
        (0.0, pin.height_mm),
    ]
    base = cq.Vector(*_point(mould, pin.u_mm, pin.y_mm, mould.parting_mm[1]))
    # The profile's first coordinate runs along y, its second along the pull.
    pull = cq.Vector(*_point(mould, 0.0, 0.0, 1.0))
    corners = [base + cq.Vector(0.0, y, 0.0) + pull * w for y, w in profile]
    return cq.Solid.revolve(cq.Wire.makePolygon(corners, close=True), [], 360.0, base, base + pull)


def _socket(mould: MouldPlan, pin: Pin, widening_mm: float) -> Shape:
    radius = pin.diameter_mm / 2.0 + mould.play_mm + widening_mm
    level = mould.parting_mm[1]
    start = _point(mould, pin.u_mm, pin.y_mm, level - OVERRUN_MM)
    end = _point(mould, pin.u_mm, pin.y_mm, level + pin.height_mm + SOCKET_SPARE_MM)
    return _rod(start, end, radius)


def clip_shape(clip: ClipPlan, offsets: Offsets = NOMINAL) -> Shape:
    """The clip in the design's frame, drawn with these offsets."""
    g, widening = offsets.outline_growth_mm, offsets.hole_shrink_mm / 2.0
    x, y = (clip.x_mm[0] + g, clip.x_mm[1] - g), (-clip.half_y_mm + g, clip.half_y_mm - g)
    blank = _chamfered(box(x, y, (clip.foot_mm, clip.top_mm)), 2, clip.top_mm)
    slot = box(
        (clip.slot_mm[0] - g, clip.slot_mm[1] + g),
        (y[0] - OVERRUN_MM, y[1] + OVERRUN_MM),
        (clip.foot_mm - OVERRUN_MM, clip.bridge_mm),
    )
    reach = (x[0] - OVERRUN_MM, x[1] + OVERRUN_MM)
    channel = BoomChannel(clip.section, clip.boom_half_mm, clip.boom_axis_mm, reach, "down")
    return cut(blank, [slot, boom_channel(channel, clip.boom_clearance_mm, widening, "z")])
