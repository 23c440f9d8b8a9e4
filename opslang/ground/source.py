"""Text with places.  Knows lines and columns and nothing of what the text means.

Offsets count code points from 0 inside one piece of text; lines and columns
count from 1, in code points of the file as its author wrote it.
"""

from __future__ import annotations

from bisect import bisect_right

from attrs import field, frozen

Span = tuple[int, int]
"""Start and end offset (end excluded) inside one `Source`."""


@frozen
class Place:
    """A stretch of a file: lines and columns from 1; the end column is the one after the last code point."""

    line: int
    column: int
    end_line: int
    end_column: int


@frozen
class Source:
    """A piece of a file: its text, the file's name, and the line on which the piece begins."""

    name: str
    text: str
    first_line: int = 1
    _starts: list[int] = field(factory=list, init=False, eq=False, repr=False)

    def _line_starts(self) -> list[int]:
        if not self._starts:
            self._starts.append(0)
            at = self.text.find("\n")
            while at >= 0:
                self._starts.append(at + 1)
                at = self.text.find("\n", at + 1)
        return self._starts

    def position(self, offset: int) -> tuple[int, int]:
        """Line and column (both from 1, in the file) of an offset."""
        starts = self._line_starts()
        row = bisect_right(starts, offset) - 1
        return self.first_line + row, offset - starts[row] + 1

    def place(self, span: Span) -> Place:
        """The lines and columns of a span."""
        return Place(*self.position(span[0]), *self.position(max(span)))

    def line_at(self, line: int) -> str:
        """The text of one line of the file, without its end; the line must lie in this piece."""
        starts = self._line_starts()
        row = line - self.first_line
        end = starts[row + 1] - 1 if row + 1 < len(starts) else len(self.text)
        return self.text[starts[row] : end]
