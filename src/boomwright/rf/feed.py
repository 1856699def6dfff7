"""The feed: a uniform field across the real gap, whose current settles as the mesh is refined; VSWR and return loss."""

from __future__ import annotations

import math

import numpy as np

from boomwright.rf.arrays import Complexes
from boomwright.rf.basis import Piece, offsets


def excitation(pieces: tuple[Piece, ...]) -> Complexes:
    """Right-hand side for 1 V across the gap, (U,): the field 1 / gap tested along the fed conductor.

    The current it meets, the mean over the gap, is the same vector times the solution.
    """
    first_row = offsets(pieces)
    total = np.zeros(first_row[-1], dtype=np.complex128)
    for row, piece in zip(first_row[:-1], pieces, strict=True):
        gap_m = piece.conductor.gap_m
        if gap_m > 0.0:
            for index in range(len(piece.parts[0]) - 1):
                share = piece.mesh.travel_m[index] / gap_m
                total[row + index] += share
                total[row + index + 1] += share
    return total


def reflection(impedance_ohm: complex, system_ohm: float) -> complex:
    """Reflection coefficient of an impedance [ohm] in a system [ohm]."""
    return (impedance_ohm - system_ohm) / (impedance_ohm + system_ohm)


def vswr(impedance_ohm: complex, system_ohm: float) -> float:
    """Voltage standing wave ratio, at least 1, of an impedance [ohm] in a system [ohm]."""
    size = min(abs(reflection(impedance_ohm, system_ohm)), 1.0 - 1e-12)
    return (1.0 + size) / (1.0 - size)


def return_loss_db(impedance_ohm: complex, system_ohm: float) -> float:
    """Return loss [dB], positive for a passive load; at most 240 for a perfect match."""
    return -20.0 * math.log10(max(abs(reflection(impedance_ohm, system_ohm)), 1e-12))
