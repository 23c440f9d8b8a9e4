"""The lines typed in earlier sittings, kept in the user's own state folder.  Knows files; a place that cannot be
read or written costs the memory of them and nothing else.

One line of the file is one input; its line ends are written `\\n`, a backslash `\\\\`.
"""

from __future__ import annotations

import os
import sys
from collections.abc import Iterable
from pathlib import Path

from prompt_toolkit.history import History

LARGEST = 2_000_000
"""A file of more bytes is cut to its last half when it is next read."""
LONGEST = 20_000
"""An input of more characters is not worth keeping."""


def state_folder() -> Path | None:
    """Where the platform keeps what a program remembers for its user: on Linux by the XDG base directory specification.

    None where there is no home.
    """
    home = os.path.expanduser("~")
    if sys.platform == "win32":
        local = os.environ.get("LOCALAPPDATA") or os.path.join(home, "AppData", "Local")
        return Path(local) / "opslang" if os.path.isabs(local) else None
    chosen = os.environ.get("XDG_STATE_HOME", "")
    if os.path.isabs(chosen):
        return Path(chosen) / "opslang"
    if not os.path.isabs(home):
        return None
    if sys.platform == "darwin":
        return Path(home) / "Library" / "Application Support" / "opslang"
    return Path(home) / ".local" / "state" / "opslang"


def written(text: str) -> str:
    """An input as a line of the file."""
    return text.replace("\\", "\\\\").replace("\r", "").replace("\n", "\\n")


def read(line: str) -> str:
    """An input from its line."""
    pieces = line.split("\\\\")
    return "\\".join(piece.replace("\\n", "\n") for piece in pieces)


class Remembered(History):
    """The history that the line editor shows; the last line comes first."""

    def __init__(self, folder: Path | None) -> None:
        super().__init__()
        self._place = None if folder is None else folder / "history"
        self._last: str | None = None

    def load_history_strings(self) -> Iterable[str]:
        """The inputs of earlier sittings, the newest first."""
        if self._place is None:
            return []
        try:
            data = self._place.read_bytes()
            if len(data) > LARGEST:
                data = data[data.index(b"\n", len(data) - LARGEST // 2) + 1 :]
                self._rewrite(data)
        except (OSError, ValueError):
            return []
        found = [read(line) for line in data.decode("utf-8", "surrogateescape").split("\n") if line]
        return found[::-1]

    def _rewrite(self, data: bytes) -> None:
        assert self._place is not None
        beside = self._place.with_name(f"history-{os.getpid()}")
        beside.write_bytes(data)
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
            self._place.parent.mkdir(parents=True, exist_ok=True, mode=0o700)
            handle = os.open(self._place, os.O_WRONLY | os.O_APPEND | os.O_CREAT, 0o600)
            try:
                os.write(handle, (written(string) + "\n").encode("utf-8", "surrogateescape"))
            finally:
                os.close(handle)
        except (OSError, ValueError):
            return
