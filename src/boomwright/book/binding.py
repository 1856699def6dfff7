"""The book bound: chapters written, pictures taken from the finished folder, page and paper put beside the files."""

from __future__ import annotations

from pathlib import Path

from boomwright.audit import Audit
from boomwright.book.chapters import write_chapters
from boomwright.book.content import Picture
from boomwright.book.document import Illustration, as_document
from boomwright.book.page import page_html
from boomwright.book.paper import paper_pdf
from boomwright.book.pictures import pictures
from boomwright.book.run import Run
from boomwright.book.scene import read_scene
from boomwright.book.view.section import view_html
from boomwright.formats.format import FileEntry
from boomwright.manifest import BOOK_PROCESS as PROCESS
from boomwright.manifest import Manifest
from boomwright.parts.catalogue import BOOK
from boomwright.plan.frame import IDENTITY
from boomwright.plan.plan import Plan
from boomwright.prediction import Prediction

PAGE, PAPER = f"{BOOK}.html", f"{BOOK}.pdf"
DRAWN = {
    Picture.VSWR: "rf/vswr.svg",
    Picture.GAIN: "rf/gain.svg",
    Picture.FRONT_TO_BACK: "rf/front-to-back.svg",
    Picture.E_PLANE: "rf/e-plane.svg",
    Picture.H_PLANE: "rf/h-plane.svg",
    Picture.CURRENTS: "rf/currents.svg",
    Picture.BOOM_DRAWING: "bench/drawing-boom.svg",
    Picture.ROD_TABLE: "bench/drawing-rods.svg",
    Picture.DRIVEN_DRAWING: "bench/drawing-driven.svg",
    Picture.CRADLE_DRAWING: "bench/drawing-cradle.svg",
    Picture.MOULD_DRAWING: "bench/drawing-mould.svg",
    Picture.FORMER_DRAWING: "bench/drawing-former.svg",
}
"""Pictures that stand in the folder already."""

SHOWN = {
    Picture.ANTENNA: "the finished antenna",
    Picture.CRADLE: "the empty cradle",
    Picture.CRADLE_RODS: "the cradle with the rods in their notches",
    Picture.CRADLE_BOOM: "the cradle with rods and boom",
    Picture.CRADLE_DRIVEN: "the antenna with its driven element",
    Picture.MOULD_OPEN: "the two halves of the mould beside the antenna",
    Picture.MOULD_CLOSED: "the mould closed round the feed point",
    Picture.FORMER: "the former for the driven element",
}


def write_book(folder: Path, plan: Plan, prediction: Prediction, manifest: Manifest, audit: Audit) -> list[FileEntry]:
    """Write the book of a finished folder into it; what the manifest says of its two files.

    manifest  of all other files
    audit     of all other files
    """
    design = plan.design
    run = Run(plan, prediction, manifest, audit, _volumes_mm3(audit))
    scene = read_scene(folder, plan, manifest)
    illustrations = {
        key: Illustration("svg", (folder / path).read_bytes(), key.value.replace("-", " "))
        for key, path in DRAWN.items()
        if (folder / path).is_file()
    }
    illustrations |= {
        key: Illustration("png", content, SHOWN.get(key, key.value)) for key, content in pictures(scene).items()
    }
    document = as_document(design.title or design.name, write_chapters(run), illustrations)
    view = view_html(scene, illustrations[Picture.ANTENNA].content)
    (folder / PAGE).write_text(page_html(document, illustrations, view), "utf-8", newline="\n")
    (folder / PAPER).write_bytes(paper_pdf(document, illustrations))
    return [
        FileEntry(PAGE, BOOK, PROCESS, "html", "mm", IDENTITY),
        FileEntry(PAPER, BOOK, PROCESS, "pdf", "mm", IDENTITY),
    ]


def _volumes_mm3(audit: Audit) -> dict[str, float]:
    """Volume of every printed piece by file stem, as the audit measured it [mm³]."""
    return {
        Path(finding.file).stem: finding.measured
        for finding in audit.findings
        if finding.file.endswith(".stl") and finding.what == "volume" and isinstance(finding.measured, float)
    }
