"""A line on the terminal that says how far a long run has come.  Knows counts and seconds.

It is driven by a timer, not by the work, so it costs nothing between two ticks and still moves while one
statement takes long.  It appears after half a second, on standard error, and only where that is a terminal
and standard output is not: where results scroll by, they are progress enough.
"""

from __future__ import annotations

import os
import signal
import sys
from time import monotonic
from types import FrameType, TracebackType

from opslang.front.output import on_terminal
from opslang.front.reading import Script
from opslang.front.statement import FAULTY, Answer

DELAY = 0.5


class Progress:
    """Counts what is done; shows it while the `with` block lasts."""

    def __init__(self) -> None:
        self.statements = 0
        self.errors = 0
        self._script: Script | None = None
        self._started = monotonic()
        self._shown = 0
        self._timed = False

    def reads(self, script: Script) -> None:
        """The script being read from now on."""
        self._script = script

    def count(self, answer: Answer) -> None:
        """Takes note of an answer that has been written."""
        self.statements += answer.statement
        self.errors += answer.status >= FAULTY

    def __enter__(self) -> Progress:
        if on_terminal(sys.stderr) and not on_terminal(sys.stdout) and hasattr(signal, "setitimer"):
            signal.signal(signal.SIGALRM, self._tick)
            signal.setitimer(signal.ITIMER_REAL, DELAY, DELAY)
            self._timed = True
        return self

    def __exit__(
        self, kind: type[BaseException] | None, value: BaseException | None, trace: TracebackType | None
    ) -> None:
        if self._timed:
            signal.setitimer(signal.ITIMER_REAL, 0)
            self.clear()

    def clear(self) -> None:
        """Takes the line away, so that something else can be written in its place."""
        if self._shown:
            self._put(b"\r" + b" " * self._shown + b"\r")
            self._shown = 0

    def seconds(self) -> float:
        """How long it has been."""
        return monotonic() - self._started

    def text(self) -> str:
        """The line itself."""
        words = [f"{self.statements:,} statements"]
        if self.errors:
            words.append(f"{self.errors:,} with errors")
        if self._script is not None and self._script.size:
            words.append(f"{100 * min(self._script.read, self._script.size) // self._script.size} % of the file read")
        words.append(f"{self.seconds():.0f} s")
        return ", ".join(words)

    def _tick(self, number: int, frame: FrameType | None) -> None:
        line = self.text()
        self._put(f"\r{line:{self._shown}}".encode())  # spaces, not escapes: any terminal takes them
        self._shown = max(len(line), self._shown)

    def _put(self, data: bytes) -> None:
        # Straight to the descriptor: a signal may arrive in the middle of a buffered write to the same stream.
        try:
            os.write(sys.stderr.fileno(), data)
        except (OSError, ValueError):
            pass
