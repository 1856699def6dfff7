"""A model back into TOML text, by the same declaration of keys that reads it."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from boomwright.design.document import value_text
from boomwright.design.keys import Table, applies


def table_text(table: Table, model: object, fixed: Mapping[str, Any]) -> str:
    """A whole document: the model's value for every key that is set and means something.

    table  the declaration; key names are the model's field names
    model  the value that is written
    fixed  values of keys that the model does not hold, as `schema`
    """
    return "\n".join(_lines(table, model, fixed, "")).strip("\n") + "\n"


def _lines(table: Table, model: object, fixed: Mapping[str, Any], path: str) -> list[str]:
    values = {key.name: fixed[key.name] if key.name in fixed else getattr(model, key.name) for key in table.keys}
    written = [key for key in table.keys if values[key.name] is not None and applies(key, values)]
    lines = [f"{key.name} = {value_text(values[key.name])}" for key in written]
    for inner in table.tables:
        name = f"{path}.{inner.name}" if path else inner.name
        value = getattr(model, inner.model_field)
        if inner.most:
            for entry in value:
                lines += ["", f"[[{name}]]", *_lines(inner, entry, {}, name)]
        elif value is not None:
            lines += ["", f"[{name}]", *_lines(inner, value, {}, name)]
    return lines
