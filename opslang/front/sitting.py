"""One sitting at the shell: what is declared, what was answered, how answers are shown.  Knows no line editor.

Lines of the language are answered here, those of the shell in `requests.py`.  An answer that is stopped leaves the
scope as it was before the line, and the engines are made anew, since they may have been stopped anywhere.
"""

from __future__ import annotations

import re
from collections.abc import Callable, Iterable
from textwrap import wrap

from attrs import evolve

from opslang.front.glance import LONGEST, Glance, copy_of, glance, same_scope
from opslang.front.logbook import THAT, Entry, Expanded, Logbook, Role, as_typed
from opslang.front.pasting import displayed, on_one_line, opens_display
from opslang.front.prose import MAY_BE_PROSE, Prose, prose
from opslang.front.statement import Settings
from opslang.front.vocabulary import BRIEF_LEAVE, shell_statement
from opslang.front.working import Stopped, Work
from opslang.ground.source import Source
from opslang.ir.outcome import Outcome
from opslang.meaning.scope import Scope
from opslang.pipeline import DEFAULT_LIMIT, Session, kind_of
from opslang.render.show import show
from opslang.render.text import Notation
from opslang.report.diagnostic import Diagnostic, Refusal, error
from opslang.report.render import Paint, cells, plain, render
from opslang.syntax.layout import chunks, is_complete

_WHY_THAT = re.compile(r"\s*why\s+(that(?:_(\d+)|_\{(\d+)\})?)\s*\Z")


SEVERAL = 4
"""Screens that something other than a derivation may fill before it is shown by pages."""

TYPED = "\0typed"
"""Stands for the file name of what was typed."""


def _shorter(text: str, paint: Paint = plain) -> str:
    """A diagnostic about typed text: no file name; the column is where the marks stand, and line 1 need not be said."""
    place = re.compile(re.escape(paint("place", "\\x00typed:@:")).replace("@", r"(\d+):\d+") + " ")
    return place.sub(lambda found: "" if found.group(1) == "1" else f"line {found.group(1)}: ", text)


class Sitting:
    """The state of one sitting.  `say` writes text to the terminal, `paged` shows what may be long, by pages
    where it fills so many screens; `width` gives the columns."""

    def __init__(
        self,
        settings: Settings,
        work: Work,
        say: Callable[[str], None],
        paged: Callable[[str, int], None],
        width: Callable[[], int],
    ) -> None:
        self.settings = settings
        self.limit = settings.limit or DEFAULT_LIMIT
        self.notation: Notation = {"unicode": "unicode", "latex": "latex"}.get(settings.output, "text")  # type: ignore[assignment]
        self.logbook = Logbook()
        self.session = self._new_session(settings.prime)
        self.width = width
        self._work = work
        self._say = say
        self._paged = paged

    def _new_session(self, prime: int) -> Session:
        return Session(prime, self.limit, self.settings.both)

    def begin_afresh(self) -> None:
        """Forget everything that was said."""
        self.logbook = Logbook()
        self.session = self._new_session(self.settings.prime)

    def renew_engines(self) -> None:
        """New engines, with the limit of now and nothing remembered; what is declared stays."""
        scope = self.session.scope
        self.session = self._new_session(scope.prime)
        self.session.scope = scope

    # --- saying ---------------------------------------------------------------------------------

    def say(self, text: str) -> None:
        """Lines to the terminal."""
        if text:
            self._say(text + "\n")

    def complain(self, diagnostic: Diagnostic, source: Source) -> None:
        """A diagnostic to the terminal, its message broken to the width."""
        width = self.width()
        source = evolve(source, name=TYPED if source.name == "input" else source.name)
        text = _shorter(render(diagnostic, source, plain, width))
        if all(cells(row) <= width for row in text.split("\n")):
            paint = self.settings.paint
            self.say(_shorter(render(diagnostic, source, paint, width), paint))
            return
        head, *rows = text.split("\n")
        lines = wrap(head, width, subsequent_indent="    ")
        label = f"{diagnostic.severity}:"
        lines[0] = lines[0].replace(label, self.settings.paint(diagnostic.severity, label), 1)
        marked = render(evolve(diagnostic, message="", help="", labels=()), source, plain, width).split("\n")[1:]
        lines += marked
        lines += [
            line
            for row in rows[len(marked) :]
            for line in wrap(row.strip(), width, initial_indent="    ", subsequent_indent="    ")
        ]
        self.say("\n".join(lines))

    # --- lines ----------------------------------------------------------------------------------

    def complete(self, text: str) -> bool:
        """Whether a text typed so far waits for no further line."""
        if not text.strip() or shell_statement(text.strip()) is not None:
            return True
        if self.prose(text) is not None:
            return True
        if opens_display(text):
            return text.endswith("\n")
        return displayed(text, "input") is not None or is_complete(text)

    def prose(self, text: str) -> Prose | None:
        """The formulas of an input with words around them; None for an input that is none."""
        if not MAY_BE_PROSE.search(text) or shell_statement(text) is not None:
            return None
        return prose(text, "input")

    def own(self, text: str) -> tuple[str, str] | None:
        """Word and argument of a statement of the shell; None for a line of the language."""
        if text.strip() == BRIEF_LEAVE:
            scope = self.session.scope
            key = (BRIEF_LEAVE, None, 0)
            return None if key in scope.names or scope.class_of_space(key) else ("leave", "")
        return shell_statement(text)

    def statements(self, text: str) -> Iterable[Source]:
        """The statements of an input, one of the shell wherever a line begins with its word."""
        display = displayed(text, "input")
        if display is not None:
            yield from display
            return
        pasted = self.prose(text)
        if pasted is not None:
            yield from pasted.sources
            return
        held: list[str] = []
        first = 1
        for number, line in enumerate([*text.splitlines(), ""], start=1):
            own = shell_statement(line) is not None and is_complete("\n".join(held))
            if own or number > len(text.splitlines()):
                for source in chunks(held, "input"):
                    yield evolve(source, first_line=source.first_line + first - 1)
                held, first = [], number + 1
                if own:
                    yield Source("input", line, number)
            else:
                held.append(line)

    def answer(self, source: Source) -> bool:
        """Answer a line of the language; whether it could be answered."""
        again = _WHY_THAT.match(source.text)
        if again:
            digits = again.group(2) or again.group(3)
            return self.why(int(digits) if digits else None, source)
        before = copy_of(self.session.scope)
        try:
            line = self.logbook.expand(source.text, before)
            values = {key: self.logbook.value(number) for number, key in line.borrowed}
        except Refusal as refusal:
            self.complain(refusal.diagnostic, source)
            return False
        self.session.scope.names.update(values)
        outcome = self._outcome(evolve(source, text=line.text), before)
        for key in values:
            self.session.scope.names.pop(key, None)
        if outcome is None:
            return False
        found = [as_typed(diagnostic, line) for diagnostic in outcome.diagnostics]
        self._show(evolve(outcome, source=source, span=line.typed_span(outcome.span), diagnostics=tuple(found)))
        if outcome.verdict == "error":  # the script will not hold the line, so it must leave no trace either
            self.session.scope = before
        else:
            role: Role = "declaration" if outcome.kind == "declaration" else "answer"
            whole = len(list(chunks(line.text.split("\n"), "input"))) == 1
            text = line.text if whole else on_one_line(line.text)
            self.logbook.keep(Entry(source.text, text, role, before, outcome, None, line.borrowed))
        return outcome.verdict != "error"

    def _outcome(self, source: Source, before: Scope) -> Outcome | None:
        """The outcome of a line; None, and the scope as before, where it was stopped."""
        try:
            return self._work.run(lambda: self.session.run(source), self._progress)
        except Stopped as stopped:
            self.session.scope = before
            self.renew_engines()
            self.say(f"{stopped}; the session goes on")
            return None
        except Exception as fault:  # the session promises not to raise; a fault of ours must not end the sitting
            self.session.scope = before
            self.renew_engines()
            said = error(
                "internal-fault", f"opslang failed here: {type(fault).__name__}: {fault}", (0, len(source.text))
            )
            return Outcome(source, said.span, kind_of(source.text), "error", before.prime, diagnostics=(said,))

    def _progress(self) -> str:
        engine = self.session.engine()
        used = max(0, engine.budget.limit - engine.budget.left)
        text = f"  {used:,} of at most {engine.budget.limit:,} terms   Ctrl-C stops it"
        return text if len(text) + 8 < self.width() else "  Ctrl-C stops it"

    def _show(self, outcome: Outcome) -> None:
        for diagnostic in outcome.diagnostics:
            if diagnostic.name == "too-large" and "--limit" in diagnostic.help:
                diagnostic = evolve(diagnostic, help=diagnostic.help.replace("--limit", "limit"))
            self.complain(diagnostic, outcome.source)
        text = show(outcome, self.notation, self.width())
        if outcome.kind == "element" or not text:
            self.say(text)
        else:  # keys that are typed ahead go to the pager, so it comes only where it is wanted
            self._paged(text, 1 if outcome.kind == "derivation" else SEVERAL)

    def why(self, number: int | None, source: Source) -> bool:
        """Derive the last answer, or the result of that number, in the scope in which it was found."""
        try:
            entry = self.logbook.last_answer() if number is None else self.logbook.result(number)
            if entry is None or entry.outcome is None or entry.outcome.kind == "listing":
                raise Refusal(
                    error(
                        "no-such-result",
                        "there is no formula yet to derive",
                        (0, len(source.text)),
                        "as in: why Sq^2 Sq^2",
                    )
                )
        except Refusal as refusal:
            self.complain(refusal.diagnostic, source)
            return False
        text = entry.text if entry.outcome.kind == "derivation" else f"why {entry.text.lstrip()}"
        here = self.session.scope
        scope = copy_of(entry.before)
        same = same_scope(scope, here)
        scope.names.update({key: self.logbook.value(of) for of, key in entry.borrowed})
        self.session.scope = scope
        try:
            outcome = self._outcome(Source("input", text), scope)
        finally:
            self.session.scope = here
        if outcome is None:
            return False
        self._show(outcome)
        if same and outcome.verdict != "error":
            self.logbook.entries.append(
                Entry(source.text, text, "answer", copy_of(here), outcome, None, entry.borrowed)
            )
        return outcome.verdict != "error"

    def remark(self, text: str) -> None:
        """Keep a line that is a comment."""
        self.logbook.entries.append(Entry(text, text, "remark", copy_of(self.session.scope)))

    # --- the line at the bottom -----------------------------------------------------------------

    def look(self, text: str) -> tuple[str, str, str]:
        """What an input is: words, tone and place."""
        if len(text) > LONGEST:
            return f"{len(text):,} characters", "quiet", ""
        text = text.rstrip("\n")
        if text.strip() == BRIEF_LEAVE and self.own(text):
            return "write: leave", "quiet", ""
        if not self.complete(text):
            return "goes on in the next line", "quiet", ""
        sources = list(self.statements(text))
        if len(sources) != 1:
            return (f"{len(sources)} statements" if sources else "a comment"), "quiet", ""
        source = sources[0]
        try:
            seen, line = self._glance(source)
        except Refusal as refusal:
            seen, line = None, Expanded(source.text)
            words, tone, span = refusal.diagnostic.message, "error", refusal.diagnostic.span
        if seen is not None:
            words, tone, span = seen.words, seen.tone, line.typed_span(seen.span) if seen.span else (0, 0)
        if tone == "quiet":
            return words, tone, ""
        row, column = source.position(span[0])
        return words, tone, f"column {column}" if "\n" not in text.strip("\n") else f"line {row}, column {column}"

    def _glance(self, source: Source) -> tuple[Glance, Expanded]:
        scope = self.session.scope
        line = self.logbook.expand(source.text, scope) if THAT.search(source.text) else Expanded(source.text)
        if line.borrowed:
            scope = copy_of(scope)
            scope.names.update({key: self.logbook.value(number) for number, key in line.borrowed})
        seen = glance(evolve(source, text=line.text), scope)
        words = as_typed(error("", seen.words, (0, 0)), line).message
        return evolve(seen, words=words), line
