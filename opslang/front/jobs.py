"""Shares the statements of a script among worker processes.  Knows neither what they mean nor how they are shown.

Strategy.  A thread of the first process reads the scripts and deals their statements out in blocks, block k to
worker k mod n; a declaration goes to every worker, and only the owner of its block shows it.  Each worker keeps
a session of its own, so it sees every declaration in order.  The answers come back through one pipe a worker and
are taken in the order of the blocks, so the bytes are those of a run in one process.  Pipes hold back whoever
is ahead, so memory stays flat.  Ctrl-C ends the whole run.
"""

from __future__ import annotations

import os
import pickle
import signal
from collections.abc import Callable, Generator, Iterable
from threading import Thread
from typing import BinaryIO, NoReturn

from opslang.front.batch import items
from opslang.front.progress import Progress
from opslang.front.reading import Fault
from opslang.front.statement import Answer, Desk, Item, Opened, Settings, Trouble
from opslang.ground.source import Source
from opslang.pipeline import kind_of

BLOCK = 16
Task = list[tuple[Item, bool]]
"""Items in order, each with whether the worker is to show its answer; no task at all means the end."""


class Worker:
    """One process with a pipe to it and a pipe from it."""

    def __init__(self, settings: Settings, elder: list[Worker]) -> None:
        task_in, task_out = os.pipe()
        answer_in, answer_out = os.pipe()
        self.process = os.fork()
        if not self.process:
            for worker in elder:
                worker.tasks.close()
                worker.answers.close()
            os.close(task_out)
            os.close(answer_in)
            _serve(os.fdopen(task_in, "rb"), os.fdopen(answer_out, "wb"), settings)
        os.close(task_in)
        os.close(answer_out)
        self.tasks: BinaryIO = os.fdopen(task_out, "wb")
        self.answers: BinaryIO = os.fdopen(answer_in, "rb")

    def send(self, task: Task | None) -> None:
        """Gives the worker a task; waits while its pipe is full."""
        pickle.dump(task, self.tasks, pickle.HIGHEST_PROTOCOL)
        self.tasks.flush()

    def end(self) -> None:
        """Makes an end of the process, whatever it is doing."""
        try:
            os.kill(self.process, signal.SIGKILL)
            os.waitpid(self.process, 0)
        except (ProcessLookupError, ChildProcessError):
            pass


def _serve(tasks: BinaryIO, answers: BinaryIO, settings: Settings) -> NoReturn:
    """The life of a worker."""
    signal.signal(signal.SIGINT, signal.SIG_IGN)
    signal.signal(signal.SIGTERM, signal.SIG_DFL)
    desk = Desk(settings)
    try:
        while (task := pickle.load(tasks)) is not None:
            done = [(desk.answer(item), shown) for item, shown in task]
            pickle.dump([answer for answer, shown in done if shown], answers, pickle.HIGHEST_PROTOCOL)
            answers.flush()
        pickle.dump(None, answers)
        answers.flush()
    finally:
        # Whatever happened: nothing of the first process's own business is to be done here a second time.
        # Without an answer the first process reports the loss; where it is gone itself, nobody is left to tell.
        os._exit(0)


class _Dealer:
    """Deals items out in blocks."""

    def __init__(self, workers: list[Worker]) -> None:
        self._workers = workers
        self._hands: list[Task] = [[] for _ in workers]
        self._block = 0
        self._count = 0

    def deal(self, item: Item) -> None:
        owner = self._block % len(self._workers)
        for number, hand in enumerate(self._hands):
            if number == owner:
                hand.append((item, True))
            elif isinstance(item, Opened) or (isinstance(item, Source) and kind_of(item.text) == "declaration"):
                hand.append((item, False))
        self._count += 1
        if self._count == BLOCK:
            self.close_block()

    def close_block(self) -> None:
        """Sends the block as it is; called also where the next item may be long in coming."""
        if not self._count:
            return
        owner = self._block % len(self._workers)
        hand, self._hands[owner] = self._hands[owner], []
        self._block += 1
        self._count = 0
        self._workers[owner].send(hand)

    def end(self) -> None:
        self.close_block()
        for worker in self._workers:
            worker.send(None)


def _feed(names: Iterable[str], workers: list[Worker], progress: Progress) -> None:
    dealer = _Dealer(workers)
    try:
        for item in items(names, dealer.close_block, progress):
            dealer.deal(item)
        dealer.end()
    except (OSError, ValueError):
        pass  # a worker is lost: whoever waits for its answer will notice


def shared(
    names: tuple[str, ...], settings: Settings, jobs: int, progress: Progress, after_block: Callable[[], None]
) -> Generator[Answer, None, None]:
    """The answers to all statements of the scripts, in order; after `after_block` the next may be long in coming."""
    workers: list[Worker] = []
    try:
        for _ in range(jobs):
            workers.append(Worker(settings, workers))
        Thread(target=_feed, args=(names, workers, progress), daemon=True).start()
        block = 0
        while True:
            try:
                answers = pickle.load(workers[block % jobs].answers)
            except (EOFError, pickle.UnpicklingError):
                fault = Fault("worker-lost", "a worker process ended without an answer; fewer --jobs need less memory")
                yield Desk(settings).answer(Trouble("opslang", fault))
                return
            if answers is None:
                return
            yield from answers
            after_block()
            block += 1
    finally:
        for worker in workers:
            worker.end()
