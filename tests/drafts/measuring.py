"""What the linter makes of the corpus: understood, checked, found, false alarms.  Knows marks and rows; judges no
formula.

A mark is understood where a statement in it was read and was found to be about operations; checked where a verdict
was reached; "not checked" counts as missed.  A finding that touches no formula marked false is a false alarm."""

from __future__ import annotations

import shutil
import tempfile
from collections.abc import Iterator
from dataclasses import dataclass, field
from functools import cache
from pathlib import Path

from drafts.corpus import Draft, Mark, drafts
from drafts.slips import Slip
from opslang.lint.result import Report, Row
from opslang.lint.run import FAULT, lint


@dataclass
class Table:
    """The counts over some marks."""

    relations: int = 0
    understood: int = 0
    checked: int = 0
    false: int = 0
    found: int = 0
    alarms: list[tuple[Row, Mark | None]] = field(default_factory=list)
    missed: list[Mark] = field(default_factory=list)
    unread: list[Mark] = field(default_factory=list)
    unchecked: list[tuple[Mark, str]] = field(default_factory=list)

    def add(self, other: Table) -> None:
        """Take the counts of another one in."""
        for name in ("relations", "understood", "checked", "false", "found"):
            setattr(self, name, getattr(self, name) + getattr(other, name))
        for name in ("alarms", "missed", "unread", "unchecked"):
            getattr(self, name).extend(getattr(other, name))


def share(part: int, whole: int) -> float:
    """A share in per cent."""
    return 100 * part / whole if whole else 100.0


def span_of(mark: Mark) -> tuple[int, int, int, int]:
    """Line and column of the start and of the end of a mark."""
    return _end(mark.line, mark.column, mark.quote)


def _end(line: int, column: int, text: str) -> tuple[int, int, int, int]:
    last = text.rsplit("\n", 1)[-1]
    lines = text.count("\n")
    return line, column, line + lines, (column + len(text)) if not lines else len(last) + 1


def touches(row: Row, file: str, span: tuple[int, int, int, int]) -> bool:
    """Whether a row and a stretch of a file have a character in common."""
    if Path(row.file).name != file:
        return False
    start, end = (span[0], span[1]), (span[2], span[3])
    return (row.line, row.column) < end and start < (row.end_line, row.end_column)


@cache
def report_of(name: str) -> Report:
    """The report on a draft as it stands."""
    draft = next(draft for draft in drafts() if draft.name == name)
    return lint(str(draft.folder / draft.main))


def measured(draft: Draft) -> Table:
    """The table of one draft."""
    report = report_of(draft.name)
    assert report.failure is None, report.failure
    faults = [row.message for row in report.formulas if FAULT in row.message]
    assert not faults, faults
    table = Table()
    for mark in draft.marks:
        _measure(table, mark, report)
    wrong = [mark for mark in draft.marks if mark.verdict == "false"]
    for row in report.findings:
        if not any(touches(row, mark.file, span_of(mark)) for mark in wrong):
            near = next((mark for mark in draft.marks if touches(row, mark.file, span_of(mark))), None)
            table.alarms.append((row, near))
    return table


def _measure(table: Table, mark: Mark, report: Report) -> None:
    rows = [row for row in report.formulas if touches(row, mark.file, span_of(mark))]
    if mark.relation:
        table.relations += 1
        if any(not row.message.startswith("not read") for row in rows):
            table.understood += 1
        else:
            table.unread.append(mark)
        if any(row.name == "checked" for row in rows):
            table.checked += 1
        else:
            table.unchecked.append((mark, "; ".join(row.message for row in rows)))
    if mark.verdict == "false":
        table.false += 1
        if any(touches(row, mark.file, span_of(mark)) for row in report.findings):
            table.found += 1
        else:
            table.missed.append(mark)


def whole() -> Table:
    """The table of all drafts."""
    table = Table()
    for draft in drafts():
        table.add(measured(draft))
    return table


def hits(slips: tuple[Slip, ...]) -> Iterator[tuple[Slip, tuple[Row, ...]]]:
    """Each slip with the findings in the formula that holds it."""
    by_name = {draft.name: draft for draft in drafts()}
    for slip in slips:
        draft = by_name[slip.draft]
        with tempfile.TemporaryDirectory() as place:
            folder = Path(place) / draft.name
            shutil.copytree(draft.folder, folder)
            (folder / slip.file).write_text(slip.source, encoding="utf-8")
            report = lint(str(folder / draft.main))
        span = _end(slip.line, slip.column, slip.formula)
        yield slip, tuple([row for row in report.findings if touches(row, slip.file, span)])
