"""A section of the printed cradle as a solid, in the cradle's own frame, drawn with a printer's offsets."""

from __future__ import annotations

from typing import Any

from boomwright.parts.printed import chamfered_plate, label_tools
from boomwright.parts.solids import Shape, Span, box, cut, cylinder, prism_along_x, prism_along_y, unite
from boomwright.plan.compensation import NOMINAL, Offsets, drawn_apex_mm
from boomwright.plan.cradle_model import BASE_MM, BEAM_MM, Bearer, Saddle, Section, mirrored
from boomwright.plan.joint import BORE_MM
from boomwright.plan.saddle import TIE_GROOVE_DEPTH_MM, TIE_SLOT_MM

SIDES = (1.0, -1.0)
FOOT_MM = 0.5 * BASE_MM
"""What stands on the base begins inside it, so that both become one."""


def section_shape(section: Section, height_mm: float, clearance_mm: float, offsets: Offsets = NOMINAL) -> Shape:
    """A section whose axes lie at `height_mm`; `clearance_mm` of its sockets, normal to their faces."""
    return bored(solid_shape(section, height_mm, clearance_mm, offsets.outline_growth_mm), section, offsets)


def bored(shape: Shape, section: Section, offsets: Offsets = NOMINAL) -> Shape:
    """A section with its bores, which is all that the shrinking of holes changes."""
    radius = (BORE_MM + offsets.hole_shrink_mm) / 2.0
    return cut(shape, [cylinder((x, y, -1.0), (0, 0, 1), radius, BASE_MM + 2.0) for x, y in section.bores])


def solid_shape(section: Section, height_mm: float, clearance_mm: float, growth_mm: float = 0.0) -> Shape:
    """A section before its bores."""
    g = growth_mm
    parts: list[Shape] = [_bearer(b, side, height_mm, g) for side in SIDES for b in section.bearers]
    parts += [box(_drawn(b.x_mm, g), _drawn(b.y_mm, g), (FOOT_MM, b.top_mm)) for b in section.blocks]
    parts += [_saddle(s, g) for s in section.saddles]
    body = unite(chamfered_plate(_outline(section, clearance_mm), BASE_MM, g), parts)
    tools = [tool for saddle in section.saddles for tool in _tie_tools(saddle, g)]
    return cut(body, tools + label_tools(section.labels))


def _outline(section: Section, clearance_mm: float) -> Any:
    """The base as a shapely polygon: its rectangles and tenons less its sockets."""
    import shapely

    plates = [shapely.box(x[0], y[0], x[1], y[1]) for x, y in section.base]
    outline = shapely.union_all([*plates, *(shapely.Polygon(d.outline()) for d in section.tenons)])
    return outline.difference(shapely.union_all([shapely.Polygon(d.outline(clearance_mm)) for d in section.sockets]))


def _drawn(span: Span, growth_mm: float) -> Span:
    return span[0] + growth_mm, span[1] - growth_mm


def _bearer(bearer: Bearer, side: float, height_mm: float, growth_mm: float) -> Shape:
    """A wall with a V notch a conductor, its top at the axis height."""
    x = _drawn(bearer.x_mm, growth_mm)
    top = height_mm
    points: list[tuple[float, float]] = [(x[0], FOOT_MM)]
    for notch in bearer.notches:
        apex = drawn_apex_mm(notch.apex_mm, growth_mm)
        left, right = notch.at_mm - (top - apex), notch.at_mm + (top - apex)
        points.append((x[0], top) if left > x[0] else (x[0], top - (x[0] - left)))
        if left > x[0]:
            points.append((left, top))
        points.append((notch.at_mm, apex))
        points.append((right, top) if right < x[1] else (x[1], top - (right - x[1])))
    if not bearer.notches:
        points.append((x[0], top))
    if points[-1][0] < x[1]:
        points.append((x[1], top))
    points.append((x[1], FOOT_MM))
    unique = [p for i, p in enumerate(points) if p != points[i - 1]]
    return prism_along_y(unique, _drawn(mirrored(bearer.y_mm, side), growth_mm))


def _saddle(saddle: Saddle, growth_mm: float) -> Shape:
    g, outer = growth_mm, saddle.outer_half_mm - growth_mm
    if saddle.channel_half_mm == saddle.top_mm - saddle.low_mm:
        apex = drawn_apex_mm(saddle.low_mm, g)
        half = saddle.top_mm - apex
        hollow = [(half, saddle.top_mm), (0.0, apex), (-half, saddle.top_mm)]
    else:
        half = saddle.channel_half_mm + g
        hollow = [(half, saddle.top_mm), (half, saddle.low_mm), (-half, saddle.low_mm), (-half, saddle.top_mm)]
    points = [(-outer, FOOT_MM), (outer, FOOT_MM), (outer, saddle.top_mm), *hollow, (-outer, saddle.top_mm)]
    return prism_along_x(points, _drawn(saddle.x_mm, g))


def _tie_tools(saddle: Saddle, growth_mm: float) -> list[Shape]:
    """Two slots through the beam, and a groove with 45° walls under it that the tie lies in."""
    half = TIE_SLOT_MM[0] / 2.0 + growth_mm
    x = (saddle.middle_mm - half, saddle.middle_mm + half)
    over = saddle.top_mm + BEAM_MM
    low, high = saddle.tie_y_mm[0] - growth_mm, saddle.tie_y_mm[1] + growth_mm
    tools = [box(x, mirrored((low, high), side), (-1.0, over)) for side in SIDES]
    apex, m = TIE_GROOVE_DEPTH_MM + growth_mm, saddle.middle_mm
    groove = [(m - apex - 1.0, -1.0), (m + apex + 1.0, -1.0), (m, apex)]
    return [*tools, prism_along_y(groove, (-high, high))]
