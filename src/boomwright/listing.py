"""What the program knows, as text for a terminal."""

from __future__ import annotations

import json
from collections.abc import Callable, Sequence
from textwrap import wrap

from boomwright.data.tables import cables, materials
from boomwright.design.schema import design_schema
from boomwright.parts.catalogue import BOOK, BOOK_PURPOSE, PARTS
from boomwright.parts.coupon import COUPONS
from boomwright.shop.profile import Shop
from boomwright.shop.tomlfile import write_shop

COLUMNS = 100
Span = tuple[float, float] | None


def listing(subject: str) -> str:
    """The listing of one subject (`parts`, `materials`, `cables`, `shop`, `schema`), without a closing newline."""
    return _LISTINGS[subject]()


def _parts() -> str:
    """A few lines a part, no wider than a terminal; then the calibration pieces, which another command makes."""
    lines = list[str]()
    for part in PARTS:
        lines += _told(f"{part.name} ({', '.join(part.processes)})", part.purpose)
        lines += _told("", f"left out when: {part.left_out_when}")
    lines += _told(f"{BOOK} (book)", BOOK_PURPOSE)
    lines += _told("", "left out when: --only names other parts and not it")
    lines += ["", "Calibration pieces, by boomwright coupon:"]
    for piece in COUPONS:
        lines += _told(f"{piece.name} ({', '.join(piece.processes)})", piece.purpose)
    return "\n".join(lines)


def _told(head: str, words: str) -> list[str]:
    """A head, and words wrapped under it; without a head the words alone."""
    return [*([head] if head else []), *wrap(words, COLUMNS, initial_indent="    ", subsequent_indent="        ")]


def _materials() -> str:
    rows = [
        (m.name, _span(m.permittivity), _span(m.loss_tangent), _span(m.density_g_cm3), m.source) for m in materials()
    ]
    return _table(("material", "permittivity", "loss tangent", "density g/cm3", "source"), rows)


def _cables() -> str:
    rows = [
        (c.name, f"{c.impedance_ohm:g}", f"{c.outer_diameter_mm:g}", f"{c.velocity_factor:g}", c.source)
        for c in cables()
    ]
    return _table(("cable", "ohm", "outer mm", "velocity factor", "source"), rows)


def _shop() -> str:
    return write_shop(Shop()).rstrip("\n")


def _schema() -> str:
    return json.dumps(design_schema(), indent=1)


def _span(span: Span) -> str:
    if span is None:
        return "-"
    low, high = span
    return f"{low:g}" if low == high else f"{low:g} to {high:g}"


def _table(head: Sequence[str], rows: Sequence[Sequence[str]]) -> str:
    widths = [max(len(row[i]) for row in [head, *rows]) for i in range(len(head))]
    lines = [
        "  ".join(cell.ljust(width) for cell, width in zip(row, widths, strict=True)).rstrip() for row in [head, *rows]
    ]
    return "\n".join(lines)


_LISTINGS: dict[str, Callable[[], str]] = {
    "parts": _parts,
    "materials": _materials,
    "cables": _cables,
    "shop": _shop,
    "schema": _schema,
}
