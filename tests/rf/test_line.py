"""Matching lines against published worked values and against cascades of a general network library."""

import numpy as np
import pytest
import skrf

from boomwright.errors import InputFault
from boomwright.rf.feed import vswr
from boomwright.rf.line import (
    Line,
    Section,
    quarter_wave_sections,
    series_sections,
    shunt_stubs,
    transformed_ohm,
    wavelength_in_line_m,
)
from boomwright.rf.matching import Task, advise, candidates, rate

HZ = 866.5e6
AIR_50, AIR_75 = Line("50 ohm", 50.0, 1.0), Line("75 ohm", 75.0, 1.0)
PE_50, PE_75 = Line("50 ohm coax", 50.0, 0.66), Line("75 ohm coax", 75.0, 0.66)
LOADS = (151.7 + 61.1j, 26.7 + 12.3j, 84.5 + 11.2j, 22.3 + 2.2j, 60.0 - 80.0j, 50.0 + 20.0j)


def shares(match, frequency_hz=HZ):
    return [s.length_m / wavelength_in_line_m(frequency_hz, s.line.velocity_factor) for s in match.sections]


def cascade_ohm(sections, frequency_hz, load_ohm):
    """The same sections as scattering matrices, joined by scikit-rf."""
    band = skrf.Frequency.from_f(np.atleast_1d(frequency_hz), unit="hz")
    joined = None
    for section in sections:
        gamma = 2j * np.pi * band.f / (section.line.velocity_factor * 299792458.0)
        medium = skrf.media.DefinedGammaZ0(band, gamma=gamma, z0=section.line.impedance_ohm, z0_port=50.0)
        part = {"series": medium.line, "open stub": medium.shunt_delay_open, "short stub": medium.shunt_delay_short}
        piece = part[section.role](section.length_m, "m")
        joined = piece if joined is None else piece**joined
    load = skrf.Network(frequency=band, z=np.reshape(load_ohm, (-1, 1, 1)), z0=50.0)
    return (joined**load).z[:, 0, 0]


# Pozar, Microwave Engineering, example 5.2: ZL = 60 - j80 in 50 ohm; value from memory.
# Pozar, problem 5.3: ZL = 100 + j80 in 75 ohm, open stub; lengths of a reader's published solution, seen.
@pytest.mark.parametrize(
    ("load_ohm", "system_ohm", "ending", "expected", "tolerance"),
    [
        (60.0 - 80.0j, 50.0, "short", {(0.110, 0.095), (0.260, 0.405)}, 6e-4),
        (100.0 + 80.0j, 75.0, "open", {(0.2276410, 0.3776028), (0.4059113, 0.1223972)}, 1e-6),
    ],
)
def test_a_stub_has_the_textbooks_lengths(load_ohm, system_ohm, ending, expected, tolerance):
    found = {tuple(shares(m)) for m in shunt_stubs(load_ohm, HZ, Line("line", system_ohm, 0.7), ending)}
    for pair in expected:
        assert min(max(abs(a - b) for a, b in zip(pair, one, strict=True)) for one in found) < tolerance


def test_series_section_of_the_loads_own_line_is_a_pair_of_twelfth_waves():
    # 0.0815 wavelengths each from 50 to 75 ohm: D. T. Emerson's notes on Bramham's transformer (QST, June 1997), seen.
    # The closed form is tan^2 = 1 / (n + 1 + 1 / n), Bramham 1961, value from memory.
    match = series_sections(75.0, HZ, PE_50, PE_75)[0]
    assert shares(match) == pytest.approx([0.0815, 0.0815], abs=5e-5)
    assert shares(match)[0] == pytest.approx(np.arctan((1.5 + 1.0 + 1.0 / 1.5) ** -0.5) / (2 * np.pi), abs=1e-12)


def test_quarter_wave_between_real_impedances_is_the_geometric_mean():
    # Pozar, example 2.5: 100 ohm to 50 ohm by a quarter wave of 70.71 ohm; value from memory.
    match = next(m for m in quarter_wave_sections(100.0, HZ, AIR_50) if len(m.sections) == 1)
    assert match.sections[0].line.impedance_ohm == pytest.approx(70.71, abs=0.005)
    assert shares(match) == [0.25]


def test_velocity_factor_shortens_the_line():
    # A quarter wave at 145 MHz in cable of 0.66: 75 / 145 x 0.66 with c = 300 Mm/s, as handbooks give it: 0.341 m.
    assert wavelength_in_line_m(145e6, 0.66) / 4.0 == pytest.approx(0.341, abs=5e-4)


@pytest.mark.parametrize("load_ohm", LOADS)
def test_every_closed_form_matches_and_agrees_with_a_network_cascade(load_ohm):
    matches = [*quarter_wave_sections(load_ohm, HZ, PE_50), *series_sections(load_ohm, HZ, PE_50, PE_75)]
    matches += [m for ending in ("open", "short") for m in shunt_stubs(load_ohm, HZ, PE_50, ending)]
    assert len(matches) >= 4
    for match in matches:
        ours = transformed_ohm(match.sections, np.array([HZ]), np.array([load_ohm]))[0]
        assert ours == pytest.approx(50.0, abs=1e-9)
        assert cascade_ohm(match.sections, HZ, load_ohm)[0] == pytest.approx(50.0, abs=1e-6)


def test_off_its_frequency_a_match_is_what_the_cascade_says():
    grid = np.linspace(0.8, 1.2, 9) * HZ
    load = 30.0 + 40j * (grid / HZ - 1.0) + 10j
    sections = (
        Section("series", PE_50, 0.031),
        Section("short stub", PE_75, 0.02),
        Section("series", PE_75, 0.05),
        Section("open stub", PE_50, 0.013),
    )
    assert transformed_ohm(sections, grid, load) == pytest.approx(cascade_ohm(sections, grid, load), rel=1e-9)


def test_a_series_section_that_cannot_reach_is_not_offered():
    assert series_sections(500.0, HZ, PE_50, PE_75) == ()
    assert series_sections(50.0, HZ, PE_50, PE_75) == shunt_stubs(50.0, HZ, PE_50, "open") == ()


@pytest.mark.parametrize("load_ohm", [0.0 + 20.0j, -5.0 + 1.0j, complex(float("nan"), 1.0)])
def test_a_load_that_takes_no_power_is_refused(load_ohm):
    for match in (
        lambda: series_sections(load_ohm, HZ, PE_50, PE_75),
        lambda: shunt_stubs(load_ohm, HZ, PE_50, "short"),
        lambda: quarter_wave_sections(load_ohm, HZ, PE_50),
    ):
        with pytest.raises(InputFault, match="takes no power\n  fix: give an impedance with a resistance above 0"):
            match()


def task(load_ohm, cut_m=0.5e-3, slope_ohm=400.0, vswr_most=1.5):
    grid = np.linspace(846e6, 887e6, 42)
    load = load_ohm + 1j * slope_ohm * (grid / HZ - 1.0)
    return Task(grid, load, (863e6, HZ, 870e6), PE_50, (PE_75,), vswr_most, cut_m)


def test_advice_is_swept_with_the_antennas_own_impedance():
    asked = task(105.0 - 17.6j)
    advice = advise(asked)
    chosen = advice.chosen
    assert chosen.match is not None
    assert chosen.meets
    assert advice.plain.vswr_most > 2.0
    seen = cascade_ohm(chosen.match.sections, asked.frequency_hz, asked.load_ohm)
    assert chosen.vswr == pytest.approx([vswr(z, 50.0) for z in seen], rel=1e-6)
    # The span's ends are where the limit is crossed.
    for end in chosen.span_hz:
        edge = end in (asked.frequency_hz[0], asked.frequency_hz[-1])
        assert edge or float(np.interp(end, asked.frequency_hz, chosen.vswr)) == pytest.approx(1.5, abs=1e-9)
    assert all(rating.vswr_cut >= chosen.vswr_cut - 0.01 for rating in advice.others if rating.meets)


def test_a_steeper_antenna_has_a_narrower_match_and_a_looser_cut_a_worse_one():
    gentle, steep = (task(105.0 - 17.6j, slope_ohm=slope, vswr_most=1.2) for slope in (1000.0, 5000.0))
    match = candidates(gentle)[0]
    widths = [b - a for a, b in (rate(one, match).span_hz for one in (gentle, steep))]
    assert widths[1] < 0.5 * widths[0]
    assert rate(task(105.0, cut_m=3e-3), match).vswr_cut > rate(task(105.0, cut_m=1e-3), match).vswr_cut


def test_no_match_where_none_is_needed_or_none_can_be_cut():
    good = advise(task(48.0 + 3.0j))
    assert good.chosen is good.plain
    assert "none is needed" in good.why
    crude = advise(task(105.0 - 17.6j, cut_m=20e-3))
    assert crude.chosen.match is None
    assert crude.why.startswith("no match can be cut")
