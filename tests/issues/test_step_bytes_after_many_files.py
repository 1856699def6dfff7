"""A STEP file's bytes depended on how many the process had written: its line breaks followed the kernel's counter."""

import subprocess
import sys
from pathlib import Path

WRITER = """
import sys
from pathlib import Path
from boomwright.formats.catalogue import FORMATS
from boomwright.parts.solids import box
from boomwright.pieces import Body, SolidPiece

shape = box((0.0, 1.0), (0.0, 2.0), (0.0, 3.0))

def write(folder, length):
    name = "p" * length
    FORMATS["step"].write(SolidPiece(name, "cnc", (Body(name, shape),)), Path(sys.argv[1]) / folder / f"{name}.step")

for _ in range(10):
    write("filler", 1)
for length in range(1, 40):
    write("tens", length)
for _ in range(60):
    write("filler", 1)
for length in range(1, 40):
    write("hundreds", length)
"""


def test_the_hundredth_file_has_the_bytes_of_the_tenth(tmp_path: Path) -> None:
    """Names of every length, so that one of them ends where the kernel would break the line."""
    for folder in ("filler", "tens", "hundreds"):
        (tmp_path / folder).mkdir()
    subprocess.run([sys.executable, "-c", WRITER, str(tmp_path)], check=True)
    names = sorted(path.name for path in (tmp_path / "tens").iterdir())
    assert len(names) == 39
    for name in names:
        assert (tmp_path / "tens" / name).read_bytes() == (tmp_path / "hundreds" / name).read_bytes(), name
