"""A stretch of a formula's tokens with a place to read from, and its brackets in pairs.  Knows no grammar."""

from __future__ import annotations

from collections.abc import Sequence

from opslang.lint.model import NOWHERE, Origin
from opslang.lint.reading.document import Token, extent

OPENERS = {
    "(": ")", "[": "]", "\\{": "\\}", "\\langle": "\\rangle", "\\lfloor": "\\rfloor", "\\lceil": "\\rceil",
    "\\lvert": "\\rvert", "\\lVert": "\\rVert",
}  # fmt: skip
CLOSERS = frozenset(OPENERS.values())
OWN_ROWS = frozenset(
    "cases dcases rcases array matrix pmatrix bmatrix vmatrix smallmatrix tikzcd tikz-cd xymatrix tabular".split()
)
"""Inner environments whose rows are no rows of the formula."""


class NotRead(Exception):
    """Something that the grammar does not know: the reason, and where."""

    def __init__(self, reason: str, at: Origin = NOWHERE) -> None:
        super().__init__(reason)
        self.reason = reason
        self.at = at


def pairs_of(tokens: Sequence[Token]) -> dict[int, int]:
    """For each opening brace, bracket or environment the number of its closing token; brackets without a partner
    have none.
    """
    pairs: dict[int, int] = {}
    waiting: list[tuple[str, int]] = []
    for at, token in enumerate(tokens):
        kind, text = token.kind, token.text
        if kind == "open" or kind == "begin":
            waiting.append((kind, at))
        elif kind == "close" or kind == "end":
            opener = "open" if kind == "close" else "begin"
            depth = len(waiting) - 1
            while depth >= 0 and waiting[depth][0] != opener:
                depth -= 1
            if depth >= 0:
                pairs[waiting[depth][1]] = at
                del waiting[depth:]
        elif (kind == "other" or kind == "command") and text in OPENERS:
            waiting.append((OPENERS[text], at))
        elif (kind == "other" or kind == "command") and text in CLOSERS:
            depth = len(waiting) - 1
            while depth >= 0 and waiting[depth][0] not in (text, "open", "begin"):
                depth -= 1
            if depth >= 0 and waiting[depth][0] == text:
                pairs[waiting[depth][1]] = at
                del waiting[depth:]
    return pairs


class Stretch:
    """Tokens from `at` up to `end` (excluded), read from the left."""

    __slots__ = ("at", "end", "pairs", "tokens")

    def __init__(self, tokens: Sequence[Token], pairs: dict[int, int], at: int, end: int) -> None:
        self.tokens = tokens
        self.pairs = pairs
        self.at = at
        self.end = end

    def peek(self, ahead: int = 0) -> Token | None:
        """The next token, or the one after some more; None at the end."""
        at = self.at + ahead
        return self.tokens[at] if at < self.end else None

    def sees(self, *texts: str) -> bool:
        """Whether the next token is one of these signs."""
        return self.at < self.end and self.tokens[self.at].text in texts and self.tokens[self.at].kind != "text"

    def takes(self, *texts: str) -> bool:
        """Whether the next token is one of these signs; it is read then."""
        if self.sees(*texts):
            self.at += 1
            return True
        return False

    @property
    def done(self) -> bool:
        """Whether nothing is left."""
        return self.at >= self.end

    def enclosed(self) -> Stretch:
        """What stands between the bracket or brace that comes next and its partner; both are read."""
        close = self.pairs.get(self.at)
        if close is None or close >= self.end:
            raise NotRead("a bracket without its partner", self.origin(self.at, self.at + 1))
        inner = Stretch(self.tokens, self.pairs, self.at + 1, close)
        self.at = close + 1
        return inner

    def argument(self) -> Stretch:
        """What a script or command takes: a group in braces, or one token."""
        if self.done:
            raise NotRead("an argument is missing", self.origin(self.at - 1, self.at))
        if self.tokens[self.at].kind == "open":
            return self.enclosed()
        self.at += 1
        return Stretch(self.tokens, self.pairs, self.at - 1, self.at)

    def rest(self) -> Sequence[Token]:
        """The tokens not read yet."""
        return self.tokens[self.at : self.end]

    def origin(self, start: int, end: int | None = None) -> Origin:
        """The place of the tokens from `start` up to `end` (by default: to where reading stands)."""
        end = min(self.at if end is None else end, len(self.tokens))
        if start >= end:
            if not self.tokens:
                return NOWHERE
            token = self.tokens[min(start, len(self.tokens) - 1)]
            return Origin(token.file, token.start, token.end)
        if end == start + 1:
            token = self.tokens[start]
            return Origin(token.file, token.start, token.end)
        return Origin(*extent(self.tokens[start:end]))

    def whole(self) -> Origin:
        """The place of all that is not read yet."""
        return self.origin(self.at, self.end)


def shown(tokens: Sequence[Token]) -> str:
    """Tokens as one line of text, for names and messages."""
    text = ""
    for token in tokens:
        piece = token.text if token.kind not in ("align", "row") else ""
        if piece and text and text[-1].isalpha() and piece[0].isalpha() and "\\" in text.split(" ")[-1]:
            text += " "
        text += piece
    return text
