"""What `predict` states: its frequencies, its document, its table, its warnings, and the spec judged."""

import itertools
import json
import math
from dataclasses import replace
from pathlib import Path

import pytest
import samples

from boomwright.design.model import Band, Boom, Design, Driven, Spec
from boomwright.design.tomlfile import write_design
from boomwright.errors import DesignFault, InputFault
from boomwright.prediction import (
    band_points_mhz,
    predict,
    predict_file,
    solve_apart,
    sweep_frequencies_mhz,
)
from boomwright.rf.wires import wires_of
from boomwright.spec import shortfalls

DIPOLE = Design(
    "dipole-300",
    Band(298.0, 302.0, 300.0),
    Driven("straight", 0.0, 2.0, "ideal", 4.0, length_mm=474.0),
)
LOOP = Design(
    "loop-300",
    Band(298.0, 302.0, 300.0),
    Driven("loop", 0.0, 2.0, "copper", 4.0, perimeter_mm=999.3, shape="circle"),
)
KEYS = [
    "name",
    "frequency_mhz",
    "impedance_ohm",
    "vswr",
    "return_loss_db",
    "gain_dbi",
    "directivity_dbi",
    "efficiency",
    "front_to_back_db",
    "front_to_rear_db",
    "half_power_beamwidth_deg",
    "conductors",
    "warnings",
    "sensitivity",
]
BEAM_868 = replace(samples.GAUGE, name="beam-868")


def refuse(constant: str) -> float:
    raise AssertionError(f"{constant} in the document")


def document(design: Design, at_mhz: tuple[float, ...] = ()) -> dict:
    return json.loads(predict(design, at_mhz).as_json(), parse_constant=refuse)


BANDS = {
    "as usual": (Band(863.0, 870.0, 866.5), 845.67, 887.33),
    "narrow": (Band(433.05, 434.79, 433.92), 433.05 - 0.02 * 433.92, 434.79 + 0.02 * 433.92),
    "one channel": (Band(433.90, 433.94, 433.92), 433.90 - 0.02 * 433.92, 433.94 + 0.02 * 433.92),
    "centre at the edge": (Band(100.0, 110.0, 100.0), 90.0, 120.0),
    "octaves": (Band(10.0, 30.0, 20.0), 1.0, 50.0),
    "centre aside": (Band(100.0, 200.0, 110.0), 10.0, 300.0),
}


@pytest.mark.parametrize("points", [4, 5, 6, 61, 500])
@pytest.mark.parametrize("name", BANDS)
def test_a_sweep_is_the_band_widened_and_holds_its_edges(name: str, points: int) -> None:
    band, lowest, highest = BANDS[name]
    found = sweep_frequencies_mhz(replace(DIPOLE, band=band), points)
    assert len(found) == points
    assert all(a < b for a, b in itertools.pairwise(found))
    assert found[0] == pytest.approx(lowest)
    assert found[-1] == pytest.approx(highest)
    assert {band.low_mhz, band.high_mhz} <= set(found)
    assert band.centre_mhz in found or points == 4


def test_a_sweep_of_61_points_is_even_but_for_its_marks() -> None:
    found = sweep_frequencies_mhz(BEAM_868)
    step = (found[-1] - found[0]) / 60
    gaps = [b - a for a, b in itertools.pairwise(found)]
    assert max(gaps) <= 1.5 * step
    assert sum(gap == pytest.approx(step) for gap in gaps) >= 54


def test_the_document_has_exactly_its_keys_and_lists_run_with_the_frequencies() -> None:
    found = document(BEAM_868)
    assert list(found) == KEYS
    assert found["name"] == "beam-868"
    for key in KEYS[1:10]:
        assert len(found[key]) == 61, key
    assert {len(values) for values in found["half_power_beamwidth_deg"].values()} == {61}
    assert [row["tag"] for row in found["conductors"]] == ["R", "DE", "D1", "D2"]
    assert [len(row["current_ratio"]) for row in found["conductors"]] == [2] * 4
    assert len(found["sensitivity"]) == 4 * 4


def test_return_loss_and_vswr_and_impedance_tell_one_story() -> None:
    found = document(BEAM_868)
    for (re, im), vswr, loss_db in zip(found["impedance_ohm"], found["vswr"], found["return_loss_db"], strict=True):
        size = abs((complex(re, im) - 50.0) / (complex(re, im) + 50.0))
        assert vswr == pytest.approx((1.0 + size) / (1.0 - size), rel=1e-6)
        assert loss_db == pytest.approx(-20.0 * math.log10(size), abs=1e-5)


def test_asked_frequencies_are_those_and_no_others() -> None:
    assert document(BEAM_868, (863.1, 866.5, 870.123456))["frequency_mhz"] == [863.1, 866.5, 870.123456]


def test_a_lone_dipole_needs_neither_boom_nor_rods() -> None:
    found = document(DIPOLE, (300.0,))
    # Half-wave dipole: 2.15 dBi, 78 degrees (Balanis, Antenna Theory, 4.6; values from memory).
    assert found["gain_dbi"][0] == pytest.approx(2.15, abs=0.05)
    assert found["half_power_beamwidth_deg"]["e_plane"][0] == pytest.approx(78.0, abs=1.0)
    assert found["half_power_beamwidth_deg"]["h_plane"] == [None]
    assert found["front_to_back_db"][0] == pytest.approx(0.0, abs=1e-6)
    assert found["efficiency"] == [1.0]
    assert found["warnings"] == []


def test_a_lone_loop_is_solved() -> None:
    # Circular loop of one wavelength: 3.45 dBi (value from memory).
    assert document(LOOP, (300.0,))["gain_dbi"][0] == pytest.approx(3.45, abs=0.1)


def test_figures_do_not_hang_on_the_sweep() -> None:
    swept = predict(BEAM_868)
    frequencies = swept.frequency_mhz
    for mark, alone in zip(
        band_points_mhz(BEAM_868),
        solve_apart(wires_of(BEAM_868), band_points_mhz(BEAM_868), frequencies[-1]),
        strict=True,
    ):
        index = frequencies.index(mark)
        assert swept.sweep.gain_dbi[index] == pytest.approx(alone.gain_dbi, abs=1e-4)
        assert swept.sweep.impedance_ohm[index] == pytest.approx(alone.impedance_ohm, rel=1e-5)


def test_a_design_is_solved_once_a_process() -> None:
    assert predict(BEAM_868) is predict(replace(BEAM_868))


@pytest.mark.parametrize(("material", "kind"), [("beech", "dielectric"), ("aluminium", "metal")])
def test_a_boom_that_is_not_in_the_equations_is_named(material: str, kind: str) -> None:
    boom = Boom("round", 12.0, material, 30.0, 20.0)
    warnings = predict(replace(BEAM_868, boom=boom), (866.5,)).warnings
    assert any(f"{material} boom ({kind}) is not in the equations" in each for each in warnings)
    assert any("adhesive, resin" in each for each in warnings)


def test_a_sweep_far_from_the_design_is_doubted() -> None:
    assert any("0.5 to 1.5" in each for each in predict(DIPOLE, (100.0, 300.0)).warnings)


def test_the_table_has_a_line_a_frequency() -> None:
    lines = predict(BEAM_868, (863.0, 866.5)).as_text().splitlines()
    assert lines[0].split() == ["MHz", "R", "ohm", "X", "ohm", "VSWR", "RL", "dB", "dBi", "F/B", "dB", "eff", "%"]
    assert [line.split()[0] for line in lines[1:3]] == ["863.000", "866.500"]
    assert lines[4].startswith("half-power beamwidth at 866.5 MHz: E-plane ")
    assert lines[5].startswith("863 to 866.5 MHz: gain ")
    assert max(map(len, lines[:4])) <= 80


def with_spec(**limits: float) -> Design:
    return replace(BEAM_868, spec=Spec(**limits))


CURVES = {
    "frequency_mhz": [850.0, 863.0, 866.5, 870.0, 880.0],
    "gain_dbi": [1.0, 9.2, 9.1, 8.9, 1.0],
    "front_to_back_db": [1.0, 11.5, 12.0, 13.0, 1.0],
    "vswr": [9.0, 1.75, 1.2, 1.4, 9.0],
}


@pytest.mark.parametrize(
    ("limits", "text"),
    [
        ({"gain_dbi_min": 9.0}, "spec.gain_dbi_min: gain is 8.9 dBi at 870 MHz, 0.1 dB below 9 dBi"),
        (
            {"front_to_back_db_min": 12.0},
            "spec.front_to_back_db_min: front-to-back is 11.5 dB at 863 MHz, 0.5 dB below 12 dB",
        ),
        ({"vswr_max": 1.5}, "spec.vswr_max: VSWR is 1.75 at 863 MHz, 0.25 above 1.5"),
    ],
    ids=["gain", "front-to-back", "vswr"],
)
def test_a_figure_that_is_not_met_says_which_where_and_by_how_much(limits: dict[str, float], text: str) -> None:
    assert [str(each) for each in shortfalls(with_spec(**limits), **CURVES)] == [text]


def test_only_the_band_is_judged_and_only_against_a_spec() -> None:
    assert shortfalls(with_spec(gain_dbi_min=8.9, front_to_back_db_min=11.5, vswr_max=1.75), **CURVES) == ()
    assert len(shortfalls(with_spec(gain_dbi_min=20.0, front_to_back_db_min=40.0, vswr_max=1.01), **CURVES)) == 3
    assert shortfalls(BEAM_868, **CURVES) == ()
    assert shortfalls(with_spec(), **CURVES) == ()


def test_the_worst_figure_of_the_band_is_the_sweep_s_own() -> None:
    found = predict(with_spec(vswr_max=1.0001))
    (one,) = found.shortfalls
    inside = list(found.in_band)
    assert one.value == found.sweep.vswr[inside].max()
    assert found.sweep.vswr[found.frequency_mhz.index(one.frequency_mhz)] == one.value
    assert "spec not met" in found.band_line


def test_conductors_that_touch_are_a_fault_of_the_design_s_key() -> None:
    crowded = replace(BEAM_868, rods=(*BEAM_868.rods[:2], replace(BEAM_868.rods[2], at_mm=97.0)))
    with pytest.raises(DesignFault) as caught:
        predict(crowded)
    (fault,) = caught.value.faults
    assert fault.path == "rod[1].at_mm"
    assert fault.found.startswith("D1 and D2 touch: axes 2.000 mm apart")


def test_what_radiates_nothing_is_a_fault() -> None:
    tiny = replace(LOOP.driven, diameter_mm=0.2, gap_mm=0.4, perimeter_mm=5.0)
    with pytest.raises(DesignFault) as caught:
        predict(replace(LOOP, driven=tiny), (10.0,))
    assert str(caught.value) == (
        "driven: at 10 MHz less than 1e-08 of the power is radiated: this is no antenna\n"
        "  fix: check that sizes are in mm and frequencies in MHz"
    )


@pytest.mark.parametrize("at_mhz", [10.0, 30.0, 1200.0])
def test_far_from_resonance_every_figure_is_finite_or_null(at_mhz: float) -> None:
    for design in (DIPOLE, LOOP, replace(LOOP, driven=replace(LOOP.driven, material="ideal"))):
        found = document(design, (at_mhz,))
        assert found["vswr"][0] >= 1.0
        assert found["return_loss_db"][0] >= 0.0


ARGUMENTS = {
    "not a number": (((math.nan,), None), "--at-mhz: nan is not a frequency in use\n  fix: give 10 to 20000 MHz"),
    "too low": (((9.9,), None), "--at-mhz: 9.9 is not a frequency in use\n  fix: give 10 to 20000 MHz"),
    "far above": (
        ((19_000.0,), None),
        "--at-mhz: 19000 is far above the band, which ends at 870\n  fix: give frequencies up to 3480 MHz",
    ),
    "too few": (((), 3), "--points: 3 points\n  fix: give 4 to 2001"),
    "too many": (((), 10**9), "--points: 1000000000 points\n  fix: give 4 to 2001"),
    "both": (
        ((866.0,), 61),
        "--points: given beside --at-mhz, which sweeps nothing\n  fix: leave one of them out",
    ),
}


@pytest.mark.parametrize("case", ARGUMENTS)
def test_arguments_out_of_bounds(case: str, tmp_path: Path) -> None:
    (at_mhz, points), text = ARGUMENTS[case]
    path = tmp_path / "beam.toml"
    path.write_text(write_design(BEAM_868))
    with pytest.raises(InputFault) as caught:
        predict_file(path, at_mhz, points)
    assert str(caught.value) == text
