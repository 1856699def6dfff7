"""The book as one page for any browser: everything inside it, nothing fetched."""

from __future__ import annotations

import base64
from importlib.resources import files
from typing import Any

from boomwright.book.document import Illustrations


def page_html(document: dict[str, Any], illustrations: Illustrations, view: str = "") -> str:
    """The page of a document.

    document       from `as_document`
    illustrations  what its picture keys stand for
    view           an HTML fragment, the 3D view, that follows the title; trusted

    Text of the document is escaped, whatever it holds.
    """
    import jinja2
    import markupsafe

    environment = jinja2.Environment(
        autoescape=True, undefined=jinja2.StrictUndefined, trim_blocks=True, lstrip_blocks=True
    )
    template = environment.from_string(files("boomwright.book").joinpath("page.html").read_text("utf-8"))
    pictures = {
        key.value: {"source": _data_address(one.media_type, one.content), "alt": one.alt}
        for key, one in illustrations.items()
    }
    return template.render(book=document, pictures=pictures, view=markupsafe.Markup(view))


def _data_address(media_type: str, content: bytes) -> str:
    return f"data:{media_type};base64,{base64.b64encode(content).decode('ascii')}"
