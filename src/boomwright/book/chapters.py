"""The chapters in the order in which they are read and worked through."""

from __future__ import annotations

from collections.abc import Callable

from boomwright.book import (
    boom,
    checked,
    drawings,
    driven,
    exposure,
    feed,
    gluing,
    jigs,
    mounting,
    overview,
    potting,
    rods,
    shopping,
    testing,
)
from boomwright.book.content import Chapter, Topic
from boomwright.book.run import Run

CHAPTERS: tuple[Callable[[Run], Chapter], ...] = (
    overview.chapter,
    shopping.chapter,
    jigs.chapter,
    rods.chapter,
    boom.chapter,
    gluing.chapter,
    driven.chapter,
    feed.chapter,
    potting.chapter,
    testing.chapter,
    mounting.chapter,
    exposure.chapter,
    drawings.chapter,
    checked.chapter,
)


def write_chapters(run: Run) -> tuple[Chapter, ...]:
    """Every chapter of a run's book."""
    return tuple(chapter(run) for chapter in CHAPTERS)


def needed_topics(run: Run) -> frozenset[Topic]:
    """What a book of this run must caution against."""
    topics = set(Topic)
    if not run.is_glued:
        topics -= {Topic.ADHESIVE}
    if not run.has_resin:
        topics -= {Topic.RESIN}
    if not run.has("spacing-comb", "sheet-cradle") and not any(
        path.startswith("laser/") for part in run.manifest.parts for path in run.files(part)
    ):
        topics -= {Topic.LASER}
    return frozenset(topics)
