"""What must answer at once loads no CAD kernel."""

import subprocess
import sys

import pytest

HEAVY = ("cadquery", "OCP", "vtkmodules", "ezdxf", "trimesh", "lib3mf", "manifold3d")
SPY = """
import sys
from boomwright import cli
sys.argv = ["boomwright", *{arguments!r}]
try:
    cli.main()
except SystemExit as end:
    assert end.code in (0, None), end.code
loaded = [name for name in {heavy!r} if name in sys.modules]
sys.exit(f"loaded: {{loaded}}" if loaded else 0)
"""


@pytest.mark.parametrize(
    "arguments",
    [["--help"], ["--version"], ["make", "--help"], ["audit", "--help"], ["show", "cables"], ["show", "schema"]],
    ids=" ".join,
)
def test_no_cad_is_loaded(arguments: list[str]) -> None:
    code = SPY.format(arguments=arguments, heavy=HEAVY)
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=False)
    assert done.returncode == 0, done.stderr


def test_import_loads_no_numpy() -> None:
    code = "import sys, boomwright.cli; sys.exit('numpy' in sys.modules)"
    assert subprocess.run([sys.executable, "-c", code], check=False).returncode == 0
