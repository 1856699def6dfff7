"""PDF: pages of straight lines and words at true scale. Writer and reader; no dates, no compression, base fonts only.

The page's content is scaled once, from millimetres to points, so its figures are the drawing's own. Lines stand in
marked content named by their layer ([ISO 32000-1] 14.6), by which the reader tells seats from frames.
"""

from __future__ import annotations

import math
import re
from collections.abc import Callable, Iterator, Mapping, Sequence
from dataclasses import dataclass
from itertools import pairwise
from pathlib import Path
from typing import Any

from boomwright.errors import CatalogueError, MeasureError
from boomwright.formats import dimensions
from boomwright.formats.dimensions import SeenDimension
from boomwright.formats.format import FileEntry, Format
from boomwright.pieces import Dimension, Expectation, Lettering, Mark, Page, PagesPiece, Piece, Probe
from boomwright.plan.drawing_marks import Words
from boomwright.shop.profile import Shop
from boomwright.units import MM_PER_INCH

POINTS_PER_MM = 72.0 / MM_PER_INCH
CAPITAL_SHARE = 0.718
"""Height of Helvetica's capitals as a share of the font's size."""

HAIRLINE_MM, LINE_MM = 0.1, 0.2
DASHED = {
    "MIDDLE": "[6 2 1 2] 0 d",
    "FOLD": "[2 2] 0 d",
    "MATCH": "[1 1] 0 d",
    "HIDDEN": "[3 1.5] 0 d",
    "CENTRE": "[8 1.5 1 1.5] 0 d",
}
WIDTHS_MM = {
    "VISIBLE": 0.5,
    "FRAME": 0.5,
    **dict.fromkeys(("HIDDEN", "CENTRE", "DIMENSION", "HATCH", "TABLE"), 0.25),
}
"""Of drawings, by ISO 128; the layers of other pages are thinner."""

NEAR_MM = 2.0
UPRIGHT_MM = 1e-6
OPERANDS = re.compile(rb"\((?:\\.|[^\\)])*\)|/[^\s/()<>\[\]]+|\[[^\]]*\]|[^\s()]+", re.DOTALL)


@dataclass(frozen=True)
class PdfLine:
    """A straight line on a page [mm], from its lower left corner, and the layer it is marked with."""

    layer: str
    start: tuple[float, float]
    end: tuple[float, float]


@dataclass(frozen=True)
class PdfPage:
    """Size, lines, words and dimensions of one page [mm]."""

    size_mm: tuple[float, float]
    lines: tuple[PdfLine, ...]
    words: tuple[str, ...]
    dimensions: tuple[SeenDimension, ...] = ()


@dataclass(frozen=True)
class PdfReading:
    """One document, read once."""

    path: Path
    pages: tuple[PdfPage, ...]


class Pdf(Format):
    """The PDF format."""

    name = "pdf"
    suffix = ".pdf"
    unit = "mm"

    def takes(self, piece: Piece) -> bool:
        """Documents of pages."""
        return isinstance(piece, PagesPiece)

    def write(self, piece: Piece, path: Path) -> None:
        """Catalogue, page tree, font, and for each page its content; the cross-reference table last."""
        assert isinstance(piece, PagesPiece)
        path.write_bytes(_document(piece))

    def read(self, path: Path) -> PdfReading:
        """Every page's size, lines and words. Raises MeasureError for anything but a whole document."""
        try:
            return PdfReading(path, tuple(_pages(path.read_bytes())))
        except (OSError, ValueError, KeyError, IndexError, AttributeError) as error:
            raise MeasureError(f"{path.name}: not a readable PDF file ({error})") from error

    def measure(self, reading: Any, probe: Probe, also: Sequence[Any]) -> float:
        """One quantity; the measures are listed in `MEASURES`."""
        known = [*MEASURES, *dimensions.MEASURES]
        if probe.measure not in known:
            raise CatalogueError(f"unknown PDF measure {probe.measure!r} (known: {', '.join(known)})")
        if probe.measure in dimensions.MEASURES:
            return dimensions.MEASURES[probe.measure](_page(reading, probe.arguments), probe.arguments, also)
        return MEASURES[probe.measure](reading, probe.arguments)

    def expect(self, entry: FileEntry, shop: Shop) -> tuple[Expectation, ...]:
        """At least a page, and no line beyond its page's edge."""
        return (
            Expectation(entry.path, "pages", 1.0, 0.0, "", Probe("page_count"), "at_least"),
            Expectation(entry.path, "overrun of the pages", 0.0, 0.0, "mm", Probe("outside_mm")),
        )


def _document(piece: PagesPiece) -> bytes:
    width, height = (f"{size * POINTS_PER_MM:.4f}" for size in piece.size_mm)
    count = len(piece.pages)
    kids = " ".join(f"{5 + 2 * i} 0 R" for i in range(count))
    objects = [
        b"<< /Type /Catalog /Pages 2 0 R >>",
        f"<< /Type /Pages /Kids [{kids}] /Count {count} >>".encode("ascii"),
        b"<< /Type /Font /Subtype /Type1 /BaseFont /Helvetica /Encoding /WinAnsiEncoding >>",
        b"<< /Title " + _text(piece.title) + b" /Producer (boomwright) >>",
    ]
    for index, page in enumerate(piece.pages):
        head = f"<< /Type /Page /Parent 2 0 R /MediaBox [0 0 {width} {height}] /Contents {6 + 2 * index} 0 R"
        objects.append(head.encode("ascii") + b" /Resources << /Font << /F1 3 0 R >> >> >>")
        content = _content(page)
        objects.append(b"<< /Length %d >>\nstream\n%b\nendstream" % (len(content), content))
    data, places = b"%PDF-1.4\n", []
    for number, item in enumerate(objects, 1):
        places.append(len(data))
        data += b"%d 0 obj\n%b\nendobj\n" % (number, item)
    table = b"".join(b"%010d 00000 n \n" % place for place in places)
    size = len(objects) + 1
    trailer = b"trailer\n<< /Size %d /Root 1 0 R /Info 4 0 R >>\nstartxref\n%d\n%%%%EOF\n" % (size, len(data))
    return data + b"xref\n0 %d\n0000000000 65535 f \n%b%b" % (size, table, trailer)


def _content(page: Page) -> bytes:
    lines = [f"{POINTS_PER_MM:.10f} 0 0 {POINTS_PER_MM:.10f} 0 0 cm".encode("ascii"), b"1 J"]
    for mark in page.marks:
        lines.append(_stroke(mark))
    lines += [_dimension(dimension) for dimension in page.dimensions]
    lines += [_words(text) for text in page.lettering]
    return b"\n".join(lines)


def _words(text: Lettering | Words) -> bytes:
    size = text.height_mm / CAPITAL_SHARE
    place = f"{text.x_mm:.4f} {text.y_mm:.4f}"
    move = f"0 1 -1 0 {place} Tm" if text.upright else f"{place} Td"
    return f"BT /F1 {size:.4f} Tf {move} ".encode("ascii") + _text(text.text) + b" Tj ET"


def _dimension(dimension: Dimension) -> bytes:
    """A group of marked content that carries the dimension's name and its view's scale; the dimension line first."""
    runs = [dimension.line, *(stroke.points for stroke in dimension.strokes)]
    name = b"/DIMENSION << /Name " + _text(dimension.name) + b" /Scale " + f"{dimension.scale:.10g}".encode("ascii")
    width = f"{WIDTHS_MM['DIMENSION']:g} w [] 0 d ".encode("ascii")
    paths = " ".join(f"{_path(run)} S" for run in runs).encode("ascii")
    return name + b" >> BDC " + width + paths + b" " + _words(dimension.words) + b" EMC"


def _path(points: Sequence[tuple[float, float]]) -> str:
    first, *rest = [f"{x:.4f} {y:.4f}" for x, y in points]
    return " ".join([f"{first} m", *(f"{point} l" for point in rest)])


def _stroke(mark: Mark) -> bytes:
    if not re.fullmatch(r"[A-Z-]+", mark.layer):
        raise ValueError(f"{mark.layer!r} is no layer's name")
    if any(bulge for _, _, bulge in mark.contour.vertices):
        raise ValueError("a page takes straight lines only")
    width = WIDTHS_MM.get(mark.layer, HAIRLINE_MM if mark.layer in DASHED else LINE_MM)
    path = _path([(x, y) for x, y, _ in mark.contour.vertices]) + (" s" if mark.contour.closed else " S")
    return f"/{mark.layer} BMC {width:g} w {DASHED.get(mark.layer, '[] 0 d')} {path} EMC".encode("ascii")


def _text(text: str) -> bytes:
    """A string object: brackets and backslashes escaped, what the font's encoding lacks as a question mark."""
    plain = "".join(c if c.isprintable() else " " for c in text).encode("cp1252", "replace")
    return b"(" + re.sub(rb"([\\()])", rb"\\\1", plain) + b")"


def _pages(data: bytes) -> Iterator[PdfPage]:
    """The pages in the order of the page tree, found by way of the cross-reference table."""
    end = re.search(rb"startxref\s+(\d+)\s+%%EOF\s*\Z", data)
    if not data.startswith(b"%PDF-") or end is None:
        raise ValueError("no PDF header, or no end")
    table = re.match(
        rb"xref\s+0 (\d+)\s+((?:\d{10} \d{5} [nf] \n)+)trailer\s+<<(.*?)>>", data[int(end[1]) :], re.DOTALL
    )
    if table is None:
        raise ValueError("no cross-reference table")
    places = [int(row[:10]) for row in table[2].split(b"\n")[1:] if row]

    def item(number: bytes) -> bytes:
        match = re.match(rb"%b 0 obj\n(.*?)\nendobj\n" % number, data[places[int(number) - 1] :], re.DOTALL)
        if match is None:
            raise ValueError(f"object {number.decode()} is not where the table has it")
        return match[1]

    root = _found(rb"/Root (\d+) 0 R", table[3])
    kids = _found(rb"/Kids \[(.*?)\]", item(_found(rb"/Pages (\d+) 0 R", item(root))))
    for kid in re.findall(rb"(\d+) 0 R", kids):
        page = item(kid)
        box = [float(value) for value in _found(rb"/MediaBox \[(.*?)\]", page).split()]
        unit = re.search(rb"/UserUnit ([\d.]+)", page)
        scale = (float(unit[1]) if unit else 1.0) / POINTS_PER_MM
        content = item(_found(rb"/Contents (\d+) 0 R", page))
        stream = _found(rb"stream\n(.*)\nendstream", content)
        if len(stream) != int(_found(rb"/Length (\d+)", content)):
            raise ValueError("a page's content is not as long as it says")
        yield PdfPage(((box[2] - box[0]) * scale, (box[3] - box[1]) * scale), *_drawn(stream, scale))


def _found(pattern: bytes, text: bytes) -> bytes:
    match = re.search(pattern, text, re.DOTALL)
    if match is None:
        raise ValueError(f"no {pattern.decode('ascii')}")
    return match[1]


def _drawn(stream: bytes, unit_mm: float) -> tuple[tuple[PdfLine, ...], tuple[str, ...], tuple[SeenDimension, ...]]:
    """Lines, words and dimensions of a page's content, by its operators; the matrix may scale and shift."""
    lines, words, stack = list[PdfLine](), list[str](), list[bytes]()
    seen, group = list[SeenDimension](), None
    matrix, layer, path = (1.0, 1.0, 0.0, 0.0), "", list[tuple[float, float]]()
    for token in OPERANDS.findall(stream):
        if token == b"cm":
            a, b, c, d, e, f = (float(value) for value in stack[-6:])
            if b or c:
                raise ValueError("a turned page")
            matrix = (matrix[0] * a, matrix[1] * d, matrix[2] + matrix[0] * e, matrix[3] + matrix[1] * f)
        elif token in (b"m", b"l"):
            x, y = (float(value) for value in stack[-2:])
            point = ((matrix[0] * x + matrix[2]) * unit_mm, (matrix[1] * y + matrix[3]) * unit_mm)
            path = [point] if token == b"m" else [*path, point]
        elif token in (b"S", b"s"):
            run = [*path, path[0]] if token == b"s" else path
            lines += [PdfLine(layer, one, two) for one, two in pairwise(run)]
        elif token == b"BMC":
            layer = stack[-1][1:].decode("ascii")
        elif token == b"BDC":
            layer = stack[0][1:].decode("ascii")
            group = (_unescaped(stack[stack.index(b"/Name") + 1]), float(stack[stack.index(b"/Scale") + 1]), len(lines))
        elif token == b"EMC":
            if group is not None:
                name, scale, first = group
                line = lines[first]
                seen.append(SeenDimension(name, words[-1], math.dist(line.start, line.end) / scale, scale))
            layer, group = "", None
        elif token == b"Tj":
            words.append(_unescaped(stack[-1]))
        else:
            stack.append(token)
            continue
        stack.clear()
    return tuple(lines), tuple(words), tuple(seen)


def _unescaped(text: bytes) -> str:
    """The characters of a string object."""
    return re.sub(rb"\\(.)", rb"\1", text[1:-1]).decode("cp1252")


def _page(reading: PdfReading, arguments: Mapping[str, Any]) -> PdfPage:
    number = int(arguments.get("page", 0))
    if not 0 <= number < len(reading.pages):
        raise MeasureError(f"{reading.path.name}: no page {number + 1}")
    return reading.pages[number]


def measure_line(reading: PdfReading, arguments: Mapping[str, Any]) -> float:
    """x of the upright line of a `layer` nearest to `x_mm` on a `page` (from 0) [mm], at most 2 mm off."""
    at, layer = float(arguments["x_mm"]), str(arguments["layer"])
    found = [
        line.start[0]
        for line in _page(reading, arguments).lines
        if line.layer == layer and abs(line.start[0] - line.end[0]) < UPRIGHT_MM
    ]
    best = min(found, key=lambda x: abs(x - at), default=None)
    if best is None or abs(best - at) > NEAR_MM:
        raise MeasureError(f"{reading.path.name}: no line of {layer} near x = {at:g}")
    return best


def measure_check_bar(reading: PdfReading, arguments: Mapping[str, Any]) -> float:
    """Length of the one line of layer CHECK-BAR on a `page` (from 0) [mm]."""
    bars = [line for line in _page(reading, arguments).lines if line.layer == "CHECK-BAR"]
    if len(bars) != 1:
        raise MeasureError(f"{reading.path.name}: {len(bars)} check bars on a page that should show one")
    (x0, y0), (x1, y1) = bars[0].start, bars[0].end
    return float(((x1 - x0) ** 2 + (y1 - y0) ** 2) ** 0.5)


def measure_page_count(reading: PdfReading, arguments: Mapping[str, Any]) -> float:
    """Number of pages."""
    return float(len(reading.pages))


def measure_line_count(reading: PdfReading, arguments: Mapping[str, Any]) -> float:
    """Number of straight lines of a `layer`, on all pages."""
    layer = str(arguments["layer"])
    return float(sum(line.layer == layer for page in reading.pages for line in page.lines))


def measure_outside(reading: PdfReading, arguments: Mapping[str, Any]) -> float:
    """How far any line runs over its page's edge [mm]; 0 when none does."""
    over = [0.0]
    for page in reading.pages:
        for x, y in (point for line in page.lines for point in (line.start, line.end)):
            over += [-x, -y, x - page.size_mm[0], y - page.size_mm[1]]
    return max(over)


MEASURES: dict[str, Callable[[Any, Mapping[str, Any]], float]] = {
    "line_at": measure_line,
    "check_bar_mm": measure_check_bar,
    "page_count": measure_page_count,
    "line_count": measure_line_count,
    "outside_mm": measure_outside,
}

PDF = Pdf()
