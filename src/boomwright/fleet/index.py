"""What compares the variants of a fleet: a page to look at, a table to calculate with, a document for scripts."""

from __future__ import annotations

import csv
import io
import json
from collections.abc import Callable, Sequence
from importlib.resources import files
from pathlib import Path

from boomwright.fleet.outcome import Outcome

PAGE, TABLE, DOCUMENT = "index.html", "fleet.csv", "fleet.json"
BOOK = "build-book.html"
Value = str | float | int | bool | None

COLUMNS: tuple[tuple[str, Callable[[Outcome], Value]], ...] = (
    ("name", lambda one: one.name),
    ("state", lambda one: one.state),
    ("reason", lambda one: one.reason),
    ("gain_dbi", lambda one: one.gain_dbi),
    ("vswr_max", lambda one: one.vswr_max),
    ("front_to_back_db", lambda one: one.front_to_back_db),
    ("mass_g", lambda one: one.mass_g),
    ("print_h_least", lambda one: one.print_h[0] if one.print_h else None),
    ("print_h_most", lambda one: one.print_h[1] if one.print_h else None),
    ("files", lambda one: one.files),
    ("audit_ok", lambda one: one.audit_ok),
)


def write_index(outcomes: Sequence[Outcome], title: str, folder: Path) -> None:
    """Write page, table and document into the fleet's folder, each whole or not at all."""
    document = {"variants": [one.as_json() for one in outcomes]}
    _write(folder / DOCUMENT, json.dumps(document, indent=1, ensure_ascii=True, allow_nan=False) + "\n")
    _write(folder / TABLE, _table(outcomes))
    _write(folder / PAGE, _page(outcomes, title, folder))


def _write(path: Path, text: str) -> None:
    partial = path.with_name(f".{path.name}.partial")
    partial.write_text(text, "utf-8", newline="\n")
    partial.replace(path)


def _table(outcomes: Sequence[Outcome]) -> str:
    stream = io.StringIO()
    writer = csv.writer(stream, lineterminator="\n")
    writer.writerow([name for name, _ in COLUMNS])
    for one in outcomes:
        writer.writerow([_cell(value(one)) for _, value in COLUMNS])
    return stream.getvalue()


def _cell(value: Value) -> Value:
    if value is None:
        return ""
    return ("yes" if value else "no") if isinstance(value, bool) else value


def _page(outcomes: Sequence[Outcome], title: str, folder: Path) -> str:
    import jinja2

    environment = jinja2.Environment(autoescape=True, undefined=jinja2.StrictUndefined, trim_blocks=True)
    environment.filters["places"] = _places
    template = environment.from_string(files("boomwright.fleet").joinpath("page.html").read_text("utf-8"))
    best = max([one.gain_dbi for one in outcomes if one.gain_dbi is not None], default=1.0)
    doors = {one.name: _door(folder, one) for one in outcomes}
    return template.render(title=title, outcomes=outcomes, best_dbi=max(best, 1e-9), doors=doors)


def _door(folder: Path, one: Outcome) -> str:
    """What a click on a variant opens: its book, else its folder; empty where nothing was made."""
    if (folder / one.name / BOOK).is_file():
        return f"{one.name}/{BOOK}"
    return f"{one.name}/" if one.files else ""


def _places(value: float | None, digits: int) -> str:
    return "–" if value is None else f"{value:.{digits}f}"
