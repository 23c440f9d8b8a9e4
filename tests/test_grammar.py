"""The grammar builds without a conflict, names the surface nodes, is found, and its tables are kept."""

from __future__ import annotations

import inspect
import re
from pathlib import Path

import attrs
import pytest

from opslang.syntax import loader, surface
from opslang.syntax.build import Builder

ROOT = Path(__file__).resolve().parent.parent


def _rules() -> set[str]:
    return {
        str(name)
        for rule in loader.parser().rules
        for name in (rule.origin.name, rule.alias)
        if name and not name.startswith("_")
    }


def _snake(name: str) -> str:
    return re.sub(r"(?<=[a-z])(?=[A-Z])", "_", name).lower()


def test_the_grammar_has_no_conflict() -> None:
    assert loader.build(loader.grammar_text(), strict=True).parse_interactive().accepts()


def test_every_surface_node_is_named_in_the_grammar() -> None:
    # Index expressions have one node for several rules; the other nodes are rules or aliases of their own name.
    nodes = {
        _snake(name)
        for name, value in vars(surface).items()
        if inspect.isclass(value) and attrs.has(value) and value.__module__ == surface.__name__
    }
    assert nodes - _rules() == {"index_expression"}


def test_every_rule_is_built() -> None:
    visible = {name for name in _rules() if not name.startswith("__")}
    # Rules with one child and a question mark vanish from the tree.
    vanishing = {"statement", "script", "space", "index_factor"}
    assert {name for name in visible if not hasattr(Builder, name)} <= vanishing


def test_every_terminal_is_told_in_a_comment() -> None:
    for line in loader.grammar_text().splitlines():
        if line.startswith("%declare") and len(line.split()) == 2:
            assert "//" in line, line


def test_the_checkout_has_the_grammar_beside_the_package() -> None:
    assert loader.grammar_text() == (ROOT / "grammar" / "opslang.lark").read_text(encoding="utf-8")


@pytest.fixture
def fresh(monkeypatch: pytest.MonkeyPatch, tmp_path: Path):  # type: ignore[no-untyped-def]
    """No parser in memory, and a cache folder of one's own."""
    loader.parser.cache_clear()
    monkeypatch.setenv("XDG_CACHE_HOME", str(tmp_path))
    yield tmp_path
    loader.parser.cache_clear()


def test_tables_are_kept_and_read_again(fresh: Path) -> None:
    loader.parser()
    (kept,) = (fresh / "opslang").iterdir()
    before = kept.stat().st_mtime_ns
    loader.parser.cache_clear()
    assert loader.parser().parse_interactive().accepts()
    assert kept.stat().st_mtime_ns == before


def test_a_damaged_cache_is_built_afresh(fresh: Path) -> None:
    loader.parser()
    (kept,) = (fresh / "opslang").iterdir()
    kept.write_bytes(b"\x80\x04 nothing of use")
    loader.parser.cache_clear()
    assert loader.parser().parse_interactive().accepts()


def test_a_cache_that_cannot_be_written_is_no_error(fresh: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    (fresh / "opslang").write_text("a file where the folder should be")
    assert loader.parser().parse_interactive().accepts()


def test_another_grammar_gets_another_place(fresh: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    loader.parser()
    text = loader.grammar_text()
    monkeypatch.setattr(loader, "grammar_text", lambda: text + "\n// changed\n")
    loader.parser.cache_clear()
    loader.parser()
    assert len(list((fresh / "opslang").iterdir())) == 2
