"""A STEP file's bytes depended on how many the process had written: its line breaks followed the kernel's counter."""

from pathlib import Path

from boomwright.formats.catalogue import FORMATS
from boomwright.parts.solids import box
from boomwright.pieces import Body, SolidPiece


def test_the_hundredth_file_has_the_bytes_of_the_first(tmp_path: Path) -> None:
    """Names of every length, so that one of them ends where the kernel would break the line."""
    step = FORMATS["step"]
    shape = box((0.0, 1.0), (0.0, 2.0), (0.0, 3.0))
    pieces = [SolidPiece("p" * length, "cnc", (Body("p" * length, shape),)) for length in range(1, 40)]
    for folder in ("first", "later"):
        (tmp_path / folder).mkdir()
        for piece in pieces:
            step.write(piece, tmp_path / folder / f"{piece.stem}.step")
    for piece in pieces:
        first, later = ((tmp_path / folder / f"{piece.stem}.step").read_bytes() for folder in ("first", "later"))
        assert first == later, piece.stem
