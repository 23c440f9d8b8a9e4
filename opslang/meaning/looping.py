"""Transgression and suspension in K(G, n) -> * -> K(G, n+1).

Both commute with every operation, so that P^I iota_n and P^I iota_{n+1} correspond (Serre 1951; Borel 1953).  The
suspension kills products.  The transgressive classes are the sums of P^I iota_n and of their p^j-th powers, a power x^p
being P^{|x|/2} x (x^2 = Sq^{|x|} x at 2); every other product supports an earlier differential.  The transgression is
defined modulo the kernel of the suspension; what is given is P^I iota_{n+1}.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from attrs import evolve

from opslang.ground.arith import digits
from opslang.ground.grading import degree as word_degree
from opslang.ir.tree import Class, ClassElement, Generator, Monomial
from opslang.meaning.canonical import element_value
from opslang.meaning.pulling import arithmetic, live_in
from opslang.meaning.spaces import eilenberg_maclane_value
from opslang.meaning.value import Value, as_sort
from opslang.report.diagnostic import Refusal, error
from opslang.spaces.space import Factor, SpaceValue
from opslang.syntax import surface as sf

if TYPE_CHECKING:
    from opslang.meaning.lower import Lowering


def value(lowering: Lowering, factor: sf.Construction) -> Value:
    """The transgression or the suspension of a class.  Refusal."""
    if factor.head == "dual":
        message = "dual(…) is a bundle, and stands in the brackets of its classes: c_1(dual(L))"
        raise Refusal(error("bundle", message, factor.span))
    inner = evolve(lowering, home=None, chosen=False)
    body = as_sort(inner.sum(factor.body), "class", factor.span)
    if body.sort != "class":
        raise Refusal(error("sorts-differ", f"{factor.head} takes a class, and this is an operation", factor.body.span))
    element: ClassElement = arithmetic(inner).evaluate(body)
    factors = _factors(inner, body, factor)
    n = factors[0].degree
    up = factor.head == "transgression"
    if not up and n == 1:
        message = "the suspension leads from K(G, n) to K(G, n-1), and here n is 1"
        raise Refusal(error("degree-range", message, factor.span))
    shift = 1 if up else -1
    terms = []
    for monomial, c in element.terms:
        moved = _transgressed(monomial, element.prime, factor) if up else _suspended(monomial, factor)
        if moved is not None:
            terms.append((moved, c))
    moved_factors = tuple([evolve(one, degree=n + shift) for one in factors])
    live_in(lowering, eilenberg_maclane_value(moved_factors), factor.span)
    degree = None if body.degree is None else body.degree + shift
    return element_value(ClassElement(element.prime, tuple(terms)), degree, factor.span)


def _factors(lowering: Lowering, body: Value, factor: sf.Construction) -> tuple[Factor, ...]:
    """The factors of the K(G, n) that the class lives in, one at least.  Refusal where it is none."""
    here: SpaceValue | None = lowering.home or lowering.scope.space
    plain = all(of.letter == "iota" and of.ring is None for of in body.classes)
    if here is None:
        degrees = {of.degree for of in body.classes}
        if len(degrees) == 1 and plain:
            return (Factor(lowering.scope.prime, degrees.pop()),)
    else:
        factors = tuple([f for f in here.factors if isinstance(f, Factor)])
        if plain and len(factors) == len(here.factors) and len({f.degree for f in factors}) == 1:
            return factors
    message = f"{factor.head} is that of K(G, n) -> * -> K(G, n+1), and this is no class of one K(G, n)"
    raise Refusal(error("not-transgressive", message, factor.span, "choose the space first: on K(Z/2, 3)"))


def _moved(of: Class, shift: int) -> Class:
    n = of.degree + shift
    return evolve(of, index=n, degree=n)


def _transgressed(monomial: Monomial, prime: int, factor: sf.Construction) -> Monomial:
    """The image of a monomial.  Refusal where it is no p^j-th power of a generator."""
    if len(monomial) == 1:
        generator, exponent = monomial[0]
        powers = list(digits(exponent, prime))
        degree = generator.of.degree + word_degree(generator.word, prime)
        if sum(powers) == 1:
            word = generator.word
            for _ in powers[1:]:
                # x^p is the top operation on x, which goes on to the generator of one degree more
                word, degree = (degree if prime == 2 else degree // 2, *word), degree * prime
            return ((Generator(word, _moved(generator.of, 1)), 1),)
    message = "a product is not transgressive here: only the P^I iota_n and their p^j-th powers are"
    help = "every term of a sum has to be one of them"
    words = message if monomial else "the unit is not transgressive"
    raise Refusal(error("not-transgressive", words, factor.body.span, help))


def _suspended(monomial: Monomial, factor: sf.Construction) -> Monomial | None:
    """The image of a monomial; None for products, which go to 0.  Refusal for the unit."""
    if not monomial:
        message = "the suspension is one of classes of positive degree"
        raise Refusal(error("not-transgressive", message, factor.body.span))
    if len(monomial) > 1 or monomial[0][1] > 1:
        return None
    generator = monomial[0][0]
    return ((Generator(generator.word, _moved(generator.of, -1)), 1),)
