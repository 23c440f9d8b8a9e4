"""Finds the worked examples in a page of documentation and runs them.

In a `console` block a line that begins with `$ ` is a command, `> ` goes on with it, and what follows is what it
prints on both streams, word for word.  A `pycon` block is a session of the Python interpreter.
"""

from __future__ import annotations

import doctest
import re
import subprocess
import sys
from pathlib import Path

from attrs import frozen
from command import ROOT, environment

_BLOCK = re.compile(r"^( *)```(\w+)\n(.*?)^\1```$", re.MULTILINE | re.DOTALL)


@frozen
class Example:
    """A command with what it is said to print; `line` is its place in the page."""

    line: int
    command: str
    printed: str


def blocks(page: Path, language: str) -> list[tuple[int, str]]:
    """The fenced blocks of a language, each with the line on which it begins."""
    text = page.read_text()
    found = [(text.count("\n", 0, match.start()) + 2, match) for match in _BLOCK.finditer(text)]
    return [
        (line, re.sub(rf"^{match[1]}", "", match[3], flags=re.MULTILINE))
        for line, match in found
        if match[2] == language
    ]


def examples(page: Path) -> list[Example]:
    """The commands of all console blocks."""
    found = []
    for line, block in blocks(page, "console"):
        for match in re.finditer(r"^\$ (.*\n(?:> .*\n)*)((?:(?!\$ ).*\n)*)", block, re.MULTILINE):
            command = re.sub(r"^> ", "", match[1], flags=re.MULTILINE)
            found.append(Example(line + block.count("\n", 0, match.start()), command, match[2]))
    return found


def run(command: str, folder: Path, shims: Path) -> str:
    """What a command prints, run by bash in the folder, with `opslang` being this very checkout."""
    shim = shims / "opslang"
    if not shim.exists():
        shim.write_text(f'#!/bin/sh\nexec "{sys.executable}" -m opslang "$@"\n')
        shim.chmod(0o755)
    env = environment()
    env["PATH"] = f"{shims}:{env['PATH']}"
    done = subprocess.run(
        ["bash", "-c", command],
        cwd=folder,
        env=env,
        stdin=subprocess.DEVNULL,
        stdout=subprocess.PIPE,
        stderr=subprocess.STDOUT,
        text=True,
        timeout=60,
        check=False,
    )
    return done.stdout


def sessions(page: Path) -> list[doctest.DocTest]:
    """The interpreter sessions of a page."""
    parser = doctest.DocTestParser()
    name = str(page.relative_to(ROOT))
    return [parser.get_doctest(block, {}, f"{name}:{line}", name, line) for line, block in blocks(page, "pycon")]
