"""Plain lines: wherever the fast reader answers, the grammar gives the same tree with the same places."""

from __future__ import annotations

import subprocess
import sys

import attrs
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from opslang.syntax import plain
from opslang.syntax.parser import by_grammar


def with_places(node: object) -> object:
    """A tree as tuples, spans included."""
    if isinstance(node, tuple):
        return tuple(with_places(part) for part in node)
    if attrs.has(type(node)):
        fields = attrs.fields(type(node))
        return (type(node).__name__, *(with_places(getattr(node, field.name)) for field in fields))
    return node


def agree(text: str) -> bool:
    """Whether the fast reader answers; if so its answer is the grammar's."""
    quick = plain.read(text)
    if quick is None:
        return False
    slow, diagnostics = by_grammar(text)
    assert not diagnostics, (text, diagnostics)
    assert with_places(quick) == with_places(slow), text
    return True


LINES = [
    "Sq^{57} Sq^{58} Sq^4 iota_2 + Sq^3 v * Sq^1 w + x * Sq^3 Sq^14 iota_6 = Sq^8 Sq^{1} iota_7 + w_2 * Sq^{10} y_0^6",
    "Sq^2 Sq^2 = Sq^3 Sq^1 = 0",
    "- 2 x + Sq^{4,2}(x_3'^2 - alpha)^2  # a comment",
    "P^1 beta P^1 = beta P^2 + P^2 beta",
    "chi(Sq^4) = Sq^4 + Sq^3 Sq^1",
    "Q_1^2 x",
    "beta_2 iota_3",
    "Sq(x) P(y)",
    "Sq⁴ ι₃ ⊗ β₂ x²",
    "χ(Sq²)³ ∘ Sq^1",
    "why Sq^2 Sq^2 Sq^2",
    "  why x = y",
    "prime 3",
    "on X",
    "on K(Z/2, 3)",
    "on K(Z/4,3) x K(Z, 5)",
    "on K(F_3, 2)×K(Z_9, 4)",
    "space X = K(Z/4, 3) x K(Z, 5)",
    "space BO = X",
    "basis H^9(K(Z/2, 3))",
    "basis H^{9}",
    "series K(Z/4, 3) to 20",
    "series to 20",
    "let x in H^2",
    "let x, y_3, B' in H^2(X; F_2)",
    "let alpha in H^3(X; Z)",
    "let z in H^{3}(X, Z/4)",
    "let u = Sq^2 x + x^2",
    "let u_2' = x",
    "x\n + y",
]


@pytest.mark.parametrize("line", LINES)
def test_plain_lines_are_read_at_once(line: str) -> None:
    assert agree(line)


@pytest.mark.parametrize(
    "line",
    [
        "Sq 4",
        "Sq4",
        "iota3",
        "x2",
        "xy",
        "Sqx",
        "Sq^2^2",
        "x +",
        "x = ",
        "== x",
        "(x",
        "x)",
        "x * * y",
        "+ - x",
        "Sq^n",
        "Sq^{2n-1}",
        r"\alpha",
        "$x$",
        "let Sq in H^2",
        "let x",
        "on",
        "kernel Sq^2",
        "x,",
        "P 3",
        "β2",
        "chi Sq^4",
        "f^* x",
        "x'_3",
        "x_3_4",
        "x^2'",
        "",
        "# nothing",
        "prime",
        "x . y",
        "let x in H^2 y",
        "on Sq",
        "x\0",
        "é",
        "let u = x = y",
    ],
)
def test_other_lines_are_left_to_the_grammar(line: str) -> None:
    assert plain.read(line) is None


_fragments = st.sampled_from(
    [
        *(
            "Sq^2",
            "Sq^{4}",
            "Sq^{4,2}",
            "Sq",
            "P",
            "P^1",
            "beta",
            "beta_2",
            "β",
            "β₂",
            "chi(",
            "χ(",
            "Q_1",
            "Q_{2}",
            "Q",
        ),
        *("iota_3", "ι₃", "iota_{10}", "iota", "x", "y_3", "alpha", "B'", "x'", "_3", "^2", "²", "'", "n", "f^*", "|"),
        *("(", ")", "[", "]", "{", "}", "+", "-", "−", "*", "·", "⊗", "∪", "×", "=", ",", ";", "/", ".", "^", "_"),
        *(
            "2",
            "12",
            "0",
            "⁴²",
            "₁₂",
            " ",
            "  ",
            "\t",
            "\n",
            "#",
            "let ",
            "prime ",
            "on ",
            "space ",
            "basis ",
            "series ",
        ),
        *("to ", "why ", "in ", "H", "H^2", "K(", "Z", "Z/4", "F_2", "X", "BO", "x ", "K(Z/2, 3)", "let x in H^2"),
        *("–", "≡", "≠", "∞", "(mod 2)", "mod", "Z_(2)", "Z_2", "{4 2}", "4,2", "RP^oo", "quit", "ˆ", "２"),
        *("(X; Z/4)", "binom(4,2)", "2n", "$", "\\", "\\alpha", "%", "é", "\x00", "\udc80", "cup", "cross", "for"),
    ]
)


@settings(max_examples=300, deadline=None)
@given(st.lists(_fragments, max_size=9).map("".join) | st.lists(_fragments, max_size=9).map(" ".join))
def test_the_two_readers_never_differ(text: str) -> None:
    agree(text)


@settings(max_examples=200, deadline=None)
@given(st.sampled_from(LINES), st.integers(0, 200), st.integers(0, 3), _fragments)
def test_nor_on_lines_with_a_slip(line: str, at: int, length: int, other: str) -> None:
    at %= len(line) + 1
    agree(line[:at] + other + line[at + length :])


def test_a_plain_line_does_not_load_lark() -> None:
    program = (
        "import sys\n"
        "from opslang.ground.source import Source\n"
        "from opslang.syntax.parser import parse\n"
        "assert parse(Source('a', 'let u = Sq^2 Sq^{4} iota_3'))[0] is not None\n"
        "assert 'lark' not in sys.modules\n"
    )
    subprocess.run([sys.executable, "-c", program], check=True)
