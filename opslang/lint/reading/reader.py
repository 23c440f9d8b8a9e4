"""The reader: goes through the tokens once, expands macros, knows at each moment whether it is in mathematics.

What is open (braces, formulas, environments, footnotes) lies on a stack of levels; a blank line inside
mathematics, a heading or an \\end that does not fit takes levels off until all is in order again, so that
broken TeX loses a paragraph and not the file.  What single commands do is in the tables of `mathematics` and `prose`.
"""

from __future__ import annotations

from opslang.lint.reading.definitions import (
    CONDITIONALS,
    DEFINITIONS,
    Tables,
    directive_macro,
    skip_branch,
)
from opslang.lint.reading.document import Directive, Formula, Notice, Token
from opslang.lint.reading.intake import Intake
from opslang.lint.reading.lexer import lex
from opslang.lint.reading.macros import expand
from opslang.lint.reading.mathematics import MATHEMATICS
from opslang.lint.reading.page import Chunk, Page, Saved, settle
from opslang.lint.reading.project import Project
from opslang.lint.reading.prose import PROSE
from opslang.lint.reading.signs import SIGNS

RUNAWAY = 50_000
"""Tokens that one stretch of the author's source may become."""


DEEPEST = 500
"""How many levels down an \\end looks for its \\begin."""


class Level:
    """Something open: what closes it, what it is, and the state to go back to."""

    __slots__ = ("aside", "at", "before", "closer", "inner", "kind", "math", "out", "role", "spoilt", "style", "token")

    def __init__(self, reader: Reader, closer: str, role: str, token: Token) -> None:
        self.closer = closer
        self.role = role
        self.token = token
        self.math = reader.math
        self.style = reader.style
        self.out = reader.out
        self.inner = reader.inner
        self.spoilt = reader.spoilt
        self.at = len(reader.out) if reader.out is not None else 0
        self.kind = ""
        self.before = ""
        self.aside: Saved | None = None


class Reader:
    """One draft being read."""

    def __init__(self, project: Project) -> None:
        self.project = project
        self.intake = Intake()
        self.tables = Tables()
        self.page = Page()
        self.notices: list[Notice] = []
        self.levels: list[Level] = []
        self.math = False
        self.style = ""
        self.out: list[Token] | None = None
        self.inner: list[Chunk] = []
        self.spoilt = False
        self.conditions: list[bool | None] = []
        self.continues = False
        self.packages_read: set[int] = set()
        self.acts = {
            "open": self.open_brace,
            "close": self.close_brace,
            "shift": self.shift,
            "sup": self.sign,
            "sub": self.sign,
            "align": self.sign,
            "param": self.sign,
            "tie": self.tie,
            "par": self.paragraph,
            "directive": self.directive,
            "enter": self.enter,
            "leave": self.leave,
            "meaning": self.meaning,
            "resume": self.resume,
        }

    # The round.

    def learn(self, path: str) -> None:
        """Take the definitions of a draft's main file: its preamble, and files of definitions drawn in by its body."""
        try:
            number = self.project.number_of(path)
        except OSError:
            return
        self.intake.open(lex(self.project.files[number].text, number), number, silent=True)
        while (token := self.intake.next()) is not None:
            if token.kind == "command" and token.text == "\\begin":
                name = self.intake.braced()
                if name and name[0].text == "document":
                    break
            else:
                self.silently(token)
        self.intake.frames.clear()
        self.intake.pending.clear()

    def run(self) -> None:
        """Read all there is."""
        intake = self.intake
        following = intake.next
        while (token := following()) is not None:
            kind = token.kind
            if intake.frames and intake.frames[-1].silent:
                self.silently(token)
            elif kind == "run":
                if self.math:
                    self.signs(token)
                else:
                    self.say(token.text, token)
            elif kind == "command":
                self.command(token)
            else:
                act = self.acts.get(kind)
                if act is not None:
                    act(token)
        self.give_up_all()
        self.page.end_paragraph()

    def silently(self, token: Token) -> None:
        """In a preamble or a style file only definitions count."""
        name = token.text
        if token.kind == "directive":
            self.directive(token)
        elif token.kind != "command":
            return
        elif name in self.tables.defining:
            if self.affordable(token):
                expand(self.tables.macros[name], token, self.intake)
        elif not self.define(token) and name in PREAMBLE:
            PROSE[name](self, token)

    def define(self, token: Token) -> bool:
        """Act on a definition or a conditional; whether it was one."""
        name = token.text
        definition = DEFINITIONS.get(name)
        if definition is not None:
            definition(self.intake, self.tables)
        elif name in CONDITIONALS or name in self.tables.switches:
            self.condition(name)
        elif name == "\\else":
            if self.conditions and self.conditions[-1]:
                self.conditions.pop()
                skip_branch(self.intake, self.tables, to_else=False)
            elif self.math:
                self.spoilt = True
        elif name == "\\fi":
            if self.conditions:
                self.conditions.pop()
        elif self.tables.switches and name.endswith(("true", "false")) and self.switch(name):
            pass
        else:
            return False
        return True

    def switch(self, name: str) -> bool:
        """\\drafttrue and \\draftfalse."""
        for ending, value in (("true", True), ("false", False)):
            stem = "\\if" + name[1 : -len(ending)]
            if name.endswith(ending) and stem in self.tables.switches:
                self.tables.switches[stem] = value
                return True
        return False

    def condition(self, name: str) -> None:
        """Go on in the branch that counts; where that cannot be told, in both."""
        if name in ("\\ifx", "\\if", "\\ifcat"):
            self.intake.atom(), self.intake.atom()
        known = {"\\iftrue": True, "\\iffalse": False, "\\ifmmode": self.math}.get(name, self.tables.switches.get(name))
        if known is False:
            if skip_branch(self.intake, self.tables, to_else=True):
                self.conditions.append(True)
        else:
            self.conditions.append(known)

    # Commands.

    def affordable(self, token: Token) -> bool:
        """Whether a further macro may be expanded; one that runs on without end is cut off."""
        intake = self.intake
        if intake.since > RUNAWAY:
            intake.pending = [token for token in intake.pending if token.kind == "leave"]
            intake.since = 0
            intake.fuel -= RUNAWAY
            self.spoilt = True
            self.notice("macro-without-end", f"{token.text} expands without end and was cut off", token)
        elif intake.fuel > 0:
            return True
        return False

    def command(self, token: Token) -> None:
        """A command: a macro of the draft, a known command, or one that is kept or dropped as it is."""
        name = token.text
        macro = self.tables.macros.get(name)
        if macro is not None and self.affordable(token) and expand(macro, token, self.intake):
            return
        self.meaning(token)

    def meaning(self, token: Token) -> None:
        """What a command is apart from the draft's macros."""
        name = token.text
        handler = (MATHEMATICS if self.math else PROSE).get(name)
        if handler is not None:
            handler(self, token)
        elif not self.define(token) and self.math:
            self.keep("command", name, token)

    # Signs and words.

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
        if within is None:
            for sign in text:
                kind = kinds[sign]
                if kind is not None:
                    append(new(kind_is, (kind, sign, at, at + 1, file, style if kind == "letter" else "", None)))
                at += 1
            return
        source, place, last = within
        if last - place != len(text):
            return  # verbatim
        for sign in text:
            kind = kinds[sign]
            if kind is not None:
                here = (source, place, place + 1)
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

    def sign(self, token: Token) -> None:
        """^ _ & #."""
        if self.math:
            if token.kind == "param":
                self.spoilt = True
            else:
                self.keep(token.kind, token.text, token)
        elif token.kind != "param":
            self.say(" " if token.kind == "align" else token.text, token)

    def tie(self, token: Token) -> None:
        """~: a blank in text, nothing in mathematics."""
        macro = self.tables.macros.get("~")
        if macro is not None and self.affordable(token) and expand(macro, token, self.intake):
            return
        if not self.math:
            self.say(" ", token)

    # Levels.

    def raise_level(self, closer: str, role: str, token: Token) -> Level:
        """Open something."""
        level = Level(self, closer, role, token)
        self.levels.append(level)
        return level

    def open_brace(self, token: Token) -> None:
        """{"""
        self.raise_level("}", "group", token)
        if self.math:
            self.keep("open", "{", token)

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
        """Take the uppermost level off: finish what it was, if it was closed properly, and go back to the state before it."""
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
        if level.role == "styled" and len(out) == at + 2 and out[-1].kind in ("letter", "word"):
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
            if first.kind == "enter":
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

    # Dollars, blank lines, directives, bounds.

    def shift(self, token: Token) -> None:
        """$ and $$."""
        if not self.math:
            if self.out is not None:
                self.open_inner("$", token)
            elif self.doubled(token):
                self.open_formula("display", "$$", token)
            else:
                self.open_formula("inline", "$", token)
            return
        at = next(i for i in range(len(self.levels) - 1, -1, -1) if self.levels[i].role in ("formula", "inner"))
        closer = self.levels[at].closer
        if closer == "$":
            self.close_at(at, token)
        elif closer == "$$" and (second := self.doubled(token)) is not None:
            self.close_at(at, second)
        else:
            self.give_up(token)
            self.shift(token)

    def open_inner(self, closer: str, token: Token) -> None:
        """Mathematics inside \\text inside mathematics."""
        self.end_words(token)
        self.raise_level(closer, "inner", token)
        self.keep("shift", "$", token)
        self.math = True

    def doubled(self, token: Token) -> Token | None:
        """The second dollar sign, taken, if one follows at once."""
        following = self.intake.peek(spaces=False)
        if following is None or following.kind != "shift":
            return None
        if following.start != token.end and token.within is None:
            return None
        self.intake.pending.pop()
        return following

    def paragraph(self, token: Token) -> None:
        """A blank line."""
        self.give_up(token)
        self.page.end_paragraph()

    def directive(self, token: Token) -> None:
        """`% opslang: …`."""
        at = token.text.index("opslang:") + len("opslang:")
        text = token.text[at:].strip()
        self.page.flush()
        self.page.pieces.append(Directive(text, token.start, token.end, token.file, self.page.where()))
        if text.startswith("macro "):
            source = self.project.files[token.file].text
            directive_macro(self.intake, self.tables, text, lex(source, token.file, token.start + at, token.end))

    def enter(self, token: Token) -> None:
        """A passage that a command has marked off begins; `text` says what it is."""
        role = token.text
        if role == "label":
            self.open_formula("inline", "leave", token, place="label")
        elif role == "ensure":
            if self.out is None:
                self.open_formula("inline", "leave", token)
            else:
                self.open_inner("leave", token)
        elif role == "text":
            self.raise_level("leave", "text", token)
            self.inner, self.math = [], False
        else:
            level = self.raise_level("leave", "place", token)
            level.before = self.page.set_place(role)

    def leave(self, token: Token) -> None:
        """It ends."""
        at = self.find_level(token.text)
        if at >= 0:
            self.close_at(at, token)

    def resume(self, token: Token) -> None:
        """After an \\intertext the display goes on."""
        self.give_up(token)
        kind, closer = token.text.split("\t")
        self.open_formula(kind, closer, token)
        self.continues = True

    def notice(self, name: str, message: str, token: Token) -> None:
        """Something to tell about the file."""
        if len(self.notices) < 1000:
            self.notices.append(Notice(name, message, token.file, token.start, token.end))


PREAMBLE = frozenset(
    ("\\begin", "\\input", "\\include", "\\usepackage", "\\RequirePackage", "\\documentclass", "\\LoadClass")
    + ("\\endinput", "\\newtheorem", "\\csname", "\\expandafter", "\\import", "\\subimport", "\\subfile")
)
"""Commands besides definitions that are acted on in a preamble."""


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
