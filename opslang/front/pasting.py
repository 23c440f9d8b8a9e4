r"""Displays of a TeX file, pasted at the prompt, as statements.  Knows the frames of displays, no formulas.

`$$ … $$`, `\[ … \]` and the one-formula environments hold one statement, however many lines it has.  In the
environments of several rows each row is a statement of its own, unless it goes on from the one before it: it begins
with `&`, a relation sign or an operator.  What is left out is blanked, so that every place stays where it was.
"""

from __future__ import annotations

import re
from collections.abc import Iterator

from opslang.ground.source import Source

_ONE = "equation|displaymath|math|multline"
_ROWS = "align|gather|eqnarray|flalign|alignat"
_INSIDE = "aligned|split|gathered"
_OPENING = re.compile(rf"\s*(?:\$\$?|\\\[|\\begin\s*\{{(?:{_ONE}|{_ROWS})\*?\}})")
_DISPLAY = re.compile(
    rf"\s*(?:(?P<dollar>\$\$?)(?P<inline>[^$]+)(?P=dollar)|\\\[(?P<display>.+)\\\]"
    rf"|\\begin\s*\{{(?P<name>(?:{_ONE}|{_ROWS})\*?)\}}(?P<body>.+)\\end\s*\{{(?P=name)\}})\s*[.,;]?\s*\Z",
    re.S,
)
_LEFT_OUT = re.compile(
    rf"\\(?:begin|end)\s*\{{(?:{_INSIDE})\*?\}}(?:\[[tbc]\])?|\\(?:label|tag\*?)\s*\{{[^{{}}]*\}}|(?<!\\)%[^\n]*"
)
_ROW_END = re.compile(r"\\\\(?:\*)?(?:\s*\[[^\]]*\])?|\\cr(?![A-Za-z])")
_GOES_ON = re.compile(r"(?:\s|&|\\quad|\\qquad|\{\}|~)*(?:=|\+|-|−|\\cdot|\\cup|\\smile|\\otimes)|\s*&")


def opens_display(text: str) -> bool:
    """Whether a text begins a display and does not end it."""
    return _OPENING.match(text) is not None and _DISPLAY.match(text) is None


def displayed(text: str, name: str) -> list[Source] | None:
    """The statements of a display; None for a text that is none."""
    found = _DISPLAY.match(text)
    if found is None or (found.group("inline") and "\n" not in text):
        return None
    group = next(kind for kind in ("inline", "display", "body") if found.group(kind))
    start, end = found.span(group)
    body = _LEFT_OUT.sub(lambda part: blank(part.group()), text[start:end])
    whole = blank(text[:start]) + body + blank(text[end:])
    several = re.search(rf"\{{(?:{_ROWS}|{_INSIDE})\*?\}}", text) is not None
    spans = list(_rows(whole)) if several else [(0, len(whole))]
    return [stretch(whole, low, high, name) for low, high in spans if whole[low:high].strip()]


def blank(text: str) -> str:
    """White space of the same shape."""
    return re.sub(r"[^\n]", " ", text)


def _rows(text: str) -> Iterator[tuple[int, int]]:
    """Where the statements lie: rows, with those that go on from the one before."""
    start = at = 0
    for end in _ROW_END.finditer(text):
        if at > start and not _GOES_ON.match(text, at):
            yield start, at
            start = at
        at = end.end()
    if at > start and not _GOES_ON.match(text, at):
        yield start, at
        start = at
    yield start, len(text)


def stretch(text: str, low: int, high: int, name: str) -> Source:
    """A stretch as a statement that knows its line, and has its column by blanks before it."""
    low += len(text[low:high]) - len(text[low:high].lstrip())
    line = text.rfind("\n", 0, low) + 1
    return Source(name, " " * (low - line) + text[low:high].rstrip(), text.count("\n", 0, low) + 1)


def on_one_line(text: str) -> str:
    """A statement of a display as a script may hold it: there a line ends a statement where no bracket is open."""
    return " ".join(text.split())
