"""Calibration pieces for a shop's machines: what their ladders, blocks and combs measure. All in millimetres.

Each print lies on the bed in its own frame, its lower left corner at the origin; each laser drawing on its sheet.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

from boomwright.data.lettering import text_width_mm
from boomwright.errors import Fault, PlanFault
from boomwright.plan.label import Label
from boomwright.plan.size import Size
from boomwright.shop.profile import Shop

HOLE_STEPS = tuple(round(0.05 * step, 2) for step in range(13))
SLIDE_STEPS = tuple(round(0.05 * step, 2) for step in range(1, 10))
PRESS_STEPS = tuple(round(0.025 * step, 3) for step in range(-2, 7))
FIT_STEPS = tuple(round(0.05 * step, 2) for step in range(-5, 6))
SHANK_MM = 3.0
"""The drill whose shank tries the holes where the shelf holds no rod (common practice: drills are ground to size)."""

MOST_SHANKS = 2
PLUG_MM = 10.0
PLATE_MM = 6.0
PLUG_HEIGHT_MM = 16.0
OUTLINE_MM = (40.0, 20.0, 8.0)
"""The first length twice the second: a scale error then drops out."""

EDGE_MM = 3.0
TEXT_MM, HEAD_MM, ROOM_MM = 3.0, 4.0, 1.2
BLOCK_MM, BLOCKS, LEAST_BLOCKS = 10.0, 9, 4
BLOCK_HIGH_MM, WINDOW_PLAY_MM = 15.0, 1.0
FRAME_MM = 12.0
SLOT_DEEP_MM, SLOT_PITCH_MM, TOOTH_MM = 14.0, 13.0, 6.0
SHEET_MARGIN_MM = 5.0


@dataclass(frozen=True)
class Opening:
    """A hole (round) or pocket (square) of a ladder: its step, middle, and width as the plan wants it."""

    step_mm: float
    at: tuple[float, float]
    width_mm: float
    is_round: bool


@dataclass(frozen=True)
class Ladder:
    """A plate with openings of stepped widths: outer sizes, openings, engraved words."""

    size_mm: tuple[float, float, float]
    openings: tuple[Opening, ...]
    labels: tuple[Label, ...]


@dataclass(frozen=True)
class KerfComb:
    """Blocks cut free and a window as long as all of them: what is left over is a kerf for each cut and one more."""

    blocks: int
    window_x_mm: tuple[float, float]
    window_y_mm: tuple[float, float]
    frame_mm: tuple[float, float]
    block_at: tuple[tuple[float, float], ...]

    @property
    def cuts(self) -> int:
        """Kerfs that the gap adds up."""
        return self.blocks + 1


@dataclass(frozen=True)
class SlotLadder:
    """A plate with slots open downward: its length and height on the sheet, and each slot's step and middle."""

    size_mm: tuple[float, float]
    slots: tuple[tuple[float, float], ...]


@dataclass(frozen=True)
class CouponPlan:
    """All pieces for a shop; shanks are the diameters that try the holes."""

    shop: Shop
    shanks_mm: tuple[float, ...]
    holes: Ladder
    slide: Ladder
    press: Ladder
    comb: KerfComb
    slots: SlotLadder
    sizes: tuple[Size, ...]


def plan_coupon(shop: Shop) -> CouponPlan:
    """The pieces for a shop's printer and laser. Raises PlanFault for a machine without room."""
    faults = _faults(shop)
    if faults:
        raise PlanFault(faults)
    shanks = tuple(sorted({bar.diameter_mm for bar in shop.stock}))[:MOST_SHANKS] or (SHANK_MM,)
    room, wall = shop.printer.bed_mm[0], max(3.0, 3.0 * shop.printer.nozzle_mm)
    holes = _ladder([(f"ROD {d:g}", d, HOLE_STEPS) for d in shanks], (room, wall), is_round=True)
    slide = _ladder([("SLIDE", PLUG_MM, SLIDE_STEPS)], (room, wall), is_round=False)
    press = _ladder([("PRESS", PLUG_MM, PRESS_STEPS)], (room, wall), is_round=False)
    comb, slots = _kerf_comb(shop), _slot_ladder(shop)
    return CouponPlan(shop, shanks, holes, slide, press, comb, slots, _sizes(shop, shanks, comb))


def _faults(shop: Shop) -> list[Fault]:
    faults, (bed_x, bed_y, bed_z) = [], shop.printer.bed_mm
    if min(bed_x, bed_y) < 80.0 or bed_z < 20.0:
        found = f"a bed of {bed_x:g} x {bed_y:g} x {bed_z:g} mm has no room for the calibration pieces"
        faults.append(Fault("printer.bed_mm", found, "give at least 80 x 80 x 20 mm"))
    sheet_x, sheet_y = shop.laser.sheet_size_mm
    if sheet_x < 120.0 or sheet_y < 80.0:
        found = f"a sheet of {sheet_x:g} x {sheet_y:g} mm has no room for the calibration pieces"
        faults.append(Fault("laser.sheet_size_mm", found, "give at least 120 x 80 mm, longest side first"))
    return faults


def _ladder(rows: list[tuple[str, float, tuple[float, ...]]], room: tuple[float, float], *, is_round: bool) -> Ladder:
    """Rows of openings `width + step` (holes) or `width + 2 steps` (pockets) wide, broken where the bed ends."""
    bed_mm, wall_mm = room
    openings, labels = list[Opening](), list[Label]()
    y, right = EDGE_MM, 0.0
    for words, base, steps in reversed(rows):
        widths = [base + (step if is_round else 2.0 * step) for step in steps]
        pitch = max(max(widths) + wall_mm, max(text_width_mm(_hundredths(s), TEXT_MM) for s in steps) + ROOM_MM)
        per_row = max(1, int((bed_mm - 2.0 * EDGE_MM) // pitch))
        for first in reversed(range(0, len(steps), per_row)):
            y += max(widths) / 2.0
            for place, (step, width) in enumerate(zip(steps[first : first + per_row], widths[first:], strict=False)):
                x = EDGE_MM + (place + 0.5) * pitch
                openings.append(Opening(step, (x, y), width, is_round))
                text = _hundredths(step)
                left, low = x - text_width_mm(text, TEXT_MM) / 2.0, y + max(widths) / 2.0 + ROOM_MM
                labels.append(Label(text, left, low, TEXT_MM, PLATE_MM))
                right = max(right, x + pitch / 2.0)
            y += max(widths) / 2.0 + TEXT_MM + 3.0 * ROOM_MM
        labels.append(Label(words, EDGE_MM + ROOM_MM, y, HEAD_MM, PLATE_MM))
        right = max(right, EDGE_MM + ROOM_MM + text_width_mm(words, HEAD_MM))
        y += HEAD_MM + 2.0 * ROOM_MM
    return Ladder((right + EDGE_MM, y + ROOM_MM, PLATE_MM), tuple(openings), tuple(labels))


def _hundredths(step_mm: float) -> str:
    """A step as it is engraved: in hundredths of a millimetre, `7.5`, `-5`."""
    return f"{100.0 * step_mm:g}"


def _kerf_comb(shop: Shop) -> KerfComb:
    laser = shop.laser
    apart = 2.0 * laser.kerf_mm + 2.0
    room = laser.sheet_size_mm[0] - 2.0 * SHEET_MARGIN_MM
    fitting = int((room - 2.0 * FRAME_MM) // BLOCK_MM)
    blocks = max(LEAST_BLOCKS, min(BLOCKS, fitting, int((room + apart) // (BLOCK_MM + apart))))
    start = SHEET_MARGIN_MM
    window = (start + FRAME_MM, start + FRAME_MM + blocks * BLOCK_MM)
    high = BLOCK_HIGH_MM + WINDOW_PLAY_MM
    frame = (blocks * BLOCK_MM + 2.0 * FRAME_MM, high + 2.0 * FRAME_MM)
    row_y = start + frame[1] + apart
    places = tuple((start + number * (BLOCK_MM + apart), row_y) for number in range(blocks))
    return KerfComb(blocks, window, (start + FRAME_MM, start + FRAME_MM + high), frame, places)


def _slot_ladder(shop: Shop) -> SlotLadder:
    laser = shop.laser
    pitch = max(SLOT_PITCH_MM, laser.sheet_mm + max(FIT_STEPS) + TOOTH_MM)
    count = min(len(FIT_STEPS), int((laser.sheet_size_mm[0] - 2.0 * SHEET_MARGIN_MM) // pitch))
    skip = (len(FIT_STEPS) - count + 1) // 2
    steps = FIT_STEPS[skip : skip + count]
    slots = tuple((step, SHEET_MARGIN_MM + (place + 0.5) * pitch) for place, step in enumerate(steps))
    high = SLOT_DEEP_MM + 2.0 * ROOM_MM + TEXT_MM + HEAD_MM + 3.0 * ROOM_MM
    return SlotLadder((len(steps) * pitch, math.ceil(high)), slots)


def _sizes(shop: Shop, shanks: tuple[float, ...], comb: KerfComb) -> tuple[Size, ...]:
    printer, laser = shop.printer, shop.laser
    sizes = [
        Size("coupon.outline.long_mm", OUTLINE_MM[0], "mm", "drawn without the printer's growth: it measures it"),
        Size("coupon.outline.short_mm", OUTLINE_MM[1], "mm", "half the long side, so that a scale error drops out"),
    ]
    for shank in shanks:
        where = "a rod of the shelf" if shop.stock else "a drill's shank"
        words = f"{where}; holes up to {HOLE_STEPS[-1]:g} wider, drawn without the printer's shrink: they measure it"
        sizes.append(Size(f"coupon.holes.{shank:g}_mm", shank, "mm", words))
    growth = f"drawn with the shop's outline growth of {printer.outline_growth_mm:g}, as the kit's parts are"
    sizes.append(Size("coupon.slide.last_mm", SLIDE_STEPS[-1], "mm", f"widest clearance a side; {growth}"))
    sizes.append(Size("coupon.press.last_mm", PRESS_STEPS[-1], "mm", f"widest clearance a side; {growth}"))
    words = f"blocks of {BLOCK_MM:g} and a window as long as all, drawn without kerf: the gap is {comb.cuts} kerfs"
    sizes.append(Size("coupon.kerf.blocks", comb.blocks, "", words))
    words = f"sheet + fit, with the shop's kerf of {laser.kerf_mm:g} taken, as the kit's parts are"
    sizes.append(Size("coupon.slots.sheet_mm", laser.sheet_mm, "mm", words))
    return tuple(sizes)
