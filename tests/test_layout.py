"""A script is cut into statements line by line; what goes on over a line's end, and what ends it all the same."""

from __future__ import annotations

import tracemalloc
from collections.abc import Iterator

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from opslang.syntax.layout import KEPT, chunks, is_complete


def pieces(script: str) -> list[tuple[int, str]]:
    return [(chunk.first_line, chunk.text) for chunk in chunks(script.splitlines(keepends=True), "a.ops")]


@pytest.mark.parametrize(
    ("script", "expected"),
    [
        ("x\ny\n", [(1, "x"), (2, "y")]),
        ("\n  \n# words\nx # more\n\ny", [(4, "x # more"), (6, "y")]),
        ("Sq^2(x +\n  y)\nz", [(1, "Sq^2(x +\n  y)"), (3, "z")]),
        ("Sq^{4,\n2}\nz", [(1, "Sq^{4,\n2}"), (3, "z")]),
        ("x = # why\n  y\nz", [(1, "x = # why\n  y"), (3, "z")]),
        ("x +\n# between\ny\nz", [(1, "x +\n# between\ny"), (4, "z")]),
        ("x \\\ny\nz", [(1, "x \\\ny"), (3, "z")]),
        ("x ⊗\ny ∪\nz", [(1, "x ⊗\ny ∪\nz")]),
        ("\\alpha \\cup % words\n\\beta x", [(1, "\\alpha \\cup % words\n\\beta x")]),
        ("\\alpha \\\\\n\\beta x", [(1, "\\alpha \\\\"), (2, "\\beta x")]),
        ("\\[\nx\n\\]\ny", [(1, "\\[\nx\n\\]"), (4, "y")]),
        ("x\r\ny +\r\nz\r\n", [(1, "x"), (2, "y +\nz")]),
        ("# (\nx", [(2, "x")]),
        ("f^*\nx", [(1, "f^*"), (2, "x")]),
        ("x cup\ny", [(1, "x cup\ny")]),
    ],
)
def test_what_is_one_statement(script: str, expected: list[tuple[int, str]]) -> None:
    assert pieces(script) == expected


@pytest.mark.parametrize("ending", ["", "  ", "let y in H^2", "on X", "kernel Sq^2", "  prime 3"])
def test_a_blank_line_or_a_keyword_ends_it_all_the_same(ending: str) -> None:
    for opening in ("Sq^2(x", "x +", "x \\"):
        found = pieces(f"{opening}\n{ending}\nz")
        assert found[0] == (1, opening)
        assert found[-1] == (3, "z")


def test_places_are_those_of_the_file() -> None:
    (chunk,) = chunks(["\n", "# words\n", "Sq^2(x\n", "  + é)\n"], "a.ops")
    at = chunk.text.index("é")
    assert chunk.position(at) == (4, 5)


@pytest.mark.parametrize(
    ("text", "complete"),
    [
        ("x", True),
        ("", True),
        ("x +", False),
        ("Sq^2(x", False),
        ("Sq^2(x\n", True),
        ("Sq^2(x\n+ y)", True),
        ("x = # words", False),
        ("x \\", False),
        ("x \\\\", True),
        ("\\alpha \\cup", False),
        ("\\alpha \\cup %", False),
        ("f^*", True),
        ("let x in H^2", True),
        ("x)", True),
    ],
)
def test_whether_the_shell_waits_for_more(text: str, complete: bool) -> None:
    assert is_complete(text) is complete


_lines = st.lists(
    st.sampled_from(
        ["x", "Sq^2(x", "y)", "", "# c", "x +", "let x in H^2", "\\alpha", "x \\", "{", "}", "[", "é\udc80", "x\r"]
    )
    | st.text(max_size=8).map(lambda text: text.replace("\n", " ")),
    max_size=12,
)


@settings(max_examples=150, deadline=None)
@given(_lines)
def test_no_line_is_lost_or_moved(lines: list[str]) -> None:
    seen = 0
    for chunk in chunks(lines, "a.ops"):
        own = chunk.text.split("\n")
        assert chunk.first_line > seen
        for between in lines[seen : chunk.first_line - 1]:
            assert not between.split("#")[0].split("%")[0].strip()
        for written, line in zip(own, lines[chunk.first_line - 1 :]):
            assert written == line.rstrip("\r")
        seen = chunk.first_line + len(own) - 1
    for rest in lines[seen:]:
        assert not rest.split("#")[0].split("%")[0].strip()


def test_memory_is_flat() -> None:
    def lines() -> Iterator[str]:
        for _ in range(30_000):
            yield "Sq^2 iota_3 + Sq^1 iota_4\n"

    tracemalloc.start()
    try:
        assert sum(1 for _ in chunks(lines(), "a.ops")) == 30_000
        assert tracemalloc.get_traced_memory()[1] < 200_000
    finally:
        tracemalloc.stop()


def test_a_statement_without_end_is_not_kept_whole() -> None:
    (chunk,) = chunks(("x (" + " " * 100_000 for _ in range(300)), "a.ops")
    assert KEPT < len(chunk.text) < KEPT + 200_000
