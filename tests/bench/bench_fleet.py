"""A fleet of twelve: two jobs against one, and a second run that has nothing to do. Prints ratios of one run.

python tests/bench/bench_fleet.py
"""

import subprocess
import sys
import tempfile
import time
from pathlib import Path

ROOT = Path(__file__).resolve().parents[2]
EXAMPLE = ROOT / "examples" / "camera-5g8.toml"
VARIANT = '[[variant]]\nname = "camera-{0:02d}"\ndesign = "{1}"\nset = {{ "boom.nose_mm" = {2} }}\n'
COUNT = 12


def seconds(folder: Path, jobs: int) -> float:
    command = [sys.executable, "-m", "boomwright", "fleet", "cameras.toml", "-q", "--out", str(jobs), "--jobs"]
    start = time.perf_counter()
    subprocess.run([*command, str(jobs)], cwd=folder, check=True)
    return time.perf_counter() - start


def main() -> None:
    with tempfile.TemporaryDirectory() as name:
        folder = Path(name)
        variants = [VARIANT.format(i, EXAMPLE, 8.0 + 0.5 * i) for i in range(COUNT)]
        (folder / "cameras.toml").write_text("schema = 1\n" + "".join(variants), "utf-8")
        one, two = seconds(folder, 1), seconds(folder, 2)
        again = seconds(folder, 2)
        print(f"one job / two jobs: {one / two:.2f} ({one:.0f} s / {two:.0f} s)")
        print(f"second run without changes / first: {again / two:.4f} ({again:.2f} s)")


if __name__ == "__main__":
    main()
