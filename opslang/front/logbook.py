"""What a sitting at the shell has said: lines, results by number, undoing, and the script that says it all again.

`that_3` is the third result, `that` the last one.  In a line that is run, and in the script, such a reference is an
ordinary name, which a `let` line after the result declares; so the script needs nothing that the language lacks.
Knows no terminal.
"""

from __future__ import annotations

import re
from typing import Literal

from attrs import define, evolve, frozen

from opslang.front.glance import copy_of, lowered, means_alike, reads_alike
from opslang.ground.source import Source, Span
from opslang.ir.outcome import Outcome
from opslang.ir.tree import ClassElement
from opslang.meaning.scope import Key, Scope
from opslang.meaning.value import Value
from opslang.render.text import element_text
from opslang.report.diagnostic import Diagnostic, Refusal, error
from opslang.spaces.space import SpaceValue
from opslang.syntax import surface as sf
from opslang.syntax.parser import parse
from opslang.syntax.spellings import is_tex

THAT = re.compile(r"(?<![A-Za-z\\])that(?:_(\d+)|_\{(\d+)\})?(?![A-Za-z])")
_DECLARES_THAT = re.compile(r"\s*let\b[^=]*?(?<![A-Za-z])(that)(?![A-Za-z])")
_LETTERS = "rstvmnabcdefghjklpquwxyz"
LONGEST = 80_000
"""A result whose text is longer cannot be referred to: a statement has at most 100,000 characters."""

Role = Literal["declaration", "answer", "remark"]


@define(eq=False)
class Entry:
    """One line: as typed and as run, what it is, the scope before it, and what came of it."""

    typed: str
    text: str
    role: Role
    before: Scope
    outcome: Outcome | None = None
    number: int | None = None
    borrowed: tuple[tuple[int, Key], ...] = ()


@frozen
class Expanded:
    """A line as it is run; `edits`: start and end of each reference as typed, start and end of the name for it."""

    text: str
    edits: tuple[tuple[int, int, int, int], ...] = ()
    borrowed: tuple[tuple[int, Key], ...] = ()

    def typed_offset(self, offset: int, end: bool = False) -> int:
        """The place in the typed line of a place in the line that is run."""
        shift = 0
        for start, stop, at, to in self.edits:
            if offset < at or (offset == at and end):
                break
            if offset < to or (offset == to and end):
                return stop if end else start
            shift = stop - to
        return offset + shift

    def typed_span(self, span: Span) -> Span:
        """The same for a stretch."""
        start = self.typed_offset(span[0])
        return start, max(start, self.typed_offset(span[1], end=True))


def spelling(key: Key, tex: bool = False) -> str:
    """A borrowed name as it stands in a line."""
    index = str(key[1])
    return f"{key[0]}_{{{index}}}" if tex and len(index) > 1 else f"{key[0]}_{index}"


class Logbook:
    """The lines of one sitting that were answered, in order."""

    def __init__(self) -> None:
        self.entries: list[Entry] = []
        self.next_number = 1
        self._lost: dict[int, str] = {}
        self._keys: dict[int, Key] = {}
        self._seen: set[Key] = set()
        self._values: dict[int, Value] = {}
        self._definitions: dict[int, str] = {}
        self._worlds: dict[tuple[SpaceValue, int], Scope] = {}

    # --- results --------------------------------------------------------------------------------

    def results(self) -> list[Entry]:
        """The lines that have a number."""
        return [entry for entry in self.entries if entry.number is not None]

    def last_answer(self) -> Entry | None:
        """The last line with an expression, a relation or a listing."""
        return next((entry for entry in reversed(self.entries) if entry.role == "answer"), None)

    def result(self, number: int | None, span: Span = (0, 0)) -> Entry:
        """The result of that number, or the last one.  Raises Refusal where there is none."""
        results = self.results()
        if number is None and results:
            return results[-1]
        for entry in results:
            if entry.number == number:
                return entry
        if number is None:
            raise Refusal(error("no-such-result", "there is no result yet that `that` could stand for", span))
        known = f"the results: {_ranges([entry.number or 0 for entry in results])}" if results else "there is none yet"
        raise Refusal(error("no-such-result", self._lost.get(number, f"there is no result {number}"), span, known))

    def expand(self, text: str, scope: Scope) -> Expanded:
        """The line with names for its references.  Raises Refusal where a reference does not hold."""
        refused = _DECLARES_THAT.match(text)
        if refused:
            raise Refusal(error("name-taken", "`that` is kept for results, and cannot be declared", refused.span(1)))
        pieces: list[str] = []
        edits: list[tuple[int, int, int, int]] = []
        borrowed: list[tuple[int, Key]] = []
        done = size = 0
        tex = is_tex(text)
        code = re.sub(r"#[^\n]*", lambda comment: " " * len(comment.group()), text)
        for found in THAT.finditer(code):
            digits = found.group(1) or found.group(2)
            entry = self.result(int(digits) if digits else None, found.span())
            number = entry.number or 0
            if entry.before.prime != scope.prime:
                words = (
                    f"result {number} was found at the prime {entry.before.prime}, and the prime is now {scope.prime}"
                )
                raise Refusal(error("no-such-result", words, found.span()))
            self._check_length(entry, found.span())
            if not self._still_holds(entry, scope):
                words = f"result {number} was found before the prime was changed, and what it is made of is gone"
                raise Refusal(error("no-such-result", words, found.span()))
            key = self._key(number, text, scope)
            name = spelling(key, tex)
            pieces += [text[done : found.start()], name]
            size += found.start() - done
            edits.append((*found.span(), size, size + len(name)))
            size += len(name)
            done = found.end()
            borrowed.append((number, key))
        return Expanded("".join([*pieces, text[done:]]), tuple(edits), tuple(dict.fromkeys(borrowed)))

    def _still_holds(self, entry: Entry, scope: Scope) -> bool:
        """Whether a script can still say a result: right behind it, or here if its canonical form reads as it did."""
        eras = self._eras()
        if eras[self.entries.index(entry)] == eras[-1]:
            return True
        return means_alike(self._definition(entry), entry.before, scope)

    def _check_length(self, entry: Entry, span: Span) -> None:
        length = len(self._definition(entry))
        if length > LONGEST:
            words = f"result {entry.number} is too long to be referred to: {length:,} characters"
            raise Refusal(error("long-statement", words, span, "name the line it came from with `let`"))

    def _key(self, number: int, text: str, scope: Scope) -> Key:
        """A name for a result that is used for nothing else, in no space that was chosen so far either."""

        def hidden(key: Key) -> bool:
            return any(each.class_of_space(key) for each in (scope, *self._worlds.values()))

        kept = self._keys.get(number)
        if kept is not None and kept not in scope.names and not hidden(kept):
            return kept
        for letter in _LETTERS:
            key = (letter, number, 0)
            if (
                key in scope.names
                or key in self._seen
                or re.search(rf"{letter}_\{{?{number}(?!\d)", text)
                or hidden(key)
            ):
                continue
            self._keys[number] = key
            return key
        raise Refusal(error("no-such-result", f"no name is left for result {number}", (0, 0)))

    def value(self, number: int) -> Value:
        """What a reference stands for, as the script's `let` line gives it."""
        found = self._values.get(number)
        if found is None:
            entry = self.result(number)
            found = self._values[number] = self._read(self._definition(entry), entry)
        return found

    def _read(self, text: str, entry: Entry) -> Value:
        """The value of an expression at the place of a line.  Raises Refusal."""
        scope = copy_of(entry.before)
        scope.names.update({key: self.value(of) for of, key in entry.borrowed})
        statement, diagnostics = parse(Source("input", text))
        if statement is None:
            raise Refusal(diagnostics[0])
        values = lowered(statement, scope, text)
        assert values is not None
        return values[0]

    def _definition(self, entry: Entry) -> str:
        """The expression that a reference to a result stands for: its canonical form where the classes in it are
        read at its place as those that they are, else the line itself."""
        number = entry.number or 0
        found = self._definitions.get(number)
        if found is None:
            assert entry.outcome is not None and entry.outcome.element is not None
            found = element_text(entry.outcome.element)
            if not self._reads_back(found, entry):
                found = _as_written(entry)
            self._definitions[number] = found
        return found

    def _reads_back(self, text: str, entry: Entry) -> bool:
        """Whether the canonical form tells a result; that of a 0 does not tell its degree, and a class may come
        from another space, which has a class of the same name."""
        element = entry.outcome and entry.outcome.element
        if not element or not element.terms:
            return False
        if not isinstance(element, ClassElement):
            return True
        classes = {generator.of for monomial, _ in element.terms for generator, _ in monomial}
        try:
            return classes == (self._read(text, entry).classes if classes else set())
        except Refusal:
            return False

    # --- keeping --------------------------------------------------------------------------------

    def keep(self, entry: Entry) -> None:
        """Take a line in; an expression gets a number, and so does a relation that leaves a difference."""
        outcome = entry.outcome
        if outcome is not None and outcome.element is not None:
            if not outcome.sides or outcome.element.terms:
                entry.number = self.next_number
                self.next_number += 1
        self._seen |= set(entry.before.names)
        if entry.before.space is not None:
            self._worlds[entry.before.space, entry.before.prime] = entry.before
        self.entries.append(entry)

    def undo(self) -> tuple[Entry, list[Entry]] | None:
        """Take back the last declaration, and those lines after it that rest on it; None where there is none."""
        at = next((k for k in reversed(range(len(self.entries))) if self.entries[k].role == "declaration"), None)
        if at is None:
            return None
        declaration, later = self.entries[at], self.entries[at + 1 :]
        before = declaration.before
        dropped: list[Entry] = []
        kept: list[Entry] = []
        gone: set[int] = set()
        for entry in later:
            if self._rests(entry, before, gone):
                dropped.append(entry)
                if entry.number is not None:
                    gone.add(entry.number)
                    self._lost[entry.number] = f"result {entry.number} was taken back by `undo`"
            else:
                entry.before = copy_of(before)
                kept.append(entry)
        for entry in later:
            self._values.pop(entry.number or 0, None)
            self._definitions.pop(entry.number or 0, None)
        self.entries[at:] = kept
        return declaration, dropped

    def _rests(self, entry: Entry, before: Scope, gone: set[int]) -> bool:
        if entry.role == "remark":
            return False
        if any(number in gone for number, _ in entry.borrowed):
            return True
        scopes = copy_of(entry.before), copy_of(before)
        for scope in scopes:
            scope.names.update({key: self.value(number) for number, key in entry.borrowed})
        return not reads_alike(entry.text, *scopes)

    # --- the script -----------------------------------------------------------------------------

    def script(self, head: list[str]) -> str:
        """The lines, and a `let` after each result that a later line refers to."""
        eras = self._eras()
        found = {entry.number: era for entry, era in zip(self.entries, eras) if entry.number is not None}
        after: set[tuple[int, Key]] = set()
        before: list[list[tuple[int, Key]]] = []
        said: set[tuple[int, int, Key]] = set()
        for entry, era in zip(self.entries, eras):
            before.append([])
            for number, key in entry.borrowed:
                if found[number] == era:
                    after.add((number, key))
                elif (era, number, key) not in said:
                    said.add((era, number, key))
                    before[-1].append((number, key))
        lines = list(head)
        for entry, borrowed in zip(self.entries, before):
            lines += [self._let(number, key) for number, key in borrowed]
            lines.append(entry.text)
            lines += [self._let(number, key) for number, key in sorted(after) if number == entry.number]
        return "\n".join(lines) + "\n"

    def _let(self, number: int, key: Key) -> str:
        return f"let {spelling(key)} = {self._definition(self.result(number))}"

    def _eras(self) -> list[int]:
        """How often the prime was changed before each line, and before the next one: each change drops the names."""
        eras = [0]
        for entry in self.entries:
            changed = entry.role == "declaration" and entry.outcome and entry.outcome.prime != entry.before.prime
            eras.append(eras[-1] + bool(changed))
        return eras


def _as_written(entry: Entry) -> str:
    """The line of a result as an expression: of a relation, the difference of the sides that it leaves."""
    text = re.sub(r"#[^\n]*", lambda comment: " " * len(comment.group()), entry.text)
    statement, diagnostics = parse(Source("input", text))
    if isinstance(statement, sf.WhyStatement):
        statement = statement.body
    if isinstance(statement, sf.ExpressionStatement):
        return _stretch(text, statement.body.span)
    if not isinstance(statement, sf.RelationStatement):
        raise Refusal(diagnostics[0])
    assert entry.outcome is not None
    links = enumerate(entry.outcome.links)
    at = next((k for k, link in links if link.difference == entry.outcome.element), 0)
    left, right = (_stretch(text, side.span) for side in statement.sides[at : at + 2])
    return f"({left}) - ({right})"


def _stretch(text: str, span: Span) -> str:
    return "\n".join(line.rstrip() for line in text[slice(*span)].split("\n"))


def _ranges(numbers: list[int]) -> str:
    """Numbers in order, runs of them shortened."""
    parts: list[list[int]] = []
    for number in numbers:
        if parts and number == parts[-1][1] + 1:
            parts[-1][1] = number
        else:
            parts.append([number, number])
    return ", ".join(str(low) if low == high else f"{low} to {high}" for low, high in parts)


def as_typed(diagnostic: Diagnostic, line: Expanded) -> Diagnostic:
    """A diagnostic about the line that was run, as one about the line that was typed."""
    if not line.edits:
        return diagnostic

    def words(text: str) -> str:
        for number, key in line.borrowed:
            text = re.sub(rf"(?<![A-Za-z\\]){key[0]}_(?:{key[1]}|\{{{key[1]}\}})(?!\d)", f"that_{number}", text)
        return text

    return evolve(
        diagnostic,
        message=words(diagnostic.message),
        help=words(diagnostic.help),
        mend=diagnostic.mend and words(diagnostic.mend),
        span=line.typed_span(diagnostic.span),
        labels=tuple(
            [
                evolve(label, span=line.typed_span(label.span), message=words(label.message))
                for label in diagnostic.labels
            ]
        ),
    )
