"""Where the equations are near their limits: said in words, never guessed over."""

from __future__ import annotations

import math

from boomwright.rf.arrays import wavenumber_rad_m
from boomwright.rf.clearance import spacings
from boomwright.rf.conductors import Rod, Wires
from boomwright.rf.outline import tightest_bend_radii

THICKEST_KA = 0.3
NEAREST_RADII = 3.0
CLOSE_RADII = 10.0
SHORTEST_DIAMETERS = 3.0
TIGHTEST_BEND_RADII = 4.0
SWEEP_SPAN = (0.5, 1.5)
BALANCE_ALLOWED = 0.01


def geometry_warnings(wires: Wires, frequency_hz: float) -> tuple[str, ...]:
    """Warnings about thickness, nearness and shortness, at the highest frequency [Hz] asked for."""
    k = wavenumber_rad_m(frequency_hz)
    found = []
    for conductor in wires.conductors:
        thickness = k * conductor.radius_m
        if thickness > THICKEST_KA:
            found.append(
                f"{conductor.tag}: circumference is {thickness:.2f} wavelengths (k a > {THICKEST_KA}); "
                "current round the rod beyond the first harmonic is not solved"
            )
        if isinstance(conductor, Rod) and conductor.length_m < SHORTEST_DIAMETERS * 2.0 * conductor.radius_m:
            found.append(
                f"{conductor.tag}: {conductor.length_m * 1e3:.1f} mm is shorter than {SHORTEST_DIAMETERS:.0f} diameters"
            )
        bend = tightest_bend_radii(conductor) if not isinstance(conductor, Rod) else math.inf
        if bend < TIGHTEST_BEND_RADII:
            found.append(
                f"{conductor.tag}: bends of {bend:.1f} conductor radii on the axis, tighter than "
                f"{TIGHTEST_BEND_RADII:.0f}; crowding inside them is not solved, impedance may be several percent off"
            )
    for first, second, distance_m, a, b in spacings(wires):
        if distance_m < NEAREST_RADII * max(a, b):
            pair = f"{first} and {second}" if first != second else f"the two sides of {first}"
            found.append(
                f"{pair}: axes {distance_m * 1e3:.2f} mm apart, nearer than {NEAREST_RADII:.0f} radii; "
                "current crowds more than the equations carry"
            )
    return tuple(found)


def crowding_warnings(wires: Wires) -> tuple[str, ...]:
    """Warnings for conductors near one another, where current is not let vary round them."""
    return tuple(
        f"{first} and {second}: axes {distance_m * 1e3:.2f} mm apart, nearer than {CLOSE_RADII:.0f} radii and far "
        "thinner than an element; crowding of their currents is left out"
        for first, second, distance_m, a, b in spacings(wires)
        if first != second and NEAREST_RADII * max(a, b) <= distance_m < CLOSE_RADII * max(a, b)
    )


def span_warnings(frequencies_hz: tuple[float, ...], design_frequency_hz: float | None) -> tuple[str, ...]:
    """A warning if frequencies [Hz] leave 0.5 to 1.5 of the design frequency [Hz] (None: not known, no warning)."""
    if design_frequency_hz is None:
        return ()
    low, high = (factor * design_frequency_hz for factor in SWEEP_SPAN)
    outside = [f for f in frequencies_hz if not low <= f <= high]
    if not outside:
        return ()
    return (
        f"{len(outside)} of {len(frequencies_hz)} frequencies lie outside {SWEEP_SPAN[0]} to {SWEEP_SPAN[1]} of the "
        f"design frequency {design_frequency_hz / 1e6:.6g} MHz",
    )


def balance_warning(frequency_hz: float, imbalance: float) -> tuple[str, ...]:
    """A warning if the power balance is off by more than 1 % of the input."""
    if abs(imbalance) <= BALANCE_ALLOWED:
        return ()
    return (
        f"power balance at {frequency_hz / 1e6:.6g} MHz is off by {100.0 * imbalance:.1f} % of the input; "
        "take the gain with that much doubt",
    )
