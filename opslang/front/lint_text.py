"""Findings as text in the GNU form, and as JSON Lines.  Knows how things are written, not what they are.

One JSON object a finding:

    {"file", "line", "column", "end_line", "end_column", "severity", "name", "message", "formula", "mend"}
"""

from __future__ import annotations

import json

from opslang.ground.source import Place
from opslang.lint.result import Report, Row
from opslang.report.render import INDENT, Paint, excerpt, headline, plain, shortened, visible

KEYS = ("file", "line", "column", "end_line", "end_column", "severity", "name", "message", "formula", "mend")


def text_of(row: Row, paint: Paint = plain, width: int = 80, why: bool = False) -> str:
    """A row as lines of text: the headline, the source line with its mark, what it should be, the derivation."""
    place = Place(row.line, row.column, row.end_line, row.end_column)
    lines = [headline(row.file, place, row.severity, f"{row.name}: {row.message}", paint)]
    end = row.end_column - 1 if row.end_line == row.line else len(row.source)
    shown, marks = excerpt(row.source, row.column - 1, end, max(20, width - len(INDENT)))
    stripped = shown.lstrip()
    away = min(len(shown) - len(stripped), len(marks) - len(marks.lstrip()))
    signs = marks.lstrip()
    lines.append(INDENT + shown[away:])
    lines.append(INDENT + " " * (len(marks) - len(signs) - away) + paint("mark", signs))
    lines += [INDENT + paint("help", shortened(visible(part))) for part in row.help.splitlines()]
    if row.mend is not None:
        lines.append(INDENT + paint("help", shortened(visible(f"mend: {row.mend}"))))
    if why:
        lines += [f"{INDENT}  {shortened(visible(step))}" for step in row.steps]
    return "\n".join(lines) + "\n"


def json_of(row: Row) -> str:
    """A row as one line of JSON."""
    return json.dumps({key: getattr(row, key) for key in KEYS}, ensure_ascii=False) + "\n"


def coverage_text(row: Row, paint: Paint = plain) -> str:
    """What became of one formula, in a line."""
    place = Place(row.line, row.column, row.end_line, row.end_column)
    formula = " ".join(row.formula.split())
    return headline(row.file, place, "note", f"{row.name}: {row.message}: {formula}", paint) + "\n"


def plural(count: int, word: str) -> str:
    """A number with its noun."""
    return f"{count:,} {word}" + ("" if count == 1 else "s")


class Tally:
    """The counts of a run."""

    def __init__(self) -> None:
        self.files = self.unread = self.findings = self.checked = self.unchecked = self.mended = 0

    def count(self, report: Report, findings: int) -> None:
        """Take note of a report of which that many findings were shown."""
        self.files += 1
        self.unread += report.failure is not None
        self.findings += findings
        self.checked += report.checked
        self.unchecked += report.unchecked

    def text(self) -> str:
        """The summary."""
        words = [
            f"{plural(self.checked, 'formula')} checked",
            f"{self.unchecked:,} not checked",
            plural(self.findings, "finding"),
        ]
        if self.mended:
            words.append(f"{self.mended:,} mended")
        said = ", ".join(words) + f" in {plural(self.files, 'file')}"
        return said + (f"; {plural(self.unread, 'file')} could not be read" if self.unread else "")

    @property
    def status(self) -> int:
        """The exit status: 2 something could not be read, 1 findings, 0 neither."""
        return 2 if self.unread else 1 if self.findings else 0
