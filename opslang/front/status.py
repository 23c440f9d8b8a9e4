"""The line at the bottom of the prompt: at the left what the input is or what is wrong with it, at the right prime
and space.  Knows widths; looks at the input through `glance` and computes nothing.
"""

from __future__ import annotations

from collections.abc import Callable

from opslang.front.vocabulary import SHELL_WORDS, shell_statement

Fragment = tuple[str, str]


def fitted(text: str, room: int) -> str:
    """A text cut to a width."""
    from opslang.report.render import cells, visible

    text = visible(text)
    if cells(text) <= room:
        return text
    while text and cells(text) > room - 3:
        text = text[:-1]
    return text.rstrip() + "..."


def line(words: str, tone: str, place: str, around: list[str], width: int) -> list[Fragment]:
    """The fragments of the line; `around` gives what stands at the right, each a shorter form of the one before it."""
    said = f"{place}: {words}" if place else words
    width -= 1
    right = next((text for text in around if len(said) + len(text) + 3 <= width), "")
    if not said:
        return [("class:status.right", fitted(around[0], width))]
    left = fitted(said, width - (len(right) + 3 if right else 0))
    if not right:
        return [(f"class:status.{tone}", left)]
    from opslang.report.render import cells

    gap = width - cells(left) - len(right)
    return [(f"class:status.{tone}", left), ("", " " * gap), ("class:status.right", right)]


def choices(words: list[str], width: int, rows: int) -> list[Fragment]:
    """What Tab offers, in lines; what does not fit into so many rows is left out, and an ellipsis says so."""
    from textwrap import wrap

    gap = "\0" * 2
    lines = [
        each.replace("\0", " ").rstrip()
        for each in wrap(" ".join(word.replace(" ", "\0") + gap for word in words), width - 1)
    ]
    if len(lines) > rows:
        lines = [*lines[: rows - 1], "..."]
    return [("class:status.quiet", "\n".join(fitted(each, width - 1) for each in lines))]


Look = Callable[[str], tuple[str, str, str]]
"""Gives words, tone and place of a text."""


class Status:
    """What the line says of the current input; the input is looked at when the typing pauses."""

    def __init__(self, look: Look) -> None:
        self._look = look
        self._seen = ""
        self._said = ("", "quiet", "")

    def refresh(self, text: str) -> bool:
        """Look at a text; whether there is something new to show."""
        if text == self._seen:
            return False
        self._seen = text
        before = self._said
        self._said = self._words(text)
        return self._said != before

    def _words(self, text: str) -> tuple[str, str, str]:
        if not text.strip():
            return "", "quiet", ""
        own = shell_statement(text)
        if own is not None and own[0] in SHELL_WORDS and "\n" not in text.strip():
            return f"write: {SHELL_WORDS[own[0]]}", "quiet", ""
        try:
            return self._look(text)
        except Exception:  # a fault of ours: running the line will tell, and typing it must not be disturbed
            return "", "quiet", ""

    def fragments(self, text: str, around: list[str], width: int) -> list[Fragment]:
        """The line for a text; a text that has not been looked at yet shows what was said of the one before it."""
        if not text.strip():
            self._seen, self._said = text, ("", "quiet", "")
        words, tone, place = self._said
        return line(words, tone, place, around, width)
