"""What linting one draft gives, in plain tuples that travel between processes and into files.

Knows no mathematics and no printing.
"""

from __future__ import annotations

from typing import NamedTuple

SHAPE = 1
"""Goes up whenever the fields below change, so that results kept from before are not read wrongly."""


class Row(NamedTuple):
    """One finding, one remark on the file, or what became of one formula.

    Lines and columns count from 1, in code points of the file as its author wrote it; the end is the place after.
    `mend` is what would replace the stretch `start` … `end` of the file, `certain` whether it may be written unasked;
    `source` is the line on which it begins, `steps` the derivation.
    """

    file: str
    line: int
    column: int
    end_line: int
    end_column: int
    severity: str
    name: str
    message: str
    formula: str
    mend: str | None = None
    help: str = ""
    source: str = ""
    steps: tuple[str, ...] = ()
    certain: bool = False
    start: int = 0
    end: int = 0
    path: str = ""


class Report(NamedTuple):
    """All that linting one draft gives.

    `files` are the paths read with the digests of their bytes; `part_of` is the path of the main file where this one
    is only a part.  `formulas` says of each formula whether it was checked (rows named checked and not-checked);
    `notices` are about the file itself.  `failure` is (name, message) where the file could not be read.
    """

    name: str
    files: tuple[tuple[str, str], ...] = ()
    findings: tuple[Row, ...] = ()
    formulas: tuple[Row, ...] = ()
    notices: tuple[Row, ...] = ()
    checked: int = 0
    unchecked: int = 0
    failure: tuple[str, str] | None = None
    part_of: str = ""


def packed(report: Report) -> list[object]:
    """A report as lists, texts and numbers, for a file."""
    return [SHAPE, *report]


def unpacked(data: object) -> Report:
    """The report in what `packed` gave.  Raises ValueError or TypeError for anything else."""
    if not isinstance(data, list) or len(data) != len(Report._fields) + 1 or data[0] != SHAPE:
        raise ValueError("not a kept report")
    report = Report(*data[1:])
    return report._replace(
        files=tuple([(str(path), str(digest)) for path, digest in report.files]),
        findings=_rows(report.findings),
        formulas=_rows(report.formulas),
        notices=_rows(report.notices),
        failure=None if report.failure is None else (str(report.failure[0]), str(report.failure[1])),
    )


def _rows(rows: object) -> tuple[Row, ...]:
    if not isinstance(rows, (list, tuple)):
        raise ValueError("not a kept report")
    found = [Row(*row) for row in rows]
    return tuple([row._replace(steps=tuple(row.steps)) for row in found])
