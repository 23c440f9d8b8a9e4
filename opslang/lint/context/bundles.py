"""Of which bundle the classes w_i, v_i and c_i are, as far as the text says it.  Knows how drafts say it.

A bundle is given by the space that classifies it: BO, BSO(3), BSpin, BU, …; the empty text stands for any bundle.
"""

from __future__ import annotations

import re
from collections.abc import Sequence

from attrs import define, field, frozen

from opslang.lint.context.facts import Spot
from opslang.lint.context.stream import Paragraph

_CLASSIFYING = re.compile(r"\bB(O|SO|Spin|U|SU|Sp)(?:\((\d+)\))?(?![A-Za-z(])")
_GROUP = re.compile(r"^\\?(O|SO|Spin|U|SU)\((\d+)\)$")
_WORDS = (
    (
        re.compile(
            r"\b(?:not|non-?)\s*(?:necessarily\s+)?orient(?:ed|able)\b|\bwithout orientation\b|\bunorient",
            re.IGNORECASE,
        ),
        "BO",
    ),
    (re.compile(r"\bspin (?:bundles?|structures?|manifolds?)\b", re.IGNORECASE), "BSpin"),
    (
        re.compile(
            r"\borient(?:ed|able) (?:\S+ )?(?:bundles?|manifolds?|case)\b|\bM[^.]{0,20} being oriented\b", re.IGNORECASE
        ),
        "BSO",
    ),
    (
        re.compile(
            r"(?<!oriented )(?<!orientable )(?<!spin )(?<!complex )\b(?:real )?vector bundles?\b|"
            r"\bcharacteristic classes of bundles\b",
            re.IGNORECASE,
        ),
        "BO",
    ),
    (re.compile(r"\bChern class(?:es)?\b|\bcomplex (?:vector )?bundles?\b", re.IGNORECASE), "BU"),
)
_STRUCTURE = re.compile(r"complex spin structure", re.IGNORECASE)
_RANK = re.compile(r"\brank (?:\w+|[\ue000-\uf7ff])", re.IGNORECASE)


@frozen
class BundleAt:
    """A bundle spoken of at some place."""

    spot: Spot
    space: str


@define
class Bundles:
    """The bundles that a draft speaks of, in the order of reading."""

    found: list[BundleAt] = field(factory=list)
    wu_classes: bool = False
    chern: bool = False

    def learn(self, paragraph: Paragraph, spots: Sequence[Spot], at: int, section: int) -> None:
        """Take note of the bundles of a paragraph."""
        text = paragraph.text
        self.wu_classes = self.wu_classes or "Wu class" in text
        self.chern = self.chern or "Chern class" in text
        found: list[BundleAt] = []
        for plain, spot, place in zip(paragraph.plains, spots, paragraph.places):
            if "O" not in plain and "U" not in plain and "S" not in plain:
                continue
            plain = plain.rstrip(".,;")
            found += [BundleAt(spot, one.group()) for one in _CLASSIFYING.finditer(plain)]
            group = _GROUP.match(plain)
            if group and re.match(r"[\s-]*(?:principal )?bundle", text[place + 1 : place + 24]):
                found.append(BundleAt(spot, f"B{group[1]}({group[2]})"))
        for pattern, space in _WORDS:
            for one in pattern.finditer(text):
                if space == "BSpin" and _STRUCTURE.search(text, max(0, one.start() - 8), one.end()):
                    continue
                spot = Spot(section, at, paragraph.sentence_at(one.start()), one.start())
                found.append(BundleAt(spot, space))
        self.found += sorted(found, key=lambda bundle: bundle.spot.offset)

    def at(self, spot: Spot, letter: str) -> str:
        """The space of the bundle meant at a place: that of the sentence, of the paragraph, of the section before.

        Failing these it is the only kind that the draft speaks of.
        """
        wanted = ("BU", "BSU") if letter == "c" else ("BO", "BSO", "BSpin")
        fitting = [one for one in self.found if one.space.partition("(")[0] in wanted]
        here = [one for one in fitting if one.spot.paragraph == spot.paragraph]
        same = [one for one in here if one.spot.sentence == spot.sentence]
        for group in (same, here):
            before = [one for one in group if one.spot.offset <= spot.offset]
            if before:
                return before[-1].space
            if group is same and same:
                return same[0].space
        earlier = [one for one in fitting if one.spot.section == spot.section and one.spot.paragraph < spot.paragraph]
        if earlier:
            return earlier[-1].space
        kinds = {one.space for one in fitting}
        return kinds.pop() if len(kinds) == 1 else ""
