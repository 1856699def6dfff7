"""A TOML document: bytes on disk to a plain dictionary, and values back to TOML text. Knows no key."""

from __future__ import annotations

import errno
import re
import tomllib
import unicodedata
from collections.abc import Mapping
from datetime import date, datetime, time
from pathlib import Path
from typing import Any

from boomwright.errors import AccessError, Fault, InputFault

MOST_BYTES = 1 << 20
MOST_DOTS_IN_A_LINE = 300
SHOWN_CHARACTERS = 40
_PLACE = re.compile(r" \(at (?:line (\d+), column (\d+)|end of document)\)$")
_ABSENT = {errno.ENOENT, errno.ENOTDIR, errno.ENAMETOOLONG, errno.ELOOP}
_TWICE = ("Cannot overwrite a value", "Cannot declare", "Cannot mutate", "Duplicate inline table key")


def read_text(path: Path) -> str:
    """Text of a file the user named.

    path  the file; at most 1 MiB of UTF-8, with or without a byte order mark

    Raises InputFault when there is no such file, it is too large or is not text; AccessError when it cannot be read.
    """
    file = escaped(str(path))
    try:
        with path.open("rb") as stream:
            content = stream.read(MOST_BYTES + 1)
    except IsADirectoryError:
        raise InputFault([Fault("", "is a folder", "name a file", file)]) from None
    except (OSError, ValueError) as error:
        if isinstance(error, ValueError) or error.errno in _ABSENT:
            raise InputFault([Fault("", "no such file", "check the path and the name", file)]) from None
        raise AccessError(f"{file}: cannot be read: {error.strerror}") from error
    if len(content) > MOST_BYTES:
        raise InputFault([_too_large(file)])
    try:
        return content.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        line = content.count(b"\n", 0, error.start) + 1
        raise InputFault([Fault(f"line {line}", "is not UTF-8 text", "save the file as UTF-8 text", file)]) from None


def parse(text: str, file: str) -> dict[str, Any]:
    """The document in a TOML text; `file` names it in faults. Raises InputFault with the line and the column."""
    if len(text.encode("utf-8", "surrogatepass")) > MOST_BYTES:
        raise InputFault([_too_large(file)])
    _refuse_deep_keys(text, file)
    try:
        return tomllib.loads(text)
    except tomllib.TOMLDecodeError as error:
        raise InputFault([_syntax_fault(str(error), text, file)]) from None
    except RecursionError:
        raise InputFault([Fault("", "is nested too deeply", "keep tables and lists flat", file)]) from None
    except ValueError:
        raise InputFault([_endless_number_fault(text, file)]) from None


def _too_large(file: str) -> Fault:
    return Fault("", "larger than 1 MiB", "name the right file; a real one has a few kilobytes", file)


def _endless_number_fault(text: str, file: str) -> Fault:
    """The one thing the parser passes on undecided: a whole number of more digits than Python reads."""
    longest = max(re.finditer(r"[0-9_]+", text), key=lambda found: len(found[0]))
    line = text.count("\n", 0, longest.start()) + 1
    return Fault(f"line {line}", f"a number of {len(longest[0])} digits", "give a number of a few digits", file)


def _refuse_deep_keys(text: str, file: str) -> None:
    """The parser's time grows with the square of a dotted key's length, so absurd ones never reach it."""
    for number, line in enumerate(text.split("\n"), start=1):
        if line.count(".") > MOST_DOTS_IN_A_LINE and not line.lstrip().startswith("#"):
            found = f"more than {MOST_DOTS_IN_A_LINE} dots in a line"
            raise InputFault([Fault(f"line {number}", found, "write one key a line", file)])


def _syntax_fault(message: str, text: str, file: str) -> Fault:
    place = _PLACE.search(message)
    what = escaped(_PLACE.sub("", message))
    if place is None or place[1] is None:
        lines = text.split("\n")
        where = f"line {len(lines)}, column {len(lines[-1]) + 1}"
    else:
        where = f"line {place[1]}, column {place[2]}"
    if what.startswith(_TWICE):
        return Fault(where, "a key or table is given twice", "keep one of them", file)
    return Fault(where, f"is not TOML: {what}", "correct the line; texts stand in quotes, numbers without", file)


def escaped(text: str) -> str:
    """Text with every character that could move a cursor or hide something written as its escape."""
    return "".join(f"\\u{ord(c):04x}" if _hidden(c) else c for c in text)


def has_control(text: str) -> bool:
    """Whether a text holds control characters or line separators."""
    return any(unicodedata.category(c) in {"Cc", "Cs", "Zl", "Zp"} for c in text)


def _hidden(character: str) -> bool:
    return unicodedata.category(character) in {"Cc", "Cf", "Cs", "Co", "Cn", "Zl", "Zp"}


def shown(value: object) -> str:
    """A value as a message shows it: short, and harmless on a terminal."""
    if isinstance(value, str):
        short = value if len(value) <= SHOWN_CHARACTERS else value[:SHOWN_CHARACTERS] + "..."
        return f'"{escaped(short)}"'
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, int):
        return str(value) if value.bit_length() <= 128 else "a number beyond all bounds"
    if isinstance(value, float):
        return number_text(value).removesuffix(".0")
    if isinstance(value, (datetime, date, time)):
        return value.isoformat()
    return "a list" if isinstance(value, list) else "a table"


def number_text(value: float) -> str:
    """A number in the shortest digits that read back exactly."""
    return repr(value + 0.0)


def value_text(value: object) -> str:
    """A value in TOML; raises TypeError for what a document of ours never holds."""
    if isinstance(value, bool) or value is None:
        raise TypeError(f"no TOML for {value!r}")
    if isinstance(value, int):
        return str(value)
    if isinstance(value, float):
        return number_text(value)
    if isinstance(value, str):
        return f'"{"".join(_in_quotes(c) for c in value)}"'
    if isinstance(value, tuple):
        return f"[{', '.join(value_text(item) for item in value)}]"
    raise TypeError(f"no TOML for {value!r}")


def _in_quotes(character: str) -> str:
    if character in '"\\':
        return f"\\{character}"
    return f"\\u{ord(character):04X}" if has_control(character) else character


def is_table(value: object) -> bool:
    """Whether a document's value is a table."""
    return isinstance(value, Mapping)
