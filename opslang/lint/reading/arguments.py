"""Arguments that commands of layout carry, by a word of letters: s star, o [..], m {..}, < <..> of slides."""

from __future__ import annotations

import re

from opslang.lint.reading.document import Token
from opslang.lint.reading.intake import Intake, cut

_LENGTH = re.compile(
    r"\s*=?\s*[-+]?\s*(?:\d+[.,]?\d*|[.,]\d+)\s*(?:true\s*)?(?:pt|em|ex|mm|cm|in|mu|bp|pc|sp|dd|cc|fill?l?)\s?"
)
_STRETCH = re.compile(r"\s*(?:plus|minus)\s*[-+]?[\d.,]+\s*(?:pt|em|ex|mm|cm|in|mu|bp|pc|sp|dd|cc|fill?l?)\s?")


def skip_arguments(intake: Intake, letters: str) -> list[Token]:
    """Take the arguments and forget them; gives the last mandatory one."""
    last: list[Token] = []
    for letter in letters:
        if letter == "s":
            intake.follows("*")
        elif letter == "o":
            intake.option()
        elif letter == "<":
            if intake.follows("<"):
                intake.until((("run", ">"),))
        else:
            last = intake.argument(long=False) or []
    return last


def skip_length(intake: Intake) -> None:
    """Take a length that stands without braces: 3pt plus 1fil, -3mu, \\baselineskip."""
    token = intake.peek()
    if token is None:
        return
    if token.kind == "command":
        intake.pending.pop()
        return
    if token.kind != "run":
        return
    found = _LENGTH.match(token.text)
    if found is None:
        return
    end = found.end()
    while (more := _STRETCH.match(token.text, end)) is not None:
        end = more.end()
    intake.pending.pop()
    if end < len(token.text):
        intake.pending.append(cut(token, end)[1])


def bound(kind: str, text: str, near: Token) -> Token:
    """A mark in the stream where a passage begins (enter) or ends (leave)."""
    return Token(kind, text, near.start, near.end, near.file)


def mark_off(intake: Intake, role: str, tokens: list[Token], near: Token) -> None:
    """Put a passage back to be read as a passage of that role."""
    if tokens:
        intake.push([bound("enter", role, near), *tokens, bound("leave", "leave", near)])
