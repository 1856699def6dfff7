"""Reads a document's tables as their keys are declared, and says everything that is wrong with them at once."""

from __future__ import annotations

import math
import re
from difflib import get_close_matches
from typing import Any

from boomwright.design.document import has_control, is_table, number_text, shown
from boomwright.design.keys import REQUIRED, Key, Table, applies
from boomwright.errors import Fault

MOST_UNKNOWN_KEYS = 20
MOST_KEY_CHARACTERS = 40
_BARE_KEY = re.compile(r"[A-Za-z0-9_-]{1,40}")


def read_table(table: Table, given: object, path: str, faults: list[Fault]) -> dict[str, Any]:
    """Values of a table by key name, sub-tables as dictionaries (None when absent), with every fault added.

    table   the declaration
    given   what the document holds there
    path    key path of the table; empty for the document itself
    faults  grows by every fault found

    A value with a fault stands as its blank (NaN, or an empty text): every comparison with NaN is false, so rules
    between keys stay silent about it and can still judge the rest.
    """
    if not isinstance(given, dict):
        faults.append(Fault(path, f"{shown(given)} is not a table", f"write it as a table: {_heading(table, path)}"))
        given, faults = {}, []
    near = _unknown_keys(table, given, path, faults)
    values: dict[str, Any] = {}
    for key in table.keys:
        values[key.name] = _read_key(key, given, values, (path, near), faults)
    for inner in table.tables:
        values[inner.name] = _read_inner(inner, given, _join(path, inner.name), near, faults)
    return values


def blank(key: Key) -> Any:
    """What stands for a value that could not be read."""
    if key.kind == "numbers":
        return (math.nan,) * key.count
    return math.nan if key.kind in {"number", "whole"} else ""


def _join(path: str, name: str) -> str:
    return f"{path}.{name}" if path else name


def _heading(table: Table, path: str) -> str:
    name = path.partition("[")[0] or table.name
    return f"[[{name}]]" if table.most else f"[{name}]"


def _unknown_keys(table: Table, given: dict[str, Any], path: str, faults: list[Fault]) -> set[str]:
    """Faults for keys that are not declared; returns the keys they were probably meant to be."""
    known = [key.name for key in table.keys] + [inner.name for inner in table.tables]
    unknown = [name for name in given if name not in known]
    meant = set()
    for name in unknown[:MOST_UNKNOWN_KEYS]:
        close = get_close_matches(name, known, n=1) if len(name) <= MOST_KEY_CHARACTERS else []
        hint = f"; did you mean {close[0]}?" if close else ""
        where = name if _BARE_KEY.fullmatch(name) else shown(name)
        fix = f"correct or delete it; the keys here are {', '.join(known)}"
        faults.append(Fault(_join(path, where), f"unknown key{hint}", fix))
        meant.update(close)
    if len(unknown) > MOST_UNKNOWN_KEYS:
        more = len(unknown) - MOST_UNKNOWN_KEYS
        faults.append(Fault(path, f"{more} more unknown keys", "name a file of the right kind"))
    return meant


def _read_key(
    key: Key, given: dict[str, Any], values: dict[str, Any], place: tuple[str, set[str]], faults: list[Fault]
) -> Any:
    path, near = _join(place[0], key.name), place[1]
    deciding = values[key.only.key] if key.only else None
    if key.only and not applies(key, values):
        absent = None if key.default is REQUIRED else key.default
        if key.name in given and given[key.name] != absent and deciding:
            switch = f'{key.only.key} = "{key.only.values[0]}"'
            found = f'has no meaning with {key.only.key} = "{deciding}"'
            faults.append(Fault(path, found, f"leave it out, or set {switch}"))
        return absent
    if key.name not in given:
        if key.default is not REQUIRED:
            return key.default
        if key.name not in near:
            faults.append(Fault(path, "missing", key.fix))
        return blank(key)
    fault = _value_fault(key, given[key.name], path)
    if fault is not None:
        faults.append(fault)
        return blank(key)
    return _value(key, given[key.name])


def _value(key: Key, given: Any) -> Any:
    if key.kind == "number":
        return float(given) + 0.0
    return tuple(float(item) + 0.0 for item in given) if key.kind == "numbers" else given


def _value_fault(key: Key, given: object, path: str) -> Fault | None:
    if key.kind == "text":
        return _text_fault(key, given, path)
    if key.kind == "name":
        return _name_fault(key, given, path)
    if key.kind != "numbers":
        return _number_fault(key, given, path)
    if not isinstance(given, list) or len(given) != key.count:
        count = f" of {len(given)}" if isinstance(given, list) else ""
        return Fault(path, f"{shown(given)}{count} is not {key.noun}", key.fix)
    faults = (_number_fault(key, item, f"{path}[{index}]") for index, item in enumerate(given))
    return next((fault for fault in faults if fault is not None), None)


def _number_fault(key: Key, given: object, path: str) -> Fault | None:
    if isinstance(given, bool) or not isinstance(given, (int, float)):
        return Fault(path, f"{shown(given)} is {_kind_word(given)}not {key.noun}", key.fix)
    if key.kind == "whole" and not isinstance(given, int):
        return Fault(path, f"{number_text(given)} is not a whole number", key.fix)
    endless = isinstance(given, float) and not math.isfinite(given)
    if endless or given <= 0 < key.low or given != key.low == key.high:
        return Fault(path, f"{shown(given)} is not {key.noun}", key.fix)
    if given < key.low:
        fix = key.fix.replace("above 0", f"at least {key.low:g}")
        return Fault(path, f"{shown(given)} is less than {key.low:g}", fix)
    if given > key.high:
        fix = key.fix.replace("above 0", f"at most {key.high:g}")
        return Fault(path, f"{shown(given)} is more than {key.high:g}", fix)
    return None


def _kind_word(given: object) -> str:
    if isinstance(given, str):
        return "text, "
    return "a truth value, " if isinstance(given, bool) else ""


def _text_fault(key: Key, given: object, path: str) -> Fault | None:
    if not isinstance(given, str):
        return Fault(path, f"{shown(given)} is not {key.noun}", key.fix)
    if has_control(given):
        return Fault(path, f"{shown(given)} holds a control character", key.fix)
    if len(given) > key.high:
        return Fault(path, f"{len(given)} characters are more than {key.high:g}", key.fix)
    if key.pattern and not re.fullmatch(key.pattern[0], given):
        return Fault(path, f"{shown(given)} is not {key.noun}", key.fix)
    return None


def _name_fault(key: Key, given: object, path: str) -> Fault | None:
    assert key.names is not None
    known = key.names()
    if isinstance(given, str) and given in known:
        return None
    hint = ""
    if isinstance(given, str) and len(given) <= MOST_KEY_CHARACTERS:
        by_folded = {name.casefold(): name for name in known}
        close = get_close_matches(given.casefold(), by_folded, n=1)
        hint = f"; did you mean {by_folded[close[0]]}?" if close else ""
    return Fault(path, f"{shown(given)} is not {key.noun}{hint}", key.fix)


def _read_inner(table: Table, given: dict[str, Any], path: str, near: set[str], faults: list[Fault]) -> Any:
    if table.name not in given:
        return _read_absent(table, path, near, faults)
    found = given[table.name]
    if table.most:
        return _read_entries(table, found, path, faults)
    if isinstance(found, list):
        faults.append(Fault(path, f"{shown(found)} is not a table", f"write {_heading(table, path)} once"))
        return read_table(table, {}, path, [])
    return read_table(table, found, path, faults)


def _read_absent(table: Table, path: str, near: set[str], faults: list[Fault]) -> Any:
    if table.most:
        return []
    if table.absent == "none":
        return None
    if table.absent == "defaults":
        return read_table(table, {}, path, faults)
    if table.name not in near:
        keys = ", ".join(key.name for key in table.keys if key.default is REQUIRED and key.only is None)
        faults.append(Fault(path, "missing", f"add {_heading(table, path)}, {table.what}, with {keys}"))
    return read_table(table, {}, path, [])


def _read_entries(table: Table, found: object, path: str, faults: list[Fault]) -> list[dict[str, Any]]:
    if not isinstance(found, list) or not all(is_table(item) for item in found):
        fix = f"write {_heading(table, path)} for each, {table.what}"
        faults.append(Fault(path, f"{shown(found)} is not a list of tables", fix))
        return []
    if len(found) > table.most:
        faults.append(Fault(path, f"{len(found)} entries are more than {table.most}", f"at most {table.most} entries"))
        return []
    return [read_table(table, item, f"{path}[{index}]", faults) for index, item in enumerate(found)]
