"""A drawing's sheet as SVG, in millimetres of paper. One ink, `currentColor`, that whoever shows it may choose."""

from __future__ import annotations

from xml.sax.saxutils import escape, quoteattr

from boomwright.plan.drawing_marks import CAPITAL_SHARE, Dimension, Point, Stroke, Words, line_of, words_width_mm
from boomwright.plan.drawing_sheet import Sheet

WIDTHS_MM = {"VISIBLE": "0.5", "FRAME": "0.5"}
DASHES = {"HIDDEN": "3 1.5", "CENTRE": "8 1.5 1 1.5"}
INK = "#1b1f24"
FONT = "Arimo,Liberation Sans,Helvetica,Arial,sans-serif"


def draw_sheet(sheet: Sheet) -> str:
    """The whole document. Dimensions carry their names, and their lines are curves of those names."""
    width, height = sheet.size_mm
    name = quoteattr(sheet.title.what)
    size = f'width="{width:g}mm" height="{height:g}mm" viewBox="0 0 {width:g} {height:g}"'
    head = f'<svg xmlns="http://www.w3.org/2000/svg" {size} color="{INK}" role="img" aria-label={name}>'
    parts = [head, f'<rect class="paper" width="{width:g}" height="{height:g}" fill="#fff"/>']
    parts.append('<g fill="none" stroke="currentColor" stroke-linecap="round" stroke-linejoin="round">')
    parts += [_line(stroke, height) for stroke in sheet.strokes]
    for dimension in sheet.dimensions:
        parts.append(_line(line_of(*dimension.line), height, dimension.name))
        parts += [_line(stroke, height) for stroke in dimension.strokes]
    parts += ["</g>", f'<g fill="currentColor" font-family="{FONT}">']
    parts += [_text(words, height) for words in sheet.words]
    parts += [_text(dimension.words, height, dimension) for dimension in sheet.dimensions]
    return "\n".join([*parts, "</g>", "</svg>", ""])


def _line(stroke: Stroke, height_mm: float, curve: str = "") -> str:
    points = " ".join(_place(point, height_mm) for point in stroke.points)
    dashes = f' stroke-dasharray="{DASHES[stroke.layer]}"' if stroke.layer in DASHES else ""
    name = f" data-curve={quoteattr(curve)}" if curve else ""
    width = WIDTHS_MM.get(stroke.layer, "0.25")
    return f'<polyline class="{stroke.layer.lower()}" stroke-width="{width}"{dashes}{name} points="{points}"/>'


def _place(point: Point, height_mm: float) -> str:
    return f"{_number(point[0])},{_number(height_mm - point[1])}"


def _number(value: float) -> str:
    text = f"{value:.3f}".rstrip("0").rstrip(".")
    return "0" if text == "-0" else text


def _text(words: Words, height_mm: float, dimension: Dimension | None = None) -> str:
    x, y = _number(words.x_mm), _number(height_mm - words.y_mm)
    turned = f' transform="rotate(-90 {x} {y})"' if words.upright else ""
    size = _number(words.height_mm / CAPITAL_SHARE)
    length = _number(words_width_mm(words.text, words.height_mm))
    fit = f' textLength="{length}" lengthAdjust="spacingAndGlyphs"' if words.text else ""
    of = f' data-dimension={quoteattr(dimension.name)} data-scale="{dimension.scale:.10g}"' if dimension else ""
    return f'<text x="{x}" y="{y}" font-size="{size}"{fit}{turned}{of}>{escape(words.text)}</text>'
