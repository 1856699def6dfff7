"""Who does the work: one process or several, with the same answers, and none left over."""

import os
import pickle
import signal
import subprocess
import sys
import time
from pathlib import Path

import pytest
from samples import GAUGE

from boomwright.crew import Alone, crew
from boomwright.design.tomlfile import write_design
from boomwright.errors import Fault, PlanFault
from boomwright.pipeline import make

ORPHAN = """
import os, time
from boomwright.crew import crew
if __name__ == "__main__":
    with crew(2) as executor:
        executor.submit(time.sleep, 0.0).result()
        print(*[executor.submit(os.getpid).result() for _ in range(2)], flush=True)
        executor.submit(time.sleep, 60.0).result()
"""


def test_alone_does_each_task_at_once_and_keeps_its_error() -> None:
    done: list[int] = []
    future = Alone().submit(done.append, 3)
    assert done == [3] and future.done()
    with pytest.raises(ZeroDivisionError):
        Alone().submit(divmod, 1, 0).result()


def test_an_interrupt_passes_through_alone() -> None:
    def interrupted() -> None:
        raise KeyboardInterrupt

    with pytest.raises(KeyboardInterrupt):
        Alone().submit(interrupted)


def test_faults_come_back_whole_from_another_process() -> None:
    fault = PlanFault([Fault("boom.width_mm", "too thin", "take a thicker one", "beam.toml")])
    again = pickle.loads(pickle.dumps(fault))
    assert type(again) is PlanFault and again.faults == fault.faults and str(again) == str(fault)


@pytest.mark.slow
def test_several_processes_give_the_same_answers() -> None:
    with crew(2) as executor:
        assert list(executor.map(abs, range(-3, 3))) == [3, 2, 1, 0, 1, 2]
        with pytest.raises(ZeroDivisionError):
            executor.submit(divmod, 1, 0).result()


@pytest.mark.slow
def test_two_jobs_write_the_same_bytes_as_one(tmp_path: Path) -> None:
    (tmp_path / "gauge.toml").write_text(write_design(GAUGE), "utf-8")
    for jobs in (1, 2):
        made = make(tmp_path / "gauge.toml", out=tmp_path / str(jobs), only=["boom", "former"], jobs=jobs)
        assert made.audit.ok
    one, two = ({p.name: p.read_bytes() for p in (tmp_path / str(j)).rglob("*") if p.is_file()} for j in (1, 2))
    assert one == two


@pytest.mark.slow
def test_no_process_outlives_a_parent_that_is_killed(tmp_path: Path) -> None:
    (tmp_path / "orphan.py").write_text(ORPHAN, "utf-8")
    parent = subprocess.Popen([sys.executable, "orphan.py"], cwd=tmp_path, stdout=subprocess.PIPE, text=True)
    assert parent.stdout is not None
    workers = {int(word) for word in parent.stdout.readline().split()}
    assert workers
    parent.send_signal(signal.SIGKILL)
    parent.wait()
    parent.stdout.close()
    deadline = time.monotonic() + 10.0
    while workers and time.monotonic() < deadline:
        workers = {worker for worker in workers if _runs(worker)}
        time.sleep(0.05)
    assert not workers


def _runs(process: int) -> bool:
    try:
        os.kill(process, 0)
    except ProcessLookupError:
        return False
    state = Path(f"/proc/{process}/stat")
    return not state.exists() or state.read_text("utf-8").rsplit(")", 1)[1].split()[0] != "Z"
