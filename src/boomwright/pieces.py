"""What a part hands on: pieces to be written, and expectations to be held against the written files.

Solids are the CAD kernel's own (`cadquery.Shape`), seen here as opaque values: this file loads no CAD.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import TYPE_CHECKING, Any, Literal

from boomwright.plan.drawing_marks import Dimension
from boomwright.plan.frame import IDENTITY, Matrix

if TYPE_CHECKING:
    from boomwright.plan.plan import Plan

__all__ = [
    "IDENTITY",
    "Body",
    "Colour",
    "Contour",
    "Dimension",
    "DrawingPiece",
    "Expectation",
    "Lettering",
    "Mark",
    "Matrix",
    "NetworkPiece",
    "Operation",
    "Page",
    "PagesPiece",
    "Part",
    "PicturePiece",
    "Piece",
    "Probe",
    "Process",
    "SolidPiece",
    "TablePiece",
]

Process = Literal["assembly", "print", "laser", "cnc", "bench", "rf"]
Operation = Literal["cut", "score", "engrave"]
Colour = tuple[float, float, float]


@dataclass(frozen=True)
class Body:
    """A solid (or compound of solids) in the design's frame, its name and colour (red, green, blue, each 0 to 1)."""

    name: str
    shape: Any
    colour: Colour = (0.7, 0.7, 0.7)


@dataclass(frozen=True)
class SolidPiece:
    """Bodies for one STEP file; a printed piece also becomes STL and 3MF.

    stem     file name without suffix, `cradle-1`
    process  decides the folder and the formats
    bodies   as designed, nominal sizes, in the design's frame
    frame    design's frame to the file's frame (print orientation, on the bed)
    printed  the bodies rebuilt with the printer's offsets taken, or None where they change nothing
    offsets  what was taken, for the manifest: {"outline_growth_mm": .., "hole_shrink_mm": ..}
    """

    stem: str
    process: Process
    bodies: tuple[Body, ...]
    frame: Matrix = IDENTITY
    printed: tuple[Body, ...] | None = None
    offsets: Mapping[str, float] = field(default_factory=dict)


@dataclass(frozen=True)
class Contour:
    """A closed or open run of vertices (x, y, bulge) [mm]; bulge = tan(quarter of the arc's angle), 0 = straight.

    bulge of a vertex belongs to the piece from it to the next vertex, positive = counter-clockwise, as in DXF.
    """

    vertices: tuple[tuple[float, float, float], ...]
    closed: bool = True


@dataclass(frozen=True)
class Mark:
    """A contour together with the layer it is drawn on."""

    contour: Contour
    layer: str


@dataclass(frozen=True)
class Lettering:
    """Text on a drawing that no machine follows (a drawing's own annotation) [mm]; `upright` reads along +y."""

    text: str
    x_mm: float
    y_mm: float
    height_mm: float
    layer: str
    upright: bool = False


@dataclass(frozen=True)
class DrawingPiece:
    """A flat drawing at true scale [mm] for one DXF file. The kerf is already taken; `offsets` says how much.

    dimensions   with their points in the drawing's coordinates
    paper_scale  of a drawing to be read on paper: millimetres of paper per millimetre; 0 for one that a machine follows
    """

    stem: str
    process: Process
    marks: tuple[Mark, ...]
    lettering: tuple[Lettering, ...] = ()
    frame: Matrix = IDENTITY
    offsets: Mapping[str, float] = field(default_factory=dict)
    dimensions: tuple[Dimension, ...] = ()
    paper_scale: float = 0.0


@dataclass(frozen=True)
class TablePiece:
    """A table for one CSV file."""

    stem: str
    process: Process
    columns: tuple[str, ...]
    rows: tuple[tuple[str, ...], ...]


@dataclass(frozen=True)
class NetworkPiece:
    """A one-port over frequency for one Touchstone file.

    frequency_hz  ascending [Hz], (F,)
    reflection    coefficient in `system_ohm`, (F,)
    """

    stem: str
    process: Process
    frequency_hz: tuple[float, ...]
    reflection: tuple[complex, ...]
    system_ohm: float = 50.0


@dataclass(frozen=True)
class PicturePiece:
    """A chart for one SVG file; `svg` is the whole document."""

    stem: str
    process: Process
    svg: str


@dataclass(frozen=True)
class Page:
    """One page: straight lines, words and dimensions [mm], from its lower left corner."""

    marks: tuple[Mark, ...]
    lettering: tuple[Lettering, ...] = ()
    dimensions: tuple[Dimension, ...] = ()


@dataclass(frozen=True)
class PagesPiece:
    """Pages of one size (x, y) [mm] for one PDF file; layers are capitals and hyphens."""

    stem: str
    process: Process
    title: str
    size_mm: tuple[float, float]
    pages: tuple[Page, ...]


Piece = SolidPiece | DrawingPiece | TablePiece | NetworkPiece | PicturePiece | PagesPiece


@dataclass(frozen=True)
class Probe:
    """How a quantity is measured: the name of one of the format's measures, and its arguments.

    also   further files (paths in the output folder) that the measure reads, in the order it wants them
    """

    measure: str
    arguments: Mapping[str, Any] = field(default_factory=dict)
    also: tuple[str, ...] = ()


@dataclass(frozen=True)
class Expectation:
    """One quantity a written file must show.

    file      path in the output folder
    what      the quantity in the glossary's words: "R axis height"
    expected  worked out by arithmetic from the plan
    allowed   how far the measured value may be from it, in `unit`
    rule      near: |measured - expected| <= allowed; at_least: measured >= expected - allowed; at_most: the reverse
    """

    file: str
    what: str
    expected: float
    allowed: float
    unit: str
    probe: Probe
    rule: Literal["near", "at_least", "at_most"] = "near"


NEVER = "never"
"""When a part is left out that every design has."""


class Part:
    """Base of every part: what it is for, how it is made, when it is left out, its pieces, what its files must show."""

    name: str = ""
    purpose: str = ""
    processes: tuple[Process, ...] = ()
    left_out_when: str = NEVER
    """In plain words, as `show parts` says it; true to what `left_out` finds."""

    def left_out(self, plan: Plan) -> str | None:
        """Why this design has no such part, in words; None when it has one."""
        return None

    def build(self, plan: Plan) -> tuple[Piece, ...]:
        """The pieces, in the design's frame."""
        raise NotImplementedError

    def expect(self, plan: Plan) -> tuple[Expectation, ...]:
        """What the files must show, by arithmetic from the plan, never from a solid."""
        raise NotImplementedError
