"""The notation in colours, for whatever reads Pygments lexers.  Knows spellings; knows no grammar and no terminal."""

from __future__ import annotations

from typing import ClassVar

from pygments.lexer import RegexLexer, words
from pygments.token import Comment, Keyword, Name, Number, Operator, Punctuation, Text, Token

from opslang.front.vocabulary import SHELL_WORDS
from opslang.syntax.spellings import (
    COMMANDS,
    GREEK_NAMES,
    PRIMES,
    STATEMENT_WORDS,
    SUBSCRIPTS,
    SUPERSCRIPTS,
    SYMBOLS,
)

_OPERATING = ("PLUS", "MINUS", "STAR", "CUP", "CROSS", "TIMES", "COMPOSE", "OPLUS", "EQUALS", "IN", "SLASH", "ARROW")
_OPERATORS = "".join(sign for sign, (kind, _) in SYMBOLS.items() if kind in _OPERATING) + "<>→"
_COMMANDS = "|".join(name for name, (kind, _) in COMMANDS.items() if kind in _OPERATING)
_INSIDE = ("in", "to", "x", "with", "where", "over", "of", "rank", "for", "diagonal", "projection", "standard")
_GREEK = "".join(s for s, (kind, _) in SYMBOLS.items() if kind == "NAME")
_NO_LETTER = r"(?![A-Za-z])"


def _escaped(signs: str) -> str:
    return "".join(f"\\{sign}" if not sign.isalnum() else sign for sign in signs)


class OpslangLexer(RegexLexer):  # type: ignore[misc]
    """Statements of opslang in its three spellings."""

    name = "opslang"
    aliases: ClassVar[list[str]] = ["opslang", "ops"]
    filenames: ClassVar[list[str]] = ["*.ops"]
    mimetypes: ClassVar[list[str]] = ["text/x-opslang"]
    url = ""

    tokens: ClassVar[dict[str, list[object]]] = {
        "root": [
            (r"\s+", Text.Whitespace),
            (r"#[^\n]*|(?<!\\)%[^\n]*", Comment.Single),
            (
                words(
                    sorted(STATEMENT_WORDS, key=len, reverse=True), prefix=r"(?<![^\s])(?m:^[ \t]*)", suffix=_NO_LETTER
                ),
                Keyword,
            ),
            (
                words(sorted(SHELL_WORDS, key=len, reverse=True), prefix=r"(?m:^[ \t]*)", suffix=r"(?![A-Za-z_^(])"),
                Keyword.Pseudo,
            ),
            (words(_INSIDE, prefix=r"(?<=\s)", suffix=r"(?=\s)"), Keyword),
            (r"(?m:^[ \t]*)\?", Keyword.Pseudo),
            (r"(?:Sq|beta|chi)(?![A-Za-z]{2})|[PQ]" + _NO_LETTER, Name.Function),
            (r"\\(?:mathrm|operatorname\*?|text|mathcal|mathfrak|mathscr)\s*\{\s*(?:Sq|P|Q)\s*\}", Name.Function),
            (r"\\(?:Sq|P|beta|chi)" + _NO_LETTER, Name.Function),
            (r"[βχ𝒫𝔓]", Name.Function),
            (r"(?:\\?iota)" + _NO_LETTER + "|ι", Name.Builtin),
            (r"that(?:_\{?\d+\}?)?" + _NO_LETTER, Name.Builtin),
            (r"(?:\\mathbb\s*\{?\s*[ZF]\s*\}?|[KHZFℤ𝔽])" + _NO_LETTER, Name.Class),
            (words(sorted(GREEK_NAMES, key=len, reverse=True), suffix=_NO_LETTER), Name.Variable),
            (rf"\\(?:{_COMMANDS})" + _NO_LETTER, Operator),
            (rf"\\(?:{'|'.join(sorted(GREEK_NAMES, key=len, reverse=True))})" + _NO_LETTER, Name.Variable),
            (r"\\[A-Za-z]+|\\.|\\(?=\n|\Z)|[$&~]", Comment.Preproc),
            (rf"[{_escaped(_OPERATORS)}]", Operator),
            (rf"[{_escaped(''.join(PRIMES))}]", Operator),
            (r"\d+", Number.Integer),
            (rf"[{_escaped(''.join(SUPERSCRIPTS) + ''.join(SUBSCRIPTS))}]+", Number.Integer),
            (rf"[A-Za-z{_GREEK}]+", Name.Variable),
            (r"[\^_|∣()\[\]{},;:.…⋯∑]", Punctuation),
            (r".", Token.Error),
        ]
    }
