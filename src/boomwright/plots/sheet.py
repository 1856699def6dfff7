"""The sheet a chart is drawn on: elements, text, colours for light and dark, and the table of figures below the chart.

Sheets are 400 units wide whatever they are shown at: at the width of a telephone their text is still read.
"""

from __future__ import annotations

import re
from collections.abc import Sequence
from xml.sax.saxutils import escape, quoteattr

WIDTH = 400.0
LEFT, RIGHT = 54.0, 388.0
MARGIN = 12.0
TOP = 56.0
ROW = 17.0
SUBTITLE_CELLS = 50
WIDE_FROM = "\u2e80"
FORBIDDEN = re.compile("[^\t\n\r -\ud7ff\ue000-\ufffd\U00010000-\U0010ffff]")
"""What XML 1.0 cannot hold."""

STYLE = """
text{font:12px system-ui,sans-serif;fill:#1b1f24}
.paper{fill:#fff}
.head{font-size:15px;font-weight:600}
.sub,.column{fill:#555d66}
.grid,.ring,.spoke{fill:none;stroke:#d3d8de;stroke-width:.8}
.frame{fill:none;stroke:#6b737c;stroke-width:1}
.curve{fill:none;stroke:#0b5cad;stroke-width:2;stroke-linejoin:round}
.dot{fill:#0b5cad}
.stem{stroke:#0b5cad;stroke-width:2}
.band{fill:#0b5cad;fill-opacity:.1}
.limit{stroke:#b3261e;stroke-width:1.2;stroke-dasharray:5 4}
.limit-name{fill:#b3261e}
@media (prefers-color-scheme:dark){
text{fill:#e6e8eb}
.paper{fill:#14171a}
.sub,.column{fill:#a8b0b9}
.grid,.ring,.spoke{stroke:#3a4048}
.frame{stroke:#8b949e}
.curve,.stem{stroke:#6fb3ff}
.dot,.band{fill:#6fb3ff}
.limit{stroke:#ff9e80}
.limit-name{fill:#ff9e80}
}
"""


class Sheet:
    """Collects elements; `text` closes the document.

    title     what is shown, with its unit
    subtitle  whose it is: any text, escaped and cut to the width
    """

    def __init__(self, title: str, subtitle: str) -> None:
        self._title = title
        self._elements: list[str] = []
        self._bottom = TOP
        self.write(title, MARGIN, 24.0, "head")
        self.write(_cut(subtitle), MARGIN, 42.0, "sub")

    def add(self, name: str, **attributes: str | float) -> None:
        """One empty element; `data_curve` becomes `data-curve`, `css` becomes `class`."""
        self._elements.append(f"<{name}{_attributes(attributes)}/>")

    def write(self, text: str, x: float, y: float, css: str = "", **attributes: str | float) -> None:
        """Text as text."""
        given = {"x": x, "y": y} | ({"css": css} if css else {}) | attributes
        self._elements.append(f"<text{_attributes(given)}>{escape(_clean(text))}</text>")
        self._bottom = max(self._bottom, y)

    def add_clip(self, name: str, x: float, y: float, width: float, height: float) -> str:
        """A rectangle that elements with `clip_path` of the returned value are cut to."""
        area = _attributes({"x": x, "y": y, "width": width, "height": height})
        self._elements.append(f"<clipPath id={quoteattr(name)}><rect{area}/></clipPath>")
        return f"url(#{name})"

    def add_table(self, rows: Sequence[Sequence[str]], columns: Sequence[float], y: float) -> None:
        """Rows of text below the chart, the first one their heads; `columns` are where each column starts."""
        for index, row in enumerate(rows):
            for text, x in zip(row, columns, strict=False):
                self.write(text, x, y + index * ROW, "" if index else "column")

    def text(self) -> str:
        """The document."""
        height = self._bottom + MARGIN
        size = f'viewBox="0 0 {number(WIDTH)} {number(height)}"'
        head = f'<svg xmlns="http://www.w3.org/2000/svg" {size} role="img" aria-label={quoteattr(_clean(self._title))}>'
        paper = f'<rect class="paper" width="{number(WIDTH)}" height="{number(height)}"/>'
        return "\n".join([head, f"<style>{STYLE}</style>", paper, *self._elements, "</svg>", ""])


def number(value: float) -> str:
    """A coordinate: at most two decimals, no trailing zeros, no minus zero."""
    text = f"{value:.2f}".rstrip("0").rstrip(".")
    return "0" if text == "-0" else text


def _attributes(given: dict[str, str | float]) -> str:
    names = {"css": "class"}
    parts = []
    for name, value in given.items():
        text = value if isinstance(value, str) else number(value)
        parts.append(f" {names.get(name, name.replace('_', '-'))}={quoteattr(_clean(text))}")
    return "".join(parts)


def _clean(text: str) -> str:
    return FORBIDDEN.sub("\ufffd", text)


def _cut(text: str) -> str:
    """As much of a text as fits the sheet; letters of the wide scripts count twice."""
    cells, kept = 0, ""
    for letter in " ".join(_clean(text).split()):
        cells += 1 if letter < WIDE_FROM else 2
        if cells > SUBTITLE_CELLS:
            return f"{kept.rstrip()}…"
        kept += letter
    return kept
