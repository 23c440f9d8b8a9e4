"""Macros: what a definition says, how a call takes its arguments, what it leaves to be read.

Knows TeX's rules of substitution; knows no command.  An argument keeps the place where the author typed it, what
comes out of the body has the place of the call and remembers the definition's.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import Union

from attrs import frozen

from opslang.lint.reading.document import Token
from opslang.lint.reading.intake import Intake

Delimiter = tuple[tuple[str, str], ...]
"""What must follow an argument, as (kind, text); empty for an argument taken as one group or token."""

BodyToken = tuple[str, str, str, tuple[int, int, int]]
Part = Union[int, BodyToken]


@frozen
class Macro:
    """One macro.

    `option` is the value of an optional first argument that is left out; `opening` what must stand before them all.

    `locked` macros are those of an author's directive: no definition changes them.
    """

    name: str
    parts: tuple[Part, ...]
    delimiters: tuple[Delimiter, ...] = ()
    opening: Delimiter = ()
    option: tuple[Token, ...] | None = None
    locked: bool = False

    @property
    def size(self) -> int:
        """The length of the body in tokens."""
        return len(self.parts)


def compile_body(tokens: Sequence[Token]) -> tuple[Part, ...]:
    """The body with #1 … #9 as numbers from 0, and ## as # for definitions inside."""
    parts: list[Part] = []
    at = 0
    while at < len(tokens):
        token = tokens[at]
        at += 1
        if token.kind == "directive":
            continue
        if token.kind != "param" or at == len(tokens):
            parts.append(_body_token(token))
            continue
        following = tokens[at]
        if following.kind == "run" and following.text[0].isdigit() and following.text[0] in "123456789":
            parts.append(int(following.text[0]) - 1)
            if len(following.text) > 1:
                parts.append(_body_token(_tail(following)))
            at += 1
        elif following.kind == "param":
            parts.append(_body_token(token))
            at += 1
    return tuple(parts)


def _tail(token: Token) -> Token:
    kind, text, start, end, file, style, within = token
    if within is None:
        return Token(kind, text[1:], start + 1, end, file, style)
    return Token(kind, text[1:], start, end, file, style, (within[0], within[1] + 1, within[2]))


def _body_token(token: Token) -> BodyToken:
    kind, text, start, end, file, style, within = token
    return kind, text, style, within or (file, start, end)


def read_parameters(tokens: Sequence[Token]) -> tuple[Delimiter, tuple[Delimiter, ...]]:
    """The parameter text of \\def: what stands before #1, and what stands after each parameter."""
    groups: list[list[tuple[str, str]]] = [[]]
    at = 0
    while at < len(tokens):
        token = tokens[at]
        at += 1
        if token.kind == "param":
            groups.append([])
            if at < len(tokens) and tokens[at].kind == "run":
                groups[-1].extend(_signs(tokens[at].text[1:]))
                at += 1
        elif token.kind == "run":
            groups[-1].extend(_signs(token.text))
        elif token.kind != "directive":
            groups[-1].append((token.kind, token.text))
    opening, *rest = (tuple(group) for group in groups)
    return opening, tuple(rest)


def _signs(text: str) -> list[tuple[str, str]]:
    return [("run", sign) for sign in " ".join(text.replace("\n", " ").split(" "))]


def take_arguments(macro: Macro, intake: Intake) -> list[Sequence[Token]] | None:
    """The arguments of a call; None, with all put back, when they are not there."""
    if macro.opening and not intake.exactly(macro.opening):
        return None
    arguments: list[Sequence[Token]] = []
    for number, delimiter in enumerate(macro.delimiters):
        argument: Sequence[Token] | None
        if number == 0 and macro.option is not None:
            argument = intake.option()
            argument = macro.option if argument is None else argument
        elif delimiter:
            argument = intake.until(delimiter)
            if argument is not None:
                argument = _without_braces(argument)
        else:
            argument = intake.argument()
        if argument is None:
            for taken in reversed(arguments):
                intake.push(taken)
            return None
        arguments.append(argument)
    return arguments


def _without_braces(tokens: Sequence[Token]) -> Sequence[Token]:
    if len(tokens) < 2 or tokens[0].kind != "open" or tokens[-1].kind != "close":
        return tokens
    depth = 0
    for token in tokens[:-1]:
        depth += (token.kind == "open") - (token.kind == "close")
        if not depth:
            return tokens
    return tokens[1:-1]


def expand(macro: Macro, call: Token, intake: Intake) -> bool:
    """Take the arguments of a call and put what it leaves before the rest; false when the call cannot be read."""
    arguments: list[Sequence[Token]] = []
    end = call.end
    if macro.delimiters or macro.opening:
        intake.last = None
        found = take_arguments(macro, intake)
        if found is None:
            return False
        arguments = found
        last = intake.last
        if last is not None and last.file == call.file and last.end > end:
            end = last.end
    new, kind_is = tuple.__new__, Token
    start, file = call.start, call.file
    left: list[Token] = []
    cost = 1
    for part in macro.parts:
        if isinstance(part, int):
            if part < len(arguments):
                left.extend(arguments[part])
                cost += sum(len(token.text) for token in arguments[part]) >> 4
        else:
            left.append(new(kind_is, (part[0], part[1], start, end, file, part[2], part[3])))
    cost += len(left)
    intake.fuel -= cost
    intake.since += cost
    left.reverse()
    intake.pending.extend(left)
    return True
