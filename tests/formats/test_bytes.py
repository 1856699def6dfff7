"""The same bytes in another process, whatever was written before and however memory lies."""

import os
import subprocess
import sys
from pathlib import Path

import cadquery as cq
from specimens import TABLE, antenna_piece, boom, drawing_piece, rail_piece, write

from boomwright.formats.step import STEP
from boomwright.pieces import Body, SolidPiece

SCRIPT = """
import sys
from pathlib import Path
sys.path.insert(0, sys.argv[1])
ballast = [object() for _ in range(100_003)]
from specimens import TABLE, antenna_piece, drawing_piece, rail_piece, write
for piece in (antenna_piece(100.0), TABLE, drawing_piece(), rail_piece(), antenna_piece()):
    write(piece, Path(sys.argv[2]))
"""


def test_two_processes_write_the_same_bytes(tmp_path):
    (here := tmp_path / "here").mkdir()
    (there := tmp_path / "there").mkdir()
    for piece in (rail_piece(), antenna_piece(), drawing_piece(), TABLE):
        write(piece, here)
    environment = os.environ | {"PYTHONHASHSEED": "11", "TZ": "Asia/Tokyo"}
    command = [sys.executable, "-c", SCRIPT, str(Path(__file__).parent), str(there)]
    subprocess.run(command, check=True, env=environment, timeout=120)
    names = sorted(path.name for path in here.iterdir())
    assert names == ["antenna.step", "comb-1.dxf", "cut-list.csv", "rail-1.3mf", "rail-1.step", "rail-1.stl"]
    for name in names:
        assert (here / name).read_bytes() == (there / name).read_bytes(), name


def test_a_drawing_does_not_depend_on_the_order_of_sets(tmp_path):
    """Seeds 1 and 4 order the names of DXF classes differently."""
    script = "import sys; from pathlib import Path; from boomwright.formats.dxf import DXF\n"
    script += "from boomwright.pieces import Contour, DrawingPiece, Mark\n"
    script += "marks = (Mark(Contour(((0., 0., 1.), (4., 0., 1.))), 'CUT'),)\n"
    script += "DXF.write(DrawingPiece('disc', 'laser', marks), Path(sys.argv[1]))"
    for seed in ("1", "4"):
        environment = os.environ | {"PYTHONHASHSEED": seed}
        subprocess.run([sys.executable, "-c", script, str(tmp_path / seed)], check=True, env=environment, timeout=60)
    assert (tmp_path / "1").read_bytes() == (tmp_path / "4").read_bytes()


def test_noise_of_the_kernel_does_not_reach_the_file(tmp_path):
    """A boom moved by less than any machine can show gives the file of the boom unmoved."""
    for name, shift in (("a", 0.0), ("b", 1.5e-16), ("c", -2.5e-29)):
        body = Body("boom", boom().translate(cq.Vector(0.0, shift, shift)))
        STEP.write(SolidPiece("boom", "cnc", (body,)), tmp_path / name)
    assert (tmp_path / "a").read_bytes() == (tmp_path / "b").read_bytes() == (tmp_path / "c").read_bytes()
    assert "E-1" not in (tmp_path / "a").read_text().partition("UNCERTAINTY")[0]
