"""Cuts a script into statements, line by line and in flat memory.  Knows brackets, comments and trailing operators.

A statement goes on over the end of a line while a bracket is open, or after a trailing operator or a backslash.
A blank line, or a line that begins with a statement's keyword, ends it all the same; the parser then finds what
is missing and says so at the opening place.
"""

from __future__ import annotations

import re
from collections.abc import Iterable, Iterator

from opslang.ground.source import Source
from opslang.syntax.spellings import COMMANDS, STATEMENT_WORDS, SURROUNDINGS, SYMBOLS, is_tex

STATEMENT_LIMIT = 100_000
"""How many code points a statement may have, where nothing else is said."""

KEPT = 8_000_000
"""So many code points of one statement are kept; no limit may lie above, and what goes beyond is passed over."""

_JOINING = frozenset(("PLUS", "MINUS", "STAR", "CUP", "CROSS", "TIMES", "COMPOSE", "OPLUS", "EQUALS"))
_SIGNS = "".join(re.escape(sign) for sign, (kind, _) in SYMBOLS.items() if kind in _JOINING)
_COMMANDS = "|".join(name for name, (kind, _) in COMMANDS.items() if kind in _JOINING)
_TRAILING = re.compile(rf"(?:[{_SIGNS}]|(?<!\\)\\(?:{_COMMANDS})|(?<![A-Za-z])(?:cup|cross)|(?<!\\)\\)\s*\Z")
_LAST_SIGNS = frozenset("pshtcdmes\\") | frozenset(sign for sign, (kind, _) in SYMBOLS.items() if kind in _JOINING)
_PULL = re.compile(r"\^\s*\*\s*\Z")
_BRACKETS = re.compile(rf"\\(?:begin|end)(?=\s*\{{\s*(?:{SURROUNDINGS})\*?\s*\}})|\\?[()\[\]{{}}]")
_DEPTH = {
    "\\begin": 1,
    "\\end": -1,
    "(": 1,
    "[": 1,
    "{": 1,
    ")": -1,
    "]": -1,
    "}": -1,
    r"\(": 1,
    r"\[": 1,
    r"\)": -1,
    r"\]": -1,
}
_FIRST_WORD = re.compile(r"\s*([A-Za-z]+)")
_COMMENT = re.compile(r"#.*")
_TEX_COMMENT = re.compile(r"#.*|(?<!\\)%.*")


def _code(line: str) -> str:
    """A line without its comment and the white space at its end."""
    if "#" not in line and "%" not in line:
        return line.rstrip()
    return (_TEX_COMMENT if is_tex(line) else _COMMENT).sub("", line).rstrip()


def _begins_statement(line: str) -> bool:
    word = _FIRST_WORD.match(line)
    return word is not None and word.group(1) in STATEMENT_WORDS


def _depth(code: str) -> int:
    """How many more brackets a line opens than it closes."""
    return sum(_DEPTH.get(bracket, 0) for bracket in _BRACKETS.findall(code))


def _is_whole(code: str) -> bool:
    """Whether a line stands for itself: as many brackets open as close, and no operator at its end."""
    if code[-1] in _LAST_SIGNS and _trails(code):
        return False
    if "\\begin" in code or "\\end" in code:
        return False
    if "(" in code or "{" in code or "[" in code:
        return (
            code.count("(") == code.count(")")
            and code.count("{") == code.count("}")
            and code.count("[") == code.count("]")
        )
    return True


def _trails(code: str) -> bool:
    return bool(_TRAILING.search(code)) and not _PULL.search(code)


def chunks(lines: Iterable[str], name: str) -> Iterator[Source]:
    """The statements of a script, each as a piece of the file; blank and comment lines give none."""
    held: list[str] = []
    size = depth = first = 0
    for number, raw in enumerate(lines, start=1):
        line = raw.rstrip("\r\n") if raw[-1:] in ("\n", "\r") else raw
        code = _code(line)
        if held and (not line.strip() or _begins_statement(line)):
            yield Source(name, "\n".join(held), first)
            held, size, depth = [], 0, 0
        if not held:
            if not code:
                continue
            if _is_whole(code):
                yield Source(name, line, number)
                continue
            first = number
        if size <= KEPT:
            held.append(line)
            size += len(line) + 1
        depth = max(depth + _depth(code), 0)
        if depth == 0 and not (_trails(code) if code else _goes_on(held)):
            yield Source(name, "\n".join(held), first)
            held, size, depth = [], 0, 0
    if held:
        yield Source(name, "\n".join(held), first)


def _goes_on(held: list[str]) -> bool:
    """Whether the last line that holds anything but a comment ends in an operator."""
    for line in reversed(held):
        code = _code(line)
        if code:
            return _trails(code)
    return False


def is_complete(text: str) -> bool:
    """Whether a text typed so far waits for no further line."""
    depth = 0
    trails = False
    for line in text.split("\n"):
        code = _code(line)
        if not line.strip():
            depth, trails = 0, False
            continue
        if code:
            depth = max(depth + _depth(code), 0)
            trails = _trails(code)
    return depth == 0 and not trails
