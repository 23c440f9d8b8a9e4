"""What a lint rule is, and the register of all of them: the folder `rules`, one file a rule.  Knows no mathematics.

A rule looks at one statement and what is known there (`check`), or at the whole draft (`draft`).  Its bad lines
are drafts in which it must speak, its good lines drafts in which it must be silent: they are its tests and its pages.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable
from functools import lru_cache
from importlib import import_module
from os import listdir
from os.path import dirname, join

from attrs import frozen

from opslang.lint.context.stream import Paragraph
from opslang.lint.model import Finding, Known, Severity, Statement, Verdict
from opslang.lint.reading.document import Document


@frozen
class Unit:
    """One statement with what is known where it stands."""

    statement: Statement
    known: Known


@frozen
class Draft:
    """A whole draft, for rules that compare its parts."""

    document: Document
    units: tuple[Unit, ...]
    paragraphs: tuple[Paragraph, ...] = ()


Check = Callable[[Statement, Known], "Verdict | None"]
DraftCheck = Callable[[Draft], Iterable[Finding]]


@frozen
class LintRule:
    """A rule: its name (reads well after "allow"), what it is in a line, why it is there, drafts it speaks in and is
    silent in.

    `severity` is that of most of its findings.  Rules are asked in the order of `rank` (then name): once one of them
    has found an error in a statement, what later ones find in the same statement is not shown.  `also` are further
    names that its findings may bear."""

    name: str
    title: str
    why: str
    bad: tuple[str, ...]
    good: tuple[str, ...]
    check: Check | None = None
    draft: DraftCheck | None = None
    severity: Severity = "error"
    rank: int = 50
    source: str = ""
    also: tuple[str, ...] = ()


@lru_cache(maxsize=1)
def register() -> tuple[LintRule, ...]:
    """All rules, in the order in which they are asked."""
    folder = join(dirname(__file__), "rules")
    names = sorted(name[:-3] for name in listdir(folder) if name.endswith(".py") and not name.startswith("_"))
    rules: list[LintRule] = [import_module(f"opslang.lint.rules.{name}").RULE for name in names]
    return tuple(sorted(rules, key=lambda rule: (rule.rank, rule.name)))


def rule_named(name: str) -> LintRule | None:
    """The rule of that name."""
    return next((rule for rule in register() if name == rule.name or name in rule.also), None)
