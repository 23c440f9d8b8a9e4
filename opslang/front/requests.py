"""The statements of the shell: help, listings, undoing, saving and the rest.  Knows files and the sitting.

Each takes the sitting and what stands behind the word.
"""

from __future__ import annotations

import os
import re
from collections.abc import Callable, Iterable
from typing import TYPE_CHECKING, cast

from opslang.front.glance import classes_here, copy_of, tables
from opslang.front.logbook import Entry
from opslang.front.sitting import SEVERAL, Sitting
from opslang.front.status import fitted
from opslang.front.vocabulary import KEYS, NOTATIONS, SHELL_WORDS, shell_statement
from opslang.ground.source import Source
from opslang.meaning.scope import Key, Scope, spelled
from opslang.meaning.value import Value
from opslang.pipeline import DEFAULT_LIMIT
from opslang.render.show import show
from opslang.render.text import Notation, element_text
from opslang.report.diagnostic import Refusal
from opslang.syntax.layout import chunks

if TYPE_CHECKING:
    from opslang.front.console import Console


class Leave(Exception):
    """The sitting is over."""


class Requests:
    """Does what the statements of the shell ask for.  `paged` shows a text, by pages from so many screens on."""

    def __init__(self, sitting: Sitting, console: Console, paged: Callable[[str, int], None]) -> None:
        self._sitting = sitting
        self._console = console
        self._paged = paged

    def do(self, word: str, argument: str, source: Source) -> bool:
        """One statement; whether it could be done."""
        if word == "why":
            return self._sitting.why(None, source)
        takes_none = word in ("declared", "results", "undo", "afresh", "leave")
        if takes_none and argument:
            return self._misuse(word, f"`{word}` takes nothing behind it")
        done = getattr(self, f"_{word}")(argument)
        return done is not False

    def _misuse(self, word: str, message: str) -> bool:
        self._sitting.say(f"{message}. Write: {SHELL_WORDS[word]}")
        return False

    # --- help and listings ----------------------------------------------------------------------

    def _help(self, argument: str) -> bool:
        from opslang.front import help as pages

        width = min(self._sitting.width(), 100)
        if not argument:
            self._paged(pages.listing(width), SEVERAL)
            return True
        text = pages.page(argument, width)
        if text is None:
            near = pages.like(argument)
            more = f"Near it: {', '.join(near)}." if near else "`help` lists the topics."
            self._sitting.say(f"There is no help on {fitted(argument, 40)}. {more}")
            return False
        self._paged(text, SEVERAL)
        return True

    def _explain(self, argument: str) -> bool:
        from opslang.front import explain as pages

        width = min(self._sitting.width(), 100)
        if not argument:
            self._paged(pages.listing(width).replace("`opslang explain", "`explain"), SEVERAL)
            return True
        text = pages.explain(argument.strip("`'\""), width)
        if text is None:
            return self._help(argument)
        self._paged(text, SEVERAL)
        return True

    def _declared(self, _: str) -> None:
        scope = self._sitting.session.scope
        lines = [f"prime {scope.prime}", *(f"space {name} = {value.text}" for name, value in scope.spaces.items())]
        if scope.space is not None:
            lines.append(f"on {scope.space.text}: {classes_here(scope) or 'a point at this prime'}")
        lines += _names(scope, self._sitting.logbook.entries)
        lines += [f"map {value.text}" for value in scope.maps.values()]
        lines += [f"bundle {name}" for name in scope.bundles]
        self._paged("\n".join(lines), SEVERAL)

    def _results(self, _: str) -> None:
        sitting = self._sitting
        rows = []
        for entry in sitting.logbook.results():
            assert entry.outcome is not None and entry.outcome.element is not None
            name = f"that_{entry.number}"
            rows.append(
                f"{name:9} {fitted(element_text(entry.outcome.element, sitting.notation), sitting.width() - 10)}"
            )
        self._paged("\n".join(rows) or "There is no result yet.", SEVERAL)

    # --- changing the sitting -------------------------------------------------------------------

    def _undo(self, _: str) -> bool:
        sitting = self._sitting
        taken = sitting.logbook.undo()
        if taken is None:
            sitting.say("Nothing is declared that could be taken back.")
            return False
        declaration, dropped = taken
        sitting.session.scope = copy_of(declaration.before)
        sitting.say(f"taken back: {declaration.typed.strip()}")
        for entry in dropped:
            name = f" (that_{entry.number})" if entry.number is not None else ""
            sitting.say(f"and what rests on it{name}: {entry.typed.strip()}")
        return True

    def _notation(self, argument: str) -> bool:
        if argument in NOTATIONS:
            self._sitting.notation = cast(Notation, argument)
            return True
        if argument:
            return self._misuse("notation", f"There is no notation {fitted(argument, 30)}")
        self._sitting.say(f"notation {self._sitting.notation}")
        return True

    def _keys(self, argument: str) -> bool:
        if argument in KEYS:
            self._console.keys = argument
            return True
        if argument:
            return self._misuse("keys", f"There are no keys {fitted(argument, 30)}")
        self._sitting.say(f"keys {self._console.keys}")
        return True

    def _limit(self, argument: str) -> bool:
        sitting = self._sitting
        digits = argument.replace(",", "").replace("_", "")
        if digits.isascii() and digits.isdigit() and 0 < len(digits) <= 15 and int(digits) > 0:
            sitting.limit = int(digits)
            sitting.renew_engines()
        elif argument:
            return self._misuse("limit", "A limit is a number of terms, at least 1")
        sitting.say(f"limit {sitting.limit}")
        return True

    def _afresh(self, _: str) -> None:
        self._sitting.begin_afresh()

    def _leave(self, _: str) -> None:
        raise Leave

    # --- giving away ----------------------------------------------------------------------------

    def _copy(self, argument: str) -> bool:
        from opslang.front.console import clipboard_escape

        sitting = self._sitting
        named = re.fullmatch(r"(?:that)?_?\{?(\d*)\}?", argument)
        if named is None:
            return self._misuse("copy", "A result is named by its number")
        try:
            entry = _chosen(sitting, argument, named.group(1))
        except Refusal as refusal:
            sitting.say(refusal.diagnostic.message)
            return False
        if entry is None or entry.outcome is None:
            sitting.say("There is nothing yet to copy.")
            return False
        text = show(entry.outcome, "latex", sitting.width()).split(" % ")[0]
        escape = clipboard_escape(text)
        sitting.say((escape or "") + text)
        return True

    def _save(self, argument: str) -> bool:
        over = argument.startswith("over ")
        name = argument.removeprefix("over ").strip()
        if not name or name == "over":
            return self._misuse("save", "A file name is missing")
        sitting = self._sitting
        text = sitting.logbook.script(_head(sitting))
        try:
            with open(os.path.expanduser(name), "w" if over else "x", encoding="utf-8", newline="\n") as file:
                file.write(text)
        except FileExistsError:
            sitting.say(f"{name} exists and is left as it is; `save over {name}` replaces it")
            return False
        except (OSError, ValueError) as trouble:
            sitting.say(f"{name} cannot be written: {(getattr(trouble, 'strerror', None) or str(trouble)).lower()}")
            return False
        count = len(list(chunks(text.split("\n"), name)))
        sitting.say(f"{count} statement{'s' * (count != 1)} saved in {name}")
        return True

    def _read(self, argument: str) -> bool:
        from opslang.front.reading import Script, Unreadable

        if not argument:
            return self._misuse("read", "A file name is missing")
        try:
            script = Script(os.path.expanduser(argument))
            try:
                sources: Iterable[Source] = list(chunks(script.lines(), argument))
            finally:
                script.close()
        except Unreadable as unreadable:
            self._sitting.say(f"{argument}: {unreadable.fault.message}")
            return False
        for source in sources:
            if shell_statement(source.text):
                self._sitting.say(f"{argument}:{source.first_line}: a statement of the shell, passed over")
            elif not self._sitting.answer(source):
                self._sitting.say(f"{argument}: stopped at line {source.first_line}")
                return False
        return True


def _chosen(sitting: Sitting, argument: str, digits: str) -> Entry | None:
    """The last answer, the last result (`that`), or the result of a number.  Raises Refusal."""
    if not argument:
        return sitting.logbook.last_answer()
    return sitting.logbook.result(int(digits) if digits else None)


def _head(sitting: Sitting) -> list[str]:
    """The first lines of a saved script."""
    lines = ["# a session of the opslang shell"]
    if sitting.limit != DEFAULT_LIMIT:
        lines.append(f"# to be run with --limit {sitting.limit}")
    if sitting.settings.prime != 2:
        lines.append(f"prime {sitting.settings.prime}")
    return lines


def _names(scope: Scope, entries: list[Entry]) -> list[str]:
    found = [f"let {_meaning(key, value, scope.prime, entries)}" for key, value in scope.names.items()]
    for table in sorted(set(tables(scope)) - {"spaces", "names"}):
        found += [_declaration(table.removesuffix("s"), name, entries) for name in getattr(scope, table)]
    return found


def _declaration(word: str, name: str, entries: list[Entry]) -> str:
    """The line that declared something of a kind that has a table of its own, as maps have."""
    for entry in reversed(entries):
        if re.match(rf"\s*{word}\s+{re.escape(name)}(?![\w'])", entry.typed):
            return " ".join(entry.typed.split("#")[0].split())
    return f"{word} {name}"


def _meaning(key: Key, value: Value, prime: int, entries: list[Entry]) -> str:
    """A name with the line that declared it, and for an abbreviation its sort and degree."""
    from opslang.front.glance import of_value
    from opslang.ir import tree as ir

    name = spelled(key)
    if (
        isinstance(value.tree, ir.Fundamental)
        and (value.tree.of.letter, value.tree.of.index, value.tree.of.primes) == key
    ):
        order = value.tree.of.order
        kind = "an integral class" if order == 0 else f"a Z/{prime**order} class"
        return f"{name}: class, degree {value.degree}" + (f", the reduction of {kind}" if order != 1 else "")
    for entry in reversed(entries):
        head, equals, body = entry.typed.partition("=")
        words = head.split()
        if entry.role == "declaration" and equals and words[:1] == ["let"] and "".join(words[1:]) == name:
            return f"{name} = {' '.join(body.split('#')[0].split())}: {of_value(value)}"
    return f"{name}: {of_value(value)}"
