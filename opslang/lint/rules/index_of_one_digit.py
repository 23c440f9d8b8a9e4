"""Sq^12 in TeX is Sq^1 followed by 2."""

from __future__ import annotations

from collections.abc import Iterator

from opslang.lint.model import Finding, Known, Origin, Statement, Verdict
from opslang.lint.reading.document import Token
from opslang.lint.rule import LintRule


def check(statement: Statement, known: Known) -> Verdict | None:
    """Indices of several digits without braces."""
    if statement.formula is None:
        return None
    found = []
    for first, last in _runs(statement.formula.tokens):
        if statement.at.start <= first.start < statement.at.end and first.file == statement.at.file:
            found.append(_finding(first, last, _digits(statement.formula.tokens, first, last)))
    return Verdict("finding", tuple(found)) if found else None


def _digits(tokens: tuple[Token, ...], first: Token, last: Token) -> str:
    """The digits as typed one after another; empty where braces or a macro stand between."""
    run = tokens[tokens.index(first) : tokens.index(last) + 1]
    typed = all(token.kind == "digit" and token.within is None for token in run)
    return "".join(token.text for token in run) if typed and last.end - first.start == len(run) else ""


def _finding(first: Token, last: Token, digits: str) -> Finding:
    at = Origin(first.file, first.start, last.end)
    length = last.end - first.start
    message = (
        f"TeX takes one digit as the index, and the other {'is a factor' if length == 2 else 'digits are a factor'}"
    )
    return Finding(
        "index-of-one-digit",
        "warning",
        message + "\nput the whole index in braces",
        at,
        mend=f"{{{digits}}}" if digits else None,
        certain=bool(digits),
    )


def _runs(tokens: tuple[Token, ...]) -> Iterator[tuple[Token, Token]]:
    """First and last digit of each index that goes on without braces."""
    for at, token in enumerate(tokens):
        if token.kind not in ("sup", "sub") or not at or not _head(tokens, at - 1, token.kind):
            continue
        inside = at + 1
        braced = inside < len(tokens) and tokens[inside].kind == "open"
        inside += braced
        if inside >= len(tokens) or tokens[inside].kind != "digit":
            continue
        after = inside + 1
        if braced:
            if after >= len(tokens) or tokens[after].kind != "close":
                continue
            after += 1
        last = tokens[inside]
        while after < len(tokens) and tokens[after].kind == "digit" and tokens[after].start == last.end:
            last = tokens[after]
            after += 1
        if last is not tokens[inside]:
            yield tokens[inside], last


def _head(tokens: tuple[Token, ...], at: int, kind: str) -> bool:
    token = tokens[at]
    if kind == "sub":
        return token.text == "\\iota"
    upright = token.kind == "word" and token.text in ("Sq", "SQ")
    return upright or (token.text == "q" and at > 0 and tokens[at - 1].text == "S")


RULE = LintRule(
    name="index-of-one-digit",
    title="an index of two digits without braces",
    why="TeX takes one digit only: Sq^12 is printed, and means, Sq^1 times 2.",
    bad=(r"$\mathrm{Sq}^12 x$",),
    good=(r"$\mathrm{Sq}^{12} x$", r"$\mathrm{Sq}^1 2x$"),
    check=check,
    severity="warning",
    rank=1,
    source="common practice",
)
