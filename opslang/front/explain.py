"""`opslang explain`: what a diagnostic name or a law's name stands for.  Knows the tables, not what uses them."""

from __future__ import annotations

from typing import TYPE_CHECKING

from opslang.report.codes import CODES

if TYPE_CHECKING:
    from opslang.laws.law import Law
    from opslang.lint.rule import LintRule


def _laws() -> dict[str, Law]:
    from opslang.laws.book import BOOK

    return {law.name: law for law in BOOK}


def _rules() -> dict[str, LintRule]:
    from opslang.lint.rule import register

    return {name: rule for rule in register() for name in (rule.name, *rule.also)}


def names() -> list[str]:
    """Every name that can be explained."""
    return sorted({*CODES, *_laws(), *_rules()})


def explain(name: str, width: int) -> str | None:
    """The explanation of a name as text, or None where the name is not known."""
    if name in CODES:
        code = CODES[name]
        return _page(name, code.title, _paragraphs(code.explanation, width), "Example", code.example.splitlines())
    if name in _rules():
        return _rule_page(name, _rules()[name], width)
    law = _laws().get(name)
    if law is None:
        return None
    facts = [f"formula    {law.formula}", f"condition  {law.condition}", f"source     {law.source}"]
    return _page(name, "a law", facts, "Examples", list(law.examples))


def _rule_page(name: str, rule: LintRule, width: int) -> str:
    body = [*_paragraphs(rule.why, width), "", "Said of:", ""]
    body += [f"    {line}" for text in rule.bad for line in text.splitlines()]
    body += ["", "Not said of:", ""]
    body += [f"    {line}" for text in rule.good for line in text.splitlines()]
    return _page(name, rule.title, body, "", [])


def listing(width: int) -> str:
    """All names with their titles: the laws first, then the diagnostics."""
    laws, codes, rules = sorted(_laws()), sorted(CODES), sorted(_rules())
    room = max(map(len, [*laws, *codes, *rules])) + 2
    lines = ["Laws", *(f"  {name:{room}}{_laws()[name].condition}" for name in laws)]
    lines += ["", "Diagnostics", *(f"  {name:{room}}{CODES[name].title}" for name in codes)]
    lines += ["", "Findings in drafts", *(f"  {name:{room}}{_rules()[name].title}" for name in rules)]
    lines += ["", "`opslang explain NAME` says more about one of them."]
    return "\n".join(line if len(line) <= width else line[: width - 3] + "..." for line in lines)


def _paragraphs(text: str, width: int) -> list[str]:
    from textwrap import wrap

    return [line for paragraph in text.split("\n") for line in (wrap(paragraph, width) or [""])]


def _page(name: str, title: str, body: list[str], heading: str, examples: list[str]) -> str:
    lines = [f"{name}: {title}", "", *body]
    if examples:
        lines += ["", f"{heading}:", "", *(f"    {line}" for line in examples)]
    return "\n".join(lines)
