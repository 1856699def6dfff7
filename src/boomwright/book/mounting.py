"""Mounting: mass, balance, wind, mast, and the dangers of high places."""

from __future__ import annotations

from boomwright.book.content import Block, Caution, Chapter, Facts, Heading, Paragraph, Step, Steps, Table, Topic
from boomwright.book.run import Run
from boomwright.book.words import figure, mm, rough
from boomwright.plan.mounting import (
    AIR_KG_M3,
    GUSTS_M_S,
    ROUND_DRAG,
    SQUARE_DRAG,
    View,
    balance_from_nearest,
    clamp_room_mm,
)

VIEW_WORDS: dict[View, str] = {
    "front": "from the front or rear, along the boom",
    "side": "from the side, along the rods",
    "flat": "square to boom and rods, as on rods that stand upright",
}


def chapter(run: Run) -> Chapter:
    """Where to hold it and what the wind does."""
    blocks: list[Block] = [
        Facts(_facts(run)),
        _mass_table(run),
        Heading("Wind"),
        _wind_table(run),
        Paragraph(
            f"Force = half of {figure(AIR_KG_M3)} kg/m³ x speed squared x drag x area, with {figure(ROUND_DRAG)} for "
            f"round bars and {figure(SQUARE_DRAG)} for square ones; nothing is taken off for one part behind another, "
            "nothing is added for ice. Gusts, ice and safety factors are your local code's."
        ),
        Heading("Putting it up"),
        Steps(tuple(_steps(run))),
    ]
    return Chapter("Mounting", "mounting", tuple(blocks))


def _facts(run: Run) -> tuple[tuple[str, str], ...]:
    mounting = run.mounting
    tag, ahead = balance_from_nearest(run.plan, mounting)
    low, high = clamp_room_mm(run.plan, mounting)
    rear = mounting.balance_mm - run.plan.seat.start_mm
    side = "ahead of" if ahead >= 0.0 else "behind"
    return (
        ("Mass without cable and fixings", f"{figure(mounting.mass_g, 1)} g"),
        ("Balance point, from the boom's rear end", mm(rear, 1)),
        ("The same, from the nearest seat", f"{mm(abs(ahead), 1)} {side} {tag}"),
        ("Free boom for a clamp there", f"{mm(high - low, 1)}, from {mm(low, 1)} to {mm(high, 1)} of the datum"),
    )


def _mass_table(run: Run) -> Table:
    rows = tuple(
        (one.name, one.material, figure(one.volume_mm3 / 1000.0), figure(one.mass_g), mm(one.at_mm, 1))
        for one in run.mounting.masses
    )
    head = ("Member", "Material", "Volume [ml]", "Mass [g]", "Centre from the datum")
    return Table(head, rows, "What it weighs, at the middle of each material's density range.")


def _wind_table(run: Run) -> Table:
    rows = []
    for view, words in VIEW_WORDS.items():
        forces = tuple(rough(run.mounting.wind_n(view, speed)) for speed in GUSTS_M_S)
        rows.append((words, figure(run.mounting.area_mm2(view) / 100.0, 1), *forces))
    head = ("Wind", "Area [cm²]", *(f"Force at {figure(speed)} m/s [N]" for speed in GUSTS_M_S))
    return Table(head, tuple(rows), "Wind area and force.")


def _cap_words(run: Run) -> tuple[str, str]:
    if not run.tips:
        return "File any sharp end of the wire round.", "A fingertip along the element finds no edge."
    return "Put a cap on every rod end.", f"{run.tips} caps are on."


def _steps(run: Run) -> list[Step]:
    low, high = clamp_room_mm(run.plan, run.mounting)
    rear = run.mounting.balance_mm - run.plan.seat.start_mm
    caps = Caution(
        "Rod ends are at eye height while you work, and afterwards if the antenna hangs low: put a soft cap on every "
        "end.",
        Topic.ROD_ENDS,
    )
    lines = Caution(
        "Keep mast and antenna away from overhead lines by more than the mast's whole length, also while it is "
        "raised or falls. Touching one kills.",
        Topic.OVERHEAD_LINES,
    )
    lightning = Caution(
        "Bond mast and braid to earth and fit an arrester as your local rules ask; a qualified person does it. Stay "
        "off mast and roof when thunder can be heard.",
        Topic.LIGHTNING,
    )
    worst = max(run.mounting.wind_n(view, max(GUSTS_M_S)) for view in VIEW_WORDS)
    wind = Caution(
        f"A gust of {figure(max(GUSTS_M_S))} m/s pulls with up to {rough(worst)} N at the top of your mast, the "
        "mast's own wind load added. Do not work at height in wind.",
        Topic.WIND,
    )
    structure = Caution(
        "Mast, wall fixing and roof are structural work: to the local code, by or with a qualified person.",
        Topic.STRUCTURE,
    )
    return [
        Step(*_cap_words(run), None, caps),
        Step(
            f"Balance the boom on a finger, {mm(rear, 1)} from its rear end, cable tied on.",
            f"It lies level. Clamp there, on the free boom between {mm(low, 1)} and {mm(high, 1)} of the datum; keep "
            "the clamp off every joint.",
        ),
        Step(
            "Turn the rods as those of the far station: level with level, upright with upright. A metal mast that "
            "runs along upright rods spoils the pattern: then hold the boom at its rear end, behind the reflector.",
            "Seen from the far station, both antennas' rods are parallel, and the front end points at it.",
        ),
        Step("Check mast and fixing against the wind table and your local code.", "They carry it.", None, structure),
        Step("Look up before you raise anything.", "No line is in reach.", None, lines),
        Step("Raise it on a calm day, two people.", "It points at the far station.", None, wind),
        Step("Earth it.", "A qualified person has checked bond and arrester.", None, lightning),
        Step(
            "Let the cable hang in a loop below the entry, and seal the connector.",
            "Rain drips off the loop's lowest point, and the reading is what it was on the ground.",
        ),
    ]
