"""Integer expressions in index positions: closed ones become numbers, others `IndexExpression`s.

Knows integers.  Raises Refusal where a number would be absurdly large or is none at all.
"""

from __future__ import annotations

from math import comb

from opslang.ground.source import Span
from opslang.report.diagnostic import Refusal, error
from opslang.syntax import surface as s
from opslang.syntax.parts import Part

BIT_LIMIT = 14_000
"""No index may have more binary digits than this (some 4,200 decimal ones)."""


def _too_large(span: Span) -> Refusal:
    message = f"this index has more than {BIT_LIMIT:,} binary digits"
    return Refusal(error("number-too-large", message, span))


def _expression(kind: str, parts: tuple[object, ...], span: Span) -> Part:
    return Part(s.IndexExpression(kind, parts, span), span)


def sum_of(signs: list[int], terms: list[Part], span: Span) -> Part:
    """A sum with signs."""
    values = [term.value for term in terms]
    if all(isinstance(value, int) for value in values):
        return Part(sum(sign * value for sign, value in zip(signs, values)), span)
    signed = [value if sign > 0 else _negative(value, term.span) for sign, value, term in zip(signs, values, terms)]
    if len(signed) == 1:
        return Part(signed[0], span)
    if len(signed) == 2 and signs == [1, -1]:
        return _expression("difference", tuple(values), span)
    return _expression("sum", tuple(signed), span)


def _negative(value: s.Index, span: Span) -> s.Index:
    return -value if isinstance(value, int) else s.IndexExpression("negative", (value,), span)


def product_of(factors: list[Part], span: Span) -> Part:
    """A product of one factor or more."""
    values = [factor.value for factor in factors]
    if len(values) == 1:
        return Part(values[0], span)
    if not all(isinstance(value, int) for value in values):
        return _expression("product", tuple(values), span)
    result = 1
    for value in values:
        result *= value
        if result.bit_length() > BIT_LIMIT:
            raise _too_large(span)
    return Part(result, span)


def power_of(base: Part, exponent: Part, span: Span) -> Part:
    """A power; 0^0 is 1."""
    low, high = base.value, exponent.value
    if not isinstance(low, int) or not isinstance(high, int):
        return _expression("power", (low, high), span)
    if high < 0 and abs(low) != 1:
        raise Refusal(error("index-not-integer", "a negative power is no integer", span))
    if abs(low) > 1 and (low.bit_length() - 1) * high > BIT_LIMIT:
        raise _too_large(span)
    if abs(low) == 1:
        high = high % 2
    return Part(low**high, span)


def binomial(top: Part, bottom: Part, span: Span) -> Part:
    """A binomial coefficient: 0 unless 0 <= bottom <= top, the convention of Adem's relations."""
    n, k = top.value, bottom.value
    if not isinstance(n, int) or not isinstance(k, int):
        return _expression("binom", (n, k), span)
    if not 0 <= k <= n:
        return Part(0, span)
    k = min(k, n - k)
    if k > BIT_LIMIT or k * max(n.bit_length() - k.bit_length(), 0) > BIT_LIMIT:  # C(n, k) >= (n/k)^k
        raise _too_large(span)
    value = comb(n, k)
    if value.bit_length() > BIT_LIMIT:
        raise _too_large(span)
    return Part(value, span)
