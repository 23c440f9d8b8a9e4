"""The shell on a real pseudo-terminal: keys go in, and a screen is read as its user sees it.

The screen (pyte) answers the shell's questions about the cursor, as a terminal does.
"""

from __future__ import annotations

import sys
from collections.abc import Callable
from pathlib import Path
from time import monotonic
from types import TracebackType

import pexpect
import pyte
from command import environment

PATIENCE = 20.0
"""Seconds after which something awaited counts as missing; generous, since test machines are slow and shared."""


class Terminal:
    """One sitting at the shell."""

    def __init__(self, home: Path, *arguments: str, columns: int = 90, rows: int = 30, **extra: str) -> None:
        env = environment(
            **{"TERM": "xterm-256color", "HOME": str(home), "XDG_STATE_HOME": str(home / "state"), **extra}
        )
        self.screen = pyte.Screen(columns, rows)
        self._stream = pyte.ByteStream(self.screen)
        self.raw = b""
        command = ["-m", "opslang", *arguments]
        self.process = pexpect.spawn(
            sys.executable, command, dimensions=(rows, columns), env=env, cwd=str(home), echo=False
        )
        self.screen.write_process_input = self.process.send

    def __enter__(self) -> Terminal:
        return self

    def __exit__(
        self, kind: type[BaseException] | None, value: BaseException | None, trace: TracebackType | None
    ) -> None:
        self.process.close(force=True)

    def _pump(self, seconds: float) -> bool:
        """Takes in what the shell writes; False at its end."""
        try:
            data = self.process.read_nonblocking(1 << 16, timeout=seconds)
        except pexpect.TIMEOUT:
            return True
        except pexpect.EOF:
            return False
        self.raw += data
        self._stream.feed(data)
        return True

    def text(self) -> str:
        """The screen as text."""
        return "\n".join(line.rstrip() for line in self.screen.display)

    def bottom(self) -> str:
        """The last line of the screen."""
        return str(self.screen.display[-1]).rstrip()

    def until(self, holds: Callable[[], bool], what: str = "") -> None:
        """Waits until something holds of the screen."""
        end = monotonic() + PATIENCE
        while not holds():
            alive = self._pump(0.05)
            if holds():
                return
            assert alive and monotonic() < end, f"waited in vain for {what or 'the screen'}:\n{self.text()}"

    def sees(self, *texts: str) -> None:
        """Waits until the screen shows all of the texts."""
        self.until(lambda: all(text in self.text() for text in texts), repr(texts))

    def at_prompt(self, number: int) -> None:
        """Waits until the cursor stands in an empty line behind the prompt of that number."""
        prompt = f"ops {number}>"
        self.until(lambda: str(self.screen.display[self.screen.cursor.y]).rstrip() == prompt, prompt)

    def press(self, keys: str | bytes) -> None:
        """Sends keys."""
        self.process.send(keys)

    def enter(self, line: str, number: int) -> None:
        """Types a line, runs it and waits for the next prompt."""
        before = self.raw.count(b"\x1b[?2004l")
        self.press(line + "\r")
        self.until(lambda: self.raw.count(b"\x1b[?2004l") > before, f"{line!r} to be run")
        self.at_prompt(number)

    def ends(self) -> int:
        """Waits for the end of the shell and gives its exit status."""
        end = monotonic() + PATIENCE
        while self._pump(0.05):
            assert monotonic() < end, f"the shell does not end:\n{self.text()}"
        self.process.close()
        return -1 if self.process.exitstatus is None else int(self.process.exitstatus)
