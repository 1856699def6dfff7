"""Binary STL: one mesh a printed part, in millimetres, with the printer's offsets taken."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path
from typing import Any

import numpy as np

from boomwright.errors import MeasureError
from boomwright.formats import meshes, meshing
from boomwright.formats.format import FileEntry, Format
from boomwright.pieces import Expectation, Piece, Probe, SolidPiece
from boomwright.shop.profile import Shop

HEADER_BYTES = 80
WALL_NOZZLES = 3.0
"""Least wall in widths of the nozzle (product rule)."""

WALL_ALLOWED_MM = 0.04
"""Two chords of the mesh, and the step in which a thickness is found."""

HANGING_ALLOWED_MM2 = 0.05
RECORD = np.dtype([("normal", "<f4", 3), ("corners", "<f4", (3, 3)), ("attribute", "<u2")])


class Stl(Format):
    """The binary STL format."""

    name = "stl"
    suffix = ".stl"
    unit = "mm"

    def takes(self, piece: Piece) -> bool:
        """Printed pieces."""
        return isinstance(piece, SolidPiece) and piece.process == "print"

    def write(self, piece: Piece, path: Path) -> None:
        """Header with the part's name, triangle count, then normal and corners of each triangle."""
        assert isinstance(piece, SolidPiece)
        mesh = meshing.mesh_piece(piece)
        corners = mesh.vertices[mesh.triangles]
        records = np.zeros(len(corners), dtype=RECORD)
        records["corners"] = corners
        records["normal"] = _normals(corners.astype(float))
        # A header that began with "solid" would be taken for a text file.
        header = f"boomwright {piece.stem}, mm".encode("ascii", "replace")[:HEADER_BYTES].ljust(HEADER_BYTES)
        path.write_bytes(header + len(corners).to_bytes(4, "little") + records.tobytes())

    def read(self, path: Path) -> meshes.MeshReading:
        """The mesh, equal corners made one."""
        try:
            data = path.read_bytes()
        except OSError as error:
            raise MeasureError(f"{path.name}: cannot be read ({error.strerror})") from error
        start = HEADER_BYTES + 4
        count = int.from_bytes(data[HEADER_BYTES:start], "little")
        if len(data) < start or count == 0 or len(data) != start + count * RECORD.itemsize:
            raise MeasureError(f"{path.name}: not a binary STL file, or cut short")
        corners = np.frombuffer(data, dtype=RECORD, offset=start)["corners"].reshape(-1, 3).astype(float)
        if not np.all(np.isfinite(corners)):
            raise MeasureError(f"{path.name}: holds coordinates that are not finite")
        used, index = np.unique(meshing.first_alike(corners), return_inverse=True)
        return meshes.MeshReading(path, corners[used], index.reshape(-1, 3), None, "")

    def measure(self, reading: Any, probe: Probe, also: Sequence[Any]) -> float:
        """One quantity; the measures are those of every mesh."""
        return meshes.measure(reading, probe, also)

    def expect(self, entry: FileEntry, shop: Shop) -> tuple[Expectation, ...]:
        """A sound mesh, true to the STEP file beside it, that this printer can lay down."""
        true = meshes.expect_true_to_step(entry, shop)
        return (*meshes.expect_sound(entry), *true, *expect_printable(entry, shop))


def expect_printable(entry: FileEntry, shop: Shop) -> list[Expectation]:
    """Nothing that hangs in the air, and no wall thinner than three widths of the nozzle as it comes out."""
    path, nozzle = entry.path, shop.printer.nozzle_mm
    wall = WALL_NOZZLES * nozzle
    growth = shop.printer.outline_growth_mm if entry.offsets.get("outline_growth_mm") else 0.0
    # Bores are drawn wider by what they shrink, so the walls between them are drawn thinner and print as planned.
    shrink = max(0.0, shop.printer.hole_shrink_mm) if entry.offsets.get("hole_shrink_mm") else 0.0
    thin = Probe("thinnest_wall_mm", {"up_to_mm": wall, "growth_mm": growth})
    hanging = Probe("unsupported_mm2", {"ledge_mm": nozzle})
    return [
        Expectation(path, "ceilings that need support", 0.0, HANGING_ALLOWED_MM2, "mm2", hanging, "at_most"),
        Expectation(path, "places that begin in the air", 0.0, 0.0, "", Probe("midair_starts"), "at_most"),
        Expectation(path, "thinnest wall", wall, WALL_ALLOWED_MM + shrink, "mm", thin, "at_least"),
    ]


def _normals(corners: Any) -> Any:
    across = np.cross(corners[:, 1] - corners[:, 0], corners[:, 2] - corners[:, 0])
    length = np.linalg.norm(across, axis=1, keepdims=True)
    return np.divide(across, length, out=np.zeros_like(across), where=length > 0.0) + 0.0


STL = Stl()
