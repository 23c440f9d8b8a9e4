"""The house: floors, sizes of files and functions, and what a plain line must not load."""

from __future__ import annotations

import ast
import subprocess
import sys
import tomllib
from pathlib import Path

import pytest
from command import ROOT, environment

SOURCES = sorted((ROOT / "opslang").rglob("*.py"))
HEAVY = (
    "sympy",
    "numpy",
    "prompt_toolkit",
    "pygments",
    "rich",
    "lark",
    "asyncio",
    "importlib.metadata",
    "pygls",
    "lsprotocol",
)


def test_the_floors_of_the_house() -> None:
    run = "from importlinter.cli import lint_imports; raise SystemExit(lint_imports(no_cache=True))"
    done = subprocess.run(
        [sys.executable, "-c", run],
        cwd=ROOT,
        env=environment(),
        capture_output=True,
        text=True,
        timeout=120,
        check=False,
    )
    assert done.returncode == 0, done.stdout + done.stderr


def test_every_room_stands_on_a_floor() -> None:
    contracts = tomllib.loads((ROOT / "pyproject.toml").read_text())["tool"]["importlinter"]["contracts"]
    layers = {name.strip(" ()") for layer in contracts[0]["layers"] for name in layer.split("|")}
    rooms = {f"opslang.{path.parent.name}" for path in (ROOT / "opslang").glob("*/__init__.py")}
    assert rooms <= layers


@pytest.mark.parametrize("path", SOURCES, ids=lambda path: str(path.relative_to(ROOT)))
def test_files_open_with_a_word_and_stay_small(path: Path) -> None:
    text = path.read_text()
    tree = ast.parse(text)
    assert ast.get_docstring(tree), "a module opens with what the room is for"
    assert len(text.splitlines()) <= 450
    for node in ast.walk(tree):
        if isinstance(node, ast.FunctionDef):
            assert (node.end_lineno or 0) - node.lineno < 60, f"{node.name} is too long"


LOADED = """
import sys
from opslang.front.cli import main
status = main(sys.argv[1:])
print(status, *sorted(sys.modules), file=sys.stderr)
"""


@pytest.mark.parametrize(
    "arguments",
    [
        ["eval", "Sq^2 Sq^2 iota_3"],
        ["eval", "--prime", "3", "P^1 beta P^1"],
        ["eval", "let x in H^2", "Sq^2 x = x^2", "basis H^5(K(Z/2, 2))", "series K(Z, 3) to 8"],
        ["run", "-"],
    ],
)
def test_a_plain_line_loads_nothing_heavy(arguments: list[str]) -> None:
    done = subprocess.run(
        [sys.executable, "-c", LOADED, *arguments],
        input="Sq^2 Sq^2 = Sq^3 Sq^1\n",
        env=environment(),
        capture_output=True,
        text=True,
        timeout=60,
        check=True,
    )
    status, *modules = done.stderr.split()
    assert status == "0"
    assert sorted(set(HEAVY) & set(modules)) == []


def test_help_and_version_load_no_mathematics() -> None:
    done = subprocess.run(
        [sys.executable, "-c", LOADED, "--version"],
        env=environment(),
        capture_output=True,
        text=True,
        timeout=60,
        check=True,
    )
    assert not [
        name for name in done.stderr.split() if name.startswith(("opslang.tables", "opslang.pipeline", "opslang.laws"))
    ]
