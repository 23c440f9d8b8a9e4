"""Decides between the shell and a script on standard input.  Loads neither before it knows."""

from __future__ import annotations

import os
import sys
from typing import TextIO


def _on_terminal(stream: TextIO | None) -> bool:
    return stream is not None and not stream.closed and stream.isatty()


def shell(
    keys: str = "emacs",
    prime: int = 2,
    output: str = "text",
    limit: int | None = None,
    width: int | None = None,
    both: bool = False,
    colour: str = "auto",
) -> int:
    """Converses where there is a terminal that can place its cursor; else runs standard input as a script."""
    capable = os.environ.get("TERM") != "dumb" and output != "jsonl"
    if capable and _on_terminal(sys.stdin) and _on_terminal(sys.stdout):
        from opslang.front.shell import main

        return main(prime, limit, output, both, keys, colour)
    from opslang.front.batch import run, settings_for

    return run(("-",), settings_for(output, prime, limit, width, both, colour))
