"""The chapters as one plain document, from which page and paper are laid out alike: nothing but words and keys."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any, Literal

from boomwright.book.content import (
    Block,
    Caution,
    Chapter,
    Facts,
    Figure,
    Heading,
    Paragraph,
    Picture,
    Step,
    Steps,
    Table,
)


@dataclass(frozen=True)
class Illustration:
    """A picture's bytes and what they are; `alt` says what it shows to who cannot see it."""

    kind: Literal["svg", "png"]
    content: bytes
    alt: str

    @property
    def media_type(self) -> str:
        """As a browser names it."""
        return {"svg": "image/svg+xml", "png": "image/png"}[self.kind]


Illustrations = Mapping[Picture, Illustration]


def as_document(title: str, chapters: Sequence[Chapter], illustrations: Illustrations) -> dict[str, Any]:
    """Title and chapters; every block a dictionary with its kind. A picture that was not made is left out."""
    return {"title": title, "chapters": [_chapter(chapter, illustrations) for chapter in chapters]}


def _chapter(chapter: Chapter, made: Illustrations) -> dict[str, Any]:
    blocks: list[dict[str, Any]] = []
    for block in chapter.blocks:
        if _is_lost(block, made):
            continue
        if isinstance(block, Figure):
            # Figures that follow one another share a block, so that they can stand side by side.
            if not blocks or blocks[-1]["kind"] != "figures":
                blocks.append({"kind": "figures", "figures": []})
            blocks[-1]["figures"].append({"picture": block.picture.value, "caption": block.caption})
        else:
            blocks.append(_block(block, made))
    return {"title": chapter.title, "key": chapter.key, "blocks": blocks}


def _is_lost(block: Block, made: Illustrations) -> bool:
    return isinstance(block, Figure) and block.picture not in made


def _block(block: Block, made: Illustrations) -> dict[str, Any]:
    if isinstance(block, Heading):
        return {"kind": "heading", "text": block.text}
    if isinstance(block, Paragraph):
        return {"kind": "paragraph", "text": block.text}
    if isinstance(block, Caution):
        return {"kind": "caution", **_caution(block)}
    if isinstance(block, Facts):
        return {"kind": "facts", "facts": [list(fact) for fact in block.facts]}
    if isinstance(block, Table):
        return {
            "kind": "table",
            "head": list(block.head),
            "rows": [list(row) for row in block.rows],
            "caption": block.caption,
            "numeric": [_is_numeric([row[i] for row in block.rows]) for i in range(len(block.head))],
        }
    assert isinstance(block, Steps)
    return {"kind": "steps", "steps": [_step(step, made) for step in block.steps]}


def _step(step: Step, made: Illustrations) -> dict[str, Any]:
    return {
        "text": step.text,
        "check": step.check,
        "picture": step.picture.value if step.picture in made and step.picture is not None else "",
        "caution": _caution(step.caution) if step.caution is not None else None,
    }


def _caution(caution: Caution) -> dict[str, str]:
    return {"text": caution.text, "topic": caution.topic.value}


def _is_numeric(cells: Sequence[str]) -> bool:
    """Whether a column holds figures, which stand to the right."""
    return bool(cells) and all(cell[:1] in "-–±+<>" or cell[:1].isdigit() or not cell for cell in cells)
