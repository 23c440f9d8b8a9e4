"""Where text leaves the program: results to standard output, diagnostics to standard error.  Knows no mathematics.

Results are gathered and written in blocks.  A reader that has left ends the run quietly (Departed); a device
that takes nothing ends it with a message (Failed).  Nobody is told that standard error fails.
"""

from __future__ import annotations

import os
import sys
from collections.abc import Callable
from typing import Literal, TextIO

from opslang.report.render import Paint, plain, render_file

BLOCK = 1 << 16
Channel = Literal["result", "diagnostic"]

_COLOURS = {"error": "1;31", "warning": "1;35", "note": "1;36", "place": "1", "mark": "32", "help": "2"}


class Departed(Exception):
    """The reader of standard output has closed it."""


class Failed(Exception):
    """Standard output takes nothing more; the message says why."""


def ansi(role: str, text: str) -> str:
    """A text in the colour of its role, for terminals."""
    return f"\x1b[{_COLOURS[role]}m{text}\x1b[0m" if text else text


def paint_for(choice: str, stream: TextIO | None) -> Paint:
    """Colour as asked for; `auto` gives it to a terminal that knows colours, unless NO_COLOR is set (no-color.org)."""
    if choice == "auto":
        dumb = os.environ.get("NO_COLOR") or os.environ.get("TERM") == "dumb"
        return plain if dumb or not on_terminal(stream) else ansi
    return ansi if choice == "always" else plain


def on_terminal(stream: TextIO | None) -> bool:
    """Whether a stream is open and a terminal."""
    return stream is not None and not stream.closed and stream.isatty()


def width_of(stream: TextIO | None, otherwise: int = 80) -> int:
    """The columns of the terminal behind a stream, where there is one."""
    if on_terminal(stream) and stream is not None:
        try:
            return os.get_terminal_size(stream.fileno()).columns or otherwise
        except (OSError, ValueError):
            pass
    return otherwise


class Output:
    """The two streams of one run.  `before` is called ahead of any writing: a progress line clears itself there."""

    def __init__(self, before: Callable[[], None] | None = None) -> None:
        self._held: list[str] = []
        self._size = 0
        self._room = 0 if on_terminal(sys.stdout) else BLOCK  # at a terminal every answer is wanted at once
        self.before = before
        self._warned: list[str] = []
        self._apart = _apart()

    def say(self, channel: Channel, text: str) -> None:
        """Takes text that ends with a line end.  Raises Departed or Failed."""
        if channel == "result":
            self._held.append(text)
            self._size += len(text)
            if self._size >= self._room:
                self.flush()
        elif self._apart:
            self._warned.append(text)
            self._size += len(text)
            if self._size >= self._room:
                self.flush()
        else:
            self.flush()  # the two streams go to one place: keep the order
            self.warn(text)

    def flush(self) -> None:
        """Hands over what is held.  Raises Departed or Failed."""
        if self._warned:
            text = "".join(self._warned)
            self._warned.clear()
            self.warn(text)
        if not self._held:
            self._size = 0
            return
        text = "".join(self._held)
        self._held.clear()
        self._size = 0
        if sys.stdout is None:
            raise Failed("standard output is closed")
        if self.before is not None:
            self.before()
        try:
            _write(sys.stdout, text)
        except BrokenPipeError as trouble:
            _abandon(sys.stdout)
            raise Departed from trouble
        except (OSError, ValueError) as trouble:
            raise failure(trouble) from trouble

    def warn(self, text: str) -> None:
        """Writes to standard error at once; nobody is told where that fails."""
        if sys.stderr is None:
            return
        if self.before is not None:
            self.before()
        try:
            _write(sys.stderr, text)
        except (OSError, ValueError):
            _abandon(sys.stderr)


def _apart() -> bool:
    """Whether results and diagnostics go to different files, neither a terminal, so that their order does not show."""
    if on_terminal(sys.stdout) or on_terminal(sys.stderr) or sys.stdout is None or sys.stderr is None:
        return False
    try:
        return not os.path.sameopenfile(sys.stdout.fileno(), sys.stderr.fileno())
    except (OSError, ValueError):
        return False


def _write(stream: TextIO, text: str) -> None:
    """Writes through the stream's bytes, so that no character can fail to be encoded and no line end is changed."""
    data = text.encode(stream.encoding or "utf-8", "backslashreplace")
    stream.buffer.write(data)
    stream.buffer.flush()


def _abandon(stream: TextIO) -> None:
    """Points a broken stream at nothing: the interpreter flushes it once more when it ends, and would complain."""
    try:
        nothing = os.open(os.devnull, os.O_WRONLY)
        os.dup2(nothing, stream.fileno())
        os.close(nothing)
    except (OSError, ValueError):
        pass


def failure(trouble: OSError | ValueError) -> Failed:
    """What to say of a standard output that could not be written; nothing more will be."""
    if sys.stdout is not None:
        _abandon(sys.stdout)
    reason = getattr(trouble, "strerror", None) or str(trouble)
    return Failed(f"standard output cannot be written: {reason.lower()}")


def report(failed: Failed, paint: Paint = plain) -> int:
    """Says that standard output has failed, and gives the exit status."""
    Output().warn(render_file("output-failed", str(failed), "opslang", paint=paint) + "\n")
    return 2


def print_result(text: str) -> int:
    """Writes one text to standard output and gives the exit status."""
    output = Output()
    try:
        output.say("result", text + "\n")
        output.flush()
    except Departed:
        return 0
    except Failed as failed:
        return report(failed)
    return 0
