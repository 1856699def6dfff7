"""The spacing comb, cut from flat sheet: a plate with a slot for every conductor, open downward."""

from __future__ import annotations

from typing import TYPE_CHECKING

from boomwright.data.lettering import strokes, text_width_mm
from boomwright.parts.contour import moved, offset_contour, polygon
from boomwright.pieces import Contour, DrawingPiece, Expectation, Mark, Matrix, Part, Piece, Probe
from boomwright.plan.comb import (
    SHEET_MARGIN_MM,
    TAG_HEIGHT_MM,
    TAG_ROOM_MM,
    TITLE_HEIGHT_MM,
    CombPlan,
    CombSection,
    CombSlot,
)

if TYPE_CHECKING:
    from boomwright.plan.plan import Plan

SLOT_ALLOWED_MM = 0.005
ARROW_MM = 10.0


class SpacingComb(Part):
    """The comb, in as many sections as the sheet asks for."""

    name = "spacing-comb"
    purpose = "drops over the finished antenna beside the boom and shows every rod's place"
    processes = ("laser",)

    def left_out(self, plan: Plan) -> str | None:
        """Nothing to compare, or a sheet too small."""
        return plan.comb.left_out

    def build(self, plan: Plan) -> tuple[Piece, ...]:
        """One drawing a section: the outline grown by half the kerf, tags and arrow scored."""
        laser = plan.shop.laser
        pieces = []
        for number, section in enumerate(plan.comb.sections, 1):
            dx, dy = _shift(plan.comb, section)
            outline = offset_contour(_outline(plan.comb, section), laser.kerf_mm / 2.0)
            marks = [Mark(moved(outline, dx, dy), laser.layers.cut)]
            for line in _lettering(plan, section, number):
                contour = Contour(tuple((x + dx, y + dy, 0.0) for x, y in line), closed=False)
                marks.append(Mark(contour, laser.layers.score))
            frame = _frame(dx, dy)
            offsets = {"kerf_mm": laser.kerf_mm}
            pieces.append(DrawingPiece(_stem(number), "laser", tuple(marks), frame=frame, offsets=offsets))
        return tuple(pieces)

    def expect(self, plan: Plan) -> tuple[Expectation, ...]:
        """Place, width and end of every slot, the plate's length and height, all with the kerf undone."""
        laser, comb = plan.shop.laser, plan.comb
        found = []
        for number, section in enumerate(comb.sections, 1):
            file = f"laser/{_stem(number)}.dxf"
            dx, _ = _shift(comb, section)
            for slot in section.slots:
                base = {"at_mm": slot.at_mm + dx, "kerf_mm": laser.kerf_mm, "layer": laser.layers.cut}
                for quantity, what, value in (
                    ("at_mm", "slot position", slot.at_mm + dx),
                    ("width_mm", "slot width", slot.width_mm),
                    ("depth_mm", "slot depth", slot.end_mm - comb.bottom_mm),
                ):
                    probe = Probe("slot", base | {"quantity": quantity})
                    found.append(Expectation(file, f"{slot.label} {what}", value, SLOT_ALLOWED_MM, "mm", probe))
            size = {"size_x_mm": section.end_mm - section.start_mm, "size_y_mm": comb.top_mm - comb.bottom_mm}
            for quantity, value in size.items():
                probe = Probe("extent", {"quantity": quantity, "layer": laser.layers.cut})
                what = f"plate {'length' if quantity == 'size_x_mm' else 'height'} and kerf"
                found.append(Expectation(file, what, value + laser.kerf_mm, SLOT_ALLOWED_MM, "mm", probe))
            found.append(
                Expectation(
                    file,
                    "number of plates",
                    1.0,
                    0.0,
                    "",
                    Probe("layer_count", {"layer": laser.layers.cut, "closed": True}),
                )
            )
        return tuple(found)


def _stem(number: int) -> str:
    return f"spacing-comb-{number}"


def _shift(comb: CombPlan, section: CombSection) -> tuple[float, float]:
    """From the design's x and z to the sheet's x and y."""
    return SHEET_MARGIN_MM - section.start_mm, SHEET_MARGIN_MM - comb.bottom_mm


def _frame(dx: float, dy: float) -> Matrix:
    """The design's x, z and -y are the sheet's x, y and z."""
    return ((1.0, 0.0, 0.0, dx), (0.0, 0.0, 1.0, dy), (0.0, -1.0, 0.0, 0.0), (0.0, 0.0, 0.0, 1.0))


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
