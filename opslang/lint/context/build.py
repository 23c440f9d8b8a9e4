"""The statements of a draft, each with what is known where it stands: two passes over the pieces.

The first gathers what is said, the second looks it up.  Nothing is invented: what nobody said stays unknown.
"""

from __future__ import annotations

import re
from collections.abc import Iterator, Mapping

from attrs import define, evolve, field, frozen

from opslang.lint.context.bundles import Bundles
from opslang.lint.context.directives import Allowed, allowed_in, directives_of
from opslang.lint.context.facts import Ledger, Spot
from opslang.lint.context.fundamental import at_prime, fundamental
from opslang.lint.context.laid_down import LaidDown
from opslang.lint.context.names import class_names, names_of, operations_in
from opslang.lint.context.sayings import from_formula, from_words, in_its_ring, numbers_said
from opslang.lint.context.script import Scripts, rule_of
from opslang.lint.context.setting import ODD, Settings, is_hypothesis, learn, no_operations, particular_space
from opslang.lint.context.stream import Paragraph, paragraphs
from opslang.lint.formula import statements_of
from opslang.lint.model import (
    NOWHERE,
    ClassFact,
    ClassName,
    Condition,
    FamilyFact,
    Finding,
    Known,
    Operation,
    Statement,
)
from opslang.lint.numeric.rules_given import OF_THE_SPACE, defined
from opslang.lint.reading import Document, Formula
from opslang.lint.rule import Unit
from opslang.lint.symbolic.polynomial import Polynomial

_WORTH = re.compile(
    r"Sq|SQ|\\beta|β|\\iota|ι|\\chi|χ|\\delta|(?<![A-Za-z])[Pe](?=[\^_({])|P$|P\\?[,=+]|Q|[wv](?=[_{]).*=|(?<![A-Za-z])d[_(].*="
)
"""What a formula about operations, their words, or characteristic classes has in its plain spelling."""
_LAID_DOWN = re.compile(r"^.{1,24}=0[.,;]?$|^[a-z]\w*\^\{?\w+\}?=.{1,16}$")
"""A relation between classes alone, such as x^2=0."""
_DECLARES = re.compile(r"H\^|\||\\l?vert|deg|dim")
INDEX = Polynomial.symbol("index")


@frozen
class Learnt:
    """The statements with what is known, what the author allows, findings on the author's own comments, the
    paragraphs.
    """

    units: tuple[Unit, ...]
    allowed: Allowed
    trouble: tuple[Finding, ...]
    paragraphs: tuple[Paragraph, ...]


def learnt_from(document: Document, explain: bool = False) -> Learnt:
    """What a draft says; `explain` says whether derivations are wanted."""
    said, trouble = directives_of(document)
    builder = _Builder(document, Scripts(said), explain)
    builder.gather()
    allowed = allowed_in(document, said)
    units = tuple([unit for unit in builder.units() if not allowed.skips(unit.statement.at)])
    trouble += builder.scripts.trouble
    return Learnt(units, allowed, tuple(trouble), tuple([paragraph for paragraph, _ in builder.pages]))


@define
class _Builder:
    document: Document
    scripts: Scripts
    explain: bool = False
    ledger: Ledger = field(factory=Ledger)
    settings: Settings = field(factory=Settings)
    bundles: Bundles = field(factory=Bundles)
    pages: list[tuple[Paragraph, list[Spot]]] = field(factory=list)
    read: dict[int, tuple[Statement, ...]] = field(factory=dict)
    numbers: dict[int, frozenset[str]] = field(factory=dict)
    laid: LaidDown = field(factory=LaidDown)

    def statements(self, formula: Formula) -> tuple[Statement, ...]:
        """The statements of a formula, read once."""
        found = self.read.get(id(formula))
        if found is None:
            found = self.read[id(formula)] = statements_of(formula)
        return found

    # --- the first pass -------------------------------------------------------------------------

    def gather(self) -> None:
        """Take note of all that is said."""
        found = list(paragraphs(self.document.pieces))
        if not any(self._worth(plain) for paragraph in found for plain in paragraph.plains):
            return
        for number, paragraph in enumerate(found):
            first = paragraph.where
            environment = first.environments[-1].number if first.environments else 0
            section = first.section_number

            def spot_at(
                offset: int, n: int = number, s: int = section, e: int = environment, p: Paragraph = paragraph
            ) -> Spot:
                return Spot(s, n, p.sentence_at(offset), offset, e)

            spots = [spot_at(place) for place in paragraph.places]
            self.bundles.learn(paragraph, spots, number, section)
            if not spots:
                continue
            self.pages.append((paragraph, spots))
            learn(self.settings, paragraph, spots, number, section)
            self.numbers[number] = frozenset(name.spelling for name in numbers_said(paragraph, self.statements))
            for saying in from_words(paragraph, self.statements, spot_at):
                self.ledger.add(saying)
            for formula, plain, spot in zip(paragraph.formulas, paragraph.plains, spots):
                if _DECLARES.search(plain):
                    self._note_sayings(paragraph, formula, spot)
                if "=" in plain and (self._worth(plain) or _LAID_DOWN.search(plain)):
                    self.laid.note(formula, self.statements(formula), spot, is_hypothesis(paragraph, spot.offset))
            self._note_lens(paragraph, spots)

    def _worth(self, plain: str) -> bool:
        """Whether a formula in plain spelling may be about operations."""
        return _WORTH.search(plain) is not None or any(name in plain for name in self.scripts.macros)

    def _note_sayings(self, paragraph: Paragraph, formula: Formula, spot: Spot) -> None:
        for saying in from_formula(self.statements(formula), formula):
            local = self._hypothesis(paragraph, spot)
            said = evolve(saying, spot=spot, source="the formula", local=local)
            self.ledger.add(in_its_ring(said, paragraph))

    def _note_lens(self, paragraph: Paragraph, spots: list[Spot]) -> None:
        """The classes of degree 1 and 2 of a K(Z/p^k, 1): the second is the Bockstein of the first."""
        number = spots[0].paragraph
        spaces = [at for at in self.settings.spaces if at.spot.paragraph == number and at.space.degree == "1"]
        if not spaces:
            return
        said = [one for found in self.ledger.sayings.values() for one in found if one.spot.paragraph == number]
        first = {one.name for one in said if one.degree == Polynomial.of(1)}
        second = {one.name for one in said if one.degree == Polynomial.of(2)}
        if len(first) != 1 or len(second) > 1 or first & second:
            return
        place = next(one.spot.offset for one in said if one.name in first)
        before = [at.space for at in spaces if at.spot.offset <= place and at.space.group is not None]
        group = before[-1].group if before else None
        if group is None or not group.order:
            return
        name = first.pop()
        for one in self.ledger.sayings[name]:
            if one.spot.paragraph == number and one.degree is not None:
                self.ledger.sayings[name].remove(one)
                self.ledger.add(
                    evolve(one, order=group.order, order_text=group.text, space=before[-1].text, local=False)
                )
                break
        if not second:
            return
        rule = rule_of(f"{second.pop()} = beta_{group.order} {name}", NOWHERE)
        if rule is not None:
            self.laid.rules.append((spots[0], evolve(rule, source=OF_THE_SPACE), paragraph.formulas[0]))

    def _hypothesis(self, paragraph: Paragraph, spot: Spot) -> bool:
        """Whether a declaration stands behind an if."""
        before = paragraph.text[max(0, spot.offset - 24) : spot.offset].lower()
        return any(
            f" {word} " in f" {before} "
            for word in ("if", "when", "whenever", "unless", "suppose", "need", "needs", "would", "require")
        )

    # --- the second pass ------------------------------------------------------------------------

    def units(self) -> Iterator[Unit]:
        """The statements with what is known."""
        for paragraph, spots in self.pages:
            for formula, plain, spot in zip(paragraph.formulas, paragraph.plains, spots):
                if not self._worth(plain):
                    continue
                statements = self.statements(formula)
                frame = self._frame(paragraph, formula, spot)
                for statement in statements:
                    yield Unit(statement, self._known(statement, spot, frame))

    def _frame(self, paragraph: Paragraph, formula: Formula, spot: Spot) -> Known:
        """What is known for all statements of one formula."""
        start, end = paragraph.around(spot.offset, 1)
        near = [
            one
            for one, place in zip(paragraph.formulas, paragraph.places)
            if start <= place < end and one is not formula
        ]
        ranges = [condition for one in near for condition in self._conditions(one)]
        context = self.scripts.at(formula)
        rules = (*self.laid.rules_at(formula, spot), *context.rules)
        prime = context.prime if context.prime is not None else self.settings.prime_at(spot)
        return Known(
            prime=None if prime == ODD else prime,
            maps=context.maps,
            operations=context.operations,
            conventions=self._manner(paragraph, spot, prime) | dict(context.conventions),
            ranges=tuple(ranges),
            rules=rules,
            explain=self.explain,
            integers=self.numbers.get(spot.paragraph, frozenset()) | no_operations(paragraph, formula, spot.offset),
            sentences=paragraph.shown(start, end),
            tail=paragraph.shown(spot.offset + 1, paragraph.sentences[paragraph.sentence_at(spot.offset)][1]),
            lead=paragraph.shown(paragraph.sentences[paragraph.sentence_at(spot.offset)][0], spot.offset),
            script=context.lines,
            space=particular_space(paragraph, spot.offset, bool(self.settings.sized)),
        )

    def _manner(self, paragraph: Paragraph, spot: Spot, prime: int | None) -> dict[str, str]:
        found = {}
        if prime == ODD:
            found["prime"] = "odd"
        if is_hypothesis(paragraph, spot.offset):
            found["hypothesis"] = "yes"
        if spot.section in self.laid.lowered:
            found["squares"] = "lower"
        counted = self.laid.primitive_at(spot)
        if counted is not None:
            found["Q"] = counted
        return found

    def _conditions(self, formula: Formula) -> Iterator[Condition]:
        for statement in self.statements(formula):
            if statement.kind == "condition":
                yield from statement.conditions

    def _known(self, statement: Statement, spot: Spot, frame: Known) -> Known:
        mentioned = [
            *class_names(statement),
            *(name for rule in frame.rules for side in (rule.left, rule.right) for name in names_of(side)),
        ]
        names = {name.spelling + (f"^{name.label}" if name.label else ""): name for name in mentioned}
        classes: dict[str, ClassFact] = {}
        context = self.scripts.at(statement.formula)
        for spelling, name in names.items():
            if name.spelling in frame.integers:
                continue
            fact = context.facts.get(name.spelling) or self.ledger.fact(spelling, spot)
            if name.letter == "iota":
                fact = fundamental(name, fact, spot, self.settings)
            if fact is None:
                fact = self._by_definition(name, frame, spot)
            if fact is not None:
                classes[name.spelling] = self._somewhere(fact, spot)
        prime = self._prime(statement, frame, spot.section)
        classes = {spelling: at_prime(fact, prime) for spelling, fact in classes.items()}
        return evolve(
            frame, classes=classes, families=self._families(spot), prime=self._prime(statement, frame, spot.section)
        )

    def _by_definition(self, name: ClassName, frame: Known, spot: Spot) -> ClassFact | None:
        """The degree of a name that stands for a Bockstein of another class."""
        for rule in frame.rules:
            found = defined(rule)
            if found is None or found[0] != name or len(found[1].terms) != 1:
                continue
            factors = found[1].terms[0][1].factors
            if len(factors) != 2 or not isinstance(factors[0], Operation) or not isinstance(factors[1], ClassName):
                continue
            base = self.ledger.fact(factors[1].spelling, spot)
            if factors[0].head == "beta" and base is not None and base.degree is not None:
                return ClassFact(base.degree + Polynomial.of(1), None, "", base.space, "its definition")
        return None

    def _somewhere(self, fact: ClassFact, spot: Spot) -> ClassFact:
        """The fact with its space: a class with no space, where manifolds are spoken of, may be one of a manifold."""
        if fact.source == "the author's comment":
            return fact
        if fact.space in self.settings.described:
            return evolve(fact, space=f"{fact.space}, a space that the text describes")
        if not self.settings.manifolds:
            return fact
        letter = fact.space[:1]
        if letter not in ("M", "N", "W") and (fact.space or spot.section not in self.settings.manifolds):
            return fact
        sized = bool(self.settings.sized) or any(sign.isdigit() for sign in fact.space)
        symbols = fact.degree.symbols if fact.degree is not None else frozenset()
        if sized or symbols & self.settings.dimensions:
            return evolve(fact, space="a manifold")
        return fact

    def _prime(self, statement: Statement, frame: Known, section: int) -> int | None:
        heads = {operation.head for operation in operations_in(statement)}
        if "Sq" in heads:
            return 2
        if frame.prime is not None or frame.conventions.get("prime") == "odd":
            return frame.prime
        if "P" not in heads and section in self.settings.squares_in - self.settings.powers_in:
            return 2
        if "P" in heads or self.settings.powers or self.settings.odd:
            return None
        return 2 if self.settings.squares else None

    def _families(self, spot: Spot) -> Mapping[str, FamilyFact]:
        families = {"iota": FamilyFact(INDEX, None, "", "the notation of fundamental classes")}
        if self.settings.bundles or self.bundles.found:
            families["w"] = FamilyFact(INDEX, None, self.bundles.at(spot, "w"), "Stiefel–Whitney classes")
        if self.bundles.wu_classes:
            families["v"] = FamilyFact(INDEX, None, self.bundles.at(spot, "w"), "Wu classes")
        if self.bundles.chern:
            families["c"] = FamilyFact(INDEX + INDEX, None, self.bundles.at(spot, "c"), "Chern classes")
        return families


__all__ = ["Learnt", "learnt_from"]
