"""A thin dielectric coat: quasi-static sheath, the field of the charge inside it is weaker [Richmond1976]."""

from __future__ import annotations

import math

from boomwright.rf.arrays import VACUUM_PERMITTIVITY_F_M
from boomwright.rf.conductors import Coat


def coat_elastance_m_f(coat: Coat, radius_m: float) -> complex:
    """Change of elastance times length [m/F] that a coat makes on a round conductor.

    coat      thickness at least 0, relative permittivity at least 1
    radius_m  of the bare conductor, above 0

    Returns (1 / eps - 1 / eps0) ln(b / a) / (2 pi), b the outer radius: 0 without thickness and at permittivity 1.
    Good while the coat is thin beside the wavelength inside it [Richmond1976].
    """
    permittivity = coat.permittivity * (1.0 - 1j * coat.loss_tangent)
    thickness = math.log1p(coat.thickness_m / radius_m)
    return (1.0 / permittivity - 1.0) * thickness / (2.0 * math.pi * VACUUM_PERMITTIVITY_F_M)
