"""`make` of the 868 MHz example against its floor, and its growth from 8 to 32 rods. Prints ratios of one run.

The floor is one script that imports cadquery and has the kernel do the same booleans, meshing, STEP writing and
reading, with nothing of ours between: no 3MF, DXF or sums, no measuring but the interference booleans.

    python tests/bench/bench_make.py
"""

import statistics
import subprocess
import sys
import tempfile
import time
from dataclasses import replace
from pathlib import Path

ROOT = Path(__file__).resolve().parents[2]
EXAMPLE = ROOT / "examples" / "stream-gauge-868.toml"
RUNS = 3

FLOOR = """
import sys
from pathlib import Path
import cadquery as cq
from OCP.BRepAlgoAPI import BRepAlgoAPI_Common
from OCP.BRepMesh import BRepMesh_IncrementalMesh
from boomwright.design.tomlfile import load_design
from boomwright.formats.meshing import CHORD_MM
from boomwright.parts.catalogue import PARTS
from boomwright.parts.solids import place
from boomwright.pieces import SolidPiece
from boomwright.plan.plan import make_plan
from boomwright.shop.profile import Shop

plan = make_plan(load_design(Path(sys.argv[1])), Shop())
out = Path(sys.argv[2])
read = {}
for part in PARTS:
    if part.left_out(plan) is None:
        for piece in part.build(plan):
            if isinstance(piece, SolidPiece):
                shapes = [place(body.shape, piece.frame) for body in piece.bodies]
                if piece.process == "print":
                    for body in piece.printed or piece.bodies:
                        BRepMesh_IncrementalMesh(body.shape.copy().wrapped, CHORD_MM, False, 0.5, False)
                whole = shapes[0] if len(shapes) == 1 else cq.Compound.makeCompound(shapes)
                path = out / (piece.stem + ".step")
                cq.exporters.export(cq.Workplane(whole), str(path))
                read[piece.stem] = cq.importers.importStep(str(path)).val()
antenna = read["antenna"]
solids = antenna.Solids()
for stem in ("cradle-1", "mould-upper", "mould-lower"):
    if stem in read:
        read[stem].intersect(*solids)
for index, solid in enumerate(solids[1:]):
    solids[0].intersect(solid)
"""


def seconds(command: list[str]) -> float:
    start = time.perf_counter()
    subprocess.run(command, check=True, stdout=subprocess.DEVNULL)
    return time.perf_counter() - start


def make(design: Path, out: Path) -> float:
    return seconds([sys.executable, "-m", "boomwright", "make", str(design), "--out", str(out), "-q"])


def floor(design: Path, out: Path) -> float:
    return seconds([sys.executable, "-c", FLOOR, str(design), str(out)])


def with_rods(count: int, folder: Path) -> tuple[Path, Path]:
    """A long beam of `count` rods, and a shop whose bed takes its cradle."""
    sys.path.insert(0, str(ROOT / "tests"))
    import samples

    from boomwright.design.tomlfile import write_design
    from boomwright.shop.profile import Printer, Shop
    from boomwright.shop.tomlfile import write_shop

    directors = [samples.rod(f"D{i}", 95.0 + 40.0 * (i - 1), 145.0, 3.0, i) for i in range(1, count)]
    design = replace(samples.GAUGE, name=f"rods-{count}", rods=(samples.GAUGE.rods[0], *directors))
    path, shop = folder / f"{design.name}.toml", folder / "shop.toml"
    path.write_text(write_design(design))
    shop.write_text(write_shop(replace(Shop(), printer=Printer(bed_mm=(2000.0, 2000.0, 240.0)))))
    return path, shop


def main() -> None:
    with tempfile.TemporaryDirectory() as name:
        folder = Path(name)
        make(EXAMPLE, folder / "warm")
        pairs = [(make(EXAMPLE, folder / "out"), floor(EXAMPLE, folder)) for _ in range(RUNS)]
        ratios = [ours / least for ours, least in pairs]
        print(f"make / floor: {statistics.median(ratios):.2f} (of {[round(r, 2) for r in ratios]}; allowed 2.5)")
        times = {}
        for count in (8, 16, 32):
            path, shop = with_rods(count, folder)
            command = [sys.executable, "-m", "boomwright", "make", str(path), "--shop", str(shop)]
            times[count] = seconds([*command, "--out", str(folder / f"out-{count}"), "-q"])
        print(f"16 rods / 8 rods: {times[16] / times[8]:.2f} (linear: 2)")
        print(f"32 rods / 8 rods: {times[32] / times[8]:.2f} (linear: 4)")


if __name__ == "__main__":
    main()
