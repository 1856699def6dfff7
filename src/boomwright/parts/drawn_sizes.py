"""What each drawing must show, by arithmetic from the plan: dimensions by name, and the cells of its tables."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from dataclasses import dataclass
from typing import TYPE_CHECKING

from boomwright.data.tables import general_tolerance_mm
from boomwright.design.centreline import bend_radius_mm, developed_length_mm, loop_drop_mm, square_loop_side_mm
from boomwright.plan.drawing_boom import in_short
from boomwright.plan.former import JIG_END_MM, plan_former
from boomwright.plan.notch import notch_apex_height_mm

if TYPE_CHECKING:
    from boomwright.plan.plan import Plan

HUNDREDTH_MM, TENTH_DEG = 0.0051, 0.051
Sizes = dict[str, float]


@dataclass(frozen=True)
class Cell:
    """A number in the table whose first head is `key`: its row's first text, its column's head, and what it is."""

    key: str
    row: str
    column: str
    value: float
    allowed: float = HUNDREDTH_MM
    unit: str = "mm"


def drawn_sizes(plan: Plan, stem: str) -> Sizes:
    """The dimensions of a sheet: name and value [mm]."""
    return _SIZES[stem.removeprefix("drawing-")](plan)


def drawn_cells(plan: Plan, stem: str) -> tuple[Cell, ...]:
    """The numbers in the tables of a sheet."""
    return tuple(_CELLS[stem.removeprefix("drawing-")](plan))


def _boom(plan: Plan) -> Sizes:
    seat, wall = plan.seat, plan.boom.wall_mm
    sizes = {"boom start": seat.start_mm, "boom end": seat.end_mm, "boom length": seat.end_mm - seat.start_mm}
    sizes |= {f"{g.tag} at": g.at_mm for g in seat.grooves} | {f"{h.tag} at": h.at_mm for h in seat.holes}
    sizes["boom width"] = plan.boom.width_mm
    if plan.boom.section == "square":
        sizes["boom height"] = plan.boom.width_mm
    if wall > 0.0:
        sizes["boom wall"] = wall
    if seat.holes:
        sizes["hole axis below top"] = plan.boom.width_mm / 2.0
    if seat.grooves:
        first = seat.grooves[0]
        sizes[f"{first.tag} groove depth"] = first.depth_mm
        sizes[f"{first.tag} groove width"] = 2.0 * first.radius_mm
        sizes[f"{first.tag} groove radius"] = first.radius_mm
        sizes[f"{first.tag} datum below top"] = first.depth_mm - first.radius_mm
    return sizes


def _rods(plan: Plan) -> Sizes:
    rod = max(plan.design.rods, key=lambda one: one.length_mm)
    return {f"{rod.tag} length": rod.length_mm, f"{rod.tag} diameter": rod.diameter_mm}


def _driven(plan: Plan) -> Sizes:
    driven, sizes = plan.design.driven, {"DE gap": plan.design.driven.gap_mm}
    inside = bend_radius_mm(driven) - driven.diameter_mm / 2.0
    if driven.form == "straight":
        assert driven.length_mm is not None
        half = (driven.length_mm - driven.gap_mm) / 2.0
        return sizes | {"DE length": driven.length_mm, "DE half": half, "DE diameter": driven.diameter_mm}
    for number, bend in enumerate(plan_former(plan.design, plan.shop)[0].bends, 1):
        sizes[f"bend {number} mark"] = bend.mark_mm
    sizes["developed length"] = developed_length_mm(driven)
    if driven.form == "folded":
        assert driven.length_mm is not None
        assert driven.spacing_mm is not None
        return sizes | {"DE length": driven.length_mm, "DE spacing": driven.spacing_mm, "DE bend radius": inside}
    assert driven.perimeter_mm is not None
    if driven.shape == "circle":
        return sizes | {"DE outside": 2.0 * loop_drop_mm(driven) + driven.diameter_mm}
    side = square_loop_side_mm(driven.perimeter_mm, bend_radius_mm(driven)) + driven.diameter_mm
    return sizes | {"DE outside across": side, "DE outside upright": side, "DE bend radius": inside}


def _cradle(plan: Plan) -> Sizes:
    cradle = plan.cradle
    (x0, x1), (y0, y1), _ = cradle.extent_mm
    sizes = {f"{h.tag} axis": h.at_mm for h in cradle.held}
    sizes |= {"axis height": cradle.axis_height_mm, "cradle length": x1 - x0, "cradle width": y1 - y0}
    if cradle.rails is not None:
        sizes |= {"rails inside": 2.0 * cradle.rails[0], "rails outside": 2.0 * cradle.rails[1]}
    return sizes


def _mould(plan: Plan) -> Sizes:
    x, y, z = ((high - low) for low, high in plan.mould.block)
    cx, cy, cz = ((high - low) for low, high in plan.mould.cavity.box_mm)
    return {
        "block along": x,
        "block across": y,
        "block height": z,
        "cavity along": cx,
        "cavity across": cy,
        "cavity height": cz,
        "datum above base": -plan.mould.block[2][0],
    }


def _former(plan: Plan) -> Sizes:
    former, _ = plan_former(plan.design, plan.shop)
    length, width = former.x_mm[1] - former.x_mm[0], former.y_mm[1] - former.y_mm[0]
    if not former.bends:
        sizes = {"jig length": length, "jig width": width, "gap slot": former.gap_mm}
        return sizes | ({"stop to stop": length - 2.0 * JIG_END_MM} if former.closed else {})
    sizes = {"plate length": length, "plate width": width, "post 1": 2.0 * former.posts[0].post_mm}
    if not former.is_corner:
        sizes["gap feeler"] = former.gap_mm
        if former.bends[0].mark_mm > 1.0:
            sizes["stop to post 1"] = former.bends[0].mark_mm
    first, last = former.posts[0], former.posts[-1]
    apart = abs(first.middle(former.wire_mm)[0] - last.middle(former.wire_mm)[0])
    return sizes | ({"posts apart": apart} if apart > 1.0 else {})


def _boom_cells(plan: Plan) -> Iterable[Cell]:
    seat = plan.seat
    for kind in dict.fromkeys((round(g.radius_mm, 2), round(g.depth_mm, 2)) for g in seat.grooves):
        same = [g for g in seat.grooves if (round(g.radius_mm, 2), round(g.depth_mm, 2)) == kind]
        row = in_short([g.tag for g in same])
        yield Cell("groove", row, "radius", same[0].radius_mm)
        yield Cell("groove", row, "depth", same[0].depth_mm)
    for groove in (g for g in seat.grooves if g.pocket):
        assert groove.pocket is not None
        yield Cell("pocket", groove.tag, "along", 2.0 * groove.pocket.half_x_mm)
        yield Cell("pocket", groove.tag, "across", 2.0 * groove.pocket.half_y_mm)
    for bore in dict.fromkeys(round(h.diameter_mm, 2) for h in seat.holes):
        holes = [h for h in seat.holes if round(h.diameter_mm, 2) == bore]
        yield Cell("hole", in_short([h.tag for h in holes]), "bore", holes[0].diameter_mm)


def _rod_cells(plan: Plan) -> Iterable[Cell]:
    for rod in plan.design.rods:
        yield Cell("tag", rod.tag, "at x", rod.at_mm)
        yield Cell("tag", rod.tag, "length", rod.length_mm)
        yield Cell("tag", rod.tag, "dia.", rod.diameter_mm)
        if 0.5 <= rod.length_mm <= 4000.0:
            limit = general_tolerance_mm(rod.length_mm, "fine" if rod.length_mm <= 2000.0 else "medium")
            yield Cell("tag", rod.tag, "tolerance", limit, 1e-6)


def _driven_cells(plan: Plan) -> Iterable[Cell]:
    driven = plan.design.driven
    length = developed_length_mm(driven)
    yield Cell("size", "wire diameter", "mm", driven.diameter_mm)
    yield Cell("size", "place on the boom", "mm", driven.at_mm)
    if driven.form == "straight":
        yield Cell("size", "each half", "mm", length / 2.0)
        return
    yield Cell("size", "developed length", "mm", length)
    if driven.perimeter_mm is not None:
        yield Cell("size", "perimeter on the axis", "mm", driven.perimeter_mm)
    yield from _bend_cells(plan)


def _bend_cells(plan: Plan) -> Iterable[Cell]:
    for number, bend in enumerate(plan_former(plan.design, plan.shop)[0].bends, 1):
        yield Cell("bend", str(number), "mark at", bend.mark_mm)
        yield Cell("bend", str(number), "post radius", bend.post_mm)
        yield Cell("bend", str(number), "turn, deg", bend.turn_deg, TENTH_DEG, "deg")


def _cradle_cells(plan: Plan) -> Iterable[Cell]:
    cradle, slide = plan.cradle, plan.shop.printer.slide_clearance_mm
    for held in cradle.held:
        yield Cell("notch", held.tag, "at x", held.at_mm)
        yield Cell("notch", held.tag, "rod dia.", 2.0 * held.radius_mm)
        apex = notch_apex_height_mm(cradle.axis_height_mm, 2.0 * held.radius_mm)
        yield Cell("notch", held.tag, "apex height", apex)
        if held.tag != "DE-front":
            yield Cell("notch", held.tag, "stop to stop", 2.0 * (held.tip_mm + slide))


def _mould_cells(plan: Plan) -> Iterable[Cell]:
    for size in plan.sizes:
        name = size.key.removeprefix("mould.")
        if name in ("wall_rear_mm", "wall_front_mm", "conductor_channel_mm", "coax_channel_mm", "pin_diameter_mm"):
            yield Cell("size", name.removesuffix("_mm").replace("_", " "), "mm", size.value)


def _former_cells(plan: Plan) -> Iterable[Cell]:
    former, _ = plan_former(plan.design, plan.shop)
    yield Cell("size", "channel width", "mm", former.wire_mm + 2.0 * plan.shop.printer.slide_clearance_mm)
    yield Cell("size", "wire diameter", "mm", plan.design.driven.diameter_mm)
    yield from _bend_cells(plan)


_SIZES: dict[str, Callable[[Plan], Sizes]] = {
    "boom": _boom,
    "rods": _rods,
    "driven": _driven,
    "cradle": _cradle,
    "mould": _mould,
    "former": _former,
}
_CELLS: dict[str, Callable[[Plan], Iterable[Cell]]] = {
    "boom": _boom_cells,
    "rods": _rod_cells,
    "driven": _driven_cells,
    "cradle": _cradle_cells,
    "mould": _mould_cells,
    "former": _former_cells,
}
