"""Every source key in a docstring or comment is resolved in DEVELOPERS.md."""

import re
from pathlib import Path

ROOT = Path(__file__).resolve().parents[1]
KEY = re.compile(r"\[((?:ISO|BS|ASTM|DIN|IEC) [A-Z]?[0-9][0-9-]*|[A-Z][A-Za-z]+(?:19|20)[0-9]{2}|Touchstone[0-9.]+)\]")


def keys_in(text: str) -> set[str]:
    return set(KEY.findall(text))


def test_every_source_key_is_listed() -> None:
    listed = keys_in((ROOT / "DEVELOPERS.md").read_text("utf-8"))
    used = {key: path for path in sorted((ROOT / "src").rglob("*.py")) for key in keys_in(path.read_text("utf-8"))}
    assert used
    assert {key: path.name for key, path in used.items() if key not in listed} == {}
