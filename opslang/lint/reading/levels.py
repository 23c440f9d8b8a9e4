"""What is open at a moment: a stack of braces, formulas, environments, footnotes, and the formula being read.

Knows how each of them ends, properly or not; knows no command.  A formula that was not closed, or that holds
something that was not, leaves a notice and no piece.
"""

from __future__ import annotations

from opslang.lint.reading.document import Formula, Notice, Token
from opslang.lint.reading.page import Chunk, Page, Saved, settle
from opslang.lint.reading.signs import SIGNS

DEEPEST = 500
"""How many levels down an \\end looks for its \\begin."""


class Level:
    """Something open: what closes it, what it is, and the state to go back to."""

    __slots__ = ("aside", "at", "before", "closer", "inner", "kind", "math", "out", "role", "spoilt", "style", "token")

    def __init__(self, stack: Stack, closer: str, role: str, token: Token) -> None:
        self.closer = closer
        self.role = role
        self.token = token
        self.math = stack.math
        self.style = stack.style
        self.out = stack.out
        self.inner = stack.inner
        self.spoilt = stack.spoilt
        self.at = len(stack.out) if stack.out is not None else 0
        self.kind = ""
        self.before = ""
        self.aside: Saved | None = None


class Stack:
    """The levels, and the state of the uppermost: in mathematics or not, the tokens and words gathered."""

    def __init__(self) -> None:
        self.page = Page()
        self.notices: list[Notice] = []
        self.levels: list[Level] = []
        self.math = False
        self.style = ""
        self.out: list[Token] | None = None
        self.inner: list[Chunk] = []
        self.spoilt = False
        self.continues = False

    def keep(self, kind: str, text: str, token: Token) -> None:
        """A token of the formula that is being read."""
        if self.out is not None:
            self.out.append(Token(kind, text, token.start, token.end, token.file, "", token.within))

    def signs(self, token: Token) -> None:
        """A run of plain signs in mathematics, one token each."""
        out = self.out
        if out is None:
            return
        new, kind_is, kinds, append, style = tuple.__new__, Token, SIGNS, out.append, self.style
        _, text, at, end, file, _, within = token
        if within is None and end - at == len(text):
            for sign in text:
                kind = kinds[sign]
                if kind is not None:
                    append(new(kind_is, (kind, sign, at, at + 1, file, style if kind == "letter" else "", None)))
                at += 1
            return
        source, place, last = within or (file, at, at + len(text))
        if last - place != len(text):
            return  # verbatim
        for sign in text:
            kind = kinds[sign]
            if kind is not None:
                here = (source, place, place + 1) if within is not None else None
                append(new(kind_is, (kind, sign, at, end, file, style if kind == "letter" else "", here)))
            place += 1

    def say(self, text: str, token: Token) -> None:
        """Words: of the page, or of \\text inside a formula."""
        if self.out is None:
            self.page.say(text, token)
        else:
            self.inner.append((text, token.start, token.end))

    def end_words(self, token: Token) -> None:
        """Make a token of the words of \\text read so far."""
        if self.inner and self.out is not None:
            text, _ = settle(self.inner)
            if text:
                start, end = min(chunk[1] for chunk in self.inner), max(chunk[2] for chunk in self.inner)
                self.out.append(Token("text", text, start, end, token.file, "", token.within))
        self.inner = []

    def raise_level(self, closer: str, role: str, token: Token) -> Level:
        """Open something."""
        level = Level(self, closer, role, token)
        self.levels.append(level)
        return level

    def open_brace(self, token: Token) -> None:
        """{"""
        self.raise_level("}", "group", token)
        if self.math and self.out is not None:
            self.out.append(token if token.text == "{" else token._replace(kind="open", text="{"))

    def close_brace(self, token: Token) -> None:
        """}: closes the innermost brace; a formula that was left open inside it is lost."""
        levels = self.levels
        if levels and levels[-1].closer == "}":
            self.drop_level(token, proper=True)
            return
        for at in range(len(levels) - 1, max(-1, len(levels) - 50), -1):
            level = levels[at]
            if level.closer == "}":
                self.close_at(at, token)
                return
            if level.closer == "leave" or level.role == "environment":
                break
        self.spoilt = self.spoilt or self.math

    def find_level(self, *closers: str) -> int:
        """The number of the innermost level with one of these closers, or -1."""
        top = len(self.levels)
        for at in range(top - 1, max(-1, top - DEEPEST), -1):
            if self.levels[at].closer in closers:
                return at
        return -1

    def close_at(self, at: int, token: Token) -> None:
        """Close a level; what is still open above it is given up."""
        while len(self.levels) > at + 1:
            self.drop_level(token, proper=False)
            self.spoilt = self.spoilt or self.math
        self.drop_level(token, proper=True)

    def drop_level(self, token: Token, proper: bool) -> None:
        """Take the uppermost level off: finish what it was, if closed properly, and go back to the state before."""
        level = self.levels.pop()
        role = level.role
        if role == "group" or role == "styled" or role == "begin":
            if self.math and proper:
                self.end_group(level, token)
            elif self.math:
                self.spoilt = True
            self.math, self.style = level.math, level.style
            return
        if role == "formula":
            self.end_formula(level, token, proper)
            return
        if role == "text" or role == "inner":
            self.end_words(token)
            if role == "inner":
                self.keep("shift", "$", token)
                self.spoilt = self.spoilt or not proper
            self.math, self.style, self.inner = level.math, level.style, level.inner
            return
        self.end_passage(level)
        self.math, self.style, self.out, self.inner = level.math, level.style, level.out, level.inner
        if role == "aside":
            self.spoilt = level.spoilt

    def end_group(self, level: Level, token: Token) -> None:
        """The end of {..} or of an inner environment in mathematics."""
        out = self.out
        if out is None or not level.math:
            return
        if level.role == "begin":
            self.keep("end", level.kind or level.closer[4:], token)
            return
        at = level.at
        if self.style:
            join_letters(out, at)
        if (
            (level.role == "styled" or self.style != level.style)
            and len(out) == at + 2
            and out[-1].kind in ("letter", "word")
        ):
            single = out.pop()
            end = token.end if token.file == level.token.file else single.end
            out[at] = single._replace(start=min(level.token.start, single.start), end=max(end, single.end))
        else:
            self.keep("close", "}", token)

    def open_formula(self, kind: str, closer: str, token: Token, place: str = "") -> None:
        """Mathematics begins."""
        if self.out is None:
            self.page.flush()
        level = self.raise_level(closer, "formula", token)
        level.kind = kind
        level.before = self.page.place
        if place:
            self.page.set_place(place)
        self.math, self.style, self.out, self.inner, self.spoilt = True, "", [], [], False

    def end_formula(self, level: Level, token: Token, proper: bool) -> None:
        """Mathematics ends: one more piece, unless it was broken."""
        tokens, spoilt = self.out or [], self.spoilt or not proper
        if self.style:
            join_letters(tokens, 0)
        where = self.page.where()
        if self.page.place != level.before:
            self.page.place = level.before
            self.page.moved()
        self.math, self.style, self.out, self.inner = level.math, level.style, level.out, level.inner
        self.spoilt = level.spoilt
        first = level.token
        if spoilt:
            if not proper and level.closer == "$":
                self.page.forget_inline()
            name, what = ("formula-broken", "is not well formed") if proper else ("formula-not-closed", "is not closed")
            self.notice(name, f"this formula {what} and was passed over", first)
        elif tokens:
            start, end = first.start, token.end if token.file == first.file else first.end
            if first.kind == "enter" and not first.text.startswith("formula"):
                start, end = min(one.start for one in tokens), max(one.end for one in tokens)
            piece = Formula(level.kind, tuple(tokens), start, max(start, end), first.file, where, self.continues)
            if self.out is None:
                self.page.add(piece)
            else:
                self.page.waiting.append(piece)
        self.continues = False

    def end_passage(self, level: Level) -> None:
        """The end of a footnote, a heading, an item's label or an environment of text."""
        page = self.page
        if level.aside is not None:
            page.end_aside(level.aside)
        elif level.role == "heading":
            page.flush()
            title = page.title_since(level.at)
            page.end_paragraph()
            page.place = level.before
            page.enter_section(int(level.kind), title)
        elif level.role == "place":
            page.set_place(level.before)
        elif level.role == "environment":
            page.end_environment(level.closer[4:])

    def give_up(self, token: Token | None = None) -> None:
        """Leave the formula that is being read, if any: it is lost."""
        while self.out is not None and self.levels:
            self.drop_level(token or self.levels[-1].token, proper=False)

    def give_up_all(self) -> None:
        """Leave all that is open."""
        while self.levels:
            self.drop_level(self.levels[-1].token, proper=False)

    def notice(self, name: str, message: str, token: Token) -> None:
        """Something to tell about the file."""
        if len(self.notices) < 1000:
            self.notices.append(Notice(name, message, token.file, token.start, token.end))


def join_letters(out: list[Token], start: int) -> None:
    """Make words of the styled letters that stand side by side from `start` on: \\mathrm{Sq} is one name."""
    tail = out[start:]
    del out[start:]
    for token in tail:
        if token.kind == "letter" and token.style and out and len(out) > start:
            before = out[-1]
            if before.kind in ("letter", "word") and before.style == token.style and before.file == token.file:
                first, last = min(before.start, token.start), max(before.end, token.end)
                within = before.within
                if within is not None and token.within is not None and within[0] == token.within[0]:
                    within = (within[0], within[1], token.within[2])
                out[-1] = Token("word", before.text + token.text, first, last, token.file, token.style, within)
                continue
        out.append(token)
