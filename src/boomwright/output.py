"""Pieces written in every format that takes them."""

from __future__ import annotations

import tempfile
from pathlib import Path

from boomwright.errors import AccessError, Fault, InputFault
from boomwright.formats.catalogue import FORMATS
from boomwright.formats.format import FileEntry
from boomwright.parts.prediction import prediction_pieces
from boomwright.pieces import IDENTITY, DrawingPiece, Piece, SolidPiece
from boomwright.prediction import Prediction


def write_piece(part_name: str, piece: Piece, folder: Path) -> list[FileEntry]:
    """Write a piece of a part into its place in an output folder; what the manifest says of each file."""
    place = folder if piece.process == "assembly" else folder / piece.process
    place.mkdir(exist_ok=True)
    entries = []
    shaped = piece if isinstance(piece, SolidPiece | DrawingPiece) else None
    for form in FORMATS:
        if form.takes(piece):
            path = place / f"{piece.stem}{form.suffix}"
            form.write(piece, path)
            frame = shaped.frame if shaped else IDENTITY
            offsets = dict(shaped.offsets) if shaped and form.name != "step" else {}
            name = path.relative_to(folder).as_posix()
            entries.append(FileEntry(name, part_name, piece.process, form.name, form.unit, frame, offsets))
    return entries


def write_prediction(prediction: Prediction, folder: Path) -> None:
    """Write tables, Touchstone file and charts straight into a folder; files of the same names are replaced.

    Raises InputFault when `folder` is something else, AccessError when it cannot be written.
    """
    if folder.exists() and not folder.is_dir():
        raise InputFault([Fault("--out", f"{folder} is not a folder", "name a folder, new or not")])
    try:
        folder.mkdir(parents=True, exist_ok=True)
        with tempfile.TemporaryDirectory(prefix=".partial-", dir=folder) as staging:
            names = []
            for piece in prediction_pieces(prediction):
                names += [entry.path for entry in write_piece("prediction", piece, Path(staging))]
            for name in names:
                (Path(staging) / name).replace(folder / Path(name).name)
    except AccessError:
        raise
    except OSError as error:
        raise AccessError(error.errno, f"cannot write {error.filename or folder}: {error.strerror or error}") from error
