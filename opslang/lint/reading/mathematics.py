"""What commands do inside mathematics: layout falls away, alphabets become styles, text becomes one token.

Each entry of `MATHEMATICS` acts on the reader; a command without an entry is kept as it is.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import TYPE_CHECKING

from opslang.lint.reading import signs
from opslang.lint.reading.arguments import bound, mark_off, skip_arguments, skip_length
from opslang.lint.reading.document import Token
from opslang.lint.reading.intake import plain
from opslang.lint.reading.prose import PROSE, aside

if TYPE_CHECKING:
    from opslang.lint.reading.reader import Reader

Handler = Callable[["Reader", Token], None]


def drop(reader: Reader, token: Token) -> None:
    """Layout: nothing is left of it."""


def transparent(reader: Reader, token: Token) -> None:
    """\\mathclap{X} is X."""
    if token.text == "\\smash":
        reader.intake.option()
    bare(reader, token)


def bare(reader: Reader, token: Token) -> None:
    """Take the braces off the group that follows, unless it is an index or they bound something inside it."""
    intake, out = reader.intake, reader.out
    brace = intake.peek()
    if brace is None or brace.kind != "open" or intake.fuel < 0 or (out and out[-1].kind in ("sup", "sub")):
        return
    argument = intake.argument()
    if argument is None:
        return
    if any(part.text in signs.BOUNDED for part in argument):
        end = intake.last or token
        argument = [brace, *argument, bound("close", "}", end)]
    intake.push(argument)


def delimiter(reader: Reader, token: Token) -> None:
    """\\left and \\right: an invisible `.` after them goes too."""
    reader.intake.follows(".")


def gap(reader: Reader, token: Token) -> None:
    """A wide space."""
    if token.text in signs.MEASURED:
        skip_length(reader.intake)
        return
    if token.text.startswith(("\\hspace", "\\mspace")):
        length = plain(skip_arguments(reader.intake, "sm"))
        if length.startswith("-") or not length.endswith(("em", "cm", "in")):
            return
    reader.keep("gap", token.text, token)


def measured(reader: Reader, token: Token) -> None:
    """A command with a length: both go."""
    skip_length(reader.intake)


def with_arguments(reader: Reader, token: Token) -> None:
    """A command that goes with its arguments."""
    skip_arguments(reader.intake, signs.DROPPED_ARGUMENTS[token.text])


def unwrap(reader: Reader, token: Token) -> None:
    """\\textcolor{red}{X} is X."""
    skip_arguments(reader.intake, signs.UNWRAPPED[token.text])
    bare(reader, token)


def words(reader: Reader, token: Token) -> None:
    """\\text{..}: its words become one token, mathematics inside stands between two `shift`s."""
    intake = reader.intake
    brace = intake.peek()
    if brace is not None and brace.kind == "open":
        intake.pending.pop()
        reader.raise_level("}", "text", brace)
        reader.inner, reader.math = [], False
        return
    argument = intake.argument(long=False)
    if argument:
        mark_off(intake, "text", argument, token)


def style(reader: Reader, token: Token) -> None:
    """\\mathbb{Z}, \\mathrm{Sq}, \\mathcal P."""
    intake = reader.intake
    intake.follows("*", spaces=False)
    name = signs.STYLES[token.text]
    following = intake.peek()
    if following is None:
        return
    if following.kind == "open":
        intake.pending.pop()
        reader.raise_level("}", "styled", token)
        reader.keep("open", "{", following)
        reader.style = name
    elif following.kind == "run":
        letter = intake.atom()
        assert letter is not None
        before, reader.style = reader.style, name
        mark = len(reader.out or ())
        reader.signs(letter)
        reader.style = before
        if reader.out is not None and len(reader.out) > mark and letter.file == token.file:
            reader.out[-1] = reader.out[-1]._replace(start=min(token.start, letter.start))


def switch(reader: Reader, token: Token) -> None:
    """{\\rm Sq}: to the end of the group."""
    reader.style = signs.SWITCHES[token.text]


def alias(reader: Reader, token: Token) -> None:
    """Another name of the same sign."""
    reader.keep("command", signs.ALIASES[token.text], token)


def of_its_kind(reader: Reader, token: Token) -> None:
    """A command that is a sign of its own kind."""
    kind, text = signs.OF_ITS_KIND[token.text]
    if kind == "open":
        reader.open_brace(token)
    elif kind == "close":
        reader.close_brace(token)
    else:
        reader.keep(kind, text, token)


def row(reader: Reader, token: Token) -> None:
    """\\\\, \\\\*, \\\\[2pt]."""
    intake = reader.intake
    intake.follows("*", spaces=False)
    intake.option(spaces=False)
    reader.keep("row", "\\\\", token)


def noted(reader: Reader, token: Token) -> None:
    """\\overset{\\text{def}}{=}: the note as source, then the sign."""
    note = reader.intake.argument(long=False)
    if note is not None:
        reader.keep("note", plain(note), token)
    bare(reader, token)


def braced(reader: Reader, token: Token) -> None:
    """\\underbrace{X}_{note}: X, and the note goes."""
    argument = reader.intake.argument(long=False)
    if argument is None:
        return
    end = reader.intake.last or token
    following = reader.intake.peek()
    if following is not None and following.kind in ("sub", "sup"):
        reader.intake.pending.pop()
        reader.intake.argument(long=False)
    reader.intake.push([bound("open", "{", token), *argument, bound("close", "}", end)])
    bare(reader, token)


def negated(reader: Reader, token: Token) -> None:
    """\\not= and \\not\\in are one sign each."""
    if reader.intake.follows("="):
        reader.keep("command", "\\neq", token)
        return
    following = reader.intake.peek()
    if following is not None and following.text in signs.NEGATED:
        reader.intake.pending.pop()
        reader.keep("command", signs.NEGATED[following.text], token)
    else:
        reader.keep("command", token.text, token)


def equation_number(reader: Reader, token: Token) -> None:
    """\\eqno (1): the number goes, to the end of the display."""
    while (following := reader.intake.peek()) is not None:
        if following.kind in ("shift", "par", "leave", "close") or following.text in ("\\]", "\\end"):
            return
        reader.intake.pending.pop()


def first_choice(reader: Reader, token: Token) -> None:
    """\\mathchoice{A}{B}{C}{D} is A."""
    argument = reader.intake.argument()
    skip_arguments(reader.intake, "mmm")
    reader.intake.push(argument or [])


def begin(reader: Reader, token: Token) -> None:
    """An inner environment, or a display inside an inline formula that was not closed."""
    intake = reader.intake
    argument = intake.braced()
    if argument is None:
        reader.spoilt = True
        return
    name = plain(argument)
    if name in reader.tables.environments:
        PROSE["\\begin"](reader, token._replace(text=name))
        return
    inline = all(level.kind == "inline" for level in reader.levels if level.role == "formula")
    display = name in signs.MATH_ENVIRONMENTS and name not in ("math", "tikzcd", "tikz-cd")
    text = (name in signs.TEXT_ENVIRONMENTS and name not in signs.INNER_ENVIRONMENTS) or name in reader.tables.theorems
    if text or (display and inline):
        reader.give_up(token)
        PROSE["\\begin"](reader, token._replace(text=name))
        return
    skip_arguments(intake, signs.INNER_ENVIRONMENTS.get(name, ""))
    last = intake.last
    end = last.end if last is not None and last.file == token.file and last.end > token.end else token.end
    reader.raise_level("end:" + name, "begin", token)
    if reader.out is not None:
        reader.out.append(Token("begin", name, token.start, end, token.file, "", token.within))


def close_with(reader: Reader, token: Token) -> None:
    """\\) and \\]."""
    at = reader.find_level(token.text)
    if at >= 0:
        reader.close_at(at, token)
    else:
        reader.give_up(token)


def open_again(reader: Reader, token: Token) -> None:
    """\\( or \\[ inside mathematics: what was open is lost, this one begins."""
    reader.give_up(token)
    PROSE[token.text](reader, token)


def begins_anew(reader: Reader, token: Token) -> None:
    """A heading or an item inside mathematics: the formula was not closed."""
    reader.give_up(token)
    PROSE[token.text](reader, token)


def intertext(reader: Reader, token: Token) -> None:
    """\\intertext{..}: the display so far is a formula, the words are text, and the display goes on."""
    argument = reader.intake.argument()
    level = reader.levels[-1] if reader.levels else None
    if argument is None or level is None or level.role != "formula" or level.kind == "inline":
        return
    kind, closer = level.kind, level.closer
    reader.levels.pop()
    end = reader.intake.last or token
    reader.end_formula(level, token._replace(end=token.start), proper=True)
    reader.intake.push(
        [
            bound("enter", "intertext", token),
            *argument,
            bound("leave", "leave", token),
            bound("resume", kind + "\t" + closer, end._replace(start=end.end)),
        ]
    )


def arrow(reader: Reader, token: Token) -> None:
    """\\arrow[r, "\\Sq^2"] and \\ar[r]^{\\Sq^2}: each label is a formula of its own."""
    intake = reader.intake
    intake.follows("*", spaces=False)
    labels = quoted(intake.option() or [])
    following = intake.peek(spaces=False)
    if token.text in ("\\arrow", "\\ar") and following is not None and following.kind == "open":
        intake.braced()  # the older way: direction, then labels
        while (label := intake.braced()) is not None:
            labels.append(label)
    while following is not None and following.kind in ("sup", "sub"):
        intake.pending.pop()
        labels.append(intake.argument() or [])
        following = intake.peek(spaces=False)
    for label in reversed(labels):
        mark_off(intake, "label", label, token)


def quoted(tokens: list[Token]) -> list[list[Token]]:
    """What stands between double quotes."""
    labels: list[list[Token]] = []
    current: list[Token] | None = None
    for token in tokens:
        if token.kind != "run" or '"' not in token.text:
            if current is not None:
                current.append(token)
            continue
        at = 0
        for part in token.text.split('"'):
            if at:
                if current is None:
                    current = []
                else:
                    labels.append(current)
                    current = None
            if part and current is not None:
                first = token.text.index(part, max(0, at - 1))
                start = token.start + first if token.within is None else token.start
                end = start + len(part) if token.within is None else token.end
                current.append(token._replace(text=part, start=start, end=end, within=_part(token, first, part)))
            at += len(part) + 1
    return labels


def _part(token: Token, first: int, part: str) -> tuple[int, int, int] | None:
    if token.within is None:
        return None
    file, start, _ = token.within
    return file, start + first, start + first + len(part)


def diagram(reader: Reader, token: Token) -> None:
    """\\xymatrix@C=..{ .. }: a group that is an inner environment."""
    intake = reader.intake
    while (following := intake.peek()) is not None and following.kind == "run":
        intake.pending.pop()
    if following is not None and following.kind == "open":
        intake.pending.pop()
        level = reader.raise_level("}", "begin", token)
        level.kind = "xymatrix"
        reader.keep("begin", "xymatrix", token)


def _table() -> dict[str, Handler]:
    table: dict[str, Handler] = {}
    plan: tuple[tuple[object, Handler], ...] = (
        (signs.DROPPED_IN_MATH, drop),
        (signs.TRANSPARENT, transparent),
        (("\\ ", "\\\n", "\\"), drop),
        (signs.DROPPED_ARGUMENTS, with_arguments),
        (signs.MEASURED, measured),
        (signs.GAPS, gap),
        (signs.UNWRAPPED, unwrap),
        (signs.WORDS_IN_MATH, words),
        (signs.STYLES, style),
        (signs.SWITCHES, switch),
        (signs.ALIASES, alias),
        (signs.OF_ITS_KIND, of_its_kind),
        (signs.NOTED, noted),
        (signs.BRACED_NOTES, braced),
        (signs.ARROWS, arrow),
        (signs.ASIDES, aside),
        (signs.SECTIONS, begins_anew),
        (("\\item", "\\bibitem", "\\par", "\\input", "\\include"), begins_anew),
        (("\\(", "\\["), open_again),
        (("\\)", "\\]"), close_with),
        (("\\left", "\\right", "\\middle"), delimiter),
        (("\\intertext", "\\shortintertext"), intertext),
        (("\\xymatrix",), diagram),
        (("\\\\",), row),
        (("\\begin",), begin),
        (("\\mathchoice",), first_choice),
        (("\\not",), negated),
        (("\\eqno", "\\leqno"), equation_number),
    )
    for names, handler in plan:
        assert isinstance(names, (frozenset, dict, tuple))
        for name in names:
            table[name] = handler
    for name in ("\\end", "\\csname", "\\newtheorem", "\\char", "\\endinput"):
        table[name] = PROSE[name]
    return table


MATHEMATICS = _table()
