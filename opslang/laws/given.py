"""Relations of the ring of a space, and operations on its generators where the space alone can say what they are.

Everything comes from the family that a class carries; the words for it too.
"""

from __future__ import annotations

from opslang.ir.term import Apply, Class, Factor, Monomial, zero
from opslang.laws.law import Bindings, Equation, Law, Remark, require, single
from opslang.laws.projective import BINOMIAL, EMPTY
from opslang.laws.ring import applied, element_of, is_open, known, letter_on_class, product_of
from opslang.laws.splitting import SPLITTING
from opslang.laws.wu import THOM, WU
from opslang.spaces.family import Family
from opslang.spaces.thom import Thom

_OWN = (WU, THOM, SPLITTING, BINOMIAL, EMPTY)
"""Laws with a formula; where one of them applies the space is not asked."""


def _has_own(factor: Factor, p: int) -> bool:
    return any(law.match(factor, 1, p) is not None for law in _OWN)


def _operation(p: int, token: int, of: Class) -> Equation:
    require(of.ring is not None and is_open(p, token, of), "no class of a space, or settled by instability")
    factor = applied(p, token, of)
    require(not _has_own(factor, p), "another law of the book has the formula")
    return Equation(factor, 1, element_of(p, of.ring.operation(p, token, of)))


def _match_operation(factor: Factor, exponent: int, p: int) -> Bindings | None:
    acts = letter_on_class(factor, p)
    if acts is None or not is_open(p, *acts) or _has_own(factor, p) or known(p, *acts) is None:
        return None
    return {"p": p, "token": acts[0], "of": acts[1]}


def _operation_words(p: int, token: int, of: Class) -> str:
    return str(of.ring.law(p, token, of))


OPERATION = Law(
    name="operation-of-the-space",
    title="operations on the classes of the space",
    formula=r"\theta x \text{ for a generator } x \text{ of } H^{*}(X)",
    condition="x a generator of the ring of a named or presented space, |x| too large for instability",
    source="the space's own: Steenrod and Epstein 1962 for lens spaces; for a presentation what was declared",
    examples=("beta x = y",),
    setting=("prime 3", "on lens(3)"),
    instance=_operation,
    match=_match_operation,
    words=_operation_words,
)


def _higher(p: int, k: int, of: Class) -> Equation:
    require(of.ring is not None and k > 1, "no class of a space, or the first Bockstein")
    order, value = of.ring.bockstein(p, of)
    require(order is None or order >= k, "a lower Bockstein of it is not 0")
    return Equation(Apply("beta", k, single(of)), 1, element_of(p, value) if order == k else zero(p))


def _match_higher(factor: Factor, exponent: int, p: int) -> Bindings | None:
    if not (isinstance(factor, Apply) and factor.key == "beta" and factor.index > 1):
        return None
    blocks = factor.argument.blocks
    of = blocks[0][0] if len(blocks) == 1 and blocks[0][1] == 1 else None
    if not isinstance(of, Class) or of.ring is None:
        return None
    order, _ = of.ring.bockstein(p, of)
    return {"p": p, "k": factor.index, "of": of} if order is None or order >= factor.index else None


def _higher_words(p: int, k: int, of: Class) -> str:
    return str(of.ring.law(p, 1 if p == 2 else 0, of))


HIGHER = Law(
    name="bockstein-of-the-space",
    title="a higher Bockstein on a class of the space",
    formula=r"\beta_{k}x = y",
    condition="k >= 2, x of order k; 0 where its order is greater",
    source="the Bockstein sequence of K(Z/p^k, 1): Steenrod and Epstein 1962, chapter V",
    examples=("beta_2 x = y",),
    setting=("on lens(4)",),
    instance=_higher,
    match=_match_higher,
    words=_higher_words,
)


# --- relations ------------------------------------------------------------------------------------


def _truncated(p: int, h: int, x: Class) -> Equation:
    height = None if x.ring is None else x.ring.height(p, x)
    require(height is not None and h == height, "no such power of it is 0")
    return Equation(x, h, zero(p))


def _match_truncated(factor: Factor, exponent: int, p: int) -> Bindings | None:
    if not isinstance(factor, Class) or factor.ring is None or exponent < 2:
        return None
    height = factor.ring.height(p, factor)
    return {"p": p, "h": height, "x": factor} if height is not None and exponent >= height else None


def _on_space(p: int, h: int, x: Class) -> tuple[Remark, ...]:
    return ((f"on {x.ring.text}",),)


TRUNCATED = Law(
    name="truncated",
    title="the truncation of the ring",
    formula=r"x^{n+1} = 0",
    condition="x the generator of RP^n, CP^n or HP^n, or of a ring with that relation",
    source="Steenrod and Epstein 1962, chapter I (RP^n); Milnor and Stasheff 1974, section 14 (CP^n)",
    examples=("x^4 = 0",),
    setting=("on RP^3",),
    instance=_truncated,
    match=_match_truncated,
    kills=True,
    remarks=_on_space,
    unseen="test_truncated_rings",
)


def _relation(p: int, number: int, space: Family) -> Equation:
    rules = space.rules(p)
    require(0 < number <= len(rules), f"{space.text} has no such relation")
    lead, tail = rules[number - 1]
    left = product_of(p, lead)
    require(len(left.terms) == 1, "the leading monomial is 0")
    ((monomial, sign),) = left.terms
    (factor, power), *rest = monomial.blocks
    # `sign` is 1 or -1, and its own inverse
    return Equation(
        factor, power, element_of(p, tuple([(c * sign, powers) for c, powers in tail])), Monomial(tuple(rest))
    )


def _rules(factor: Factor, p: int, single_ones: bool) -> list[tuple[int, Equation]]:
    space = factor.ring if isinstance(factor, Class) else None
    if space is None:
        return []
    found = []
    for number, (lead, _) in enumerate(space.rules(p), start=1):
        if (len(lead) == 1) == single_ones and any(of == factor for of, _ in lead):
            found.append((number, _relation(p, number, space)))
    return found


def _match_relation(factor: Factor, exponent: int, p: int) -> Bindings | None:
    for number, equation in _rules(factor, p, True):
        if equation.factor == factor and exponent >= equation.power:
            assert isinstance(factor, Class)
            return {"p": p, "number": number, "space": factor.ring}
    return None


def _match_product_relation(monomial: Monomial, at: int, p: int) -> Bindings | None:
    factor, _ = monomial.blocks[at]
    exponents = dict(monomial.blocks)
    for number, equation in _rules(factor, p, False):
        holds = all(exponents.get(other, 0) >= n for other, n in equation.lhs.blocks)
        if equation.factor == factor and holds:
            assert isinstance(factor, Class)
            return {"p": p, "number": number, "space": factor.ring}
    return None


def _relation_words(p: int, number: int, space: Family) -> str:
    if isinstance(space, Thom):
        return "the square of the Thom class is the Euler class times it"
    return space.relation(p, number)


def _relation_remarks(p: int, number: int, space: Family) -> tuple[Remark, ...]:
    # other spaces are named by `Family.relation`
    return ((f"on {space.text}",),) if isinstance(space, Thom) else ()


RELATION = Law(
    name="relation-of-the-ring",
    title="a relation of the ring",
    formula=r"U^{2} = eU, \quad \text{or a relation of a presented ring}",
    condition="the leading monomial of a Gröbner basis of the relations",
    source="Thom 1952 for Thom spaces; for a presentation what was declared",
    examples=("U^2 = w_3 U",),
    setting=("on thom(BO(3))",),
    instance=_relation,
    match=_match_relation,
    match_product=_match_product_relation,
    remarks=_relation_remarks,
    words=_relation_words,
    unseen="test_relations_of_thom_spaces_hold_in_roots",
)
