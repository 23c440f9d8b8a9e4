"""Which drafts a call of `opslang lint` is about.  Knows folders, dates and revisions; reads no mathematics."""

from __future__ import annotations

import os
import re
from collections.abc import Iterable, Iterator
from datetime import datetime

ENDINGS = (".tex", ".ltx", ".md", ".markdown", ".mdown", ".myst", ".qmd", ".rmd", ".ipynb")
STANDARD_INPUT = "-"
_NAMED = re.compile(r"\\(?:input|include|subfile|usepackage|RequirePackage)\s*(?:\[[^\]]*\])?\s*\{?\s*([^\s{}%]+)")


class BadSince(Exception):
    """What stands behind --since is neither a date nor a revision."""


def drafts(paths: Iterable[str]) -> Iterator[tuple[str, bool]]:
    """The files meant, each once, in order, with whether it was found in a folder (and not named itself)."""
    seen: set[str] = set()
    for path in paths:
        inside = path != STANDARD_INPUT and os.path.isdir(path)
        for name in _inside(path) if inside else (path,):
            real = name if name == STANDARD_INPUT else os.path.realpath(name)
            if real not in seen:
                seen.add(real)
                yield name, inside


def _inside(folder: str) -> Iterator[str]:
    """The drafts in a folder and in those below it, sorted; hidden folders are left out."""
    for here, folders, names in os.walk(folder):
        folders[:] = sorted(name for name in folders if not name.startswith("."))
        for name in sorted(names):
            if name.lower().endswith(ENDINGS) and not name.startswith("."):
                yield os.path.normpath(os.path.join(here, name))


class Since:
    """Which files have changed: after a date (2026-03-01, 2026-03-01T12:00), or since a revision of a git repository.

    Raises BadSince where the text is neither.
    """

    def __init__(self, text: str, start: str = ".") -> None:
        self._after: float | None = None
        self._changed: set[str] = set()
        try:
            self._after = datetime.fromisoformat(text).timestamp()
        except ValueError:
            self._changed = _changed_since(text, start)

    def _one(self, path: str) -> bool:
        if self._after is None:
            return os.path.realpath(path) in self._changed
        try:
            return os.path.getmtime(path) >= self._after
        except OSError:
            return True  # whoever reads it will say what is wrong

    def changed(self, path: str) -> bool:
        """Whether the file has changed, or one that it draws in by name."""
        if path == STANDARD_INPUT or self._one(path):
            return True
        try:
            with open(path, encoding="utf-8", errors="replace") as stream:
                text = stream.read()
        except OSError:
            return True
        return any(self._one(part) for part in _drawn_in(text, os.path.dirname(path)))


def _drawn_in(text: str, folder: str) -> Iterator[str]:
    for names in _NAMED.findall(text):
        for name in names.split(","):
            for ending in ("", ".tex", ".sty"):
                path = os.path.join(folder, name + ending)
                if os.path.isfile(path):
                    yield path


def _changed_since(revision: str, start: str) -> set[str]:
    import subprocess

    def git(*words: str) -> str:
        done = subprocess.run(["git", "-C", start, *words], capture_output=True, check=False)
        if done.returncode:
            raise BadSince(revision)
        return os.fsdecode(done.stdout)

    try:
        if revision.startswith("-"):
            raise BadSince(revision)
        top = git("rev-parse", "--show-toplevel").rstrip("\n")
        names = git("diff", "--name-only", "-z", revision, "--").split("\0")
        names += git("-C", top, "ls-files", "--others", "--exclude-standard", "-z").split("\0")
    except OSError as trouble:
        raise BadSince(revision) from trouble
    return {os.path.realpath(os.path.join(top, name)) for name in names if name}
