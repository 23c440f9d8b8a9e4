"""The package as others get it: the wheel, an editable install and a bare checkout all work and hold the grammar."""

from __future__ import annotations

import os
import subprocess
import sys
import tomllib
import zipfile
from pathlib import Path

import pytest
from command import ROOT, environment

import opslang

GRAMMAR = (ROOT / "grammar" / "opslang.lark").read_text()

PROBE = """
import site, sys
site.addsitedir(sys.argv[1])
from opslang.syntax.loader import grammar_text
import opslang
from opslang.front.cli import main
print(opslang.__file__, file=sys.stderr)
print(grammar_text(), end="", file=sys.stderr)
raise SystemExit(main(["eval", "Sq^2 Sq^2 iota_3"]))
"""


@pytest.fixture(scope="module")
def built(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """A folder with the wheel, unpacked, and one with the wheel of an editable install."""
    folder = tmp_path_factory.mktemp("built")
    build = (
        "import sys; from hatchling.build import build_editable, build_wheel;"
        "build_wheel(sys.argv[1]); build_editable(sys.argv[2])"
    )
    (folder / "wheels").mkdir()
    (folder / "editables").mkdir()
    arguments = [sys.executable, "-c", build, str(folder / "wheels"), str(folder / "editables")]
    subprocess.run(arguments, cwd=ROOT, env=environment(), capture_output=True, timeout=120, check=True)
    for kind in ("wheel", "editable"):
        (archive,) = (folder / f"{kind}s").glob("*.whl")
        with zipfile.ZipFile(archive) as packed:
            packed.extractall(folder / kind)
    return folder


def probe(folder: Path) -> tuple[Path, str, str]:
    """Where the package lies that a folder of site packages gives, the grammar it finds, and what it answers."""
    env = {name: value for name, value in environment().items() if name != "PYTHONPATH"}
    # Of the environment under test only the libraries count: its own opslang, if any, is hidden.
    probe = f"import sys\nsys.path[:] = [p for p in sys.path if p not in ('', {str(ROOT)!r})]\n" + PROBE.replace(
        "site.addsitedir(sys.argv[1])",
        "before = len(sys.path); site.addsitedir(sys.argv[1]); sys.path[:0] = sys.path[before:]",
    )
    done = subprocess.run(
        [sys.executable, "-c", probe, str(folder)],
        cwd=folder.parent,
        env=env,
        capture_output=True,
        text=True,
        timeout=60,
        check=True,
    )
    where, _, grammar = done.stderr.partition("\n")
    return Path(where), grammar, done.stdout


def test_the_wheel_holds_the_grammar(built: Path) -> None:
    where, grammar, answer = probe(built / "wheel")
    assert where.is_relative_to(built) and grammar == GRAMMAR and answer.startswith("Sq^3 Sq^1 iota_3")


def test_an_editable_install_finds_the_grammar(built: Path) -> None:
    where, grammar, answer = probe(built / "editable")
    assert where.is_relative_to(ROOT) and grammar == GRAMMAR and answer.startswith("Sq^3 Sq^1 iota_3")


def test_a_bare_checkout_finds_the_grammar() -> None:
    where, grammar, answer = probe(ROOT)
    assert where.is_relative_to(ROOT) and grammar == GRAMMAR and answer.startswith("Sq^3 Sq^1 iota_3")


def test_what_the_wheel_holds(built: Path) -> None:
    wheel = built / "wheel"
    names = {path.relative_to(wheel).as_posix() for path in wheel.rglob("*") if path.is_file()}
    assert {"opslang/py.typed", "opslang/grammar/opslang.lark", "opslang/__main__.py"} <= names
    assert not [name for name in names if name.startswith(("tests", "examples")) or name.endswith(".pyc")]
    (about,) = wheel.glob("*.dist-info")
    metadata = (about / "METADATA").read_text()
    assert f"Version: {opslang.__version__}" in metadata and "License-Expression: MIT" in metadata
    assert "opslang = opslang.__main__:main" in (about / "entry_points.txt").read_text()
    assert list(about.rglob("LICENSE"))


def test_the_top_level_is_what_was_agreed() -> None:
    project = tomllib.loads((ROOT / "pyproject.toml").read_text())["project"]
    assert project["requires-python"] == ">=3.11"
    visible = {name for name in os.listdir(ROOT) if not name.startswith((".", "__"))}
    allowed = {
        "pyproject.toml",
        "README.md",
        "DEVELOPERS.md",
        "LICENSE",
        "opslang",
        "grammar",
        "tests",
        "examples",
        "editors",
    }
    assert visible - allowed - {"build", "dist", "mutants"} == set()
