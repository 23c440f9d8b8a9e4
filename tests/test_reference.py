"""The tables of the language reference: statements are read, equal spellings are equal, errors are those named."""

from __future__ import annotations

import re
from pathlib import Path

import pytest

from opslang import Script
from opslang.ground.source import Source
from opslang.report.codes_syntax import SYNTAX_CODES
from opslang.syntax.parser import parse
from opslang.syntax.spellings import KEYWORDS, LATER

PAGE = (Path(__file__).resolve().parent.parent / "grammar" / "reference.md").read_text(encoding="utf-8")
ROW = re.compile(r"^\|(.*)\|$", re.MULTILINE)
CODE = re.compile(r"`([^`]+)`")


def rows(heading: str) -> list[list[list[str]]]:
    """The tables under a heading: for each row the pieces of code in each cell."""
    section = PAGE.split(f"\n## {heading}\n")[1].split("\n## ")[0]
    cells = [re.split(r"(?<!`)\|(?!`)| \| ", row) for row in ROW.findall(section)]
    return [[CODE.findall(cell) for cell in row] for row in cells if "---" not in row[0] and CODE.search(row[0])]


STATEMENTS = [text for row in rows("Statements") for text in row[0]]
EXPRESSIONS = [text for row in rows("Expressions") for text in row[0] if "…" not in text]
GROUPS = [f"on K({text}, 3)" for row in rows("Groups and spaces") for text in row[0]]
SPELLINGS = [[text for cell in row for text in cell] for row in rows("Unicode and TeX")]
ERRORS = [(row[0][0], row[1][0], row[2][0] if row[2] else None) for row in rows("Errors of reading")]


def test_the_tables_are_found() -> None:
    assert [len(found) > 5 for found in (STATEMENTS, EXPRESSIONS, GROUPS, SPELLINGS, ERRORS)] == [True] * 5


@pytest.mark.parametrize("text", STATEMENTS + EXPRESSIONS + GROUPS)
def test_what_is_written_is_read(text: str) -> None:
    statement, diagnostics = parse(Source("reference.md", text))
    assert statement is not None and not diagnostics, (text, diagnostics)


NAMED = [(text, row[1]) for row in rows("Named spaces") for text in row[0]]


@pytest.mark.parametrize(("text", "names"), NAMED, ids=[text for text, _ in NAMED])
def test_named_spaces_have_the_classes_that_the_table_says(text: str, names: list[str]) -> None:
    script = Script(2, text)
    assert names and len(NAMED) > 20
    for name in names:
        if name != "c_1" or "SU" not in text:
            assert script.normalise(name), (text, name)


@pytest.mark.parametrize("spellings", SPELLINGS, ids=lambda spellings: spellings[0])
def test_spellings_in_one_row_are_equal(spellings: list[str]) -> None:
    first, *others = [parse(Source("reference.md", text))[0] for text in spellings]
    assert others and first is not None and all(tree == first for tree in others)


@pytest.mark.parametrize(("text", "name", "mend"), ERRORS, ids=[text for text, *_ in ERRORS])
def test_errors_are_those_named(text: str, name: str, mend: str | None) -> None:
    found = parse(Source("reference.md", text))[1][0]
    assert (found.name, found.mend or None) == (name, None if name == "unopened-bracket" else mend)


def test_every_keyword_and_every_name_is_told() -> None:
    for word in (*KEYWORDS, *LATER, *SYNTAX_CODES):
        assert f"`{word}" in PAGE or word in ("for", "sum"), word
