"""Where a plate that is longer than the sheet is cut, so that fishplates can bridge the joints. Millimetres."""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence

from boomwright.plan.sheet_plate import Span

STEP_MM = 2.0
FISHPLATE_MM = 60.0
"""Length of a fishplate; half of it lies on either side of a joint."""

END_MM = FISHPLATE_MM / 2.0 + 4.0
"""Least length of a plate's first and last piece: it takes half a fishplate."""

BETWEEN_MM = FISHPLATE_MM + 4.0
"""Least length of a piece between two joints."""


def cut_line(
    line: Span, longest_mm: float, forbidden: Sequence[Span], holds: Callable[[Span], bool] = lambda piece: True
) -> list[Span] | None:
    """The pieces of a line: as few as can be, then as even as can be.

    line        its ends [mm]
    longest_mm  most length of a piece
    forbidden   where no joint may lie
    holds       whether a piece of this extent can stand on its own

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
            least = END_MM if i == 0 or j == len(places) - 1 else BETWEEN_MM
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
