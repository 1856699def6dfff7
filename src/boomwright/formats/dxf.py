"""DXF R2010 in millimetres: one layer an operation, closed polylines with true arcs. Writer and reader.

Coordinates are those of the file; a laser's kerf is already taken in them.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from pathlib import Path
from typing import Any

from boomwright.errors import CatalogueError, MeasureError
from boomwright.formats import assembly, dimensions, edges, outlines, plates, slots
from boomwright.formats.dimensions import SeenWords
from boomwright.formats.dxf_dimensions import add_dimension, add_words, layer_style, prepare, seen_dimension
from boomwright.formats.format import FileEntry, Format
from boomwright.formats.outlines import DxfReading, Outline
from boomwright.pieces import DrawingPiece, Expectation, Piece, Probe
from boomwright.shop.nesting import sheet_margin_mm
from boomwright.shop.profile import Shop

MILLIMETRES = 4
"""The DXF header's number for the unit ($INSUNITS)."""

LAYER_COLOURS = (1, 5, 3, 6, 4, 2, 7)
"""Colour numbers, given to the layers in the order of their names."""

MEASURES = {
    **outlines.MEASURES,
    "slot": slots.measure_slot,
    "edge_at": edges.measure_edge,
    **plates.MEASURES,
    **assembly.MEASURES,
    **dimensions.MEASURES,
}


class Dxf(Format):
    """The DXF format."""

    name = "dxf"
    suffix = ".dxf"
    unit = "mm"

    def takes(self, piece: Piece) -> bool:
        """Flat drawings."""
        return isinstance(piece, DrawingPiece)

    def write(self, piece: Piece, path: Path) -> None:
        """A polyline for each mark, a text for each lettering; no dates, no random ids."""
        assert isinstance(piece, DrawingPiece)
        with _fixed_dates():
            document = _document(piece)
            document.saveas(path)

    def read(self, path: Path) -> DxfReading:
        """Every line, arc, circle and polyline as an outline, and the number of errors ezdxf's audit finds."""
        import ezdxf
        from ezdxf.lldxf.const import DXFError

        try:
            document = ezdxf.readfile(path)
        except (OSError, DXFError, UnicodeError, ValueError, KeyError, IndexError, TypeError) as error:
            raise MeasureError(f"{path.name}: not a readable DXF file ({error})") from error
        audit = document.audit()
        space = document.modelspace()
        found = [outline for entity in space for outline in _outlines(entity)]
        unit = int(document.header.get("$INSUNITS", 0))
        seen = tuple(seen_dimension(entity) for entity in space.query("DIMENSION"))
        words = tuple(_words(entity) for entity in space.query("TEXT"))
        return DxfReading(path, tuple(found), len(audit.errors) + len(audit.fixes), unit, seen, words)

    def measure(self, reading: Any, probe: Probe, also: Sequence[Any]) -> float:
        """One quantity; the measures are listed in `MEASURES`."""
        if probe.measure not in MEASURES:
            raise CatalogueError(f"unknown DXF measure {probe.measure!r} (known: {', '.join(MEASURES)})")
        return MEASURES[probe.measure](reading, probe.arguments, also)

    def expect(self, entry: FileEntry, shop: Shop) -> tuple[Expectation, ...]:
        """A sound drawing in millimetres; a laser's also closed, inside the sheet, with room between the parts."""

        def none(what: str, unit: str, measure: str, arguments: dict[str, Any] | None = None) -> Expectation:
            return Expectation(entry.path, what, 0.0, 0.0, unit, Probe(measure, arguments or {}))

        rules = [
            none("errors of the drawing's audit", "", "audit_errors"),
            none("entities twice", "", "duplicates"),
            none("entities without length", "", "zero_length"),
            Expectation(entry.path, "unit of the drawing", float(MILLIMETRES), 0.0, "", Probe("unit_code")),
        ]
        if entry.process == "laser":
            laser = shop.laser
            layers = [laser.layers.cut, laser.layers.score, laser.layers.engrave]
            room = sheet_margin_mm(laser)
            rules += [
                none("open contours on the cutting layer", "", "open_contours", {"layer": laser.layers.cut}),
                none("contours that cross or touch", "", "crossings", {"layer": laser.layers.cut}),
                none("layers the shop does not know", "", "unknown_layers", {"layers": layers}),
                none("overrun of the sheet", "mm", "outside_mm", {"size": list(laser.sheet_size_mm)}),
                none("parts nearer than 2 kerfs + 1", "", "too_near", {"layer": laser.layers.cut, "least_mm": room}),
            ]
        return tuple(rules)


DXF = Dxf()


@contextmanager
def _fixed_dates() -> Iterator[None]:
    """ezdxf writes the time of day unless told otherwise; its setting belongs to the process and is put back."""
    import ezdxf

    before = ezdxf.options.write_fixed_meta_data_for_testing
    ezdxf.options.write_fixed_meta_data_for_testing = True
    try:
        yield
    finally:
        ezdxf.options.write_fixed_meta_data_for_testing = before


def _document(piece: DrawingPiece) -> Any:
    import ezdxf

    document = ezdxf.new("R2010")
    document.header["$INSUNITS"] = MILLIMETRES
    document.header["$MEASUREMENT"] = 1
    space = document.modelspace()
    names = {mark.layer for mark in piece.marks} | {text.layer for text in piece.lettering}
    names |= {stroke.layer for dimension in piece.dimensions for stroke in dimension.strokes}
    if piece.paper_scale:
        prepare(document, piece.paper_scale)
    for index, name in enumerate(sorted(names)):
        if name not in document.layers:
            layer = document.layers.add(name, color=LAYER_COLOURS[index % len(LAYER_COLOURS)])
            if piece.paper_scale:
                layer.update_dxf_attribs(layer_style(name))
    for mark in piece.marks:
        contour = mark.contour
        space.add_lwpolyline(contour.vertices, format="xyb", close=contour.closed, dxfattribs={"layer": mark.layer})
    for dimension in piece.dimensions:
        add_dimension(document, dimension, piece.paper_scale)
    for text in piece.lettering:
        if piece.paper_scale:
            add_words(space, text, text.layer)
            continue
        attributes = {"layer": text.layer, "insert": (text.x_mm, text.y_mm)}
        space.add_text(text.text, height=text.height_mm, dxfattribs=attributes)
    # Saving would enter these in the order of a set, which changes from process to process.
    for kind in sorted(document.entitydb.dxf_types_in_use()):
        document.classes.add_class(kind)
    points = [(x, y) for mark in piece.marks for x, y, _ in mark.contour.vertices]
    if points:
        xs, ys = zip(*points, strict=True)
        document.header["$EXTMIN"], document.header["$EXTMAX"] = (min(xs), min(ys), 0.0), (max(xs), max(ys), 0.0)
    return document


def _words(entity: Any) -> SeenWords:
    x, y, _ = entity.dxf.insert
    return SeenWords(str(entity.dxf.text), float(x), float(y), float(entity.dxf.height))


def _outlines(entity: Any) -> Iterator[Outline]:
    import math

    kind, layer = entity.dxftype(), entity.dxf.layer
    if kind == "LWPOLYLINE":
        vertices = tuple((float(x), float(y), float(bulge)) for x, y, bulge in entity.get_points("xyb"))
        yield Outline(vertices, bool(entity.closed), layer)
    elif kind == "LINE":
        start, end = entity.dxf.start, entity.dxf.end
        yield Outline(((start.x, start.y, 0.0), (end.x, end.y, 0.0)), False, layer)
    elif kind == "CIRCLE":
        (x, y, _), radius = entity.dxf.center, entity.dxf.radius
        yield Outline(((x - radius, y, 1.0), (x + radius, y, 1.0)), True, layer)
    elif kind == "ARC":
        start, end = entity.start_point, entity.end_point
        sweep = math.radians((entity.dxf.end_angle - entity.dxf.start_angle) % 360.0)
        yield Outline(((start.x, start.y, math.tan(sweep / 4.0)), (end.x, end.y, 0.0)), False, layer)
