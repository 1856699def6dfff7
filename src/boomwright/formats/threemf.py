"""3MF (core specification 1.3): the STL's mesh with a name and a unit, in a zip archive without dates."""

from __future__ import annotations

import zipfile
import zlib
from collections.abc import Sequence
from pathlib import Path
from typing import Any
from xml.etree import ElementTree
from xml.sax.saxutils import quoteattr

import numpy as np

from boomwright.errors import MeasureError
from boomwright.formats import meshes, meshing
from boomwright.formats.format import FileEntry, Format
from boomwright.pieces import Expectation, Piece, Probe, SolidPiece
from boomwright.shop.profile import Shop
from boomwright.units import MM_PER_INCH, MM_PER_M

CORE = "http://schemas.microsoft.com/3dmanufacturing/core/2015/02"
MODEL_PATH = "3D/3dmodel.model"
UNITS_MM = {
    "micron": 0.001,
    "millimeter": 1.0,
    "centimeter": 10.0,
    "inch": MM_PER_INCH,
    "foot": 12.0 * MM_PER_INCH,
    "meter": MM_PER_M,
}
EARLIEST_ZIP_DATE = (1980, 1, 1, 0, 0, 0)
LARGEST_MODEL_BYTES = 256 * 1024 * 1024

CONTENT_TYPES = (
    '<?xml version="1.0" encoding="UTF-8"?>\n'
    '<Types xmlns="http://schemas.openxmlformats.org/package/2006/content-types">'
    '<Default Extension="rels" ContentType="application/vnd.openxmlformats-package.relationships+xml"/>'
    '<Default Extension="model" ContentType="application/vnd.ms-package.3dmanufacturing-3dmodel+xml"/>'
    "</Types>\n"
)
RELATIONSHIPS = (
    '<?xml version="1.0" encoding="UTF-8"?>\n'
    '<Relationships xmlns="http://schemas.openxmlformats.org/package/2006/relationships">'
    f'<Relationship Target="/{MODEL_PATH}" Id="rel0" '
    'Type="http://schemas.microsoft.com/3dmanufacturing/2013/01/3dmodel"/>'
    "</Relationships>\n"
)


class ThreeMf(Format):
    """The 3MF format."""

    name = "3mf"
    suffix = ".3mf"
    unit = "mm"

    def takes(self, piece: Piece) -> bool:
        """Printed pieces."""
        return isinstance(piece, SolidPiece) and piece.process == "print"

    def write(self, piece: Piece, path: Path) -> None:
        """One object, named like the piece."""
        assert isinstance(piece, SolidPiece)
        model = _model(piece.stem, meshing.mesh_piece(piece))
        with zipfile.ZipFile(path, "w", zipfile.ZIP_DEFLATED, compresslevel=6) as archive:
            for name, text in (
                ("[Content_Types].xml", CONTENT_TYPES),
                ("_rels/.rels", RELATIONSHIPS),
                (MODEL_PATH, model),
            ):
                entry = zipfile.ZipInfo(name, EARLIEST_ZIP_DATE)
                entry.compress_type = zipfile.ZIP_DEFLATED
                entry.create_system = 0
                archive.writestr(entry, text.encode("utf-8"))

    def read(self, path: Path) -> meshes.MeshReading:
        """The only mesh object, in millimetres whatever the file's unit."""
        root = _root(path)
        unit = root.get("unit", "millimeter")
        objects = root.findall(f"{{{CORE}}}resources/{{{CORE}}}object")
        mesh = objects[0].find(f"{{{CORE}}}mesh") if len(objects) == 1 else None
        if unit not in UNITS_MM or mesh is None:
            raise MeasureError(f"{path.name}: one mesh in a known unit expected")
        try:
            vertices = np.array(
                [[float(v.attrib[axis]) for axis in ("x", "y", "z")] for v in mesh.iterfind(f"{{{CORE}}}vertices/*")],
                dtype=np.float32,
            )
            triangles = np.array(
                [[int(t.attrib[key]) for key in ("v1", "v2", "v3")] for t in mesh.iterfind(f"{{{CORE}}}triangles/*")],
                dtype=np.int64,
            )
        except (KeyError, ValueError) as error:
            raise MeasureError(f"{path.name}: holds a vertex or triangle that is not one ({error})") from error
        if len(triangles) == 0 or triangles.min() < 0 or triangles.max() >= len(vertices):
            raise MeasureError(f"{path.name}: triangles name vertices that do not exist")
        if not np.all(np.isfinite(vertices)):
            raise MeasureError(f"{path.name}: holds coordinates that are not finite")
        size = UNITS_MM[unit]
        return meshes.MeshReading(path, vertices.astype(float) * size, triangles, size, objects[0].get("name", ""))

    def measure(self, reading: Any, probe: Probe, also: Sequence[Any]) -> float:
        """One quantity; the measures are those of every mesh."""
        return meshes.measure(reading, probe, also)

    def expect(self, entry: FileEntry, shop: Shop) -> tuple[Expectation, ...]:
        """A sound mesh in millimetres, the STL's triangle for triangle; the STL is held against the STEP file."""
        same = Probe("same_as_mm", also=(meshes.sibling(entry.path, ".stl"),))
        return (
            *meshes.expect_sound(entry),
            Expectation(entry.path, "size of the unit", 1.0, 0.0, "mm", Probe("unit_mm")),
            Expectation(entry.path, "difference from the STL", 0.0, 1e-6, "mm", same, "at_most"),
        )


def _model(name: str, mesh: meshing.Mesh) -> str:
    # Nine digits bring every 32-bit number back exactly.
    vertices = "\n".join(f'<vertex x="{x:.9g}" y="{y:.9g}" z="{z:.9g}"/>' for x, y, z in mesh.vertices.tolist())
    triangles = "\n".join(f'<triangle v1="{a}" v2="{b}" v3="{c}"/>' for a, b, c in mesh.triangles.tolist())
    return (
        '<?xml version="1.0" encoding="UTF-8"?>\n'
        f'<model unit="millimeter" xml:lang="en-US" xmlns="{CORE}">\n'
        f'<resources>\n<object id="1" type="model" name={quoteattr(name)}>\n<mesh>\n'
        f"<vertices>\n{vertices}\n</vertices>\n<triangles>\n{triangles}\n</triangles>\n"
        '</mesh>\n</object>\n</resources>\n<build>\n<item objectid="1"/>\n</build>\n</model>\n'
    )


def _root(path: Path) -> ElementTree.Element:
    try:
        with zipfile.ZipFile(path) as archive:
            if archive.getinfo(MODEL_PATH).file_size > LARGEST_MODEL_BYTES:
                raise MeasureError(f"{path.name}: its model is larger than 256 MiB")
            data = archive.read(MODEL_PATH)
        if b"<!DOCTYPE" in data:
            raise MeasureError(f"{path.name}: holds a document type, which 3MF forbids")
        return ElementTree.fromstring(data)
    except (OSError, KeyError, zipfile.BadZipFile, ElementTree.ParseError, ValueError, zlib.error) as error:
        if isinstance(error, MeasureError):
            raise
        raise MeasureError(f"{path.name}: not a readable 3MF file ({error})") from error


THREEMF = ThreeMf()
