"""Far field: radiation moments of the solved currents, cuts, the full sphere, beamwidths and the radiated power.

The moment of a current J is the integral of J exp(j k r . direction) over it; its part across the direction radiates
eta k^2 |moment|^2 / (32 pi^2) watts per steradian (peak amplitudes) [Harrington1968] ch. 3. The field of the mirror
half is carried along; rings count with their azimuth mean, as they do in the matrix.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from boomwright.rf.arrays import WAVE_IMPEDANCE_OHM, Complexes, Floats, Integers
from boomwright.rf.azimuth import azimuth_functions
from boomwright.rf.basis import Piece, offsets

LEAST_LEVEL = 1e-12
HALF_POWER_DB = 10.0 * math.log10(2.0)


@dataclass(frozen=True)
class Sources:
    """Current moments at points of the half y >= 0: place (P, 3) [m], moment (P, 3) [A m], ring axis and radius."""

    place: Floats
    moment: Complexes
    tangent: Floats
    radius_m: Floats


def sources_of(pieces: tuple[Piece, ...], currents: Complexes) -> Sources:
    """Moments of all conductors for the solved unknowns (U,)."""
    parts = [
        _surface_sources(piece, currents[row : row + piece.unknowns])
        if piece.surface is not None
        else _ring_sources(piece, currents[row : row + piece.unknowns])
        for row, piece in zip(offsets(pieces)[:-1], pieces, strict=True)
    ]
    return Sources(
        np.concatenate([part.place for part in parts]),
        np.concatenate([part.moment for part in parts]),
        np.concatenate([part.tangent for part in parts]),
        np.concatenate([part.radius_m for part in parts]),
    )


def _ring_sources(piece: Piece, currents: Complexes) -> Sources:
    samples = piece.samples
    moment = np.zeros(samples.centre.shape, dtype=np.complex128)
    for axis, values in enumerate(samples.current):
        if values is not None:
            moment[:, axis] = currents @ values
    return Sources(samples.centre, moment, samples.tangent, samples.radius_m)


def _surface_sources(piece: Piece, currents: Complexes) -> Sources:
    surface = piece.surface
    assert surface is not None
    functions = azimuth_functions(surface.azimuths)
    points = surface.points()
    moment = np.zeros(points.shape, dtype=np.complex128)
    for axis, part in enumerate(surface.current):
        moment[:, :, axis] = part.of(currents).T @ functions[list(part.functions)]
    count = points.shape[0] * points.shape[1]
    # A point has no azimuth mean to take: radius 0.
    return Sources(points.reshape(-1, 3), moment.reshape(-1, 3), np.zeros((count, 3)), np.zeros(count))


def radiation_moments(sources: Sources, directions: Floats, wavenumber_rad_m: float) -> Complexes:
    """Radiation moments [A m] toward unit vectors (D, 3), mirror half included, (D, 3)."""
    k = wavenumber_rad_m
    place = sources.place
    phase = k * (np.outer(directions[:, 0], place[:, 0]) + np.outer(directions[:, 2], place[:, 2]))
    wave = np.exp(1j * phase)
    if sources.radius_m.any():
        across = 1.0 - (directions @ sources.tangent.T) ** 2
        wave *= 1.0 - (k * sources.radius_m) ** 2 / 4.0 * across
    aside = k * np.outer(directions[:, 1], place[:, 1])
    even = wave * (2.0 * np.cos(aside))
    odd = wave * (2j * np.sin(aside))
    return np.column_stack([odd @ sources.moment[:, 0], even @ sources.moment[:, 1], odd @ sources.moment[:, 2]])


def grid_moments(sources: Sources, rise: Floats, angle_rad: Floats, wavenumber_rad_m: float) -> Complexes:
    """Radiation moments over a product grid with its pole along y, (V, A, 3).

    rise       y component of the directions, (V,)
    angle_rad  angle round y from +x toward +z, (A,)
    """
    k = wavenumber_rad_m
    place = sources.place
    columns, column = np.unique(np.round(place[:, [0, 2]], 12), axis=0, return_inverse=True)
    heights, height = np.unique(np.round(place[:, 1], 12), return_inverse=True)
    cell = height.ravel() * len(columns) + column.ravel()
    aside = k * np.outer(rise, heights)
    even, odd = 2.0 * np.cos(aside) + 0j, 2j * np.sin(aside)
    flat = np.sqrt(np.maximum(1.0 - rise**2, 0.0))
    spoke = np.outer(np.cos(angle_rad), columns[:, 0]) + np.outer(np.sin(angle_rad), columns[:, 1])
    wave = np.exp(1j * k * flat[:, None, None] * spoke)
    # Mean over a ring across an axis along y; an axis across y counts with the mean of its two extremes.
    shrink = (k * sources.radius_m) ** 2 / 4.0
    along = sources.tangent[:, 1] ** 2
    plain, rising = 1.0 - shrink * (1.0 + along) / 2.0, shrink * (3.0 * along - 1.0) / 2.0
    result = np.zeros((len(rise), len(angle_rad), 3), dtype=np.complex128)
    for axis, parity in enumerate((odd, even, odd)):
        moment = sources.moment[:, axis]
        if not moment.any():
            continue
        gathered = parity @ _summed(cell, moment * plain, len(heights), len(columns))
        if shrink.any():
            more = parity @ _summed(cell, moment * rising, len(heights), len(columns))
            gathered = gathered + rise[:, None] ** 2 * more
        result[:, :, axis] = (wave @ gathered[:, :, None])[:, :, 0]
    return result


def _summed(cell: Integers, values: Complexes, rows: int, columns: int) -> Complexes:
    """Values summed into the cells of a matrix (rows, columns)."""
    size = rows * columns
    total = np.bincount(cell, values.real, size) + 1j * np.bincount(cell, values.imag, size)
    return total.reshape(rows, columns)


def grid_directions(rise: Floats, angle_rad: Floats) -> Floats:
    """Unit vectors of a product grid with its pole along y, (V, A, 3)."""
    flat = np.sqrt(np.maximum(1.0 - rise**2, 0.0))
    return np.stack(
        [
            flat[:, None] * np.cos(angle_rad),
            np.broadcast_to(rise[:, None], (len(rise), len(angle_rad))),
            flat[:, None] * np.sin(angle_rad),
        ],
        axis=-1,
    )


def intensity_w_sr(moments: Complexes, directions: Floats, wavenumber_rad_m: float) -> Floats:
    """Radiated power per solid angle [W/sr] from moments (..., 3) toward unit vectors (..., 3); shape (...)."""
    along = (moments * directions).sum(axis=-1)
    square = (np.abs(moments) ** 2).sum(axis=-1) - np.abs(along) ** 2
    result: Floats = WAVE_IMPEDANCE_OHM * wavenumber_rad_m**2 / (32.0 * np.pi**2) * np.maximum(square, 0.0)
    return result


@dataclass(frozen=True)
class Sphere:
    """Intensity on a product grid over the whole sphere, y >= 0 standing for both halves.

    directions (V, A, 3), intensity_w_sr (V, A), radiated_w the integral over the sphere
    """

    directions: Floats
    intensity_w_sr: Floats
    radiated_w: float


def sphere(sources: Sources, wavenumber_rad_m: float, flat: bool = False) -> Sphere:
    """Intensity over the sphere on a grid fine enough to integrate it exactly.

    flat  True if the antenna is its own mirror image in z = 0: the upper half stands for both
    """
    k = wavenumber_rad_m
    place = sources.place
    reach_m = float(np.hypot(np.ptp(place[:, 0]), np.ptp(place[:, 2]))) / 2.0
    angles = 2 * math.ceil((2.0 * k * reach_m + 16.0) / 2.0)
    rises = 10 + math.ceil(k * (float(np.abs(place[:, 1]).max()) + reach_m))
    points, weights = np.polynomial.legendre.leggauss(rises)
    rise, weight = (points + 1.0) / 2.0, weights
    step = 2.0 * np.pi / angles
    angle = np.linspace(0.0, 2.0 * np.pi, angles, endpoint=False)[: angles // 2 + 1 if flat else None]
    share = np.full(len(angle), step)
    if flat:
        share[1:-1] *= 2.0
    directions = grid_directions(rise, angle)
    intensity = intensity_w_sr(grid_moments(sources, rise, angle, k), directions, k)
    return Sphere(directions, intensity, float(weight @ intensity @ share))


def cut_intensity_w_sr(sources: Sources, plane: str, wavenumber_rad_m: float) -> Floats:
    """Intensity every degree round a principal plane from +x, (360,) [W/sr].

    plane  "e": z = 0, angle toward +y; "h": y = 0, angle toward +z
    """
    k = wavenumber_rad_m
    degrees = np.arange(360)
    if plane == "h":
        rise, angle = np.zeros(1), np.radians(degrees)
        ring: Floats = intensity_w_sr(grid_moments(sources, rise, angle, k), grid_directions(rise, angle), k)[0]
        return ring
    rise, angle = np.sin(np.radians(np.arange(91))), np.array([0.0, np.pi])
    quarter = intensity_w_sr(grid_moments(sources, rise, angle, k), grid_directions(rise, angle), k)
    folded = np.minimum(degrees, 360 - degrees)
    result: Floats = np.where(
        folded <= 90, quarter[np.minimum(folded, 90), 0], quarter[np.minimum(180 - folded, 90), 1]
    )
    return result


def half_power_beamwidth_deg(intensity: Floats) -> float | None:
    """Width of the beam about +x between its half-power points [deg] from a cut (360,); None if it has none.

    The beam's peak is the summit reached by climbing from +x.
    """
    level = 10.0 * np.log10(np.maximum(intensity, LEAST_LEVEL * max(float(intensity.max()), 1e-300)))
    peak = _summit(level)
    edges = []
    for step in (1, -1):
        for offset in range(1, 181):
            inner, outer = level[(peak + step * (offset - 1)) % 360], level[(peak + step * offset) % 360]
            if outer <= level[peak] - HALF_POWER_DB:
                edges.append(offset - 1 + (inner - level[peak] + HALF_POWER_DB) / (inner - outer))
                break
    return float(sum(edges)) if len(edges) == 2 and sum(edges) < 360.0 else None


def side_lobe_db(intensity: Floats) -> float | None:
    """Highest lobe outside the beam about +x, relative to the beam's peak [dB], from a cut (360,); None without one."""
    level = 10.0 * np.log10(np.maximum(intensity, LEAST_LEVEL * max(float(intensity.max()), 1e-300)))
    peak = _summit(level)
    edges = []
    for step in (1, -1):
        place = peak
        while level[(place + step) % 360] <= level[place % 360] and abs(place + step - peak) < 360:
            place += step
        edges.append(place)
    outside = np.arange(edges[0], edges[1] + 360)
    return float(level[outside % 360].max() - level[peak]) if len(outside) else None


def _summit(level: Floats) -> int:
    place = 0
    for _ in range(360):
        best = max((place, place + 1, place - 1), key=lambda i: level[i % 360])
        if best == place:
            break
        place = best
    return place % 360


def pattern_vector(piece: Piece, direction: Floats, wavenumber_rad_m: float) -> Complexes:
    """Radiation moment toward a unit vector (3,) that 1 A in each unknown of a piece makes, (U, 3) [m]."""
    vector = np.zeros((piece.unknowns, 3), dtype=np.complex128)
    k, surface = wavenumber_rad_m, piece.surface
    for parity, flip in ((np.array([-1.0, 1.0, -1.0]), -1.0), (np.ones(3), 1.0)):
        toward = direction * np.array([1.0, flip, 1.0])
        if surface is None:
            samples = piece.samples
            across = 1.0 - (samples.tangent @ toward) ** 2
            wave = np.exp(1j * k * samples.centre @ toward) * (1.0 - (k * samples.radius_m) ** 2 / 4.0 * across)
            for axis, values in enumerate(samples.current):
                if values is not None:
                    vector[:, axis] += parity[axis] * (values @ wave)
            continue
        functions = azimuth_functions(surface.azimuths)
        waves = np.exp(1j * k * surface.points() @ toward) @ functions.T
        for axis, part in enumerate(surface.current):
            vector[:, axis] += parity[axis] * (part.values @ waves[:, list(part.functions)].T.ravel())
    return vector
