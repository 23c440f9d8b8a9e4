"""Where the pieces are gathered: words become texts, paragraphs are counted, footnotes wait for their paragraph.

Knows the order of a draft; knows no command.
"""

from __future__ import annotations

import re

from opslang.lint.reading.document import Directive, Environment, Formula, Piece, Text, Token, Where

_WIDE = re.compile(r"\s\s+")

Chunk = tuple[str, int, int]
Saved = tuple[list[Piece], list[Chunk], str, int, int]


def settle(chunks: list[Chunk]) -> tuple[str, tuple[tuple[int, int, int], ...]]:
    """The chunks as one text with single blanks, and the runs that say where its parts were typed."""
    parts: list[str] = []
    runs: list[tuple[int, int, int]] = []
    length = 0
    for text, start, end in chunks:
        if parts and text[:1].isspace() and parts[-1][-1:].isspace():
            if end - start == len(text):
                start += 1
            text = text[1:]
        if not text:
            continue
        if end - start != len(text):  # out of a macro or a command: one place for all of it
            text = _WIDE.sub(" ", text).translate(_BLANKS)
            runs.append((length, start, end))
            parts.append(text)
            length += len(text)
            continue
        at = 0
        runs.append((length, start, end))
        for wide in _WIDE.finditer(text):
            first, last = wide.span()
            parts.append(text[at : first + 1])
            length += first + 1 - at
            runs[-1] = (runs[-1][0], runs[-1][1], start + first + 1)
            runs.append((length, start + last, end))
            at = last
        parts.append(text[at:])
        length += len(text) - at
    whole = "".join(parts)
    return whole.translate(_BLANKS), tuple(runs)


_BLANKS = dict.fromkeys((9, 10, 11, 12, 13), " ")


class Page:
    """The pieces found so far and the place at which the next one stands."""

    def __init__(self) -> None:
        self.pieces: list[Piece] = []
        self.words: list[Chunk] = []
        self.file = 0
        self.place = "body"
        self.paragraph = 0
        self.paragraphs = 0
        self.sections: list[tuple[int, str]] = []
        self.section_number = 0
        self.environments: list[Environment] = []
        self.environment_count = 0
        self.sync = 0
        self.waiting: list[Piece] = []
        self._where: Where | None = None

    def where(self) -> Where:
        """The place of the next piece."""
        if self._where is None:
            place = self.place
            if place == "body" and any(environment.name == "abstract" for environment in self.environments):
                place = "abstract"
            self._where = Where(
                place,
                tuple(title for _, title in self.sections),
                self.section_number,
                tuple(self.environments),
                self.paragraph,
            )
        return self._where

    def moved(self) -> None:
        """Something that `where` tells of has changed."""
        self._where = None

    def say(self, text: str, token: Token) -> None:
        """Words of text."""
        if token.file != self.file:
            self.flush()
            self.file = token.file
        self.words.append((text, token.start, token.end))

    def flush(self) -> None:
        """Make a text of the words gathered."""
        if not self.words:
            return
        text, runs = settle(self.words)
        if not text.isspace() and text:
            start = min(chunk[1] for chunk in self.words)
            end = max(chunk[2] for chunk in self.words)
            self.pieces.append(Text(text, start, end, self.file, self.where(), runs))
        self.words = []

    def add(self, piece: Formula | Directive) -> None:
        """A formula or a directive."""
        self.flush()
        self.pieces.append(piece)
        if isinstance(piece, Formula) and piece.displayed:
            self.sync = len(self.pieces)

    def end_paragraph(self) -> None:
        """The next piece begins a paragraph; footnotes of this one come first."""
        self.flush()
        if self.waiting and self.place not in ("footnote", "caption", "margin"):
            self.pieces.extend(self.waiting)
            self.waiting = []
        self.sync = len(self.pieces)
        self.paragraphs += 1
        self.paragraph = self.paragraphs
        self._where = None

    def begin_aside(self, place: str) -> Saved:
        """From here on the pieces belong to a footnote or the like."""
        saved = (self.pieces, self.words, self.place, self.paragraph, self.sync)
        self.pieces, self.words, self.place, self.sync = [], [], place, 0
        self.paragraphs += 1
        self.paragraph = self.paragraphs
        self._where = None
        return saved

    def end_aside(self, saved: Saved) -> None:
        """Back to the paragraph that it hangs on."""
        self.flush()
        found = self.pieces
        self.pieces, self.words, self.place, self.paragraph, self.sync = saved
        self.waiting.extend(found)
        self._where = None

    def begin_environment(self, name: str, title: str = "") -> None:
        """A theorem, a list, a figure begins."""
        self.end_paragraph()
        self.environment_count += 1
        self.environments.append(Environment(name, self.environment_count, title))

    def end_environment(self, name: str) -> None:
        """It ends, and what was left open in it."""
        self.end_paragraph()
        while self.environments and self.environments.pop().name != name:
            pass
        self._where = None

    def set_place(self, place: str) -> str:
        """Change the place; gives the one before."""
        self.flush()
        before, self.place = self.place, place
        self._where = None
        return before

    def enter_section(self, depth: int, title: str) -> None:
        """A heading with this title has been read."""
        self.sections = [section for section in self.sections if section[0] < depth]
        self.sections.append((depth, title))
        self._where = None

    def title_since(self, mark: int) -> str:
        """The pieces from this one on as a line of text."""
        parts = []
        for piece in self.pieces[mark:]:
            if isinstance(piece, Text):
                parts.append(piece.text)
            elif isinstance(piece, Formula):
                parts.append("$" + "".join(token.text for token in piece.tokens) + "$")
        return " ".join("".join(parts).split())

    def forget_inline(self) -> None:
        """Drop the inline formulas since the last sure place: a dollar sign is missing somewhere among them."""
        kept = [
            piece for piece in self.pieces[self.sync :] if not (isinstance(piece, Formula) and piece.kind == "inline")
        ]
        self.pieces[self.sync :] = kept
