"""The feed: cable lengths, choke or balun, and the match where one is needed."""

from __future__ import annotations

from boomwright.book.content import Block, Chapter, Facts, Heading, Paragraph, Step, Steps, Table
from boomwright.book.run import COAX_CUT_MM, Run
from boomwright.book.words import figure, mhz, mm, ohms, span
from boomwright.data.tables import Cable, cables
from boomwright.rf.choke import Choke, divides_by_four
from boomwright.rf.line import Section, wavelength_in_line_m
from boomwright.rf.matching import Rating
from boomwright.units import MM_PER_M


def chapter(run: Run) -> Chapter:
    """What stands between the gap and the radio."""
    blocks: list[Block] = [Facts(_facts(run)), Heading("Lengths in the cable"), _length_table(run)]
    if run.cable is None or run.choke is None or run.match is None:
        words = (
            "The design names no cable, so choke and match are not sized. Put `feed.coax` in the design and make "
            "again. Whatever cable you take: the element is symmetric and the cable is not, so a choke belongs at the "
            "feed."
        )
        blocks.append(Paragraph(words))
        if divides_by_four(run.feed_ohm, run.design.feed.system_ohm):
            high = f"The feed resistance of {figure(run.feed_ohm.real, 0)} ohm"
            blocks.append(Paragraph(f"{high} asks for a half-wave balun, which divides it."))
        return Chapter("The feed", "feed", tuple(blocks))
    if run.cable.impedance_ohm != run.design.feed.system_ohm:
        blocks.append(Paragraph(_two_systems(run, run.cable)))
    blocks += [Heading("Keep the current off the cable's outside"), *_choke_blocks(run.choke)]
    blocks += [Heading("Matching"), *_match_blocks(run)]
    return Chapter("The feed", "feed", tuple(blocks))


def _facts(run: Run) -> tuple[tuple[str, str], ...]:
    facts = [
        ("Impedance at the gap, at the band's centre", ohms(run.feed_ohm)),
        ("System", f"{figure(run.design.feed.system_ohm)} ohm"),
    ]
    if run.cable is not None:
        facts.append(("Cable", f"{run.cable.name}, {figure(run.cable.impedance_ohm)} ohm"))
        facts.append(("Velocity factor", figure(run.cable.velocity_factor, 3)))
    if run.divides != 1.0:
        facts.append(("Behind the balun", ohms(run.feed_ohm / run.divides)))
    return tuple(facts)


def _length_table(run: Run) -> Table:
    rows = []
    for cable in [run.cable] if run.cable is not None else list(cables()):
        whole = MM_PER_M * wavelength_in_line_m(run.centre_hz, cable.velocity_factor)
        rows.append(
            (cable.name, figure(cable.velocity_factor, 3), mm(whole / 4.0, 1), mm(whole / 2.0, 1), mm(whole, 1))
        )
    head = ("Cable", "Velocity factor", "Quarter wave", "Half wave", "Whole wave")
    caption = (
        f"Lengths at {mhz(run.design.band.centre_mhz)}. A half wave of any cable repeats the impedance at its end."
    )
    return Table(head, tuple(rows), caption)


def _two_systems(run: Run, cable: Cable) -> str:
    return (
        f"The design is judged in {figure(run.design.feed.system_ohm)} ohm, the cable has "
        f"{figure(cable.impedance_ohm)} ohm: matches below are made for the cable."
    )


def _choke_blocks(choke: Choke) -> list[Block]:
    rows = tuple((name, figure(value, 2 if unit != "ohm" else 0), unit or "-") for name, value, unit in choke.figures)
    return [
        Paragraph(
            "The element is symmetric and the cable is not. Without a choke the outside of the braid becomes part of "
            "the antenna: the beam tilts, and the reading changes when you touch the cable."
        ),
        Paragraph(f"Take a {choke.kind}: {choke.why}. Its rules are common practice."),
        Table(("Size", "Value", "Unit"), rows, f"The {choke.kind}."),
        Steps(tuple(_choke_steps(choke))),
    ]


def _choke_steps(choke: Choke) -> list[Step]:
    steps = [Step(f"{rule[0].upper()}{rule[1:]}.", _rule_check(rule)) for rule in choke.rules]
    steps.append(
        Step(
            "With the analyser connected, slide a hand along the cable behind it.",
            "The reading stands still. If it moves, the choke is missing, too short or in the wrong place.",
        )
    )
    return steps


def _rule_check(rule: str) -> str:
    if "open end" in rule or "braids" in rule:
        return "A meter shows contact where it is soldered and none where it is open."
    if "jacket" in rule:
        return "With the analyser on, a hand round the cable behind the sleeve changes nothing."
    if "centre the cable" in rule:
        return "The space between cable and sleeve is the same all round."
    if "length" in rule:
        return "A rule laid along it, braid to braid, shows the length of the table."
    return "You have the data sheet beside you."


def _match_blocks(run: Run) -> list[Block]:
    advice = run.match
    assert advice is not None
    blocks: list[Block] = [Paragraph(f"{advice.why[0].upper()}{advice.why[1:]}.")]
    if advice.chosen.match is None:
        return blocks
    sections = advice.chosen.match.sections
    rows = tuple(
        (str(n), _role(section), section.line.name, mm(section.length_m * MM_PER_M, 1))
        for n, section in enumerate(sections, 1)
    )
    blocks += [
        Table(("From the antenna", "What", "Line", "Length"), rows, f"The match: {advice.chosen.match.kind}."),
        Facts(_match_facts(run, advice.chosen)),
        Steps(tuple(_match_steps(sections))),
    ]
    if others := [one for one in advice.others if one.match is not None]:
        blocks.append(_others_table(run, others))
    return blocks


def _role(section: Section) -> str:
    return {"series": "in the line", "open stub": "stub across it, open", "short stub": "stub across it, shorted"}[
        section.role
    ]


def _match_facts(run: Run, chosen: Rating) -> tuple[tuple[str, str], ...]:
    facts = [
        ("VSWR in the band, cut exactly", f"{figure(chosen.vswr_most)} or less"),
        (f"VSWR in the band, every cut off by {mm(COAX_CUT_MM)}", f"{figure(chosen.vswr_cut)} or less"),
    ]
    if chosen.span_hz is not None:
        ends = span([value / 1e6 for value in chosen.span_hz], 1)
        facts.append((f"VSWR {figure(run.vswr_wished)} or less from, to", f"{ends} MHz (within the sweep)"))
    return tuple(facts)


def _match_steps(sections: tuple[Section, ...]) -> list[Step]:
    steps = []
    for number, section in enumerate(sections, 1):
        length = mm(section.length_m * MM_PER_M, 1)
        if section.role == "series":
            words = (
                f"Cut {length} of {section.line.name}, counted where the braid ends, and join it as number {number}."
            )
        else:
            end = "open" if section.role == "open stub" else "soldered braid to inner conductor"
            words = (
                f"Join a stub of {length} of {section.line.name} across the line as number {number}, its far end {end}."
            )
        steps.append(Step(words, f"It measures that within {mm(COAX_CUT_MM)}, and no tail is longer than it must be."))
    steps.append(
        Step(
            "Measure at the far end of the match before you seal the joints.",
            "The VSWR is as in the facts above; if it is best beside the band, the sections are too long or too short.",
        )
    )
    return steps


def _others_table(run: Run, others: list[Rating]) -> Table:
    rows = []
    for one in others:
        assert one.match is not None
        sizes = ", ".join(f"{_role(s)}: {mm(s.length_m * MM_PER_M, 1)} of {s.line.name}" for s in one.match.sections)
        rows.append((one.match.kind, sizes, figure(one.vswr_most), figure(one.vswr_cut)))
    head = ("Match", "From the antenna", "VSWR in the band", f"With cuts {mm(COAX_CUT_MM)} off")
    return Table(head, tuple(rows), "Other matches, the more forgiving first.")
