"""Where the next token comes from: a stack of files, and before them what macros have left to be read.

Knows how arguments are delimited; knows no command.  Fuel bounds the work that macros may cause.
"""

from __future__ import annotations

from collections.abc import Sequence

from opslang.lint.reading.document import Token

LONGEST = 4000
"""An argument of more tokens than this is taken for one whose brace was forgotten."""

LONGEST_OPTION = 600
"""The same for what stands in square brackets, in characters."""

MUST_STOP = frozenset({"close", "par", "enter", "leave", "shift"})


def cut(token: Token, at: int) -> tuple[Token, Token]:
    """A run as two runs, the first of `at` characters."""
    kind, text, start, end, file, style, within = token
    if within is None:
        return (
            Token(kind, text[:at], start, start + at, file, style),
            Token(kind, text[at:], start + at, end, file, style),
        )
    source, first, last = within
    if last - first != len(text):
        return Token(kind, text[:at], start, end, file, style, within), token._replace(text=text[at:])
    return (
        Token(kind, text[:at], start, end, file, style, (source, first, first + at)),
        Token(kind, text[at:], start, end, file, style, (source, first + at, last)),
    )


class Frame:
    """One file being read: its tokens, how far it is read, and what was pending when a further file was drawn in."""

    __slots__ = ("at", "file", "pending", "silent", "size", "tokens")

    def __init__(self, tokens: list[Token], file: int, silent: bool) -> None:
        self.tokens = tokens
        self.at = 0
        self.size = len(tokens)
        self.file = file
        self.silent = silent
        self.pending: list[Token] = []


class Intake:
    """The tokens still to come."""

    def __init__(self) -> None:
        self.frames: list[Frame] = []
        self.pending: list[Token] = []
        self.fuel = 200_000
        self.since = 0
        self.last: Token | None = None
        self.silent = False

    def open(self, tokens: list[Token], file: int, silent: bool) -> None:
        """Read these tokens of a file before whatever else is to come."""
        if self.frames:
            self.frames[-1].pending = self.pending
        self.pending = []
        self.frames.append(Frame(tokens, file, silent))
        self.silent = silent
        self.fuel += 12 * len(tokens)

    def leave_file(self) -> None:
        """Forget the rest of the file that is being read."""
        self.frames.pop()
        self.pending = self.frames[-1].pending if self.frames else []
        self.silent = bool(self.frames) and self.frames[-1].silent

    def speak(self) -> None:
        """The preamble is over."""
        for frame in self.frames:
            frame.silent = False
        self.silent = False

    def next(self) -> Token | None:
        """The next token; None when all files are read."""
        if self.pending:
            return self.pending.pop()
        self.since = 0
        while self.frames:
            frame = self.frames[-1]
            at = frame.at
            if at < frame.size:
                frame.at = at + 1
                return frame.tokens[at]
            self.leave_file()
            if self.pending:
                return self.pending.pop()
        return None

    def push(self, tokens: Sequence[Token]) -> None:
        """Put tokens back; the first of them comes next."""
        self.pending.extend(reversed(tokens))

    def skip_space(self) -> None:
        """Pass over white space, not over a blank line."""
        while (token := self.next()) is not None:
            if token.kind != "run":
                self.pending.append(token)
                return
            kept = len(token.text.lstrip())
            if kept:
                self.pending.append(cut(token, len(token.text) - kept)[1] if kept < len(token.text) else token)
                return

    def peek(self, spaces: bool = True) -> Token | None:
        """The next token without taking it; white space before it is passed over if wanted."""
        if spaces:
            self.skip_space()
        token = self.next()
        if token is not None:
            self.pending.append(token)
        return token

    def follows(self, sign: str, spaces: bool = True) -> bool:
        """Whether plain text beginning with this sign comes next; it is taken if so."""
        token = self.peek(spaces)
        if token is None or token.kind != "run" or not token.text.startswith(sign):
            return False
        self.pending.pop()
        head, rest = cut(token, len(sign))
        self.last = head
        if rest.text:
            self.pending.append(rest)
        return True

    def atom(self) -> Token | None:
        """The next token, a run being given character by character."""
        token = self.next()
        if token is not None and token.kind == "run" and len(token.text) > 1:
            token, rest = cut(token, 1)
            self.pending.append(rest)
        return token

    def argument(self, long: bool = True) -> list[Token] | None:
        """One argument as TeX takes it, a group without braces or one token; None, nothing taken, if there is none."""
        if self.fuel < 0:
            return None
        self.skip_space()
        token = self.atom()
        if token is None:
            return None
        if token.kind == "open":
            return self._group(token, long)
        if token.kind in MUST_STOP:
            self.pending.append(token)
            return None
        self.last = token
        return [token]

    def _group(self, brace: Token, long: bool) -> list[Token] | None:
        taken: list[Token] = []
        depth = 1
        while len(taken) < LONGEST:
            token = self.next()
            if token is None:
                break
            kind = token.kind
            if kind == "open":
                depth += 1
            elif kind == "close":
                depth -= 1
                if not depth:
                    self.fuel -= len(taken)
                    self.last = token
                    return taken
            elif kind == "leave" or kind == "enter" or (kind == "par" and not long):
                self.pending.append(token)
                break
            taken.append(token)
        self.fuel -= len(taken)
        self.push([brace, *taken])
        return None

    def braced(self, long: bool = False) -> list[Token] | None:
        """An argument only if it stands in braces."""
        token = self.peek()
        return self.argument(long) if token is not None and token.kind == "open" else None

    def option(self, spaces: bool = True) -> list[Token] | None:
        """What stands in square brackets next; None, and nothing taken, if nothing does."""
        if self.fuel < 0 or not self.follows("[", spaces):
            return None
        first = self.last
        assert first is not None
        found = self.until((("run", "]"),), LONGEST_OPTION)
        if found is None:
            self.push([first])
        return found

    def exactly(self, signs: tuple[tuple[str, str], ...]) -> bool:
        """Take these (kind, text) if they come next; otherwise take nothing."""
        taken: list[Token] = []
        for number in range(len(signs)):
            token = self.atom()
            if token is None:
                break
            taken.append(token)
            if not _ends_with(taken, signs[: number + 1]):
                break
        else:
            return True
        self.push(taken)
        return False

    def until(self, stop: tuple[tuple[str, str], ...], longest: int = LONGEST) -> list[Token] | None:
        """The tokens up to a sequence of (kind, text), outside braces; it is taken too.

        None, and nothing taken, if it does not come.
        """
        taken: list[Token] = []
        depth = 0
        while len(taken) < longest and self.fuel >= 0:
            token = self.atom()
            if token is None:
                break
            if token.kind in ("par", "leave", "enter"):
                self.pending.append(token)
                break
            taken.append(token)
            if token.kind == "open":
                depth += 1
            elif token.kind == "close":
                depth -= 1
                if depth < 0:
                    break
            if not depth and len(taken) >= len(stop) and _ends_with(taken, stop):
                self.fuel -= len(taken)
                self.last = taken[-1]
                return taken[: len(taken) - len(stop)]
        self.fuel -= len(taken)
        self.push(taken)
        return None


def _ends_with(taken: list[Token], stop: tuple[tuple[str, str], ...]) -> bool:
    for token, (kind, text) in zip(reversed(taken), reversed(stop)):
        if token.kind != kind or (token.text != text and not (text == " " and token.text.isspace())):
            return False
    return True


def plain(tokens: Sequence[Token]) -> str:
    """The tokens as one would type them: names of files and environments, colours, notes over relations."""
    parts = []
    for token in tokens:
        parts.append(token.text)
        if token.kind == "command" and token.text[-1:].isalpha():
            parts.append(" ")
    return " ".join("".join(parts).split())
