"""A formula cut into segments: rows joined, columns parted, words and punctuation taken out.  Knows layout, no
grammar.
"""

from __future__ import annotations

from collections.abc import Sequence

from attrs import field, frozen

from opslang.lint.formula.signs import ARROWS, COLONS, DEFINES, EQUALS, GLUES, MAPS, MEMBER, ORDERS, OTHERS, PUNCTUATION
from opslang.lint.formula.stretch import OWN_ROWS, Stretch, pairs_of
from opslang.lint.reading.document import Formula, Token

RELATIONS = EQUALS | DEFINES | frozenset(ORDERS) | MEMBER | MAPS | ARROWS | COLONS | OTHERS
_OPEN_ENDED = RELATIONS | {"+", "-", "−"} | (frozenset(GLUES) - {"*", "/"})
_HEADS = frozenset(("Sq", "SQ"))
DIAGRAMS = frozenset(("tikzcd", "tikz-cd", "xymatrix", "array", "tabular"))


@frozen
class Segment:
    """A run of tokens with nothing that parts statements in it.

    `before` holds what stood between it and the segment before: "row", "gap", ",", ";", "." and the words of a text.
    """

    stretch: Stretch
    before: tuple[str, ...]
    row: int
    words: str = field(default="")
    after: str = field(default="")


def segments_of(formula: Formula) -> list[Segment]:
    """The segments of a formula in order."""
    if formula.name in DIAGRAMS:
        return []
    tokens = _laid_out(formula.tokens)
    pairs = pairs_of(tokens)
    tokens, pairs = _joined_rows(tokens, pairs)
    return _segments(tokens, pairs)


def _laid_out(tokens: Sequence[Token]) -> list[Token]:
    """Columns settled (dropped, or a gap), environments that are only layout dropped, equation numbers cut."""
    kept: list[Token] = []
    own = 0
    number = False
    for at, token in enumerate(tokens):
        kind = token.kind
        if kind == "row":
            number = False
        if token.text == "\\eqno" or token.text == "\\leqno":
            number = True
        if number or kind in ("note", "shift"):
            continue
        if kind == "text" and token.text.strip() in _HEADS:  # \\text{Sq}
            kept.append(token._replace(kind="word", text=token.text.strip()))
            continue
        if kind in ("begin", "end"):
            if token.text.rstrip("*") in OWN_ROWS:
                own += 1 if kind == "begin" else -1
                kept.append(token)
            continue
        if kind == "align" and not own:
            if _parts(tokens, at):
                kept.append(token._replace(kind="gap"))
            continue
        kept.append(token)
    return kept


def _parts(tokens: Sequence[Token], at: int) -> bool:
    """Whether an & parts two statements: it stands at no sign and at no end of a row."""
    before = at - 1
    while before >= 0 and tokens[before].kind == "gap":
        before -= 1
    after = at + 1
    while after < len(tokens) and tokens[after].kind == "gap":
        after += 1
    if before < 0 or after >= len(tokens):
        return False
    left, right = tokens[before], tokens[after]
    if left.kind in ("row", "align", "begin") or right.kind in ("row", "align", "end"):
        return False
    if left.text in _OPEN_ENDED and left.kind != "text":
        return left.text == ":" and right.text not in RELATIONS
    return not (right.kind in ("other", "command") and right.text in _OPEN_ENDED and right.text not in ("-", "−", ":"))


def _joined_rows(tokens: list[Token], pairs: dict[int, int]) -> tuple[list[Token], dict[int, int]]:
    """Rows that only go on (they begin or the row before ends with a sign of a sum or product) joined to the one
    before.
    """
    drop: set[int] = set()
    tops = []
    at = 0
    while at < len(tokens):
        if tokens[at].kind == "row":
            tops.append(at)
        at = pairs.get(at, at) + 1
    for number, at in enumerate(tops):
        end = tops[number + 1] if number + 1 < len(tops) else len(tokens)
        before, after = at - 1, at + 1
        while before >= 0 and tokens[before].kind == "gap":
            before -= 1
        while after < end and tokens[after].kind == "gap":
            after += 1
        if before < 0 or after >= end:
            continue
        last, first = tokens[before], tokens[after]
        goes_on = first.kind in ("other", "command") and (first.text == "+" or first.text in GLUES)
        if first.text in ("-", "−") and first.kind == "other":
            goes_on = not any(token.text in EQUALS for token in tokens[after:end])
        if goes_on or (last.text in _OPEN_ENDED and last.kind in ("other", "command") and last.text not in COLONS):
            drop.update(range(before + 1, after))
    if not drop:
        return tokens, pairs
    kept = [token for at, token in enumerate(tokens) if at not in drop]
    return kept, pairs_of(kept)


def _segments(tokens: list[Token], pairs: dict[int, int]) -> list[Segment]:
    found: list[Segment] = []
    before: list[str] = []
    words: list[str] = []
    row = 0
    start = at = 0

    def close(end: int, after: str) -> None:
        nonlocal before, words
        if end > start:
            found.append(
                Segment(Stretch(tokens, pairs, start, end), tuple(before), row, " ".join(words).strip(), after)
            )
            before, words = [], []

    while at < len(tokens):
        token = tokens[at]
        kind = token.kind
        stop = kind in ("gap", "row", "text") or (kind == "other" and token.text in PUNCTUATION)
        if stop:
            close(at, token.text if kind in ("text", "other") else kind)
            before.append("text" if kind == "text" else kind if kind in ("gap", "row") else token.text)
            if kind == "text":
                words.append(token.text.strip())
            row += kind == "row"
            start = at + 1
        at = pairs.get(at, at) + 1
    close(min(at, len(tokens)), "")
    return found
