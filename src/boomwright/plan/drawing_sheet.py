"""The sheet: size and frame (ISO 5457), title block (ISO 7200), scale (ISO 5455), first-angle symbol (ISO 5456-2).

Blocks are laid on it from the top left, at the largest scale of the series at which all of them find room.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace

from boomwright.plan.drawing_marks import (
    TEXT_MM,
    Block,
    Box,
    Dimension,
    Point,
    Stroke,
    Words,
    box_of,
    fitted,
    line_of,
    overlap,
    words_width_mm,
)
from boomwright.plan.drawing_view import View

A4_MM, A3_MM, A2_MM = (297.0, 210.0), (420.0, 297.0), (594.0, 420.0)
BINDING_MM, MARGIN_MM = 20.0, 10.0
INSET_MM, GAP_MM = 5.0, 7.0
TITLE_BLOCK_MM = (180.0, 34.0)
SCALES = (20.0, 10.0, 5.0, 2.0, 1.0, 1 / 2, 1 / 5, 1 / 10, 1 / 20, 1 / 50, 1 / 100, 1 / 200, 1 / 500)
ROW_MM = 4.6
CELL_MM = 1.5

Build = Callable[[float], Sequence[Block]]


@dataclass(frozen=True)
class Title:
    """What the title block says. `stem` names the sheet's files: `drawing-boom`."""

    stem: str
    what: str
    of: str
    number: str
    material: str
    drawn_by: str
    tolerance: str


@dataclass(frozen=True)
class Sheet:
    """A sheet on paper, from its lower left corner [mm]. `origin` is where the main view's zero lies."""

    title: Title
    size_mm: tuple[float, float]
    scale: float
    content: Block
    number: int = 1
    count: int = 1

    @property
    def origin(self) -> Point:
        """Where the main view's zero lies on paper."""
        return self.content.origin

    @property
    def frame(self) -> Box:
        """The frame's edges."""
        return BINDING_MM, MARGIN_MM, self.size_mm[0] - MARGIN_MM, self.size_mm[1] - MARGIN_MM

    @property
    def strokes(self) -> tuple[Stroke, ...]:
        """Everything drawn but the dimensions."""
        return (*self.content.strokes, *_frame_strokes(self))

    @property
    def words(self) -> tuple[Words, ...]:
        """Everything written but the dimensions."""
        return (*self.content.words, *_title_words(self))

    @property
    def dimensions(self) -> tuple[Dimension, ...]:
        """The dimensions."""
        return self.content.dimensions


def scale_words(scale: float) -> str:
    """A scale as a drawing has it: `1:5`, `2:1`."""
    return f"{scale:g}:1" if scale >= 1.0 else f"1:{1.0 / scale:g}"


def detail_scale(size_mm: float, target_mm: float) -> float:
    """The largest scale of the series at which this size is no longer than the target on paper."""
    return next((scale for scale in SCALES if scale * size_mm <= target_mm), SCALES[-1])


def lay_sheet(title: Title, size_mm: tuple[float, float], build: Build, scales: Sequence[float]) -> Sheet | None:
    """A sheet at the first of the scales at which the blocks that `build` makes find room; the first is the main one.

    None where they find room at none of them.
    """
    sheet = Sheet(title, size_mm, 1.0, Block())
    for scale in scales:
        blocks = build(scale)
        placed = _place(blocks, sheet)
        if placed is not None:
            strokes = tuple(s for b in placed for s in b.strokes)
            words = tuple(w for b in placed for w in b.words)
            dimensions = tuple(d for b in placed for d in b.dimensions)
            return replace(sheet, scale=scale, content=Block(strokes, words, dimensions, placed[0].origin))
    return None


def table_block(head: Sequence[str], rows: Sequence[Sequence[str]], most_rows: int = 40) -> Block:
    """A ruled table; a long one goes on beside itself."""
    view = View(1.0)
    columns = list(zip(head, *rows, strict=True))
    widths = [max(words_width_mm(text, TEXT_MM) for text in column) + 2.0 * CELL_MM for column in columns]
    left = 0.0
    for first in range(0, max(1, len(rows)), most_rows):
        part = [head, *rows[first : first + most_rows]]
        bottom, right = -ROW_MM * len(part), left + sum(widths)
        for index, row in enumerate(part):
            x, y = left, -ROW_MM * (index + 1)
            for text, width in zip(row, widths, strict=True):
                view.write(text, (x + CELL_MM, y + (ROW_MM - TEXT_MM) / 2.0))
                x += width
            view.strokes.append(line_of((left, y), (right, y), "TABLE"))
        view.strokes.append(line_of((left, 0.0), (right, 0.0), "TABLE"))
        for x in (left, *(left + sum(widths[: i + 1]) for i in range(len(widths)))):
            view.strokes.append(line_of((x, 0.0), (x, bottom), "TABLE"))
        left = right + GAP_MM
    return view.block()


def notes_block(lines: Sequence[str]) -> Block:
    """Lines of words."""
    view = View(1.0)
    for index, text in enumerate(lines):
        view.write(text, (0.0, -ROW_MM * index))
    return view.block()


def _place(blocks: Sequence[Block], sheet: Sheet) -> list[Block] | None:
    """The blocks at their places, or None where they find no room."""
    x0, y0, x1, y1 = sheet.frame
    area = (x0 + INSET_MM, y0 + INSET_MM, x1 - INSET_MM, y1 - INSET_MM)
    title = (x1 - TITLE_BLOCK_MM[0], y0, x1, y0 + TITLE_BLOCK_MM[1])
    taken: list[Box] = []
    placed = []
    for block in blocks:
        box = block.box
        width, height = box[2] - box[0], box[3] - box[1]
        xs = sorted({area[0], *(t[2] + GAP_MM for t in taken)})
        ys = sorted({area[3], *(t[1] - GAP_MM for t in taken)}, reverse=True)
        spots = ((x, y - height, x + width, y) for y in ys for x in xs)
        spot = next((s for s in spots if _free(s, area, [*taken, title])), None)
        if spot is None:
            return None
        taken.append(spot)
        placed.append(block.moved(spot[0] - box[0], spot[1] - box[1]))
    return _centred(placed, taken, area, title)


def _free(spot: Box, area: Box, taken: Sequence[Box]) -> bool:
    inside = spot[0] >= area[0] and spot[1] >= area[1] and spot[2] <= area[2] + 1e-9 and spot[3] <= area[3] + 1e-9
    return inside and not any(overlap(spot, other, GAP_MM - 1e-6) for other in taken)


def _centred(placed: list[Block], taken: list[Box], area: Box, title: Box) -> list[Block]:
    """All of it moved toward the sheet's middle as far as the title block lets it."""
    x0, y0, x1, _ = box_of(taken)
    for share in (1.0, 0.5, 0.0):
        dx = (area[2] - x1 - (x0 - area[0])) / 2.0
        dy = -share * (y0 - area[1]) / 2.0 if share else 0.0
        moved = [(b[0] + dx, b[1] + dy, b[2] + dx, b[3] + dy) for b in taken]
        if not any(overlap(box, title, GAP_MM) for box in moved):
            return [block.moved(dx, dy) for block in placed]
    return placed


def _frame_strokes(sheet: Sheet) -> tuple[Stroke, ...]:
    x0, y0, x1, y1 = sheet.frame
    left, top = x1 - TITLE_BLOCK_MM[0], y0 + TITLE_BLOCK_MM[1]
    view = View(1.0)
    view.rectangle((x0, x1), (y0, y1), "FRAME")
    view.run([(left, y0), (left, top), (x1, top)], "FRAME")
    for x, y, dx, dy in (
        ((0.0 + sheet.size_mm[0]) / 2.0, y1, 0.0, MARGIN_MM / 2.0),
        (sheet.size_mm[0] / 2.0, y0, 0.0, -MARGIN_MM / 2.0),
        (x0, sheet.size_mm[1] / 2.0, -MARGIN_MM / 2.0, 0.0),
        (x1, sheet.size_mm[1] / 2.0, MARGIN_MM / 2.0, 0.0),
    ):
        view.run([(x, y), (x + dx, y + dy)], "FRAME")
    for y in (y0 + 10.0, y0 + 22.0):
        view.run([(left, y), (x1, y)], "TABLE")
    for x, low, high in (
        (left + 118.0, 0.0, 34.0),
        (left + 148.0, 10.0, 22.0),
        (left + 62.0, 0.0, 10.0),
        (left + 78.0, 10.0, 22.0),
    ):
        view.run([(x, y0 + low), (x, y0 + high)], "TABLE")
    view.strokes += _first_angle((left + 134.0, y0 + 5.0))
    return tuple(view.strokes)


def _first_angle(middle: Point) -> list[Stroke]:
    """A cone's frustum seen from the side, and to its right as seen from the left (ISO 5456-2)."""
    view = View(1.0, middle)
    view.run([(-11.0, -1.5), (-3.0, -3.0), (-3.0, 3.0), (-11.0, 1.5)], "VISIBLE", closed=True)
    view.run([(-12.5, 0.0), (-1.5, 0.0)], "CENTRE")
    for radius in (1.5, 3.0):
        view.circle((5.0, 0.0), radius, cross=False)
    view.run([(0.8, 0.0), (9.2, 0.0)], "CENTRE")
    view.run([(5.0, -4.2), (5.0, 4.2)], "CENTRE")
    return view.strokes


def _title_words(sheet: Sheet) -> tuple[Words, ...]:
    _, y0, x1, _ = sheet.frame
    left, title = x1 - TITLE_BLOCK_MM[0] + 2.0, sheet.title
    rows = (
        ("title", title.what, 0.0, 22.0, 114.0, 3.5),
        ("part of", title.of, 0.0, 10.0, 74.0, 2.5),
        ("drawn by", title.drawn_by, 78.0, 10.0, 38.0, 2.5),
        ("material", title.material, 0.0, 0.0, 58.0, 2.5),
        ("tolerances", title.tolerance, 62.0, 0.0, 54.0, 2.5),
        ("drawing number", title.number, 118.0, 22.0, 60.0, 2.5),
        ("scale", scale_words(sheet.scale), 118.0, 10.0, 28.0, 3.5),
        ("sheet", f"{sheet.number} of {sheet.count}", 148.0, 10.0, 28.0, 3.5),
    )
    found = []
    for label, text, x, y, room, height in rows:
        top = {0.0: 10.0, 10.0: 12.0, 22.0: 12.0}[y]
        found.append(Words(label, left + x, y0 + y + top - 3.5, TEXT_MM))
        found.append(Words(fitted(text, room, height), left + x, y0 + y + 1.5, height))
    found.append(Words("sizes in mm", left + 152.0, y0 + 3.75))
    return tuple(found)
