"""Radio exposure: how far to stay away, by which formula and limit, and where that holds."""

from __future__ import annotations

from boomwright.book.content import Block, Caution, Chapter, Facts, Heading, Paragraph, Step, Steps, Table, Topic
from boomwright.book.run import Run
from boomwright.book.words import figure, metres, rough
from boomwright.design.model import Transmitter
from boomwright.rf.exposure import (
    GROUND_REFLECTION,
    Distance,
    Source,
    distances,
    eirp_w,
    far_field_m,
    reactive_m,
)
from boomwright.units import hz_from_mhz, m_from_mm

POWERS_W = (0.1, 1.0, 10.0)
"""What the table is for where the design states no transmitter."""


def source_of(run: Run, transmitter: Transmitter) -> Source:
    """What a transmitter on this antenna radiates: the largest gain in the band, all its power taken by the antenna."""
    band = run.design.band
    ends = (hz_from_mhz(band.low_mhz), hz_from_mhz(band.high_mhz))
    return Source(eirp_w(transmitter.power_w, run.most_gain_dbi), transmitter.duty, ends, m_from_mm(run.across_mm))


def chapter(run: Run) -> Chapter:
    """Distances for the stated transmitter, or for common powers."""
    stated = run.design.transmitter
    sources = [(t, source_of(run, t)) for t in ([stated] if stated else [Transmitter(power) for power in POWERS_W])]
    first = sources[0][1]
    blocks: list[Block] = [Paragraph(_intro(run)), Facts(_facts(run, first))]
    known = distances(first)
    if known:
        blocks += [_distance_table(transmitter, source) for transmitter, source in sources]
        blocks.append(Paragraph(_formula_words()))
    else:
        words = (
            "The tables that the program ships state no power density limit over this whole band: at low frequencies "
            "the limits are field strengths close to the antenna, which a far-field formula cannot give. Ask your "
            "regulator."
        )
        blocks.append(Paragraph(words))
    blocks += [Heading("Before you transmit"), Steps(tuple(_steps(run, sources, known)))]
    return Chapter("Radio exposure", "exposure", tuple(blocks))


def _intro(run: Run) -> str:
    if run.design.transmitter is None:
        return "The design states no transmitter. The tables are for common powers, always on; put yours in the design."
    t = run.design.transmitter
    return f"For {figure(t.power_w, 4)} W at the feed, {figure(100.0 * t.duty)} percent of the time on the air."


def _facts(run: Run, source: Source) -> tuple[tuple[str, str], ...]:
    facts = [("Largest gain in the band", f"{figure(run.most_gain_dbi)} dBi")]
    if run.design.transmitter is not None:
        facts.append(("EIRP", f"{rough(source.eirp_w, 3)} W"))
    return (
        *facts,
        ("Reactive near field reaches to", metres(reactive_m(source))),
        ("Far field begins at", metres(far_field_m(source))),
    )


def _distance_table(transmitter: Transmitter, source: Source) -> Table:
    rows = tuple(_row(one) for one in distances(source))
    caption = (
        f"{figure(transmitter.power_w, 4)} W, {figure(100.0 * transmitter.duty)} percent on the air, EIRP "
        f"{rough(source.eirp_w, 3)} W."
    )
    head = ("Guideline", "For", "Limit [W/m²]", "Averaged over", "Free field", "With the ground", "Keep")
    return Table(head, rows, caption)


def _row(one: Distance) -> tuple[str, ...]:
    return (
        one.limit.guideline,
        one.limit.population,
        figure(one.limit_w_m2),
        one.limit.averaging,
        f"{metres(one.free_m)} ({one.region})",
        metres(one.ground_m),
        metres(one.stated_m),
    )


def _formula_words() -> str:
    return (
        "Power density = EIRP x duty / (four pi x distance squared), in the middle of the beam. With the ground it is "
        f"{figure(GROUND_REFLECTION)} times that, the cautious case; the distance to keep is taken from it. In the "
        "radiating near field the formula overstates, in the reactive near field it says nothing: no distance to keep "
        "is ever inside that. The duty counts only if it also holds within the averaging time. Local rules go first."
    )


def _steps(run: Run, sources: list[tuple[Transmitter, Source]], known: tuple[Distance, ...]) -> list[Step]:
    transmitter, source = max(sources, key=lambda pair: pair[1].eirp_w)
    keep = max((one.stated_m for one in distances(source)), default=reactive_m(source))
    whose = "" if known else ", at the very least, beyond the reactive near field,"
    exposure = Caution(
        f"At {figure(transmitter.power_w, 4)} W keep everybody{whose} {metres(keep)} or more from the antenna in its "
        "beam, and never touch it while it transmits.",
        Topic.EXPOSURE,
    )
    licence = Caution(
        "Power, band, duty and antenna gain are limited by law, and most transmitting needs a licence: ask your "
        "regulator for the radiated power that is allowed here.",
        Topic.LICENCE,
    )
    return [
        Step(
            "Place the antenna so that nobody can stand in front of it within the distance to keep.",
            f"A tape from the antenna shows {metres(keep)} of free way to where people can be.",
            None,
            exposure,
        ),
        Step(
            f"Compare the radiated power ({rough(source.eirp_w, 3)} W EIRP at {figure(transmitter.power_w, 4)} W) "
            "with what your regulator allows in this band.",
            "It is below the limit, cable loss left out.",
            None,
            licence,
        ),
    ]
