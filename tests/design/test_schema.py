"""The design file's JSON Schema accepts what the reader accepts and refuses what a schema can refuse."""

from __future__ import annotations

import json
import re
import tomllib
from pathlib import Path
from typing import Any

import pytest
from bases import BASES

from boomwright.design.schema import DIALECT, design_schema

EXAMPLES = Path(__file__).parents[2] / "examples"
TYPES = {
    "object": dict,
    "array": list,
    "string": str,
    "number": (int, float),
    "integer": int,
}


def allows(schema: Any, value: Any) -> bool:
    """Whether a value passes: the handful of keywords that the schema uses, and an error for any other."""
    if schema is False:
        return False
    checks = {
        "type": lambda want: isinstance(value, TYPES[want]) and not isinstance(value, bool),
        "enum": lambda want: value in want,
        "const": lambda want: value == want,
        "minimum": lambda want: value >= want,
        "maximum": lambda want: value <= want,
        "maxLength": lambda want: len(value) <= want,
        "pattern": lambda want: re.search(want, value) is not None,
        "minItems": lambda want: len(value) >= want,
        "maxItems": lambda want: len(value) <= want,
        "items": lambda want: all(allows(want, item) for item in value),
        "required": lambda want: all(key in value for key in want),
        "properties": lambda want: all(allows(want[key], value[key]) for key in want if key in value),
        "additionalProperties": lambda _: all(key in schema["properties"] for key in value),
        "allOf": lambda want: all(allows(inner, value) for inner in want),
        "if": lambda want: allows(schema.get("then", {}) if allows(want, value) else schema.get("else", {}), value),
    }
    silent = {"$schema", "title", "description", "default", "then", "else"}
    return all(checks[word](want) for word, want in schema.items() if word not in silent)


def test_the_schema_is_plain_json_of_the_2020_dialect() -> None:
    schema = design_schema()
    assert json.loads(json.dumps(schema, allow_nan=False)) == schema
    assert schema["$schema"] == DIALECT == "https://json-schema.org/draft/2020-12/schema"


def test_every_key_of_the_design_file_is_described_with_its_bounds() -> None:
    rod = design_schema()["properties"]["rod"]
    assert rod["maxItems"] == 64
    assert rod["items"]["required"] == ["role", "at_mm", "length_mm", "diameter_mm", "material"]
    assert rod["items"]["properties"]["length_mm"] == {
        "description": "the tip-to-tip length [mm]",
        "type": "number",
        "minimum": 0.001,
        "maximum": 100_000.0,
    }
    assert design_schema()["properties"]["feed"]["properties"]["system_ohm"]["default"] == 50.0


@pytest.mark.parametrize("text", [*BASES.values(), *(p.read_text() for p in sorted(EXAMPLES.glob("*-*.toml")))])
def test_sound_designs_pass_the_schema(text: str) -> None:
    assert allows(design_schema(), tomllib.loads(text))


@pytest.mark.parametrize(
    ("base", "old", "new"),
    [
        ("folded", "length_mm = 148.0", "length_mm = -158"),
        ("folded", "length_mm = 148.0", "lenght_mm = 148.0"),
        ("folded", "length_mm = 148.0", ""),
        ("folded", "length_mm = 148.0", "length_mm = true"),
        ("folded", 'role = "director"', 'role = "directer"'),
        ("folded", 'name = "beam"', 'name = "../beam"'),
        ("folded", 'name = "beam"', f'name = "{"b" * 65}"'),
        ("folded", "schema = 1", "schema = 2"),
        ("folded", "spacing_mm = 12.0", ""),
        ("folded", 'plane = "flat"', 'plane = "flat"\nperimeter_mm = 300.0'),
        ("folded", "[driven]", "[fed]"),
        ("folded", "[boom]", "[seat]\nsleeve_mm = 0.5\n[boom]"),
        ("straight", "[driven]", "[[driven]]"),
        ("loop", 'shape = "square"', ""),
        ("dipole", "low_mhz = 863.0", "low_mhz = 9.9"),
    ],
)
def test_broken_designs_fail_the_schema(base: str, old: str, new: str) -> None:
    assert old in BASES[base]
    assert not allows(design_schema(), tomllib.loads(BASES[base].replace(old, new, 1)))
