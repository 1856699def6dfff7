"""The design file's JSON Schema, for editors that check and complete while one types."""

from __future__ import annotations

import math
from typing import Any

from boomwright.design.keys import REQUIRED, Key, Table
from boomwright.design.tomlfile import DESIGN

DIALECT = "https://json-schema.org/draft/2020-12/schema"


def design_schema() -> dict[str, Any]:
    """JSON Schema (2020-12) of the design file: every key with type, bounds, unit and description.

    Rules between keys (conductors that touch, a loop that meets the boom) are beyond a schema and are left to the
    reader of the file.
    """
    return {"$schema": DIALECT, "title": "boomwright design", **table_schema(DESIGN)}


def table_schema(table: Table) -> dict[str, Any]:
    """Schema of one table, its sub-tables included."""
    properties = {key.name: _key_schema(key) for key in table.keys}
    required = [key.name for key in table.keys if key.default is REQUIRED and key.only is None]
    for inner in table.tables:
        entry = table_schema(inner)
        properties[inner.name] = {"type": "array", "maxItems": inner.most, "items": entry} if inner.most else entry
        required += [inner.name] if inner.absent == "fault" else []
    schema: dict[str, Any] = {
        "type": "object",
        "description": table.what,
        "properties": properties,
        "required": required,
        "additionalProperties": False,
    }
    conditions = [_condition(key) for key in table.keys if key.only is not None]
    return schema | ({"allOf": conditions} if conditions else {})


def _key_schema(key: Key) -> dict[str, Any]:
    schema: dict[str, Any] = {"description": key.what + (f" [{key.unit}]" if key.unit else "")}
    if key.kind == "text":
        schema |= {"type": "string", "maxLength": int(key.high)}
        schema |= {"pattern": f"^(?:{key.pattern[0]})$"} if key.pattern else {}
    elif key.kind == "name":
        assert key.names is not None
        schema |= {"type": "string", "enum": list(key.names())}
    elif key.kind == "numbers":
        schema |= {"type": "array", "minItems": key.count, "maxItems": key.count, "items": _number_schema(key)}
    else:
        schema |= _number_schema(key)
    if key.default is not REQUIRED and key.default is not None:
        schema["default"] = list(key.default) if isinstance(key.default, tuple) else key.default
    return schema


def _number_schema(key: Key) -> dict[str, Any]:
    schema: dict[str, Any] = {"type": "integer" if key.kind == "whole" else "number"}
    schema |= {"minimum": key.low} if math.isfinite(key.low) else {}
    return schema | ({"maximum": key.high} if math.isfinite(key.high) else {})


def _condition(key: Key) -> dict[str, Any]:
    """A key is required, allowed, or (given a default) only allowed at its default, as another key's value has it."""
    assert key.only is not None
    deciding = {"properties": {key.only.key: {"enum": list(key.only.values)}}, "required": [key.only.key]}
    if key.default is REQUIRED or key.default is None:
        otherwise: dict[str, Any] = {"properties": {key.name: False}}
    else:
        otherwise = {"properties": {key.name: {"const": key.default}}}
    then = {"then": {"required": [key.name]}} if key.default is REQUIRED else {}
    return {"if": deciding, **then, "else": otherwise}
