"""The Adem relations, at 2 and at odd primes: the one place of their coefficients.  Knows words, not classes."""

from __future__ import annotations

from collections.abc import Iterator

from opslang.laws import binomials

Term = tuple[int, int, int]
"""A coefficient 1 … p-1 and two indices; the second is 0 where the second letter is absent."""


def _refuse_admissible(admissible: bool, what: str) -> None:
    if admissible:
        raise ValueError(f"{what} is admissible or has an index below 1")


def squares(a: int, b: int) -> tuple[tuple[int, int], ...]:
    """The pairs (i, j) with Sq^a Sq^b = sum Sq^i Sq^j, j increasing; j = 0 means Sq^i alone.

    Defined for 0 < a < 2b; ValueError elsewhere.  i + j = a + b.  Source: Adem 1952; Steenrod and Epstein 1962, ch. I.
    """
    _refuse_admissible(not 0 < a < 2 * b, f"Sq^{a} Sq^{b}")
    if a > 512:
        return tuple((a + b - j, j) for j, _ in binomials.row(b - 1, a, 2))
    n, s = b - 1, a + b
    return tuple([(s - j, j) for j in range(max(0, a - n), a // 2 + 1) if not (a - 2 * j) & ~(n - j)])


def iter_squares(a: int, b: int) -> Iterator[tuple[int, int]]:
    """`squares`, one term at a time and in no particular order."""
    _refuse_admissible(not 0 < a < 2 * b, f"Sq^{a} Sq^{b}")
    return ((a + b - j, j) for j, _ in binomials.walk(b - 1, a, 2))


def count_squares(a: int, b: int) -> int:
    """The number of terms of `squares(a, b)`, without listing them."""
    _refuse_admissible(not 0 < a < 2 * b, f"Sq^{a} Sq^{b}")
    return binomials.count(b - 1, a, 2)


def _signed(
    terms: Iterator[tuple[int, int]] | tuple[tuple[int, int], ...], a: int, b: int, minus: int, p: int
) -> Iterator[Term]:
    for j, value in terms:
        yield (p - value if (a + j + minus) % 2 else value), a + b - j, j


def _row(terms: tuple[tuple[int, int], ...], a: int, b: int, minus: int, p: int) -> tuple[Term, ...]:
    """`_signed`, all at once."""
    even, s = (a + minus) % 2, a + b
    return tuple([(value if j % 2 == even else p - value, s - j, j) for j, value in terms])


def powers(a: int, b: int, p: int) -> tuple[Term, ...]:
    """The triples (c, i, j) with P^a P^b = sum c P^i P^j, j increasing; j = 0 means P^i alone.

    Defined for 0 < a < pb; ValueError elsewhere.  i + j = a + b.  Source: Steenrod and Epstein 1962, ch. VI.
    """
    _refuse_admissible(not 0 < a < p * b, f"P^{a} P^{b}")
    return _row(binomials.row((p - 1) * b - 1, a, p), a, b, 0, p)


def iter_powers(a: int, b: int, p: int) -> Iterator[Term]:
    """`powers`, one term at a time and in no particular order."""
    _refuse_admissible(not 0 < a < p * b, f"P^{a} P^{b}")
    return _signed(binomials.walk((p - 1) * b - 1, a, p), a, b, 0, p)


def count_powers(a: int, b: int, p: int) -> int:
    """The number of terms of `powers(a, b, p)`, without listing them."""
    _refuse_admissible(not 0 < a < p * b, f"P^{a} P^{b}")
    return binomials.count((p - 1) * b - 1, a, p)


def powers_bockstein(a: int, b: int, p: int) -> tuple[tuple[Term, ...], tuple[Term, ...]]:
    """Two rows of triples (c, i, j) with P^a beta P^b = sum c beta P^i P^j + sum c P^i beta P^j, j increasing.

    Defined for 0 < a <= pb; ValueError elsewhere.  i + j = a + b; j = 0 means that the last power is absent.
    Source: Steenrod and Epstein 1962, ch. VI.
    """
    _refuse_admissible(not 0 < a <= p * b, f"P^{a} beta P^{b}")
    outside = _row(binomials.row((p - 1) * b, a, p), a, b, 0, p)
    inside = _row(binomials.row((p - 1) * b - 1, a - 1, p), a, b, 1, p)
    return outside, inside


def iter_powers_bockstein(a: int, b: int, p: int) -> tuple[Iterator[Term], Iterator[Term]]:
    """`powers_bockstein`, one term at a time and in no particular order."""
    _refuse_admissible(not 0 < a <= p * b, f"P^{a} beta P^{b}")
    outside = _signed(binomials.walk((p - 1) * b, a, p), a, b, 0, p)
    return outside, _signed(binomials.walk((p - 1) * b - 1, a - 1, p), a, b, 1, p)


def count_powers_bockstein(a: int, b: int, p: int) -> int:
    """The number of terms of `powers_bockstein(a, b, p)`, both rows together, without listing them."""
    _refuse_admissible(not 0 < a <= p * b, f"P^{a} beta P^{b}")
    return binomials.count((p - 1) * b, a, p) + binomials.count((p - 1) * b - 1, a - 1, p)
