"""What a printer's measured offsets change in the sizes that are drawn for it.

Every size here is nominal; the parts that a printer makes are rebuilt with these moves, never inflated as a mesh.
"""

from __future__ import annotations

from dataclasses import dataclass

from boomwright.shop.profile import Printer


@dataclass(frozen=True)
class Offsets:
    """How far the drawing must lie inside what shall come out of the printer [mm].

    outline_growth_mm  each side face is drawn this far into the material, along its horizontal normal
    hole_shrink_mm     bores and channels are drawn this much wider, on the diameter
    """

    outline_growth_mm: float = 0.0
    hole_shrink_mm: float = 0.0

    def __bool__(self) -> bool:
        return self.outline_growth_mm != 0.0 or self.hole_shrink_mm != 0.0


NOMINAL = Offsets()


def printer_offsets(printer: Printer) -> Offsets:
    """The offsets this printer's pieces are drawn with."""
    return Offsets(printer.outline_growth_mm, printer.hole_shrink_mm)


def drawn_apex_mm(apex_mm: float, outline_growth_mm: float) -> float:
    """Height at which a 90° notch's apex is drawn [mm] so that it prints at `apex_mm`.

    Each face moves horizontally by the growth; on faces at 45° that lowers the apex by the same amount.
    """
    return apex_mm - outline_growth_mm
