"""From a design to its conductors, and the document of `predict`."""

import json
from dataclasses import replace
from math import isfinite

import pytest
from samples import CAMERA, CAMERA_FOLDED, GAUGE, LOOP_868, UPRIGHT_868

from boomwright.prediction import predict, sweep_frequencies_mhz
from boomwright.rf.conductors import Folded, Loop, Rod
from boomwright.rf.document import design_sensitivities, document
from boomwright.rf.wires import design_warnings, wires_of

DESIGNS = [CAMERA, CAMERA_FOLDED, GAUGE, LOOP_868, UPRIGHT_868]
LONE = replace(CAMERA, rods=(), boom=None, seat=None)


def test_lengths_become_metres_and_order_follows_the_boom():
    wires = wires_of(GAUGE)
    assert [conductor.tag for conductor in wires.conductors] == ["R", "DE", "D1", "D2"]
    assert [conductor.at_m for conductor in wires.conductors] == pytest.approx([0.0, 0.062, 0.095, 0.15])
    rod, driven = wires.conductors[:2]
    assert (rod.length_m, rod.radius_m, rod.gap_m) == pytest.approx((0.168, 0.0015, 0.0))
    assert isinstance(driven, Folded)
    assert (driven.length_m, driven.spacing_m, driven.gap_m) == pytest.approx((0.158, 0.012, 0.004))
    assert rod.conductivity_s_m == 1.57e7  # brass, Ramo, Whinnery & Van Duzer (value from memory)
    assert wires.fed == 1


def test_every_form_has_its_conductor():
    kinds = [type(wires_of(design).conductors[wires_of(design).fed]) for design in DESIGNS]
    assert kinds == [Rod, Folded, Folded, Loop, Folded]
    upright = wires_of(UPRIGHT_868)
    assert upright.conductors[upright.fed].upright


def test_ideal_metal_loses_nothing():
    rods = tuple(replace(rod, material="ideal") for rod in CAMERA.rods)
    perfect = replace(CAMERA, rods=rods, driven=replace(CAMERA.driven, material="ideal"))
    assert predict(perfect, (5800.0,)).sweep.efficiency[0] == 1.0
    assert 0.9 < predict(CAMERA, (5800.0,)).sweep.efficiency[0] < 1.0


def test_a_coat_is_taken_at_the_middle_of_its_range():
    rods = tuple(replace(rod, coat_mm=0.1, coat_material="acrylic paint") for rod in GAUGE.rods)
    painted = replace(GAUGE, rods=rods)
    coat = wires_of(painted).conductors[0].coat
    assert (coat.thickness_m, coat.permittivity, coat.loss_tangent) == pytest.approx((1e-4, 3.35, 0.03))
    assert (
        design_warnings(painted)[-1] == "coats of R, D1, D2 are taken at the middle of their material's working range"
    )
    assert predict(painted, (866.5,)).sweep.impedance_ohm[0] != predict(GAUGE, (866.5,)).sweep.impedance_ohm[0]


def test_what_the_equations_leave_out_is_said():
    assert design_warnings(GAUGE) == (
        "the 12 mm round beech boom (dielectric) is not in the equations: "
        "expect the built antenna to read a little lower",
        "adhesive, resin and mould are not in the equations",
    )
    for metal in ("aluminium", "ideal"):
        warning = design_warnings(replace(GAUGE, boom=replace(GAUGE.boom, material=metal)))[0]
        assert "(metal)" in warning and warning.endswith("read a little higher")
    assert design_warnings(LONE) == ()


def test_frequencies_cover_the_band_and_as_much_again():
    found = sweep_frequencies_mhz(CAMERA)
    assert len(found) == 61
    assert (found[0], found[-1]) == (5575.0, 6025.0)
    assert {5725.0, 5875.0} <= set(found)
    assert list(found) == sorted(set(found))
    narrow = sweep_frequencies_mhz(GAUGE)
    assert narrow[0] == pytest.approx(863.0 - 0.02 * 866.5)


@pytest.mark.parametrize("design", [*DESIGNS, LONE], ids=lambda design: design.name)
def test_document_holds_what_is_promised_and_never_nan(design):
    frequencies = (design.band.high_mhz, design.band.low_mhz)
    found = document(design, predict(design, frequencies).sweep, design_sensitivities(LONE))
    text = json.dumps(found, allow_nan=False)
    assert json.loads(text) == found
    assert found["name"] == design.name
    assert found["frequency_mhz"] == sorted(frequencies)
    for name in ("vswr", "return_loss_db", "gain_dbi", "directivity_dbi", "efficiency", "front_to_back_db"):
        assert len(found[name]) == 2
        assert all(isfinite(value) for value in found[name])
    assert set(found["half_power_beamwidth_deg"]) == {"e_plane", "h_plane"}
    assert [each["tag"] for each in found["conductors"]] == [c.tag for c in wires_of(design).conductors]
    assert [each["dimension"] for each in found["sensitivity"]] == ["length_mm", "at_mm", "height_mm", "diameter_mm"]


def test_a_lone_dipole_is_a_dipole():
    found = predict(LONE, (5800.0,)).sweep.solutions[0]
    assert found.gain_dbi == pytest.approx(2.1, abs=0.1)
    assert found.front_to_back_db == pytest.approx(0.0, abs=1e-9)
