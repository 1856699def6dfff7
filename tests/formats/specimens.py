"""Small pieces that the tests of every format share: a notched rail with a bore, a drawing, a table, an antenna."""

import math

import cadquery as cq

from boomwright.formats.catalogue import FORMATS
from boomwright.formats.format import FileEntry
from boomwright.pieces import Body, Contour, DrawingPiece, Lettering, Mark, SolidPiece, TablePiece
from boomwright.shop.profile import Printer, Shop

SHOP = Shop(printer=Printer(outline_growth_mm=0.12, hole_shrink_mm=0.1))
AXIS_MM = 12.0
ROD_MM = 3.0
NOTCHES_MM = (15.0, 45.0)
RAILS_Y_MM = ((-20.0, -14.0), (14.0, 20.0))
BORE_MM = 4.0
TURNED = ((0.0, -1.0, 0.0, 5.0), (1.0, 0.0, 0.0, 30.0), (0.0, 0.0, 1.0, 0.0), (0.0, 0.0, 0.0, 1.0))


def prism(points_xz, y_mm):
    wire = cq.Wire.makePolygon([cq.Vector(x, y_mm[0], z) for x, z in points_xz], close=True)
    return cq.Solid.extrudeLinear(wire, [], cq.Vector(0, y_mm[1] - y_mm[0], 0))


def box(x_mm, y_mm, z_mm):
    sizes = [high - low for low, high in (x_mm, y_mm, z_mm)]
    return cq.Solid.makeBox(*sizes, pnt=cq.Vector(x_mm[0], y_mm[0], z_mm[0]))


def rail(growth_mm=0.0, shrink_mm=0.0, bore=True):
    """A base with two rails, two 90° notches on each, and an upright bore; drawn with a printer's offsets."""
    g, top = growth_mm, AXIS_MM
    apex = AXIS_MM - ROD_MM / 2.0 * math.sqrt(2.0) - g
    solid = box((g, 60.0 - g), (-20.0 + g, 20.0 - g), (0.0, 4.0))
    rails = [box((g, 60.0 - g), (low + g, high - g), (2.0, top)) for low, high in RAILS_Y_MM]
    solid = solid.fuse(*rails)
    depth = top - apex + 1.0
    cuts = [
        prism([(at, apex), (at + depth, apex + depth), (at - depth, apex + depth)], (-21.0, 21.0)) for at in NOTCHES_MM
    ]
    if bore:
        radius = (BORE_MM + shrink_mm) / 2.0
        cuts.append(cq.Solid.makeCylinder(radius, 6.0, cq.Vector(30, 0, -1), cq.Vector(0, 0, 1)))
    return solid.cut(*cuts).clean().Solids()[0]


def rail_piece(printer=SHOP.printer, **changes):
    growth, shrink = printer.outline_growth_mm, printer.hole_shrink_mm
    printed = (Body("rail-1", rail(growth, shrink)),)
    values = {"stem": "rail-1", "process": "print", "bodies": (Body("rail-1", rail(), (0.2, 0.5, 0.9)),)}
    values |= {"printed": printed, "offsets": {"outline_growth_mm": growth, "hole_shrink_mm": shrink}}
    return SolidPiece(**(values | changes))


def rod(at_mm, length_mm, diameter_mm=ROD_MM):
    r, h, b = diameter_mm / 2.0, length_mm / 2.0, 0.2
    profile = [(0, -h), (r - b, -h), (r, b - h), (r, h - b), (r - b, h), (0, h)]
    wire = cq.Wire.makePolygon([cq.Vector(at_mm + x, y, 0) for x, y in profile], close=True)
    return cq.Solid.revolve(wire, [], 360.0, cq.Vector(at_mm, 0, 0), cq.Vector(at_mm, 1, 0))


def boom():
    """A square boom of 12 with two open grooves of radius 1.6 on the datum plane, top line at 1.5."""
    bar = box((-30.0, 80.0), (-6.0, 6.0), (-10.5, 1.5))
    cuts = []
    for at in (0.0, 50.0):
        cuts.append(cq.Solid.makeCylinder(1.6, 14.0, cq.Vector(at, -7, 0), cq.Vector(0, 1, 0)))
        cuts.append(box((at - 1.6, at + 1.6), (-7.0, 7.0), (0.0, 3.0)))
    return bar.cut(*cuts).Solids()[0]


def antenna_piece(length_mm=160.0):
    """Boom, two rods, and a straight driven element of two halves, in their places."""
    half = rod(0.0, 50.0)
    halves = cq.Compound.makeCompound([half.translate(cq.Vector(25.0, side * 27.0, 20.0)) for side in (-1, 1)])
    bodies = (
        Body("boom", boom(), (0.76, 0.58, 0.41)),
        Body("R", rod(0.0, length_mm), (0.8, 0.66, 0.27)),
        Body("D1", rod(50.0, 140.0), (0.8, 0.66, 0.27)),
        Body("DE", halves, (0.76, 0.45, 0.27)),
    )
    return SolidPiece("antenna", "assembly", bodies)


def drawing_piece(shift_mm=0.0, cut="CUT", process="laser"):
    """Two plates on a sheet: one with a round slot open downward and a hole, one plain; kerf 0.16 taken."""
    k = 0.08
    at = 40.0 + shift_mm
    plate = [
        (10.0 - k, 10.0 - k, 0.0),
        (at - 1.7 + k, 10.0 - k, 0.0),
        (at - 1.7 + k, 18.3, -1.0),
        (at + 1.7 - k, 18.3, 0.0),
        (at + 1.7 - k, 10.0 - k, 0.0),
        (90.0 + k, 10.0 - k, 0.0),
        (90.0 + k, 30.0 + k, 0.0),
        (10.0 - k, 30.0 + k, 0.0),
    ]
    hole = [(58.0 + k, 20.0, 1.0), (62.0 - k, 20.0, 1.0)]
    other = [(10.0 - k, 33.0, 0.0), (90.0, 33.0, 0.0), (90.0, 40.0, 0.0), (10.0 - k, 40.0, 0.0)]
    marks = [Mark(Contour(tuple(vertices)), cut) for vertices in (plate, hole, other)]
    marks.append(Mark(Contour(((20.0, 22.0, 0.0), (25.0, 22.0, 0.0), (25.0, 26.0, 0.0)), False), "SCORE"))
    text = Lettering("R <b> 5 %", 70.0, 22.0, 3.0, "SCORE")
    return DrawingPiece("comb-1", process, tuple(marks), (text,), offsets={"kerf_mm": 0.16})


TABLE = TablePiece(
    "cut-list",
    "bench",
    ("tag", "length_mm", "note"),
    (("R", "170.5", "=1+1"), ("D1", "-2.5", '- mind, the "edge"\nnext line'), ("D2", "148", "'ready µm")),
)


def write(piece, folder):
    """Write a piece in every format that takes it; the entries as the manifest would list them."""
    entries = []
    for form in FORMATS:
        if form.takes(piece):
            name = f"{piece.stem}{form.suffix}"
            form.write(piece, folder / name)
            offsets = {} if form.name == "step" else getattr(piece, "offsets", {})
            frame = getattr(piece, "frame", TURNED)
            entries.append(FileEntry(name, piece.stem, piece.process, form.name, form.unit, frame, offsets))
    return entries


def judge(entries, folder, shop=SHOP):
    """What the formats' own rules find wrong: {(file, what): measured or reason}."""
    from boomwright.errors import MeasureError

    wrong = {}
    for entry in entries:
        for e in FORMATS[entry.format].expect(entry, shop):
            try:
                value = measure(folder / e.file, e.probe)
            except MeasureError as error:
                wrong[e.file, e.what] = str(error)
                continue
            low = e.rule == "at_most" or value >= e.expected - e.allowed
            high = e.rule == "at_least" or value <= e.expected + e.allowed
            if not (low and high):
                wrong[e.file, e.what] = value
    return wrong


def measure(path, probe):
    """Read a file, and those the probe also wants, and measure."""
    by_suffix = {form.suffix: form for form in FORMATS}
    read = [by_suffix[p.suffix].read(p) for p in (path, *(path.parent / other for other in probe.also))]
    return by_suffix[path.suffix].measure(read[0], probe, read[1:])
