"""First-order sensitivities by the adjoint method: one factorisation serves every dimension of every conductor.

For a stationary quantity a^T I with Z I = e and Z a' = a the change is -a'^T dZ I. Only the blocks of the changed
conductor enter dZ; they are filled again with its dimension a little larger and a little smaller on the same mesh.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import Literal

import numpy as np

from boomwright.rf.arrays import Complexes
from boomwright.rf.basis import Piece, is_flat, offsets
from boomwright.rf.conductors import Conductor, Folded
from boomwright.rf.impedance import coupling_block, own_action, own_block
from boomwright.rf.outline import is_half_circle
from boomwright.rf.pattern import pattern_vector
from boomwright.rf.solve import Model, Solution, factored

Dimension = Literal["length_m", "at_m", "height_m", "diameter_m"]
DIMENSIONS: tuple[Dimension, ...] = ("length_m", "at_m", "height_m", "diameter_m")
DECIBEL_PER_NEPER = 10.0 / np.log(10.0)
RELATIVE_STEP = 2e-4
FORWARD, BACKWARD = np.array([1.0, 0.0, 0.0]), np.array([-1.0, 0.0, 0.0])


@dataclass(frozen=True)
class Sensitivity:
    """What one metre more of one dimension would do, to first order.

    tag, dimension         which conductor, which dimension (a loop's length is its perimeter)
    impedance_ohm_m        change of input impedance [ohm/m]
    gain_db_m              change of gain toward +x [dB/m]
    front_to_back_db_m     change of front-to-back [dB/m]
    """

    tag: str
    dimension: Dimension
    impedance_ohm_m: complex
    gain_db_m: float
    front_to_back_db_m: float


def sensitivities(model: Model, frequency_hz: float) -> tuple[Solution, tuple[Sensitivity, ...]]:
    """Solve at a frequency [Hz] and give the sensitivities to every length, position, height and diameter.

    Heights of an antenna that is its own mirror image in z = 0 have none to first order: 0.
    """
    adjoint = _Adjoint(model, frequency_hz)
    found = []
    for index, piece in enumerate(model.pieces):
        for dimension in DIMENSIONS:
            if dimension == "height_m" and is_flat(model.wires):
                found.append(Sensitivity(piece.conductor.tag, dimension, 0j, 0.0, 0.0))
            else:
                found.append(adjoint.toward(index, dimension))
    return adjoint.solution, tuple(found)


class _Adjoint:
    """The factored antenna with the adjoint currents of the forward and the backward field."""

    def __init__(self, model: Model, frequency_hz: float) -> None:
        self.model, self.frequency_hz = model, frequency_hz
        factors = factored(model.impedance.matrix(frequency_hz))
        self.currents = factors.solve(model.excitation)
        self.solution = model.solution(self.currents, frequency_hz)
        self.rows = offsets(model.pieces)
        k = self.solution.wavenumber_rad_m
        self.vectors = [
            np.concatenate([pattern_vector(piece, toward, k)[:, 1:] for piece in model.pieces])
            for toward in (FORWARD, BACKWARD)
        ]
        self.moments = [vector.T @ self.currents for vector in self.vectors]
        adjoints = factors.solve(np.asfortranarray(np.column_stack(self.vectors)))
        self.adjoints = np.column_stack([self.currents, adjoints])

    def toward(self, index: int, dimension: Dimension) -> Sensitivity:
        """Sensitivity to one dimension of one conductor."""
        piece = self.model.pieces[index]
        step_m = _step_m(piece.conductor, dimension, self.solution.wavenumber_rad_m)
        own = dimension in ("length_m", "diameter_m")
        changed = [self._ends(index, _changed(piece, dimension, s * step_m, self.model), own) for s in (1.0, -1.0)]
        through_matrix = (changed[0][0] - changed[1][0]) / (2.0 * step_m)
        through_field = (changed[0][1] - changed[1][1]) / (2.0 * step_m)
        feed = self.solution.feed_current
        by_feed = -through_matrix[0]
        levels = []
        for number, moment in enumerate(self.moments):
            change = through_field[number] - through_matrix[1 + 2 * number : 3 + 2 * number]
            level = 2.0 * (moment.conj() @ change).real / max(float((np.abs(moment) ** 2).sum()), 1e-300)
            levels.append(DECIBEL_PER_NEPER * float(level))
        gain = levels[0] - DECIBEL_PER_NEPER * by_feed.real / feed.real
        impedance = -by_feed / feed**2
        return Sensitivity(piece.conductor.tag, dimension, complex(impedance), float(gain), levels[0] - levels[1])

    def _ends(self, index: int, piece: Piece, own: bool) -> tuple[Complexes, Complexes]:
        """Adjoints with the matrix of a changed conductor and the currents (5,); its field, fore and aft (2, 2)."""
        rows = slice(self.rows[index], self.rows[index + 1])
        mode, f = self.model.mode, self.frequency_hz
        here, there = self.adjoints[rows], self.currents[rows]
        total = np.zeros(self.adjoints.shape[1], dtype=np.complex128)
        if own:
            total += here.T @ (own_block(piece, own_action(piece, mode), f, mode) @ there)
        for other, neighbour in enumerate(self.model.pieces):
            if other != index:
                columns = slice(self.rows[other], self.rows[other + 1])
                block = coupling_block(piece, neighbour, f, mode)
                total += here.T @ (block @ self.currents[columns])
                total += self.adjoints[columns].T @ (block.T @ there)
        k = self.solution.wavenumber_rad_m
        field = np.array([pattern_vector(piece, toward, k)[:, 1:].T @ there for toward in (FORWARD, BACKWARD)])
        return total, field


def _step_m(conductor: Conductor, dimension: Dimension, wavenumber_rad_m: float) -> float:
    if dimension == "length_m":
        return RELATIVE_STEP * conductor.length_m
    if dimension == "diameter_m":
        return RELATIVE_STEP * 10.0 * conductor.radius_m
    return RELATIVE_STEP / wavenumber_rad_m


def _changed(piece: Piece, dimension: Dimension, change_m: float, model: Model) -> Piece:
    """The piece with one dimension changed, on the same mesh."""
    conductor = piece.conductor
    if isinstance(conductor, Folded) and is_half_circle(conductor):
        conductor = replace(conductor, bend_radius_m=None)
    if dimension == "diameter_m":
        changed: Conductor = replace(conductor, radius_m=conductor.radius_m + change_m / 2.0)
    elif dimension == "length_m":
        changed = replace(conductor, length_m=conductor.length_m + change_m)
    elif dimension == "at_m":
        changed = replace(conductor, at_m=conductor.at_m + change_m)
    else:
        changed = replace(conductor, height_m=conductor.height_m + change_m)
    return model.planner.changed(piece, changed)
