"""Making the boom: its length, its grooves or holes, and the pocket at the feed."""

from __future__ import annotations

from boomwright.book.content import (
    Block,
    Caution,
    Chapter,
    Heading,
    Paragraph,
    Step,
    Steps,
    Table,
    Topic,
)
from boomwright.book.drawings import drawing_words
from boomwright.book.run import Run
from boomwright.book.words import counted, figure, listed, mm


def chapter(run: Run) -> Chapter:
    """From the bar to a boom with all its seats."""
    grooved = bool(run.plan.seat.grooves)
    title = "Grooving the boom" if grooved else "Drilling the boom"
    blocks: list[Block] = [
        *drawing_words(run, "boom"),
        Steps(tuple(_steps(run, grooved))),
    ]
    if run.plan.seat.grooves or run.plan.seat.holes:
        blocks.append(_seat_table(run))
    if words := _electrical(run):
        blocks += [Heading("What the boom does to the rods"), Paragraph(words)]
    return Chapter(title, "boom", tuple(blocks))


def _steps(run: Run, grooved: bool) -> list[Step]:
    seat, boom = run.plan.seat, run.plan.boom
    length = seat.end_mm - seat.start_mm
    dust = "Wood dust and metal chips" if not run.has_metal_boom else "Metal chips"
    caution = Caution(f"{dust} fly: wear glasses, use extraction, keep fingers behind the edge.", Topic.DUST)
    steps = [
        Step(
            f"Cut the boom to {mm(length)}, ends square. Mark the rear end and draw an arrow toward the front.",
            "It measures that from end to end, a square against each end shows no light, and the boom shows no bend "
            "when you sight along it.",
            None,
            caution,
        )
    ]
    if boom.wall_mm > 0.0 and run.has_resin:
        steps.append(
            Step(
                "Plug the tube's bore for the length of the resin mould with a cork of foam.",
                "The plug does not shift when pushed with a finger.",
            )
        )
    if run.has("wrap-template"):
        pages = int(run.size("wrap.pages"))
        steps.append(
            Step(
                f"Print the wrap template at true scale ({counted(pages, 'page')}), lay it round the boom, its end "
                "line at the boom's rear end, and prick every line through.",
                "The check bar on every page measures what stands beside it.",
            )
        )
    if run.has("groove-guide"):
        steps.append(
            Step(
                "Push the groove guide's first section on until the boom's rear end meets its wall, and tie it down.",
                "Every slot or bore stands over its mark on the boom.",
            )
        )
    elif not grooved or run.plan.seat.grooves:
        steps.append(
            Step(
                "Clamp the boom in a vice or on the mill's table; there is no groove guide "
                f"({run.why_not('groove-guide')}).",
                "A square against the boom shows the cutter standing across it.",
            )
        )
    steps += _groove_steps(run) if grooved else _hole_steps(run)
    if run.has("spacing-comb"):
        steps.append(
            Step(
                "Keep the spacing comb at hand: it checks the boom once the rods lie in it.",
                "Its slots stand over the seats when it is held beside the boom.",
            )
        )
    return steps


def _groove_steps(run: Run) -> list[Step]:
    seat = run.plan.seat
    deepest = max(seat.grooves, key=lambda g: g.depth_mm)
    steps = [
        Step(
            "File or mill each groove with its own round tool, straight across, until it has its depth. All rods' "
            "axes then lie on one plane, whatever their diameters.",
            f"The rod drops in and rests on the bottom; the deepest groove, {deepest.tag}, measures "
            f"{mm(deepest.depth_mm)} below the boom's top.",
        )
    ]
    for groove in seat.grooves:
        if groove.pocket is not None:
            steps.append(
                Step(
                    f"Widen the groove of {groove.tag} in the middle to a pocket {mm(2.0 * groove.pocket.half_x_mm)} "
                    f"along and {mm(2.0 * groove.pocket.half_y_mm)} across the boom, as deep as the groove.",
                    "The gap of the driven element lies free in it with room for the solder joints.",
                )
            )
    return steps


def _hole_steps(run: Run) -> list[Step]:
    holes = run.plan.seat.holes
    if not holes:
        return [Step("Leave the boom as it is: nothing passes through it.", "No seat is missing on the drawing.")]
    sizes = sorted({figure(hole.diameter_mm) for hole in holes})
    return [
        Step(
            f"Drill the holes square through the boom's middle, {listed(sizes)} mm wide, from both sides toward the "
            "middle.",
            "A rod pushed through stands square to the boom in both views.",
        )
    ]


def _seat_table(run: Run) -> Table:
    start = run.plan.seat.start_mm
    rows = [
        (g.tag, mm(g.at_mm), mm(g.at_mm - start), mm(2.0 * g.radius_mm), mm(g.depth_mm)) for g in run.plan.seat.grooves
    ]
    rows += [(h.tag, mm(h.at_mm), mm(h.at_mm - start), mm(h.diameter_mm), "through") for h in run.plan.seat.holes]
    head = ("Seat", "From the datum", "From the rear end", "Width", "Depth")
    return Table(head, tuple(rows), "Every seat: its place along the boom, its width and depth.")


def _electrical(run: Run) -> str:
    boom, seat = run.plan.boom, run.plan.wished_seat
    if not run.has_metal_boom:
        return (
            f"The {boom.material} boom does not conduct, but it slows the wave a little: expect the antenna to read "
            "slightly low in frequency. The prediction does not count it; the lengths are used as the design gives "
            "them."
        )
    if seat.kind == "through" and seat.bond == "insulated":
        return (
            f"The rods pass through the {boom.material} boom in sleeves of {mm(seat.sleeve_mm)} and must not touch it. "
            "The boom still shortens them electrically, less than a bonded one does. The prediction does not count "
            "it. Check with a meter that no rod touches the boom: a rod that does works as another length."
        )
    if seat.kind == "through":
        return (
            f"The rods are bonded to the {boom.material} boom: current flows across it, and every rod works as if it "
            "were shorter, so the antenna reads high in frequency. The prediction does not count it; a design for "
            "such a boom has its rods longer by that. Every joint must conduct: one that corrodes shifts its rod."
        )
    return (
        f"The rods lie in grooves of a {boom.material} boom with adhesive between: whether they touch it is left to "
        "chance, and each that does works as another length. Check every rod against the boom with a meter: all must "
        "touch or none. The prediction does not count the boom."
    )
