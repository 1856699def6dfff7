"""Gluing the rods to the boom, in the cradle where there is one."""

from __future__ import annotations

from boomwright.book.content import Block, Caution, Chapter, Paragraph, Picture, Step, Steps, Topic
from boomwright.book.run import CRADLES, Run
from boomwright.book.shopping import adhesive_ml
from boomwright.book.words import counted, figure, listed, mm


def chapter(run: Run) -> Chapter:
    """From loose parts to rods that sit where they belong for good."""
    if not run.first_glued:
        words = "No rod is glued to this boom: "
        words += "see the next chapter for the driven element." if run.is_glued else "resin carries the driven element."
        return Chapter("Gluing the rods", "gluing", (Paragraph(words),))
    blocks: list[Block] = [Paragraph(_intro(run)), Steps(tuple(_steps(run)))]
    return Chapter("Gluing the rods", "gluing", tuple(blocks))


def _intro(run: Run) -> str:
    name = run.design.adhesive.name
    if run.has(*CRADLES) and run.plan.seat.grooves:
        return (
            "The antenna lies in the cradle upside down: the rods below, the boom on top with its grooves facing "
            f"down. The adhesive ({name}) hangs in the grooves while it cures, so it must not slump: try a bead on the "
            "underside of a scrap first."
        )
    if run.has(*CRADLES):
        return (
            f"The rods go through the boom first; then boom and rods lie in the cradle while the adhesive ({name}) "
            "cures."
        )
    whys = listed(dict.fromkeys(run.why_not(part) for part in CRADLES if part in run.manifest.left_out))
    return (
        f"This run has no cradle ({whys or run.why_not(CRADLES[0])}). Work on a flat plate with packing under the "
        "boom, and check every rod with square and rule."
    )


def _steps(run: Run) -> list[Step]:
    steps = [_try_step(run), _clean_step(run)]
    steps += _groove_steps(run) if run.plan.seat.grooves else _through_steps(run)
    steps += [_cure_step(run), _lift_step(run), *_final_steps(run)]
    return steps


def _try_step(run: Run) -> Step:
    tags = listed(run.held_tags)
    if not run.has(*CRADLES):
        return Step(f"Lay everything together dry: boom, {tags}.", "Every rod seats without force and stands square.")
    play = 2.0 * run.shop.printer.slide_clearance_mm
    aside = sum(1 for stem in run.pieces("cradle") if "outrigger" in stem)
    pieces = len(run.pieces("cradle")) - aside
    joined = _join_words(pieces, aside)
    through = [hole.tag for hole in run.plan.seat.holes]
    if through:
        lay = f"Push {listed(through)} through the boom dry, stand the cradle flat and lay all in it: {tags}."
    else:
        lay = (
            f"Stand the cradle flat, its arrow pointing the way the boom's will. Lay {tags} in their notches, each "
            "between its stops, then the boom on its saddles."
        )
    return Step(
        f"{joined}{lay}",
        f"Nothing rocks, every rod turns freely and has about {mm(play)} of play along its length, and the boom "
        "touches all saddles but no rod carries it.",
        Picture.CRADLE_RODS,
    )


def _join_words(sections: int, outriggers: int) -> str:
    words = ""
    if sections > 1:
        words = (
            f"On one flat board, let the {sections} sections of the cradle down into each other's joints in the order "
            "of their numbers, faces butting, and screw them to the board. "
        )
    if outriggers:
        words += f"Set the {counted(outriggers, 'outrigger')} to the rails the same way: they carry the end stops. "
    return words


def _clean_step(run: Run) -> Step:
    caution = Caution(
        f"{_capital(run.design.adhesive.name)} and solvents give off vapours and harm the skin: open a window, wear "
        "gloves and glasses, read the safety sheet.",
        Topic.ADHESIVE,
    )
    return Step(
        "Take boom and rods out again. Roughen rods and seats where they meet, and wipe them with a solvent that "
        "leaves nothing behind.",
        "A drop of water spreads on the rod instead of pearling. Do not touch the places again.",
        None,
        caution,
    )


def _groove_steps(run: Run) -> list[Step]:
    tags = run.first_glued
    each = adhesive_ml(run.plan, tags) / len(tags)
    later = [groove.tag for groove in run.plan.seat.grooves if groove.tag not in tags]
    empty = f" Leave the groove of {listed(later)} empty: it is glued later." if later else ""
    gap, relief = run.plan.wished_seat.glue_gap_mm, run.shop.cradle.relief_mm
    steps = []
    if run.has(*CRADLES):
        steps.append(
            Step(
                f"Lay {listed(run.held_tags)} back in the cradle by their tags.",
                "Each came from the place in the rack whose tag is engraved beside its notch.",
                Picture.CRADLE_RODS,
            )
        )
    steps.append(
        Step(
            "Mix the adhesive as its data sheet says. Turn the boom's grooves up and put a bead of about "
            f"{figure(1000.0 * each, 0)} cubic millimetres in the bottom of the grooves of {listed(tags)}, none "
            f"within {mm(relief)} of the boom's faces.{empty}",
            "Each bead stays where it is when you tilt the boom. If it creeps, it is the wrong adhesive for this.",
        )
    )
    where = "into the saddles of the cradle" if run.has(*CRADLES) else "onto the rods"
    steps.append(
        Step(
            f"Turn the boom over in one go, grooves down, and lower it straight {where}: this is the joint that must "
            "not slump upside down.",
            f"A thin line of adhesive shows at both sides of each rod, no drop hangs, and the film is about {mm(gap)}.",
            Picture.CRADLE_BOOM if run.has(*CRADLES) else None,
        )
    )
    if run.has(*CRADLES):
        steps.append(_tie_step(run))
    return steps


def _through_steps(run: Run) -> list[Step]:
    holes, seat = run.plan.seat.holes, run.plan.wished_seat
    tags = listed(hole.tag for hole in holes)
    steps = []
    if seat.bond == "insulated":
        steps.append(
            Step(
                f"Push a sleeve into each hole and fix it with a touch of adhesive: {tags}.",
                "The sleeve is flush with the boom on both sides, and its bore is free of adhesive.",
            )
        )
    if seat.bond == "bonded" and run.has_metal_boom:
        steps.append(
            Step(
                f"Bond {tags} so that metal meets metal: bright surfaces, a conducting joint, then adhesive round it.",
                "A meter shows no resistance between every rod and the boom.",
            )
        )
    steps.append(
        Step(
            f"Push {tags} through and set each to stand out alike on both sides. Run adhesive round each where it "
            "enters.",
            "A rule shows the same length on both sides of the boom, and a ring of adhesive all round.",
        )
    )
    if seat.bond == "insulated" and run.has_metal_boom:
        steps.append(
            Step(
                "Touch every rod and the boom with a meter's leads.",
                "It shows no contact between any rod and the boom.",
            )
        )
    if run.has(*CRADLES):
        steps.append(
            Step(
                "Lay boom and rods into the cradle before the adhesive draws on.",
                "Every rod lies in both its notches and between its stops.",
                Picture.CRADLE_BOOM,
            )
        )
        steps.append(_tie_step(run))
    return steps


def _tie_step(run: Run) -> Step:
    return Step(
        f"Tie the boom down at each of the {run.saddles} saddles through the slots, hand tight. Wipe off what has "
        "squeezed out.",
        "The boom touches the saddles, every rod still lies in its notches, and no adhesive comes nearer to the "
        f"cradle than {mm(run.shop.cradle.relief_mm)}.",
        Picture.CRADLE_BOOM,
    )


def _cure_step(run: Run) -> Step:
    return Step(
        f"Let {run.design.adhesive.name} cure for the time that its own data sheet gives for the temperature of your "
        "room. Do not move anything. Handling strength is not cured.",
        "What is left in the mixing cup is hard and does not take a fingernail.",
    )


def _lift_step(run: Run) -> Step:
    if not run.has(*CRADLES):
        return Step("Take the packing away.", "No rod moves when you press on its end.")
    return Step(
        "Cut the ties. Push the rods up through the windows under them, a little at each in turn, and lift the "
        "antenna by its boom, never by a rod.",
        "It comes off in one piece, no adhesive sticks to the cradle, and no joint cracks.",
    )


def _final_steps(run: Run) -> list[Step]:
    steps = []
    if run.has("spacing-comb"):
        steps.append(
            Step(
                "Drop the spacing comb over the antenna beside the boom, from above.",
                "It goes down all the way by its own weight: every rod is in its place.",
            )
        )
    else:
        places = listed(f"{rod.tag} {mm(rod.at_mm)}" for rod in run.design.rods)
        steps.append(
            Step("Measure every rod's place from the datum.", f"They are: {places}." if places else "All is well.")
        )
    if not run.driven_lies:
        steps.append(
            Step(
                "Put the antenna aside with room under it: the driven element is fitted next.",
                "Looking along the boom, all rods are one line.",
            )
        )
    else:
        steps.append(Step("Look along the boom from the front.", "All rods are one line, and none is turned."))
    return steps


def _capital(words: str) -> str:
    return f"{words[0].upper()}{words[1:]}" if words else words
