"""Whether the parts of a statement have one degree, and one sort.

Strategy.  All terms of both sides are measured; each one is compared with the first.  A difference that is 0 is
well; one that
is a number, or a form in free symbols that is not 0, is a fault; one that holds a degree which is not known is not
checked.
"""

from __future__ import annotations

from attrs import frozen

from opslang.lint.formula.integers import indices_in, letters_of
from opslang.lint.model import (
    Call,
    ClassName,
    Cohomology,
    Finding,
    Index,
    Known,
    Number,
    Operation,
    Origin,
    Power,
    Side,
    Statement,
    Sum,
    Verdict,
)
from opslang.lint.symbolic.degrees import Measure, Term, Unmeasured, equations, is_zero, normal
from opslang.lint.symbolic.polynomial import Polynomial
from opslang.lint.symbolic.values import polynomial_of
from opslang.lint.symbolic.walk import about_operations, factors_of, operations_in

ODD_PRIMES = (3, 5, 7, 11, 13, 17)
NEAR = 1500
"""A symbolic degree said further away than this many signs is not held against a formula."""


@frozen
class Apart:
    """Two parts of different degree: the difference, and the part that is off."""

    degree: Polynomial
    wanted: Polynomial
    at: Origin
    inside: bool


# --- the checks ---------------------------------------------------------------------------------


def judge(statement: Statement, known: Known) -> Verdict | None:
    """The verdict on the degrees of a statement; None where it makes no claim on them."""
    if statement.kind not in ("relation", "mapsto", "membership", "degree", "signature", "definition"):
        return None
    if any(operation.head == "P" for operation in operations_in(statement)) and (
        known.prime == 2 or (known.prime is None and "prime" not in known.conventions)
    ):
        return Verdict("not-about-operations", reason="P is no reduced power here")
    if not about_operations(statement, known):
        return _without_operations(statement, known)
    if statement.unread:
        return Verdict("not-checked", reason=statement.unread[0].reason)
    measure = Measure(known)
    try:
        apart = _apart(statement, known, measure)
    except Unmeasured as trouble:
        return Verdict("not-checked", reason=trouble.reason, needed=trouble.needed)
    except NotKnown as trouble:
        return Verdict("not-checked", reason="a degree is not known", needed=trouble.needed)
    if apart is None:
        return Verdict("consistent", reason="the degrees agree")
    return Verdict("finding", (_finding(statement, apart),))


def _without_operations(statement: Statement, known: Known) -> Verdict | None:
    """A relation between classes with no operation in it counts only where the draft says the degree of every class."""
    if statement.kind != "relation" or statement.unread:
        return None
    names = [f for side in statement.sides for f in factors_of(side) if isinstance(f, ClassName)]
    if not names or any(known.degree(name) is None for name in names):
        return None
    if any(isinstance(f, (Call, Operation)) for side in statement.sides for f in factors_of(side)):
        return None
    if any(isinstance(side, Sum) and all(is_zero(product) for _, product in side.terms) for side in statement.sides):
        return None
    if all(isinstance(side, Sum) and _bare(side) for side in statement.sides):
        return None
    try:
        apart = _apart(statement, known, Measure(known))
    except (Unmeasured, NotKnown):
        return None
    if apart is None:
        return Verdict("consistent", reason="the degrees agree")
    if apart.degree.is_zero or apart.wanted.is_zero:
        return None
    return Verdict("finding", (_finding(statement, apart),)) if apart.degree.constant is not None else None


def _bare(side: Sum) -> bool:
    """A lone letter or number."""
    factors = side.terms[0][1].factors
    return len(side.terms) == 1 and len(factors) == 1 and isinstance(factors[0], (ClassName, Number))


class NotKnown(Exception):
    """The comparison needs a degree that is not known."""

    def __init__(self, needed: str) -> None:
        super().__init__(needed)
        self.needed = needed


def _apart(statement: Statement, known: Known, measure: Measure) -> Apart | None:
    if statement.kind == "signature":
        return _signature(statement, known, measure)
    if statement.kind == "membership":
        return _membership(statement, known, measure)
    if statement.kind == "degree":
        return _degree_claim(statement, known, measure)
    return _relation(statement, known, measure)


def _relation(statement: Statement, known: Known, measure: Measure) -> Apart | None:
    left, right = statement.left, statement.right
    if not isinstance(left, Sum) or not isinstance(right, Sum):
        raise Unmeasured("a side that is no expression of classes and operations")
    many = [(term, at) for at, side in enumerate((left, right)) for term in measure.terms(side)]
    _no_total_class(many)
    for term, _ in many:
        if term.bound:
            return _bound(statement, term, many)
    if len(many) < 2:
        return None
    sorts = {at: {term.sort for term, side in many if side == at} for at in (0, 1)}
    if statement.kind == "mapsto" and "class" in sorts[0] | sorts[1]:
        raise Unmeasured("a map of which the degree is not said")
    return _compare(statement, known, measure, many)


def _no_total_class(many: list[tuple[Term, int]]) -> None:
    """1 + w_1 + …: a sum with a number and classes is meant to be of every degree."""
    for at in (0, 1):
        sorts = {term.sort for term, side in many if side == at}
        if "scalar" in sorts and len(sorts) > 1:
            raise Unmeasured("a sum of a number and classes")


def _bound(statement: Statement, term: Term, many: list[tuple[Term, int]]) -> Apart:
    """A summand whose degree moves with the summation variable, against a side that does not."""
    fixed = [other for other, _ in many if not other.bound and other.sort != "scalar"]
    if not fixed:
        raise Unmeasured("a sum over all degrees")
    return Apart(term.degree, fixed[0].degree, term.product.at, False)


def _compare(statement: Statement, known: Known, measure: Measure, many: list[tuple[Term, int]]) -> Apart | None:
    rules = equations((*statement.conditions, *known.ranges))
    reference, side = many[0]
    undecided: NotKnown | None = None
    for term, at in many[1:]:
        difference = _reduced(term.degree - reference.degree, rules)
        if difference.is_zero:
            continue
        try:
            certain(difference, statement, known, measure)
        except NotKnown as trouble:
            undecided = trouble
            continue
        odd, wanted, inside = _odd_one(many, term, reference, at == side, rules)
        return Apart(odd.degree, wanted, odd.product.at, inside)
    if undecided is not None:
        raise undecided
    return None


def _reduced(value: Polynomial, rules: object) -> Polynomial:
    return normal(value).substitute(rules) if rules else normal(value)  # type: ignore[arg-type]


def _odd_one(
    many: list[tuple[Term, int]], term: Term, reference: Term, same_side: bool, rules: object
) -> tuple[Term, Polynomial, bool]:
    """Which of two terms is off: the one that fewer of the others agree with; else the later one."""
    count = [
        sum(1 for other, _ in many if _reduced(other.degree - one.degree, rules).is_zero) for one in (reference, term)
    ]
    if count[0] < count[1] and len(many) > 2:
        return reference, term.degree, True
    return term, reference.degree, same_side or count[0] > 1


def certain(difference: Polynomial, statement: Statement, known: Known, measure: Measure) -> None:
    """Raise NotKnown unless a difference of degrees is a fault for the values that its symbols may have."""
    needed = [name for symbol, name in measure.unknown.items() if symbol in difference.symbols]
    if needed:
        raise NotKnown("the degree of " + ", ".join(needed))
    if difference.constant is not None:
        return
    signs = {c > 0 for _, c in difference.terms}
    own = {letter for side in statement.sides for index in indices_in(side) for letter in letters_of(index)}
    for condition in statement.conditions:
        for part in (condition.left, condition.right):
            own |= set(letters_of(part)) if part is not None else set()
    for symbol in difference.symbols:
        if symbol == "p" or symbol in own or symbol.startswith(("2^", "|")):
            continue
        if len(signs) > 1 and not _said_near(symbol, statement, known):
            raise NotKnown(f"how {symbol} and the indices of the formula are related")
    if (
        len(signs) > 1
        and difference.symbols == {"p"}
        and any(difference.at({"p": p}) == 0 for p in (3, 5, 7, 11, 13, 17))
    ):
        raise NotKnown("the prime")
    indices = {
        letter for operation in operations_in(statement) for index in operation.upper for letter in letters_of(index)
    }
    if len(signs) > 1 and _top_square(statement) and indices & difference.symbols - {"p"}:
        raise NotKnown("how the index and the degree of the class are related")


def _said_near(symbol: str, statement: Statement, known: Known) -> bool:
    for fact in known.classes.values():
        if fact.degree is not None and symbol in fact.degree.symbols:
            near = fact.at.file == statement.at.file and abs(fact.at.start - statement.at.start) < NEAR
            if near:
                return True
    return False


def _top_square(statement: Statement) -> bool:
    """Sq^n x = x^2: a hypothesis on n may stand anywhere."""
    for side in (statement.left, statement.right):
        if isinstance(side, Sum) and len(side.terms) == 1 and len(side.terms[0][1].factors) == 1:
            if isinstance(side.terms[0][1].factors[0], Power):
                return True
    return False


# --- memberships, degrees, signatures -----------------------------------------------------------


def _membership(statement: Statement, known: Known, measure: Measure) -> Apart | None:
    group = statement.right
    for side in statement.sides[:-1]:
        if not isinstance(side, Sum):
            raise Unmeasured("a member that was not understood")
        terms = measure.terms(side)
        wanted = _degree_of_group(group, terms, measure)
        if wanted is None:
            raise Unmeasured("a group without a degree")
        for term in terms:
            if term.bound:
                raise Unmeasured("a sum over all degrees")
            difference = _reduced(term.degree - wanted, equations((*statement.conditions, *known.ranges)))
            if isinstance(group, Index) and len({c > 0 for _, c in difference.terms}) > 1:
                raise NotKnown("how source and target are related")
            if not difference.is_zero:
                certain(difference, statement, known, measure)
                return Apart(term.degree, wanted, term.product.at, False)
    return None


def _degree_of_group(group: Side, terms: list[Term], measure: Measure) -> Polynomial | None:
    if isinstance(group, Cohomology) and group.letter == "H" and group.degree is not None and not group.lower:
        if any(term.sort == "operation" for term in terms):
            return None
        return measure.index(group.degree)
    if isinstance(group, Index) and group.kind == "call" and group.parts[0] == "hom":
        source, target = group.parts[1], group.parts[2]
        if isinstance(source, Index) and isinstance(target, Index) and all(t.sort == "operation" for t in terms):
            return measure.index(target) - measure.index(source)
    return None


def _degree_claim(statement: Statement, known: Known, measure: Measure) -> Apart | None:
    values = []
    for side in (statement.left, statement.right):
        index = side if isinstance(side, Index) else _integer(side)
        value = None if index is None else polynomial_of(index, measure.length)
        if value is None:
            raise Unmeasured("a degree that was not understood")
        values.append(_reduced(value, equations((*statement.conditions, *known.ranges))))
    difference = values[0] - values[1]
    if difference.is_zero:
        return None
    certain(difference, statement, known, measure)
    return Apart(values[1], values[0], statement.right.at, False)


def _integer(side: Side) -> Index | None:
    from opslang.lint.formula.integers import as_index

    return as_index(side)


def _signature(statement: Statement, known: Known, measure: Measure) -> Apart | None:
    operation, source, target = statement.sides
    if not (isinstance(source, Cohomology) and isinstance(target, Cohomology) and isinstance(operation, Sum)):
        raise Unmeasured("source or target is no cohomology group")
    if source.degree is None or target.degree is None or source.letter != target.letter:
        raise Unmeasured("source or target has no degree")
    if source.lower or target.lower:
        raise Unmeasured("homology")
    start, end = measure.index(source.degree), measure.index(target.degree)
    lowered = _from_the_top(operation)
    if lowered is not None:
        if known.conventions.get("squares") != "lower":
            raise Unmeasured("a lower index", "whether squares are counted from the top")
        wanted = start.scaled(2) - measure.index(lowered)
    else:
        degree, sort = measure.sum(operation)
        if source.letter == "K" and sort == "class":
            wanted = degree
        elif sort != "operation":
            raise Unmeasured("no operation")
        else:
            wanted = start + degree
    difference = _reduced(end - wanted, equations((*statement.conditions, *known.ranges)))
    if difference.is_zero:
        return None
    certain(difference, statement, known, measure)
    return Apart(end, wanted, target.at, False)


def _from_the_top(body: Sum) -> Index | None:
    """The index of a lone Sq_i."""
    if len(body.terms) != 1 or len(body.terms[0][1].factors) != 1:
        return None
    only = body.terms[0][1].factors[0]
    return only.lower if isinstance(only, Operation) and only.head == "Sq" and not only.upper else None


# --- words --------------------------------------------------------------------------------------


def _finding(statement: Statement, apart: Apart) -> Finding:
    got, wanted = apart.degree, apart.wanted
    if statement.kind == "signature":
        message = f"the target should have degree {wanted}, and here it has degree {got}"
    elif statement.kind == "membership":
        message = f"this has degree {got}, and the group has degree {wanted}"
    elif statement.kind == "degree":
        message = f"the left side is {wanted}, and the right side {got}"
    elif apart.inside:
        message = f"this term has degree {got}, and the others degree {wanted}"
    else:
        message = f"the right side has degree {got}, the left side degree {wanted}"
    return Finding(
        "degrees-differ",
        "error",
        message + "\nan equation is possible in one degree only",
        statement.at if not apart.inside else apart.at,
        derivation=(f"left: {wanted}", f"right: {got}", f"difference: {got - wanted}"),
    )
