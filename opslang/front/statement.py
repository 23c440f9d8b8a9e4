"""Answers one item of a script: a statement, or a fault of the file.  Knows no files and writes nothing.

The same desk serves a run in one process and each worker of `--jobs`, so both give the same bytes.
"""

from __future__ import annotations

from collections.abc import Callable
from time import monotonic
from typing import TYPE_CHECKING, Any, Union, cast

from attrs import frozen

from opslang.front.output import Channel
from opslang.front.reading import Fault
from opslang.ground.source import Source
from opslang.report.diagnostic import error
from opslang.report.render import Paint, plain, render, render_file

if TYPE_CHECKING:
    from opslang.ir.outcome import Outcome
    from opslang.pipeline import Session
    from opslang.render.text import Notation

PATIENCE = 0.5
"""Seconds that a statement must have taken for Ctrl-C to stop it alone, and not the run."""
SECOND = 2.0
"""A second Ctrl-C within so many seconds ends the run."""

WELL, NOT_TRUE, FAULTY, INTERRUPTED = 0, 1, 2, 130
"""The exit statuses, each beating the ones before it."""

_STATUS = {"error": FAULTY, "false": NOT_TRUE, "undecided": NOT_TRUE}


@frozen
class Settings:
    """How statements are answered and shown."""

    output: str = "text"
    prime: int = 2
    limit: int | None = None
    width: int = 80
    both: bool = False
    paint: Paint = plain
    echo: bool = False
    """Whether an expression is shown behind its result, as in a script of many."""


@frozen
class Opened:
    """A new script begins: nothing declared before holds in it."""

    name: str


@frozen
class Trouble:
    """A script, or a line of it, that gives nothing."""

    name: str
    fault: Fault


Item = Union[Opened, Trouble, Source]


@frozen
class Answer:
    """What is to be written, in order, and the exit status that it asks for."""

    pieces: tuple[tuple[Channel, str], ...] = ()
    status: int = WELL
    statement: bool = False
    unread: bool = False


class Desk:
    """Answers items one after another; holds the session of the current script."""

    def __init__(self, settings: Settings) -> None:
        self._settings = settings
        self._session: Session | None = None
        self._interrupted = -SECOND
        self._write: Callable[[dict[str, Any]], str] | None = None

    def answer(self, item: Item) -> Answer:
        """The answer to one item.  Lets KeyboardInterrupt pass where Ctrl-C is to end the run."""
        if isinstance(item, Opened):
            self._session = self._new_session()
            return Answer()
        if isinstance(item, Trouble):
            return self._troubled(item)
        started = monotonic()
        try:
            return self._shown(self._outcome(item))
        except KeyboardInterrupt:
            now = monotonic()
            if now - started < PATIENCE or now - self._interrupted < SECOND:
                raise
            self._interrupted = now
            return self._shown(
                self._failed(item, "interrupted", f"interrupted after {now - started:.1f} s"), INTERRUPTED
            )

    def _new_session(self) -> Session:
        from opslang.pipeline import Session

        limit = {} if self._settings.limit is None else {"limit": self._settings.limit}
        return Session(self._settings.prime, both=self._settings.both, **limit)

    def _outcome(self, source: Source) -> Outcome:
        if self._session is None:
            self._session = self._new_session()
        try:
            return self._session.run(source)
        except Exception as fault:  # the session promises not to raise; a fault of ours must not end the user's run
            return self._failed(source, "internal-fault", f"opslang failed here: {type(fault).__name__}: {fault}")

    def _shown(self, outcome: Outcome, status: int = WELL) -> Answer:
        status = max(status, _STATUS.get(outcome.verdict, WELL))
        if self._settings.output == "jsonl":
            return Answer((("result", self._record(outcome)),), status, True)
        from opslang.render.show import show

        pieces: list[tuple[Channel, str]] = []
        for diagnostic in outcome.diagnostics:
            text = render(diagnostic, outcome.source, self._settings.paint, self._settings.width)
            pieces.append(("diagnostic", text + "\n"))
        text = show(outcome, cast("Notation", self._settings.output), self._settings.width, self._settings.echo)
        if text:
            pieces.append(("result", text + "\n"))
        return Answer(tuple(pieces), status, True)

    def _record(self, outcome: Outcome) -> str:
        if self._write is None:
            from json import JSONEncoder

            self._write = JSONEncoder().encode
        from opslang.render.record import record

        return self._write(record(outcome, outcome.source.name)) + "\n"

    def _troubled(self, trouble: Trouble) -> Answer:
        fault = trouble.fault
        if fault.line is not None and self._settings.output == "jsonl":
            return self._shown(self._failed(Source(trouble.name, "", fault.line), fault.name, fault.message))
        text = render_file(fault.name, fault.message, trouble.name, fault.line, self._settings.paint)
        return Answer((("diagnostic", text + "\n"),), FAULTY, unread=fault.line is None)

    def _failed(self, source: Source, name: str, message: str) -> Outcome:
        """The outcome of a statement that could not be worked on."""
        from opslang.ir.outcome import Outcome
        from opslang.pipeline import kind_of

        text = source.text
        start = len(text) - len(text.lstrip())
        span = (start, max(start, len(text.rstrip())))
        prime = self._settings.prime if self._session is None else self._session.scope.prime
        found = (error(name, message, span),)
        return Outcome(source, span, kind_of(text), "error", prime, name=name, message=message, diagnostics=found)
