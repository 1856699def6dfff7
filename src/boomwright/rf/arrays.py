"""Names for the arrays and the constants of nature that the solver's modules share."""

from __future__ import annotations

import math
from typing import Any, TypeAlias

import numpy as np
from numpy.typing import NDArray

from boomwright.units import SPEED_OF_LIGHT_M_S

Floats: TypeAlias = NDArray[np.float64]
Complexes: TypeAlias = NDArray[np.complex128]
Integers: TypeAlias = NDArray[np.int64]
Numbers: TypeAlias = NDArray[Any]
"""An array that is real or complex, as its caller's is."""

VACUUM_PERMEABILITY_H_M = 4e-7 * math.pi
"""Permeability of vacuum [H/m]; the CODATA 2018 value differs by 5e-10 of it."""

VACUUM_PERMITTIVITY_F_M = 1.0 / (VACUUM_PERMEABILITY_H_M * SPEED_OF_LIGHT_M_S**2)
"""Permittivity of vacuum [F/m]."""

WAVE_IMPEDANCE_OHM = VACUUM_PERMEABILITY_H_M * SPEED_OF_LIGHT_M_S
"""Wave impedance of vacuum [ohm]."""


def wavenumber_rad_m(frequency_hz: float) -> float:
    """Wavenumber in vacuum [rad/m] at a frequency [Hz], above 0."""
    return 2.0 * math.pi * frequency_hz / SPEED_OF_LIGHT_M_S
