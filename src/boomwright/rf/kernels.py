"""The kernel exp(-jkR)/R between two rings, averaged over the azimuth of both.

Rings on one axis: the static part is a complete elliptic integral with a logarithmic singularity, the dynamic rest is
smooth and taken by azimuth points. Rings apart: the average is expanded in the radii, exact to their third power.
Sources: [Harrington1968] ch. 4; [Abramowitz1964] 17.3, 8.13.
"""

from __future__ import annotations

import numpy as np
from scipy.special import ellipe, ellipkm1

from boomwright.rf.arrays import Complexes, Floats

SMALL_PARAMETER = 2e-3
LEAST_COMPLEMENT = 1e-28


def static_ring_kernels(axial_m: Floats, radius_m: Floats, source_radius_m: Floats) -> tuple[Floats, Floats, Floats]:
    """Azimuthal harmonics of 1/R between two rings on one axis.

    axial_m          distance of the rings' planes [m]
    radius_m         radius of the first ring [m], above 0, broadcastable
    source_radius_m  radius of the second ring [m], above 0, broadcastable

    Returns g0, g1, g2 [1/m]: the means of cos(m psi) / R over psi for m = 0, 1, 2.
    """
    squared = (radius_m + source_radius_m) ** 2 + axial_m**2
    # Points of a rule may come closer than the coordinates' last digit; their weight is as small.
    complement = np.maximum(((radius_m - source_radius_m) ** 2 + axial_m**2) / squared, LEAST_COMPLEMENT)
    parameter = 1.0 - complement
    root = 2.0 / (np.pi * np.sqrt(squared))
    first = ellipkm1(complement)
    second = ellipe(parameter)
    g0 = root * first
    small = parameter < SMALL_PARAMETER
    safe = np.where(small, 1.0, parameter)
    g1 = root * np.where(
        small, np.pi * parameter / 16.0 * (1.0 + 0.75 * parameter), ((2.0 - safe) * first - 2.0 * second) / safe
    )
    # Legendre recurrence Q(3/2) from Q(1/2), Q(-1/2); where it cancels the leading term of the series stands in.
    g2 = np.where(
        parameter < 0.02,
        root * np.pi * 3.0 * parameter**2 / 256.0,
        (4.0 * (2.0 / np.where(small, 1.0, parameter) - 1.0) * g1 - g0) / 3.0,
    )
    return g0, g1, g2


def dynamic_ring_kernels(
    axial_m: Floats, radius_m: Floats, source_radius_m: Floats, wavenumber_rad_m: float, azimuths: int
) -> tuple[Complexes, Complexes, Complexes]:
    """Azimuthal harmonics of (exp(-jkR) - 1) / R between two rings on one axis.

    axial_m, radius_m, source_radius_m  as `static_ring_kernels`, but all may be 0
    wavenumber_rad_m                    k [rad/m], above 0
    azimuths                            points on the half circle; 2 are exact to the radii's third power

    Returns the means over psi with weights 1, cos(psi), cos(2 psi) [1/m].
    """
    psi = (np.arange(azimuths) + 0.5) * np.pi / azimuths
    shape = np.broadcast_shapes(np.shape(axial_m), np.shape(radius_m), np.shape(source_radius_m))
    total = [np.zeros(shape, dtype=np.complex128) for _ in range(3)]
    base = axial_m**2 + (radius_m - source_radius_m) ** 2
    product = 2.0 * radius_m * source_radius_m
    for angle in psi:
        distance = np.sqrt(base + product * (1.0 - np.cos(angle)))
        value = wave_rest(np.broadcast_to(distance, shape), wavenumber_rad_m)
        for order in range(3):
            total[order] += value * (np.cos(order * angle) / azimuths)
    return total[0], total[1], total[2]


def spherical_wave(distance_m: Floats, wavenumber_rad_m: float) -> Complexes:
    """exp(-jkR) / R [1/m] for distances [m], above 0, any shape."""
    phase = wavenumber_rad_m * distance_m
    value = np.empty(distance_m.shape, dtype=np.complex128)
    value.real = np.cos(phase) / distance_m
    value.imag = -np.sin(phase) / distance_m
    return value


def wave_rest(distance_m: Floats, wavenumber_rad_m: float) -> Complexes:
    """(exp(-jkR) - 1) / R [1/m] for distances [m], 0 included, any shape."""
    phase = wavenumber_rad_m * distance_m
    inverse = 1.0 / np.maximum(distance_m, 1e-300)
    value = np.empty(distance_m.shape, dtype=np.complex128)
    # cos(x) - 1 = -2 sin(x/2)^2 keeps its digits at small x.
    value.real = -2.0 * np.sin(phase / 2.0) ** 2 * inverse
    value.imag = -np.sin(phase) * inverse
    return value


def averaged_kernel(
    distance_m: Floats,
    wavenumber_rad_m: float,
    along: tuple[Floats, Floats],
    radius_m: tuple[Floats, Floats],
) -> Complexes:
    """exp(-jkR)/R averaged over two rings that are apart, to the third power of radius over distance.

    The mean of a wave over a ring of radius a with axis T is (1 - (a^2/4) (k^2 + (T . grad)^2)) of it.

    distance_m  between the centres [m], above about 3 radii
    along       cosines between the line of the centres and each ring's axis
    radius_m    radii of the rings [m], broadcastable to distance_m

    Returns the average [1/m], same shape as distance_m.
    """
    wave = spherical_wave(distance_m, wavenumber_rad_m)
    inverse = 1.0 / distance_m
    k = wavenumber_rad_m
    first = (radius_m[0] ** 2) / 4.0
    second = (radius_m[1] ** 2) / 4.0
    squares = first * along[0] ** 2 + second * along[1] ** 2
    radii = first + second
    factor = np.empty(distance_m.shape, dtype=np.complex128)
    square = inverse * inverse
    factor.real = 1.0 - radii * (k * k - square) - squares * (3.0 * square - k * k)
    factor.imag = (radii - 3.0 * squares) * (k * inverse)
    wave *= factor
    return wave
