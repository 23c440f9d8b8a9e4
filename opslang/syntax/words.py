"""Words that stand where a formula has none: which runs of letters are words, and what is said of them.

Knows words and the letters that names are made of.  Knows no grammar and no places.
"""

from __future__ import annotations

from opslang.syntax.spellings import GREEK_NAMES, RESERVED, STATEMENT_WORDS

SPELLED = sorted(GREEK_NAMES | RESERVED.keys(), key=len, reverse=True)
"""The names of more than one letter, and the single letters that are taken; the longest first."""

SPACES = frozenset(("BO", "BSO", "BSpin", "BU", "BSU", "BSp", "RP", "CP", "HP", "lens", "thom"))
"""Words that begin a named space."""

LONGEST_SPLIT = 40
"""No mend is offered for longer runs of letters."""

NAMES = "names are single letters and spelled Greek letters, and a product is written with spaces: x y"
STATEMENTS = "a line is an expression or a relation, or begins with a keyword such as on, let, why, basis or series"

_LEAVING = "the end of the input leaves"
_DIMENSIONS = "`basis H^9(X)` lists a basis in one degree, `series X to 20` the dimensions"
_NORMAL = "an expression on a line of its own is brought to its canonical form; `why` shows how"
_DECIDED = "a relation on a line of its own, as a = b, is decided"
_GIVEN = "`let x in H^2` declares a class, and `let u = …` names an expression"
_REASONS = "`why` gives the derivation of an expression or a relation; `opslang explain NAME` tells of a law"
_SQUARES = "squares are written Sq^i, and at odd primes reduced powers P^i"

_SAID: dict[str, str] = {
    **dict.fromkeys(("quit", "exit", "bye", "leave", "logout", "stop", "end"), _LEAVING),
    **dict.fromkeys(("dim", "dims", "dimension", "betti", "poincare", "homology", "cohomology"), _DIMENSIONS),
    **dict.fromkeys(("simplify", "normalise", "normalize", "compute", "reduce", "expand", "show", "print"), _NORMAL),
    **dict.fromkeys(("evaluate", "eval", "run", "calculate", "adem"), _NORMAL),
    **dict.fromkeys(("explain", "derive", "help"), _REASONS),
    **dict.fromkeys(("prove", "verify", "check", "assert", "test", "is", "true", "equals"), _DECIDED),
    **dict.fromkeys(("set", "define", "def", "var", "declare", "assume", "suppose", "class", "put"), _GIVEN),
    **dict.fromkeys(("St", "square", "squares", "steenrod", "power"), _SQUARES),
    **dict.fromkeys(("deg", "degree"), "in an index |x| is the degree of the class x"),
    **dict.fromkeys(("id", "identity"), "the identity is written 1"),
}
"""What is said of words that people try."""

_ENGLISH = frozenset(
    """a all also an and any are as at be by can do for from has have help how if im into it its ker max min mod no not
    of oo or over so such than that the then they this to use we when where with yes ext hom tor""".split()
)


def split_run(word: str) -> str:
    """A run of letters taken apart: spelled names where they fit, the longest first, else letters."""
    pieces = []
    while word:
        piece = next((name for name in SPELLED if word.startswith(name)), word[0])
        pieces.append(piece)
        word = word[len(piece) :]
    return " ".join(pieces)


def nearly(word: str, name: str) -> bool:
    """Whether a word is a name with one slip of the finger: a letter more, less or other, two exchanged, capitals."""
    if word.lower() == name.lower():
        return True
    if abs(len(word) - len(name)) > 1 or len(name) < 3:
        return sorted(word) == sorted(name)
    at = next((i for i, (a, b) in enumerate(zip(word, name)) if a != b), min(len(word), len(name)))
    rest, other = word[at:], name[at:]
    return rest[1:] == other[1:] or rest[1:] == other or rest == other[1:] or _exchanged(rest, other)


def _exchanged(rest: str, other: str) -> bool:
    return rest[:2] == other[:2][::-1] and rest[2:] == other[2:]


def meant(word: str) -> str | None:
    """The name or the product that a run of letters is likely to stand for; None where it is a word."""
    for name in SPELLED:
        if len(name) > 1 and word.lower() == name.lower():
            return name
    if is_word(word):
        return None
    slips = [name for name in SPELLED if len(name) >= max(len(word), 4) and nearly(word, name)]
    return slips[0] if slips else split_run(word)


def is_word(word: str) -> bool:
    """Whether a run of letters is a word and no product: a known one, or a long one with no spelled name in it."""
    known = word in STATEMENT_WORDS or word in SPACES or word in _SAID or word.lower() in _ENGLISH | _SAID.keys()
    if known or len(word) > LONGEST_SPLIT:
        return True
    if len(word) <= 3 or any(len(name) >= max(len(word), 4) and nearly(word, name) for name in SPELLED):
        return False
    pieces = split_run(word).split()
    letters = sum(len(piece) == 1 for piece in pieces)
    return letters > 3 or not any(len(piece) > 2 or piece == "Sq" for piece in pieces)


def said(word: str, first: bool) -> tuple[str, str]:
    """Message and help for a word, at the beginning of a line or further on."""
    if word in STATEMENT_WORDS:
        return f"`{word}` begins a statement, and a statement begins on a line of its own", ""
    if word in SPACES:
        return f"{word} is a space, and this is no place for one", f"`on {word}` chooses the space of what follows"
    help = _SAID.get(word) or _SAID.get(word.lower())
    if first:
        return f"no statement begins with `{word}`", help or f"{STATEMENTS}; {NAMES}"
    return f"the word `{word}` has no meaning in a formula", help or NAMES
