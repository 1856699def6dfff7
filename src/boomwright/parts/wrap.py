"""The wrap template: a page, or several to be glued, to wrap round the boom and mark every seat from."""

from __future__ import annotations

from typing import TYPE_CHECKING

from boomwright.pieces import Contour, Expectation, Lettering, Mark, Page, PagesPiece, Part, Piece, Probe
from boomwright.plan.wrap import (
    CHECK_BAR_MM,
    FOOT_MM,
    HEAD_MM,
    MARGIN_MM,
    OVERLAP_MM,
    PAGE_MM,
    WrapPage,
    WrapPlan,
    plan_wrap,
)

if TYPE_CHECKING:
    from boomwright.plan.plan import Plan

FILE = "bench/wrap-template.pdf"
LINE_ALLOWED_MM = 0.005
BAR_Y_MM = MARGIN_MM + 6.0
TICK_MM = 3.0
CROSS_MM = 3.0
TAG_MM, WORDS_MM, TITLE_MM = 3.0, 2.6, 4.0
LONGEST_TITLE = 90
"""Characters of a title that fit a page at its size."""


class WrapTemplate(Part):
    """The template as a PDF document at true scale."""

    name = "wrap-template"
    purpose = "paper to wrap round the boom, or to lay on a square one: a line at every seat, at true scale"
    processes = ("bench",)

    def build(self, plan: Plan) -> tuple[Piece, ...]:
        """One document, an A4 page for each length of boom."""
        wrap, _ = plan_wrap(plan.design, plan.boom, plan.wished_seat)
        title = plan.design.title or plan.design.name
        pages = tuple(Page(*_page(wrap, number, title)) for number in range(len(wrap.pages)))
        return (PagesPiece("wrap-template", "bench", f"wrap template: {title}", PAGE_MM, pages),)

    def expect(self, plan: Plan) -> tuple[Expectation, ...]:
        """Every line's place on every page that shows it, where pages join, the check bars, the number of pages."""
        wrap, _ = plan_wrap(plan.design, plan.boom, plan.wished_seat)
        found = [Expectation(FILE, "number of pages", len(wrap.pages), 0.0, "pages", Probe("page_count"))]
        for number, page in enumerate(wrap.pages):
            on = f"page {number + 1}"
            for line in wrap.lines:
                if page.start_mm <= line.at_mm <= page.end_mm:
                    found.append(_line(f"{line.tag} line on {on}", page, number, line.at_mm, "SEAT"))
            for at in _joins(wrap, number):
                found.append(_line(f"match line on {on}", page, number, at, "MATCH"))
            probe = Probe("check_bar_mm", {"page": number})
            found.append(Expectation(FILE, f"check bar on {on}", CHECK_BAR_MM, LINE_ALLOWED_MM, "mm", probe))
        return tuple(found)


def _line(what: str, page: WrapPage, number: int, at_mm: float, layer: str) -> Expectation:
    x = _x(page, at_mm)
    probe = Probe("line_at", {"page": number, "x_mm": x, "layer": layer})
    return Expectation(FILE, what, x, LINE_ALLOWED_MM, "mm", probe)


def _x(page: WrapPage, at_mm: float) -> float:
    """From a place along the boom to one on the page."""
    return MARGIN_MM + at_mm - page.start_mm


def _joins(wrap: WrapPlan, number: int) -> list[float]:
    """Middles of the strip that a page shares with its neighbours."""
    joins = []
    if number > 0:
        joins.append(wrap.pages[number].start_mm + OVERLAP_MM / 2.0)
    if number + 1 < len(wrap.pages):
        joins.append(wrap.pages[number].end_mm - OVERLAP_MM / 2.0)
    return joins


def _page(wrap: WrapPlan, number: int, title: str) -> tuple[tuple[Mark, ...], tuple[Lettering, ...]]:
    page = wrap.pages[number]
    middle = MARGIN_MM + FOOT_MM + (PAGE_MM[1] - 2.0 * MARGIN_MM - FOOT_MM - HEAD_MM) / 2.0
    low, high = middle - wrap.strip_mm / 2.0, middle + wrap.strip_mm / 2.0
    left, right = MARGIN_MM, _x(page, page.end_mm)
    marks = [_mark("EDGE", left, low, right, low), _mark("EDGE", left, high, right, high)]
    marks.append(_mark("MIDDLE", left, middle, right, middle))
    marks += [_mark("FOLD", left, middle + v, right, middle + v) for v in wrap.folds_mm]
    words: list[Lettering] = []
    for end, shown in ((left, page.start_mm == wrap.start_mm), (right, page.end_mm == wrap.end_mm)):
        if shown:
            marks.append(_mark("END", end, low, end, high))
    marks += _seats(wrap, page, (low, high), words)
    for at in _joins(wrap, number):
        x = _x(page, at)
        for y in (low - 6.0, high + 8.0):
            marks.append(_mark("MATCH", x, y - CROSS_MM, x, y + CROSS_MM))
            marks.append(_mark("MATCH", x - CROSS_MM, y, x + CROSS_MM, y))
        marks.append(_mark("MATCH", x, low, x, high))
    marks += _check_bar(words)
    words += _words(wrap, number, title, (low, high))
    return tuple(marks), tuple(words)


def _seats(wrap: WrapPlan, page: WrapPage, strip: tuple[float, float], words: list[Lettering]) -> list[Mark]:
    """A line across the strip with its tag; for a hole also a cross on either side of the boom."""
    low, high = strip
    marks, tag_end, row = [], 0.0, 0
    for line in (one for one in wrap.lines if page.start_mm <= one.at_mm <= page.end_mm):
        x = _x(page, line.at_mm)
        marks.append(_mark("SEAT", x, low, x, high))
        row = 1 - row if x < tag_end else 0
        words.append(Lettering(line.tag, x + 0.8, high - (row + 1) * (TAG_MM + 1.0), TAG_MM, "SEAT"))
        tag_end = x + 0.8 + TAG_MM * len(line.tag)
        sides = (wrap.girth_mm / 4.0, -wrap.girth_mm / 4.0) if line.is_hole else ()
        for y in ((low + high) / 2.0 + v for v in sides if abs(v) < wrap.strip_mm / 2.0):
            marks.append(_mark("HOLE", x - CROSS_MM, y, x + CROSS_MM, y))
    return marks


def _check_bar(words: list[Lettering]) -> list[Mark]:
    left, right, y = MARGIN_MM, MARGIN_MM + CHECK_BAR_MM, BAR_Y_MM
    words.append(
        Lettering(f"{CHECK_BAR_MM:g} mm: measure this bar before cutting", right + 4.0, y - 1.0, WORDS_MM, "WORDS")
    )
    ticks = [_mark("TICK", x, y - TICK_MM, x, y + TICK_MM) for x in (left, right)]
    return [_mark("CHECK-BAR", left, y, right, y), *ticks]


def _words(wrap: WrapPlan, number: int, title: str, strip: tuple[float, float]) -> list[Lettering]:
    top = PAGE_MM[1] - MARGIN_MM - TITLE_MM
    count = len(wrap.pages)
    shown = title if len(title) <= LONGEST_TITLE else f"{title[: LONGEST_TITLE - 3]}..."
    holes = any(line.is_hole for line in wrap.lines)
    how = "wrap the strip round the boom, edge to edge" if wrap.wraps else "lay the strip on the boom"
    where = "drill at the crosses on the sides" if holes else "the seats cross the boom's top along the short lines"
    lines = [
        f"Print at 100 %, no fitting to the page. Cut along the long edges, {how}; middle line on the boom's top.",
        f"Left end of page 1 = rear end of the boom, FORWARD to the right; {where}.",
    ]
    if count > 1:
        lines.append("Glue the pages so that the crosses and the long dashed line between them lie on each other.")
    found = [Lettering(f"{shown}: wrap template, page {number + 1} of {count}", MARGIN_MM, top, TITLE_MM, "WORDS")]
    found += [Lettering(text, MARGIN_MM, top - 5.0 * (i + 1), WORDS_MM, "WORDS") for i, text in enumerate(lines)]
    found.append(Lettering("FORWARD >", MARGIN_MM + 1.0, strip[0] + 1.5, WORDS_MM, "WORDS"))
    return found


def _mark(layer: str, x0_mm: float, y0_mm: float, x1_mm: float, y1_mm: float) -> Mark:
    return Mark(Contour(((x0_mm, y0_mm, 0.0), (x1_mm, y1_mm, 0.0)), closed=False), layer)
