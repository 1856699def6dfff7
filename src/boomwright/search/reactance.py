"""A rod's own reactance from the solver, and the length that gives a rod of other stock the same."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
from scipy.optimize import brentq

from boomwright.errors import DesignFault, Fault
from boomwright.rf.arrays import wavenumber_rad_m
from boomwright.rf.conductors import Rod, Wires
from boomwright.rf.pattern import pattern_vector
from boomwright.rf.solve import Model, factored

BROADSIDE = np.array([1.0, 0.0, 0.0])
SHORTEST_WL, LONGEST_WL = 0.2, 0.7
"""Lengths between which a rod's own reactance rises from one end to the other."""

LENGTH_TOLERANCE = 1e-7


def own_impedance_ohm(rod: Rod, frequency_hz: float) -> complex:
    """Impedance of a lone rod to the field that other conductors make, referred to the current in its middle [ohm].

    rod           straight, not fed; its place does not matter
    frequency_hz  [Hz]

    With the current I that an even field E along the rod excites it is (E . I) / I(middle)^2, a stationary form
    [Harrington1968] ch. 7: the number that decides what a parasitic rod does in an array, whatever its diameter.
    """
    alone = replace(rod, at_m=0.0, gap_m=rod.radius_m)
    model = Model(Wires((alone,)), frequency_hz)
    drive = pattern_vector(model.pieces[0], BROADSIDE, wavenumber_rad_m(frequency_hz))[:, 1]
    currents = factored(model.impedance.matrix(frequency_hz)).solve(drive)
    return complex((drive @ currents) / currents[0] ** 2)


def length_of_reactance_m(rod: Rod, reactance_ohm: float, frequency_hz: float) -> float:
    """Length [m] at which a rod of this stock has an own reactance [ohm] at a frequency [Hz].

    Raises DesignFault where no length from 0.2 to 0.7 wavelengths has it.
    """
    wavelength_m = 2.0 * math.pi / wavenumber_rad_m(frequency_hz)

    def excess_ohm(length_wl: float) -> float:
        return own_impedance_ohm(replace(rod, length_m=length_wl * wavelength_m), frequency_hz).imag - reactance_ohm

    low_wl = max(SHORTEST_WL, 6.0 * rod.radius_m / wavelength_m)
    if not low_wl < LONGEST_WL or excess_ohm(low_wl) > 0.0 or excess_ohm(LONGEST_WL) < 0.0:
        found = f"no length gives a rod of {2e3 * rod.radius_m:g} mm a reactance of {reactance_ohm:.1f} ohm"
        raise DesignFault([Fault(f"{rod.tag}.diameter_m", found, "use thinner rods")])
    return wavelength_m * float(brentq(excess_ohm, low_wl, LONGEST_WL, xtol=LENGTH_TOLERANCE))
