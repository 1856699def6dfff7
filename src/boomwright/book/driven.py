"""Bending, fitting and soldering the driven element."""

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
from boomwright.book.words import counted, figure, mm
from boomwright.design.centreline import developed_length_mm, loop_drop_mm
from boomwright.plan.former import plan_former
from boomwright.plan.mould_room import joint_mm


def chapter(run: Run) -> Chapter:
    """From wire to a fed element with its cable on."""
    driven = run.design.driven
    blocks: list[Block] = []
    if driven.form == "straight":
        blocks += [Heading("Sawing the gap"), _former_block(run), Steps(tuple(_jig_steps(run)))]
    else:
        blocks += [Heading("Bending"), _former_block(run), Steps(tuple(_bend_steps(run)))]
        if run.has("former"):
            blocks.append(_bend_table(run))
    blocks += [Heading("Fitting"), Steps(tuple(_fit_steps(run)))]
    blocks += [Heading("Soldering"), Steps(tuple(_solder_steps(run)))]
    if run.cable is None:
        blocks.append(
            Paragraph("The design names no cable: put `feed.coax` in it, and the book sizes tails and channel.")
        )
    return Chapter("The driven element", "driven", tuple(blocks))


def _former_block(run: Run) -> Block:
    if not run.has("former"):
        return Paragraph(f"This run has no former: {run.why_not('former')}.")
    straight = run.design.driven.form == "straight"
    return Figure(Picture.FORMER, "The jig that saws the gap." if straight else "The former: stop, channel and posts.")


def _jig_steps(run: Run) -> list[Step]:
    driven, half = run.design.driven, developed_length_mm(run.design.driven) / 2.0
    if not run.has("former"):
        return [
            Step(
                f"Cut two pieces of {mm(half)} from {mm(driven.diameter_mm)} {driven.material}, ends square.",
                "Stood side by side on a flat plate, they are the same length.",
            )
        ]
    plan, _ = plan_former(run.design, run.shop)
    lay = "between the jig's two stops" if plan.closed else "in the jig, its middle mark on the slot's middle"
    return [
        Step(
            f"Cut a rod of {mm(driven.length_mm or 0.0)} and lay it {lay}.",
            "It does not slide along the trough.",
        ),
        Step(
            "Saw along both walls of the cross slot, the blade inside the slot: what falls out is the gap of "
            f"{mm(driven.gap_mm)}.",
            f"Both halves measure {mm(half)}, and a gauge block or drill shank of {mm(driven.gap_mm)} fills the slot.",
        ),
        Step("Break all edges lightly.", "A fingertip along the edge feels nothing."),
    ]


def _bend_steps(run: Run) -> list[Step]:
    driven = run.design.driven
    length = developed_length_mm(driven)
    steps = [
        Step(
            f"Straighten {mm(driven.diameter_mm)} {driven.material} wire by pulling it, and cut {mm(length)}, ends "
            "square.",
            "The wire rolls on a flat plate.",
        )
    ]
    if not run.has("former"):
        steps.append(
            Step(
                f"Bend it on a drum or board of the right size; there is no former ({run.why_not('former')}). Leave a "
                f"gap of {mm(driven.gap_mm)}.",
                "It lies flat on the plate and matches the drawing laid under it at true scale.",
            )
        )
        return steps
    plan, _ = plan_former(run.design, run.shop)
    turns = figure(plan.bends[0].turn_deg, 0)
    steps.append(
        Step(
            "Mark the bends on the wire from one end, as in the table. Lay the wire in the channel, its end against "
            "the stop.",
            "The first mark's edge nearer the stop lies on the engraved line.",
        )
    )
    steps.append(_pull_step(run, turns, plan.is_corner))
    steps.append(
        Step(
            f"Set the gap with the former's feeler of {mm(driven.gap_mm)}.",
            "The feeler goes in without force and without light beside it.",
        )
    )
    steps.append(Step("Lay the element on a flat plate.", f"It does not rock, and measures {_outer(run)}."))
    return steps


def _pull_step(run: Run, turns: str, is_corner: bool) -> Step:
    plan, _ = plan_former(run.design, run.shop)
    spring = f"the wire springs back by about {figure(run.shop.former.springback_percent)} percent"
    again = "If not, change the shop's spring-back and print anew."
    if run.design.driven.shape == "circle":
        words = f"Wind the wire once round the disc, pulled tight to {turns} degrees; {spring}."
        return Step(words, f"Let go, the ends face each other across about the gap. {again}")
    how = "Bend on the one post, moving the wire on to its next mark" if is_corner else "Bend round each post in order"
    words = f"{how}: {counted(len(plan.bends), 'bend')}, each pulled to {turns} degrees; {spring}."
    return Step(words, f"Let go, the straight parts lie parallel or square as drawn. {again}")


def _outer(run: Run) -> str:
    driven = run.design.driven
    if driven.form == "folded":
        return f"{mm(driven.length_mm or 0.0)} over the bends and {mm(driven.spacing_mm or 0.0)} between its two axes"
    across = 2.0 * loop_drop_mm(driven) + driven.diameter_mm
    return f"{mm(across)} across, outside to outside"


def _bend_table(run: Run) -> Table:
    plan, _ = plan_former(run.design, run.shop)
    rows = [
        (str(number), mm(bend.mark_mm), mm(bend.post_mm), figure(bend.turn_deg, 1))
        for number, bend in enumerate(plan.bends, 1)
    ]
    head = ("Bend", "Mark from the stop's end", "Radius of the post", "Bend to [deg]")
    return Table(head, tuple(rows), "Bend marks: the edge of the mark nearer the stop counts.")


def _fit_steps(run: Run) -> list[Step]:
    driven = run.design.driven
    picture = Picture.CRADLE_DRIVEN if run.has(*CRADLES) else None
    if run.driven_lies and run.plan.seat.grooves:
        return [
            Step(
                "Check the driven element, glued with the rods: its gap lies over the pocket in the boom's middle.",
                f"The gap is {mm(driven.gap_mm)}, the same on both sides of the boom's middle line, and free of "
                "adhesive.",
                picture,
            )
        ]
    if run.driven_lies:
        cradle = "in the cradle's troughs" if run.has("cradle") else "on packing level with the rods"
        return [
            Step(
                f"Lay both halves {cradle} beside the boom; nothing but the resin block will hold them.",
                f"They are in one line, {mm(driven.gap_mm)} apart, and clear of the boom by the same on both sides.",
                picture,
            )
        ]
    if driven.form == "loop":
        clip = "Set the clip over its upper side on the boom" if run.plan.mould.clip is not None else "Hold it upright"
        return [
            Step(
                "Twist the ends at the gap apart sideways, as one opens a ring, pass the loop over the boom from "
                f"above at {mm(driven.at_mm)} from the datum, its gap lowest, and twist it shut to "
                f"{mm(driven.gap_mm)}. {clip}.",
                "It stands square to the boom from the side and from above, and the boom passes through its middle.",
                picture,
            )
        ]
    return _upright_steps(run, picture)


def _upright_steps(run: Run, picture: Picture | None) -> list[Step]:
    driven, name = run.design.driven, run.design.adhesive.name
    caution = Caution(f"Vapours of {name} again: open window, gloves, glasses.", Topic.ADHESIVE)
    return [
        Step(
            f"Roughen and clean groove and wire, put a bead of {name} in the groove at {mm(driven.at_mm)} but not in "
            "its pocket, and press the fed conductor in.",
            "A thin line of adhesive shows at both sides, and the pocket is free of it.",
            picture,
            caution,
        ),
        Step(
            f"Set the second conductor {mm(driven.spacing_mm or 0.0)} above the fed one, square to the boom, and hold "
            "it so until the adhesive has cured as its own data sheet says.",
            "A square on the boom touches the bend at both ends, and the gap lies over the pocket.",
        ),
    ]


def _solder_steps(run: Run) -> list[Step]:
    driven, cable = run.design.driven, run.cable
    tail = joint_mm(driven)
    caution = Caution(
        "Flux fumes harm the lungs: solder in moving air, not over the work. The iron and the joint stay hot for a "
        "while.",
        Topic.SOLDER,
    )
    steps = [
        Step(
            f"Tin both sides of the gap over {mm(tail)}, quickly, a wet rag round the boom.",
            "The solder has flowed bright round the conductor, and the boom is not scorched.",
            None,
            caution,
        )
    ]
    if cable is None:
        return steps
    bare = driven.gap_mm / 2.0 + tail
    steps.append(
        Step(
            f"Strip {cable.name}: jacket {mm(bare + tail)} back, the braid combed into one tail, the inner conductor "
            f"bare for {mm(tail)}, its insulation left up to there.",
            "No strand of the braid can reach the inner conductor.",
        )
    )
    choke = run.choke
    if choke is not None and choke.kind == "half-wave balun":
        loop = next(value for name, value, _ in choke.figures if "loop" in name)
        steps.append(
            Step(
                f"Solder the cable's inner conductor and one end of the {mm(loop, 1)} loop to one side of the gap, "
                "the loop's other end to the other side, and all braids together (see the feed chapter).",
                "A meter shows contact between both sides of the gap and none from either to the braids.",
            )
        )
    else:
        shorted = "contact" if driven.form != "straight" else "no contact"
        steps.append(
            Step(
                "Solder the inner conductor to one side of the gap and the braid's tail to the other, tails as short "
                "as they go.",
                f"A meter shows {shorted} between inner conductor and braid, as this element is meant to.",
            )
        )
    steps.append(
        Step(
            "Lead the cable away along the boom, square to the element, and tie it so that it does not pull on the "
            "joint.",
            "Pulling the cable moves the boom, not the joint.",
        )
    )
    return steps
