"""What small printed aids share: a chamfered plate, engraved words, and the pair of nominal and drawn solid."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Sequence
from typing import Any

from boomwright.parts.palette import PRINTED
from boomwright.parts.solids import Shape, prism_along_z
from boomwright.pieces import Body, Expectation, Probe, SolidPiece
from boomwright.plan.compensation import NOMINAL, Offsets
from boomwright.plan.label import DEPTH_MM, STROKE_MM, Label

CHAMFER_MM = 0.4
"""Bottom edges, against elephant's foot."""

EXTENT_ALLOWED_MM = 0.005


def printed_piece(stem: str, draw: Callable[[Offsets], Shape], offsets: Offsets) -> SolidPiece:
    """A printed piece in its own frame, which is the file's: nominal, and drawn again with what a printer changes."""
    printed = (Body(stem, draw(offsets), PRINTED),) if offsets else None
    taken = {"outline_growth_mm": offsets.outline_growth_mm, "hole_shrink_mm": offsets.hole_shrink_mm}
    return SolidPiece(stem, "print", (Body(stem, draw(NOMINAL), PRINTED),), printed=printed, offsets=taken)


def chamfered_plate(outline: Any, height_mm: float, growth_mm: float = 0.0) -> Shape:
    """A shapely polygon, drawn out from the bed, its sides moved in by the growth, its bottom edges chamfered."""
    drawn = outline.buffer(-growth_mm, join_style="mitre") if growth_mm else outline
    plate = prism_along_z(drawn.simplify(0.0), (0.0, height_mm))
    edges = [e for e in plate.Edges() if abs(e.startPoint().z) < 1e-9 and abs(e.endPoint().z) < 1e-9]
    return plate.chamfer(CHAMFER_MM, None, edges)


def label_tools(labels: Iterable[Label]) -> list[Shape]:
    """The prisms that cut labels into their faces; words are read, not fitted, so no offset moves them."""
    import shapely

    half, tools = STROKE_MM / 2.0, list[Shape]()
    for label in labels:
        paths = [shapely.LineString(line).buffer(half, cap_style="square", join_style="mitre") for line in label.lines]
        merged = shapely.union_all(paths)
        polygons = list(merged.geoms) if hasattr(merged, "geoms") else [merged]
        z = (label.top_mm - DEPTH_MM, label.top_mm + 1.0)
        tools += [prism_along_z(polygon, z) for polygon in polygons if not polygon.is_empty]
    return tools


def expect_extent(file: str, size_mm: Sequence[float]) -> list[Expectation]:
    """Outer sizes in x, y and z."""
    return [
        Expectation(
            file, f"size in {axis}", size, EXTENT_ALLOWED_MM, "mm", Probe("extent", {"quantity": f"size_{axis}_mm"})
        )
        for axis, size in zip("xyz", size_mm, strict=False)
    ]
