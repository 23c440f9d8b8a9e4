r"""Prose pasted at the prompt: its formulas as statements, its words left out.  Knows spellings, no grammar.

A text is prose where formulas stand between dollar signs or the signs of displays, and words stand outside them that
the language does not have.  A formula that is a lone name is left out too: it only mentions something.  One that says
where a class lives declares it.
"""

from __future__ import annotations

import re

from attrs import evolve, frozen

from opslang.front.pasting import blank, displayed, stretch
from opslang.ground.source import Source
from opslang.spaces.space import WORDS
from opslang.syntax.spellings import GREEK_NAMES, INSIDE, RESERVED, STATEMENT_WORDS

_FORMULA = re.compile(
    r"(?<!\\)(?P<sign>\$\$?)(?P<dollars>(?:\\.|[^$\\])+)(?P=sign)|\\\((?P<round>.+?)\\\)|\\\[.+?\\\]"
    r"|\\begin\s*\{(?P<name>[a-z]+\*?)\}.+?\\end\s*\{(?P=name)\}",
    re.S,
)
MAY_BE_PROSE = re.compile(r"[A-Za-z]{2}.*(?:\$|\\[(\[])|(?:\$|\\[)\]]).*[A-Za-z]{2}", re.S)
"""Found in every prose, and seldom elsewhere."""
_COMMENT = re.compile(r"#[^\n]*|(?<!\\)%[^\n]*")
_COMMAND = re.compile(r"\\[A-Za-z]+\*?\s*(?:\{[^{}]*\})?")
_WORD = re.compile(r"(?<![A-Za-z_^{])[A-Za-z]{2,}(?![A-Za-z_^])")
_NAME = re.compile(r"\s*\\?[A-Za-z]+(?:_(?:\w|\{\s*\w+\s*\}))?'*[\s.,;]*")
_DECLARES = re.compile(r"\s*\\?[A-Za-z]+[^=+]*?(?:\\in\b|∈)\s*H\s*\^")
_OURS = {
    *STATEMENT_WORDS,
    *(word for words in INSIDE.values() for word in words),
    *RESERVED,
    *GREEK_NAMES,
    *WORDS,
    "that",
    "in",
}
"""Words that may stand in a statement of the language."""


@frozen
class Prose:
    """The formulas of a text as statements, and the lone names among them."""

    sources: tuple[Source, ...]
    names: tuple[str, ...] = ()

    @property
    def words(self) -> str:
        """What was left out, in words."""
        lone = list(dict.fromkeys(self.names))
        also = f", and so {'is' if len(lone) == 1 else 'are'} {', '.join(lone)}, named only" if lone else ""
        return f"the words around the formula{'s' * (len(self.sources) != 1)} are left out{also}"


def prose(text: str, name: str) -> Prose | None:
    """The formulas of a text with words around them; None for a text that is none."""
    bare = _COMMENT.sub(lambda part: blank(part.group()), text)
    formulas = list(_FORMULA.finditer(bare))
    if not formulas or not _speaks(bare, formulas):
        return None
    sources: list[Source] = []
    names: list[Source] = []
    for found in formulas:
        if found.group("dollars") or found.group("round"):
            start, end = found.span("dollars" if found.group("dollars") else "round")
            lone = _NAME.fullmatch(bare, start, end) is not None
            (names if lone else sources).append(_declared(stretch(bare, start, end, name)))
        else:
            sources += displayed(blank(bare[: found.start()]) + found.group(), name) or ()
    if not sources:
        return Prose(tuple(names))
    return Prose(tuple(sources), tuple([source.text.strip(" .,;\n") for source in names]))


def _declared(source: Source) -> Source:
    """A formula that says where a class lives, as a statement that declares it; places stay where there is room."""
    if not _DECLARES.match(source.text):
        return source
    formula = source.text.lstrip()
    room = max(0, len(source.text) - len(formula) - len("let "))
    return evolve(source, text=" " * room + "let " + formula)


def _speaks(text: str, formulas: list[re.Match[str]]) -> bool:
    """Whether a word that the language does not have stands outside the formulas."""
    for found in formulas:
        text = text[: found.start()] + blank(found.group()) + text[found.end() :]
    return any(word not in _OURS for word in _WORD.findall(_COMMAND.sub(lambda part: blank(part.group()), text)))
