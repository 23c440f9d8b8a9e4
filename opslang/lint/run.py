"""The linter over one draft: read, cut into statements, learn what is known, ask the rules.  Prints nothing.

`lint` takes a path and gives plain tuples, so that any process, here or elsewhere, can do it.
"""

from __future__ import annotations

from collections.abc import Iterable
from hashlib import sha256
from typing import Any

from attrs import evolve

from opslang.lint.context.build import learnt_from
from opslang.lint.context.names import nodes_in
from opslang.lint.model import Finding, Operation, Origin, Verdict
from opslang.lint.reading import Document, Notice, read_file, read_text
from opslang.lint.reading.project import Project, load
from opslang.lint.result import Report, Row
from opslang.lint.rule import Draft, Unit, register

_WORTH = ("finding", "true", "agrees", "consistent", "not-checked", "not-about-operations")
FAULT = "opslang itself failed here"
_SAID = {
    "finding": "something was found in it",
    "true": "true",
    "agrees": "no counterexample",
    "consistent": "sorts and degrees fit",
}


def lint(path: str, explain: bool = False) -> Report:
    """All that is to be said of the draft in a file, with derivations if they are wanted.  Never raises: what goes
    wrong is the report's `failure`.
    """
    try:
        file = load(path)
        if "\0" in file.text:
            return Report(path, failure=("binary-file", "the file is binary: it holds a NUL byte"))
        report = report_on(read_file(file), path, explain)
        root = Project(file).root() if path.endswith((".tex", ".ltx")) else None
        return report._replace(part_of=root or "")
    except FileNotFoundError:
        return Report(path, failure=("missing-file", "there is no such file"))
    except OSError as trouble:
        reason = (trouble.strerror or str(trouble)).lower()
        return Report(path, failure=("unreadable-file", reason))
    except (RecursionError, MemoryError):
        return Report(path, failure=("too-large", "the file is nested too deeply or too large for the memory"))
    except Exception as fault:
        what = f"{type(fault).__name__}: {fault}"
        return Report(path, failure=("internal-fault", f"opslang itself failed on this file: {what}"))


def lint_text(text: str | bytes, name: str = "-", explain: bool = False) -> Report:
    """All that is to be said of a draft given as text; `name` says by its ending what it is.  Never raises."""
    try:
        return report_on(read_text(text, name), name, explain)
    except (RecursionError, MemoryError):
        return Report(name, failure=("too-large", "the text is nested too deeply or too large for the memory"))
    except Exception as fault:
        what = f"{type(fault).__name__}: {fault}"
        return Report(name, failure=("internal-fault", f"opslang itself failed on this text: {what}"))


def report_on(document: Document, name: str, explain: bool = False) -> Report:
    """The report on a draft that has been read."""
    learnt = learnt_from(document, explain)
    units, allowed = learnt.units, learnt.allowed
    findings = list(learnt.trouble)
    formulas: list[Row] = []
    checked = unchecked = 0
    for unit in units:
        verdict = judged(unit)
        if verdict is None or verdict.standing == "not-about-operations":
            continue
        findings += [_named(document, unit, finding) for finding in verdict.findings]
        known = verdict.standing != "not-checked"
        checked += known
        unchecked += not known
        formulas.append(_covered(document, unit, verdict))
    findings += _compared(Draft(document, units, learnt.paragraphs))
    rows = [_row(document, finding) for finding in findings if not allowed.allows(finding)]
    return Report(
        name,
        tuple(sorted({(file.path, _digest(file.path)) for file in document.files if file.path})),
        tuple(sorted(set(rows), key=_order)),
        tuple(formulas),
        tuple([_notice(document, notice) for notice in document.notices]),
        checked,
        unchecked,
    )


def judged(unit: Unit) -> Verdict | None:
    """What the rules together say of one statement; None where none of them has anything to say."""
    heads = {node.head for node in nodes_in(unit.statement) if isinstance(node, Operation)}
    if heads and heads <= unit.known.integers:
        return None  # the words around it say that these letters are no operations
    best: Verdict | None = None
    findings: list[Finding] = []
    settled = False
    open_end: Verdict | None = None
    for rule in register():
        if rule.check is None or (settled and rule.severity == "error"):
            continue
        try:
            verdict = rule.check(unit.statement, unit.known)
        except (MemoryError, RecursionError):
            verdict = Verdict("not-checked", reason="too large to be tried")
        except Exception as fault:  # one formula is lost, not the draft
            verdict = Verdict("not-checked", reason=f"{FAULT} in {rule.name}: {type(fault).__name__}: {fault}")
        if verdict is None:
            continue
        findings += verdict.findings
        if verdict.standing == "not-checked" and open_end is None:
            open_end = verdict
        settled = settled or any(finding.severity == "error" for finding in verdict.findings)
        if best is None or _WORTH.index(verdict.standing) < _WORTH.index(best.standing):
            best = verdict
    if best is None:
        return None
    if best.standing == "consistent" and open_end is not None:
        best = Verdict("consistent", (), f"{best.reason}; no more was decided: {open_end.reason}", open_end.needed)
    return Verdict(best.standing, tuple(findings), best.reason, best.needed, best.derivation)


def _compared(draft: Draft) -> Iterable[Finding]:
    found: list[Finding] = []
    for rule in register():
        if rule.draft is not None:
            found += rule.draft(draft)
    return found


def _digest(path: str) -> str:
    try:
        with open(path, "rb") as stream:
            return sha256(stream.read()).hexdigest()
    except OSError:
        return ""


def _order(row: Row) -> tuple[str, int, int, int, str, str]:
    return (row.file, row.start, row.end, row.line, row.name, row.message)


# --- rows ---------------------------------------------------------------------------------------


def _placed(document: Document, at: Origin, **rest: Any) -> Row:
    file = document.files[at.file]
    place = file.place(at.start, at.end)
    row = Row(
        file.name, place.line, place.column, place.end_line, place.end_column, "note", "", "", "",
        source=file.source.line_at(place.line), start=at.start, end=at.end, path=file.path,
    )  # fmt: skip
    return row._replace(**rest)


def _named(document: Document, unit: Unit, finding: Finding) -> Finding:
    """A finding between two signs names the whole formula."""
    if finding.formula or finding.at.start < finding.at.end:
        return finding
    return evolve(finding, formula=_raw(document, unit.statement.at))


def _row(document: Document, finding: Finding) -> Row:
    message, _, help = finding.message.partition("\n")
    return _placed(
        document,
        finding.at,
        severity=finding.severity,
        name=finding.name,
        message=message,
        help=help,
        formula=finding.formula or _raw(document, finding.at),
        mend=finding.mend,
        certain=finding.certain and finding.mend is not None,
        steps=finding.derivation,
    )


def _covered(document: Document, unit: Unit, verdict: Verdict) -> Row:
    checked = verdict.standing != "not-checked"
    words = _SAID.get(verdict.standing, "")
    if verdict.reason:
        words = f"{words}: {verdict.reason}" if words else verdict.reason
    if verdict.needed:
        words += f"; needed: {verdict.needed}"
    at = unit.statement.at
    return _placed(
        document,
        at,
        name="checked" if checked else "not-checked",
        message=words or "no rule decides it",
        formula=_raw(document, at),
        steps=verdict.derivation,
    )


def _notice(document: Document, notice: Notice) -> Row:
    at = Origin(notice.file, notice.start, notice.end)
    return _placed(document, at, name=notice.name, message=notice.message, severity="note")


def _raw(document: Document, at: Origin) -> str:
    return document.files[at.file].text[at.start : at.end]
