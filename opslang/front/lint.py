"""`opslang lint`: which drafts, by how many processes, written how.  Knows no formula.

Reports are written in the order of the files, whoever worked on them.  A file that is part of another one on the list
is not written twice: the main file's report holds it."""

from __future__ import annotations

import gc
import os
import sys
from collections.abc import Generator, Iterable, Iterator
from typing import TYPE_CHECKING

from attrs import define, field, frozen

from opslang.front.lint_cache import Cache
from opslang.front.lint_files import STANDARD_INPUT, Since, drafts
from opslang.front.lint_jobs import NoCluster, Work, clustered, default_jobs, shared
from opslang.front.lint_text import Tally, coverage_text, json_of, text_of
from opslang.front.output import Departed, Failed, Output, paint_for, report, width_of
from opslang.front.progress import Progress
from opslang.lint.result import Report, Row
from opslang.lint.run import lint_text
from opslang.report.render import Paint, plain, render_file

if TYPE_CHECKING:
    from opslang.front.sarif import Sarif

INTERRUPTED = 130


@frozen
class LintSettings:
    """What is asked for on the command line."""

    output: str = "text"
    mend: bool = False
    coverage: bool = False
    why: bool = False
    since: str | None = None
    jobs: int | None = None
    cluster: str | None = None
    cache: bool = True
    name: str = STANDARD_INPUT
    width: int | None = None
    colour: str = "auto"


class LintProgress(Progress):
    """How many files are done."""

    def __init__(self, total: int, tally: Tally) -> None:
        super().__init__()
        self._total, self._tally = total, tally

    def text(self) -> str:
        """The line itself."""
        done = f"{self._tally.files:,} of {self._total:,} files, {self._tally.findings:,} findings"
        return f"{done}, {self.seconds():.0f} s"


def run(paths: tuple[str, ...], settings: LintSettings) -> int:
    """Lints the drafts and gives the exit status.  Raises BadSince, NoCluster."""
    since = Since(settings.since) if settings.since is not None else None
    names = [name for name, _ in drafts(paths) if since is None or since.changed(name)]
    tally = Tally()
    progress = LintProgress(len(names), tally)
    writer = Writer(settings, tally, Output(progress.clear))
    gc.freeze()
    gc.enable()
    gc.set_threshold(50_000, 20, 50)
    with progress:
        return _written(_reports(names, settings), names, writer)


def _written(reports: Generator[Report, None, None], names: list[str], writer: Writer) -> int:
    """Writes the reports; every way in which a run can end ends here."""
    try:
        writer.begin()
        for found in in_order(reports, names):
            writer.write(found)
        writer.end()
    except Departed:
        return writer.tally.status
    except Failed as failed:
        return report(failed)
    except KeyboardInterrupt:
        writer.output.say("diagnostic", "opslang: interrupted\n")
        return INTERRUPTED
    finally:
        reports.close()
    return writer.tally.status


def _reports(names: list[str], settings: LintSettings) -> Generator[Report, None, None]:
    from opslang.syntax.loader import cache_folder

    folder = cache_folder() if settings.cache else None
    options = "why" if settings.why else ""
    work = Work(Cache(folder / "lint" if folder is not None else None, options), settings.why)
    jobs = settings.jobs or default_jobs(len(names))
    if STANDARD_INPUT not in names:
        if settings.cluster is not None:
            yield from clustered(names, work, settings.cluster)
        else:
            yield from shared(names, work, min(jobs, max(1, len(names))))
        return
    for name in names:
        yield _standard_input(settings.name, settings.why) if name == STANDARD_INPUT else work.one(name)


def _standard_input(name: str, explain: bool) -> Report:
    if sys.stdin is None:
        return Report(name, failure=("unreadable-file", "standard input is closed"))
    try:
        data = sys.stdin.buffer.read()
    except OSError as trouble:
        return Report(name, failure=("unreadable-file", (trouble.strerror or str(trouble)).lower()))
    if b"\0" in data and data[:2] not in (b"\xff\xfe", b"\xfe\xff"):
        return Report(name, failure=("binary-file", "what comes in is binary: it holds a NUL byte"))
    return lint_text(data, name, explain)


def in_order(reports: Iterable[Report], names: list[str]) -> Iterator[Report]:
    """The reports without those of mere parts of a main file that is on the list too.

    A part waits until its main file has come; if that does not draw it in after all, it follows.
    """
    listed = {os.path.realpath(name) for name in names}
    waiting: dict[str, list[Report]] = {}
    drawn: set[str] = set()
    done: set[str] = set()
    for found in reports:
        own = os.path.realpath(found.name)
        root = os.path.realpath(found.part_of) if found.part_of else ""
        if own in drawn:
            continue
        if root in listed - done and root != own:
            waiting.setdefault(root, []).append(found)
            continue
        done.add(own)
        yield found
        parts = {os.path.realpath(path) for path, _ in found.files}
        drawn |= parts - {own} if not found.part_of else set()
        yield from [part for part in waiting.pop(own, ()) if os.path.realpath(part.name) not in parts]
    for held in waiting.values():
        yield from held


@define
class Writer:
    """Writes reports as they come."""

    settings: LintSettings
    tally: Tally
    output: Output
    _sarif: Sarif | None = None
    _waits: list[Row] = field(factory=list)
    _seen: set[Row] = field(factory=set)

    @property
    def _paint(self) -> Paint:
        return paint_for(self.settings.colour, sys.stdout) if self.settings.output == "text" else plain

    def begin(self) -> None:
        """Before the first report."""
        if self.settings.output == "sarif":
            from opslang.front.sarif import Sarif

            self._sarif = Sarif()
            self.output.say("result", self._sarif.head())

    def write(self, found: Report) -> None:
        """One report."""
        if found.failure is not None:
            name, message = found.failure
            paint = paint_for(self.settings.colour, sys.stderr)
            self.output.say("diagnostic", render_file(name, message, found.name, paint=paint) + "\n")
        elif self.settings.mend:
            found = self._mended(found)
        rows = tuple([row for row in found.findings if self._new(row, found.name)])
        self.tally.count(found, len(rows))
        self._rows(found, rows)

    def _new(self, row: Row, name: str) -> bool:
        if row.file == name:
            return True
        fresh = row not in self._seen
        self._seen.add(row)
        return fresh

    def _mended(self, found: Report) -> Report:
        from opslang.front.mend import mend

        try:
            done = mend(found.findings)
        except OSError as trouble:
            reason = (trouble.strerror or str(trouble)).lower()
            message = f"the file cannot be written: {reason}"
            self.output.say("diagnostic", render_file("unwritable-file", message, found.name) + "\n")
            self.tally.unread += 1
            return found
        self.tally.mended += sum(map(len, done.values()))
        gone = {row for rows in done.values() for row in rows}
        if not gone:
            return found
        from opslang.lint.run import lint

        return lint(found.name, self.settings.why)  # places have moved

    def _rows(self, found: Report, rows: tuple[Row, ...]) -> None:
        covered = (*found.notices, *found.formulas) if self.settings.coverage else ()
        if self._sarif is not None:
            for text in self._sarif.results(found, (*rows, *covered)):
                self.output.say("result", text)
        elif self.settings.output == "jsonl":
            for row in (*rows, *covered):
                self.output.say("result", json_of(row))
        else:
            paint, width = self._paint, self.settings.width or width_of(sys.stdout)
            for row in rows:
                self.output.say("result", text_of(row, paint, width, self.settings.why))
            for row in covered:
                self.output.say("result", coverage_text(row, paint))

    def end(self) -> None:
        """After the last report."""
        if self._sarif is not None:
            self.output.say("result", self._sarif.tail())
        if self.settings.output == "text":
            self.output.say("result", self.tally.text() + "\n")
        self.output.flush()


__all__ = ["LintSettings", "NoCluster", "run"]
