"""Calls to processes that share them; a process whose parent has died ends too."""
from __future__ import annotations

import os
import threading
from collections.abc import Callable, Iterator, Sequence
from concurrent.futures import ProcessPoolExecutor
from contextlib import contextmanager
from typing import Any

Run = Callable[[Callable[[Any], Any], Sequence[Any]], Iterator[Any]]


@contextmanager
def workers(jobs: int) -> Iterator[Run]:
    """``run(function, tasks)`` gives the results in the order of the tasks; with one job or one task it calls here.

    Processes, not threads: a property state shared by two threads gives wrong values.
    """
    pools: list[ProcessPoolExecutor] = []

    def run(function: Callable[[Any], Any], tasks: Sequence[Any]) -> Iterator[Any]:
        if jobs <= 1 or len(tasks) <= 1:
            return map(function, tasks)
        if not pools:
            pools.append(ProcessPoolExecutor(jobs, initializer=_end_with_parent))
        return pools[0].map(function, tasks)
    try:
        yield run
    except BaseException:
        for pool in pools:
            pool.shutdown(cancel_futures=True)
        raise
    for pool in pools:
        pool.shutdown()


def _end_with_parent() -> None:
    """Watch the parent: a build that was killed must leave nobody behind who holds its folder."""
    import multiprocessing
    from multiprocessing.connection import wait
    parent = multiprocessing.parent_process()

    def watch() -> None:
        wait([parent.sentinel])
        os._exit(1)
    threading.Thread(target=watch, daemon=True).start()
