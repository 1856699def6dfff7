"""Coarse sampling of runs against every quadrature point, and meshes: what refinement and change do to them."""

from dataclasses import replace

import numpy as np
import pytest
from antennas import MM, gauge_868, thick_five

from boomwright.rf import basis
from boomwright.rf.basis import Options, planner_of
from boomwright.rf.conductors import Folded, Loop, Rod
from boomwright.rf.coupling import coupling, sample, straight_runs
from boomwright.rf.mesh import build, graded_nodes, plan_nodes
from boomwright.rf.outline import facing_m, outline
from boomwright.rf.solve import Model


@pytest.mark.parametrize("build_wires, frequency_hz", [(gauge_868, 866.5e6), (lambda: thick_five(7.0), 5.8e9)])
def test_coarse_sampling_is_invisible(build_wires, frequency_hz, monkeypatch):
    coarse = Model(build_wires(), frequency_hz)
    one = coarse.solve(frequency_hz)
    monkeypatch.setattr(basis, "nearest_others", lambda wires: ({c.tag: 0.0 for c in wires.conductors},) * 2)
    fine = Model(build_wires(), frequency_hz)
    other = fine.solve(frequency_hz)
    assert other.impedance_ohm == pytest.approx(one.impedance_ohm, rel=2e-3)
    assert other.gain_dbi == pytest.approx(one.gain_dbi, abs=2e-3)


def test_a_run_is_sampled_as_its_neighbour_asks():
    mesh = build(rod := Rod("R", 0.0, 0.168, 1.5 * MM), plan_nodes(rod, 5 * MM))
    counts = [len(sample(mesh, distance).radius_m) for distance in (0.0, 0.01, 0.05, 0.5)]
    assert counts == sorted(counts, reverse=True)
    assert counts[0] == 2 * mesh.elements
    assert straight_runs(mesh) == [(0, int((~mesh.cap).sum())), (int((~mesh.cap).sum()), mesh.elements)]


def test_coupling_falls_with_distance():
    planner = planner_of(gauge_868(), 866.5e6, Options())
    blocks = []
    for at in (0.1, 1.0, 10.0):
        pieces = [planner.piece(replace(gauge_868().conductors[n], at_m=at * (n == 2))) for n in (0, 2)]
        blocks.append(np.abs(coupling(pieces[0].samples, pieces[1].samples, 18.0)).max())
    assert blocks[0] > blocks[1] > blocks[2]


def test_refinement_halves_every_element():
    nodes = [graded_nodes(1.0, 0.1, 1e-3, 0.05, refinement) for refinement in (0, 1, 2)]
    assert len(nodes[1]) == 2 * len(nodes[0]) - 1
    assert nodes[1][::2] == pytest.approx(nodes[0], abs=1e-12)
    assert nodes[2][::4] == pytest.approx(nodes[0], abs=1e-12)
    steps = np.diff(nodes[0])
    assert steps.max() <= 0.1
    assert steps[0] < 2.5e-3


@pytest.mark.parametrize(
    "conductor",
    [
        Folded("DE", 0.0, 0.47, 0.02, 1e-3, 5e-3),
        Folded("DE", 0.0, 0.47, 0.03, 1e-3, 5e-3, bend_radius_m=5e-3, upright=True),
        Loop("DE", 0.1, 1.0, 1e-3, 5e-3),
        Loop("DE", 0.1, 1.0, 1e-3, 5e-3, "square"),
    ],
)
def test_closed_outlines_close(conductor):
    """The half ends on y = 0, across from where it starts, and the mesh follows it."""
    line = outline(conductor)
    points = line.points()
    assert points[-1][1] == pytest.approx(0.0, abs=1e-12)
    assert np.linalg.norm(points[-1] - points[0]) == pytest.approx(facing_m(conductor), rel=1e-9)
    length = np.linalg.norm(np.diff(points, axis=0), axis=1).sum()
    assert length == pytest.approx(line.length_m, rel=1e-5)
    mesh = build(conductor, plan_nodes(conductor, 0.01))
    assert mesh.travel_m.sum() == pytest.approx(line.length_m, rel=1e-12)
    if isinstance(conductor, Loop):
        assert 2.0 * line.length_m == pytest.approx(conductor.length_m)
        assert points[:, 2].max() == pytest.approx(-points[:, 2].min())
    else:
        assert points[:, 1].max() == pytest.approx(conductor.length_m / 2.0 - conductor.radius_m)


def test_many_rods_solve():
    wires = replace(gauge_868(), conductors=(*gauge_868().conductors, *rods(57)))
    solution = Model(wires, 866.5e6).solve(866.5e6)
    assert len(solution.pieces) == 64
    assert abs(solution.imbalance) < 0.005


def rods(count):
    return tuple(Rod(f"D{n + 6}", 0.46 + 0.09 * n, 0.138, 1.5 * MM) for n in range(count))
