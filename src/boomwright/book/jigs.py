"""Making the fixtures and shop aids: how to print them, how to cut them, how to know that they are true."""

from __future__ import annotations

from boomwright.book.content import (
    Block,
    Caution,
    Chapter,
    Figure,
    Heading,
    Paragraph,
    Picture,
    Step,
    Steps,
    Table,
    Topic,
)
from boomwright.book.run import CRADLES, Run
from boomwright.book.words import counted, listed, mm
from boomwright.data.tables import refused_sheets

AIDS = ("cradle", "sheet-cradle", "former", "length-gauge", "cut-block", "groove-guide", "mould", "spacing-comb")


def chapter(run: Run) -> Chapter:
    """Printing, cutting, checking."""
    blocks: list[Block] = [_aids_table(run)]
    if run.has("cradle"):
        blocks.append(Figure(Picture.CRADLE, "The cradle: notches carry the rods, saddles carry the boom."))
    if printed := [part for part in run.manifest.parts if _is_printed(run, part)]:
        blocks += [Heading("Print"), Paragraph(_printer_words(run, printed)), Steps(_print_steps(run))]
    if laser := [part for part in run.manifest.parts if _is_laser(run, part)]:
        blocks += [Heading("Cut from sheet"), Steps(_laser_steps(run, laser))]
    left = [part for part in AIDS if not run.has(part) and part in run.manifest.left_out]
    if left:
        rows = tuple((part, run.why_not(part)) for part in left)
        blocks += [Heading("Not made"), Table(("Part", "Why"), rows, "Aids that this design or shop does without.")]
    return Chapter("Making the jigs", "jigs", tuple(blocks))


def _is_printed(run: Run, part: str) -> bool:
    return bool(run.pieces(part)) or (not run.files(part) and part in ("cradle", "mould", "former"))


def _is_laser(run: Run, part: str) -> bool:
    paths = run.files(part)
    return any(path.startswith("laser/") for path in paths) or (not paths and part in ("spacing-comb", "sheet-cradle"))


def _aids_table(run: Run) -> Table:
    uses = {
        "cradle": "holds all rods on one plane while the adhesive cures",
        "sheet-cradle": "the same cradle from flat sheet",
        "former": "bends the driven element, or saws its gap",
        "length-gauge": "tells a rod of the right length from one that is not",
        "cut-block": "saws rods square and to length",
        "groove-guide": "leads file or drill at every seat",
        "mould": "shapes the resin round the feed point",
        "spacing-comb": "shows on the finished antenna that every rod is in its place",
    }
    rows = []
    for part in AIDS:
        if run.has(part):
            count = len(run.pieces(part)) or len(run.files(part))
            rows.append((part, uses[part], counted(count, "file") if count else "-"))
    rows = rows or [("none", "this run made no aids", "-")]
    return Table(("Part", "What it does", "Files"), tuple(rows), "The fixtures and aids of this run.")


def _printer_words(run: Run, printed: list[str]) -> str:
    p = run.shop.printer
    return (
        f"Print {listed(printed)} in {p.material}, nozzle {mm(p.nozzle_mm)}, layer {mm(p.layer_mm)}, as they lie in "
        f"the files, without support. Your printer's {mm(p.hole_shrink_mm)} of hole shrink and "
        f"{mm(p.outline_growth_mm)} of outline growth are already taken in the print files: switch such corrections "
        "off in the slicer."
    )


def _print_steps(run: Run) -> tuple[Step, ...]:
    steps = [
        Step(
            "Load the print file and leave it as it lies: the bed side is down already.",
            "The slicer shows no support and nothing over the edge of the bed.",
        ),
        Step(
            "Let the part cool on the bed before you take it off.",
            "It lies on a flat plate without rocking. A part that rocks has warped: print it again with a brim.",
        ),
    ]
    if run.has(*CRADLES) and run.design.rods:
        rod = run.design.rods[0]
        steps.append(
            Step(
                f"Lay a straight piece of {mm(rod.diameter_mm)} {rod.material} in the notches marked {rod.tag} on "
                "both rails and measure from the table to the top of the rod.",
                f"The height is {mm(run.axis_height_mm + rod.outer_diameter_mm / 2.0)} at both ends, alike within a "
                "tenth.",
            )
        )
    if run.has("mould"):
        steps.append(
            Step(
                "Close the mould empty.",
                "The pins slide home by hand and no light shows along the parting face.",
                Picture.MOULD_CLOSED,
            )
        )
    return tuple(steps)


def _laser_steps(run: Run, laser: list[str]) -> tuple[Step, ...]:
    sheet = run.shop.laser
    refused = listed((one.name for one in refused_sheets()), "or")
    caution = Caution(
        f"Cut only the sheet you know: {sheet.material} here. Never laser cut {refused}: they give off poisonous or "
        "corrosive fumes or catch fire. Stay with the machine, fume extraction on.",
        Topic.LASER,
    )
    steps = [
        Step(
            f"Measure the sheet with a calliper in three places before cutting {listed(laser)}.",
            f"It is {mm(sheet.sheet_mm)} thick. If not, put the measured value in the shop file and make again.",
        ),
        Step(
            f"Mark first, on the layers {sheet.layers.engrave} and {sheet.layers.score}, and cut last, on "
            f"{sheet.layers.cut}. The kerf of {mm(sheet.kerf_mm)} is in the file already: switch the cutter's own "
            "correction off.",
            f"The pieces go together by hand with {mm(sheet.fit_mm)} of extra play, as the shop file asks. If not, "
            "measure the kerf on a test cut and correct the shop file.",
            None,
            caution,
        ),
    ]
    return (*steps, *_plate_steps(run)) if run.has("sheet-cradle") else tuple(steps)


def _plate_steps(run: Run) -> tuple[Step, ...]:
    """Putting the sheet cradle together."""
    kinds = dict.fromkeys(standing.plate.kind for standing in run.plan.sheet_cradle.plates)
    plates = len(run.plan.sheet_cradle.plates)
    return (
        Step(
            f"Sort the {plates} plates of the sheet cradle by the words on them: {listed(kinds)}.",
            "No plate is without its slot, and every arrow points the same way.",
        ),
        Step(
            "Put the spreaders between the rails, then rails, saddles and stops into the slots of the base, dry. "
            "When all is in, run a drop of wood glue into each joint and weigh it down on a flat plate.",
            "Every foot is flush under the base, the rails stand upright, and nothing rocks.",
        ),
    )
