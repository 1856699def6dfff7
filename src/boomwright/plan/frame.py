"""Rigid motions between the design's frame and a file's frame."""

from __future__ import annotations

Matrix = tuple[tuple[float, float, float, float], ...]
"""A rigid motion, 4 x 4, row by row: point in the file = matrix x point in the design's frame [mm]."""

IDENTITY: Matrix = ((1.0, 0.0, 0.0, 0.0), (0.0, 1.0, 0.0, 0.0), (0.0, 0.0, 1.0, 0.0), (0.0, 0.0, 0.0, 1.0))


def turned_about_x(height_mm: float, shift_mm: tuple[float, float] = (0.0, 0.0)) -> Matrix:
    """Upside down about the x axis, the datum plane then at `height_mm` above the bed; then moved by x and y [mm]."""
    x, y = shift_mm
    return ((1.0, 0.0, 0.0, x), (0.0, -1.0, 0.0, y), (0.0, 0.0, -1.0, height_mm), (0.0, 0.0, 0.0, 1.0))
