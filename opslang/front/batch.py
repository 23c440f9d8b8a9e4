"""Runs whole scripts: reads, answers, writes, and settles the exit status.  Knows nothing of what statements mean.

Memory stays flat however long a script is: one statement is held at a time (with `--jobs`, a few blocks).
"""

from __future__ import annotations

import gc
import signal
import sys
from collections.abc import Callable, Generator, Iterable, Iterator
from types import FrameType

from opslang.front.output import Departed, Failed, Output, paint_for, report, width_of
from opslang.front.progress import Progress
from opslang.front.reading import Script, Unreadable
from opslang.front.statement import INTERRUPTED, WELL, Answer, Desk, Item, Opened, Settings, Trouble
from opslang.ground.source import Source

TERMINATED = 143
PROGRAM = "opslang"


class Terminated(BaseException):
    """The process was asked to end."""


def settings_for(
    output: str = "text",
    prime: int = 2,
    limit: int | None = None,
    width: int | None = None,
    both: bool = False,
    colour: str = "auto",
) -> Settings:
    """Settings as they are asked for on a command line, fitted to the streams of this process."""
    return Settings(output, prime, limit, width or width_of(sys.stdout), both, paint_for(colour, sys.stderr))


def named(expressions: tuple[str, ...]) -> tuple[Source, ...]:
    """Expressions of a command line under the names that messages call them by."""
    if len(expressions) == 1:
        return (Source("argument", expressions[0]),)
    return tuple([Source(f"argument {number}", text) for number, text in enumerate(expressions, 1)])


def items(names: Iterable[str], before_read: Callable[[], None], progress: Progress) -> Iterator[Item]:
    """Everything that the scripts hold, in order.  Reads on only as far as it must."""
    from opslang.syntax.layout import chunks

    for name in names:
        try:
            script = Script(name, before_read)
        except Unreadable as refusal:
            yield Trouble(name, refusal.fault)
            continue
        progress.reads(script)
        yield Opened(name)
        try:
            for source in chunks(script.lines(), name):
                yield from _faults(script, source.first_line)
                yield source
            yield from _faults(script)
        except Unreadable as refusal:
            yield from _faults(script)
            yield Trouble(name, refusal.fault)
        finally:
            script.close()


def _faults(script: Script, before: int | None = None) -> Iterator[Trouble]:
    while script.faults and (before is None or (script.faults[0].line or 0) < before):
        yield Trouble(script.name, script.faults.pop(0))


def run(names: tuple[str, ...], settings: Settings, jobs: int = 1) -> int:
    """Runs scripts to their end and gives the exit status."""
    progress = Progress()
    output = Output(progress.clear)
    if jobs > 1:
        from opslang.front.jobs import shared

        answers = shared(names, settings, jobs, progress, output.flush)
    else:
        answers = _answers(names, settings, output, progress)
    with progress:
        return write(answers, output, progress, settings, len(names))


Answers = Generator[Answer, None, None]


def _answers(names: tuple[str, ...], settings: Settings, output: Output, progress: Progress) -> Answers:
    desk = Desk(settings)
    for item in items(names, output.flush, progress):
        yield desk.answer(item)


def evaluate(prelude: tuple[Source, ...], expressions: tuple[Source, ...], settings: Settings) -> int:
    """Answers the expressions of a command line, after declarations of which only the diagnostics are shown."""
    from opslang.syntax.layout import chunks

    progress = Progress()
    output = Output(progress.clear)
    desk = Desk(settings)

    def answers() -> Answers:
        for source in prelude:
            answer = desk.answer(source)
            if answer.status:
                yield answer
                return
            yield Answer(tuple(piece for piece in answer.pieces if piece[0] == "diagnostic"))
        for expression in expressions:
            for source in chunks(iter(expression.text.splitlines()), expression.name):
                yield desk.answer(source)

    with progress:
        return write(answers(), output, progress, settings, 0)


def write(answers: Answers, output: Output, progress: Progress, settings: Settings, scripts: int) -> int:
    """Writes answers as they come and gives the exit status; every way in which a run can end ends here."""
    status, unread = WELL, 0
    _prepare()
    try:
        try:
            for answer in answers:
                for channel, text in answer.pieces:
                    output.say(channel, text)
                status = max(status, answer.status)
                progress.count(answer)
                unread += answer.unread
        except KeyboardInterrupt:
            status = INTERRUPTED
            output.say("diagnostic", f"{PROGRAM}: interrupted\n")
        except Terminated:
            status = TERMINATED
        if unread and scripts > 1:
            output.say("diagnostic", f"{PROGRAM}: {unread} of {scripts} files could not be read\n")
        output.flush()
    except Departed:
        return status
    except Failed as failed:
        return max(status, report(failed, settings.paint))
    except (KeyboardInterrupt, Terminated):  # a second one, while the first was being attended to
        return INTERRUPTED
    finally:
        answers.close()
    return status


def _prepare() -> None:
    """What lasts is taken out of the collector's sight; Ctrl-C and SIGTERM become exceptions."""
    gc.freeze()
    gc.enable()
    gc.set_threshold(200_000, 50, 100)
    if signal.getsignal(signal.SIGINT) is not signal.SIG_IGN:
        signal.signal(signal.SIGINT, signal.default_int_handler)
    signal.signal(signal.SIGTERM, _terminate)


def _terminate(number: int, frame: FrameType | None) -> None:
    raise Terminated
