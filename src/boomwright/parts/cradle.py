"""The printed cradle: holds every conductor of the datum plane level, square and centred while the adhesive cures."""

from __future__ import annotations

from typing import TYPE_CHECKING

from boomwright.parts.palette import PRINTED
from boomwright.parts.solids import Shape, Span, box, cut, place, prism_along_x, prism_along_y, prism_along_z, unite
from boomwright.pieces import Body, Expectation, Part, Piece, Probe, SolidPiece
from boomwright.plan.compensation import NOMINAL, Offsets, drawn_apex_mm, printer_offsets
from boomwright.plan.cradle import (
    BASE_MM,
    BEAM_MM,
    CHAMFER_MM,
    TIE_GROOVE_DEPTH_MM,
    TIE_SLOT_MM,
    Bearer,
    CradlePlan,
    Engraving,
    Saddle,
    cradle_left_out,
)

if TYPE_CHECKING:
    from boomwright.plan.plan import Plan

NOTCH_ALLOWED_MM = 0.01
EXTENT_ALLOWED_MM = 0.005
SIDES = (1.0, -1.0)


class CradlePart(Part):
    """The cradle in one piece."""

    name = "cradle"
    purpose = "holds all rods on the datum plane, square and centred, while the adhesive cures"
    processes = ("print",)

    def left_out(self, plan: Plan) -> str | None:
        """Without a conductor on the datum plane there is nothing to hold."""
        return cradle_left_out(plan.design)

    def build(self, plan: Plan) -> tuple[Piece, ...]:
        """The cradle, nominal and as drawn for this printer."""
        cradle = plan.cradle
        offsets = printer_offsets(plan.shop.printer)
        # The cradle has neither bores nor channels: only the outline growth changes it.
        drawn = Offsets(outline_growth_mm=offsets.outline_growth_mm)

        def body(offsets: Offsets) -> Body:
            # Turning about x is its own inverse: the same frame takes the cradle into the design.
            return Body("cradle-1", place(cradle_shape(cradle, offsets), cradle.frame), PRINTED)

        printed = (body(drawn),) if drawn else None
        taken = {"outline_growth_mm": drawn.outline_growth_mm, "hole_shrink_mm": 0.0}
        return (SolidPiece("cradle-1", "print", (body(NOMINAL),), cradle.frame, printed, taken),)

    def expect(self, plan: Plan) -> tuple[Expectation, ...]:
        """Every notch's resting axis on both sides, the relief, the outer sizes, and no overlap at any build stage."""
        found: list[Expectation] = []
        growth = plan.shop.printer.outline_growth_mm
        for suffix, drawn in (("step", 0.0), ("stl", growth)):
            found += _expect_notches(plan.cradle, f"print/cradle-1.{suffix}", drawn)
        return (*found, *_expect_body(plan, "print/cradle-1.step"))


def _expect_notches(cradle: CradlePlan, file: str, growth_mm: float) -> list[Expectation]:
    found = []
    radii = {h.tag: h.radius_mm for h in cradle.held}
    for bearer, notch in [(b, n) for b in cradle.bearers for n in b.notches]:
        for side, word in ((1.0, "+y"), (-1.0, "-y")):
            span = _on_side(bearer.y_mm, side)
            diameter = 2.0 * radii[notch.tag]
            base = {"at_mm": notch.at_mm, "side_y_mm": span, "diameter_mm": diameter, "growth_mm": growth_mm}
            for quantity, what, value in (
                ("height_mm", "axis height", cradle.axis_height_mm),
                ("at_mm", "axis position", notch.at_mm),
            ):
                words = f"{notch.tag} {what} resting at {word} {abs(bearer.y_mm[0]):g} to {abs(bearer.y_mm[1]):g}"
                probe = Probe("resting_axis", base | {"quantity": quantity})
                found.append(Expectation(file, words, value, NOTCH_ALLOWED_MM, "mm", probe))
    return found


def _expect_body(plan: Plan, file: str) -> list[Expectation]:
    cradle = plan.cradle
    height, found = cradle.axis_height_mm, []
    for bond in plan.seat.bond_lines:
        corners = [
            [bond.at_mm - bond.half_x_mm, -bond.half_y_mm, height - bond.high_z_mm],
            [bond.at_mm + bond.half_x_mm, bond.half_y_mm, height - bond.low_z_mm],
        ]
        probe = Probe("clearance_mm", {"box": corners})
        what = f"distance from the bond line of {bond.tag}"
        found.append(Expectation(file, what, cradle.relief_mm, 1e-3, "mm", probe, "at_least"))
    for axis, (low, high) in zip("xyz", cradle.extent_mm, strict=True):
        for end, value in (("min", low), ("max", high)):
            probe = Probe("extent", {"quantity": f"{end}_{axis}_mm"})
            found.append(Expectation(file, f"cradle {end} {axis}", value, EXTENT_ALLOWED_MM, "mm", probe))
    # Rods, boom and driven element stay where the first of them is laid: one boolean answers for every build stage.
    names = [*(rod.tag for rod in plan.design.rods), "boom"]
    names += ["DE"] if any(h.tag == "DE" for h in cradle.held) else []
    arguments = {"frame": cradle.frame, "also_frames": [None], "also_names": names}
    probe = Probe("overlap_mm3", arguments, ("antenna.step",))
    what = f"overlap with what is laid in it ({', '.join(names)})"
    found.append(Expectation(file, what, 0.0, 1e-6, "mm3", probe))
    return found


def cradle_shape(cradle: CradlePlan, offsets: Offsets = NOMINAL) -> Shape:
    """The cradle in its own frame (as printed), drawn with these offsets."""
    g = offsets.outline_growth_mm
    parts: list[Shape] = []
    for side in SIDES:
        parts += [_bearer(b, side, cradle.axis_height_mm, g) for b in cradle.bearers]
        for stop in cradle.stops:
            y = _drawn(_on_side(stop.y_mm, side), g)
            parts.append(box(_drawn(stop.x_mm, g), y, (0.5 * BASE_MM, stop.top_mm)))
    parts += [_saddle(s, g) for s in cradle.saddles]
    body = unite(_base(cradle, g), parts)
    tools = [tool for saddle in cradle.saddles for tool in _tie_tools(saddle, g)]
    tools += [tool for engraving in cradle.engravings for tool in _engraving(engraving)]
    return cut(body, tools)


def _drawn(span: Span, growth_mm: float) -> Span:
    return span[0] + growth_mm, span[1] - growth_mm


def _on_side(y_mm: Span, side: float) -> Span:
    low, high = sorted((side * y_mm[0], side * y_mm[1]))
    return low, high


def _base(cradle: CradlePlan, growth_mm: float) -> Shape:
    """The base plate: the union of its rectangles, bottom edges chamfered against elephant's foot."""
    import shapely

    outline = shapely.union_all([shapely.box(x[0], y[0], x[1], y[1]) for x, y in cradle.base])
    outline = outline.buffer(-growth_mm, join_style="mitre") if growth_mm else outline
    outline = outline.simplify(0.0)
    plate = prism_along_z(outline, (0.0, BASE_MM))
    edges = [e for e in plate.Edges() if abs(e.startPoint().z) < 1e-9 and abs(e.endPoint().z) < 1e-9]
    return plate.chamfer(CHAMFER_MM, None, edges)


def _bearer(bearer: Bearer, side: float, height_mm: float, growth_mm: float) -> Shape:
    """A wall with a V notch a conductor, its top at the axis height."""
    x = _drawn(bearer.x_mm, growth_mm)
    top = height_mm
    points: list[tuple[float, float]] = [(x[0], 0.5 * BASE_MM)]
    for notch in bearer.notches:
        apex = drawn_apex_mm(notch.apex_mm, growth_mm)
        left, right = notch.at_mm - (top - apex), notch.at_mm + (top - apex)
        points.append((x[0], top) if left > x[0] else (x[0], top - (x[0] - left)))
        if left > x[0]:
            points.append((left, top))
        points.append((notch.at_mm, apex))
        points.append((right, top) if right < x[1] else (x[1], top - (right - x[1])))
    if points[-1][0] < x[1]:
        points.append((x[1], top))
    points.append((x[1], 0.5 * BASE_MM))
    unique = [p for i, p in enumerate(points) if p != points[i - 1]]
    return prism_along_y(unique, _drawn(_on_side(bearer.y_mm, side), growth_mm))


def _saddle(saddle: Saddle, growth_mm: float) -> Shape:
    g, outer, floor = growth_mm, saddle.outer_half_mm - growth_mm, 0.5 * BASE_MM
    if saddle.channel_half_mm == saddle.top_mm - saddle.low_mm:
        apex = drawn_apex_mm(saddle.low_mm, g)
        half = saddle.top_mm - apex
        hollow = [(half, saddle.top_mm), (0.0, apex), (-half, saddle.top_mm)]
    else:
        half = saddle.channel_half_mm + g
        hollow = [(half, saddle.top_mm), (half, saddle.low_mm), (-half, saddle.low_mm), (-half, saddle.top_mm)]
    points = [(-outer, floor), (outer, floor), (outer, saddle.top_mm), *hollow, (-outer, saddle.top_mm)]
    return prism_along_x(points, _drawn(saddle.x_mm, g))


def _tie_tools(saddle: Saddle, growth_mm: float) -> list[Shape]:
    """Two slots through the beam, and a groove with 45° walls under it that the tie lies in."""
    half = TIE_SLOT_MM[0] / 2.0 + growth_mm
    x = (saddle.middle_mm - half, saddle.middle_mm + half)
    over = saddle.top_mm + BEAM_MM
    low, high = saddle.tie_y_mm[0] - growth_mm, saddle.tie_y_mm[1] + growth_mm
    tools = [box(x, _on_side((low, high), side), (-1.0, over)) for side in SIDES]
    apex, m = TIE_GROOVE_DEPTH_MM + growth_mm, saddle.middle_mm
    groove = [(m - apex - 1.0, -1.0), (m + apex + 1.0, -1.0), (m, apex)]
    return [*tools, prism_along_y(groove, (-high, high))]


def _engraving(engraving: Engraving) -> list[Shape]:
    """Letters to be read, not to fit: drawn as they are for every printer."""
    import shapely

    half = engraving.width_mm / 2.0
    shape = shapely.union_all([_stroke(line, half) for line in engraving.lines])
    polygons = list(shape.geoms) if hasattr(shape, "geoms") else [shape]
    z = (engraving.top_mm - engraving.depth_mm, engraving.top_mm + 1.0)
    return [prism_along_z(polygon, z) for polygon in polygons]


def _stroke(line: tuple[tuple[float, float], ...], half_mm: float) -> object:
    import shapely

    path = shapely.LineString(line) if len(line) > 1 else shapely.Point(line[0])
    return path.buffer(half_mm, cap_style="square", join_style="mitre")
