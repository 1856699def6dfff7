"""Potting the feed point in resin."""

from __future__ import annotations

from boomwright.book.content import Block, Caution, Chapter, Facts, Figure, Paragraph, Picture, Step, Steps, Topic
from boomwright.book.run import Run
from boomwright.book.shopping import LEFT_IN_THE_CUP
from boomwright.book.words import figure, mm

LARGE_POUR_ML = 50.0
"""From here on a pour is done in layers (common practice; the resin's data sheet says more)."""


def chapter(run: Run) -> Chapter:
    """The resin block, or why there is none."""
    if not run.has_resin:
        words = (
            f"This run has no mould ({run.why_not('mould')}). Seal the feed point against water another way: cable "
            "end, braid and joint must stay dry, or the match drifts with the weather."
        )
        return Chapter("Potting the feed point", "potting", (Paragraph(words),))
    blocks: list[Block] = [
        Facts(_facts(run)),
        Figure(Picture.MOULD_OPEN, "The mould's halves, open, round the feed point."),
        Steps(tuple(_steps(run))),
    ]
    return Chapter("Potting the feed point", "potting", tuple(blocks))


def _facts(run: Run) -> tuple[tuple[str, str], ...]:
    volume, resin = run.size("mould.resin_volume_ml"), run.design.resin
    ends = run.plan.mould.ends
    return (
        ("Resin", f"{resin.name}, {figure(resin.density_g_cm3)} g/ml"),
        ("Volume in the mould", f"{figure(volume)} ml"),
        ("Mass in the mould", f"{figure(run.size('mould.resin_mass_g'))} g"),
        ("Mix", f"{figure(LEFT_IN_THE_CUP * volume, 1)} ml"),
        ("Resin behind and before the conductor", f"{mm(ends.resin_mm[0])} and {mm(ends.resin_mm[1])}"),
    )


def _steps(run: Run) -> list[Step]:
    mould = run.plan.mould
    steps = [
        Step(
            "Test the antenna now: what is wrong with the joint cannot be mended in resin (see the testing chapter).",
            "The reading is within its limits.",
        ),
        Step(
            "Wax the inner faces and the parting faces of both halves, and buff. Wax no part of the antenna.",
            "The faces shine evenly, corners and channels too.",
        ),
        *_note_steps(run, before_closing=True),
        Step(
            f"Close the halves round the feed point{' and the cable' if mould.coax is not None else ''}; pins into "
            "sockets. "
            + ("Tie them through the slots." if mould.face.ties else "Hold them together with tape or a clamp."),
            "The halves meet all round, and nothing of the antenna is bent.",
            Picture.MOULD_CLOSED,
        ),
        *_note_steps(run, before_closing=False),
    ]
    if mould.coax is None:
        steps.append(
            Step(
                "Mind that this mould has no cable channel, because the design names no cable: fit the cable's tails "
                "or a connector outside the block.",
                "Both sides of the gap stand out of the block or carry their leads.",
            )
        )
    steps += [_pour_step(run), _cure_step(run), _open_step(run)]
    return steps


NOTE_CHECKS = (
    ("plug", True, "The plug is in, and does not shift when you push it."),
    ("mould-upper is", True, "You know which half is which before there is resin on your gloves."),
    ("upside down", True, "The boom lies under the feed point, level."),
    ("clip", True, "The loop does not move when you touch it."),
    ("seal", False, "No light shows through the joint."),
)
"""Notes of the mould's plan by a word of theirs: whether they come before closing, and how to know they are done."""


def _note_steps(run: Run, before_closing: bool) -> list[Step]:
    """The plan's notes as steps; what the other steps say anyway is left out."""
    steps = []
    for note in run.plan.mould.notes:
        for word, before, check in NOTE_CHECKS:
            if word in note and before == before_closing:
                steps.append(Step(f"{note[0].upper()}{note[1:]}.", check))
                break
    return steps


def _pour_step(run: Run) -> Step:
    volume = run.size("mould.resin_volume_ml")
    layers = "pour in layers and let each cool" if volume > LARGE_POUR_ML else "do not leave a full cup standing"
    caution = Caution(
        f"Resin heats up as it sets, the more the larger the amount: {figure(LEFT_IN_THE_CUP * volume, 1)} ml are "
        f"mixed here, {layers}. A smoking cup goes outdoors. Gloves, glasses, fresh air.",
        Topic.RESIN,
    )
    return Step(
        f"Mix {figure(LEFT_IN_THE_CUP * volume, 1)} ml of resin slowly, as its data sheet says. Pour in a thin stream "
        "into the funnel, the funnel and vent highest.",
        f"Resin stands in the vent and at the funnel's neck and no more bubbles come; about {figure(volume)} ml went "
        "in.",
        None,
        caution,
    )


def _cure_step(run: Run) -> Step:
    return Step(
        f"Let {run.design.resin.name} cure for the time and temperature of its own data sheet, the antenna level.",
        "What is left in the cup is hard through.",
    )


def _open_step(run: Run) -> Step:
    if run.plan.mould.pull == "z":
        return Step(
            "Break the sprue off, cut the ties, part the halves at the notch with a blunt blade, and lift them off "
            "up and down.",
            "The block is closed all round, no conductor shows, and the cable's jacket is gripped by resin.",
        )
    rear, front = run.plan.mould.ends.travel_mm
    return Step(
        f"Cut the ties, part the halves at the notch, and draw them off along the boom: the front half {mm(front, 1)} "
        f"forward, the rear one {mm(rear, 1)} back, then away from the boom.",
        "The block is closed all round, no conductor shows, and the cable's jacket is gripped by resin.",
    )
