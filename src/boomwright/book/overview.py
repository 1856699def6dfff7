"""What this antenna is and does: its figures against the spec, its charts, what the equations leave out."""

from __future__ import annotations

from boomwright.book.content import Block, Chapter, Facts, Figure, Heading, Paragraph, Picture, Table
from boomwright.book.run import Run
from boomwright.book.words import counted, figure, listed, mhz, mm, ohms, span, with_article
from boomwright.rf.feed import vswr

FORMS = {"straight": "straight", "folded": "folded", "loop": "loop"}


def chapter(run: Run) -> Chapter:
    """The first chapter."""
    blocks: list[Block] = [
        Paragraph(_sentence(run)),
        Figure(Picture.ANTENNA, "The finished antenna. It radiates toward the front end, away from the reflector."),
        Facts(_facts(run)),
        Heading("What it should do over the band"),
        _band_table(run),
        Paragraph(_verdict(run)),
        Figure(Picture.GAIN, "Gain over the sweep; the band is marked."),
        Figure(Picture.FRONT_TO_BACK, "Front-to-back over the sweep."),
        Figure(Picture.VSWR, f"VSWR in {figure(run.design.feed.system_ohm)} ohm at the feed gap over the sweep."),
        Figure(Picture.E_PLANE, "Pattern in the plane of the rods, at the band's centre."),
        Figure(Picture.H_PLANE, "Pattern across the rods, at the band's centre."),
        Figure(Picture.CURRENTS, "Currents of all conductors, at the band's centre."),
    ]
    blocks.append(Heading("What to take with doubt"))
    blocks += [Paragraph(words) for words in _doubts(run)]
    return Chapter("What this antenna is", "overview", tuple(blocks))


def _sentence(run: Run) -> str:
    design = run.design
    band, name = design.band, design.title or design.name
    directors = sum(1 for rod in design.rods if rod.role == "director")
    with_reflector = any(rod.role == "reflector" for rod in design.rods)
    parts = ["a reflector"] if with_reflector else []
    parts.append(with_article(f"{_form(run)} driven element"))
    if directors:
        parts.append(counted(directors, "director"))
    elements = f"{name} is a beam for {band.low_mhz:.7g} to {mhz(band.high_mhz)}, made of {listed(parts)}"
    boom = run.plan.boom
    return f"{elements} on {with_article(f'{mm(boom.width_mm)} {boom.section} {boom.material} boom')}."


def _form(run: Run) -> str:
    driven = run.design.driven
    if driven.form == "folded":
        return f"{driven.plane} folded"
    return f"{driven.shape} loop" if driven.form == "loop" else "straight"


def _facts(run: Run) -> tuple[tuple[str, str], ...]:
    seat, mounting, choke = run.plan.seat, run.mounting, run.choke
    facts = [
        ("Band", f"{run.design.band.low_mhz:.7g} to {mhz(run.design.band.high_mhz)}"),
        ("Length of the boom", mm(seat.end_mm - seat.start_mm)),
        ("Largest size across", mm(run.across_mm, 0)),
        ("Mass without cable and fixings", f"{figure(mounting.mass_g, 1)} g"),
        ("Impedance at the feed gap, at the band's centre", ohms(run.feed_ohm)),
        ("Cable", run.cable.name if run.cable else "none named in the design"),
    ]
    if choke is not None:
        facts.append(("Between gap and cable", choke.kind))
    return tuple(facts)


def _band_table(run: Run) -> Table:
    found, inside, spec = run.prediction.sweep, list(run.prediction.in_band), run.design.spec
    wished = (
        (f"{figure(spec.gain_dbi_min)} or more" if spec and spec.gain_dbi_min is not None else "-"),
        (f"{figure(spec.front_to_back_db_min)} or more" if spec and spec.front_to_back_db_min is not None else "-"),
        (f"{figure(spec.vswr_max)} or less" if spec and spec.vswr_max is not None else "-"),
    )
    rows = [
        ("Gain [dBi]", span(found.gain_dbi[inside].tolist()), wished[0]),
        ("Front-to-back [dB]", span(found.front_to_back_db[inside].tolist(), 1), wished[1]),
        ("VSWR at the feed gap", span(found.vswr[inside].tolist()), wished[2]),
        *_behind_balun(run, inside),
        ("Efficiency [%]", span((100.0 * found.efficiency[inside]).tolist(), 1), "-"),
    ]
    beams = (("in the plane of the rods", found.beamwidth_e_deg), ("across the rods", found.beamwidth_h_deg))
    for plane, widths in beams:
        known = [width for i, width in enumerate(widths) if i in inside and width is not None]
        rows.append((f"Half-power beamwidth {plane} [deg]", span(known, 0) if known else "none", "-"))
    return Table(("Figure", "Predicted over the band", "Spec"), tuple(rows), "Predicted figures against the spec.")


def _behind_balun(run: Run, inside: list[int]) -> list[tuple[str, str, str]]:
    """A row for the VSWR that the cable sees, where a balun divides the impedance."""
    if run.choke is None or run.divides == 1.0:
        return []
    ratios = [vswr(complex(run.cable_ohm[i]), run.design.feed.system_ohm) for i in inside]
    return [(f"VSWR behind the {run.choke.kind}", span(ratios), "-")]


def _verdict(run: Run) -> str:
    if run.design.spec is None:
        return "The design states no spec: the figures above are what to expect."
    if not run.prediction.shortfalls:
        return "The prediction meets the spec over the whole band."
    words = "; ".join(str(short) for short in run.prediction.shortfalls)
    balun = " The spec is judged at the gap; the cable sees what the balun makes of it." if run.divides != 1.0 else ""
    return f"The prediction does not meet the spec: {words}.{balun}"


def _doubts(run: Run) -> tuple[str, ...]:
    """What the solver doubts, and what of the antenna its equations leave out."""
    left_out = ["the boom", "the adhesive"] if run.is_glued else ["the boom"]
    left_out += ["the resin"] if run.has_resin else []
    left_out += ["the cable"] if run.cable is not None else []
    found = [f"The prediction counts the conductors alone: {listed(left_out)} are not in it. Expect a small shift."]
    found += [_sentence_case(words) for words in run.prediction.sweep.warnings]
    coated = [one.tag for one in run.design.rods if one.coat_mm > 0.0]
    coated += ["DE"] if run.design.driven.coat_mm > 0.0 else []
    if coated:
        found.append(f"The coats of {listed(coated)} are taken at the middle of their material's working range.")
    return tuple(found)


def _sentence_case(words: str) -> str:
    return f"{words[0].upper()}{words[1:]}."
