"""Who does the work: this process alone, or several beside each other, behind the same `Executor` interface."""

from __future__ import annotations

import multiprocessing
import os
import signal
import threading
import time
from collections.abc import Callable, Iterator, Sequence
from concurrent.futures import Executor, Future, ProcessPoolExecutor
from contextlib import contextmanager
from multiprocessing.connection import wait
from typing import Any, ParamSpec, TypeVar

Given = ParamSpec("Given")
Result = TypeVar("Result")

MOST_JOBS = 4
"""Of what one design asks for: beyond this the processes wait for each other."""


class Alone(Executor):
    """Does each task at once, in this process; the future it hands back is done."""

    def submit(self, fn: Callable[Given, Result], /, *args: Given.args, **kwargs: Given.kwargs) -> Future[Result]:
        """Call it; an interrupt is not the task's own error and passes through."""
        future: Future[Result] = Future()
        try:
            future.set_result(fn(*args, **kwargs))
        except Exception as error:
            future.set_exception(error)
        return future


def processors() -> int:
    """How many processors this process may use, at least 1."""
    return len(os.sched_getaffinity(0)) if hasattr(os, "sched_getaffinity") else os.cpu_count() or 1


def jobs_for_one() -> int:
    """How many processes one design is worth on this machine."""
    return min(processors(), MOST_JOBS)


@contextmanager
def crew(jobs: int, preload: Sequence[str] = ()) -> Iterator[Executor]:
    """An executor of `jobs` processes; 1 = no process but this one.

    jobs     at least 1
    preload  modules that every process needs: loaded once and shared

    Leaving the block on an error ends the processes at once. They also end when this one does, however it ends.
    A script that uses more than one job needs the usual `if __name__ == "__main__":`.
    """
    if jobs < 2:
        yield Alone()
        return
    context = multiprocessing.get_context("forkserver")
    context.set_forkserver_preload(list(preload))
    others = set(multiprocessing.active_children())
    # Begun while an interrupt is held back: it is this process's to answer, and none may hit a half-begun one.
    held = signal.pthread_sigmask(signal.SIG_BLOCK, {signal.SIGINT})
    pool = ProcessPoolExecutor(jobs, context, initializer=_begin)
    try:
        for _ in range(jobs):
            # The pool begins a process for a task only while all it has are busy: each is kept so for a moment.
            pool.submit(time.sleep, 0.2)
        signal.pthread_sigmask(signal.SIG_SETMASK, held)
        yield pool
    except BaseException:
        signal.pthread_sigmask(signal.SIG_SETMASK, held)
        for process in set(multiprocessing.active_children()) - others:
            process.terminate()
        pool.shutdown(cancel_futures=True)
        raise
    pool.shutdown()


def _begin() -> None:
    """Without a parent there is nobody to work for."""
    signal.signal(signal.SIGINT, signal.SIG_IGN)
    parent = multiprocessing.parent_process()
    if parent is not None:
        threading.Thread(target=_end_with, args=(parent.sentinel,), daemon=True).start()


def _end_with(sentinel: Any) -> None:
    wait([sentinel])
    os._exit(1)
