"""What commands do in text: structure is noted, references fall away, what prints a sign prints it.

Each entry of `PROSE` acts on the reader; a command without an entry is dropped and its arguments are read as text.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import TYPE_CHECKING
from unicodedata import normalize

from opslang.lint.reading import signs
from opslang.lint.reading.arguments import bound, mark_off, skip_arguments, skip_length
from opslang.lint.reading.document import Token
from opslang.lint.reading.intake import plain
from opslang.lint.reading.macros import expand

if TYPE_CHECKING:
    from opslang.lint.reading.reader import Reader

Handler = Callable[["Reader", Token], None]


def printed(reader: Reader, token: Token) -> None:
    """A command that prints a sign."""
    if token.text == "\\\\" and reader.out is None:
        reader.intake.follows("*", spaces=False)
        reader.intake.option(spaces=False)
    reader.say(signs.PRINTED[token.text], token)


def accent(reader: Reader, token: Token) -> None:
    """An accent over the next letter."""
    argument = reader.intake.argument(long=False)
    if not argument:
        return
    letters = "".join({"\\i": "i", "\\j": "j"}.get(part.text, part.text) for part in argument)
    reader.say(normalize("NFC", letters[:1] + signs.ACCENTS[token.text] + letters[1:]), token)


def with_arguments(reader: Reader, token: Token) -> None:
    """A command that goes with its arguments."""
    skip_arguments(reader.intake, signs.DROPPED_ARGUMENTS[token.text])


def unwrap(reader: Reader, token: Token) -> None:
    """\\textcolor{red}{words} is words."""
    skip_arguments(reader.intake, signs.UNWRAPPED[token.text])


def measured(reader: Reader, token: Token) -> None:
    """\\vskip 3pt."""
    skip_length(reader.intake)


def spaced(reader: Reader, token: Token) -> None:
    """\\hspace{2em}."""
    skip_arguments(reader.intake, "sm")
    reader.say(" ", token)


def aside(reader: Reader, token: Token) -> None:
    """A footnote, a caption, a margin note: a text of its own that waits for the end of the paragraph."""
    intake = reader.intake
    intake.follows("*", spaces=False)
    if token.text == "\\captionof":
        intake.argument()
    intake.option()
    brace = intake.peek()
    if brace is None or brace.kind != "open":
        return
    intake.pending.pop()
    level = reader.raise_level("}", "aside", brace)
    level.aside = reader.page.begin_aside(signs.ASIDES[token.text])
    reader.math, reader.out, reader.inner, reader.style, reader.spoilt = False, None, [], "", False


def heading(reader: Reader, token: Token) -> None:
    """\\section{..}: what is still open is given up, the title is text with the place `title`."""
    if reader.page.place in ("body", "title", "abstract"):
        _put_in_order(reader)
    intake = reader.intake
    intake.follows("*", spaces=False)
    intake.option()
    brace = intake.peek()
    reader.page.end_paragraph()
    if brace is None or brace.kind != "open":
        return
    intake.pending.pop()
    level = reader.raise_level("}", "heading", brace)
    level.at = len(reader.page.pieces)
    level.kind = str(signs.SECTIONS[token.text])
    reader.page.section_number += 1
    level.before = reader.page.set_place("title")


def _put_in_order(reader: Reader) -> None:
    """Before a heading: braces and footnotes that were never closed end here."""
    while reader.levels and reader.levels[-1].closer != "leave" and reader.levels[-1].role in ("aside", "group"):
        reader.drop_level(reader.levels[-1].token, proper=False)


def item(reader: Reader, token: Token) -> None:
    """\\item and \\item[..]: a paragraph begins; the label has a place of its own."""
    reader.page.end_paragraph()
    reader.intake.follows("<", spaces=False) and reader.intake.until((("run", ">"),))
    label = reader.intake.option()
    if label:
        mark_off(reader.intake, "item", label, token)


def begin(reader: Reader, token: Token) -> None:
    """\\begin{name}: mathematics, an environment of the draft's own, or a stretch of text."""
    intake = reader.intake
    name = token.text
    if name == "\\begin":
        argument = intake.braced()
        if argument is None:
            return
        name = plain(argument)
    last = intake.last
    if last is not None and last.file == token.file and last.end > token.end and token.within is None:
        token = token._replace(end=last.end)
    if name == "document":
        begin_document(reader)
    elif intake.silent:
        return
    elif name in reader.tables.environments:
        begin_own(reader, token, name)
    elif name in signs.MATH_ENVIRONMENTS:
        skip_arguments(intake, signs.MATH_ENVIRONMENTS[name])
        if name.startswith("empheq"):
            name = plain(intake.braced() or [])
            reader.open_formula(name, "end:empheq", token)
            return
        kind = {"math": "inline", "displaymath": "display"}.get(name, name)
        reader.open_formula(kind, "end:" + name, token)
    else:
        begin_text(reader, token, name)


def begin_document(reader: Reader) -> None:
    """The preamble is over."""
    reader.intake.speak()
    reader.levels.clear()


def begin_own(reader: Reader, token: Token, name: str) -> None:
    """An environment that the draft defines."""
    if not reader.math:
        reader.raise_level("end:" + name, "environment", token)
        reader.page.begin_environment(name)
    if reader.affordable(token):
        expand(reader.tables.environments[name][0], token, reader.intake)


def begin_text(reader: Reader, token: Token, name: str) -> None:
    """A theorem, a proof, a list, a figure."""
    if reader.out is not None:
        return
    intake = reader.intake
    letters = signs.TEXT_ENVIRONMENTS.get(name)
    title = None
    if letters is not None:
        skip_arguments(intake, letters)
    else:
        title = intake.option()
    reader.raise_level("end:" + name, "environment", token)
    reader.page.begin_environment(name, plain(title or ()))
    if title:
        mark_off(intake, "title", title, token)


def end(reader: Reader, token: Token) -> None:
    """\\end{name}."""
    intake = reader.intake
    argument = intake.braced()
    if argument is None:
        return
    name = plain(argument)
    last = intake.last
    if last is not None and last.file == token.file and last.end > token.end and token.within is None:
        token = token._replace(end=last.end)
    if name == "document":
        intake.pending.clear()
        intake.frames.clear()
        return
    if name in reader.tables.environments:
        intake.push([bound("leave", "end:" + name, token)])
        if reader.affordable(token):
            expand(reader.tables.environments[name][1], token, intake)
        return
    at = reader.find_level("end:" + name)
    if at >= 0:
        reader.close_at(at, token)
    elif reader.math:
        reader.give_up(token)


def open_with(reader: Reader, token: Token) -> None:
    """\\( and \\[."""
    closer = {"\\(": "\\)", "\\[": "\\]"}[token.text]
    if reader.out is not None:
        reader.open_inner(closer, token)
    else:
        reader.open_formula("inline" if closer == "\\)" else "display", closer, token)


def ensure(reader: Reader, token: Token) -> None:
    """\\ensuremath{X} in text: a formula."""
    argument = reader.intake.argument(long=False)
    if argument:
        mark_off(reader.intake, "ensure", argument, token)


def new_theorem(reader: Reader, token: Token) -> None:
    """\\newtheorem{lem}[thm]{Lemma}: a name of an environment."""
    reader.intake.follows("*", spaces=False)
    reader.tables.theorems.add(plain(reader.intake.braced() or []))
    skip_arguments(reader.intake, "omo")


def named_command(reader: Reader, token: Token) -> None:
    """\\csname..\\endcsname."""
    found = reader.intake.until((("command", "\\endcsname"),))
    if found is not None:
        reader.intake.push([bound("command", "\\" + plain(found), token)])


def expand_after(reader: Reader, token: Token) -> None:
    """\\expandafter\\def\\csname..\\endcsname: the name is put together before it is defined."""
    first = reader.intake.atom()
    following = reader.intake.peek()
    if following is not None and following.text == "\\csname":
        reader.intake.pending.pop()
        named_command(reader, following)
    elif following is not None and following.text == "\\expandafter":
        reader.intake.pending.pop()  # a chain of them: what they reach is expanded in its turn
    if first is not None:
        reader.intake.push([first])


def draw_in(reader: Reader, token: Token) -> None:
    """\\input{file}, \\include{file}, \\input file."""
    argument = reader.intake.braced()
    if argument is None:
        run = reader.intake.peek()
        if run is None or run.kind != "run":
            return
        name = run.text.split()[0]
        for _ in name:
            reader.intake.atom()
    else:
        name = plain(argument)
    reader.project.draw_in(reader, name, token)


def draw_from(reader: Reader, token: Token) -> None:
    """\\import{folder/}{file}."""
    folder, name = reader.intake.braced(), reader.intake.braced()
    if folder is not None and name is not None:
        reader.project.draw_in(reader, plain(folder).rstrip("/") + "/" + plain(name), token)


def packages(reader: Reader, token: Token) -> None:
    """\\usepackage[..]{a,b}: those that lie beside the draft."""
    reader.intake.option()
    names = plain(reader.intake.braced() or [])
    reader.intake.option()
    ending = ".cls" if token.text in ("\\documentclass", "\\LoadClass") else ".sty"
    reader.project.packages(reader, [name.strip() for name in names.split(",")], ending)


def end_of_file(reader: Reader, token: Token) -> None:
    """\\endinput."""
    if reader.intake.frames:
        reader.intake.leave_file()


def new_paragraph(reader: Reader, token: Token) -> None:
    """\\par."""
    reader.page.end_paragraph()


def skip_two(reader: Reader, token: Token) -> None:
    """\\char`\\x and the like."""
    reader.intake.follows("`")
    reader.intake.atom()


def _table() -> dict[str, Handler]:
    table: dict[str, Handler] = {}
    plan: tuple[tuple[object, Handler], ...] = (
        (signs.PRINTED, printed),
        (signs.ACCENTS, accent),
        (signs.DROPPED_ARGUMENTS, with_arguments),
        (signs.UNWRAPPED, unwrap),
        (signs.MEASURED, measured),
        (signs.ASIDES, aside),
        (signs.SECTIONS, heading),
        (("\\hspace", "\\hspace*"), spaced),
        (("\\item", "\\bibitem"), item),
        (("\\(", "\\["), open_with),
        (("\\input", "\\include", "\\subfile", "\\subfileinclude"), draw_in),
        (("\\import", "\\subimport"), draw_from),
        (("\\usepackage", "\\RequirePackage", "\\documentclass", "\\LoadClass"), packages),
    )
    for names, handler in plan:
        assert isinstance(names, (frozenset, dict, tuple))
        for name in names:
            table[name] = handler
    return table | {
        "\\begin": begin,
        "\\end": end,
        "\\ensuremath": ensure,
        "\\newtheorem": new_theorem,
        "\\csname": named_command,
        "\\expandafter": expand_after,
        "\\endinput": end_of_file,
        "\\par": new_paragraph,
        "\\char": skip_two,
    }


PROSE = _table()
