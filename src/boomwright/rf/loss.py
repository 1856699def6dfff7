"""Loss of round conductors: surface impedance, and what it adds to the matrix."""

from __future__ import annotations

import math

import numpy as np
from scipy.special import ive

from boomwright.rf.arrays import VACUUM_PERMEABILITY_H_M


def skin_depth_m(conductivity_s_m: float, frequency_hz: float) -> float:
    """Skin depth [m] of a non-magnetic metal of a conductivity [S/m] at a frequency [Hz], both above 0 [Ramo1984]."""
    return 1.0 / math.sqrt(math.pi * frequency_hz * VACUUM_PERMEABILITY_H_M * conductivity_s_m)


def surface_impedance_ohm(conductivity_s_m: float, frequency_hz: float) -> complex:
    """Surface impedance [ohm per square] of a flat metal surface; 0 for a perfect conductor (infinite) [Ramo1984]."""
    if math.isinf(conductivity_s_m):
        return 0j
    return (1.0 + 1.0j) / (conductivity_s_m * skin_depth_m(conductivity_s_m, frequency_hz))


def round_impedance_ohm_m(radius_m: float, conductivity_s_m: float, frequency_hz: float) -> complex:
    """Internal impedance per length [ohm/m] of a solid round conductor, current flowing along it.

    radius_m          above 0
    conductivity_s_m  [S/m]; infinite = perfect conductor
    frequency_hz      above 0

    Returns g I0(g a) / (2 pi a sigma I1(g a)) with g = (1 + j) / skin depth: direct-current resistance at low
    frequency, surface impedance over the circumference at high frequency [Ramo1984] ch. 4.
    """
    if math.isinf(conductivity_s_m):
        return 0j
    growth = (1.0 + 1.0j) / skin_depth_m(conductivity_s_m, frequency_hz)
    argument = growth * radius_m
    bessel = np.asarray(ive(np.array([0.0, 1.0]), np.full(2, argument)), dtype=np.complex128)
    ratio = complex(bessel[0] / bessel[1])
    return growth * ratio / (2.0 * math.pi * radius_m * conductivity_s_m)
