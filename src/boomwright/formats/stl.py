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
        """A sound mesh, true to the STEP file beside it."""
        return (*meshes.expect_sound(entry), *meshes.expect_true_to_step(entry, shop))


def _normals(corners: Any) -> Any:
    across = np.cross(corners[:, 1] - corners[:, 0], corners[:, 2] - corners[:, 0])
    length = np.linalg.norm(across, axis=1, keepdims=True)
    return np.divide(across, length, out=np.zeros_like(across), where=length > 0.0) + 0.0


STL = Stl()
