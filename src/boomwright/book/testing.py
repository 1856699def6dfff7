"""Testing: what the analyser should show, with limits, and what each deviation means."""

from __future__ import annotations

from boomwright.book.content import Block, Chapter, Figure, Heading, Paragraph, Picture, Step, Steps, Table
from boomwright.book.measurement import (
    DEEPEST_DB,
    DEVIATIONS,
    Reading,
    driven_mm_per_mhz,
    effects,
    gain_spread_db,
    readings,
)
from boomwright.book.run import Run
from boomwright.book.words import figure, mhz, mm, ohms, rough
from boomwright.rf.sensitivity import Dimension

MOST_ROWS = 11
MOST_EFFECTS = 8
LEAST_TOLD_DB = 3.0
"""A smaller difference drowns in what the ground reflects (common practice)."""

DIMENSION_WORDS: dict[Dimension, str] = {
    "length_m": "length",
    "at_m": "place",
    "height_m": "height",
    "diameter_m": "diameter",
}


def chapter(run: Run) -> Chapter:
    """What to expect on the bench and in the open."""
    found = readings(run)
    blocks: list[Block] = [
        Steps(tuple(_steps(run, found))),
        Figure(Picture.VSWR, "VSWR at the feed gap over the sweep: the shape to look for."),
        _reading_table(run, found),
        Paragraph(_limit_words(run)),
        Heading("What a deviation means"),
        _deviation_table(run, found),
        Heading("Which dimension does what"),
        _effect_table(run),
    ]
    return Chapter("Testing", "testing", tuple(blocks))


def _steps(run: Run, found: tuple[Reading, ...]) -> list[Step]:
    low, high = run.prediction.frequency_mhz[0], run.prediction.frequency_mhz[-1]
    best = max(found, key=lambda reading: reading.return_loss_db)
    where = "behind the balun" if run.divides != 1.0 else "at the feed gap, choke in place"
    away = run.across_mm * 2.0 / 1000.0
    return [
        Step(
            f"Hang the antenna on a dry wooden stand or a cord, pointing up or at open ground, {figure(away, 1)} m or "
            "more clear of metal, walls and yourself.",
            "Moving it by its own length changes nothing on the analyser.",
        ),
        Step(
            f"Calibrate the analyser from {mhz(low)} to {mhz(high)} at the end of the cable that you connect, with "
            "open, short and load.",
            "With the load on, it shows no reflection; with the short, a point that does not wander.",
        ),
        Step(
            f"Connect it {where}, or at the end of a half wave of cable from there, and read the return loss.",
            f"It is inside the limits of the table, best near {mhz(best.frequency_mhz)}.",
        ),
        Step("Touch and move the cable.", "The curve stands still."),
        Step(
            "Wet the feed point with a sponge.",
            "The curve stands still. If it moves, water reaches the joint: pot or seal it.",
        ),
        Step(
            "In the open, turn the antenna to a far weak source and away from it.",
            _back_words(run),
        ),
    ]


def _back_words(run: Run) -> str:
    level_db = float(run.prediction.sweep.front_to_back_db[run.prediction.middle])
    if level_db < LEAST_TOLD_DB:
        return "Front and back are predicted nearly alike: the difference does not tell much."
    return f"The difference comes near {figure(level_db, 0)} dB; reflections around you can hide half of it."


def table_indices(count: int, keep: tuple[int, ...], most: int = MOST_ROWS) -> tuple[int, ...]:
    """Indices of about `most` of `count` rows, evenly, those to keep among them."""
    step = max((count - 1) // (most - 1), 1)
    return tuple(sorted({*range(0, count, step), *keep, count - 1}))


def _reading_table(run: Run, found: tuple[Reading, ...]) -> Table:
    inside = run.prediction.in_band
    kept = (inside[0], run.prediction.middle, inside[-1])
    rows = []
    for i in table_indices(len(found), kept):
        one = found[i]
        high = "deeper" if one.high_db >= DEEPEST_DB else figure(one.high_db, 1)
        mark = "in the band" if i in inside else "-"
        cells = (ohms(one.impedance_ohm), figure(one.vswr), figure(one.return_loss_db, 1), figure(one.low_db, 1), high)
        rows.append((f"{one.frequency_mhz:.7g}", *cells, mark))
    head = ("MHz", "Impedance", "VSWR", "Return loss [dB]", "At least [dB]", "At most [dB]", "Where")
    where = "behind the balun, " if run.divides != 1.0 else ""
    caption = f"What the analyser should show, {where}before any matching section, in "
    return Table(head, tuple(rows), f"{caption}{figure(run.design.feed.system_ohm)} ohm.")


def _limit_words(run: Run) -> str:
    a = run.shop.accuracy
    return (
        f"The limits hold for a shop as true as yours says ({mm(a.length_mm)} in length, {mm(a.position_mm)} in place, "
        f"{mm(a.height_mm)} in height, {mm(a.diameter_mm)} in diameter, one standard deviation each), at "
        f"{figure(DEVIATIONS)} standard deviations to first order. The gain then spreads by "
        f"{rough(gain_spread_db(run))} dB. Boom, resin, adhesive and cable are not counted: they can shift the whole "
        "curve a little to the side."
    )


def _deviation_table(run: Run, found: tuple[Reading, ...]) -> Table:
    per_mhz = driven_mm_per_mhz(run)
    worst = effects(run)[0]
    best = max(found, key=lambda reading: reading.return_loss_db)
    if per_mhz is not None:
        size = f"about {rough(per_mhz)} mm for each MHz"
    else:
        size = "length alone does not settle it here; compare with the table of dimensions"
    shallow = f"{worst.tag} {DIMENSION_WORDS[worst.dimension]}"
    rows = (
        (
            "The whole dip lies low in frequency",
            "the driven element or all rods too long",
            f"shorten the driven: {size}",
        ),
        ("The whole dip lies high in frequency", "the driven element or all rods too short", f"make it longer: {size}"),
        (
            f"The dip is at {mhz(best.frequency_mhz)} but shallower than the limit",
            "a place or a length wrong, or a parasitic joint",
            f"check {shallow} first: it matters most at your accuracy",
        ),
        ("Ripple, or the curve moves when the cable is touched", "current on the braid", "fit or move the choke"),
        (
            "Flat over the whole sweep, no dip, return loss near nothing",
            "feed open or shorted; what loss is left is twice the cable's",
            "check both joints with a meter",
        ),
        (
            "Deep over the whole sweep, no dip",
            "loss: wet or burnt cable, or the load still on",
            "measure the cable alone, then calibrate again",
        ),
        (
            "Two dips close together",
            "a rod touches something, or one rod is of another length",
            "check with comb and gauge",
        ),
        ("Drifts with the weather", "water in joint or cable, or bare wood", "seal, dry, varnish"),
    )
    return Table(("What you see", "What it means", "What to do"), rows, "Reading the analyser.")


def _effect_table(run: Run) -> Table:
    rows = []
    for one in effects(run)[:MOST_EFFECTS]:
        change = one.impedance_ohm_mm
        sign = "+" if change.imag >= 0.0 else "-"
        rows.append(
            (
                f"{one.tag} {DIMENSION_WORDS[one.dimension]}",
                f"{rough(change.real)} {sign} j{rough(abs(change.imag))}",
                f"{rough(one.return_loss_db_mm)}",
                f"{rough(one.gain_db_mm)}",
                mm(one.allowed_mm),
            )
        )
    head = ("One millimetre more of", "Impedance [ohm]", "Return loss [dB]", "Gain [dB]", "Your shop holds")
    return Table(head, tuple(rows), "The dimensions that matter most here, at the band's centre, to first order.")
