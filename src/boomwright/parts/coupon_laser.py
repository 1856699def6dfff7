"""The laser's calibration pieces: the kerf comb and the slot ladder."""

from __future__ import annotations

from boomwright.data.lettering import strokes, text_width_mm
from boomwright.parts.contour import offset_contour, rectangle, reversed_contour
from boomwright.parts.coupon import CouponPart
from boomwright.pieces import Contour, DrawingPiece, Expectation, Mark, Piece, Probe
from boomwright.plan.coupon import (
    BLOCK_HIGH_MM,
    BLOCK_MM,
    HEAD_MM,
    ROOM_MM,
    SHEET_MARGIN_MM,
    SLOT_DEEP_MM,
    TEXT_MM,
    CouponPlan,
)

ALLOWED_MM = 0.005


class KerfCombPart(CouponPart):
    """Blocks, and the window that they all but fill."""

    name = "kerf-comb"
    purpose = "blocks pushed together in their window: the gap that is left adds up many kerfs (laser.kerf_mm)"
    processes = ("laser",)

    def build(self, plan: CouponPlan) -> tuple[Piece, ...]:
        """One sheet, cut on the lines: no kerf is taken."""
        comb, layers = plan.comb, plan.shop.laser.layers
        start = SHEET_MARGIN_MM
        outer = rectangle((start, start + comb.frame_mm[0]), (start, start + comb.frame_mm[1]))
        marks = [Mark(outer, layers.cut)]
        marks.append(Mark(reversed_contour(rectangle(comb.window_x_mm, comb.window_y_mm)), layers.cut))
        for x, y in comb.block_at:
            marks.append(Mark(rectangle((x, x + BLOCK_MM), (y, y + BLOCK_HIGH_MM)), layers.cut))
        words = f"<- PUSH   KERF = GAP / {comb.cuts}"
        y = comb.window_y_mm[1] + (start + comb.frame_mm[1] - comb.window_y_mm[1] - HEAD_MM) / 2.0
        height = min(HEAD_MM, HEAD_MM * (comb.frame_mm[0] - 8.0) / text_width_mm(words, HEAD_MM))
        marks += _score(words, start + 4.0, y, height, layers.score)
        return (DrawingPiece("kerf-comb-1", "laser", tuple(marks), offsets={"kerf_mm": 0.0}),)

    def expect(self, plan: CouponPlan) -> tuple[Expectation, ...]:
        """Where every edge across the row lies: blocks and window as drawn, no kerf anywhere; how many parts."""
        comb, layer, file = plan.comb, plan.shop.laser.layers.cut, "laser/kerf-comb-1.dxf"
        edges = [("window, end", x, comb.window_y_mm) for x in comb.window_x_mm]
        for number, (x, y) in enumerate(comb.block_at, 1):
            edges += [(f"block {number}, side", at, (y, y + BLOCK_HIGH_MM)) for at in (x, x + BLOCK_MM)]
        found = []
        for what, x, y_mm in edges:
            probe = Probe("edge_at", {"x_mm": x, "y_mm": sum(y_mm) / 2.0, "layer": layer})
            found.append(Expectation(file, f"{what} at x = {x:g}", x, ALLOWED_MM, "mm", probe))
        count = Probe("layer_count", {"layer": layer, "closed": True})
        return (*found, Expectation(file, "closed contours", comb.blocks + 2.0, 0.0, "", count))


class SlotLadderPart(CouponPart):
    """Slots for the sheet's own edge."""

    name = "slot-ladder"
    purpose = "slots tried with a piece of the sheet on edge: the play at which tabs hold (laser.fit_mm)"
    processes = ("laser",)

    def build(self, plan: CouponPlan) -> tuple[Piece, ...]:
        """One sheet; the shop's kerf is taken, as in the kit's parts."""
        laser, ladder = plan.shop.laser, plan.slots
        low, (length, high) = SHEET_MARGIN_MM, ladder.size_mm
        vertices = [(low, low, 0.0)]
        for step, x in ladder.slots:
            half, end = (laser.sheet_mm + step) / 2.0, low + SLOT_DEEP_MM
            vertices += [(x - half, low, 0.0), (x - half, end, 0.0), (x + half, end, 0.0), (x + half, low, 0.0)]
        vertices += [(low + length, low, 0.0), (low + length, low + high, 0.0), (low, low + high, 0.0)]
        marks = [Mark(offset_contour(Contour(tuple(vertices)), laser.kerf_mm / 2.0), laser.layers.cut)]
        for step, x in ladder.slots:
            text = f"{100.0 * step:g}"
            left = x - text_width_mm(text, TEXT_MM) / 2.0
            marks += _score(text, left, low + SLOT_DEEP_MM + 1.5 * ROOM_MM, TEXT_MM, laser.layers.score)
        words = f"FIT IN 1/100   SHEET {laser.sheet_mm:g}"
        marks += _score(words, low + 3.0, low + high - HEAD_MM - ROOM_MM, HEAD_MM, laser.layers.score)
        return (DrawingPiece("slot-ladder-1", "laser", tuple(marks), offsets={"kerf_mm": laser.kerf_mm}),)

    def expect(self, plan: CouponPlan) -> tuple[Expectation, ...]:
        """Every slot's place and width, the kerf undone."""
        laser, found = plan.shop.laser, list[Expectation]()
        for step, x in plan.slots.slots:
            base = {"at_mm": x, "kerf_mm": laser.kerf_mm, "layer": laser.layers.cut}
            for quantity, what, value in (
                ("at_mm", "position", x),
                ("width_mm", "width", laser.sheet_mm + step),
                ("depth_mm", "depth", SLOT_DEEP_MM),
            ):
                probe = Probe("slot", base | {"quantity": quantity})
                words = f"slot of fit {step:g}, {what}"
                found.append(Expectation("laser/slot-ladder-1.dxf", words, value, ALLOWED_MM, "mm", probe))
        return tuple(found)


def _score(text: str, x_mm: float, y_mm: float, height_mm: float, layer: str) -> list[Mark]:
    return [
        Mark(Contour(tuple((x_mm + u, y_mm + v, 0.0) for u, v in line), closed=False), layer)
        for line in strokes(text, height_mm)
    ]
