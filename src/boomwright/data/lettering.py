"""The package's own stroke lettering for engraved and scored text, so that no system font changes a part.

A glyph stands on a grid with capitals 8 units high: its width in units, then polylines of digit pairs (x, y).
Lower case is drawn as capitals, so that nothing reaches below the baseline; a character without a glyph becomes an
empty box.
"""

from __future__ import annotations

from functools import cache

CAPITAL_UNITS = 8
GAP_UNITS = 2

Line = list[tuple[float, float]]

_BOX = "5 0050580800"
_GLYPHS = {
    " ": "3",
    "A": "5 000628385650 0353",
    "B": "5 00083857553404 3453513000",
    "C": "5 5748180701104051",
    "D": "5 00083856523000",
    "E": "5 50000858 0444",
    "F": "5 000858 0444",
    "G": "5 57481807011040515434",
    "H": "5 0008 5058 0454",
    "I": "2 0020 0828 1018",
    "J": "5 585140100102",
    "K": "5 0008 580450",
    "L": "5 080050",
    "M": "6 0008346860",
    "N": "5 00085058",
    "O": "5 100107184857514010",
    "P": "5 00084857554404",
    "Q": "5 100107184857514010 3250",
    "R": "5 00084857554404 2450",
    "S": "5 574818070514445351401001",
    "T": "6 0868 3038",
    "U": "5 080110405158",
    "V": "6 083068",
    "W": "8 0820466088",
    "X": "5 0058 0850",
    "Y": "6 083468 3430",
    "Z": "5 08580050",
    "0": "5 100107184857514010 1246",
    "1": "4 062820 0040",
    "2": "5 07184857550050",
    "3": "5 07184857554424 445351401001",
    "4": "5 40480252",
    "5": "5 580805455451401001",
    "6": "5 5748180701104051534404",
    "7": "5 085820",
    "8": "5 14050718485755441403011040515344",
    "9": "5 5414050718485751401001",
    "-": "4 0444",
    ".": "1 0010110100",
    ",": "1 121100",
    ":": "1 0111120201 0515160605",
    ";": "1 121100 0515160605",
    "+": "4 0444 2226",
    "±": "4 0545 2327 0141",
    "=": "4 0343 0545",
    "/": "4 0048",
    "(": "2 28060220",
    ")": "2 08262200",
    "[": "2 28080020",
    "]": "2 08282000",
    "<": "4 470441",
    ">": "4 074401",
    "→": "7 0474 567452",
    "←": "7 0474 260422",
    "_": "5 0050",
    "%": "5 0058 0717180807 4050514140",
    "×": "4 0246 0642",
    "*": "4 0246 0642 2227",
    "°": "2 0626280806",
    "Ø": "5 100107184857514010 0058",
    "'": "1 0608",
    '"': "2 0608 2628",
    "!": "1 0308 0001",
    "?": "4 071838474623 2021",
}


def strokes(text: str, height_mm: float) -> list[Line]:
    """Polylines of a line of text, from the origin along +x with its baseline on y = 0.

    text       any characters; those without a glyph become a box
    height_mm  height of capitals [mm], above 0

    Returns polylines of (x, y) [mm], each of at least two points, all inside 0 <= x <= width and 0 <= y <= height.
    """
    scale_mm, x_units = height_mm / CAPITAL_UNITS, 0
    lines = []
    for character in text:
        width, glyph = _glyph(character)
        lines += [[((x_units + x) * scale_mm, y * scale_mm) for x, y in line] for line in glyph]
        x_units += width + GAP_UNITS
    return lines


def text_width_mm(text: str, height_mm: float) -> float:
    """Width of a line of text [mm] at a height of capitals [mm]; 0 for no text."""
    units = sum(_glyph(character)[0] + GAP_UNITS for character in text)
    return max(units - GAP_UNITS, 0) * height_mm / CAPITAL_UNITS


@cache
def _glyph(character: str) -> tuple[int, tuple[tuple[tuple[int, int], ...], ...]]:
    capital = character.upper()
    width, *lines = _GLYPHS.get(capital, _BOX).split()
    return int(width), tuple(tuple((int(line[i]), int(line[i + 1])) for i in range(0, len(line), 2)) for line in lines)
