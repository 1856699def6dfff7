"""What a chapter is made of: blocks of words, figures and numbers, without a thought for the page."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from enum import StrEnum


class Topic(StrEnum):
    """What a caution is about."""

    ADHESIVE = "adhesive fumes"
    SOLDER = "solder fumes"
    DUST = "dust"
    ROD_ENDS = "rod ends"
    LASER = "laser"
    RESIN = "hot resin"
    EXPOSURE = "radio exposure"
    LICENCE = "licence"
    OVERHEAD_LINES = "overhead lines"
    LIGHTNING = "lightning"
    WIND = "wind"
    STRUCTURE = "structure"


class Picture(StrEnum):
    """The pictures that chapters refer to."""

    ANTENNA = "antenna"
    BOOM_DRAWING = "drawing-boom"
    ROD_TABLE = "drawing-rods"
    DRIVEN_DRAWING = "drawing-driven"
    CRADLE_DRAWING = "drawing-cradle"
    MOULD_DRAWING = "drawing-mould"
    FORMER_DRAWING = "drawing-former"
    CRADLE = "cradle"
    CRADLE_RODS = "cradle-rods"
    CRADLE_BOOM = "cradle-boom"
    CRADLE_DRIVEN = "cradle-driven"
    MOULD_OPEN = "mould-open"
    MOULD_CLOSED = "mould-closed"
    FORMER = "former"
    VSWR = "vswr"
    GAIN = "gain"
    FRONT_TO_BACK = "front-to-back"
    E_PLANE = "e-plane"
    H_PLANE = "h-plane"
    CURRENTS = "currents"


@dataclass(frozen=True)
class Heading:
    """A heading within a chapter."""

    text: str


@dataclass(frozen=True)
class Paragraph:
    """Plain text."""

    text: str


@dataclass(frozen=True)
class Caution:
    """A warning, beside the step it belongs to."""

    text: str
    topic: Topic


@dataclass(frozen=True)
class Step:
    """One thing to do, and how to know that it is right."""

    text: str
    check: str
    picture: Picture | None = None
    caution: Caution | None = None


@dataclass(frozen=True)
class Steps:
    """Steps in order, numbered by whoever lays them out."""

    steps: tuple[Step, ...]


@dataclass(frozen=True)
class Table:
    """A table: as many cells in every row as in the head."""

    head: tuple[str, ...]
    rows: tuple[tuple[str, ...], ...]
    caption: str


@dataclass(frozen=True)
class Figure:
    """A picture and what to see in it."""

    picture: Picture
    caption: str


@dataclass(frozen=True)
class Facts:
    """Names with their values."""

    facts: tuple[tuple[str, str], ...]


Block = Heading | Paragraph | Steps | Table | Figure | Caution | Facts


@dataclass(frozen=True)
class Chapter:
    """A chapter: its title, its key for links, its blocks in order."""

    title: str
    key: str
    blocks: tuple[Block, ...]

    @property
    def cautions(self) -> tuple[Caution, ...]:
        """Every caution, those beside steps among them, in order."""
        found: list[Caution] = []
        for block in self.blocks:
            if isinstance(block, Caution):
                found.append(block)
            elif isinstance(block, Steps):
                found += [step.caution for step in block.steps if step.caution is not None]
        return tuple(found)

    @property
    def pictures(self) -> tuple[Picture, ...]:
        """Every picture it refers to, in order, each once."""
        found: list[Picture] = []
        for block in self.blocks:
            if isinstance(block, Figure):
                found.append(block.picture)
            elif isinstance(block, Steps):
                found += [step.picture for step in block.steps if step.picture is not None]
        return tuple(dict.fromkeys(found))

    @property
    def texts(self) -> tuple[str, ...]:
        """Every piece of text, in reading order."""
        return (self.title, *(text for block in self.blocks for text in _texts(block)))


def _texts(block: Block) -> Iterator[str]:
    if isinstance(block, Heading | Paragraph | Caution):
        yield block.text
    elif isinstance(block, Figure):
        yield block.caption
    elif isinstance(block, Facts):
        for fact in block.facts:
            yield from fact
    elif isinstance(block, Table):
        yield block.caption
        yield from block.head
        for row in block.rows:
            yield from row
    else:
        for step in block.steps:
            yield step.text
            yield step.check
            if step.caution is not None:
                yield step.caution.text
