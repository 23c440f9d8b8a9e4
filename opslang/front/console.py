"""The prompt: line editor, keys, colours and the line at the bottom.  Knows prompt_toolkit, and no mathematics.

What is typed comes back as text.  Everything that is not needed for the first prompt is loaded after it.
"""

from __future__ import annotations

import gc
import os
import sys
from collections.abc import Callable, Iterable
from threading import Thread
from typing import TYPE_CHECKING, Any

from prompt_toolkit.application.current import get_app
from prompt_toolkit.enums import DEFAULT_BUFFER, EditingMode
from prompt_toolkit.filters import emacs_mode, has_focus
from prompt_toolkit.formatted_text import StyleAndTextTuples
from prompt_toolkit.key_binding import KeyBindings, KeyPressEvent
from prompt_toolkit.lexers import DynamicLexer, Lexer
from prompt_toolkit.output import ColorDepth
from prompt_toolkit.shortcuts.prompt import PromptSession
from prompt_toolkit.styles import Style

from opslang.front.history import Remembered, state_folder
from opslang.front.status import Status, choices

if TYPE_CHECKING:
    from asyncio import TimerHandle

    from prompt_toolkit.buffer import Buffer

    from opslang.front.completion import World

PAUSE = 0.12
"""Seconds without a key after which the input is looked at."""
LONG_PAUSE = 0.6
LONG = 1_500
MOST_ROWS = 6
"""Rows that the choices of Tab may take at the bottom."""

_COLOURS = {
    "prompt": "bold",
    "bottom-toolbar": "noreverse",
    "status.right": "ansibrightblack",
    "status.quiet": "ansibrightblack",
    "status.warning": "ansiyellow",
    "status.error": "ansired",
    "matching-bracket.cursor": "bold underline",
    "matching-bracket.other": "bold underline",
    "pygments.keyword": "ansimagenta",
    "pygments.name.function": "ansiblue",
    "pygments.name.builtin": "ansicyan",
    "pygments.name.class": "ansigreen",
    "pygments.comment": "ansibrightblack italic",
    "pygments.error": "ansired underline",
}
_PLAIN = {"bottom-toolbar": "noreverse", "matching-bracket.cursor": "underline", "matching-bracket.other": "underline"}


class Console:
    """The prompt of one sitting."""

    def __init__(
        self,
        world: Callable[[], World],
        topics: Callable[[], Iterable[str]],
        status: Status,
        around: Callable[[], list[str]],
        complete: Callable[[str], bool],
        coloured: bool,
        keys: str = "emacs",
    ) -> None:
        self._world = world
        self._topics = topics
        self._status = status
        self._around = around
        self._complete = complete
        self._coloured = coloured
        self._lexer: Lexer | None = None
        self._completer: Any = None
        self._choices: list[str] = []
        self._waiting: TimerHandle | None = None
        self._editor: PromptSession[str] = self._made()
        self.keys = keys

    def _made(self) -> PromptSession[str]:
        editor: PromptSession[str] = PromptSession(
            history=Remembered(state_folder()),
            multiline=True,
            key_bindings=self._bindings(),
            lexer=DynamicLexer(self._colouring),
            complete_while_typing=False,
            enable_history_search=True,
            enable_suspend=True,
            bottom_toolbar=self._bottom,
            prompt_continuation=_continuation,
            reserve_space_for_menu=0,
            style=Style.from_dict(_COLOURS if self._coloured else _PLAIN),
            include_default_pygments_style=False,
            color_depth=None if self._coloured else ColorDepth.DEPTH_1_BIT,
        )
        editor.app.ttimeoutlen = 0.1  # seconds that an Escape waits for the rest of a sequence
        # Where the terminal does not answer, there is no line at the bottom; that is no news for the user.
        editor.app.renderer.cpr_not_supported_callback = None
        editor.default_buffer.on_text_changed += self._changed
        editor.default_buffer.on_cursor_position_changed += self._moved
        editor.app.after_render += _in_background
        return editor

    @property
    def keys(self) -> str:
        """Whose keys are in force: "emacs" or "vi"."""
        return "vi" if self._editor.editing_mode is EditingMode.VI else "emacs"

    @keys.setter
    def keys(self, choice: str) -> None:
        self._editor.editing_mode = EditingMode.VI if choice == "vi" else EditingMode.EMACS

    def ask(self, prompt: str) -> str:
        """What the user types next.  Raises EOFError at the end of input, KeyboardInterrupt for Ctrl-C."""
        return self._editor.prompt([("class:prompt", prompt)], handle_sigint=False)

    # --- keys -----------------------------------------------------------------------------------

    def _bindings(self) -> KeyBindings:
        bindings = KeyBindings()
        focused = has_focus(DEFAULT_BUFFER)

        @bindings.add("enter", filter=focused)
        def _enter(event: KeyPressEvent) -> None:
            buffer = event.current_buffer
            if self._complete(buffer.text):
                buffer.validate_and_handle()
            else:
                buffer.insert_text("\n")

        @bindings.add("tab", filter=focused)
        def _tab(event: KeyPressEvent) -> None:
            self._complete_at(event.current_buffer)

        @bindings.add("escape", "enter", filter=focused & emacs_mode)  # in vi, Escape must not wait for more
        def _line(event: KeyPressEvent) -> None:
            event.current_buffer.insert_text("\n")

        return bindings

    def _complete_at(self, buffer: Buffer) -> None:
        """Puts in what all completions have in common; where that is nothing, the bottom line names them."""
        from prompt_toolkit.completion import CompleteEvent, get_common_complete_suffix

        document = buffer.document
        found = list(self._completing().get_completions(document, CompleteEvent(completion_requested=True)))
        if len({(each.text, each.start_position) for each in found}) == 1:
            buffer.delete_before_cursor(-found[0].start_position)
            buffer.insert_text(found[0].text)
        elif common := get_common_complete_suffix(document, found):
            buffer.insert_text(common)
        elif found:
            self._offer([each.display_text for each in found])

    def _offer(self, words: list[str]) -> None:
        """Names the choices in the bottom line, or above the prompt where the terminal is not known to have one."""
        if self._editor.app.renderer.height_is_known:
            self._choices = words
            return
        from prompt_toolkit.application import run_in_terminal

        run_in_terminal(lambda: print(*words, sep="   "))

    # --- what is loaded when it is needed -------------------------------------------------------

    def _colouring(self) -> Lexer | None:
        if self._lexer is None and self._coloured and self._editor.default_buffer.text:
            from prompt_toolkit.lexers import PygmentsLexer

            from opslang.front.highlight import OpslangLexer

            self._lexer = PygmentsLexer(OpslangLexer)
        return self._lexer

    def _completing(self) -> Any:
        if self._completer is None:
            from opslang.front.completion import Offers

            encoding = (sys.stdout.encoding or "").lower()
            self._completer = Offers(self._world, self._topics, encoding.startswith("utf"))
        return self._completer

    # --- the line at the bottom -----------------------------------------------------------------

    def _bottom(self) -> StyleAndTextTuples:
        size = get_app().output.get_size()
        if self._choices:
            return [*choices(self._choices, size.columns, max(1, min(MOST_ROWS, size.rows - 2)))]
        around = self._around()
        if self.keys == "vi":
            from prompt_toolkit.filters import vi_insert_mode

            mode = "insert" if vi_insert_mode() else "command"
            around = [f"{mode}   {text}" for text in around]
        return [*self._status.fragments(self._editor.default_buffer.text, around, size.columns)]

    def _moved(self, _: object) -> None:
        self._choices = []

    def _changed(self, _: object) -> None:
        self._choices = []
        from asyncio import get_running_loop

        if self._waiting is not None:
            self._waiting.cancel()
        try:
            loop = get_running_loop()
        except RuntimeError:  # the editor empties itself between two prompts
            return
        text = self._editor.default_buffer.text
        self._waiting = loop.call_later(LONG_PAUSE if len(text) > LONG else PAUSE, self._look)

    def _look(self) -> None:
        self._waiting = None
        if self._status.refresh(self._editor.default_buffer.text):
            self._editor.app.invalidate()


def _continuation(width: int, number: int, wrapped: int) -> StyleAndTextTuples:
    return [("class:prompt", " " * (width - 2) + ("| " if not wrapped else "  "))]


_loading: Thread | None = None


def _in_background(_: object) -> None:
    """Loads what the first answer needs, while the user reads the first prompt."""
    global _loading
    if _loading is None:
        gc.freeze()
        gc.set_threshold(50_000, 20, 50)
        gc.enable()  # it is off while the program starts
        _loading = Thread(target=_load, daemon=True)
        _loading.start()


def _load() -> None:
    try:
        import opslang.front.highlight
        import opslang.front.logbook
        import opslang.pipeline  # noqa: F401
        from opslang.syntax.loader import parser

        parser()
    except Exception:  # the first line typed meets the same trouble, and says so
        return


def clipboard_escape(text: str) -> str | None:
    """The escape (OSC 52 of the xterm control sequences) that puts a text on the clipboard; None where the
    terminal is not known to take it."""
    from base64 import b64encode

    terminal = os.environ.get("TERM", "")
    known = ("xterm", "tmux", "screen", "rxvt", "alacritty", "kitty", "foot", "wezterm", "st-", "contour", "ghostty")
    if not terminal.startswith(known) or len(text) > 70_000:
        return None
    return f"\x1b]52;c;{b64encode(text.encode('utf-8', 'replace')).decode()}\x07"
