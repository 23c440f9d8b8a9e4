"""What Tab offers: statements, spaces, declared classes, operations, results, and signs for TeX commands.

`offers` is a function of the text before the cursor and of the `World`; `Offers` gives it to the line editor.
"""

from __future__ import annotations

import re
from collections.abc import Callable, Iterable, Iterator

from attrs import field, frozen
from prompt_toolkit.completion import CompleteEvent, Completer, Completion, PathCompleter
from prompt_toolkit.document import Document

from opslang.front.vocabulary import KEYS, NOTATIONS, SHELL_WORDS, shell_statement
from opslang.spaces.space import WORDS
from opslang.syntax.spellings import COMMANDS, KEYWORDS, SYMBOLS

_COMMAND = re.compile(r"\\([A-Za-z]*)\Z")
_WORD = re.compile(r"[A-Za-z][A-Za-z]*(?:_\d*)?'*\Z|(?<![A-Za-z0-9_^{])\Z")
_LINE_START = re.compile(r"(?:\A|\n)[ \t]*[A-Za-z]*\Z")
_BEFORE_SPACE = (
    r"(?:\A|\n)[ \t]*(?:(?:on|series|compare)(?![A-Za-z])|space\s+\S+\s*=|basis\s+H\^\S+?\(|map\s+\S+\s*:(?!.*\swith\s)"
    r"|bundle\s+\S.*\sover\s)"
)
_WANTS_SPACE = re.compile(_BEFORE_SPACE + r"\s*(?:.*(?:\sx\s|,|->)\s*)?(thom\(\s*)?(\w*)\Z")
_NAMES_SPACE = re.compile(_BEFORE_SPACE)

SPACES = ("K(Z/2, ", "K(Z, ", "K(Z/4, ")
"""What a space that has no name yet begins with; the first group follows the prime."""

_GOES_ON = {"RP": "RP^", "CP": "CP^", "HP": "HP^", "lens": "lens(", "thom": "thom("}
NAMED_SPACES = tuple(_GOES_ON.get(word, word) for word in WORDS)
"""What the named spaces begin with."""

_PREFERRED = {
    "CUP": "∪",
    "CROSS": "⊗",
    "STAR": "·",
    "COMPOSE": "∘",
    "OPLUS": "⊕",
    "IN": "∈",
    "LETTER_Z": "ℤ",
    "LETTER_F": "𝔽",
}
_BY_MEANING: dict[tuple[str, str], str] = {}
for _sign, _meaning in SYMBOLS.items():
    _BY_MEANING.setdefault(_meaning, _sign)


def _signs() -> dict[str, str]:
    found = {}
    for name, meaning in COMMANDS.items():
        sign = (
            {"times": "×", "Sq": "Sq^", "P": "P^"}.get(name) or _PREFERRED.get(meaning[0]) or _BY_MEANING.get(meaning)
        )
        if sign and meaning[0] not in ("BINOM", "BAR", "PRIME", "LATER", "DOTS", "LSQUARE", "RSQUARE"):
            found[name] = sign
    return found


SIGNS = _signs()
"""TeX commands with the sign that says the same."""


@frozen
class World:
    """What may be named at this point: the prime, the spaces, the classes with a word about each, the results."""

    prime: int = 2
    spaces: tuple[str, ...] = ()
    classes: dict[str, str] = field(factory=dict)
    results: tuple[int, ...] = ()


@frozen
class Offer:
    """A text that would replace the last `length` characters, and a word about it."""

    text: str
    length: int
    about: str = ""


def offers(before: str, world: World, topics: Callable[[], Iterable[str]], signs: bool = True) -> list[Offer]:
    """What the text before the cursor may be completed to."""
    command = _COMMAND.search(before)
    if command:
        return _commands(command.group(1), signs)
    line = before.rsplit("\n", 1)[-1]
    statement = shell_statement(line)
    if statement and re.search(r"\s", line.lstrip()):
        return _arguments(statement[0], statement[1] if not line[-1:].isspace() else "", world, topics)
    space = _WANTS_SPACE.search(before)
    if space:
        bases = [name for name in NAMED_SPACES if name.startswith("B")]
        known = bases if space.group(1) else [*world.spaces, f"K(Z/{world.prime}, ", *SPACES, *NAMED_SPACES]
        return _matching(space.group(2), [(name, "") for name in dict.fromkeys(known)])
    if _NAMES_SPACE.match(line):
        return []
    found = _WORD.search(before)
    if not found:
        return []
    words = [*_results(world), *_formula_words(world)]
    if _LINE_START.search(before):
        words += [(f"{word} ", "statement") for word in KEYWORDS]
        words += [(word, "shell") for word in SHELL_WORDS]
    return _matching(found.group(), words)


def _matching(prefix: str, words: list[tuple[str, str]]) -> list[Offer]:
    return [Offer(word, len(prefix), about) for word, about in words if word.startswith(prefix)]


def _commands(prefix: str, signs: bool) -> list[Offer]:
    names = [prefix] if prefix in SIGNS else sorted(name for name in SIGNS if name.startswith(prefix))
    length = len(prefix) + 1
    if not signs:
        return [Offer("\\" + name, length, "") for name in names]
    if len({SIGNS[name] for name in names}) == 1:
        return [Offer(SIGNS[names[0]], length, names[0])]
    return [Offer("\\" + name, length, SIGNS[name]) for name in names]


def _arguments(word: str, argument: str, world: World, topics: Callable[[], Iterable[str]]) -> list[Offer]:
    choices: dict[str, Iterable[str]] = {"notation": NOTATIONS, "keys": KEYS}
    if word == "help":
        return _matching(argument, [(topic, "") for topic in topics()])
    if word in ("copy", "why"):
        return _matching(argument, _results(world))
    return _matching(argument, [(choice, "") for choice in choices.get(word, ())])


def _results(world: World) -> list[tuple[str, str]]:
    if not world.results:
        return []
    return [("that", "the last result"), *((f"that_{number}", "result") for number in world.results)]


def _formula_words(world: World) -> list[tuple[str, str]]:
    operations = [("Sq^", "square")] if world.prime == 2 else [("P^", "reduced power")]
    operations += [
        ("beta ", "Bockstein"),
        ("beta_", "Bockstein of an order"),
        ("chi(", "conjugation"),
        ("Q_", "Milnor's primitive"),
    ]
    return [*operations, *world.classes.items()]


class Offers(Completer):
    """Tab at the prompt."""

    def __init__(self, world: Callable[[], World], topics: Callable[[], Iterable[str]], signs: bool) -> None:
        self._world = world
        self._topics = topics
        self._signs = signs
        self._paths = PathCompleter(expanduser=True)

    def get_completions(self, document: Document, complete_event: CompleteEvent) -> Iterator[Completion]:
        """The completions at the cursor."""
        before = document.text_before_cursor
        path = re.match(r"\s*(?:save\s+(?:over\s+)?|read\s+)(\S*)\Z", before)
        if path:
            yield from self._paths.get_completions(Document(path.group(1)), complete_event)
            return
        for offer in offers(before, self._world(), self._topics, self._signs):
            yield Completion(offer.text, -offer.length, display=offer.text.strip(), display_meta=offer.about)
