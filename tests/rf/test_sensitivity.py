"""Adjoint sensitivities against central differences of the whole solution: within 1 %."""

from dataclasses import replace

import pytest
from antennas import ONE_METRE_HZ, camera_5g8, gauge_868, thick_five

from boomwright.rf.basis import Options
from boomwright.rf.conductors import Folded, Loop, Rod, Wires
from boomwright.rf.sensitivity import DIMENSIONS, sensitivities
from boomwright.rf.solve import Model

UPRIGHT = Wires((Folded("DE", 0.0, 0.47, 0.02, 1e-3, 5e-3, upright=True), Rod("D1", 0.1, 0.44, 2e-3)))
LOOP = Wires((Loop("DE", 0.0, 1.05, 1e-3, 5e-3, "square"), Rod("D1", 0.15, 0.45, 2e-3)))


def by_differences(wires, index, dimension, frequency_hz, options):
    conductor = wires.conductors[index]
    step = 3e-4 * (conductor.radius_m if dimension == "diameter_m" else conductor.length_m)
    name, share = ("radius_m", 0.5) if dimension == "diameter_m" else (dimension, 1.0)
    ends = []
    for sign in (1.0, -1.0):
        changed = list(wires.conductors)
        changed[index] = replace(conductor, **{name: getattr(conductor, name) + sign * share * step})
        ends.append(Model(Wires(tuple(changed)), frequency_hz, options).solve(frequency_hz))
    return (
        (ends[0].impedance_ohm - ends[1].impedance_ohm) / (2 * step),
        (ends[0].gain_dbi - ends[1].gain_dbi) / (2 * step),
        (ends[0].front_to_back_db - ends[1].front_to_back_db) / (2 * step),
    )


@pytest.mark.parametrize(
    "wires, frequency_hz, indices",
    [
        (gauge_868(), 866.5e6, (1, 3)),
        (camera_5g8(), 5.8e9, (2,)),
        (UPRIGHT, ONE_METRE_HZ, (0, 1)),
        (LOOP, ONE_METRE_HZ, (0, 1)),
        pytest.param(thick_five(9.0), 5.8e9, range(5), marks=pytest.mark.slow),
    ],
    ids=["868 MHz", "5.8 GHz", "upright", "loop", "thick"],
)
def test_adjoint_agrees_with_differences(wires, frequency_hz, indices):
    model = Model(wires, frequency_hz)
    options = Options(azimuthal=model.mode.families > 0)
    _, found = sensitivities(model, frequency_hz)
    largest = [max(abs(value) for value in column) for column in zip(*map(numbers, found), strict=True)]
    for index in indices:
        for offset, dimension in enumerate(DIMENSIONS):
            each = found[len(DIMENSIONS) * index + offset]
            assert (each.tag, each.dimension) == (wires.conductors[index].tag, dimension)
            expected = by_differences(wires, index, dimension, frequency_hz, options)
            for value, wanted, scale in zip(numbers(each), expected, largest, strict=True):
                assert abs(value - wanted) <= 0.01 * abs(wanted) + 2e-4 * scale


def numbers(each):
    return each.impedance_ohm_m, each.gain_db_m, each.front_to_back_db_m


def test_heights_of_a_flat_antenna_have_no_first_order():
    _, found = sensitivities(Model(camera_5g8(), 5.8e9), 5.8e9)
    assert all(numbers(each) == (0, 0, 0) for each in found if each.dimension == "height_m")


def test_moving_everything_together_changes_nothing():
    """The sensitivities to all positions sum to 0."""
    _, found = sensitivities(Model(gauge_868(), 866.5e6), 866.5e6)
    along = [each for each in found if each.dimension == "at_m"]
    assert abs(sum(each.impedance_ohm_m for each in along)) < 1e-3 * max(abs(each.impedance_ohm_m) for each in along)
    assert abs(sum(each.gain_db_m for each in along)) < 1e-3 * max(abs(each.gain_db_m) for each in along)
