"""Characteristic classes in expressions: `w_2(E + F)`, `c_1(L)`, `w(E)`, and the bundles that stand in the brackets."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any, cast

from attrs import evolve

from opslang.ground.source import Span
from opslang.ir.tree import ClassElement
from opslang.meaning import bundles as bd
from opslang.meaning.bundles import STEP, Bundle, NoBundle
from opslang.meaning.canonical import Arithmetic, element_value
from opslang.meaning.characteristic import Characteristic
from opslang.meaning.indices import number
from opslang.meaning.maps import pulled_back
from opslang.meaning.pulling import arithmetic, live_in, map_named
from opslang.meaning.scope import spelled
from opslang.meaning.value import Value
from opslang.report.diagnostic import Refusal, error
from opslang.syntax import surface as sf

if TYPE_CHECKING:
    from opslang.meaning.lower import Lowering

LETTERS = frozenset("wcpWe")
MOST_RANK = 10_000


def refusal(message: str, span: Span, help: str = "") -> Refusal:
    """The refusal of something that is asked of a bundle."""
    return Refusal(error("bundle", message, span, help))


# --- finding them in products ---------------------------------------------------------------------


def merged(lowering: Lowering, body: sf.Product) -> sf.Product:
    """A product in which a name w, c, p, W or e and the bundle in brackets behind it are one factor."""
    if not lowering.scope.bundles or len(body.factors) < 2:
        return body
    factors: list[Any] = []
    glues: list[str] = []
    for factor, glue in zip(body.factors, body.glues):
        joined = _joined(lowering, factors[-1], factor) if factors and not glue else None
        if joined is None:
            factors.append(factor)
            glues.append(glue)
        else:
            factors[-1] = joined
    return evolve(body, factors=tuple(factors), glues=tuple(glues)) if len(factors) < len(body.factors) else body


def _joined(lowering: Lowering, before: Any, factor: Any) -> Any:
    base, outer = (factor.base, factor) if isinstance(factor, sf.Power) else (factor, None)
    if not isinstance(base, sf.Group) or not is_bundle(lowering, base.body):
        return None
    span = (before.span[0], factor.span[1])
    if isinstance(before, sf.PullBack) and len(before.body.terms) == 1 and before.body.terms[0][1].factors:
        ((sign, product),) = before.body.terms
        inner = evolve(product, factors=(*product.factors, factor), glues=(*product.glues, ""))
        return evolve(before, body=evolve(before.body, terms=((sign, inner),)), span=span)
    power: sf.Index | None = outer.exponent if outer is not None else None
    if isinstance(before, sf.Power) and outer is None:
        before, power = before.base, before.exponent
    if not isinstance(before, sf.Name) or before.letter not in LETTERS or before.primes:
        return None
    found = Characteristic(before, base.body, span)
    if power is None:
        return found
    return sf.Power(cast(sf.Factor, found), power, span)


def is_bundle(lowering: Lowering, body: sf.Sum) -> bool:
    """Whether a sum is one of bundles."""
    kinds = [_kind(lowering, factor) for _, product in body.terms for factor in product.factors]
    return all(kinds) and "bundle" in kinds


def _kind(lowering: Lowering, factor: object) -> str:
    match factor:
        case sf.Number():
            return "number"
        case sf.Name():
            index = factor.index if isinstance(factor.index, int) or factor.index is None else -1
            return "bundle" if spelled((factor.letter, index, factor.primes)) in lowering.scope.bundles else ""
        case sf.Group() | sf.PullBack():
            return "bundle" if is_bundle(lowering, factor.body) else ""
        case sf.Construction():
            return "bundle" if factor.head == "dual" and is_bundle(lowering, factor.body) else ""
    return ""


# --- bundles ---------------------------------------------------------------------------------------


def bundle_of(lowering: Lowering, body: sf.Sum, name: str | None = None) -> Bundle:
    """The bundle that a sum of bundles is.  Refusal."""
    try:
        return _sum(lowering, body, name or lowering.quote(body.span))
    except NoBundle as reason:
        raise refusal(str(reason), body.span) from reason


def _sum(lowering: Lowering, body: sf.Sum, name: str) -> Bundle:
    result: Bundle | None = None
    for sign, product in body.terms:
        found = _product(lowering, product, name)
        if sign < 0:
            found = bd.inverse(found, name)
        result = found if result is None else bd.whitney(result, found, name)
    assert result is not None
    return evolve(result, name=name)


def _product(lowering: Lowering, product: sf.Product, name: str) -> Bundle:
    count = 1
    found: list[Bundle] = []
    for factor in product.factors:
        if isinstance(factor, sf.Number):
            count *= factor.value
        else:
            found.append(_factor(lowering, factor, name))
    if count > MOST_RANK:
        raise NoBundle(f"at most {MOST_RANK:,} copies of a bundle are added")
    if not found:
        return bd.trivial(count, bd.real_letter(lowering.scope.prime), arithmetic(lowering))
    result = found[0]
    for other in found[1:]:
        result = bd.tensor(result, other, name)
    return result if count == 1 else bd.multiple(count, result, name)


def _factor(lowering: Lowering, factor: object, name: str) -> Bundle:
    match factor:
        case sf.Name():
            index = None if factor.index is None else number(factor.index, factor.span)
            found = lowering.scope.bundles.get(spelled((factor.letter, index, factor.primes)))
            if found is None:
                raise refusal(
                    f"no bundle is called {lowering.quote(factor.span)}",
                    factor.span,
                    "declare it: bundle E over X with w = 1 + a",
                )
            return found
        case sf.Group():
            return _sum(lowering, factor.body, lowering.quote(factor.span))
        case sf.Construction() if factor.head == "dual":
            return bd.dual(_sum(lowering, factor.body, lowering.quote(factor.body.span)), lowering.quote(factor.span))
        case sf.PullBack():
            return _pulled(lowering, factor)
    span = getattr(factor, "span", (0, 0))
    raise refusal("a bundle is made of bundles, numbers, dual(…) and pull-backs f^*", span)


def _pulled(lowering: Lowering, factor: sf.PullBack) -> Bundle:
    f = map_named(lowering, factor.name, factor.span)
    below = _sum(lowering, factor.body, lowering.quote(factor.body.span))
    if below.space is None or below.space.factors != f.target.factors:
        where = below.space.text if below.space else "declared classes"
        raise NoBundle(f"{f.text} pulls back bundles over {f.target.text}, and {below.name} lives over {where}")
    a = arithmetic(lowering)

    def back(element: ClassElement) -> ClassElement:
        return a.evaluate(pulled_back(element_value(element, 0), f.image, a.prime))

    euler = None if below.euler is None else back(below.euler)
    name = lowering.quote(factor.span)
    return Bundle(
        name, below.letter, below.rank, f.source, a, below.last, lambda i: back(below.piece(i)), euler, below.quotient
    )


# --- their classes ---------------------------------------------------------------------------------


def value(lowering: Lowering, found: Characteristic) -> Value:
    """A characteristic class as an expression.  Refusal."""
    bundle = bundle_of(lowering, found.body)
    if bundle.space is not None:
        live_in(lowering, bundle.space, found.span)
    letter = found.name.letter
    index = None if found.name.index is None else number(found.name.index, found.name.span)
    try:
        if letter == "e":
            element, degree = _euler(bundle), (bundle.rank or 0) * (2 if bundle.complex else 1)
        elif index is None:
            return element_value(_total(bundle, letter), None, found.span)
        else:
            element, degree = _numbered(bundle, letter, index), STEP.get(letter, 1) * index
    except NoBundle as reason:
        raise refusal(str(reason), found.span) from reason
    return element_value(element, max(degree, 0), found.span)


def _with(bundle: Bundle, letter: str) -> Bundle:
    """The bundle with classes of that letter."""
    prime = bundle.arithmetic.prime
    if letter == "c":
        if not bundle.complex:
            raise NoBundle(f"{bundle.name} is a real bundle, and c_i are classes of complex ones")
        return bundle
    real = bd.as_real(bundle)
    if letter in ("w", "W") and prime != 2:
        raise NoBundle(f"Stiefel-Whitney classes are classes at 2, and the prime is {prime}: ask for p_i")
    return real


def _numbered(bundle: Bundle, letter: str, index: int) -> ClassElement:
    bundle = _with(bundle, letter)
    a: Arithmetic = bundle.arithmetic
    if letter == "W":
        if index < 1:
            raise NoBundle("W_k is the Bockstein of w_{k-1}, so that k is at least 1")
        return a.applied(1, bundle.piece(index - 1)) if index > 1 else a.zero()
    if letter == "p" and a.prime == 2:
        return a.power(bundle.piece(2 * index), 2)
    return bundle.piece(index)


def _euler(bundle: Bundle) -> ClassElement:
    if bundle.rank is None or bundle.rank < 0:
        raise NoBundle(f"an Euler class needs the rank of {bundle.name}: bundle E of rank 3 …")
    if bundle.complex or bundle.arithmetic.prime == 2:
        return bundle.piece(bundle.rank)
    if bundle.euler is None:
        if bundle.rank % 2:
            return bundle.arithmetic.zero()
        raise NoBundle(f"the Euler class of {bundle.name} was not given: bundle E of rank 4 over X with p = …, e = …")
    return bundle.euler


def _total(bundle: Bundle, letter: str) -> ClassElement:
    if letter == "W":
        raise NoBundle("W has no total class here: ask for W_k")
    real = _with(bundle, letter)
    end = real.end()
    if end is None:
        how = f"ask for its classes one by one, as in {letter}_3({bundle.name})"
        raise NoBundle(f"the total class of {bundle.name} has no end that is seen: {how}")
    a = bundle.arithmetic
    return a.combined([(1, _numbered(real, letter, i), a.one()) for i in range(end + 1)])
