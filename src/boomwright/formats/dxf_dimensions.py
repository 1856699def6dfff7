"""Dimensions in DXF: true DIMENSION entities, each with its own block of what is drawn. Writer and reader.

A block of its own means that every program shows what was laid out here; the entity keeps the measured points and,
by its style, the factor from the drawing to true size, so a CAD program may measure and redraw it.
"""

from __future__ import annotations

import math
from typing import Any

from boomwright.errors import MeasureError
from boomwright.formats.dimensions import SeenDimension
from boomwright.plan.drawing_marks import TEXT_MM, Dimension
from boomwright.plan.drawing_view import ARROW_MM

APP = "BOOMWRIGHT"
STRING = 1000
OWN_BLOCK, OWN_TEXT_PLACE, X_ORDINATE = 32, 128, 64
LINEAR, DIAMETER, RADIUS, ORDINATE = 0, 3, 4, 6
TYPES = {"x": LINEAR, "y": LINEAR, "running": ORDINATE | X_ORDINATE, "radius": RADIUS, "diameter": DIAMETER}
LETTERING = "LETTERING"
FONT = "arial.ttf"
"""Its widths are those the layout counts with."""

LINE_TYPES = {
    "HIDDEN": ("DRAWING-HIDDEN", "hidden edges", [4.5, 3.0, -1.5]),
    "CENTRE": ("DRAWING-CENTRE", "centre lines", [12.0, 8.0, -1.5, 1.0, -1.5]),
}
THICK, THIN = 50, 25
"""Line weights in hundredths of a millimetre."""

LINE_WEIGHTS = {"VISIBLE": THICK, "FRAME": THICK}
DRAWN_MM = 0.002


def prepare(document: Any, paper_scale: float) -> None:
    """Line types, lettering and the scale of both, for a drawing of `paper_scale` mm of paper per mm."""
    for name, description, pattern in LINE_TYPES.values():
        document.linetypes.add(name, pattern, description=description)
    document.styles.add(LETTERING, font=FONT)
    document.header["$LTSCALE"] = 1.0 / paper_scale
    document.header["$LWDISPLAY"] = 1
    document.appids.add(APP)


def layer_style(name: str) -> dict[str, Any]:
    """Line type and weight of a layer of a drawing."""
    style: dict[str, Any] = {"lineweight": LINE_WEIGHTS.get(name, THIN)}
    return style | ({"linetype": LINE_TYPES[name][0]} if name in LINE_TYPES else {})


def add_dimension(document: Any, dimension: Dimension, paper_scale: float) -> None:
    """One dimension, its points already in the drawing's coordinates."""
    block = document.blocks.new_anonymous_block(type_char="D")
    drawn = {"layer": "DIMENSION"}
    block.add_line(*dimension.line, dxfattribs=drawn)
    for stroke in dimension.strokes:
        block.add_lwpolyline(stroke.vertices, format="xyb", close=stroke.closed, dxfattribs={"layer": stroke.layer})
    add_words(block, dimension.words, "DIMENSION")
    (ax, ay), (bx, by) = dimension.ends
    (lx, ly) = dimension.line[1]
    attributes: dict[str, Any] = {
        "layer": "DIMENSION",
        "dimstyle": _style(document, paper_scale / dimension.scale, paper_scale),
        "dimtype": TYPES[dimension.kind] | OWN_BLOCK | OWN_TEXT_PLACE,
        "geometry": block.name,
        "text": dimension.text,
        "text_midpoint": _middle(dimension),
        "actual_measurement": dimension.value_mm,
    }
    if dimension.kind in ("x", "y"):
        attributes |= {"defpoint": (lx, ly), "defpoint2": (ax, ay), "defpoint3": (bx, by)}
        attributes["angle"] = 0.0 if dimension.kind == "x" else 90.0
    elif dimension.kind == "running":
        attributes |= {"defpoint": (ax, ay), "defpoint2": (bx, by), "defpoint3": (lx, ly)}
    else:
        attributes |= {"defpoint": (ax, ay), "defpoint4": (bx, by)}
    entity = document.modelspace().new_entity("DIMENSION", dxfattribs=attributes)
    entity.set_xdata(APP, [(STRING, dimension.name)])


def add_words(space: Any, words: Any, layer: str) -> None:
    """A text in the drawing's lettering."""
    attributes = {"layer": layer, "insert": (words.x_mm, words.y_mm), "style": LETTERING}
    space.add_text(words.text, height=words.height_mm, rotation=90.0 if words.upright else 0.0, dxfattribs=attributes)


def seen_dimension(entity: Any) -> SeenDimension:
    """What a DIMENSION entity states and draws. Raises MeasureError where the two differ."""
    style, kind = entity.get_dim_style(), entity.dimtype
    factor = float(style.dxf.dimlfac)
    a, b = entity.dxf.defpoint2, entity.dxf.defpoint3
    if kind == LINEAR:
        upright = abs(entity.dxf.angle - 90.0) < 1e-6
        length = abs(b.y - a.y) if upright else abs(b.x - a.x)
    elif kind == ORDINATE:
        length = a.x - entity.dxf.defpoint.x
    else:
        length = entity.dxf.defpoint.distance(entity.dxf.defpoint4)
    name = entity.get_xdata(APP)[0].value if entity.has_xdata(APP) else ""
    text = str(entity.dxf.text)
    block = entity.get_geometry_block()
    texts = [t.dxf.text for t in block if t.dxftype() == "TEXT"] if block is not None else []
    lines = [e for e in block if e.dxftype() == "LINE"] if block is not None else []
    if texts != [text] or len(lines) != 1:
        raise MeasureError(f"the dimension {name!r} states {text!r} and draws {texts}")
    drawn = lines[0].dxf.start.distance(lines[0].dxf.end)
    if not math.isclose(drawn, abs(length), abs_tol=DRAWN_MM / factor):
        raise MeasureError(f"the dimension {name!r} draws a line of {drawn:g} between points {abs(length):g} apart")
    return SeenDimension(str(name), text, float(length * factor))


def _style(document: Any, factor: float, paper_scale: float) -> str:
    """The dimension style of views drawn at this factor from the drawing to true size."""
    name = f"DRAWING-{factor:g}"
    if name not in document.dimstyles:
        sizes = {"dimtxt": TEXT_MM / paper_scale, "dimasz": ARROW_MM / paper_scale, "dimscale": 1.0}
        places = {"dimtad": 1, "dimtih": 0, "dimtoh": 0, "dimdec": 2, "dimzin": 8, "dimlfac": factor}
        gaps = {"dimexo": 1.0 / paper_scale, "dimexe": 1.5 / paper_scale, "dimgap": 1.0 / paper_scale}
        document.dimstyles.new(name, dxfattribs={**sizes, **places, **gaps, "dimtxsty": LETTERING})
    return name


def _middle(dimension: Dimension) -> tuple[float, float]:
    x0, y0, x1, y1 = dimension.words.box
    return (x0 + x1) / 2.0, (y0 + y1) / 2.0
