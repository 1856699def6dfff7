"""Benchmark of the solver, as ratios within one run. Run it by hand: python tests/bench/bench_rf_solver.py

Shown beside each ratio is the most it may be. LAPACK's solve is of a full matrix of the stated size, random numbers.
"""

import subprocess
import sys
import time
from math import pi
from pathlib import Path

import numpy as np
from scipy.linalg import lapack

sys.path.insert(0, str(Path(__file__).parents[1] / "rf"))
from antennas import MM, gauge_868, thick_five

from boomwright.rf.conductors import Folded, Rod, Wires
from boomwright.rf.solve import Model, solve_at
from boomwright.rf.sweep import sweep

DESIGN = Path(__file__).parents[2] / "examples" / "stream-gauge-868.toml"


def best(job, repeats=5):
    """Least time of several runs [s]."""
    times = []
    for _ in range(repeats):
        start = time.perf_counter()
        job()
        times.append(time.perf_counter() - start)
    return min(times)


def seven_rods():
    """A reflector, six directors and a folded driven element at 868 MHz."""
    return Wires((*gauge_868().conductors, Rod("D6", 460 * MM, 138 * MM, 1.5 * MM, conductivity_s_m=1.57e7)))


def long_array(rods):
    """A folded driven element among many equal rods at 868 MHz."""
    others = [Rod(f"D{n}", (n + 1) * 0.1, 0.14, 1.5 * MM) for n in range(rods)]
    return Wires((Folded("DE", 0.0, 158 * MM, 12 * MM, MM, 4 * MM), *others))


def full_size(model):
    """Unknowns before the mirror plane y = 0 is used: every node twice, those on the plane once."""
    size = 0
    for piece in model.pieces:
        families = 0 if piece.surface is None else model.mode.families
        on_plane = 2 if piece.mesh.closed else 1
        size += (1 + families) * (2 * piece.nodes - on_plane) + families * 2 * piece.mesh.elements
    return size


def lapack_solve(size):
    """Time of LAPACK's factor and solve of a full complex matrix [s]."""
    random = np.random.default_rng(1)
    matrix = np.asfortranarray(random.standard_normal((size, size)) + 1j * random.standard_normal((size, size)))
    right = random.standard_normal((size, 1)) + 0j
    return best(lambda: lapack.zgesv(matrix, right))


def show(what, ratio, most):
    """One line of the result."""
    print(f"{what:<66} {ratio:7.2f}   at most {most}")


def main():
    """Run all ratios."""
    wires, frequency_hz = seven_rods(), 866.5e6
    one = best(lambda: solve_at(wires, frequency_hz))
    size = full_size(Model(wires, frequency_hz))
    show(f"7 rods + folded: fill + solve / LAPACK ({size} unknowns)", one / lapack_solve(size), 10)
    span = tuple(np.linspace(830e6, 900e6, 101))

    def whole_sweep():
        found = sweep(wires, span)
        return found.gain_dbi, found.front_to_rear_db, found.beamwidth_e_deg

    show("101-point sweep / one frequency", best(whole_sweep, 3) / one, 60)
    eight, many = (best(lambda n=n: solve_at(long_array(n), frequency_hz), 2) for n in (8, 64))
    show("64 rods / 8 rods", many / eight, 100)
    thick = thick_five(9.0)
    model = Model(thick, 5.8e9)
    time_thick = best(lambda: solve_at(thick, 5.8e9))
    reduced, whole = len(model.excitation), full_size(model)
    show(f"thick rods: fill + solve / LAPACK, symmetry used ({reduced})", time_thick / lapack_solve(reduced), 10)
    show(f"thick rods: fill + solve / LAPACK, y plane not used ({whole})", time_thick / lapack_solve(whole), 10)
    cold = (
        f"from pathlib import Path\nfrom boomwright.design.tomlfile import load_design\n"
        f"from boomwright.prediction import predict\n"
        f"predict(load_design(Path({str(DESIGN)!r}))).as_json()"
    )
    floor = best(lambda: subprocess.run([sys.executable, "-c", "import numpy, scipy.linalg"], check=True))
    show("cold sweep of the 868 example / import numpy, scipy.linalg", best(lambda: run(cold)) / floor, 4)
    print(f"one frequency {one * 1e3:.0f} ms; wavelength {2 * pi / (2 * pi * frequency_hz / 299_792_458.0):.3f} m")


def run(code):
    """A fresh Python process."""
    subprocess.run([sys.executable, "-c", code], check=True)


if __name__ == "__main__":
    main()
