"""Markdown, MyST included: finds its formulas, headings and directives, and gives them to the reader as tokens.

Knows blocks and spans as far as needed to tell mathematics from code; renders nothing.  What is no text (code,
front matter, marks of lists and quotations) is blanked out first, so that every offset stays that of the file.
"""

from __future__ import annotations

import re

from opslang.lint.reading.document import Token
from opslang.lint.reading.lexer import lex
from opslang.lint.reading.signs import MATH_ENVIRONMENTS

_FENCE = re.compile(r"(?P<mark>`{3,}|~{3,}|:{3,})[ \t]*(?P<info>[^\n`]*)$")
_QUOTE = re.compile(r"[ ]{0,3}(?:>[ ]?)+")
_ITEM = re.compile(r"[ \t]*(?:[-*+]|\d{1,9}[.)])(?:[ \t]+|$)")
_HEADING = re.compile(r"[ ]{0,3}(#{1,6})[ \t]+(.*?)(?:[ \t]+#+)?[ \t]*$")
_NOTE = re.compile(r"[ ]{0,3}\[\^[^\]\n]+\]:[ \t]*")
_OPTION = re.compile(r"[ \t]*:[\w-]+:.*$")
_REMARK = re.compile(r"[ ]{0,3}%[^\n]*$")
_CODE = re.compile(
    r"\{?(?:code|code-block|code-cell|sourcecode|literalinclude|mermaid|toctree|eval-rst|raw|bibliography)\b"
)

_ENVIRONMENTS = "|".join(re.escape(name) for name in MATH_ENVIRONMENTS)
_OPENERS = re.compile(
    rf"""
  (?P<par>\n[ \t]*\n\s*)
| (?P<remark><!--)
| (?P<role>\{{math\}}(?=`))
| (?P<ticks>`+)
| (?P<environment>\\begin\{{(?P<name>{_ENVIRONMENTS})\}})
| (?P<bracket>\\\\?[(\[])
| \\(?P<escaped>[!-/:-@\[-`{{-~])
| (?P<double>\$\$)
| (?P<dollar>\$(?![\s$]))
| (?P<link>\]\([^)\s(\[]*\)|<[a-zA-Z/][^<>\n]*>|\*+)
""",
    re.VERBOSE,
)
_BLANK_LINE = re.compile(r"\n[ \t]*\n")
_DOLLAR = re.compile(r"(?:[^$\\]++|\\[\s\S])*+\$")
_TICKS = re.compile("`+")
_CLOSERS = {"(": ")", "[": "]"}


class Page:
    """A Markdown text with what is no text blanked out, and the blocks found on the way."""

    def __init__(self, text: str) -> None:
        self.text = text
        self.parts: list[str] = []
        self.blocks: list[tuple[int, int, str, int]] = []
        """(start, end, kind, depth): display (a fence), heading, footnote, directive, break (before an item)."""
        self.fences: list[tuple[str, int]] = []
        self.hidden: tuple[str, int, int] | None = None
        self.listed = False
        self.after_blank = True
        self.options = False
        self._go()

    @property
    def masked(self) -> str:
        """The text with the same offsets, blanks for what is none."""
        return "".join(self.parts)

    def _go(self) -> None:
        at = 0
        lines = self.text.split("\n")
        front = lines[0].rstrip() == "---" and "---" in (line.rstrip() for line in lines[1:])
        for number, line in enumerate(lines):
            if front:
                self.parts.append(" " * len(line))
                front = not (number and line.rstrip() == "---")
            else:
                self.parts.append(self._line(line, at))
            at += len(line) + 1
            self.parts.append("\n")
        self.parts.pop()
        if self.hidden is not None and self.hidden[2] >= 0:
            self.blocks.append((min(self.hidden[2], len(self.text)), len(self.text), "display", 0))

    def _line(self, line: str, at: int) -> str:
        quote = _QUOTE.match(line)
        lead = quote.end() if quote else 0
        rest = line[lead:]
        found = _FENCE.fullmatch(rest.strip())
        if self.hidden is not None:
            return self._hidden_line(rest, found, at, len(line))
        if not rest.strip():
            self.after_blank, self.options = True, False
            return " " * len(line)
        blank, self.after_blank = self.after_blank, False
        if found is not None:
            self._fence(found, at + len(line) + 1)
            return " " * len(line)
        if self.options and (_OPTION.fullmatch(rest) or rest.strip() == "---"):
            return " " * len(line)
        self.options = False
        return " " * lead + self._words(rest, at + lead, blank)

    def _hidden_line(self, rest: str, found: re.Match[str] | None, at: int, length: int) -> str:
        assert self.hidden is not None
        mark, count, start = self.hidden
        if found is not None and not found["info"] and found["mark"][0] == mark and len(found["mark"]) >= count:
            if start >= 0:
                self.blocks.append((start, at, "display", 0))
            self.hidden = None
        elif start == at and (_OPTION.fullmatch(rest) or not rest.strip()):
            self.hidden = (mark, count, at + length + 1)
        return " " * length

    def _fence(self, found: re.Match[str], after: int) -> None:
        mark, info = found["mark"], found["info"].strip()
        if not info and self.fences and self.fences[-1][0] == mark[0] and self.fences[-1][1] <= len(mark):
            self.fences.pop()
        elif info.startswith("{math}") or info == "math":
            self.hidden = (mark[0], len(mark), after)
        elif mark[0] == ":" or (info.startswith("{") and not _CODE.match(info)):
            self.fences.append((mark[0], len(mark)))
            self.options = True
        else:
            self.hidden = (mark[0], len(mark), -1)

    def _words(self, rest: str, at: int, blank: bool) -> str:
        """A line of text without its marks."""
        heading = _HEADING.fullmatch(rest)
        if heading is not None:
            self.blocks.append((at + heading.start(2), at + heading.end(2), "heading", len(heading[1])))
            self.listed = False
            return " " * len(rest)
        indented = rest.startswith(("    ", "\t"))
        item = _ITEM.match(rest)
        if item is not None and (not indented or self.listed):
            self.listed = True
            self.blocks.append((at, at, "break", 0))
            return " " * item.end() + rest[item.end() :]
        if indented and blank and not self.listed:
            self.after_blank = True
            return " " * len(rest)
        if blank and not rest.startswith((" ", "\t")):
            self.listed = False
        note = _NOTE.match(rest)
        if note is not None:
            self.blocks.append((at, at, "footnote", 0))
            return " " * note.end() + rest[note.end() :]
        if _REMARK.fullmatch(rest) is not None:
            if "opslang:" in rest:
                self.blocks.append((at + rest.index("%"), at + len(rest), "directive", 0))
            return " " * len(rest)
        return rest


def tokens_of(text: str, file: int = 0) -> list[Token]:
    """The tokens of a Markdown text, as the reader of TeX takes them."""
    page = Page(text)
    masked = page.masked
    found: list[Token] = []
    at = 0
    for start, end, kind, depth in sorted(page.blocks, key=lambda block: block[0]):
        _spans(masked, at, start, file, found)
        at = max(at, end)
        if kind == "display":
            _formula("display", text, start, end, start, end, file, found)
        elif kind == "heading":
            found.append(Token("enter", f"heading:{depth}", start, end, file))
            _spans(text, start, end, file, found)
            found.append(Token("leave", "leave", end, end, file))
        elif kind == "directive":
            found.append(Token("directive", text[start:end], start, end, file))
        else:
            found.append(Token("par", "", start, start, file))
            if kind == "footnote":
                found.append(Token("note", "", start, start, file))
    _spans(masked, at, len(masked), file, found)
    return found


def _formula(
    kind: str, text: str, start: int, end: int, outer: int, outer_end: int, file: int, found: list[Token]
) -> None:
    found.append(Token("enter", "formula:" + kind, outer, start, file))
    found.extend(lex(text, file, start, end))
    found.append(Token("leave", "leave", end, outer_end, file))


def _spans(text: str, start: int, end: int, file: int, found: list[Token]) -> None:
    """Text and formulas of a stretch."""
    passage = _Passage(text, end)
    at = start
    while (span := _OPENERS.search(text, at, end)) is not None:
        begin, stop = span.span()
        kind = span.lastgroup
        whole, inner, form = stop, (stop, stop), ""
        if kind not in ("par", "escaped", "link"):
            close = passage.close(span)
            if close is None:
                found.append(Token("run", text[at:stop], at, stop, file))
                at = stop
                continue
            whole, inner, form = close
        if begin > at:
            found.append(Token("run", text[at:begin], at, begin, file))
        at = whole
        if kind == "par":
            found.append(Token("par", "", begin, stop, file))
        elif kind == "escaped":
            found.append(Token("run", span["escaped"], begin, stop, file))
        elif form == "remark":
            said = text[slice(*inner)].strip()
            if said.startswith("opslang:"):
                found.append(Token("directive", said, begin, whole, file))
        elif form == "environment":
            found.extend(lex(text, file, begin, whole))
        elif form == "code":
            found.append(Token("run", " ", begin, whole, file))
        elif form:
            _formula(form, text, *inner, begin, whole, file, found)
    if end > at:
        found.append(Token("run", text[at:end], at, end, file))


Close = tuple[int, tuple[int, int], str]


class _Passage:
    """Looks for what closes a span, inside its paragraph; what was not found once is not looked for again there."""

    def __init__(self, text: str, end: int) -> None:
        self.text = text
        self.end = end
        self.paragraph = -1
        self.missing: set[str] = set()

    def close(self, span: re.Match[str]) -> Close | None:
        """Where the span ends, what it holds, and what it is; None when it is not closed."""
        kind, stop = span.lastgroup, span.end()
        if stop > self.paragraph:
            blank = _BLANK_LINE.search(self.text, stop, self.end)
            self.paragraph = self.end if blank is None else blank.start()
            self.missing.clear()
        if kind == "remark":
            return self._until("-->", stop, "remark")
        if kind == "ticks":
            return self._code(span["ticks"], stop, "code")
        if kind == "role":
            ticks = _TICKS.match(self.text, stop)
            return self._code(ticks.group(), ticks.end(), "inline") if ticks is not None else None
        if kind == "environment" or kind == "name":
            return self._until("\\end{" + span["name"] + "}", stop, "environment")
        if kind == "bracket":
            sign = span["bracket"]
            return self._until(sign[:-1] + _CLOSERS[sign[-1]], stop, "inline" if sign[-1] == "(" else "display")
        if kind == "double":
            return self._until("$$", stop, "display")
        found_dollar = _DOLLAR.match(self.text, stop, self.paragraph)
        if found_dollar is None:
            return None
        last = found_dollar.end()
        if self.text[last - 2].isspace() or self.text[last : last + 1].isdigit():
            return None
        return last, (stop, last - 1), "inline"

    def _until(self, closer: str, stop: int, form: str) -> Close | None:
        if closer in self.missing:
            return None
        limit = self.end if form == "remark" else self.paragraph
        at = self.text.find(closer, stop, limit)
        if at < 0 or at == stop:
            self.missing.update((closer,) if at < 0 else ())
            return None
        return at + len(closer), (stop, at), form

    def _code(self, ticks: str, stop: int, form: str) -> Close | None:
        if ticks in self.missing:
            return None
        found = re.compile(f"(?<!`){ticks}(?!`)").search(self.text, stop, self.paragraph)
        if found is None:
            self.missing.add(ticks)
            return None
        return found.end(), (stop, found.start()), form
