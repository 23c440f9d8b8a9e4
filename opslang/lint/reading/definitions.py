"""The commands that define commands and environments, and conditionals.

Each takes what it needs from the intake and changes the tables; none of them prints anything.
Definitions hold to the end of the document: groups do not end them, since drafts hardly ever mean them to.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence

from attrs import evolve

from opslang.lint.reading.document import Token
from opslang.lint.reading.intake import Intake
from opslang.lint.reading.macros import Delimiter, Macro, compile_body, read_parameters

STRUCTURE = frozenset(
    "\\" + name
    for name in (
        "begin end item section subsection subsubsection paragraph chapter part footnote caption input include "
        "usepackage documentclass newcommand renewcommand providecommand def let label ref cite eqref text left right "
        "fi else iffalse iftrue par maketitle ( ) [ ] \\ frac sqrt sum"
    ).split()
)
"""Commands whose meaning no draft changes as far as reading goes, whatever its style files do to them."""

CONDITIONALS = frozenset(
    "\\" + name
    for name in (
        "iftrue iffalse if ifx ifnum ifcat ifdim ifodd ifvmode ifhmode ifmmode ifinner ifvoid ifhbox ifvbox ifeof "
        "ifcase ifdefined ifcsname iffontchar"
    ).split()
)


class Tables:
    """All that the draft has defined so far."""

    def __init__(self) -> None:
        self.macros: dict[str, Macro] = {}
        self.environments: dict[str, tuple[Macro, Macro]] = {}
        self.switches: dict[str, bool] = {}
        self.defining: set[str] = set()
        self.theorems: set[str] = {"theorem", "lemma", "proposition", "corollary", "definition", "proof", "remark"}

    def define(self, macro: Macro, keep: bool = False) -> None:
        """Enter a macro; `keep` says that an earlier definition stays, as \\providecommand does."""
        name = macro.name
        present = self.macros.get(name)
        if name in STRUCTURE or (present is not None and (keep or present.locked)):
            return
        self.macros[name] = macro
        if any(not isinstance(part, int) and part[1] in DEFINERS | self.defining for part in macro.parts):
            self.defining.add(name)


def _name(intake: Intake) -> str | None:
    """The command that is being defined: \\newcommand{\\Sq} or \\newcommand\\Sq."""
    found = intake.argument(long=False)
    named = [token for token in found or () if token.kind != "run" or token.text.strip()]
    if len(named) != 1 or named[0].kind not in ("command", "tie", "meaning"):
        return None
    return named[0].text


def _count(tokens: Sequence[Token] | None) -> int:
    text = "".join(token.text for token in tokens or ()).strip()
    return int(text) if len(text) == 1 and text in "123456789" else 0


def _parameters(intake: Intake) -> tuple[tuple[Delimiter, ...], tuple[Token, ...] | None]:
    count = _count(intake.option())
    default = intake.option() if count else None
    return ((),) * count, None if default is None else tuple(default)


def new_command(intake: Intake, tables: Tables, keep: bool = False) -> None:
    """\\newcommand and its kin: star, name, number of arguments, default of the first, body."""
    intake.follows("*")
    name = _name(intake)
    if name is None:
        return
    delimiters, option = _parameters(intake)
    body = intake.argument()
    if body is not None:
        tables.define(Macro(name, compile_body(body), delimiters, (), option), keep)


def provide_command(intake: Intake, tables: Tables) -> None:
    """\\providecommand: only if the name is free."""
    new_command(intake, tables, keep=True)


def math_operator(intake: Intake, tables: Tables) -> None:
    """\\DeclareMathOperator{\\Sq}{Sq}: the body is set as an operator's name."""
    intake.follows("*")
    name = _name(intake)
    body = intake.argument()
    if name is None or body is None:
        return
    place = body[0] if body else Token("run", "", 0, 0)
    at = (place.file, place.start, place.end)
    parts = (
        ("command", "\\operatorname", "", at),
        ("open", "{", "", at),
        *compile_body(body),
        ("close", "}", "", at),
    )
    tables.define(Macro(name, parts))


def primitive_definition(intake: Intake, tables: Tables) -> None:
    """\\def\\name<parameter text>{body}."""
    intake.skip_space()
    token = intake.next()
    if token is None or token.kind not in ("command", "tie"):
        if token is not None:
            intake.pending.append(token)
        return
    text: list[Token] = []
    while len(text) < 60:
        following = intake.next()
        if following is None:
            return
        if following.kind in ("open", "close", "par"):
            intake.pending.append(following)
            break
        text.append(following)
    opening, delimiters = read_parameters(text)
    body = intake.braced(long=True)
    if body is not None:
        tables.define(Macro(token.text, compile_body(body), delimiters, opening))


def let(intake: Intake, tables: Tables) -> None:
    """\\let\\new=\\old: the new name takes the present meaning of the old one."""
    name = _name(intake)
    if name is None:
        return
    if intake.follows("="):
        intake.skip_space()
    old = intake.atom()
    if old is None or old.kind in ("par", "open", "close"):
        if old is not None:
            intake.pending.append(old)
        return
    meant = tables.macros.get(old.text) if old.kind == "command" else None
    if meant is not None:
        tables.define(evolve(meant, name=name, locked=False))
        return
    kind = "meaning" if old.kind == "command" else old.kind
    if name == old.text or name in STRUCTURE:
        return
    tables.define(Macro(name, ((kind, old.text, "", (old.file, old.start, old.end)),)))


def new_environment(intake: Intake, tables: Tables) -> None:
    """\\newenvironment{name}[n][default]{what \\begin leaves}{what \\end leaves}."""
    intake.follows("*")
    name = "".join(token.text for token in intake.argument(long=False) or ()).strip()
    delimiters, option = _parameters(intake)
    begin, end = intake.argument(), intake.argument()
    if name and begin is not None and end is not None:
        tables.environments[name] = (
            Macro(name, compile_body(begin), delimiters, (), option),
            Macro(name, compile_body(end)),
        )


def document_command(intake: Intake, tables: Tables) -> None:
    """\\NewDocumentCommand\\name{specification}{body}, for the letters m, o, O{..} and s."""
    name = _name(intake)
    letters = "".join(token.text for token in intake.argument() or ()).split()
    body = intake.argument()
    if name is None or body is None:
        return
    if letters and letters[0] == "o":
        option: tuple[Token, ...] | None = ()
    else:
        option = None
    if all(letter == "m" for letter in letters[1 if option is not None else 0 :]):
        tables.define(Macro(name, compile_body(body), ((),) * len(letters), (), option))


def paired_delimiter(intake: Intake, tables: Tables) -> None:
    """\\DeclarePairedDelimiter\\abs{|}{|}: an argument between two signs."""
    name, left, right = _name(intake), intake.argument(), intake.argument()
    if name is not None and left is not None and right is not None:
        starred = Macro(name, (*compile_body(left), 0, *compile_body(right)), ((),))
        tables.define(starred)


def new_switch(intake: Intake, tables: Tables) -> None:
    """\\newif\\ifdraft; it is false until \\drafttrue."""
    name = _name(intake)
    if name is not None and name.startswith("\\if"):
        tables.switches.setdefault(name, False)


def column_type(intake: Intake, tables: Tables) -> None:
    """\\newcolumntype{C}[1]{>{$}c<{$}}: of no interest, and its dollar signs must not be seen."""
    intake.argument()
    intake.option()
    intake.argument()


def directive_macro(intake: Intake, tables: Tables, text: str, tokens: list[Token]) -> None:
    """`macro \\Steen#1 = \\mathrm{Sq}^{#1}`: what a command means, whatever the files say."""
    head = next((at for at, token in enumerate(tokens) if token.kind == "command"), None)
    if head is None or "=" not in text:
        return
    before: list[Token] = []
    after: list[Token] | None = None
    for token in tokens[head + 1 :]:
        if after is not None:
            after.append(token)
        elif token.kind == "run" and "=" in token.text:
            left, right = token.text.split("=", 1)
            before.append(token._replace(text=left.rstrip(), end=token.start + len(left.rstrip())))
            after = [token._replace(text=right.lstrip(), start=token.end - len(right.lstrip()))]
        else:
            before.append(token)
    opening, delimiters = read_parameters([token for token in before if token.text])
    body = [token for token in after or () if token.text]
    name = tokens[head].text
    tables.macros.pop(name, None)
    tables.define(Macro(name, compile_body(body), delimiters, opening, locked=True))


DEFINITIONS: dict[str, Callable[[Intake, Tables], None]] = {
    "\\newcommand": new_command,
    "\\renewcommand": new_command,
    "\\DeclareRobustCommand": new_command,
    "\\newrobustcmd": new_command,
    "\\renewrobustcmd": new_command,
    "\\providecommand": provide_command,
    "\\DeclareMathOperator": math_operator,
    "\\def": primitive_definition,
    "\\gdef": primitive_definition,
    "\\edef": primitive_definition,
    "\\xdef": primitive_definition,
    "\\let": let,
    "\\newenvironment": new_environment,
    "\\renewenvironment": new_environment,
    "\\NewDocumentCommand": document_command,
    "\\RenewDocumentCommand": document_command,
    "\\ProvideDocumentCommand": document_command,
    "\\DeclareDocumentCommand": document_command,
    "\\DeclarePairedDelimiter": paired_delimiter,
    "\\newif": new_switch,
    "\\newcolumntype": column_type,
}
DEFINERS = frozenset(DEFINITIONS)


def skip_branch(intake: Intake, tables: Tables, to_else: bool) -> bool:
    """Pass over a branch of a conditional to its \\fi, or to its \\else if wanted; whether it was \\else."""
    depth = 0
    while (token := intake.next()) is not None:
        if token.kind != "command":
            continue
        name = token.text
        if name in CONDITIONALS or name in tables.switches:
            depth += 1
        elif name == "\\fi":
            if not depth:
                return False
            depth -= 1
        elif name == "\\else" and to_else and not depth:
            return True
        elif name == "\\newif" or name == "\\let":
            intake.argument()
    return False
