"""Every diagnostic name is explained by an example that shows it, and every name in use is in the table."""

from __future__ import annotations

import ast
import json
import re
import subprocess
from pathlib import Path

import pytest
from command import COMMAND, ROOT, environment, opslang

from opslang.report.codes import CODES

SEVERITIES = ("error", "warning", "note")
NAME = re.compile(r"[a-z]+(-[a-z0-9]+)*\Z")

#: Names that no input shows by rights; each has a test of its own.
SHOWN_ELSEWHERE = {
    "worker-lost": "test_robustness.py",
    "unwritable-file": "test_lint_front.py",
    "no-such-result": "test_codes.py",
    "internal-fault": "test_codes.py",
    "engines-disagree": "test_codes.py",
}


SOURCES = [path for path in (ROOT / "opslang").rglob("*.py") if not path.name.startswith("codes")]


def words_in_use() -> set[str]:
    """Every string constant of the source, the tables of names left out."""
    trees = [ast.parse(path.read_text()) for path in SOURCES]
    constants = [node.value for tree in trees for node in ast.walk(tree) if isinstance(node, ast.Constant)]
    return {value for value in constants if isinstance(value, str)}


def names_in_use() -> set[str]:
    """Every name that some file gives to a diagnostic or to a fault of a file."""
    found = set()
    for path in SOURCES:
        for node in ast.walk(ast.parse(path.read_text())):
            if isinstance(node, ast.Call) and node.args:
                called = node.func.attr if isinstance(node.func, ast.Attribute) else getattr(node.func, "id", "")
                first = node.args[1:2] if called in ("Diagnostic", "_failed") else node.args[:1]
                if called in (*SEVERITIES, "Diagnostic", "Fault", "_failed", "render_file") and first:
                    named = first[0]
                    if isinstance(named, ast.Constant) and isinstance(named.value, str) and NAME.match(named.value):
                        found.add(named.value)
    return found


def test_every_name_in_use_is_in_the_table_and_the_reverse() -> None:
    assert names_in_use() - CODES.keys() == set(), "names without an explanation"
    assert CODES.keys() - words_in_use() == set(), "names that nothing gives"


@pytest.mark.parametrize("name", sorted(CODES))
def test_each_is_explained(name: str) -> None:
    code = CODES[name]
    assert NAME.match(name) and code.title and len(code.explanation) > 25
    assert not code.title.endswith(".") and code.explanation.rstrip().endswith((".", ")", ":"))
    assert bool(code.example) != (name in SHOWN_ELSEWHERE)
    if not code.example:
        assert f"{name}" in (ROOT / "tests" / SHOWN_ELSEWHERE[name]).read_text(), "shown by no test"


@pytest.mark.parametrize("name", sorted(name for name in CODES if CODES[name].example.startswith("$ ")))
def test_each_example_on_a_command_line_shows_its_name(name: str, tmp_path: Path) -> None:
    line = re.sub(r"\bopslang\b", " ".join(COMMAND), CODES[name].example[2:])
    done = subprocess.run(
        ["bash", "-c", line], cwd=tmp_path, env=environment(), capture_output=True, text=True, timeout=60, check=False
    )
    assert f"error: {name}: " in done.stderr


SCRIPTS = sorted(name for name in CODES if CODES[name].example and not CODES[name].example.startswith("$ "))


def test_each_example_script_shows_its_name(tmp_path: Path) -> None:
    for name in SCRIPTS:
        (tmp_path / name).write_text(CODES[name].example + "\n")
    ran = opslang("run", "--output", "jsonl", *SCRIPTS, cwd=tmp_path)
    shown: dict[str, set[str]] = {name: set() for name in SCRIPTS}
    for record in map(json.loads, ran.out.splitlines()):
        shown[record["file"]] |= {record["name"], *(warning["name"] for warning in record["warnings"])}
    assert [name for name in SCRIPTS if name not in shown[name]] == []


def test_a_result_that_the_shell_does_not_have() -> None:
    from opslang.front.logbook import Logbook
    from opslang.report.diagnostic import Refusal

    with pytest.raises(Refusal) as refusal:
        Logbook().result(7)
    assert refusal.value.diagnostic.name == "no-such-result"


def test_engines_that_disagree_are_reported_and_none_is_chosen() -> None:
    from attrs import evolve

    from opslang.ground.source import Source
    from opslang.ir.tree import Element
    from opslang.meaning.value import Value
    from opslang.pipeline import Session

    class Forgetful(Session):
        def normal(self, value: Value) -> Element:
            return evolve(super().normal(value), terms=())

    line = Source("a.ops", "Sq^2 Sq^2")
    assert Session(both=True).run(line).verdict == "ok"
    outcome = Forgetful(both=True).run(line)
    assert (outcome.verdict, outcome.name, outcome.element) == ("error", "engines-disagree", None)
    assert "Sq^3 Sq^1" in str(outcome.message)


def test_a_fault_of_the_program_is_reported_and_the_run_goes_on() -> None:
    from opslang.front.statement import Desk, Settings
    from opslang.ground.source import Source
    from opslang.pipeline import Session

    class Broken(Session):
        def run(self, source: Source) -> object:  # type: ignore[override]
            raise ZeroDivisionError("planted")

    desk = Desk(Settings())
    desk._session = Broken()
    answer = desk.answer(Source("a.ops", "Sq^1"))
    (piece,) = answer.pieces
    assert piece[0] == "diagnostic" and "internal-fault: " in piece[1] and "planted" in piece[1] and answer.status == 2
