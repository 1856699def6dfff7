"""Every key of both files, by its declaration: bounds hold at both ends, and the models have a field for each."""

from __future__ import annotations

import math
from collections.abc import Iterator

import pytest

from boomwright.design.keys import LEAST_MM, REQUIRED, Key, Table
from boomwright.design.reader import read_table
from boomwright.design.tomlfile import DESIGN
from boomwright.errors import Fault
from boomwright.shop.tomlfile import SHOP


def every_table(table: Table, path: str = "") -> Iterator[tuple[str, Table]]:
    """A table and all tables in it, with their paths."""
    yield path or table.name, table
    for inner in table.tables:
        yield from every_table(inner, f"{path}.{inner.name}".strip("."))


ALL = [*every_table(DESIGN), *every_table(SHOP)]
KEYS = [pytest.param(key, id=f"{path}.{key.name}") for path, table in ALL for key in table.keys]


def faults_of(key: Key, value: object) -> list[Fault]:
    """What is said of a value, the key alone in its table."""
    alone = Key(**{**{name: getattr(key, name) for name in key.__dataclass_fields__}, "only": None})
    faults: list[Fault] = []
    read_table(Table("table", "a table", (alone,)), {key.name: value}, "table", faults)
    return faults


@pytest.mark.parametrize("key", KEYS)
def test_a_key_takes_its_bounds_and_nothing_beyond(key: Key) -> None:
    if key.kind in {"number", "numbers"}:
        wrap = (lambda value: [value] * key.count) if key.kind == "numbers" else (lambda value: value)
        assert math.isfinite(key.low)
        assert math.isfinite(key.high)
        for bound, beyond in ((key.low, -math.inf), (key.high, math.inf)):
            assert faults_of(key, wrap(bound)) == []
            assert [fault.path.partition("[")[0] for fault in faults_of(key, wrap(math.nextafter(bound, beyond)))] == [
                f"table.{key.name}"
            ]
        for value in (math.nan, math.inf, -math.inf, True, "1", None, {}, [[]]):
            assert len(faults_of(key, wrap(value))) == 1
    elif key.kind == "whole":
        assert faults_of(key, int(key.low)) == faults_of(key, int(key.high)) == []
        for wrong in (int(key.low) - 1, int(key.high) + 1, float(key.low), True, "1"):
            assert len(faults_of(key, wrong)) == 1
    elif key.kind == "text":
        assert faults_of(key, "a" * int(key.high)) == []
        for text in ("a" * (int(key.high) + 1), "a\x00b", "a\x1bb", "a\u2028b", 5, True, ["a"]):
            assert len(faults_of(key, text)) == 1
    else:
        assert key.names is not None
        for name in key.names():
            assert faults_of(key, name) == []
            assert len(faults_of(key, name + "x")) == 1
        assert len(faults_of(key, 5)) == 1


@pytest.mark.parametrize("key", KEYS)
def test_a_default_is_a_value_its_own_key_would_take(key: Key) -> None:
    if key.default is not REQUIRED and key.default is not None:
        default = list(key.default) if isinstance(key.default, tuple) else key.default
        assert faults_of(key, default) == []


@pytest.mark.parametrize("key", KEYS)
def test_a_key_with_a_unit_says_it_in_its_name(key: Key) -> None:
    endings = {
        "mm": "_mm",
        "MHz": "_mhz",
        "ohm": "_ohm",
        "deg": "_deg",
        "%": "_percent",
        "W": "_w",
        "g/cm3": "_g_cm3",
        "dBi": "_dbi_min",
        "dB": "_db_min",
    }
    assert key.name.endswith(endings[key.unit]) if key.unit else not key.name.endswith("_mm")


@pytest.mark.parametrize(("path", "table"), ALL, ids=[path for path, _ in ALL])
def test_a_table_names_no_key_twice_and_decides_before_it_depends(path: str, table: Table) -> None:
    names = [key.name for key in table.keys]
    assert len(set(names)) == len(names), path
    for index, key in enumerate(table.keys):
        assert key.only is None or key.only.key in names[:index]


def test_a_length_must_be_above_zero() -> None:
    lengths = [key for _, table in ALL for key in table.keys if key.noun in {"a diameter", "a width", "a spacing"}]
    assert lengths
    assert all(key.low == LEAST_MM for key in lengths)
