"""The page that goes with the calibration pieces: how to make and read each, and which key of the shop file it sets."""

from __future__ import annotations

from dataclasses import dataclass
from textwrap import wrap

from boomwright.data.tables import refused_sheets
from boomwright.parts.coupon import CouponPart
from boomwright.pieces import Contour, Expectation, Lettering, Mark, Page, PagesPiece, Piece, Probe
from boomwright.plan.coupon import OUTLINE_MM, PLUG_MM, CouponPlan

FILE = "bench/coupon-sheet.pdf"
PAGE_MM = (210.0, 297.0)
"""A4 upright (ISO 216)."""

MARGIN_MM = 14.0
TITLE_MM, HEAD_MM, WORDS_MM = 4.2, 2.9, 2.25
LINE_MM, AFTER_MM = 4.3, 2.4
CHARACTERS = 116
"""Characters of the smaller words that fit a line."""

BLANK_MM = 28.0
CHECK_BAR_MM = 100.0


@dataclass(frozen=True)
class Entry:
    """One step of the sheet: its head, sentences, and the keys to be written down with the values they have now."""

    head: str
    sentences: tuple[str, ...]
    keys: tuple[tuple[str, float], ...] = ()


class CouponSheet(CouponPart):
    """One A4 page."""

    name = "coupon-sheet"
    purpose = "one page: how to print, cut and read the calibration pieces, with room for the values"
    processes = ("bench",)

    def build(self, plan: CouponPlan) -> tuple[Piece, ...]:
        """The page."""
        page = Page(*_laid_out(plan))
        return (PagesPiece("coupon-sheet", "bench", "calibration pieces: how to read them", PAGE_MM, (page,)),)

    def expect(self, plan: CouponPlan) -> tuple[Expectation, ...]:
        """One page, its bar at true scale, and a line to write on for every key."""
        count = sum(len(entry.keys) for entry in _entries(plan))
        return (
            Expectation(FILE, "number of pages", 1.0, 0.0, "pages", Probe("page_count")),
            Expectation(FILE, "check bar", CHECK_BAR_MM, 0.005, "mm", Probe("check_bar_mm", {"page": 0})),
            Expectation(FILE, "lines to write a value on", count, 0.0, "", Probe("line_count", {"layer": "VALUE"})),
        )


def _entries(plan: CouponPlan) -> tuple[Entry, ...]:
    printer, laser = plan.shop.printer, plan.shop.laser
    long, short, _ = OUTLINE_MM
    shanks = " and ".join(f"{d:g}" for d in plan.shanks_mm)
    what = "a rod of the shelf" if plan.shop.stock else "a drill's shank, measured with a calliper"
    refused = ", ".join(sheet.name for sheet in refused_sheets())
    return (
        Entry(
            "Print: outline-block-1",
            (
                f"Print all pieces in {printer.material}, layers {printer.layer_mm:g}, nozzle {printer.nozzle_mm:g}: "
                "as they lie in the files, no support, and no correction of size by the slicer.",
                f"Measure the block half-way up, away from its chamfered foot: the long side (drawn {long:g}) and the "
                f"short side (drawn {short:g}).",
                "outline_growth_mm = short - long / 2. A scale error of the printer drops out; a positive value means "
                "that the printer adds.",
            ),
            (("printer.outline_growth_mm", printer.outline_growth_mm),),
        ),
        Entry(
            "Print: hole-ladder-1",
            (
                f"Try the holes from the engraved side with {what}: {shanks} mm. The number over a hole says how much "
                "wider it was drawn, in hundredths of a millimetre.",
                "hole_shrink_mm = the number over the smallest hole that the rod enters by hand, / 100.",
            ),
            (("printer.hole_shrink_mm", printer.hole_shrink_mm),),
        ),
        Entry(
            "Write both into the shop file and run boomwright coupon again",
            ("The plug and its ladders take them into account, as the parts of a kit do.",),
        ),
        Entry(
            "Print: fit-plug-1, slide-ladder-1, press-ladder-1",
            (
                f"The plug is {PLUG_MM:g} mm square. Try it from the engraved side, its chamfered foot first; the "
                "number over a pocket is its clearance on each side, in hundredths of a millimetre.",
                "slide_clearance_mm = the number over the tightest pocket of SLIDE that the plug falls through, / 100.",
                "press_clearance_mm = the number over the tightest pocket of PRESS that takes the plug by hand and "
                "holds it when turned over, / 100.",
            ),
            (
                ("printer.slide_clearance_mm", printer.slide_clearance_mm),
                ("printer.press_clearance_mm", printer.press_clearance_mm),
            ),
        ),
        Entry(
            "Caution: laser",
            (
                f"Cut only a sheet you know: {laser.material} here. Never laser cut {refused}: they give off poisonous "
                "or corrosive fumes, or catch fire. Stay with the machine, fume extraction on.",
            ),
        ),
        Entry(
            "Cut: kerf-comb-1",
            (
                f"Measure the sheet's thickness with a calliper in three places: sheet_mm (now {laser.sheet_mm:g}).",
                f"Layer {laser.layers.score} first, {laser.layers.cut} last, the cutter's own kerf correction off: the "
                "beam runs on the drawn lines.",
                f"Put the {plan.comb.blocks} blocks into the window in one row, any way round, push them to one end, "
                "and measure the gap at the other with calliper jaws, feelers or drill shanks.",
                f"kerf_mm = gap / {plan.comb.cuts}: every block lost half a kerf on both sides and the window gained "
                f"one, so an error of 0.1 in the gap is {0.1 / plan.comb.cuts:.2g} in the kerf.",
            ),
            (("laser.sheet_mm", laser.sheet_mm), ("laser.kerf_mm", laser.kerf_mm)),
        ),
        Entry(
            "Write both into the shop file, run boomwright coupon again, and cut: slot-ladder-1",
            (
                "Push one of the comb's blocks, on edge, into the slots; the number over a slot is its play, in "
                "hundredths of a millimetre.",
                "fit_mm = the number over the tightest slot that takes the sheet by hand and holds it, / 100.",
            ),
            (("laser.fit_mm", laser.fit_mm),),
        ),
    )


def _laid_out(plan: CouponPlan) -> tuple[tuple[Mark, ...], tuple[Lettering, ...]]:
    left, y = MARGIN_MM, PAGE_MM[1] - MARGIN_MM - TITLE_MM
    words = [Lettering("Calibration pieces: make, try, write down", left, y, TITLE_MM, "WORDS")]
    marks, number = list[Mark](), 0
    y -= 2.2 * LINE_MM
    for entry in _entries(plan):
        if entry.keys:
            number += 1
        head = f"{number}.  {entry.head}" if entry.keys else entry.head
        words.append(Lettering(head, left, y, HEAD_MM, "WORDS"))
        y -= LINE_MM + 0.6
        for sentence in entry.sentences:
            for line in wrap(sentence, CHARACTERS):
                words.append(Lettering(line, left + 5.0, y, WORDS_MM, "WORDS"))
                y -= LINE_MM
        for key, value in entry.keys:
            y -= 1.4
            words.append(Lettering(f"{key} = ", left + 5.0, y, HEAD_MM, "WORDS"))
            line_x = left + 72.0
            marks.append(_line("VALUE", line_x, y - 0.6, line_x + BLANK_MM, y - 0.6))
            words.append(Lettering(f"mm   (in this run: {value:g})", line_x + BLANK_MM + 2.0, y, WORDS_MM, "WORDS"))
            y -= LINE_MM + 1.0
        marks.append(_line("RULE", left, y, PAGE_MM[0] - MARGIN_MM, y))
        y -= AFTER_MM + HEAD_MM
    words.append(
        Lettering("These pieces were made for the shop.toml that stands in their folder.", left, y, WORDS_MM, "WORDS")
    )
    return (*marks, *_check_bar(words)), tuple(words)


def _check_bar(words: list[Lettering]) -> list[Mark]:
    left, right, y = MARGIN_MM, MARGIN_MM + CHECK_BAR_MM, MARGIN_MM
    words.append(Lettering(f"{CHECK_BAR_MM:g} mm, if printed at 100 %", right + 3.0, y - 1.0, WORDS_MM, "WORDS"))
    ticks = [_line("TICK", x, y - 2.0, x, y + 2.0) for x in (left, right)]
    return [_line("CHECK-BAR", left, y, right, y), *ticks]


def _line(layer: str, x0_mm: float, y0_mm: float, x1_mm: float, y1_mm: float) -> Mark:
    return Mark(Contour(((x0_mm, y0_mm, 0.0), (x1_mm, y1_mm, 0.0)), closed=False), layer)
