"""The lines typed in earlier sittings, kept in the user's own state folder.  Knows files; a place that cannot be
read or written costs the memory of them and nothing else.

One line of the file is one input; its line ends are written `\\n`, a backslash `\\\\`.
"""

from __future__ import annotations

import os
import sys
from collections.abc import Iterable

from prompt_toolkit.history import History

LARGEST = 2_000_000
"""A file of more bytes is cut to its last half when it is next read."""
LONGEST = 20_000
"""An input of more characters is not worth keeping."""


def state_folder() -> str | None:
    """Where the platform keeps what a program remembers for its user: on Linux by the XDG base directory specification.

    None where there is no home.
    """
    home = os.path.expanduser("~")
    if sys.platform == "win32":
        base = os.environ.get("LOCALAPPDATA") or os.path.join(home, "AppData", "Local")
    elif sys.platform == "darwin":
        base = os.path.join(home, "Library", "Application Support")
    else:
        base = os.path.join(home, ".local", "state")
    chosen = os.environ.get("XDG_STATE_HOME", "")
    if os.path.isabs(chosen) and sys.platform != "win32":
        base = chosen
    return os.path.join(base, "opslang") if os.path.isabs(base) else None


def written(text: str) -> str:
    """An input as a line of the file."""
    return text.replace("\\", "\\\\").replace("\r", "").replace("\n", "\\n")


def read(line: str) -> str:
    """An input from its line."""
    pieces = line.split("\\\\")
    return "\\".join(piece.replace("\\n", "\n") for piece in pieces)


class Remembered(History):
    """The history that the line editor shows; the last line comes first."""

    def __init__(self, folder: str | None) -> None:
        super().__init__()
        self._place = None if folder is None else os.path.join(folder, "history")
        self._last: str | None = None

    def load_history_strings(self) -> Iterable[str]:
        """The inputs of earlier sittings, the newest first."""
        if self._place is None:
            return []
        try:
            with open(self._place, "rb") as file:
                data = file.read()
            if len(data) > LARGEST:
                data = data[data.index(b"\n", len(data) - LARGEST // 2) + 1 :]
                self._rewrite(data)
        except (OSError, ValueError):
            return []
        found = [read(line) for line in data.decode("utf-8", "surrogateescape").split("\n") if line]
        return found[::-1]

    def _rewrite(self, data: bytes) -> None:
        assert self._place is not None
        beside = f"{self._place}-{os.getpid()}"
        with open(beside, "wb") as file:
            file.write(data)
        os.replace(beside, self._place)

    def append_string(self, string: str) -> None:
        """Take an input in; blank ones and repetitions of the last one are passed over."""
        text = string.strip("\n")
        if not text.strip() or text == self._last:
            return
        self._last = text
        super().append_string(text)

    def store_string(self, string: str) -> None:
        """Write one input at the end of the file, in one piece, since several sittings may share it."""
        if self._place is None or len(string) > LONGEST:
            return
        try:
            os.makedirs(os.path.dirname(self._place), mode=0o700, exist_ok=True)
            handle = os.open(self._place, os.O_WRONLY | os.O_APPEND | os.O_CREAT, 0o600)
            try:
                os.write(handle, (written(string) + "\n").encode("utf-8", "surrogateescape"))
            finally:
                os.close(handle)
        except (OSError, ValueError):
            return
