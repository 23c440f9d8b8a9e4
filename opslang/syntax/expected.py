"""Says what was expected where the grammar found something else, in words of the field.

Knows tokens and the sets of tokens that lark's tables would have taken; knows no rule by name.
"""

from __future__ import annotations

from collections.abc import Set

from opslang.ground.source import Span
from opslang.report.diagnostic import Diagnostic, error
from opslang.syntax.shapes import Token, shown
from opslang.syntax.spelling import Reading

USAGE: dict[str, str] = {
    "PRIME_WORD": "prime 3",
    "SPACE_WORD": "space X = K(Z/4, 3) x K(Z, 5), or space R = F_2[u:2, v:3] / (u^2, v^2) where Sq^1 u = v",
    "ON": "on K(Z/2, 3)",
    "LET": "let x, y in H^2, let z in H^3(X; Z/4) or let u = Sq^2 x",
    "WHY": "why Sq^2 Sq^2",
    "BASIS": "basis H^9(K(Z/2, 3))",
    "SERIES": "series K(Z/4, 3) to 20",
    "MAP": "map f : X -> Y with y -> x^2, map f : X -> Y standard, map d : X -> X x X diagonal, or map h = g f",
    "BUNDLE": "bundle E of rank 3 over X with w = 1 + a, or bundle D = E + F",
    "COMPARE": "compare RP^4, CP^2 to 8",
}
"""How each statement is written."""

_SINGLES = (
    ("IN", "`in`"),
    ("TO", "`to`"),
    ("WHERE", "`where`"),
    ("WITH", "`with`"),
    ("OVER", "`over`"),
    ("OF", "`of rank`"),
    ("RANK", "`rank`"),
    ("DIAGONAL", "`diagonal`"),
    ("PROJECTION", "`projection`"),
    ("STANDARD", "`standard`"),
    ("COLON", "a colon"),
    ("ARROW", "->"),
    ("EQUALS", "`=`"),
    ("LETTER_H", "H^n"),
    ("COMMA", "a comma"),
    ("SEMICOLON", "a semicolon"),
    ("RPAR", "a closing )"),
    ("RSQUARE", "a closing ]"),
    ("RBRACE", "a closing }"),
    ("CARET", "^"),
    ("UNDER", "_"),
    ("BAR", "a closing |"),
    ("$END", "the end of the statement"),
)
_OPERATORS = frozenset(("PLUS", "MINUS", "STAR", "CUP", "CROSS", "TIMES", "COMPOSE", "EQUALS"))


def unexpected(reading: Reading, at: int, accepted: Set[str]) -> Diagnostic:
    """The error at a token that fits nowhere (or at the end, where `at` is past the last one)."""
    tokens = reading.tokens
    keyword = USAGE.get(tokens[0].kind, "")
    help = f"it is written: {keyword}" if keyword else ""
    wanted = wanted_in_words(accepted, tokens[at - 1].kind if at else "")
    if at >= len(tokens):
        last = tokens[-1]
        message = f"expected {wanted} after {_shown(reading, last)}"
        return error("expected", message, _wide(reading, last), help)
    token = tokens[at]
    special = _special(reading, at, accepted)
    if special is not None:
        return special
    message = f"expected {wanted}, not {_shown(reading, token)}"
    return error("expected", message, _wide(reading, token), help or _HELP.get(token.kind, ""))


def wanted_in_words(accepted: Set[str], previous: str) -> str:
    """A set of tokens in words of the field."""
    wanted: list[str] = []
    seen = set(accepted)
    if "NAME" in seen:
        seen.discard("LETTER_H")
    if "BINOM" in seen:
        seen.discard("BAR")
    if {"SQ", "IOTA", "LSQUARE"} <= seen:
        behind = bool(seen & {"STAR", "CUP"})
        wanted.append("another factor or an operator" if behind else "an operation, a class or a number")
        seen -= {"CARET", "UNDER", "PULL", "PRIME"}
    elif "LBRACE" in seen and "NUMBER" in seen:
        wanted.append("an index: a number, a letter, or an expression in braces")
    elif "BINOM" in seen:
        wanted.append("another factor or an operator" if "STAR" in seen else "an integer expression")
        seen -= {"CARET", "UNDER", "PRIME"}
    elif "RUN" in seen:
        wanted.append("a space")
    elif "LETTER_Z" in seen:
        wanted.append("a letter" if "NAME" in seen else "a group such as Z/4")
    elif "NUMBER" in seen:
        wanted.append("a number")
    if len(seen) > 1:
        seen.discard("UNDER")
    wanted += [words for kind, words in _SINGLES if kind in seen]
    if not wanted:
        return "an opening (" if "LPAR" in seen else "something else"
    return wanted[0] if len(wanted) == 1 else ", ".join(wanted[:-1]) + " or " + wanted[-1]


_HELP = {
    "SLASH": "there is no division; Z/4 is a group, and stands in K(Z/4, 3)",
    "COMMA": "one expression or relation stands in a statement",
    "OPLUS": "⊕ joins groups; a sum is written with +",
    "BAR": "|x| stands in index positions only",
    "BINOM": "binom(a, b) stands in index positions only",
    "TIMES": "× stands between spaces or classes",
    "INFINITY": "∞ stands behind RP^, CP^ and HP^ only",
}


def _special(reading: Reading, at: int, accepted: Set[str]) -> Diagnostic | None:
    """The cases with a likely mend."""
    token = reading.tokens[at]
    span = _wide(reading, token)
    if token.kind == "NUMBER":
        for found in reading.warnings:
            if found.span[0] <= token.start < found.span[1]:
                return error("expected", found.message, found.span, found.help, found.mend)
    if token.kind == "LBRACE":
        end = _partner(reading.tokens, at)
        if end is not None:
            inner = reading.text[token.end : reading.tokens[end].start]
            message = "braces hold indices; terms are put together with ( )"
            return error("expected", message, (token.start, reading.tokens[end].end), f"write ({inner})", f"({inner})")
    if token.kind == "COMMA":
        return _bare_indices(reading, at)
    if token.kind == "LETTER_H" and "IN" in accepted:
        return error("expected", "expected `in` before H", span, "", "in " + reading.text[span[0] : span[1]])
    if token.kind == "UNDER" and at and reading.tokens[at - 1].kind == "LETTER_H":
        return error("expected", "the degree of a cohomology group stands above, behind ^", span, "", "^")
    if token.kind == "SLASH" and reading.tokens[0].kind == "LETTER_H":
        first = reading.tokens[0]
        message = "a cohomology group is no statement: `basis` lists a basis of it"
        return error("unknown-statement", message, (first.start, first.end), "write basis H^n(…)", "basis H")
    if token.kind == "EQUALS" and reading.tokens[0].kind == "PRIME_WORD":
        return error("expected", "the prime follows its word at once", span, "it is written: prime 3", "")
    return None


def _bare_indices(reading: Reading, at: int) -> Diagnostic | None:
    """`Sq^4,2,1`: several indices without their braces."""
    tokens = reading.tokens
    kinds = [token.kind for token in tokens[max(at - 3, 0) : at]]
    if kinds[1:] != ["CARET", "NUMBER"] or kinds[0] not in ("SQ", "PP"):
        return None
    end = at
    while [token.kind for token in tokens[end : end + 2]] == ["COMMA", "NUMBER"]:
        end += 2
    if end == at:
        return None
    indices = ",".join(token.value for token in tokens[at - 1 : end] if token.kind == "NUMBER")
    mend = f"{{{indices}}}"
    help = f"write {tokens[at - 3].value}^{mend}"
    return error("expected", "several indices stand in braces", (tokens[at - 1].start, tokens[end - 1].end), help, mend)


def _partner(tokens: list[Token], at: int) -> int | None:
    depth = 0
    for place in range(at, len(tokens)):
        depth += {"LBRACE": 1, "RBRACE": -1}.get(tokens[place].kind, 0)
        if depth == 0:
            return place
    return None


def _wide(reading: Reading, token: Token) -> Span:
    """The place of a token; one code point where it has no width."""
    if token.end > token.start:
        return token.start, token.end
    return (token.start, token.start + 1) if token.start < len(reading.text) else (max(token.start - 1, 0), token.start)


def _shown(reading: Reading, token: Token) -> str:
    start, end = _wide(reading, token)
    return shown(reading.text[start:end])
