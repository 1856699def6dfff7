"""Where a plate that is longer than the sheet is cut, so that fishplates can bridge the joints. Millimetres."""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence

from boomwright.plan.sheet_plate import Span

STEP_MM = 2.0
FISHPLATES_MM = (60.0, 36.0)
"""Lengths of a fishplate, the shorter where pieces are short; half of it lies on either side of a joint."""

SPARE_MM = 4.0
"""How much longer a piece is than the fishplates on it."""


def feet_of(fishplate_mm: float) -> tuple[Span, ...]:
    """Where a fishplate's feet are along it, from its middle: two on either side, on a short one only one."""
    half = fishplate_mm / 2.0
    feet = [(6.0, 14.0), (18.0, 26.0)] if half >= 30.0 else [(4.0, half - 3.0)]
    return tuple(sorted([*feet, *((-high, -low) for low, high in feet)]))


def cut_line(
    line: Span,
    longest_mm: float,
    forbidden: Sequence[Span],
    fishplate_mm: float,
    holds: Callable[[Span], bool] = lambda piece: True,
) -> list[Span] | None:
    """The pieces of a line: as few as can be, then as even as can be.

    line          its ends [mm]
    longest_mm    most length of a piece
    forbidden     where no joint may lie
    fishplate_mm  length of what bridges a joint
    holds         whether a piece of this extent can stand on its own

    Returns the pieces in order, the line itself where it is short enough; None where no such cuts exist.
    """
    if line[1] - line[0] <= longest_mm + 1e-9:
        return [line]
    count = math.floor((line[1] - line[0]) / STEP_MM)
    inner = [line[0] + i * STEP_MM for i in range(1, count + 1) if line[0] + i * STEP_MM < line[1] - 1e-9]
    allowed = [at for at in inner if not any(low < at < high for low, high in forbidden)]
    places = [line[0], *allowed, line[1]]
    best: list[tuple[int, float, int]] = [(0, 0.0, -1)]
    for j in range(1, len(places)):
        choices = []
        for i in range(j - 1, -1, -1):
            length = places[j] - places[i]
            if length > longest_mm + 1e-9:
                break
            bridges = 0.5 if i == 0 or j == len(places) - 1 else 1.0
            least = bridges * fishplate_mm + SPARE_MM
            if best[i][0] >= 0 and length >= least and holds((places[i], places[j])):
                choices.append((best[i][0] + 1, best[i][1] + length**2, i))
        best.append(min(choices, default=(-1, 0.0, -1)))
    if best[-1][0] < 0:
        return None
    found, j = [], len(places) - 1
    while j > 0:
        i = best[j][2]
        found.append((places[i], places[j]))
        j = i
    return found[::-1]
