"""Cutting and checking the rods."""

from __future__ import annotations

from boomwright.book.content import Block, Caution, Chapter, Paragraph, Step, Steps, Table, Topic
from boomwright.book.drawings import drawing_words
from boomwright.book.run import Run
from boomwright.book.shopping import tolerance_words
from boomwright.book.words import figure, listed, mm
from boomwright.design.model import Driven, Rod
from boomwright.plan.gauge import plan_gauge


def chapter(run: Run) -> Chapter:
    """From the bar to rods of the right length."""
    if not run.design.rods:
        words = "This design has no rods beside the driven element: go on to the boom."
        return Chapter("Cutting the rods", "rods", (Paragraph(words),))
    blocks: list[Block] = [
        Paragraph(
            "Length decides more than anything else here. Cut a little long, dress to length, check, and keep each "
            "rod under its tag from then on."
        ),
        *drawing_words(run, "rods"),
        Steps(tuple(_steps(run))),
        _check_table(run),
    ]
    return Chapter("Cutting the rods", "rods", tuple(blocks))


def _steps(run: Run) -> list[Step]:
    saw, tags = run.shop.saw, listed(rod.tag for rod in run.design.rods)
    caution = Caution(
        "Sawing and filing metal leaves fine dust and sharp edges. Wear glasses, wipe up, do not blow."
        + (
            " Scrape off coats and enamel with the extraction on: their dust does not belong in the lungs."
            * _coated(run)
        ),
        Topic.DUST,
    )
    steps = [
        Step(
            f"Roll each bar on a flat plate, then saw {tags} in the order of the stock plan, {mm(saw.dress_mm)} too "
            "long at each end.",
            "The bar rolls without a gap of light under it. A bent bar is straightened or put aside.",
            None,
            caution,
        )
    ]
    steps += _length_steps(run)
    steps.append(_gauge_step(run))
    steps.append(
        Step(
            "Put each rod into a rack or bag marked with its tag.",
            f"You count {len(run.design.rods)} rods, each under its tag: {tags}.",
        )
    )
    return steps


def _length_steps(run: Run) -> list[Step]:
    """Sawing to length in the cut block, or filing to it."""
    if not run.has("cut-block"):
        why = run.why_not("cut-block")
        return [
            Step(
                f"Dress both ends square with a file until the length is right; there is no cut block ({why}).",
                "A square held to the end shows no light.",
            ),
            Step("Break all edges lightly.", "A fingernail does not catch."),
        ]
    slot = run.size("cut-block.slot_mm")
    return [
        Step(
            "Dress one end square, push it against the stop of the cut block and saw in the slot of the rod's "
            f"length, {mm(slot)} wide; keep the blade on the slot's wall toward the stop.",
            "A square held to both ends shows no light.",
        ),
        Step("Break all edges lightly.", "A fingernail does not catch."),
    ]


def _coated(run: Run) -> bool:
    elements: tuple[Rod | Driven, ...] = (*run.design.rods, run.design.driven)
    return any(one.coat_mm > 0.0 for one in elements) or any(one.material == "copper" for one in elements)


def _gauge_step(run: Run) -> Step:
    if not run.has("length-gauge"):
        why = run.why_not("length-gauge")
        words = f"Measure every rod: there is no length gauge ({why})."
        return Step(words, "Each is within the tolerance of the table below.")
    beyond = plan_gauge(run.design, run.shop)[0].beyond
    more = f" Measure {listed(beyond)} with a rule: the gauge does not hold them." if beyond else ""
    words = f"Try every rod in the length gauge.{more}"
    return Step(words, "It drops into the go slot of its length and not into the one with the nick.")


def _check_table(run: Run) -> Table:
    rows = []
    for rod in run.design.rods:
        limits = "-"
        try:
            key = next(
                key
                for key in (size.key for size in run.plan.sizes)
                if key.startswith("gauge.") and key.endswith(".go_mm") and rod.tag in key.split(".")[1].split("+")
            )
            limits = f"{figure(run.size(key.replace('.go_mm', '.no_go_mm')))} to {figure(run.size(key))}"
        except StopIteration:
            limits = tolerance_words(rod.length_mm)
        rows.append((rod.tag, mm(rod.length_mm), limits, mm(rod.at_mm), f"{mm(rod.diameter_mm)} {rod.material}"))
    head = ("Tag", "Length", "Good from, to [mm]", "Place on the boom", "Stock")
    return Table(head, tuple(rows), "Rods: places count from the design's zero, forward.")
