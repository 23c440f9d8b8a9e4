"""Reads the spelling: text in, tokens with their places out, the same for ASCII, Unicode and TeX.

Knows words, scripts, brackets and TeX layout.  Knows no grammar: what may follow what is settled by
`grammar/opslang.lark`, and the few mistakes of spelling that have a likely mend by `mistakes.py`.
Never raises: what cannot be read becomes a diagnostic at its place.
"""

from __future__ import annotations

import re
import unicodedata

from opslang.report.diagnostic import Diagnostic, error, warning
from opslang.syntax.shapes import PLAIN_TOKEN, SKIPPED, TEX_TOKEN, Token, shown
from opslang.syntax.spellings import (
    COMMANDS,
    INFINITE,
    INSIDE,
    KEYWORDS,
    LATER,
    LATER_INSIDE,
    LAYOUT,
    PRIMES,
    STATEMENT_WORDS,
    SUBSCRIPTS,
    SUPERSCRIPTS,
    SYMBOLS,
    WORDS,
    Meaning,
    is_tex,
    letter_meaning,
)

NESTING_LIMIT = 250
"""How many brackets may be open at one place."""

DIGIT_LIMIT = 4000
"""How many digits a number may have."""

MANY = 5
"""After so many faults of spelling in one statement the rest of it is not read."""

_EMPTY = re.compile(r"\s*\}")
_PIECES = re.compile(r"Sq|[A-Za-z]")
_CLOSERS = {"RPAR": "LPAR", "RSQUARE": "LSQUARE", "RBRACE": "LBRACE"}
_OPENERS = frozenset(_CLOSERS.values())
_SPATIAL = frozenset(("SPACE_WORD", "ON", "BASIS", "SERIES", "MAP", "BUNDLE", "COMPARE"))
_LETTERS = frozenset(("NAME", "RUN", "LETTER_Z", "LETTER_F", "LETTER_H", "LETTER_K", "LETTER_X", "PP", "QQ"))
_NEUTRAL_ESCAPES = frozenset(",;:!> \t\\[]()/")


class Reading:
    """The tokens of one statement, what was wrong with its spelling, and whether it is in TeX spelling."""

    def __init__(self, text: str) -> None:
        self.text = text
        self.tex = is_tex(text)
        self.tokens: list[Token] = []
        self.errors: list[Diagnostic] = []
        self.warnings: list[Diagnostic] = []
        self.stop = False
        self.rows: list[int] = []
        """Before which tokens a row of a display begins, brackets aside."""
        self._keyword = ""
        self._spatial = False
        self._open: list[tuple[str, str, Token]] = []  # kind, role ("script", "binom", "" or "layout"), token
        self._closed = ""
        self._pattern = TEX_TOKEN if self.tex else PLAIN_TOKEN
        for found in self._pattern.finditer(text):
            group = found.lastgroup or ""
            if group in SKIPPED:
                continue
            _READERS[group](self, found.group(), *found.span())
            if self.stop:
                return
        self._finish()

    # --- putting tokens down ---------------------------------------------------------------------

    def _put(self, meaning: Meaning, start: int, end: int) -> None:
        kind, value = meaning
        self._closed = ""
        self.tokens.append(Token(kind, value, start, end))
        if kind == "IN" and self._keyword == "LET":
            self._spatial = True
        elif self._keyword in ("MAP", "BUNDLE") and kind in ("WITH", "EQUALS"):
            self._spatial = False

    def _previous(self) -> str:
        return self.tokens[-1].kind if self.tokens else ""

    def _fault(self, name: str, message: str, start: int, end: int, help: str = "", mend: str | None = None) -> None:
        self.errors.append(error(name, message, (start, end), help, mend))
        self.stop = self.stop or len(self.errors) >= MANY

    def _later(self, what: str, start: int, end: int) -> None:
        self.errors = [error("not-yet-supported", f"{what} is not yet supported", (start, end), _LATER_HELP)]
        self.stop = True

    # --- numbers and words -----------------------------------------------------------------------

    def number(self, text: str, start: int, end: int) -> None:
        if len(text) > DIGIT_LIMIT:
            message = f"a number has {len(text):,} digits; the limit is {DIGIT_LIMIT:,}"
            self._fault("number-too-large", message, start, end)
            return
        if self.tex and len(text) > 1 and self._previous() in ("CARET", "UNDER"):
            moved, sign = ("raised", "^") if self._previous() == "CARET" else ("lowered", "_")
            self.warnings.append(
                warning(
                    "tex-script",
                    f"in TeX spelling only the {text[0]} of {sign}{text} is {moved}: it is followed by {text[1:]}",
                    (start, end),
                    f"write {sign}{{{text}}}",
                    f"{{{text}}}",
                )
            )
            self._put(("NUMBER", text[0]), start, start + 1)
            text, start = text[1:], start + 1
        self._put(("NUMBER", text), start, end)

    def word(self, text: str, start: int, end: int) -> None:
        if not self.tokens and text in KEYWORDS:
            self._keyword = KEYWORDS[text]
            self._spatial = self._keyword in _SPATIAL
            self._put((self._keyword, text), start, end)
        elif text in INSIDE.get(self._keyword, ()):
            self._put((INSIDE[self._keyword][text], text), start, end)
        elif (not self.tokens and text in LATER) or text in LATER_INSIDE:
            self._later(LATER_INSIDE.get(text) or LATER[text], start, end)
        elif text == "in" and (not self.tex or self._keyword == "LET"):
            self._put(("IN", "in"), start, end)
        elif self._spatial:
            self._spatial_word(text, start, end)
        elif text == "mod":
            self._put(("MOD", "mod"), start, end)
        elif text in WORDS:
            self._put(WORDS[text], start, end)
        elif self.tex and text not in STATEMENT_WORDS:
            for piece in _PIECES.finditer(text):
                self._put(letter_meaning(piece.group()), start + piece.start(), start + piece.end())
        else:
            self._put(self._run(text), start, end)

    def _run(self, text: str) -> Meaning:
        return letter_meaning(text) if len(text) == 1 else ("RUN", text)

    def _spatial_word(self, text: str, start: int, end: int) -> None:
        """A word among spaces: runs are names of spaces; an x against a closing bracket or a number is the product."""
        last = self.tokens[-1]
        if text in INFINITE and "CARET" in [token.kind for token in self.tokens[-2:]]:
            self._put(("INFINITY", "∞"), start, end)
            return
        if len(text) > 1 and text[0] == "x" and last.kind in ("RPAR", "NUMBER", "RBRACE") and text not in WORDS:
            self._put(letter_meaning("x"), start, start + 1)
            text, start = text[1:], start + 1
        elif last.kind in _LETTERS and last.end == start:  # faces in turn: \mathbb{R}P, B\mathrm{SO}
            self.tokens.pop()
            text, start = last.value + text, last.start
        self._put(WORDS.get(text) or self._run(text), start, end)

    def face(self, text: str, start: int, end: int) -> None:
        found = self._pattern.match(self.text, start)
        content = (found and (found.group("faced") or found.group("single"))) or ""
        if self._spatial or content in WORDS or content == "mod" or content in LATER_INSIDE or content == "in":
            self.word(content, start, end)
        else:
            self._put(self._run(content), start, end)

    def command(self, text: str, start: int, end: int) -> None:
        name = text[1:]
        if name in LAYOUT:
            return
        if name == "prime":
            self._put(("PRIME", "'"), start, end)
        elif name in COMMANDS:
            self._sign(COMMANDS[name], start, end)
        elif self._spatial and name[0].isupper():
            self._spatial_word(name, start, end)
        else:
            close = next((known for known in COMMANDS if known.lower() == name.lower()), None)
            mend = None if close is None else f"\\{close}"
            help = f"write {mend}" if mend else "a class is a letter or a Greek letter, with an index and primes"
            self._fault("unknown-command", f"the TeX command {shown(text)} is not known", start, end, help, mend)

    # --- scripts ---------------------------------------------------------------------------------

    def raised(self, text: str, start: int, end: int) -> None:
        self._script("CARET", "^", SUPERSCRIPTS, text, start)

    def lowered(self, text: str, start: int, end: int) -> None:
        self._script("UNDER", "_", SUBSCRIPTS, text, start)

    def _script(self, kind: str, sign: str, table: dict[str, str], text: str, start: int) -> None:
        """A run of Unicode scripts: what it would be inside braces, every token at its own place."""
        plain = "".join(table[char] for char in text)
        self._put((kind, sign), start, start)
        if plain.isdigit():
            self._put(("NUMBER", plain), start, start + len(text))
            return
        self._put(("LBRACE", "{"), start, start)
        for piece in re.finditer(r"[0-9]+|.", plain):
            char = piece.group()
            meaning = ("NUMBER", char) if char.isdigit() else SYMBOLS.get(char) or letter_meaning(char)
            self._put(meaning, start + piece.start(), start + piece.end())
        self._put(("RBRACE", "}"), start + len(text), start + len(text))

    def pull(self, text: str, start: int, end: int) -> None:
        self._put(("PULL", "^*"), start, end)

    def primes(self, text: str, start: int, end: int) -> None:
        self._put(("PRIME", "'" * sum(PRIMES[char] for char in text)), start, end)

    def raised_prime(self, text: str, start: int, end: int) -> None:
        count = text.count("\\prime") + sum(PRIMES.get(char, 0) for char in text)
        self._put(("PRIME", "'" * count), start, end)

    # --- slips of the keyboard -------------------------------------------------------------------

    def foreign(self, text: str, start: int, end: int) -> None:
        """Digits of another alphabet, or of full width; perhaps behind a square whose ^ is missing."""
        plain = "".join(str(unicodedata.decimal(digit)) for digit in text)
        head = bool(self.tokens) and self._previous() in ("SQ", "PP")
        if head:
            self._put(("CARET", "^"), start, start)
        mend = "^" + plain if head else plain
        message = f"{shown(text)} is written with digits of another kind"
        self._fault("invalid-character", message, start, end, f"write {mend}", mend)
        self._put(("NUMBER", plain), start, end)

    def dead(self, text: str, start: int, end: int) -> None:
        """A key for accents that was pressed for ^, or for a prime."""
        raises = text == "ˆ" or self.text[end : end + 1].isdigit() or self.text[end : end + 1] == "{"
        kind, mend = ("CARET", "^") if raises else ("PRIME", "'")
        self._fault("invalid-character", f"{text} is an accent", start, end, f"write {mend}", mend)
        self._put((kind, mend), start, end)

    def unequal(self, text: str, start: int, end: int) -> None:
        message = f"{shown(text)} is no sign of a relation: it is written with =, and decided to be true or false"
        self._fault("expected", message, start, end, "write =", "=")
        self._put(("EQUALS", "="), start, end)

    # --- signs and brackets ----------------------------------------------------------------------

    def escape(self, text: str, start: int, end: int) -> None:
        if text[1] in _NEUTRAL_ESCAPES or text[1].isspace():
            return
        if text[1] == "|":
            self._sign(("BAR", "|"), start, end)
            return
        self._fault("unknown-command", f"the TeX command {shown(text)} has no meaning here", start, end)

    def surrounding(self, text: str, start: int, end: int) -> None:
        """`\\begin{align}` and its end: a bracket that gives no token."""
        value = "".join(text.split())
        if value.startswith("\\begin"):
            self._open.append(("SURROUNDING", "layout", Token("SURROUNDING", value, start, end)))
        elif self._open and self._open[-1][0] == "SURROUNDING" and _match(self._open[-1][2].value) == value:
            self._open.pop()
        else:
            self._closing("SURROUNDING", value, start, end)

    def row(self, text: str, start: int, end: int) -> None:
        if self._open and self._open[-1][0] == "SURROUNDING":
            self.rows.append(len(self.tokens))

    def aside(self, text: str, start: int, end: int) -> None:
        """Labels, tags, invisible delimiters: nothing to read."""

    def dangling(self, text: str, start: int, end: int) -> None:
        self._fault("unfinished", "the line is to go on after \\, and nothing follows", start, start + 1, "", "")

    def arrow(self, text: str, start: int, end: int) -> None:
        self._put(("ARROW", "->"), start, end)

    def dots(self, text: str, start: int, end: int) -> None:
        self._sign(("DOTS", "…"), start, end)

    def sign(self, text: str, start: int, end: int) -> None:
        if text in SYMBOLS:
            self._sign(SYMBOLS[text], start, end)
        elif self.tex and text in "$~&":
            return
        else:
            self._strange(text, start, end)

    def _sign(self, meaning: Meaning, start: int, end: int) -> None:
        kind, value = meaning
        if kind == "LBRACE" and _EMPTY.match(self.text, end) and self._previous() not in ("CARET", "UNDER"):
            self._open.append((kind, "layout", Token(kind, value, start, end)))
        elif kind in _OPENERS:
            self._opened(kind, value, start, end)
        elif kind in _CLOSERS:
            self._closing(kind, value, start, end)
        elif kind == "LATER":
            self._later(LATER[value], start, end)
        elif kind == "DOTS":
            help = "write the terms out: what an ellipsis stands for cannot be checked"
            self._fault("ellipsis", "an ellipsis is not read", start, end, help)
        else:
            self._put(meaning, start, end)

    def _opened(self, kind: str, value: str, start: int, end: int) -> None:
        if len(self._open) >= NESTING_LIMIT:
            self._fault("too-deep", f"more than {NESTING_LIMIT} brackets are open at this place", start, end)
            self.stop = True
            return
        if kind == "LSQUARE" and self._spatial:
            if self._keyword != "SPACE_WORD":
                message = "a presented ring is named before it is used"
                self._fault("expected", message, start, end, "name it first: space R = F_2[u:2] / (u^3) where …")
                self.stop = True
                return
            self._spatial = False
        role = ""
        if kind == "LBRACE":
            previous = self._previous()
            if previous in ("CARET", "UNDER"):
                role = "script"
            elif previous == "BINOM":
                role = "binom"
            elif previous == "MOD":
                role = "script"
            elif self._closed == "binom" or not self.tex:
                role = "script"
            else:
                role = "layout"
        self._open.append((kind, role, Token(kind, value, start, end)))
        if role != "layout":
            self._put((kind, value), start, end)

    def _closing(self, kind: str, value: str, start: int, end: int) -> None:
        if not self._open:
            self._fault("unopened-bracket", f"this {value} closes nothing", start, end, "", "")
            self.stop = True
            return
        opener, role, token = self._open.pop()
        if opener != _CLOSERS.get(kind):
            message = f"this {token.value} is closed by a {value}"
            self._fault("bracket-mismatch", message, token.start, token.end, f"it needs a {_match(token.value)}")
            self.stop = True
            return
        if role != "layout":
            self._put((kind, value), start, end)
            self._closed = role

    def _strange(self, text: str, start: int, end: int) -> None:
        """A code point that has no meaning of its own: perhaps a letter or digit of another alphabet."""
        code = ord(text)
        if 0xDC80 <= code <= 0xDCFF:
            message = f"the byte 0x{code - 0xDC00:02X} is no UTF-8"
            self._fault("invalid-byte", message, start, end, "save the file as UTF-8")
            return
        plain = unicodedata.normalize("NFKC", text)
        if len(plain) == 1 and plain in SYMBOLS:
            self._sign(SYMBOLS[plain], start, end)
        elif len(plain) == 1 and plain.isascii() and plain.isalpha():
            if self._spatial:
                self._spatial_word(plain, start, end)
            else:
                self._put(letter_meaning(plain), start, end)
        elif text == "%":
            help = "a comment begins with #; % begins one in TeX spelling only"
            self._fault("invalid-character", "% has no meaning here", start, end, help)
        else:
            help = "names are Latin or Greek letters" if text.isalpha() else ""
            self._fault("invalid-character", f"{shown(text)} has no meaning here", start, end, help)

    # --- the end ---------------------------------------------------------------------------------

    def _finish(self) -> None:
        """What can be said only at the end: open brackets, and the full stop of a sentence around a formula."""
        if self._open:
            _, _, token = self._open[-1]
            help = f"it needs a {_match(token.value)} before the end of the statement"
            self._fault("unclosed-bracket", f"this {token.value} is never closed", token.start, token.end, help)
            self.stop = True
            return
        while len(self.tokens) > 1 and self._previous() in ("DOT", "COMMA"):
            self.tokens.pop()
        for token in self.tokens:
            if token.kind == "DOT":
                help = "a statement ends with its line; only a final full stop falls away"
                self._fault("invalid-character", "a full stop has no meaning here", token.start, token.end, help, "")


def _match(value: str) -> str:
    """What closes a bracket, or the surroundings of a formula."""
    return {"(": ")", "[": "]", "{": "}"}.get(value) or value.replace("begin", "end", 1)


_LATER_HELP = "it belongs to the language, and this version does not read it"
_READERS = {
    name: getattr(Reading, name)
    for name in (
        *("number", "word", "pull", "raised_prime", "raised", "lowered", "primes", "face", "aside", "command"),
        *("surrounding", "row"),
        *("escape", "dots", "arrow", "dangling", "foreign", "dead", "unequal", "sign"),
    )
}
