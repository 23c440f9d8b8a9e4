"""Shares drafts among processes and gives the reports back in order.  Knows nothing of what is in them.

Strategy.  A process pool of the standard library takes blocks of a few paths, a window of blocks at a time, so that an
archive of any size needs little memory.  A process that is lost (memory) takes its block down; the block is then done
path by path, each in a process of its own, and only the draft that kills its process again is given up.  The same
work can be handed to a cluster engine through joblib (the extra `cluster`).
"""

from __future__ import annotations

import os
import signal
from collections import deque
from collections.abc import Iterable, Iterator
from itertools import islice
from multiprocessing import get_all_start_methods, get_context
from typing import TYPE_CHECKING, Any

from attrs import frozen

from opslang.front.lint_cache import Cache
from opslang.lint.result import Report
from opslang.lint.run import lint

if TYPE_CHECKING:
    from concurrent.futures import ProcessPoolExecutor

BLOCK = 4
WINDOW = 4
MANY = 8
"""From so many files on, two processes are worth their start."""
LOST = ("worker-lost", "the process that worked on this file ended without an answer")
CLUSTER_WAIT = 60


class NoCluster(Exception):
    """The cluster engine cannot be used; the message says why."""


def default_jobs(count: int) -> int:
    """The processes to use for so many files when nobody says."""
    return min(2, os.cpu_count() or 1) if count >= MANY else 1


@frozen
class Work:
    """What is done to drafts: they are looked up among the results kept, linted, kept.  Travels between processes."""

    cache: Cache
    explain: bool = False

    def one(self, path: str) -> Report:
        """The report on a draft."""
        kept = self.cache.get(path)
        if kept is not None:
            return kept
        report = lint(path, self.explain)
        self.cache.put(path, report)
        return report

    def block(self, paths: list[str]) -> list[Report]:
        """The reports on some drafts."""
        return [self.one(path) for path in paths]


def _blocks(paths: Iterable[str], size: int) -> Iterator[list[str]]:
    waiting = iter(paths)
    while block := list(islice(waiting, size)):
        yield block


def _settle() -> None:
    signal.signal(signal.SIGINT, signal.SIG_IGN)


def _pool(jobs: int) -> ProcessPoolExecutor:
    from concurrent.futures import ProcessPoolExecutor

    method = "fork" if "fork" in get_all_start_methods() else None
    return ProcessPoolExecutor(jobs, mp_context=get_context(method), initializer=_settle)


def shared(paths: Iterable[str], work: Work, jobs: int) -> Iterator[Report]:
    """The reports on drafts, in order, by that many processes."""
    from concurrent.futures.process import BrokenProcessPool

    if jobs == 1:
        yield from map(work.one, paths)
        return
    blocks = _blocks(paths, BLOCK)
    pool = _pool(jobs)
    waiting: deque[tuple[list[str], Any]] = deque()
    try:
        while True:
            while len(waiting) < jobs * WINDOW and (block := next(blocks, None)) is not None:
                waiting.append((block, _handed(pool, work, block)))
            if not waiting:
                return
            block, future = waiting.popleft()
            try:
                reports = future.result() if future is not None else None
            except BrokenProcessPool:
                reports = None
            if reports is None:
                pool.shutdown(wait=False, cancel_futures=True)
                reports = _one_by_one(work, block)
                pool = _pool(jobs)
                waiting = deque([(held, _handed(pool, work, held)) for held, _ in waiting])
            yield from reports
    finally:
        pool.shutdown(wait=True, cancel_futures=True)


def _handed(pool: ProcessPoolExecutor, work: Work, block: list[str]) -> Any:
    from concurrent.futures.process import BrokenProcessPool

    try:
        return pool.submit(work.block, block)
    except BrokenProcessPool:
        return None


def _one_by_one(work: Work, block: list[str]) -> list[Report]:
    from concurrent.futures.process import BrokenProcessPool

    reports = []
    for path in block:
        with _pool(1) as pool:
            try:
                reports.append(pool.submit(work.one, path).result())
            except BrokenProcessPool:
                reports.append(Report(path, failure=LOST))
    return reports


def clustered(paths: Iterable[str], work: Work, engine: str) -> Iterator[Report]:
    """The reports on drafts, in order, by joblib: `loky` here, or the address of a dask scheduler (tcp://host:port).

    Raises NoCluster where the extra is not installed or the scheduler does not answer.
    """
    try:
        from joblib import Parallel, delayed, parallel_config
    except ImportError as trouble:
        raise NoCluster("this needs joblib: install opslang[cluster]") from trouble
    tasks = [delayed(work.block)(block) for block in _blocks(paths, BLOCK)]
    if engine == "loky":
        for reports in Parallel(n_jobs=default_jobs(MANY), return_as="generator")(tasks):
            yield from reports
        return
    client = _client(engine)
    try:
        with parallel_config(backend="dask", wait_for_workers_timeout=CLUSTER_WAIT):
            for reports in Parallel()(tasks):
                yield from reports
    finally:
        client.close()


def _client(address: str) -> Any:
    try:
        from distributed import Client
    except ImportError as trouble:
        raise NoCluster("this needs dask's scheduler: install opslang[cluster]") from trouble
    try:
        return Client(address, timeout=CLUSTER_WAIT)
    except (OSError, ValueError) as trouble:
        raise NoCluster(f"no scheduler answers at {address}") from trouble
