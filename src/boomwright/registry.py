"""The catalogue: named entries that refuse duplicates and, for an unknown name, list the known ones."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from difflib import get_close_matches
from typing import Generic, TypeVar

from boomwright.errors import CatalogueError

Entry = TypeVar("Entry")


class Catalogue(Generic[Entry]):
    """Entries by name, in the order they were entered.

    kind   what an entry is, in one word, for messages ("part")
    fill   called once, before the first look-up, to enter what belongs there: importing a catalogue costs nothing
    """

    def __init__(self, kind: str, fill: Callable[[Catalogue[Entry]], None] | None = None) -> None:
        self.kind = kind
        self._fill = fill
        self._entries: dict[str, Entry] = {}

    def _ready(self) -> dict[str, Entry]:
        if self._fill is not None:
            fill, self._fill = self._fill, None
            fill(self)
        return self._entries

    def enter(self, name: str, entry: Entry) -> Entry:
        """Enter one more; raises CatalogueError when the name is taken."""
        if name in self._ready():
            raise CatalogueError(f"{self.kind} {name!r} is entered twice")
        self._entries[name] = entry
        return entry

    def remove(self, name: str) -> None:
        """Take an entry out again; raises CatalogueError when the name is unknown."""
        self[name]
        del self._entries[name]

    def __getitem__(self, name: str) -> Entry:
        entries = self._ready()
        if name not in entries:
            near = get_close_matches(name, entries, n=1)
            hint = f"; did you mean {near[0]}?" if near else ""
            raise CatalogueError(f"unknown {self.kind} {name!r}{hint} (known: {', '.join(entries)})")
        return entries[name]

    def __contains__(self, name: object) -> bool:
        return name in self._ready()

    def __iter__(self) -> Iterator[Entry]:
        return iter(self._ready().values())

    def names(self) -> tuple[str, ...]:
        """The names, in the order they were entered."""
        return tuple(self._ready())
