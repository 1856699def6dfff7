"""What the laser-cut cradle's files must show: each plate on its sheet, and all of them put together."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from boomwright.pieces import Expectation, Probe
from boomwright.plan.frame import Matrix
from boomwright.plan.sheet_plate import Plate, Rect
from boomwright.shop.nesting import Place, sheet_margin_mm

if TYPE_CHECKING:
    from boomwright.plan.plan import Plan

CUT_ALLOWED_MM = 0.005
REST_ALLOWED_MM = 0.01
OVERLAP_ALLOWED_MM3 = 1e-6
SQUEEZE_ALLOWED_SHARE = 1e-3
ANTENNA = "antenna.step"


def stem(sheet: int) -> str:
    """File stem of a sheet, numbered from 0."""
    return f"sheet-cradle-{sheet + 1}"


def file_of(sheet: int) -> str:
    """Path of a sheet's drawing."""
    return f"laser/{stem(sheet)}.dxf"


def expect_plates(plan: Plan) -> list[Expectation]:
    """Every notch, slot and foot on the sheets, the kerf undone; like plates are numbered in the order of the plan."""
    found: list[Expectation] = []
    seen: dict[str, int] = {}
    names = [standing.plate.name.lower() for standing in plan.sheet_cradle.plates]
    for standing, place in zip(plan.sheet_cradle.plates, plan.sheet_cradle.places, strict=True):
        plate = standing.plate
        name = plate.name.lower()
        seen[name] = seen.get(name, 0) + 1
        words = f"{name} #{seen[name]}" if names.count(name) > 1 else name
        found += _Cut(plan, plate, place, words).expectations()
    for number in range(plan.sheet_cradle.sheets):
        on_it = [
            s.plate
            for s, p in zip(plan.sheet_cradle.plates, plan.sheet_cradle.places, strict=True)
            if p.sheet == number
        ]
        contours = sum(1 + len(plate.slots) + len(plate.windows) for plate in on_it)
        probe = Probe("layer_count", {"layer": plan.shop.laser.layers.cut, "closed": True})
        found.append(Expectation(file_of(number), "closed contours", contours, 0.0, "", probe))
    return found


class _Cut:
    """One plate on its sheet."""

    def __init__(self, plan: Plan, plate: Plate, place: Place, words: str) -> None:
        laser = plan.shop.laser
        self._plan, self._plate, self._words = plan, plate, words
        self._file = file_of(place.sheet)
        where = {"box": drawn_box(plan, plate, place), "frame": to_plate(plate, place, laser.kerf_mm)}
        self._base = {"plate": where, "layer": laser.layers.cut, "kerf_mm": laser.kerf_mm}

    def _near(self, what: str, value: float, unit: str, measure: str, **arguments: Any) -> Expectation:
        allowed = CUT_ALLOWED_MM if unit else 0.0
        probe = Probe(measure, self._base | arguments)
        return Expectation(self._file, f"{self._words}: {what}", value, allowed, unit, probe)

    def expectations(self) -> list[Expectation]:
        """What this plate must show."""
        plate, laser = self._plate, self._plan.shop.laser
        found = []
        holes = (*plate.slots, *plate.windows)
        if holes:
            rects = [_row(rect) for rect in holes]
            found.append(self._near("holes", len(holes), "", "plate_slots", quantity="count"))
            what = "farthest side of a hole from its plan"
            found.append(self._near(what, 0.0, "mm", "plate_slots", quantity="error_mm", rects=rects))
        if plate.slots:
            width = laser.sheet_mm + laser.fit_mm
            rects = [_row(slot) for slot in plate.slots]
            arguments = {"quantity": "width_mm", "rects": rects, "width_mm": width}
            worst = f"slot width, the worst of {len(rects)}"
            found.append(self._near(worst, width, "mm", "plate_slots", **arguments))
        if plate.feet:
            rects = [_row(foot) for foot in plate.feet]
            found.append(self._near("farthest side of a foot from its plan", 0.0, "mm", "plate_feet", rects=rects))
        return found + self._vees() + self._top()

    def _vees(self) -> list[Expectation]:
        found = []
        height = self._plan.sheet_cradle.axis_height_mm
        over_foot = height - self._plan.shop.laser.sheet_mm
        for vee in self._plate.vees:
            base = {"at_mm": vee.at_mm, "diameter_mm": 2.0 * vee.radius_mm}
            for quantity, what, value in (
                ("at_mm", "axis position", vee.at_mm),
                ("height_mm", "axis height", height),
                ("over_foot_mm", "axis height over the foot", over_foot),
            ):
                words = f"{vee.tag} {what}"
                found.append(self._near(words, value, "mm", "plate_vee", quantity=quantity, **base))
        return found

    def _top(self) -> list[Expectation]:
        plate, plan = self._plate, self._plan
        if plate.kind == "saddle":
            if plate.top and plan.boom.section == "round":
                axis = plan.sheet_cradle.axis_height_mm - plan.seat.axis_mm
                arguments = {"at_mm": 0.0, "diameter_mm": plan.boom.width_mm, "quantity": "height_mm"}
                return [self._near("height of the boom's axis", axis, "mm", "plate_vee", **arguments)]
            line = plan.sheet_cradle.axis_height_mm - plan.seat.top_mm
            return [self._near("height of the boom's line", line, "mm", "plate_level", at_mm=0.0, v_mm=line)]
        if plate.kind in ("stop", "spreader"):
            top = plate.body.v[1]
            u = sum(plate.body.u) / 2.0
            return [self._near("height", top, "mm", "plate_level", at_mm=u, v_mm=top)]
        return []


def drawn_box(plan: Plan, plate: Plate, place: Place) -> list[float]:
    """Where a plate is drawn on its sheet, and a third of the room around it."""
    laser = plan.shop.laser
    room = sheet_margin_mm(laser) / 3.0
    size = plate.size_mm[::-1] if place.turned else plate.size_mm
    low = (place.x_mm - room, place.y_mm - room)
    high = (place.x_mm + size[0] + laser.kerf_mm + room, place.y_mm + size[1] + laser.kerf_mm + room)
    return [*low, *high]


def to_plate(plate: Plate, place: Place, kerf_mm: float) -> Matrix:
    """The sheet's x and y to the plate's u and v."""
    (u0, _), (v0, v1) = plate.extent.u, plate.extent.v
    x0, y0 = place.x_mm + kerf_mm / 2.0, place.y_mm + kerf_mm / 2.0
    if place.turned:
        rows = ((0.0, 1.0, 0.0, u0 - y0), (-1.0, 0.0, 0.0, x0 + v1))
    else:
        rows = ((1.0, 0.0, 0.0, u0 - x0), (0.0, 1.0, 0.0, v0 - y0))
    return (*rows, (0.0, 0.0, 1.0, 0.0), (0.0, 0.0, 0.0, 1.0))


def expect_assembly(plan: Plan) -> list[Expectation]:
    """Put together: tabs in slots, nothing overlapping, rods on the datum plane, antenna and adhesive clear."""
    cradle, laser = plan.sheet_cradle, plan.shop.laser
    sheets = tuple(file_of(number) for number in range(cradle.sheets))
    plates = [
        {
            "file": place.sheet,
            "box": drawn_box(plan, standing.plate, place),
            "frame": times(standing.frame, to_plate(standing.plate, place, laser.kerf_mm)),
        }
        for standing, place in zip(cradle.plates, cradle.places, strict=True)
    ]
    base = {"plates": plates, "sheet_mm": laser.sheet_mm, "kerf_mm": laser.kerf_mm, "layer": laser.layers.cut}

    def probe(measure: str, also: tuple[str, ...] = (), **arguments: Any) -> Probe:
        return Probe(measure, base | arguments, (*sheets[1:], *also))

    what = "overlap of the plates put together"
    allowed = max(OVERLAP_ALLOWED_MM3, SQUEEZE_ALLOWED_SHARE * cradle.squeeze_mm3)
    if cradle.squeeze_mm3:
        what += f", feet larger than their slots by a fit of {laser.fit_mm:g}"
    found = [Expectation(sheets[0], what, cradle.squeeze_mm3, allowed, "mm3", probe("plates_overlap_mm3"))]
    joints = [list(zip(*box, strict=True)) for standing in cradle.plates for box in standing.feet(laser.sheet_mm)]
    what = f"slots without their tab, of {len(joints)} put together"
    found.append(Expectation(sheets[0], what, 0.0, 0.0, "", probe("open_joints", joints=joints)))
    found += _expect_rest(plan, sheets[0], probe)
    for bond in plan.seat.bond_lines:
        corners = (
            (bond.at_mm - bond.half_x_mm, -bond.half_y_mm, cradle.axis_height_mm - bond.high_z_mm),
            (bond.at_mm + bond.half_x_mm, bond.half_y_mm, cradle.axis_height_mm - bond.low_z_mm),
        )
        relief = plan.shop.cradle.relief_mm
        measure = probe("plates_clearance_mm", solid_box=corners, most_mm=relief + 1.0)
        what = f"distance of the plates from the bond line of {bond.tag}"
        found.append(Expectation(sheets[0], what, relief, 1e-3, "mm", measure, "at_least"))
    names = [*(rod.tag for rod in plan.design.rods), "boom"]
    names += ["DE"] if any(h.tag == "DE" for h in cradle.held) else []
    names += [f"sleeve-{hole.tag}" for hole in plan.seat.holes if hole.sleeve_outer_mm > 0.0]
    measure = probe("plates_meet_antenna_mm3", (ANTENNA,), names=names, antenna_frame=cradle.frame)
    what = f"overlap of the plates with what is laid in them ({', '.join(names)})"
    found.append(Expectation(sheets[0], what, 0.0, OVERLAP_ALLOWED_MM3, "mm3", measure))
    return found


def _expect_rest(plan: Plan, file: str, probe: Any) -> list[Expectation]:
    cradle, found = plan.sheet_cradle, []
    low, high = cradle.rails_mm
    for held in cradle.held:
        for y, word in (((low, high), "+y"), ((-high, -low), "-y")):
            base = {"at_mm": held.at_mm, "y_mm": y, "diameter_mm": 2.0 * held.radius_mm}
            for quantity, what, value in (
                ("height_mm", "axis height", cradle.axis_height_mm),
                ("at_mm", "axis position", held.at_mm),
            ):
                words = f"{held.tag} {what} resting on the assembled rail at {word}"
                measure = probe("plates_rest", quantity=quantity, **base)
                found.append(Expectation(file, words, value, REST_ALLOWED_MM, "mm", measure))
    return found


def times(one: Matrix, other: Matrix) -> Matrix:
    """Product of two motions: the second is done first."""
    rows = [[sum(one[i][k] * other[k][j] for k in range(4)) for j in range(4)] for i in range(4)]
    first, second, third, fourth = ((r[0], r[1], r[2], r[3]) for r in rows)
    return first, second, third, fourth


def _row(rect: Rect) -> list[float]:
    return [*rect.u, *rect.v]
