"""The way in: `opslang` and `python -m opslang`.  Knows only how to be interrupted before anything is loaded."""

from __future__ import annotations

import gc
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
    gc.disable()  # what the modules hold stays to the end; whoever works long turns the collector on
    sys.exit(_run(sys.argv[1:]))


def _run(arguments: list[str]) -> int:
    """Answers plain lines and opens the shell without the time that it takes to load click; else: the command line."""
    if len(arguments) > 1 and arguments[0] == "eval" and not any(text.startswith("-") for text in arguments):
        from opslang.front.batch import evaluate, named, settings_for

        return evaluate((), named(tuple(arguments[1:])), settings_for())
    if arguments in ([], ["shell"]):
        from opslang.front.entrance import shell

        return shell()
    from opslang.front.cli import main as command

    return command(arguments)


if __name__ == "__main__":
    main()
