"""What a paragraph stands under: the prime, the Eilenberg–MacLane spaces named there, bundles, the letters that are
numbers.

Knows the ways in which drafts say these things; draws no conclusion about a formula."""

from __future__ import annotations

import re
from collections.abc import Sequence

from attrs import define, field, frozen

from opslang.lint.context.facts import Spot
from opslang.lint.context.spaces import NO_GROUP, SpaceSaid, group_said, mentioned, particular
from opslang.lint.context.stream import Paragraph
from opslang.lint.reading import Formula

ODD = 0
"""Stands for a prime p that is odd and has no number."""
_PRIME_IS = re.compile(r"^(?:p|\\ell|l)=(\d+)[.,;:]?$")
_WORDS_PRIME = re.compile(
    r"\b(?:at|the) (?:the )?prime ([\ue000-\uf7ff]|two|three|five|\d+)|\bmod(?:ulo)? (\d+) (?:Steenrod|cohomology)",
    re.IGNORECASE,
)
_ODD = re.compile(
    r"[\ue000-\uf7ff] (?:(?:is|be|denotes?) )?(?:an? )?(?:fixed |arbitrary )?odd(?: prime)?\b|odd primes? "
    r"[\ue000-\uf7ff]|an odd prime\b",
    re.IGNORECASE,
)
_FOR_GOOD = re.compile(
    r"\b(?:rest|throughout|from now on|fix|let|here|now|assume|always|section|paper|note)\b", re.IGNORECASE
)
_PRIMES = {"two": 2, "three": 3, "five": 5}
_NO_BETA = re.compile(
    r"\b(?:temperature|coupling|roots?|Betti|bar length|bar complex|golden|number theory|length "
    r"[\ue000-\uf7ff]|inverse|angle|exponent)\b",
    re.IGNORECASE,
)
_NO_POWER = re.compile(r"\b(?:projective|Postnikov|field|stage|polynomial ring|series|lines)\b", re.IGNORECASE)
_BUNDLES = re.compile(r"Stiefel|Whitney|vector bundle|tangent bundle|bundle\b|characteristic class", re.IGNORECASE)
_POWER = re.compile(r"(?<![A-Z{])P\^")
_SIZE = re.compile(
    r"\b(?:two|three|four|five|six|seven|eight|\d+)-(?:dimensional )?(?:manifold|complex)|"
    r"([\ue000-\uf7ff])-(?:dimensional )?manifold"
    r"|\bdimensions? ([\ue000-\uf7ff]|(?:\d+|two|three|four|five|six|seven|eight)\b)",
    re.IGNORECASE,
)
_MANIFOLD = re.compile(r"\bmanifolds?\b", re.IGNORECASE)


@frozen
class PrimeSaid:
    """A prime from some place on; ODD for an odd one without number.  `local`: only in its paragraph."""

    spot: Spot
    prime: int
    local: bool
    in_section: bool = False


@frozen
class SpaceAt:
    """A space named at some place."""

    spot: Spot
    space: SpaceSaid


@define
class Settings:
    """What a draft says in passing, in the order of reading."""

    primes: list[PrimeSaid] = field(factory=list)
    spaces: list[SpaceAt] = field(factory=list)
    odd: bool = False
    squares: bool = False
    powers: bool = False
    bundles: bool = False
    manifolds: set[int] = field(factory=set)
    """The sections that speak of manifolds."""
    sized: set[int] = field(factory=set)
    """The sections that say their dimension in numbers."""
    squares_in: set[int] = field(factory=set)
    powers_in: set[int] = field(factory=set)
    described: set[str] = field(factory=set)
    """Letters of spaces that the text describes, so that they are not just any."""
    dimensions: set[str] = field(factory=set)
    """Letters that stand for dimensions."""

    def prime_at(self, spot: Spot) -> int | None:
        """The prime at a place: a number, ODD, or None where none was said."""
        same = [
            said
            for said in self.primes
            if said.spot.paragraph == spot.paragraph and said.spot.sentence == spot.sentence and said.local
        ]
        if same and all(said.spot.offset > spot.offset for said in same):
            return same[0].prime
        best: PrimeSaid | None = None
        for said in self.primes:
            if (said.spot.paragraph, said.spot.offset) > (spot.paragraph, spot.offset):
                break
            if said.spot.section == spot.section and (not said.local or said.spot.paragraph == spot.paragraph):
                best = said
        if best is not None:
            return best.prime
        lasting = {
            said.prime
            for said in self.primes
            if not said.local and not said.in_section and said.spot.section < spot.section
        }
        return lasting.pop() if len(lasting) == 1 else ODD if lasting == {ODD} else None

    def spaces_near(self, spot: Spot) -> tuple[list[SpaceSaid], ...]:
        """The spaces named in the sentence of a place (the nearest first), in its paragraph, in its section before."""
        here = [at for at in self.spaces if at.spot.paragraph == spot.paragraph]
        same = [at for at in here if at.spot.sentence == spot.sentence]
        same.sort(key=lambda at: (at.spot.offset > spot.offset, abs(at.spot.offset - spot.offset)))
        section = [at for at in self.spaces if at.spot.section == spot.section and at.spot.paragraph < spot.paragraph]
        return tuple([[at.space for at in found] for found in (same, here, section[::-1])])


def learn(settings: Settings, paragraph: Paragraph, spots: Sequence[Spot], at: int, section: int) -> None:
    """Take note of what a paragraph says; `spots` are those of its formulas, `at` its number."""
    text = paragraph.text
    _note_described(settings, paragraph)
    settings.bundles = settings.bundles or bool(_BUNDLES.search(text))
    if _MANIFOLD.search(text):
        settings.manifolds.add(section)
        _note_sizes(settings, paragraph, section)
    found: list[PrimeSaid] = []
    for plain, spot, place in zip(paragraph.plains, spots, paragraph.places):
        _note_use(settings, plain, section)
        prime = _PRIME_IS.match(plain)
        if prime:
            start, _ = paragraph.sentences[paragraph.sentence_at(place)]
            lasting = _FOR_GOOD.search(text, start, place + 1)
            only = lasting is not None and lasting.group().lower() in ("rest", "section", "here", "now")
            found.append(PrimeSaid(spot, int(prime[1]), not lasting, only))
        if "K(" in plain or "B^" in plain:
            settings.spaces += [SpaceAt(spot, space) for space in mentioned(plain)]
    for group in _GROUP.finditer(text):
        said = group_said(paragraph.plain(group[1]))
        if said is not None:
            spot = Spot(section, at, paragraph.sentence_at(group.start()), group.start())
            settings.spaces.append(SpaceAt(spot, SpaceSaid("group", paragraph.plain(group[1]), "", said)))
    found += _primes_in_words(settings, paragraph, at, section)
    settings.primes += sorted(found, key=lambda said: said.spot.offset)


_CALLED = re.compile(
    r"([\ue000-\uf7ff])\s+(?:be|is|denotes?|stands for|for)\s+(the|an?|any|some|our|"
    r"this)\s+([^.;\ue000-\uf7ff]{0,60})([\ue000-\uf7ff])?",
    re.IGNORECASE,
)
_ANY_SPACE = re.compile(
    r"(?:(?:arbitrary|finite|pointed|connected|simply|topological|based|nice|CW|cell)[- ]*)*(?:spaces?|"
    r"complex(?:es)?|simplicial sets?|manifolds?)"
    r"(?!\s+(?:with|whose|such|having|obtained|that|which|of))",
    re.IGNORECASE,
)
_MANIFOLD_NOUN = re.compile(r"(?:\S+ ){0,4}manifold", re.IGNORECASE)


def _note_described(settings: Settings, paragraph: Paragraph) -> None:
    """Letters said to be a particular space: `let X be the cofibre of …`, `X = S^2 ∪ e^4`."""
    for plain in paragraph.plains:
        letter, sign, _ = plain.partition("=")
        if sign and re.fullmatch(r"[A-Z](?:_\{?\w\}?)?'*", letter):
            settings.described.add(letter)
    for one in _CALLED.finditer(paragraph.text):
        letter = paragraph.plain(one[1])
        if not re.fullmatch(r"[A-Z](?:_\{?\w\}?)?'*", letter):
            continue
        anything = one[2].lower() in ("a", "an", "any", "some") and _ANY_SPACE.match(one[3])
        if not anything and not _MANIFOLD_NOUN.match(one[3]):
            settings.described.add(letter)


def _note_sizes(settings: Settings, paragraph: Paragraph, section: int) -> None:
    for one in _SIZE.finditer(paragraph.text):
        word = one[1] or one[2]
        plain = paragraph.plain(word) if word and len(word) == 1 and ord(word) >= 0xE000 else word
        if plain and plain.isalpha() and len(plain) == 1:
            settings.dimensions.add(plain)
        else:
            settings.sized.add(section)


def _note_use(settings: Settings, plain: str, section: int) -> None:
    if "Sq" in plain:
        settings.squares_in.add(section)
    if _POWER.search(plain):
        settings.powers_in.add(section)
    settings.squares = settings.squares or "Sq" in plain or "Z/2" in plain or "F_2" in plain
    settings.powers = settings.powers or bool(_POWER.search(plain))


def _primes_in_words(settings: Settings, paragraph: Paragraph, at: int, section: int) -> list[PrimeSaid]:
    found = []
    text = paragraph.text
    for one in _WORDS_PRIME.finditer(text):
        word = one[1] or one[2]
        number = _PRIMES.get(word.lower()) or (int(word) if word.isdigit() else None)
        if number is None:
            plain = paragraph.plain(word)
            number = int(plain) if plain.isdigit() else None
        if number is not None:
            spot = Spot(section, at, paragraph.sentence_at(one.start()), one.start())
            found.append(PrimeSaid(spot, number, not _FOR_GOOD.search(text, max(0, one.start() - 60), one.start())))
    for one in _ODD.finditer(text):
        sign = re.search(r"[\ue000-\uf7ff]", one.group())
        if sign and paragraph.plain(sign.group()) not in ("p", "\\ell", "l", "q", "p>2"):
            continue
        settings.odd = True
        spot = Spot(section, at, paragraph.sentence_at(one.start()), one.start())
        found.append(PrimeSaid(spot, ODD, False))
    return found


_GROUP = re.compile(r"\bgroup ([\ue000-\uf7ff])")
_PARTICULAR = re.compile(
    r"\b(?:manifolds?|spheres?|suspensions?|stunted|skelet\w+|cells?|complex of dimension|lens spaces?)\b",
    re.IGNORECASE,
)
_HYPOTHESIS = re.compile(
    r"\b(?:if|when|whenever|suppose|assume|provided|such that|with|unless|satisfying|satisfies|let|put|"
    r"requires?|needs|since|because|as|once)\b"
    r"(?:\s+(?:that|also|moreover|we have|both))*\s*(?:[\ue000-\uf7ff]\s*(?:,|and|, and)\s*)*$",
    re.IGNORECASE,
)
_SUPPOSED = re.compile(r"^\s*(?:is|are|was|were) (?:supposed|assumed|given)\b", re.IGNORECASE)


def particular_space(paragraph: Paragraph, place: int, sized: bool) -> str:
    """What the sentence around a formula says of its space that makes more hold there than in general.

    A manifold of any dimension (`sized` false) satisfies in low degrees no more than any space does.
    """
    start, end = paragraph.sentences[paragraph.sentence_at(place)]
    for plain, at in zip(paragraph.plains, paragraph.places):
        if at < end and ("P" in plain or "H^" in plain):
            found = particular(plain)
            if found and (start <= at or found == NO_GROUP):
                return found
    for words in _PARTICULAR.finditer(paragraph.text, start, end):
        if sized or not words.group().lower().startswith("manifold"):
            return words.group()
    return ""


def is_hypothesis(paragraph: Paragraph, place: int) -> bool:
    """Whether the words before or behind a formula make it a condition and no claim."""
    start, end = paragraph.sentences[paragraph.sentence_at(place)]
    behind = paragraph.text[place + 1 : end]
    return bool(_HYPOTHESIS.search(paragraph.text[start:place]) or _SUPPOSED.match(behind))


def no_operations(paragraph: Paragraph, formula: Formula, place: int) -> frozenset[str]:
    """Heads of operations that the words around a formula say are something else: `beta` a root, `P` a space."""
    start, end = paragraph.around(place, 1)
    near = paragraph.text[start:end]
    names = set()
    if _NO_BETA.search(near):
        names.add("beta")
    if _NO_POWER.search(near):
        names.add("P")
    return frozenset(names)
