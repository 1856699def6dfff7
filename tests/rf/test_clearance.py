"""Conductors that touch, cross, lie inside one another or cannot exist are faults, never a singular matrix."""

from dataclasses import replace

import pytest
from antennas import gauge_868

from boomwright.errors import DesignFault
from boomwright.rf.conductors import Folded, Loop, Rod, Wires
from boomwright.rf.solve import solve_at
from boomwright.rf.validity import geometry_warnings

DIPOLE = Rod("DE", 0.0, 0.48, 1e-3, gap_m=0.01)
FOLDED = Folded("DE", 0.0, 0.47, 0.02, 1e-3, 5e-3)


def fault(*conductors):
    with pytest.raises(DesignFault) as caught:
        solve_at(Wires(conductors), 3e8)
    return str(caught.value)


@pytest.mark.parametrize(
    "second, what",
    [
        (Rod("D1", 0.0015, 0.4, 1e-3), "axes 1.500 mm apart, radii 2.000 mm together"),
        (Rod("D1", 0.0, 0.4, 1e-3), "axes 0.000 mm apart, radii 2.000 mm together"),
        (Rod("D1", 0.0, 0.2, 5e-3), "axes 0.000 mm apart, radii 6.000 mm together"),
    ],
    ids=["touch", "one place", "inside"],
)
def test_rods_in_one_place(second, what):
    assert fault(DIPOLE, second) == f"DE: DE and D1 touch: {what}\n  fix: move them apart or make them thinner"


def test_rod_through_a_folded_element():
    assert "DE and D1 touch" in fault(FOLDED, Rod("D1", 0.02, 0.4, 1e-3))
    assert "DE and D1 touch" in fault(replace(FOLDED, upright=True), Rod("D1", 0.0, 0.49, 1e-3))


def test_rod_between_the_sides_of_a_folded_element_is_no_fault():
    assert solve_at(Wires((FOLDED, Rod("D1", 0.01, 0.40, 1e-3))), 3e8).impedance_ohm.real > 0


def test_rod_through_a_loop():
    loop = Loop("DE", 0.0, 1.0, 1e-3, 5e-3)
    assert "DE and D1 touch" in fault(loop, Rod("D1", 0.0, 0.40, 1e-3))
    assert solve_at(Wires((loop, Rod("D1", 0.0, 0.2, 1e-3))), 3e8).impedance_ohm.real > 0


def test_sides_of_one_conductor():
    assert fault(replace(FOLDED, spacing_m=1.9e-3)) == (
        "DE: the two sides of DE touch: axes 1.900 mm apart, radii 2.000 mm together\n"
        "  fix: move them apart or make them thinner"
    )


def test_all_faults_come_at_once():
    text = fault(replace(DIPOLE, length_m=-0.1), Rod("D1", 0.1, float("nan"), 0.0))
    assert text.splitlines()[::2] == [
        "DE.length_m: -0.1 is not a length",
        "D1.length_m: nan is not a length",
        "D1.radius_m: 0.0 is not a length",
    ]


def test_shapes_that_cannot_be():
    assert "DE.length_m" in fault(replace(FOLDED, length_m=0.02))
    assert "DE.gap_m" in fault(replace(DIPOLE, gap_m=0.5))
    assert "DE.at_m: not a number" in fault(replace(DIPOLE, at_m=float("inf")))


def test_exactly_one_conductor_is_fed():
    assert "wires: 0 conductors are fed" in fault(Rod("D1", 0.0, 0.4, 1e-3))
    assert "wires: 2 conductors are fed" in fault(DIPOLE, replace(DIPOLE, tag="X", at_m=0.2))


def test_warnings_name_what_is_near_its_limit():
    assert geometry_warnings(gauge_868(), 866.5e6) == ()
    assert solve_at(gauge_868(), 866.5e6).warnings == ()
    thin = Wires((replace(DIPOLE, radius_m=1e-4), Rod("D1", 6e-4, 0.45, 1e-4)))
    assert solve_at(thin, 3e8).warnings == (
        "DE and D1: axes 0.60 mm apart, nearer than 10 radii and far thinner than an element; "
        "crowding of their currents is left out",
    )
    found = geometry_warnings(Wires((Rod("DE", 0.0, 0.02, 5e-3, gap_m=2e-3), Rod("D1", 0.014, 0.02, 5e-3))), 6e9)
    assert [warning.split(":")[0] for warning in found] == ["DE", "DE", "D1", "D1", "DE and D1"]
    assert "k a > 0.3" in found[0]
    assert found[1] == "DE: 20.0 mm is shorter than 3 diameters"
    assert "axes 14.00 mm apart, nearer than 3 radii" in found[4]
