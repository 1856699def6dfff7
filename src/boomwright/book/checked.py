"""What was measured back in the files before this book was written, and what was left out."""

from __future__ import annotations

from collections import Counter

from boomwright.audit import Audit
from boomwright.book.content import Block, Chapter, Heading, Paragraph, Table
from boomwright.book.run import Run
from boomwright.book.words import counted, figure

MOST_FAILURES = 40


def chapter(run: Run) -> Chapter:
    """The audit's summary."""
    blocks: list[Block] = []
    if run.audit is None:
        blocks.append(Paragraph("The files of this run were not measured: run `boomwright audit` on the folder."))
    else:
        blocks += _audit_blocks(run.audit)
    if run.manifest.left_out:
        rows = tuple(sorted(run.manifest.left_out.items()))
        blocks += [Heading("Left out"), Table(("Part", "Why"), rows, "Parts that this design does without.")]
    return Chapter("What was measured back", "checked", tuple(blocks))


def _audit_blocks(audit: Audit) -> list[Block]:
    count, failed = len(audit.findings), audit.failures
    if audit.ok:
        verdict = f"Measured on the written files: {counted(count, 'quantity', 'quantities')}. All are as planned."
    else:
        verdict = (
            f"Measured on the written files: {counted(count, 'quantity', 'quantities')}. Not as planned: {len(failed)}."
        )
        verdict += " Do not build from the files named below before that is mended."
    per_file = Counter(finding.file for finding in audit.findings)
    bad = Counter(finding.file for finding in failed)
    rows = tuple((file, str(number), str(bad[file])) for file, number in sorted(per_file.items()))
    blocks: list[Block] = [
        Paragraph(verdict),
        Table(("File", "Measured", "Not met"), rows, "Quantities measured, file by file."),
    ]
    if failed:
        shown = tuple((str(finding),) for finding in failed[:MOST_FAILURES])
        blocks += [Heading("Not met"), Table(("Finding",), shown, "What is not as planned.")]
    if audit.electrical is not None and audit.electrical.comparisons:
        cells = tuple(
            (one.what, figure(one.design, 3), figure(one.from_file, 3), "yes" if one.ok else "no")
            for one in audit.electrical.comparisons
        )
        caption = "The antenna that antenna.step shows, solved again."
        blocks += [Heading("Solved again"), Table(("Figure", "Design", "From the file", "Met"), cells, caption)]
    elif audit.electrical is not None:
        blocks.append(Paragraph(f"The antenna read back from the files was not solved: {audit.electrical.reason}."))
    return blocks
