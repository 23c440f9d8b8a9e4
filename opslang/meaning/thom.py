"""Thom spaces of declared bundles: the base's cohomology times U, with what the operations on U are.

Sq^k U = w_k U (Thom 1952).  At odd p, P^k U is U times the k-th elementary symmetric polynomial of the x^{p-1} for a
complex bundle (Chern roots x), of the y^{(p-1)/2} for a real one (y = x^2, the roots of its Pontryagin classes), by the
splitting principle (Borel and Serre 1953).
"""

from __future__ import annotations

from opslang.ground.source import Span
from opslang.ir.tree import ClassElement
from opslang.meaning import bundles as bd
from opslang.meaning.bundles import Bundle, NoBundle
from opslang.meaning.canonical import element_polynomial
from opslang.report.diagnostic import Refusal, error
from opslang.spaces import symmetric
from opslang.spaces.bundle_thom import BundleThom, ThomFactor
from opslang.spaces.family import NotKnown, Polynomial
from opslang.spaces.space import AnyFactor

MOST_RANK = 1_000


def thom_space(bundle: Bundle, span: Span) -> tuple[list[AnyFactor], str]:
    """The factors of thom(E), and how it is written.  NoBundle, Refusal."""
    if bundle.space is None:
        message = f"{bundle.name} lives on declared classes: thom(…) needs its base, as in bundle E over X with …"
        raise Refusal(error("bundle", message, span))
    real = bd.as_real(bundle)
    if real.rank is None or not 0 < real.rank <= MOST_RANK:
        how = "bundle E of rank 3 over X with …"
        raise NoBundle(f"a Thom space needs the rank of {bundle.name}, from 1 to {MOST_RANK:,}: {how}")
    prime, rank = real.arithmetic.prime, real.rank
    if prime == 2:
        values: list[Polynomial | None] = [element_polynomial(real.piece(k)) for k in range(rank + 1)]
        oriented = not real.piece(1).terms
        euler: Polynomial | None = values[rank]
    else:
        values = [_power(bundle, prime, k) for k in range(rank // 2 + 1)]
        oriented = True
        euler = None if real.euler is None else element_polynomial(real.euler)
    thom = BundleThom(bundle.name, prime, rank, oriented, tuple(values), euler)
    return [*bundle.space.factors, ThomFactor(thom)], thom.text


def _power(bundle: Bundle, prime: int, k: int) -> Polynomial | None:
    """What P^k U is U times; None where there are too many partitions to go through."""
    a = bundle.arithmetic
    try:
        if k == 0:
            return element_polynomial(a.one())
        if bundle.complex:
            rows = symmetric.powers_of_roots(prime, k, prime - 1)
        else:
            rows = symmetric.powers_of_roots(prime, k, (prime - 1) // 2)
    except NotKnown:
        return None
    total = a.zero()
    for partition, c in rows:
        product: ClassElement = a.one(c)
        for part in partition:
            product = a.product(product, bundle.piece(part))
        total = a.combined([(1, total, a.one()), (1, product, a.one())])
    return element_polynomial(total)
