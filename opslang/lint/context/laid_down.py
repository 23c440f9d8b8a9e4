"""What the formulas of a draft lay down for its other formulas: rules, definitions, conventions.

d iota_4 = Sq^2 iota_3     a transgression: holds in its section from there on
v = beta u                 a definition; x^2 = 0 a relation between classes: likewise
Sq^1 x = 0, behind an if   a hypothesis: holds in its paragraph
Q_0 = Sq^1, Sq_i x = Sq^{n-i} x    how primitives and squares are counted in its section
"""

from __future__ import annotations

from collections.abc import Sequence

from attrs import define, field

from opslang.lint.context.facts import Spot
from opslang.lint.context.names import names_of, operations_in
from opslang.lint.model import ClassName, Number, Operation, Power, Rule, Statement, Sum
from opslang.lint.numeric.rules_given import OF_THE_SPACE, defined, transgresses
from opslang.lint.reading import Formula
from opslang.lint.symbolic.values import polynomial_of


@define
class LaidDown:
    """All that is laid down, in the order of reading."""

    rules: list[tuple[Spot, Rule, Formula]] = field(factory=list)
    primitives: list[tuple[Spot, str]] = field(factory=list)
    lowered: set[int] = field(factory=set)
    """The sections that define Sq_i x as Sq^{n-i} x."""

    def note(self, formula: Formula, statements: Sequence[Statement], spot: Spot, hypothesis: bool) -> None:
        """Take note of what a formula lays down: d iota_4 = …, Sq^1 x = 0 behind an if, Q_0 = Sq^1."""
        for statement in statements:
            if statement.kind not in ("relation", "definition") or len(statement.sides) != 2 or statement.sign == "≠":
                continue
            left, right = statement.sides
            if not isinstance(left, Sum) or not isinstance(right, Sum) or statement.unread:
                continue
            rule = Rule(left, right, "the text", statement.at)
            named = bool(names_of(left) or names_of(right))
            plain = not operations_in(statement) and named and _is_monomial(left) and _is_monomial(right)
            if transgresses(rule) or (hypothesis and named) or defined(rule) is not None or plain:
                self.rules.append((spot, rule, formula))
            if from_the_top(left, right):
                self.lowered.add(spot.section)
            counted = first_primitive(left, right)
            if counted is not None:
                self.primitives.append((spot, counted))

    def rules_at(self, formula: Formula, spot: Spot) -> list[Rule]:
        """The rules that the text lays down before a formula in its section; a hypothesis holds in its paragraph.

        A definition is one where it stands first: that the same name occurs again on one side defines nothing.
        """
        found = []
        for at, rule, where in self.rules:
            if at.section != spot.section or (at.paragraph, at.offset) > (spot.paragraph, spot.offset):
                continue
            lasting = transgresses(rule) or defined(rule) is not None or _without_operations(rule)
            if (where is formula and rule.source != OF_THE_SPACE) or (not lasting and at.paragraph != spot.paragraph):
                continue
            found.append(rule)
        return found

    def primitive_at(self, spot: Spot) -> str | None:
        """Which of the primitives is Sq^1 here, as the section says."""
        here = {counted for at, counted in self.primitives if at.section == spot.section}
        return here.pop() if len(here) == 1 else None


def _is_monomial(side: Sum) -> bool:
    """Whether a side is 0 or a product of names and their powers."""
    return len(side.terms) == 1 and all(
        isinstance(factor, (ClassName, Number, Power)) for factor in side.terms[0][1].factors
    )


def _without_operations(rule: Rule) -> bool:
    """x^2 = 0, x^3 = y^2: the classes are no general ones."""
    return _is_monomial(rule.left) and _is_monomial(rule.right)


def from_the_top(left: Sum, right: Sum) -> bool:
    """Whether an equation is Sq_i x = Sq^{n-i} x."""
    sides = [side.terms[0][1].factors for side in (left, right) if len(side.terms) == 1]
    if len(sides) != 2 or not all(side and isinstance(side[0], Operation) for side in sides):
        return False
    first, second = sides[0][0], sides[1][0]
    if not isinstance(first, Operation) or not isinstance(second, Operation):
        return False
    if first.head != "Sq" or second.head != "Sq" or first.lower is None or first.upper or len(second.upper) != 1:
        return False
    i, above = polynomial_of(first.lower), polynomial_of(second.upper[0])
    return i is not None and above is not None and len(i.symbols) == 1 and above.symbols > i.symbols


def first_primitive(left: Sum, right: Sum) -> str | None:
    """The k of an equation Q_k = Sq^1 (or beta), for k = 0 and 1."""
    sides = [side.terms[0][1].factors for side in (left, right) if len(side.terms) == 1]
    if len(sides) != 2 or any(len(side) != 1 or not isinstance(side[0], Operation) for side in sides):
        return None
    first, second = sides[0][0], sides[1][0]
    if not isinstance(first, Operation) or not isinstance(second, Operation) or first.head != "Q":
        return None
    is_first = second.head == "beta" or (second.head == "Sq" and len(second.upper) == 1 and second.upper[0].number == 1)
    k = first.lower.number if first.lower is not None else None
    return str(k) if is_first and k in (0, 1) else None
