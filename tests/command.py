"""Runs the real command in a real process, from a bare checkout or an installation alike."""

from __future__ import annotations

import os
import subprocess
import sys
from collections.abc import Mapping
from pathlib import Path
from time import monotonic

from attrs import frozen

ROOT = Path(__file__).resolve().parent.parent
COMMAND = [sys.executable, "-m", "opslang"]
MEASURED = [sys.executable, "-m", "coverage", "run", f"--rcfile={ROOT}/pyproject.toml", f"--data-file={ROOT}/.coverage"]
"""In front of `-m opslang`, so that the lines run in the new process count too."""
PATIENCE = 30.0
"""Seconds after which a command counts as hanging; generous, since test machines are slow and shared."""


@frozen
class Ran:
    """How a command ended."""

    status: int
    out: str
    err: str
    seconds: float


def environment(**extra: str) -> dict[str, str]:
    """The environment of a command: no colours wanted or unwanted, the checkout on the path."""
    kept = {name: value for name, value in os.environ.items() if name not in ("NO_COLOR", "COLUMNS", "PYTHONHASHSEED")}
    return {**kept, "PYTHONPATH": str(ROOT), "PYTHONIOENCODING": "utf-8", **extra}


def opslang(
    *arguments: str | bytes,
    stdin: str | bytes = b"",
    cwd: Path | None = None,
    env: Mapping[str, str] | None = None,
    timed: bool = False,
) -> Ran:
    """Runs `opslang` with the arguments to its end; measured where the tests are, unless it is to be timed."""
    measured = "COVERAGE_RUN" in os.environ and not timed
    command = [*MEASURED, "--parallel-mode", "-m", "opslang"] if measured else COMMAND
    data = stdin.encode() if isinstance(stdin, str) else stdin
    start = monotonic()
    done = subprocess.run(
        [*command, *arguments],
        input=data,
        capture_output=True,
        cwd=cwd,
        env=environment(**(env or {})),
        timeout=PATIENCE,
        check=False,
    )
    seconds = monotonic() - start
    return Ran(done.returncode, done.stdout.decode(), done.stderr.decode("utf-8", "replace"), seconds)


def start(*arguments: str, **options: object) -> subprocess.Popen[bytes]:
    """Starts `opslang` with pipes at its three ends, for a test that talks to it while it runs."""
    ends = {"stdin": subprocess.PIPE, "stdout": subprocess.PIPE, "stderr": subprocess.PIPE, **options}
    return subprocess.Popen([*COMMAND, *arguments], env=environment(), **ends)  # type: ignore[call-overload,no-any-return]
