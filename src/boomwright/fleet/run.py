"""A fleet from table to index: what is up to date is left, the rest is made, whatever happens to one of them.

Beside the variants' folders stands `.fleet/`: a record a variant, and, while a run is under way, the journal of what
was up to date when it began, so that a run that was killed and resumed ends as one that was not.
"""

from __future__ import annotations

import errno
import fcntl
import json
import os
from collections.abc import Callable, Iterator, Sequence
from concurrent.futures import Executor, Future, as_completed
from contextlib import contextmanager
from dataclasses import dataclass
from pathlib import Path

from boomwright.crew import crew
from boomwright.errors import AccessError, Fault, InputFault
from boomwright.fleet.index import write_index
from boomwright.fleet.outcome import (
    Outcome,
    Record,
    make_variant,
    read_record,
    record_of,
    still_holds,
    unchanged,
    write_record,
)
from boomwright.fleet.recipe import Recipe, recipe_of
from boomwright.fleet.table import Variant, load_table
from boomwright.folder import OUTPUTS

PRELOAD = ("cadquery", "boomwright.pipeline")
KEPT = ".fleet"
JOURNAL = "journal.json"
Progress = Callable[[int, int, str], None]
"""Called with the number of variants done, of all, and the name of the one just done (empty at the beginning)."""


@dataclass(frozen=True)
class Fleet:
    """What a run left: the folder and every variant's outcome, in the table's order."""

    folder: Path
    outcomes: tuple[Outcome, ...]

    @property
    def failed(self) -> tuple[Outcome, ...]:
        """The variants that failed."""
        return tuple(one for one in self.outcomes if one.state == "failed")


def run_fleet(
    table: Path,
    shop: Path | None = None,
    out: Path | None = None,
    *,
    executor: Executor | None = None,
    jobs: int = 1,
    progress: Progress = lambda done, of, name: None,
) -> Fleet:
    """Make every variant of a table.

    table     the table file
    shop      the shop of every variant without its own, None = the built-in shop
    out       the fleet's folder, None = outputs/ and the table's name
    executor  who makes the variants; None = `jobs` processes of this machine. Others must see `out` under its path.
    progress  called whenever a variant is done

    Raises InputFault for a table that cannot be used, AccessError for a disk that cannot.
    """
    variants = load_table(table)
    folder = (out if out is not None else OUTPUTS / table.stem).absolute()
    with _claimed(folder):
        recipes, outcomes = _read(variants, shop)
        records = {name: read_record(folder / KEPT / f"{name}.json") for name in recipes}
        fresh = [name for name, recipe in recipes.items() if still_holds(records[name], recipe, folder)]
        before = _journal(folder, fresh, recipes)
        for name in fresh:
            record = records[name]
            assert record is not None
            outcomes[name] = unchanged(record.outcome) if before.get(name) == record.key else record.outcome
        progress(len(outcomes), len(variants), "")
        stale = [recipe for name, recipe in recipes.items() if name not in outcomes]
        for outcome in _made(stale, folder, executor, jobs):
            outcomes[outcome.name] = outcome
            progress(len(outcomes), len(variants), outcome.name)
        ordered = tuple(outcomes[variant.name] for variant in variants)
        write_index(ordered, table.stem, folder)
        (folder / KEPT / JOURNAL).unlink()
    return Fleet(folder, ordered)


def _read(variants: Sequence[Variant], shop: Path | None) -> tuple[dict[str, Recipe], dict[str, Outcome]]:
    """Every variant's recipe; one whose files cannot be read has failed."""
    recipes, outcomes = dict[str, Recipe](), dict[str, Outcome]()
    for variant in variants:
        try:
            recipes[variant.name] = recipe_of(variant, shop)
        except (InputFault, AccessError) as error:
            outcomes[variant.name] = Outcome(variant.name, "failed", str(error))
    return recipes, outcomes


def _journal(folder: Path, fresh: Sequence[str], recipes: dict[str, Recipe]) -> dict[str, str]:
    """Keys of what was up to date when the run began that this one takes up; begins a journal where there is none."""
    path = folder / KEPT / JOURNAL
    try:
        return {str(name): str(key) for name, key in json.loads(path.read_text("utf-8")).items()}
    except (OSError, ValueError, AttributeError):
        found = {name: recipes[name].key for name in fresh}
    partial = path.with_suffix(".partial")
    partial.write_text(json.dumps(found, indent=1) + "\n", "utf-8")
    partial.replace(path)
    return found


def _made(recipes: Sequence[Recipe], folder: Path, executor: Executor | None, jobs: int) -> Iterator[Outcome]:
    """Make variants, each recorded as soon as it is done."""
    if not recipes:
        return
    if executor is None:
        with crew(min(jobs, len(recipes)), PRELOAD) as own:
            yield from _made(recipes, folder, own, jobs)
        return
    waiting = dict[Future[Outcome], Recipe]()
    for recipe in recipes:
        # A record from before would vouch for a folder that is about to change.
        (folder / KEPT / f"{recipe.variant.name}.json").unlink(missing_ok=True)
        waiting[executor.submit(make_variant, recipe, folder)] = recipe
    for future in as_completed(waiting):
        recipe, record = waiting[future], None
        try:
            outcome = future.result()
            record = record_of(recipe, outcome, folder)
        except Exception as error:
            # Whatever it was, it is this variant's alone; without a record the next run tries again.
            outcome = Outcome(recipe.variant.name, "failed", f"{type(error).__name__}: {error}")
        if record is not None:
            write_record(record, folder / KEPT / f"{outcome.name}.json")
        yield outcome


@contextmanager
def _claimed(folder: Path) -> Iterator[None]:
    """The fleet's folder for this run alone. Raises InputFault, AccessError."""
    if folder.exists() and not folder.is_dir():
        raise InputFault([Fault("--out", f"{folder} is not a folder", "name a folder, new or of an earlier fleet")])
    if folder.is_dir() and any(folder.iterdir()) and not (folder / KEPT).is_dir():
        found = f"{folder} holds files that no fleet has written"
        raise InputFault([Fault("--out", found, "name a folder that is new, empty, or of an earlier fleet")])
    try:
        (folder / KEPT).mkdir(parents=True, exist_ok=True)
        lock = os.open(folder / KEPT, os.O_RDONLY | os.O_DIRECTORY)
        try:
            fcntl.flock(lock, fcntl.LOCK_EX | fcntl.LOCK_NB)
            yield
        finally:
            os.close(lock)
    except AccessError:
        raise
    except BlockingIOError as error:
        raise AccessError(errno.EBUSY, f"another run is making {folder}: wait until it has ended") from error
    except OSError as error:
        raise AccessError(error.errno, f"cannot write {error.filename or folder}: {error.strerror or error}") from error


__all__ = ["Fleet", "Record", "run_fleet"]
