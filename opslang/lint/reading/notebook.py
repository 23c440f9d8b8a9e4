"""Notebooks: the Markdown cells of an .ipynb file, each character with its place in the file's own text.

Knows JSON as text.  Positions are therefore those of the .ipynb file as an editor shows it; `cell_at` gives the
cell and the line in it for people who see the notebook rendered.
"""

from __future__ import annotations

import re
from json import loads

from attrs import field, frozen

from opslang.lint.reading.document import File, Token
from opslang.lint.reading.markdown import tokens_of

_JSON = re.compile(r'"(?:[^"\\]++|\\.)*+"|[{}\[\]:,]')
_ESCAPE = re.compile(r"\\u[dD][89abAB][0-9a-fA-F]{2}\\u[dD][c-fC-F][0-9a-fA-F]{2}|\\u[0-9a-fA-F]{4}|\\.")


@frozen
class Cell:
    """One Markdown cell: its number among all cells (from 1), its text, where each character stands in the file."""

    number: int
    text: str
    starts: list[int] = field(repr=False)
    ends: list[int] = field(repr=False)

    def place(self, start: int, end: int) -> tuple[int, int]:
        """A stretch of the cell's text as a stretch of the file."""
        if start >= len(self.text):
            last = self.ends[-1] if self.ends else 0
            return last, last
        first = self.starts[start]
        return first, self.ends[end - 1] if end > start else first


def cells_of(text: str) -> list[Cell]:
    """The Markdown cells of a notebook; none when the text is no notebook."""
    cells: list[Cell] = []
    number = 0
    stack: list[dict[str, list[tuple[int, int]]] | None] = []
    keys: list[str] = []
    expects_key = False
    for found in _JSON.finditer(text):
        sign = found.group()
        if sign == "{" or sign == "[":
            stack.append({} if sign == "{" else None)
            if sign == "{":
                keys.append("")
            expects_key = sign == "{"
        elif sign == "}" or sign == "]":
            if not stack:
                return cells
            closed = stack.pop()
            expects_key = False
            if closed is not None:
                keys.pop()
                if "cell_type" in closed:
                    number += 1
                    cells.extend(_cell(text, number, closed))
        elif sign == ":":
            expects_key = False
        elif sign == ",":
            expects_key = bool(stack) and stack[-1] is not None
        elif expects_key:
            keys[-1] = sign[1:-1]
        else:
            _value(stack, keys, found.span())
    return cells


def _value(stack: list[dict[str, list[tuple[int, int]]] | None], keys: list[str], span: tuple[int, int]) -> None:
    """A string: the value of a key, or one of the strings in the list that is."""
    place = stack[-1] if stack else None
    if place is None and len(stack) > 1:
        place = stack[-2]
    if place is not None and keys[-1] in ("cell_type", "source"):
        place.setdefault(keys[-1], []).append(span)


def _cell(text: str, number: int, found: dict[str, list[tuple[int, int]]]) -> list[Cell]:
    start, end = found["cell_type"][0]
    if text[start:end] != '"markdown"':
        return []
    parts: list[str] = []
    starts: list[int] = []
    ends: list[int] = []
    for first, last in found.get("source", ()):
        at = first + 1
        for escape in _ESCAPE.finditer(text, at, last - 1):
            _straight(text, at, escape.start(), parts, starts, ends)
            at = escape.end()
            parts.append(_meant(escape.group()))
            starts.append(escape.start())
            ends.append(at)
        _straight(text, at, last - 1, parts, starts, ends)
    return [Cell(number, "".join(parts), starts, ends)]


def _straight(text: str, start: int, end: int, parts: list[str], starts: list[int], ends: list[int]) -> None:
    parts.append(text[start:end])
    starts.extend(range(start, end))
    ends.extend(range(start + 1, end + 1))


def _meant(escape: str) -> str:
    try:
        sign = loads(f'"{escape}"')
    except ValueError:
        return "\ufffd"
    return sign if isinstance(sign, str) and len(sign) == 1 and not "\ud800" <= sign <= "\udfff" else "\ufffd"


def notebook_tokens(text: str, file: int = 0) -> list[Token]:
    """The tokens of all Markdown cells, with places in the .ipynb file."""
    found: list[Token] = []
    for cell in cells_of(text):
        for token in tokens_of(cell.text, file):
            found.extend(_placed(token, cell))
        found.append(Token("par", "", *cell.place(len(cell.text), len(cell.text)), file))
    return found


def _placed(token: Token, cell: Cell) -> list[Token]:
    """A token at its place in the file; a run with escaped characters in parts, so that each part is straight."""
    start, end = cell.place(token.start, token.end)
    if token.kind != "run" or end - start == len(token.text) or token.end - token.start != len(token.text):
        return [token._replace(start=start, end=end)]
    parts: list[Token] = []
    at = token.start
    for here in range(token.start + 1, token.end + 1):
        straight = here < token.end and cell.starts[here] == cell.starts[here - 1] + 1
        if not straight or cell.ends[here] != cell.starts[here] + 1:
            text = token.text[at - token.start : here - token.start]
            parts.append(token._replace(text=text, start=cell.starts[at], end=cell.ends[here - 1]))
            at = here
    return parts


def cell_at(file: File, offset: int) -> tuple[int, int] | None:
    """The cell (from 1, code cells counted) and the line in it (from 1) of an offset in an .ipynb file."""
    for cell in cells_of(file.text):
        if cell.starts and cell.starts[0] <= offset <= cell.ends[-1]:
            before = sum(1 for at, sign in zip(cell.starts, cell.text) if sign == "\n" and at < offset)
            return cell.number, before + 1
    return None
