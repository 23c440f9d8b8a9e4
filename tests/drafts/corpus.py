"""The drafts and their marks, read from disk.  Knows files, lines and columns; judges nothing.

A folder is a draft: `main.tex`, perhaps further files, and `marks.toml`; `slips.py` says what the fields mean.
"""

from __future__ import annotations

import tomllib
from dataclasses import dataclass
from functools import cache
from pathlib import Path

HERE = Path(__file__).parent
VERDICTS = ("true", "false", "undecidable")
GIVEN = ("nothing needed", "text", "comment", "missing")
JUDGED = ("formula by formula", "by its shape")


@dataclass(frozen=True)
class Mark:
    """One formula of a draft, where it stands and what it is worth."""

    draft: str
    file: str
    line: int
    column: int
    quote: str
    verdict: str
    kind: str
    needs: str
    given: str
    relation: bool
    reason: str
    judged: str
    severity: str = "none"
    plant: bool = True


@dataclass(frozen=True)
class Draft:
    """A folder with its title, its style in words and its marks in the order of the text, the main file first."""

    name: str
    style: str
    main: str
    marks: tuple[Mark, ...]

    @property
    def folder(self) -> Path:
        return HERE / self.name

    def source(self, file: str) -> str:
        """The text of one file, line ends as they stand."""
        return (self.folder / file).read_text(encoding="utf-8")


def load(folder: Path) -> Draft:
    """One draft with its marks; a field that is missing or unknown raises TypeError or KeyError."""
    content = tomllib.loads((folder / "marks.toml").read_text(encoding="utf-8"))
    marks = tuple(Mark(draft=folder.name, **formula) for formula in content["formula"])
    return Draft(folder.name, content["style"], content["main"], marks)


@cache
def drafts() -> tuple[Draft, ...]:
    """All drafts, by name."""
    return tuple(load(path.parent) for path in sorted(HERE.glob("*/marks.toml")))


def offset_of(text: str, line: int, column: int) -> int:
    """The index of a place given by line and column, both from 1, columns in code points."""
    start = 0
    for _ in range(line - 1):
        start = text.index("\n", start) + 1
    return start + column - 1


def place_of(text: str, offset: int) -> tuple[int, int]:
    """Line and column, both from 1, of an index."""
    return text.count("\n", 0, offset) + 1, offset - text.rfind("\n", 0, offset)
