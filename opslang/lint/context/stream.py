"""Paragraphs as one text, with a sign for each formula: what sentences are matched against.

Knows pieces and sentences; knows nothing of what they say.
"""

from __future__ import annotations

import re
from bisect import bisect_right
from collections.abc import Iterator, Sequence

from attrs import field, frozen

from opslang.lint.context.spaces import written
from opslang.lint.reading import Formula, Piece, Text, Where

FIRST = 0xE000
MOST = 0x1800
SIGN = "[\ue000-\uf7ff]"
"""One formula, in a pattern."""
_SENTENCE = re.compile(r"(?<=[.?!:])[)\"']*\s+(?=[A-Z(\"'\ue000-\uf7ff])|(?<=[.?!])\s*$")
_ABBREVIATIONS = re.compile(
    r"\b(?:e\.g|i\.e|cf|resp|thm|prop|lem|eq|fig|sect|ch|p|pp|vol|no|vs|Dr|St)\.$", re.IGNORECASE
)


@frozen
class Paragraph:
    """The text of a paragraph; formula k stands in it as one sign at `places[k]`, and reads `plains[k]` in plain
    spelling.
    """

    text: str
    formulas: tuple[Formula, ...] = field(repr=False)
    places: tuple[int, ...] = field(repr=False)
    plains: tuple[str, ...] = field(repr=False)
    sentences: tuple[tuple[int, int], ...] = field(repr=False)
    where: Where = field(factory=Where, repr=False)

    def formula(self, sign: str) -> Formula:
        """The formula that a sign stands for."""
        return self.formulas[ord(sign) - FIRST]

    def plain(self, sign: str) -> str:
        """The formula that a sign stands for, in plain spelling."""
        return self.plains[ord(sign) - FIRST]

    def sentence_at(self, offset: int) -> int:
        """The number of the sentence in which an offset lies."""
        return min(bisect_right(self.sentences, (offset, 1 << 62)) - 1, len(self.sentences) - 1)

    def shown(self, start: int, end: int) -> str:
        """A stretch of the text with the formulas written out, each between dollars."""
        return re.sub(SIGN, lambda found: f"${self.plain(found.group())}$", self.text[start:end])

    def around(self, offset: int, reach: int = 1) -> tuple[int, int]:
        """The stretch of text of the sentence at an offset and of that many before and after it."""
        number = self.sentence_at(offset)
        first, last = max(0, number - reach), min(len(self.sentences) - 1, number + reach)
        return self.sentences[first][0], self.sentences[last][1]


def paragraphs(pieces: Sequence[Piece]) -> Iterator[Paragraph]:
    """The paragraphs of a draft in order."""
    held: list[Piece] = []
    number = None
    for piece in pieces:
        if not isinstance(piece, (Text, Formula)):
            continue
        if held and piece.where.paragraph != number:
            yield _paragraph(held)
            held = []
        number = piece.where.paragraph
        held.append(piece)
    if held:
        yield _paragraph(held)


def _paragraph(pieces: list[Piece]) -> Paragraph:
    parts: list[str] = []
    formulas: list[Formula] = []
    places: list[int] = []
    length = 0
    for piece in pieces:
        if isinstance(piece, Formula):
            if len(formulas) >= MOST:
                continue
            places.append(length)
            text = chr(FIRST + len(formulas)) + (". " if _ends(piece) else "")
            formulas.append(piece)
        elif isinstance(piece, Text):
            text = piece.text
        parts.append(text)
        length += len(text)
    whole = "".join(parts)
    plains = tuple([written(formula.tokens) for formula in formulas])
    return Paragraph(whole, tuple(formulas), tuple(places), plains, tuple(_sentences(whole)), pieces[0].where)


def _ends(formula: Formula) -> bool:
    """Whether a display ends with a full stop, and so its sentence."""
    return formula.displayed and bool(formula.tokens) and formula.tokens[-1].text == "."


def _sentences(text: str) -> Iterator[tuple[int, int]]:
    start = 0
    for cut in _SENTENCE.finditer(text):
        if _ABBREVIATIONS.search(text, start, cut.start()):
            continue
        yield start, cut.end()
        start = cut.end()
    if start < len(text) or not text:
        yield start, len(text)
