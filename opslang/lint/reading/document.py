"""What reading a draft gives: a sequence of texts, formulas and directives, and the files they stand in.

Knows places and structure; knows neither how they were found nor what they mean.  Offsets count code points
from 0 in `File.text`; `File.position` turns them into lines and columns from 1.
"""

from __future__ import annotations

from bisect import bisect_right
from collections.abc import Iterator, Sequence
from typing import Literal, NamedTuple, Union

from attrs import field, frozen

from opslang.ground.source import Place, Source

Kind = Literal[
    "letter",  # one letter, Latin or not: x, α; `style` says whether it is \mathbb{Z}, \mathcal{P}, …
    "word",  # several upright letters set as one name: \mathrm{Sq}, \operatorname{Sq}, \DeclareMathOperator's \Sq
    "digit",  # one digit, as TeX reads it: \Sq^12 is sup, digit 1, digit 2
    "other",  # any other sign that prints itself: + - = ( ) [ ] , . ; : | / * < > !
    "prime",  # '
    "command",  # a command that stays, with its backslash: \iota, \circ, \sum, \{, \|, \to; unknown ones too
    "open",  # {
    "close",  # }
    "sup",  # ^
    "sub",  # _
    "align",  # &
    "row",  # \\ (with its star and optional length), \cr
    "gap",  # wide space that may part two statements: \quad, \qquad, \hspace{..}, \hfill
    "text",  # words of \text{..}, \mbox{..}, \textrm{..}; the words only, spaces kept
    "shift",  # where mathematics inside \text{.. $i > 0$ ..} begins and ends; text is "$"
    "note",  # what stands over or under the sign that follows: \overset{..}{=}, \stackrel{..}{=}; as source
    "begin",  # an inner environment begins; text is its name: cases, split, aligned, array, pmatrix, tikzcd
    "end",  # it ends
]


class Token(NamedTuple):
    """One TeX token of a formula after macro expansion (a named tuple because a draft has many thousands).

    `start` and `end` are offsets in the file of that number (`Document.files[file]`).  For a token that the author
    typed they are its own; for one that came out of a macro, those of the whole call as the author typed it
    (name and arguments), and then `within` says where in which file the definition has it.  An argument of a
    macro keeps its own place.  `style` is "" or one of: rm (also operator names), sf, it, bf, tt, bb, cal, scr, frak.
    """

    kind: str
    text: str
    start: int
    end: int
    file: int = 0
    style: str = ""
    within: tuple[int, int, int] | None = None


@frozen
class Environment:
    """A named stretch of text (theorem, proof, itemize).

    `number` is its own in the document, `title` what \\begin{..}[title] says.
    """

    name: str
    number: int
    title: str = ""


@frozen
class Where:
    """Where a piece stands.

    `place`: body, title (of a section), abstract, footnote, caption, margin, item (the label of \\item[..]),
    label (of an arrow in a diagram), intertext.  `section`: titles from the outermost down; two pieces stand in the
    same section just when `section_number` agrees.  `paragraph` counts through the document; a footnote,
    a caption and a margin note are paragraphs of their own and come after the paragraph that they hang on.
    """

    place: str = "body"
    section: tuple[str, ...] = ()
    section_number: int = 0
    environments: tuple[Environment, ...] = ()
    paragraph: int = 0


@frozen
class Text:
    """Plain words between formulas: commands gone, white space as single blanks.

    `runs` are (offset in `text`, start, end in the file): the stretch of text from that offset on was typed there.
    """

    text: str
    start: int
    end: int
    file: int
    where: Where
    runs: tuple[tuple[int, int, int], ...] = field(default=(), repr=False)

    def span(self, start: int, end: int) -> tuple[int, int]:
        """The offsets in the file of the words `text[start:end]`."""
        first, last = self._run(start), self._run(max(start, end - 1))
        return min(first), max(last)

    def _run(self, at: int) -> tuple[int, int]:
        if not self.runs:
            return self.start, self.end
        row = max(0, bisect_right(self.runs, (at, 1 << 62, 0)) - 1)
        offset, start, end = self.runs[row]
        following = self.runs[row + 1][0] if row + 1 < len(self.runs) else len(self.text)
        if following - offset != end - start:  # out of a macro: the place of the call
            return start, end
        return start + at - offset, start + at - offset + 1


@frozen
class Formula:
    """One formula.

    `kind`: "inline" ($, \\(, \\ensuremath, math), "display" ($$, \\[, displaymath) or the environment's name as
    written (align*, gather, tikzcd, ..).  Rows and columns are still marked by `row` and `align` tokens.
    `start` and `end` hold the delimiters as well.  `continues` is true after an \\intertext:
    same display as the formula before.
    """

    kind: str
    tokens: tuple[Token, ...]
    start: int
    end: int
    file: int
    where: Where
    continues: bool = False

    @property
    def displayed(self) -> bool:
        """Whether it stands on lines of its own."""
        return self.kind != "inline"

    @property
    def name(self) -> str:
        """The kind without its star."""
        return self.kind.rstrip("*")


@frozen
class Directive:
    """A comment `% opslang: …` (in Markdown also `<!-- opslang: … -->`): what follows the colon, with its place."""

    text: str
    start: int
    end: int
    file: int
    where: Where


Piece = Union[Text, Formula, Directive]


@frozen
class Notice:
    """Something about the file itself: not UTF-8, a file not found, mathematics not closed, a macro without end."""

    name: str
    message: str
    file: int
    start: int
    end: int


@frozen
class File:
    """One file as read: `name` as it is to be printed, `text` with line ends as \\n and without a byte order mark.

    `encoding` is utf-8, utf-16, or latin-1 (when the bytes are neither); `newline` and `mark` (a byte order mark) are
    what to write when it is changed.
    """

    name: str
    text: str = field(repr=False)
    path: str = ""
    encoding: str = "utf-8"
    newline: str = "\n"
    mark: bool = False
    _source: list[Source] = field(factory=list, init=False, eq=False, repr=False)

    @property
    def source(self) -> Source:
        """The text with its lines."""
        if not self._source:
            self._source.append(Source(self.name, self.text))
        return self._source[0]

    def position(self, offset: int) -> tuple[int, int]:
        """Line and column of an offset, both from 1, in code points."""
        return self.source.position(offset)

    def place(self, start: int, end: int) -> Place:
        """Lines and columns of a stretch."""
        return self.source.place((start, end))


@frozen
class Document:
    """A draft with all that it draws in; `files[0]` is the one asked for."""

    files: tuple[File, ...]
    pieces: tuple[Piece, ...]
    notices: tuple[Notice, ...] = ()

    def formulas(self) -> Iterator[Formula]:
        """The formulas in order."""
        return (piece for piece in self.pieces if isinstance(piece, Formula))

    def place(self, thing: Token | Piece | Notice) -> Place:
        """Lines and columns (from 1, code points) of a token, a piece or a notice in its file."""
        return self.files[thing.file].place(thing.start, thing.end)

    def raw(self, thing: Token | Piece | Notice) -> str:
        """The stretch of source that a token or piece stands for, as the author typed it."""
        return self.files[thing.file].text[thing.start : thing.end]


def extent(tokens: Sequence[Token]) -> tuple[int, int, int]:
    """File, start and end of the shortest stretch of source that holds these tokens (those of the first one's file)."""
    file = tokens[0].file
    here = [token for token in tokens if token.file == file]
    return file, min(token.start for token in here), max(token.end for token in here)
