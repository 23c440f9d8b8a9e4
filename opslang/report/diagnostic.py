"""Diagnostics: values that name a finding and its place.  Knows no printing and no mathematics."""

from __future__ import annotations

from typing import Literal

from attrs import frozen

from opslang.ground.source import Span

Severity = Literal["error", "warning", "note"]


@frozen
class Label:
    """A further place that a diagnostic speaks of, with a few words."""

    span: Span
    message: str


@frozen
class Diagnostic:
    """One finding.

    `name` is a key of `opslang.report.codes.CODES`; `message` says what is, `help` what to do;
    `mend` is the text that would replace `span`, where one is likely.
    """

    severity: Severity
    name: str
    message: str
    span: Span
    help: str = ""
    mend: str | None = None
    labels: tuple[Label, ...] = ()


def error(name: str, message: str, span: Span, help: str = "", mend: str | None = None) -> Diagnostic:
    """An error; the statement that holds it has no result."""
    return Diagnostic("error", name, message, span, help, mend)


def warning(name: str, message: str, span: Span, help: str = "", mend: str | None = None) -> Diagnostic:
    """A warning; the statement still has its result."""
    return Diagnostic("warning", name, message, span, help, mend)


def note(name: str, message: str, span: Span, help: str = "") -> Diagnostic:
    """A note: something worth knowing that is not a fault."""
    return Diagnostic("note", name, message, span, help)


class Refusal(Exception):
    """Carries a diagnostic out of a stage that cannot give a value, with `others` found before it; caught where the
    statement is handled."""

    def __init__(self, diagnostic: Diagnostic, others: tuple[Diagnostic, ...] = ()) -> None:
        super().__init__(diagnostic.message)
        self.diagnostic = diagnostic
        self.others = others
