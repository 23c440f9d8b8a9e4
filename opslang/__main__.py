"""The way in: `opslang` and `python -m opslang`.  Knows only how to be interrupted before anything is loaded."""

from __future__ import annotations

import os
import signal
import sys
from types import FrameType
from typing import NoReturn


def _leave(number: int, frame: FrameType | None) -> None:
    os._exit(130)


def main() -> NoReturn:
    """Runs the command line and ends the process with its exit status."""
    if signal.getsignal(signal.SIGINT) is signal.default_int_handler:
        # While modules are loaded there is nothing to save, and no traceback that anybody wants to see.
        signal.signal(signal.SIGINT, _leave)
    from opslang.front.cli import main as command

    sys.exit(command(sys.argv[1:]))


if __name__ == "__main__":
    main()
