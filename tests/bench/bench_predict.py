"""Cold `predict` of the 868 example as a whole process, against a process that only imports numpy and scipy.linalg.

Run it on a quiet machine: python tests/bench/bench_predict.py. The ratio is of medians, in turns; at most 4 is wanted.
"""

import os
import statistics
import subprocess
import sys
import time
from pathlib import Path

EXAMPLE = Path(__file__).parents[2] / "examples" / "stream-gauge-868.toml"
RUNS = 7
FLOOR = [sys.executable, "-c", "import numpy, scipy.linalg"]
PREDICT = [sys.executable, "-m", "boomwright", "predict", str(EXAMPLE)]


def seconds(command: list[str]) -> tuple[float, float]:
    """Wall and processor time of a process [s]."""
    before, started = os.times(), time.perf_counter()
    subprocess.run(command, check=True, capture_output=True)
    after = os.times()
    spent = after.children_user + after.children_system - before.children_user - before.children_system
    return time.perf_counter() - started, spent


def main() -> None:
    """Print both medians as one ratio, by wall and by processor time."""
    seconds(PREDICT)
    turns = [(seconds(FLOOR), seconds(PREDICT)) for _ in range(RUNS)]
    for index, name in enumerate(("wall", "processor")):
        floor = statistics.median(turn[0][index] for turn in turns)
        predict = statistics.median(turn[1][index] for turn in turns)
        print(
            f"cold predict, 61 points: {predict / floor:.2f} x importing numpy and scipy.linalg ({name} time; 4 wanted)"
        )


if __name__ == "__main__":
    main()
