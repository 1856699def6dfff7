"""The reduced model against the whole solver, and its slopes against differences."""

from dataclasses import replace

import numpy as np
import pytest
from antennas import BRASS_S_M, COPPER_S_M, MM

from boomwright.rf.basis import Mode, Options, planner_of
from boomwright.rf.conductors import Folded, Rod, Wires
from boomwright.rf.solve import Model
from boomwright.search.family import Family
from boomwright.search.reduced import Axis, Kind

FREQUENCIES_HZ = (855e6, 866.5e6, 880e6)
PLACES_MM = (0.0, 45.0, 112.0, 170.0, 262.0)
LENGTHS_MM = (167.0, 153.0, 149.0, 137.0, 146.0)
REFLECTOR = Rod("R", 0.0, 167 * MM, 1.5 * MM, conductivity_s_m=BRASS_S_M)
DIRECTOR = Rod("D1", 0.0, 146 * MM, 1.5 * MM, conductivity_s_m=BRASS_S_M)
STRAIGHT = Rod("DE", 0.0, 153 * MM, 1.5 * MM, gap_m=4 * MM, conductivity_s_m=COPPER_S_M)
FOLDED = Folded("DE", 0.0, 153 * MM, 12 * MM, 1 * MM, 4 * MM, conductivity_s_m=COPPER_S_M)


def array(driven):
    """The five conductors at their places."""
    kinds = (REFLECTOR, driven, DIRECTOR, DIRECTOR, DIRECTOR)
    tags = ("R", "DE", "D1", "D2", "D3")
    return Wires(
        tuple(
            replace(kind, tag=tag, at_m=at * MM, length_m=length * MM)
            for kind, tag, at, length in zip(kinds, tags, PLACES_MM, LENGTHS_MM, strict=True)
        )
    )


def family(driven, mode=None):
    shift_m = driven.spacing_m if isinstance(driven, Folded) else 0.0
    kinds = (
        Kind(REFLECTOR, 0.155, 0.190, 3),
        Kind(driven, 0.138, 0.170, 3, shift_m),
        Kind(DIRECTOR, 0.115, 0.160, 4),
    )
    planner = planner_of(array(driven), FREQUENCIES_HZ[-1], Options())
    return Family(kinds, replace(planner, mode=mode or planner.mode), (0.02, 0.28), FREQUENCIES_HZ)


@pytest.fixture(scope="module", params=[STRAIGHT, FOLDED], ids=["straight", "folded"])
def made(request):
    return request.param, family(request.param, Mode(0, 0))


def sizes():
    return np.array(LENGTHS_MM) * MM, np.array(PLACES_MM) * MM


def test_figures_are_those_of_the_whole_solver(made):
    driven, reduced = made
    found = reduced.figures(*sizes())
    model = Model(array(driven), FREQUENCIES_HZ[-1], Options(azimuthal=False))
    for index, frequency_hz in enumerate(FREQUENCIES_HZ):
        solved = model.solve(frequency_hz)
        assert found.gain_dbi[index] == pytest.approx(solved.gain_dbi, abs=0.002)
        assert found.front_to_back_db[index] == pytest.approx(solved.front_to_back_db, abs=0.02)
        assert abs(found.impedance_ohm[index] - solved.impedance_ohm) < 0.002 * abs(solved.impedance_ohm)


def test_slopes_agree_with_differences(made):
    _, reduced = made
    lengths, places = sizes()
    found = reduced.figures(lengths, places)
    count, step = len(lengths), 1e-6
    for column in (0, 1, 2, 4, count + 1, count + 2, count + 3):
        ends = []
        for sign in (1.0, -1.0):
            moved = np.concatenate([lengths, places])
            moved[column] += sign * step
            ends.append(reduced.figures(moved[:count], moved[count:]))
        for name, slopes in (
            ("impedance_ohm", found.impedance_slopes),
            ("gain_dbi", found.gain_slopes),
            ("front_to_back_db", found.front_to_back_slopes),
        ):
            difference = (getattr(ends[0], name) - getattr(ends[1], name)) / (2.0 * step)
            assert np.abs(slopes[:, column] - difference).max() < 1e-4 * np.abs(slopes).max()


def test_moving_everything_together_changes_nothing(made):
    """Slopes to all places sum to 0."""
    _, reduced = made
    found = reduced.figures(*sizes())
    together = found.gain_slopes[:, len(LENGTHS_MM) :]
    assert np.abs(together.sum(axis=1)).max() < 1e-6 * np.abs(together).max()


@pytest.mark.slow
def test_current_round_thick_rods_is_carried_too():
    """Four millimetre rods at 5.8 GHz, where current varies round the rods."""
    rods = [
        Rod("R", 0.0, 24 * MM, 2 * MM),
        Rod("DE", 10 * MM, 22 * MM, 2 * MM, gap_m=2 * MM),
        Rod("D1", 20 * MM, 20 * MM, 2 * MM),
        Rod("D2", 31 * MM, 19.5 * MM, 2 * MM),
    ]
    model = Model(Wires(tuple(rods)), 5.8e9)
    assert model.mode.families == 1
    kinds = [replace(rod, at_m=0.0) for rod in rods[:3]]
    spans = ((0.022, 0.027, 3), (0.019, 0.024, 3), (0.017, 0.022, 4))
    tabulated = tuple(Kind(kind, *span) for kind, span in zip(kinds, spans, strict=True))
    reduced = Family(tabulated, model.planner, (9.5 * MM, 32 * MM), (5.8e9,))
    found = reduced.figures(np.array([r.length_m for r in rods]), np.array([r.at_m for r in rods]))
    solved = model.solve(5.8e9)
    assert found.gain_dbi[0] == pytest.approx(solved.gain_dbi, abs=0.003)
    assert abs(found.impedance_ohm[0] - solved.impedance_ohm) < 0.005 * abs(solved.impedance_ohm)


def test_axis_is_exact_for_polynomials():
    axis = Axis(0.3, 1.7, 5)
    values = axis.places**4 - 2.0 * axis.places
    places = np.array([0.3, 0.55, 1.0, 1.69])
    plain, slope = axis.weights(places)
    assert plain @ values == pytest.approx(places**4 - 2.0 * places, abs=1e-12)
    assert slope @ values == pytest.approx(4.0 * places**3 - 2.0, abs=1e-9)
