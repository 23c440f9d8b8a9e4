"""Runs what may take long: after half a second a line says how it goes, and Ctrl-C stops it.  Knows no mathematics.

The work stays in the main thread, where the interpreter delivers Ctrl-C; a thread of its own writes the line, so
that it moves whatever the work does.  Outside the work Ctrl-C does nothing here (at the prompt it is a key).
"""

from __future__ import annotations

import signal
import sys
from _thread import interrupt_main
from collections.abc import Callable
from threading import Event, Thread
from time import monotonic
from types import FrameType
from typing import TypeVar

DELAY = 0.5
PACE = 0.2

Result = TypeVar("Result")


class Stopped(Exception):
    """The work was stopped by Ctrl-C; carries the seconds it had taken."""

    def __init__(self, seconds: float) -> None:
        super().__init__(f"stopped after {seconds:.1f} s")
        self.seconds = seconds


class Work:
    """The way to run something long, and the one place that listens to Ctrl-C."""

    def __init__(self, write: Callable[[str], None]) -> None:
        self._write = write
        self._listening = False
        self._asked = False
        self._told = False

    def listen(self) -> None:
        """From here on Ctrl-C stops the work, and nothing else."""
        signal.signal(signal.SIGINT, self._interrupt)
        sys.unraisablehook = _dropped

    def _interrupt(self, number: int, frame: FrameType | None) -> None:
        if self._listening:
            self._asked = True
            raise KeyboardInterrupt

    def run(self, job: Callable[[], Result], progress: Callable[[], str]) -> Result:
        """What the job gives.  Raises Stopped where Ctrl-C came first; the job may then have stopped anywhere."""
        started = monotonic()
        finished = Event()
        teller = Thread(target=self._tell, args=(finished, started, progress), daemon=True)
        teller.start()
        try:
            try:
                self._asked = False
                self._listening = True
                return job()
            finally:
                self._listening = False
        except KeyboardInterrupt:
            raise Stopped(monotonic() - started) from None
        finally:
            self._listening = False
            finished.set()
            teller.join()
            if self._told:
                self._told = False
                self._write("\r\x1b[K")

    def _tell(self, finished: Event, started: float, progress: Callable[[], str]) -> None:
        wait = DELAY
        while not finished.wait(wait):
            wait = PACE
            if self._asked:
                # The interpreter drops an exception that arises while it clears up objects: ask once more.
                interrupt_main()
            self._told = True
            self._write(f"\r\x1b[K{monotonic() - started:.1f} s {progress()}")


def _dropped(found: sys.UnraisableHookArgs) -> None:
    """An exception that the interpreter had to drop; of a dropped Ctrl-C nothing need be said."""
    if not issubclass(found.exc_type, KeyboardInterrupt):
        sys.__unraisablehook__(found)


def to_terminal(text: str) -> None:
    """Writes to standard output at once."""
    sys.stdout.write(text)
    sys.stdout.flush()
