"""What keeps the current off the outside of the cable: the choke or balun for a frequency, an element and a cable.

All elements here (straight, folded, loop) are symmetric about the feed and the cable is not: without a choke its braid
becomes a third half of the element, which tilts the beam and shifts the match.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Literal

from boomwright.data.tables import Cable
from boomwright.rf.line import wavelength_in_line_m

Kind = Literal["ferrite choke", "sleeve", "half-wave balun"]
FERRITE_MOST_HZ = 300e6
"""Above it the loss and reactance of ferrites at hand fall off, and a quarter-wave sleeve is a hand's breadth long
(common practice)."""

SLEEVE_MOST_HZ = 10e9
"""Above it a sleeve is no longer than it is wide: the limit of the rule (common practice)."""

CHOKE_RATIO = 10.0
"""Least common-mode impedance over the cable's (common practice)."""

BEAD_OHM = 100.0
"""What one bead or clamp of nickel-zinc ferrite gives a cable passed once through it near 100 MHz (common practice;
its data sheet says more)."""

TURNS_MOST_HZ = 100e6
"""Below it a second and third turn through a core pay; above, the turns' own capacitance takes that back (common
practice)."""

TURNS = 3
SLEEVE_BORE_RATIO = 3.0
"""Bore of the sleeve over the cable's outer diameter (common practice: 2 to 4; wider is better over the band)."""

TURN_RADIUS_RATIO = 5.0
"""Least inner radius of a bend in flexible coax over its outer diameter (common practice)."""

STEP_UP = 4.0
STEP_UP_FROM = 2.5
"""A feed resistance this many times the system's is nearer to it divided by four."""

Figure = tuple[str, float, str]


@dataclass(frozen=True)
class Choke:
    """What to build.

    kind      the sort
    figures   name, value and unit (mm, ohm, or empty for a count) of every size
    divides   by how much the feed impedance is divided on its way to the cable: 1 or 4
    why       why this one, in words
    rules     what else to heed, in words; each a rule of the trade
    """

    kind: Kind
    figures: tuple[Figure, ...]
    divides: float
    why: str
    rules: tuple[str, ...]


def choose_choke(feed_ohm: complex, system_ohm: float, frequency_hz: float, cable: Cable) -> Choke:
    """The choke or balun to build.

    feed_ohm      impedance at the gap at the band's centre [ohm]
    system_ohm    what the cable wants to see [ohm]
    frequency_hz  the band's centre [Hz]
    cable         the coax

    A high feed resistance gets the half-wave balun, which also divides it by four; else ferrite up to 300 MHz, a
    quarter-wave sleeve above. Rules and their bounds are common practice; the lengths are [Balanis2016] ch. 9.
    """
    if divides_by_four(feed_ohm, system_ohm):
        return half_wave_balun(frequency_hz, cable, feed_ohm)
    return ferrite_choke(frequency_hz, cable) if frequency_hz <= FERRITE_MOST_HZ else sleeve(frequency_hz, cable)


def divides_by_four(feed_ohm: complex, system_ohm: float) -> bool:
    """Whether a quarter of the feed impedance suits the system better than all of it, and by enough to be worth it."""
    return feed_ohm.real >= STEP_UP_FROM * system_ohm


def half_wave_balun(frequency_hz: float, cable: Cable, feed_ohm: complex) -> Choke:
    """A loop of half a wavelength of the cable between both sides of the gap; the cable's braids joined at its ends."""
    loop_mm = 500.0 * wavelength_in_line_m(frequency_hz, cable.velocity_factor)
    figures: tuple[Figure, ...] = (
        ("length of the loop, braid to braid", loop_mm, "mm"),
        ("feed resistance", feed_ohm.real, "ohm"),
        ("the same behind the balun", feed_ohm.real / STEP_UP, "ohm"),
        *_bend(cable),
    )
    rules = (
        "the loop's length counts where its braid ends, not to the tips of the inner conductor",
        "join the braids of both ends of the loop and of the feed cable at one point, with tails as short as they go",
        "cable from another maker can have another velocity factor: take it from the drum's data sheet",
    )
    why = "half a wave turns the phase over: both sides of the gap are driven alike, and the resistance is divided"
    return Choke("half-wave balun", figures, STEP_UP, f"{why} by {STEP_UP:g}", rules)


def ferrite_choke(frequency_hz: float, cable: Cable) -> Choke:
    """Ferrite over the cable next to the feed, as many pieces as make the wanted impedance."""
    wanted = CHOKE_RATIO * cable.impedance_ohm
    turns = TURNS if frequency_hz <= TURNS_MOST_HZ else 1
    # An inductance goes with the turns squared; the loss that does most of the choking follows it.
    pieces = math.ceil(wanted / (BEAD_OHM * turns**2))
    figures: tuple[Figure, ...] = (
        ("common-mode impedance wanted, at least", wanted, "ohm"),
        ("one piece passed once, about", BEAD_OHM, "ohm"),
        ("pieces", float(pieces), ""),
        ("turns through each", float(turns), ""),
        ("bore of the ferrite, at least", cable.outer_diameter_mm * (1.0 if turns == 1 else 1.0 + turns), "mm"),
        *(_bend(cable) if turns > 1 else ()),
    )
    rules = (
        "take a nickel-zinc grade whose data sheet shows its impedance at this frequency",
        "set the first piece against the feed: a length of bare braid before it is a radiator",
    )
    return Choke(
        "ferrite choke", figures, 1.0, "at this frequency ferrite is shorter than a quarter-wave sleeve", rules
    )


def sleeve(frequency_hz: float, cable: Cable, dielectric_velocity: float = 1.0) -> Choke:
    """A tube over the cable, open toward the feed, joined to the braid a quarter wave behind it.

    dielectric_velocity   velocity factor of what fills the space between sleeve and braid: 1 = air
    """
    quarter_mm = 250.0 * wavelength_in_line_m(frequency_hz, dielectric_velocity)
    bore_mm = SLEEVE_BORE_RATIO * cable.outer_diameter_mm
    figures: tuple[Figure, ...] = (
        ("inside length of the sleeve", quarter_mm, "mm"),
        ("bore of the sleeve, about", bore_mm, "mm"),
        ("velocity factor between sleeve and braid", dielectric_velocity, ""),
        ("impedance between sleeve and braid, about", 59.96 * dielectric_velocity * math.log(SLEEVE_BORE_RATIO), "ohm"),
    )
    rules = [
        "the open end faces the feed and touches nothing; the other end is soldered to the braid all round",
        "centre the cable in the sleeve with rings of foam; a filling other than air shortens the sleeve",
        "the jacket is part of the filling: start a little long and trim until touching the cable changes nothing",
    ]
    if quarter_mm < 1.5 * bore_mm or frequency_hz > SLEEVE_MOST_HZ:
        rules.append(
            "the sleeve is hardly longer than it is wide: use thinner coax, or semi-rigid with a narrower bore"
        )
    why = "at this frequency a quarter wave is short enough for a tube, and ferrite does little"
    return Choke("sleeve", figures, 1.0, why, tuple(rules))


def _bend(cable: Cable) -> tuple[Figure, ...]:
    return (("inner radius of a bend, at least", TURN_RADIUS_RATIO * cable.outer_diameter_mm, "mm"),)
