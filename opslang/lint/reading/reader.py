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
from opslang.lint.reading.document import Directive, Token
from opslang.lint.reading.intake import Intake
from opslang.lint.reading.levels import Stack
from opslang.lint.reading.lexer import lex
from opslang.lint.reading.macros import expand
from opslang.lint.reading.mathematics import MATHEMATICS
from opslang.lint.reading.project import Project
from opslang.lint.reading.prose import PROSE

RUNAWAY = 50_000
"""Tokens that one stretch of the author's source may become."""


class Reader(Stack):
    """One draft being read."""

    def __init__(self, project: Project) -> None:
        super().__init__()
        self.project = project
        self.intake = Intake()
        self.tables = Tables()
        self.conditions: list[bool | None] = []
        self.packages_read: set[int] = set()
        self.exhausted = False
        self.only_definitions = False
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
            "note": self.footnote_paragraph,
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
                self.only_definitions = self.only_definitions or bool(name and name[0].text == "document")
            else:
                self.silently(token)
        self.only_definitions = False
        self.intake.frames.clear()
        self.intake.pending.clear()

    def run(self) -> None:
        """Read all there is."""
        intake = self.intake
        following, command, signs, acts = intake.next, self.command, self.signs, self.acts
        while (token := following()) is not None:
            kind = token[0]
            if intake.silent:
                self.silently(token)
            elif kind == "run":
                if self.math:
                    signs(token)
                else:
                    self.say(token[1], token)
            elif kind == "command":
                command(token)
            elif kind in acts:
                acts[kind](token)
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
        elif not self.exhausted:
            self.exhausted = True
            self.notice("macros-too-costly", "the macros before this point expand too far; from here on none is", token)
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
        elif not self.define(token) and self.out is not None and self.math:
            self.out.append(token if token.kind == "command" else token._replace(kind="command"))

    def sign(self, token: Token) -> None:
        """^ _ & #."""
        if self.math:
            if token.kind == "param":
                self.spoilt = True
            elif self.out is not None:
                self.out.append(token)
        elif token.kind != "param":
            self.say(" " if token.kind == "align" else token.text, token)

    def tie(self, token: Token) -> None:
        """~: a blank in text, nothing in mathematics."""
        macro = self.tables.macros.get("~")
        if macro is not None and self.affordable(token) and expand(macro, token, self.intake):
            return
        if not self.math:
            self.say(" ", token)

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
        if self.page.place == "footnote" and not self.levels:
            self.page.set_place("body")

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
        elif role.startswith("formula:"):
            self.open_formula(role[8:], "leave", token)
        elif role.startswith("heading:"):
            self.page.end_paragraph()
            level = self.raise_level("leave", "heading", token)
            level.at = len(self.page.pieces)
            level.kind = role[8:]
            self.page.section_number += 1
            level.before = self.page.set_place("title")
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

    def footnote_paragraph(self, token: Token) -> None:
        """The paragraph that begins is a footnote (Markdown)."""
        self.page.set_place("footnote")

    def resume(self, token: Token) -> None:
        """After an \\intertext the display goes on."""
        self.give_up(token)
        kind, closer = token.text.split("\t")
        self.open_formula(kind, closer, token)
        self.continues = True


PREAMBLE = frozenset(
    "\\" + name
    for name in (
        "begin input include usepackage RequirePackage documentclass LoadClass endinput newtheorem csname expandafter "
        "import subimport subfile"
    ).split()
)
"""Commands besides definitions that are acted on in a preamble."""
