"""The spacing comb, cut from flat sheet: a plate with a slot for every conductor, open downward."""

from __future__ import annotations

from typing import TYPE_CHECKING

from boomwright.data.lettering import strokes, text_width_mm
from boomwright.parts.contour import offset_contour, polygon
from boomwright.pieces import IDENTITY, Contour, DrawingPiece, Expectation, Mark, Matrix, Part, Piece, Probe
from boomwright.plan.comb import (
    TAG_HEIGHT_MM,
    TAG_ROOM_MM,
    TITLE_HEIGHT_MM,
    CombPlan,
    CombSection,
    CombSlot,
)
from boomwright.shop.nesting import Place, sheet_margin_mm
from boomwright.shop.profile import Laser

if TYPE_CHECKING:
    from boomwright.plan.plan import Plan

SLOT_ALLOWED_MM = 0.005
ARROW_MM = 10.0


class SpacingComb(Part):
    """The comb, in as many sections as the sheet asks for, nested on as few sheets as they need."""

    name = "spacing-comb"
    purpose = "drops over the finished antenna beside the boom and shows every rod's place"
    processes = ("laser",)
    left_out_when = "fewer than two conductors to compare, one too short to pass a plate, or a sheet too small"

    def left_out(self, plan: Plan) -> str | None:
        """Nothing to compare, or a sheet too small."""
        return plan.comb.left_out

    def build(self, plan: Plan) -> tuple[Piece, ...]:
        """One drawing a sheet: outlines grown by half the kerf, tags and arrows scored."""
        laser, comb = plan.shop.laser, plan.comb
        sheets: list[list[Mark]] = [[] for _ in range(comb.sheets)]
        for number, (section, place) in enumerate(zip(comb.sections, comb.places, strict=True), 1):
            frame = _frame(comb, section, place, laser.kerf_mm)
            outline = offset_contour(_outline(comb, section), laser.kerf_mm / 2.0)
            marks = [Mark(_on_sheet(outline, frame), laser.layers.cut)]
            for line in _lettering(plan, section, number):
                contour = Contour(tuple((x, z, 0.0) for x, z in line), closed=False)
                marks.append(Mark(_on_sheet(contour, frame), laser.layers.score))
            sheets[place.sheet] += marks
        alone = {p.sheet: _frame(comb, s, p, laser.kerf_mm) for s, p in zip(comb.sections, comb.places, strict=True)}
        several = {p.sheet for i, p in enumerate(comb.places) for other in comb.places[:i] if other.sheet == p.sheet}
        offsets = {"kerf_mm": laser.kerf_mm}
        return tuple(
            DrawingPiece(
                _stem(sheet),
                "laser",
                tuple(marks),
                # Plates that share a sheet have no frame in common.
                frame=IDENTITY if sheet in several else alone[sheet],
                offsets=offsets,
            )
            for sheet, marks in enumerate(sheets)
        )

    def expect(self, plan: Plan) -> tuple[Expectation, ...]:
        """Place, width and end of every slot, each plate's length and height, all with the kerf undone."""
        laser, comb = plan.shop.laser, plan.comb
        found = []
        for section, place in zip(comb.sections, comb.places, strict=True):
            file = f"laser/{_stem(place.sheet)}.dxf"
            plate = {
                "box": _drawn_box(comb, section, place, laser),
                "frame": _frame_back(_frame(comb, section, place, laser.kerf_mm)),
            }
            for slot in section.slots:
                base = {"at_mm": slot.at_mm, "kerf_mm": laser.kerf_mm, "layer": laser.layers.cut, "plate": plate}
                for quantity, what, value in (
                    ("at_mm", "slot position", slot.at_mm),
                    ("width_mm", "slot width", slot.width_mm),
                    ("depth_mm", "slot depth", slot.end_mm - comb.bottom_mm),
                ):
                    probe = Probe("slot", base | {"quantity": quantity})
                    found.append(Expectation(file, f"{slot.label} {what}", value, SLOT_ALLOWED_MM, "mm", probe))
            size = {"size_x_mm": section.end_mm - section.start_mm, "size_y_mm": comb.top_mm - comb.bottom_mm}
            for quantity, value in size.items():
                probe = Probe("extent", {"quantity": quantity, "layer": laser.layers.cut, "plate": plate})
                what = f"plate {'length' if quantity == 'size_x_mm' else 'height'} and kerf"
                found.append(Expectation(file, what, value + laser.kerf_mm, SLOT_ALLOWED_MM, "mm", probe))
        for sheet in range(comb.sheets):
            count = float(sum(place.sheet == sheet for place in comb.places))
            probe = Probe("layer_count", {"layer": laser.layers.cut, "closed": True})
            found.append(Expectation(f"laser/{_stem(sheet)}.dxf", "number of plates", count, 0.0, "", probe))
        return tuple(found)


def _stem(sheet: int) -> str:
    """File stem of a sheet, numbered from 0."""
    return f"spacing-comb-{sheet + 1}"


def _frame(comb: CombPlan, section: CombSection, place: Place, kerf_mm: float) -> Matrix:
    """The design's x, z and -y to the sheet's x, y and z, the plate turned a quarter or not."""
    x0, y0 = place.x_mm + kerf_mm / 2.0, place.y_mm + kerf_mm / 2.0
    if place.turned:
        rows = ((0.0, 0.0, -1.0, x0 + comb.top_mm), (1.0, 0.0, 0.0, y0 - section.start_mm))
    else:
        rows = ((1.0, 0.0, 0.0, x0 - section.start_mm), (0.0, 0.0, 1.0, y0 - comb.bottom_mm))
    return (*rows, (0.0, -1.0, 0.0, 0.0), (0.0, 0.0, 0.0, 1.0))


def _frame_back(frame: Matrix) -> Matrix:
    """The sheet's x and y to the design's x and z, as the first two coordinates."""
    (a, _, b, c), (d, _, e, f), *_ = frame
    return (
        (a, d, 0.0, -(a * c + d * f)),
        (b, e, 0.0, -(b * c + e * f)),
        (0.0, 0.0, 1.0, 0.0),
        (0.0, 0.0, 0.0, 1.0),
    )


def _on_sheet(contour: Contour, frame: Matrix) -> Contour:
    """A contour in the design's x and z, on its sheet."""
    (a, _, b, c), (d, _, e, f), *_ = frame
    moved = tuple((a * x + b * z + c, d * x + e * z + f, bulge) for x, z, bulge in contour.vertices)
    return Contour(moved, contour.closed)


def _drawn_box(comb: CombPlan, section: CombSection, place: Place, laser: Laser) -> list[float]:
    """Where a plate is drawn, and a third of the room round it."""
    room = sheet_margin_mm(laser) / 3.0
    size = (section.end_mm - section.start_mm, comb.top_mm - comb.bottom_mm)
    width, height = size[::-1] if place.turned else size
    low = (place.x_mm - room, place.y_mm - room)
    return [*low, place.x_mm + width + laser.kerf_mm + room, place.y_mm + height + laser.kerf_mm + room]


def _outline(comb: CombPlan, section: CombSection) -> Contour:
    """The plate with its slots, counter-clockwise from the lower left corner, in the design's x and z; no kerf."""
    low, high = comb.bottom_mm, comb.top_mm
    vertices = [(section.start_mm, low, 0.0)]
    for slot in section.slots:
        vertices += _slot(slot, low)
    ends = polygon([(section.end_mm, low), (section.end_mm, high), (section.start_mm, high)])
    return Contour((*vertices, *ends.vertices))


def _slot(slot: CombSlot, low_mm: float) -> list[tuple[float, float, float]]:
    """From the mouth's left corner round the slot to its right one; a half circle turns clockwise."""
    left, right = slot.left_mm, slot.right_mm
    shoulder = slot.end_mm - slot.width_mm / 2.0 if slot.is_round else slot.end_mm
    bulge = -1.0 if slot.is_round else 0.0
    return [(left, low_mm, 0.0), (left, shoulder, bulge), (right, shoulder, 0.0), (right, low_mm, 0.0)]


def _lettering(plan: Plan, section: CombSection, number: int) -> list[list[tuple[float, float]]]:
    """Everything scored, in the design's x and z: tags over their slots, below the arrow the plate's title."""
    comb = plan.comb
    lines = []
    for slot in section.slots:
        left = slot.at_mm - text_width_mm(slot.label, TAG_HEIGHT_MM) / 2.0
        z = comb.tag_rows_mm + slot.row * (TAG_HEIGHT_MM + TAG_ROOM_MM)
        lines += _set(slot.label, left, z, TAG_HEIGHT_MM)
    z = comb.top_mm - TAG_ROOM_MM - TITLE_HEIGHT_MM
    room = section.end_mm - section.start_mm - 2.0 * TAG_ROOM_MM
    left = section.start_mm + TAG_ROOM_MM
    for words in _titles(plan, number):
        if text_width_mm(words, TITLE_HEIGHT_MM) + ARROW_MM + TAG_ROOM_MM <= room:
            lines += _set(words, left, z, TITLE_HEIGHT_MM)
            left += text_width_mm(words, TITLE_HEIGHT_MM) + TAG_ROOM_MM
            break
    return lines + _arrow(left, z + TITLE_HEIGHT_MM / 2.0)


def _titles(plan: Plan, number: int) -> list[str]:
    """What the plate says beside the arrow, the longest first: it takes the first that fits."""
    count = len(plan.comb.sections)
    part = f" {number}/{count}" if count > 1 else ""
    under = f" PASS UNDER {'+'.join(plan.comb.passed_under)}" if plan.comb.passed_under else ""
    return [f"{plan.design.name}{part}{under} FORWARD", f"{part}{under} FORWARD".strip(), f"{part} FORWARD".strip()]


def _set(text: str, x_mm: float, z_mm: float, height_mm: float) -> list[list[tuple[float, float]]]:
    return [[(x + x_mm, y + z_mm) for x, y in line] for line in strokes(text, height_mm)]


def _arrow(x_mm: float, z_mm: float) -> list[list[tuple[float, float]]]:
    tip, barb = x_mm + ARROW_MM, 2.0
    return [[(x_mm, z_mm), (tip, z_mm)], [(tip - barb, z_mm + barb), (tip, z_mm), (tip - barb, z_mm - barb)]]
