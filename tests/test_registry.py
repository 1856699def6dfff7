"""The catalogue: refuses duplicates, names what it knows, costs nothing until it is asked."""

import pytest

from boomwright.errors import CatalogueError
from boomwright.registry import Catalogue


def test_entries_come_back_in_order() -> None:
    catalogue: Catalogue[int] = Catalogue("number")
    catalogue.enter("two", 2)
    catalogue.enter("one", 1)
    assert list(catalogue) == [2, 1]
    assert catalogue.names() == ("two", "one")
    assert "one" in catalogue


def test_a_name_is_taken_once() -> None:
    catalogue: Catalogue[int] = Catalogue("number")
    catalogue.enter("one", 1)
    with pytest.raises(CatalogueError, match="number 'one' is entered twice"):
        catalogue.enter("one", 2)


def test_an_unknown_name_lists_the_known_ones() -> None:
    catalogue: Catalogue[int] = Catalogue("number")
    catalogue.enter("boom", 1)
    with pytest.raises(CatalogueError, match=r"unknown number 'bom'; did you mean boom\? \(known: boom\)"):
        catalogue["bom"]


def test_it_is_filled_on_first_use_and_once() -> None:
    calls: list[int] = []

    def fill(catalogue: Catalogue[int]) -> None:
        calls.append(1)
        catalogue.enter("one", 1)

    catalogue = Catalogue("number", fill)
    assert calls == []
    assert catalogue["one"] == 1
    assert list(catalogue) == [1]
    assert calls == [1]


def test_an_entry_can_be_taken_out() -> None:
    catalogue: Catalogue[int] = Catalogue("number")
    catalogue.enter("one", 1)
    catalogue.remove("one")
    assert "one" not in catalogue
    with pytest.raises(CatalogueError):
        catalogue.remove("one")
