"""The verdict on a relation with symbols: where it must hold, tried there.

Adem's relation must hold in its range, Cartan's everywhere; any other relation where the draft says, and where the
draft
says nothing it is a fault only if it holds nowhere.
"""

from __future__ import annotations

import re

from attrs import evolve

from opslang.lint.formula.integers import letters_of
from opslang.lint.model import (
    Call,
    ClassName,
    Condition,
    Dots,
    Finding,
    Index,
    Known,
    Number,
    Operation,
    Statement,
    Sum,
    Verdict,
    found,
)
from opslang.lint.symbolic.trial import Trial, classes_of, free_symbols, tried
from opslang.lint.symbolic.walk import about_operations, factors_of
from opslang.lint.templates.shapes import adem, adem_range, cartan, has_binomial, only_product, says_range, wu

TEMPLATE = 30
"""Points at which a general relation is tried; its first wrong coefficient may stand far out."""
ENOUGH, FEW = 6, 3
"""Points at which a relation is tried: between operations, and between classes, where a failure would not count."""
_PARITY = ("even", "odd", "parity", "power", "divisible", "congruent", "binary", "mod", "digit", "multiple")


def template(statement: Statement, known: Known) -> Verdict | None:
    """Adem's and Cartan's relations with symbols."""
    if not _fit(statement, known):
        return None
    shape = adem(statement)
    if shape is not None:
        return _adem(statement, known, shape)
    if cartan(statement):
        trial = tried(statement, _of_any_classes(statement, known), statement.conditions, TEMPLATE // 2)
        if trial is None:
            return None
        if trial.false:
            return found(_wrong(statement, trial, "cartan-formula", "this is not the Cartan formula"))
        return Verdict("agrees", reason="agrees for " + trial.extent)
    return None


def _of_any_classes(statement: Statement, known: Known) -> Known:
    """What is known without the classes, where the sides have the same ones: Cartan's formula is one of any two."""
    left, right = [{f.spelling for f in factors_of(side) if isinstance(f, ClassName)} for side in statement.sides]
    if left != right:
        return known
    conventions = {key: value for key, value in known.conventions.items() if key != "hypothesis"}
    return evolve(known, classes={}, families={}, rules=(), space="", conventions=conventions)


def _adem(statement: Statement, known: Known, shape: tuple[str, Index, Index]) -> Verdict | None:
    name, a, b = shape
    said = (*statement.conditions, *known.ranges)
    trial = tried(statement, known, (*adem_range(name, a, b), *statement.conditions), TEMPLATE)
    if trial is None:
        return None
    if trial.false:
        return found(_wrong(statement, trial, "adem-relation", "this is not the Adem relation"))
    if not says_range(said, a, b) and letters_of(a):
        wanted = {"Sq": "0 < a < 2b", "P": "a < pb", "PbP": "a ≤ pb"}[name]
        message = (
            f"the range of the Adem relation is not said\nit holds for {wanted} only, a and b being the two indices"
        )
        return found(Finding("range-missing", "warning", message, statement.at))
    return Verdict("agrees", reason="agrees for " + trial.extent)


def relation(statement: Statement, known: Known) -> Verdict | None:
    """Any other relation with symbols."""
    if not _fit(statement, known) or adem(statement) or cartan(statement) or wu(statement):
        return None
    domain = (*statement.conditions, *known.ranges)
    classes = classes_of(statement)
    binomial = isinstance(statement.right, Sum) and any(has_binomial(product) for _, product in statement.right.terms)
    trial = tried(statement, known, domain, FEW if classes and not binomial else ENOUGH)
    if trial is None:
        return None
    if not trial.false:
        return Verdict("agrees", reason="agrees for " + trial.extent)
    if classes and _powers_of_a_line(statement, known):
        return found(_wrong(statement, trial, "false-for-small-values", "this does not hold for all values"))
    if classes and _for_all(statement, known):
        return found(_wrong(statement, trial, "false-for-small-values", "this does not hold for all values"))
    if classes or _stated(statement):
        return None
    if not trial.true and len(trial.false) >= (3 if trial.symbols else 2):
        return found(_wrong(statement, trial, "false-for-small-values", "this holds for none of the values tried"))
    if trial.true and _quantified(statement, known, domain):
        return found(_wrong(statement, trial, "false-for-small-values", "this does not hold for all values"))
    return Verdict("not-checked", reason=f"it fails for {trial.false[0].text}", needed="for which values it is meant")


def _powers_of_a_line(statement: Statement, known: Known) -> bool:
    """Sq^i(a^m) = binomial · a^{m+i}, the degree of a being a number: it is meant for all i and m."""
    if not isinstance(statement.right, Sum) or not any(has_binomial(product) for _, product in statement.right.terms):
        return False
    names = [factor for side in statement.sides for factor in factors_of(side) if isinstance(factor, ClassName)]
    if any(condition.sign == "words" for condition in (*statement.conditions, *known.ranges)):
        return False
    return all(_constant(known, name) and _plain(known, name) for name in names)


def _plain(known: Known, name: ClassName) -> bool:
    fact = known.fact(name)
    return fact is not None and not fact.order_text


def _for_all(statement: Statement, known: Known) -> bool:
    """Whether the statement itself says for which numbers it holds, in inequalities, and all degrees are known."""
    if any(condition.sign == "words" for condition in (*statement.conditions, *known.ranges)):
        return False
    names = [factor for side in statement.sides for factor in factors_of(side) if isinstance(factor, ClassName)]
    if any(known.degree(name) is None for name in names):
        return False
    own = {letter for c in statement.conditions for p in (c.left, c.right) if p is not None for letter in letters_of(p)}
    free = set(free_symbols(statement, known)) - {"p"}
    if re.match(r"\s*,?\s*(?:for|if|when|whenever)\s+(?:all\s+)?\$", known.tail):
        own |= {letter for c in known.ranges for p in (c.left, c.right) if p is not None for letter in letters_of(p)}
    return bool(free) and free <= own


def _constant(known: Known, name: ClassName) -> bool:
    degree = known.degree(name)
    return degree is not None and degree.constant is not None


def _stated(statement: Statement) -> bool:
    """P^i = 0, Sq^i = 1: not a relation of the algebra, but a hypothesis or a notation."""
    for side in statement.sides:
        product = only_product(side)
        if product is None or len(product.factors) != 1 or not isinstance(product.factors[0], (Operation, Number)):
            return False
    return True


def _quantified(statement: Statement, known: Known, domain: tuple[Condition, ...]) -> bool:
    """Whether the draft says for which numbers the relation is meant, in inequalities alone."""
    symbols = set(free_symbols(statement, known))
    covered: set[str] = set()
    for condition in domain:
        if condition.sign == "words":
            return False
        for part in (condition.left, condition.right):
            covered |= set(letters_of(part)) if part is not None else set()
    text = known.sentences.lower()
    if any(word in text for word in _PARITY) or any(char in known.sentences for char in "≡"):
        return False
    own = {letter for c in statement.conditions for p in (c.left, c.right) if p is not None for letter in letters_of(p)}
    return bool(symbols) and symbols <= covered and (symbols <= own or "all" in text or "every" in text)


def _fit(statement: Statement, known: Known) -> bool:
    if (
        statement.kind != "relation"
        or len(statement.sides) != 2
        or statement.unread
        or (known.prime is None and "prime" not in known.conventions)
    ):
        return False
    if not all(isinstance(side, Sum) for side in statement.sides):
        return False
    factors = [factor for side in statement.sides for factor in factors_of(side)]
    if any(isinstance(factor, (Call, Dots)) for factor in factors):
        return False
    if any(isinstance(factor, Operation) and (factor.bound or factor.tensor) for factor in factors):
        return False
    return about_operations(statement, known)


def _wrong(statement: Statement, trial: Trial, name: str, what: str) -> Finding:
    point = trial.false[0]
    left = f"the left side is {point.left or '0'}" if point.left or point.right else "the sides differ"
    right = f" and the right side {point.right or '0'}" if point.left or point.right else ""
    message = f"{what}: for {point.text} {left}{right}"
    return Finding(name, "error", message, statement.at, derivation=tuple(one.text for one in trial.false[:3]))
