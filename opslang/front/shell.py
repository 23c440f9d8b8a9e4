"""The shell: reads what is typed at the prompt, has it answered, until the end of input.  Knows the order of loading.

The first prompt comes before anything of the mathematics is loaded; the rest follows while it is read.
"""

from __future__ import annotations

import os
import signal
import sys
from collections.abc import Iterable
from io import TextIOWrapper
from typing import TYPE_CHECKING, Any

from opslang import __version__
from opslang.front.console import Console
from opslang.front.status import Status
from opslang.front.working import Work, to_terminal

if TYPE_CHECKING:
    from opslang.front.completion import World
    from opslang.front.requests import Requests
    from opslang.front.sitting import Sitting
    from opslang.front.statement import Settings

GREETING = f"opslang {__version__}   help lists what can be said, Ctrl-D leaves"

SHORT_GREETING = f"opslang {__version__}   help, Ctrl-D leaves"


class Shell:
    """The loop; the sitting is made when it is first needed."""

    def __init__(self, options: dict[str, Any], keys: str, coloured: bool) -> None:
        self._options = options
        self._coloured = coloured
        self._work = Work(to_terminal)
        self._kept: tuple[Sitting, Requests] | None = None
        status = Status(lambda text: self._rooms()[0].look(text))
        self._console = Console(self._world, self._topics, status, self._around, self._complete, coloured, keys)

    def run(self) -> int:
        """Prompts until the end of input, and gives the exit status."""
        self._work.listen()
        if isinstance(sys.stdout, TextIOWrapper):
            sys.stdout.reconfigure(errors="backslashreplace")  # for terminals that are not UTF-8
        signal.signal(signal.SIGTERM, _end)
        to_terminal((GREETING if len(GREETING) < columns() else SHORT_GREETING) + "\n")
        while True:
            try:
                text = self._console.ask(self._prompt())
            except KeyboardInterrupt:
                continue
            except EOFError:
                return 0
            if text.strip() and not self._answer(text):
                return 0

    def _answer(self, text: str) -> bool:
        """Answers an input; False at the end of the sitting."""
        from opslang.front.requests import Leave

        sitting, requests = self._rooms()
        if all(line.lstrip().startswith("#") for line in text.splitlines() if line.strip()):
            sitting.remark(text.strip("\n"))
            return True
        try:
            pasted = sitting.prose(text)
            if pasted is not None:
                sitting.say(pasted.words)
            sources = list(sitting.statements(text))
            for number, source in enumerate(sources, start=1):
                own = sitting.own(source.text)
                if own is not None:
                    requests.do(*own, source)
                elif not sitting.answer(source) and source.text.split()[0] == "on" and number < len(sources):
                    to_terminal("what follows it is not run, since it may speak of that space\n")
                    break
        except Leave:
            return False
        except OSError as trouble:
            if trouble.errno is None:
                raise
            to_terminal(f"{(trouble.strerror or str(trouble)).lower()}\n")
        return True

    # --- what the prompt asks for ---------------------------------------------------------------

    def _prompt(self) -> str:
        number = self._kept[0].logbook.next_number if self._kept else 1
        return f"ops {number}> "

    def _rooms(self) -> tuple[Sitting, Requests]:
        if self._kept is None:
            from opslang.front.requests import Requests
            from opslang.front.sitting import Sitting

            sitting = Sitting(self._settings(), self._work, to_terminal, paged, columns)
            self._kept = sitting, Requests(sitting, self._console, paged)
        return self._kept

    def _settings(self) -> Settings:
        from opslang.front.output import ansi
        from opslang.front.statement import Settings
        from opslang.report.render import plain

        return Settings(**self._options, paint=ansi if self._coloured else plain)

    def _around(self) -> list[str]:
        if self._kept is None:
            return [f"prime {self._options['prime']}"]
        scope = self._kept[0].session.scope
        short = f"prime {scope.prime}"
        return [f"{short}   on {scope.space.text}", short] if scope.space else [short]

    def _complete(self, text: str) -> bool:
        return self._rooms()[0].complete(text)

    def _topics(self) -> Iterable[str]:
        from opslang.front.help import names

        return names()

    def _world(self) -> World:
        from opslang.front.completion import World
        from opslang.front.glance import generators_here, of_value
        from opslang.meaning.scope import spelled

        sitting = self._rooms()[0]
        scope = sitting.session.scope
        classes = {spelled(key): of_value(value) for key, value in scope.names.items()}
        classes |= {name: f"class, degree {degree}" for name, degree in generators_here(scope).items()}
        if scope.space is None:
            classes["iota_"] = "fundamental class"
        classes |= {f"{name}^*": "map" for name in getattr(scope, "maps", ())}
        results = tuple(entry.number for entry in sitting.logbook.results() if entry.number is not None)
        return World(scope.prime, tuple(scope.spaces), classes, results)


def _end(number: int, frame: object) -> None:
    raise SystemExit(143)


def columns() -> int:
    """The columns of the terminal, now."""
    try:
        return max(20, os.get_terminal_size(sys.stdout.fileno()).columns)
    except (OSError, ValueError):
        return 80


def paged(text: str, screens: int) -> None:
    """A text at once where it fits so many screens of the terminal, else through the user's pager."""
    try:
        rows = os.get_terminal_size(sys.stdout.fileno()).lines
    except (OSError, ValueError):
        rows = 24
    wide = columns()
    if sum(1 + len(line) // wide for line in text.split("\n")) < rows * screens:
        to_terminal(text + "\n")
        return
    from click import echo_via_pager

    os.environ.setdefault("LESS", "-FRX")  # what was shown stays on the screen

    echo_via_pager(text + "\n")


def main(
    prime: int = 2,
    limit: int | None = None,
    output: str = "text",
    both: bool = False,
    keys: str = "emacs",
    colour: str = "auto",
) -> int:
    """Runs the shell on the terminal and gives the exit status."""
    dumb = bool(os.environ.get("NO_COLOR"))
    coloured = colour == "always" or (colour == "auto" and not dumb)
    options = {"prime": prime, "limit": limit, "output": output, "both": both}
    return Shell(options, keys, coloured).run()
