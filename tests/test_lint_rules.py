"""Every rule speaks of its bad lines and is silent on its good ones; the folder is the register."""

from __future__ import annotations

from pathlib import Path

import pytest
from command import ROOT

from opslang.lint.rule import LintRule, register, rule_named
from opslang.lint.run import lint_text

RULES = register()
FOLDER = ROOT / "opslang" / "lint" / "rules"


def names_found(text: str) -> list[str]:
    report = lint_text(text, "draft.tex")
    assert report.failure is None, report.failure
    return [row.name for row in report.findings]


@pytest.mark.parametrize("rule", RULES, ids=lambda rule: rule.name)
def test_a_rule_says_what_it_is_for(rule: LintRule) -> None:
    assert rule.title and rule.why and rule.bad and rule.good and rule.source
    assert rule.name == rule.name.lower() and " " not in rule.name
    assert rule_named(rule.name) is rule


@pytest.mark.parametrize(("rule", "line"), [(r, b) for r in RULES for b in r.bad], ids=lambda v: getattr(v, "name", ""))
def test_bad_lines_are_found(rule: LintRule, line: str) -> None:
    assert {rule.name, *rule.also} & set(names_found(line))


@pytest.mark.parametrize(
    ("rule", "line"), [(r, g) for r in RULES for g in r.good], ids=lambda v: getattr(v, "name", "")
)
def test_nothing_is_said_of_good_lines(rule: LintRule, line: str) -> None:
    assert names_found(line) == []


def test_the_folder_is_the_register() -> None:
    files = {path.stem.replace("_", "-") for path in FOLDER.glob("*.py") if not path.stem.startswith("_")}
    assert len({rule.name for rule in RULES}) == len(RULES) == len(files)
    for path in Path(FOLDER).glob("[!_]*.py"):
        assert "RULE = LintRule(" in path.read_text(encoding="utf-8"), path
