"""STEP (AP214): named and coloured bodies, nominal sizes, in millimetres. Writer, reader, measures in one place."""

from __future__ import annotations

import re
from collections.abc import Callable, Iterator, Mapping, Sequence
from contextlib import contextmanager
from itertools import count
from pathlib import Path
from typing import Any

from boomwright.errors import AccessError, CatalogueError, MeasureError
from boomwright.formats import bodies, joints, notches, release
from boomwright.formats.brep import ReadBody, StepReading
from boomwright.formats.format import FileEntry, Format
from boomwright.pieces import Body, Expectation, Matrix, Piece, Probe, SolidPiece
from boomwright.shop.profile import Shop

__all__ = ["STEP", "Step", "StepReading", "ReadBody", "MEASURES"]

TIME_STAMP = "2000-01-01T00:00:00"
"""The same on every day: a file's bytes follow from its content alone."""

MESH_SUFFIXES = (".stl", ".3mf")
"""What every printed part is written as beside its STEP."""

LOWEST_ALLOWED_MM = 1e-3
"""How far from the bed a part in print orientation may start."""

Measure = Callable[[Any, Mapping[str, Any], Sequence[Any]], float]
MEASURES: dict[str, Measure] = {
    **bodies.MEASURES,
    **joints.MEASURES,
    **notches.BODY_MEASURES,
    **release.MEASURES,
}


class Step(Format):
    """The STEP format."""

    name = "step"
    suffix = ".step"
    unit = "mm"

    def takes(self, piece: Piece) -> bool:
        """Every piece made of solids."""
        return isinstance(piece, SolidPiece)

    def write(self, piece: Piece, path: Path) -> None:
        """The nominal bodies, moved into the file's frame, as an assembly."""
        assert isinstance(piece, SolidPiece)
        placed = [(body, place(body.shape, piece.frame)) for body in piece.bodies]
        _transfer(piece.stem, placed, path)
        text = _numbered_anew(_without_noise(_unwrapped(_in_ascii(path.read_text("utf-8")))))
        path.write_text(_with_styles(text, [body.colour for body in piece.bodies]), "ascii", newline="\n")

    def read(self, path: Path) -> StepReading:
        """Every body with its name and colour, in the file's order."""
        return StepReading(path, tuple(_read_bodies(path)))

    def measure(self, reading: Any, probe: Probe, also: Sequence[Any]) -> float:
        """One quantity; the measures are listed in `MEASURES`."""
        if probe.measure not in MEASURES:
            raise CatalogueError(f"unknown STEP measure {probe.measure!r} (known: {', '.join(MEASURES)})")
        return MEASURES[probe.measure](reading, probe.arguments, also)

    def expect(self, entry: FileEntry, shop: Shop) -> tuple[Expectation, ...]:
        """Sound solids; in print orientation also: on the bed, and no larger than it."""

        path, allowed = entry.path, LOWEST_ALLOWED_MM
        rules = [
            Expectation(path, "solids free of faults", 1.0, 0.0, "", Probe("valid")),
            Expectation(path, "number of solids", 1.0, 0.0, "", Probe("solid_count"), "at_least"),
        ]
        if entry.process == "print":
            bed = Probe("overrun_mm", {"bed_mm": tuple(shop.printer.bed_mm)})
            rules += [
                Expectation(path, "lowest point above the bed", 0.0, allowed, "mm", Probe("lowest_mm")),
                Expectation(path, "overrun of the bed", 0.0, 1e-6, "mm", bed, "at_most"),
            ]
            what, closed = "written beside its STEP", Probe("watertight")
            meshes = [path.removesuffix(self.suffix) + suffix for suffix in MESH_SUFFIXES]
            rules += [Expectation(mesh, what, 1.0, 0.0, "", closed) for mesh in meshes]
        return tuple(rules)


STEP = Step()


def place(shape: Any, frame: Matrix) -> Any:
    """The kernel's shape of a `cadquery.Shape`, moved by a rigid matrix: a copy that shares nothing with it."""
    from OCP.BRepBuilderAPI import BRepBuilderAPI_Transform
    from OCP.gp import gp_Trsf

    motion = gp_Trsf()
    motion.SetValues(*(float(value) for row in frame[:3] for value in row))
    return BRepBuilderAPI_Transform(shape.wrapped, motion, True).Shape()


def _transfer(title: str, placed: Sequence[tuple[Body, Any]], path: Path) -> None:
    """Write names and shapes; colours are added to the text, since the kernel orders them by memory address."""
    from OCP.APIHeaderSection import APIHeaderSection_MakeHeader
    from OCP.IFSelect import IFSelect_RetDone
    from OCP.Interface import Interface_Static
    from OCP.STEPCAFControl import STEPCAFControl_Writer
    from OCP.STEPControl import STEPControl_StepModelType
    from OCP.TCollection import TCollection_HAsciiString
    from OCP.XSControl import XSControl_WorkSession

    document = _document(title, placed)
    writer = STEPCAFControl_Writer(XSControl_WorkSession(), False)
    writer.SetNameMode(True)
    writer.SetColorMode(False)
    writer.SetLayerMode(False)
    # These belong to the process and count only once a writer exists.
    Interface_Static.SetIVal_s("write.surfacecurve.mode", 0)
    Interface_Static.SetIVal_s("write.precision.mode", 0)
    Interface_Static.SetCVal_s("write.step.schema", "AP214IS")
    Interface_Static.SetCVal_s("xstep.cascade.unit", "MM")
    Interface_Static.SetCVal_s("write.step.unit", "MM")
    writer.Transfer(document, STEPControl_StepModelType.STEPControl_AsIs)
    header = APIHeaderSection_MakeHeader(writer.ChangeWriter().Model())
    header.SetName(TCollection_HAsciiString(title))
    header.SetTimeStamp(TCollection_HAsciiString(TIME_STAMP))
    if writer.Write(str(path)) != IFSelect_RetDone:
        raise AccessError(f"{path}: could not be written")


def _document(title: str, placed: Sequence[tuple[Body, Any]]) -> Any:
    from OCP.TCollection import TCollection_ExtendedString
    from OCP.TDataStd import TDataStd_Name
    from OCP.TDocStd import TDocStd_Document
    from OCP.TopLoc import TopLoc_Location
    from OCP.XCAFApp import XCAFApp_Application
    from OCP.XCAFDoc import XCAFDoc_DocumentTool

    def call(label: Any, name: str) -> None:
        TDataStd_Name.Set_s(label, TCollection_ExtendedString(name, True))

    document = TDocStd_Document(TCollection_ExtendedString("BinXCAF"))
    XCAFApp_Application.GetApplication_s().InitDocument(document)
    tool = XCAFDoc_DocumentTool.ShapeTool_s(document.Main())
    whole = tool.NewShape()
    call(whole, title)
    for body, shape in placed:
        label = tool.AddShape(shape, False)
        call(label, body.name)
        call(tool.AddComponent(whole, label, TopLoc_Location()), body.name)
    tool.UpdateAssemblies()
    return document


def _in_ascii(text: str) -> str:
    """Letters beyond ASCII as ISO 10303-21 wants them, in hexadecimal."""
    return re.sub(r"[^\x00-\x7f]+", lambda found: f"\\X2\\{found[0].encode('utf-16-be').hex().upper()}\\X0\\", text)


def _unwrapped(text: str) -> str:
    """One line a record: where the kernel breaks lines depends on the length of what is mended below."""
    return re.sub(r"\n +", "", text)


def _without_noise(text: str) -> str:
    """Numbers below 1e-12 as zero: what is left of a boolean there changes from run to run."""
    text = re.sub(r"(?<=[(,])-?\d+\.\d*E-(?:1[3-9]|[2-9]\d|\d{3})(?=[,)])", "0.", text)
    return re.sub(r"(?<=[(,])-0\.(?=[,)])", "0.", text)


def _numbered_anew(text: str) -> str:
    """Occurrence ids from 1: the kernel's counter runs on through the process."""
    number = count(1)
    return re.sub(r"(NEXT_ASSEMBLY_USAGE_OCCURRENCE\(')\d+'", lambda found: f"{found[1]}{next(number)}'", text)


def _with_styles(text: str, colours: Sequence[tuple[float, float, float]]) -> str:
    """The file with one colour a body, in the bodies' order."""
    breps = set(re.findall(r"#(\d+) = (?:MANIFOLD_SOLID_BREP|BREP_WITH_VOIDS)\(", text))
    # A body of several solids is a plain representation; so is the assembly, which holds no solid of its own.
    form = r"= (?:ADVANCED_BREP_)?SHAPE_REPRESENTATION\('[^']*',\s*\(([#\d,\s]*)\),\s*#(\d+)\s*\)"
    shapes = [found for found in re.findall(form, text) if breps.intersection(re.findall(r"\d+", found[0]))]
    head, end, tail = text.rpartition("ENDSEC;")
    free = count(1 + max(int(number) for number in re.findall(r"^#(\d+) =", text, re.MULTILINE)))
    lines = []
    for (items, context), colour in zip(shapes, colours, strict=True):
        solids = [item for item in re.findall(r"#(\d+)", items) if item in breps]
        styled = [f"#{next(free)}" for _ in solids]
        whole, style, usage, side, area, fill, fill_colour, rgb = (f"#{next(free)}" for _ in range(8))
        lines += [f"{s} = STYLED_ITEM('color',({style}),#{solid});" for s, solid in zip(styled, solids, strict=True)]
        lines += [
            f"{whole} = MECHANICAL_DESIGN_GEOMETRIC_PRESENTATION_REPRESENTATION('',({','.join(styled)}),#{context});",
            f"{style} = PRESENTATION_STYLE_ASSIGNMENT(({usage}));",
            f"{usage} = SURFACE_STYLE_USAGE(.BOTH.,{side});",
            f"{side} = SURFACE_SIDE_STYLE('',({area}));",
            f"{area} = SURFACE_STYLE_FILL_AREA({fill});",
            f"{fill} = FILL_AREA_STYLE('',({fill_colour}));",
            f"{fill_colour} = FILL_AREA_STYLE_COLOUR('',{rgb});",
            f"{rgb} = COLOUR_RGB('',{','.join(f'{float(part):.6f}' for part in colour)});",
        ]
    return head + "".join(line + "\n" for line in lines) + end + tail


def _read_bodies(path: Path) -> list[ReadBody]:
    from OCP.IFSelect import IFSelect_RetDone
    from OCP.Interface import Interface_Static
    from OCP.STEPCAFControl import STEPCAFControl_Reader
    from OCP.TCollection import TCollection_ExtendedString
    from OCP.TDF import TDF_LabelSequence
    from OCP.TDocStd import TDocStd_Document
    from OCP.TopLoc import TopLoc_Location
    from OCP.XCAFApp import XCAFApp_Application
    from OCP.XCAFDoc import XCAFDoc_DocumentTool

    _refuse_junk(path)
    reader = STEPCAFControl_Reader()
    reader.SetNameMode(True)
    reader.SetColorMode(True)
    Interface_Static.SetCVal_s("xstep.cascade.unit", "MM")
    document = TDocStd_Document(TCollection_ExtendedString("BinXCAF"))
    XCAFApp_Application.GetApplication_s().InitDocument(document)
    try:
        with _quiet_kernel():
            done = reader.ReadFile(str(path)) == IFSelect_RetDone and reader.Transfer(document)
    except Exception as error:  # the kernel's own exceptions have no common base worth naming
        raise MeasureError(f"{path.name}: not a readable STEP file ({error})") from error
    if not done:
        raise MeasureError(f"{path.name}: not a readable STEP file")
    roots = TDF_LabelSequence()
    XCAFDoc_DocumentTool.ShapeTool_s(document.Main()).GetFreeShapes(roots)
    found: list[ReadBody] = []
    for index in range(1, roots.Length() + 1):
        _gather(roots.Value(index), TopLoc_Location(), found)
    if not found:
        raise MeasureError(f"{path.name}: holds no body")
    return found


@contextmanager
def _quiet_kernel() -> Iterator[None]:
    """The kernel prints its complaints on stdout, where only results belong; its printers are put back afterwards."""
    from OCP.Message import Message

    messenger = Message.DefaultMessenger_s()
    printers = list(messenger.Printers())
    for printer in printers:
        messenger.RemovePrinter(printer)
    try:
        yield
    finally:
        for printer in printers:
            messenger.AddPrinter(printer)


def _refuse_junk(path: Path) -> None:
    """Keep what is plainly no STEP file away from the kernel."""
    try:
        data = path.read_bytes()
    except OSError as error:
        raise MeasureError(f"{path.name}: cannot be read ({error.strerror})") from error
    if not data.startswith(b"ISO-10303-21;") or not data.rstrip().endswith(b"END-ISO-10303-21;"):
        raise MeasureError(f"{path.name}: not a STEP file, or cut short")


def _gather(label: Any, motion: Any, found: list[ReadBody]) -> None:
    from OCP.TDF import TDF_Label, TDF_LabelSequence
    from OCP.XCAFDoc import XCAFDoc_ShapeTool

    parts = TDF_LabelSequence()
    if not XCAFDoc_ShapeTool.GetComponents_s(label, parts, False):
        shape = XCAFDoc_ShapeTool.GetShape_s(label)
        found.append(ReadBody(_name(label), _colour(label, shape), shape.Moved(motion)))
        return
    for index in range(1, parts.Length() + 1):
        component, referred = parts.Value(index), TDF_Label()
        XCAFDoc_ShapeTool.GetReferredShape_s(component, referred)
        _gather(referred, motion.Multiplied(XCAFDoc_ShapeTool.GetLocation_s(component)), found)


def _name(label: Any) -> str:
    from OCP.TDataStd import TDataStd_Name

    attribute = TDataStd_Name()
    return str(attribute.Get().ToExtString()) if label.FindAttribute(TDataStd_Name.GetID_s(), attribute) else ""


def _colour(label: Any, shape: Any) -> tuple[float, float, float] | None:
    """The colour of the body, or of its first solid: files carry it on either."""
    from OCP.Quantity import Quantity_Color, Quantity_TOC_sRGB
    from OCP.TopAbs import TopAbs_SOLID
    from OCP.TopExp import TopExp_Explorer
    from OCP.XCAFDoc import XCAFDoc_ColorGen, XCAFDoc_ColorSurf, XCAFDoc_DocumentTool

    tool = XCAFDoc_DocumentTool.ColorTool_s(label)
    solids = TopExp_Explorer(shape, TopAbs_SOLID)
    candidates = [shape, solids.Current()] if solids.More() else [shape]
    colour = Quantity_Color()
    for candidate in candidates:
        for kind in (XCAFDoc_ColorSurf, XCAFDoc_ColorGen):
            if tool.GetColor(candidate, kind, colour):
                red, green, blue = (round(part, 6) for part in colour.Values(Quantity_TOC_sRGB))
                return red, green, blue
    return None
