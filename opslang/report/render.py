"""Diagnostics as text in the GNU form, with the source line and the place marked.  Knows no colours: they are given in.

    relations.ops:2:20: error: degrees-differ: the right side has degree 6, the left side degree 7
        Sq^2 Sq^2 iota_3 = Sq^3 iota_3
                           ~~~~~~~~~~~
        an equation is possible in one degree only

Nothing of the input reaches the terminal raw: control characters, bytes that are no UTF-8 and invisible
characters are written as escapes.  Columns in the first line count code points; the marks count cells of
the terminal.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator

from opslang.ground.source import Place, Source
from opslang.report.diagnostic import Diagnostic

Paint = Callable[[str, str], str]
"""Gives a text its colour; the first argument is its role: error, warning, note, place, mark or help."""

INDENT = "    "
TAB = 4
LONGEST_MESSAGE = 800
CUT = "..."


def plain(role: str, text: str) -> str:
    """No colour."""
    return text


# --- characters ---------------------------------------------------------------------------------


def _escape(character: str) -> str:
    number = ord(character)
    if 0xDC80 <= number <= 0xDCFF:  # a byte that was no UTF-8, as `surrogateescape` keeps it
        return f"\\x{number - 0xDC00:02x}"
    if number < 0x80:
        return f"\\x{number:02x}"
    return f"\\u{number:04x}" if number < 0x10000 else f"\\U{number:08x}"


def visible(text: str) -> str:
    """The text with every character that a terminal would obey or hide written as an escape."""
    if text.isprintable():
        return text
    return "".join(c if c.isprintable() else _escape(c) for c in text)


def cells(text: str) -> int:
    """How many cells of a terminal a printable text fills."""
    if text.isascii():
        return len(text)
    return sum(_width(c) for c in text)


def _width(character: str) -> int:
    if character < "\u0300":
        return 1
    from unicodedata import category, east_asian_width  # not there for plain lines, which are answered at once

    if category(character) in ("Mn", "Me"):
        return 0
    return 2 if east_asian_width(character) in "WF" else 1


def _shown(text: str, filled: int) -> Iterator[tuple[str, int]]:
    """Each code point as it is shown, with its width; `filled` cells stand before the text."""
    for character in text:
        if character == "\t":
            width = TAB - filled % TAB
            shown = " " * width
        elif character.isprintable():
            shown, width = character, _width(character)
        else:
            shown = _escape(character)
            width = len(shown)
        filled += width
        yield shown, width


# --- the source line and its marks --------------------------------------------------------------


def excerpt(line: str, start: int, end: int, room: int) -> tuple[str, str]:
    """The line as shown and the marks under code points start … end; what is wider than `room` cells is cut away."""
    if line.isascii() and line.isprintable():
        return _plain_excerpt(line, start, end, room)
    return _excerpt_by_cells(line, start, end, room)


def _plain_excerpt(line: str, start: int, end: int, room: int) -> tuple[str, str]:
    """`excerpt` of a line in which every code point fills one cell."""
    low, high = 0, len(line)
    if high > room:
        room -= 2 * len(CUT)
        low = max(0, start - max(room // 2, room - (len(line) - start)))
        high = min(len(line), low + room)
    before = CUT if low else ""
    text = before + line[low:high] + (CUT if high < len(line) else "")
    length = min(max(start, end), high) - start
    return text.rstrip(), " " * (len(before) + start - low) + ("~" * length if length > 1 else "^")


def _excerpt_by_cells(line: str, start: int, end: int, room: int) -> tuple[str, str]:
    first = max(0, start - room)
    last = min(len(line), max(start, min(end, start + room)) + room)
    shown = list(_shown(line[first:last], 0))
    at, to = start - first, max(start, end) - first
    before = after = ""
    if first > 0 or last < len(line) or sum(width for _, width in shown) > room:
        low, high = _window([width for _, width in shown], at, room - 2 * len(CUT))
        before = CUT if first + low > 0 else ""
        after = CUT if first + high < len(line) else ""
        shown, at, to = shown[low:high], at - low, min(to, high) - low
    text = before + "".join(piece for piece, _ in shown) + after
    space = len(before) + sum(width for _, width in shown[:at])
    length = sum(width for _, width in shown[at:to])
    return text.rstrip(), " " * space + ("~" * length if length > 1 else "^")


def _window(widths: list[int], at: int, room: int) -> tuple[int, int]:
    """The stretch low … high of at most `room` cells: half of them before `at` where there is more on both sides."""
    low, left = at, 0
    ahead = sum(widths[at:])
    allowance = max(room // 2, room - ahead)
    while low > 0 and left + widths[low - 1] <= allowance:
        low -= 1
        left += widths[low]
    high, filled = at, left
    while high < len(widths) and filled + widths[high] <= room:
        filled += widths[high]
        high += 1
    return low, high


# --- diagnostics --------------------------------------------------------------------------------


def headline(file: str, place: Place | None, severity: str, text: str, paint: Paint = plain) -> str:
    """The first line, in the GNU form: `file:line:column: severity: text`; without a place `file: severity: text`."""
    where = f"{visible(file)}:" if place is None else f"{visible(file)}:{place.line}:{place.column}:"
    return f"{paint('place', where)} {paint(severity, severity + ':')} {shortened(visible(text))}"


def shortened(text: str) -> str:
    """A message with its middle left out where it is longer than anybody reads."""
    if len(text) <= LONGEST_MESSAGE:
        return text
    half = LONGEST_MESSAGE // 2
    return f"{text[:half]} {CUT} {text[-half:]}"


def _marked(source: Source, place: Place, paint: Paint, width: int) -> list[str]:
    line = source.line_at(place.line)
    end = place.end_column - 1 if place.end_line == place.line else len(line)
    text, marks = excerpt(line, place.column - 1, end, max(20, width - len(INDENT)))
    signs = marks.lstrip()
    return [INDENT + text, INDENT + " " * (len(marks) - len(signs)) + paint("mark", signs)]


def render(diagnostic: Diagnostic, source: Source, paint: Paint = plain, width: int = 80) -> str:
    """One diagnostic as text of several lines, without a final line end."""
    place = source.place(diagnostic.span)
    said = f"{diagnostic.name}: {diagnostic.message}"
    lines = [headline(source.name, place, diagnostic.severity, said, paint)]
    lines += _marked(source, place, paint, width)
    lines += [INDENT + paint("help", shortened(visible(part))) for part in diagnostic.help.splitlines()]
    for label in diagnostic.labels:
        there = source.place(label.span)
        lines.append(headline(source.name, there, "note", label.message, paint))
        lines += _marked(source, there, paint, width)
    return "\n".join(lines)


def render_file(name: str, message: str, file: str, line: int | None = None, paint: Paint = plain) -> str:
    """An error that concerns a whole file, or a line that is not kept."""
    place = None if line is None else Place(line, 1, line, 1)
    return headline(file, place, "error", f"{name}: {message}", paint)
