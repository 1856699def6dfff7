"""The book on paper: A4 pages, typeset, the same bytes on any day."""

from __future__ import annotations

import json
import tempfile
from importlib.resources import files
from pathlib import Path
from typing import Any

from boomwright.book.document import Illustrations


def paper_pdf(document: dict[str, Any], illustrations: Illustrations) -> bytes:
    """The pages of a document (PDF); text is handed over as data and never read as markup."""
    import typst

    with tempfile.TemporaryDirectory() as name:
        place = Path(name)
        pictures = {}
        for key, one in illustrations.items():
            pictures[key.value] = {"file": f"{key.value}.{one.kind}", "alt": one.alt}
            (place / f"{key.value}.{one.kind}").write_bytes(one.content)
        whole = document | {"pictures": pictures}
        (place / "book.json").write_text(json.dumps(whole), "utf-8")
        (place / "paper.typ").write_bytes(files("boomwright.book").joinpath("paper.typ").read_bytes())
        return bytes(typst.compile(place / "paper.typ", root=place, ignore_system_fonts=True, format="pdf"))
