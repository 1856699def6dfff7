"""What every printed part of the kit must show at its foot."""

from __future__ import annotations

from boomwright.pieces import Expectation, Probe

CHAMFER_MM = 0.4
"""Bottom edges, against elephant's foot (product rule)."""

FOOT_ALLOWED_MM = 0.02


def expect_foot(stem: str) -> Expectation:
    """The chamfer round the bottom of a printed piece, as its STL shows it."""
    probe = Probe("foot_chamfer_mm", {"chamfer_mm": CHAMFER_MM})
    return Expectation(f"print/{stem}.stl", "bottom edge's chamfer", CHAMFER_MM, FOOT_ALLOWED_MM, "mm", probe)
