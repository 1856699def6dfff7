"""One colour a material, so that an assembly reads at a glance."""

from __future__ import annotations

from boomwright.pieces import Colour

PLAIN: Colour = (0.62, 0.64, 0.66)
PRINTED: Colour = (0.23, 0.45, 0.55)

_COLOURS: dict[str, Colour] = {
    "brass": (0.80, 0.66, 0.27),
    "copper": (0.76, 0.45, 0.27),
    "silver": (0.84, 0.85, 0.87),
    "aluminium": (0.75, 0.77, 0.80),
    "pine": (0.85, 0.72, 0.50),
    "birch": (0.83, 0.70, 0.52),
    "beech": (0.76, 0.58, 0.41),
    "glass-fibre rod": (0.80, 0.82, 0.70),
    "PTFE": (0.94, 0.94, 0.92),
}


def colour_of(material: str) -> Colour:
    """Colour of a material by its name; a plain grey for one without its own."""
    return _COLOURS.get(material, PLAIN)
