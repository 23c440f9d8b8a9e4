"""Integer expressions as numbers and as polynomials.  Knows the shapes of indices, no operations.

What no polynomial says (a floor, a binomial, 2^j, |x|) becomes a symbol of its own, spelled in one way.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from fractions import Fraction
from math import ceil, comb, factorial, floor

from opslang.lint.model import ClassName, Group, Index, Sum, spelled
from opslang.lint.symbolic.polynomial import Polynomial, Value

Length = Callable[[object], "Polynomial | None"]
LARGEST = 10**6
MOST_POWER = 6


# --- numbers ------------------------------------------------------------------------------------


def value_of(index: Index, values: Mapping[str, int]) -> Value | None:
    """The value of an integer expression; None where a symbol has none, or something is no number."""
    kind, parts = index.kind, index.parts
    if kind == "number":
        return index.number
    if kind == "name":
        return values.get(str(parts[0]))
    if kind in ("length", "dots", "sigma"):
        return values.get(f"|{_of_class(parts[0])}|") if kind == "length" else None
    numbers: list[Value] = []
    for part in parts:
        if isinstance(part, Index):
            number = value_of(part, values)
            if number is None:
                return None
            numbers.append(number)
    return _combined(kind, numbers, parts)


def _of_class(body: object) -> str:
    """The spelling of a lone class between bars; an index as it is."""
    if isinstance(body, Index):
        return spelled(body)
    if isinstance(body, Sum) and len(body.terms) == 1 and len(body.terms[0][1].factors) == 1:
        factor = body.terms[0][1].factors[0]
        if isinstance(factor, Group):
            return _of_class(factor.body)
        return factor.spelling if isinstance(factor, ClassName) else ""
    return ""


def _combined(kind: str, numbers: list[Value], parts: tuple[object, ...]) -> Value | None:
    if kind == "sum":
        return _whole(sum(numbers))
    if kind == "negative":
        return -numbers[0]
    if kind == "product":
        product: Value = 1
        for number in numbers:
            product = product * number
        return _whole(product) if -LARGEST < product < LARGEST else None
    if kind == "power":
        base, exponent = numbers
        if isinstance(exponent, Fraction) or exponent < 0 or exponent > 60 or not -100 <= base <= 100:
            return None
        raised = Fraction(base) ** int(exponent)
        return _whole(raised)
    if kind == "quotient":
        return _whole(Fraction(numbers[0]) / Fraction(numbers[1])) if numbers[1] else None
    if kind in ("floor", "ceiling"):
        return floor(numbers[0]) if kind == "floor" else ceil(numbers[0])
    if kind == "binom":
        above, below = numbers
        if isinstance(above, Fraction) or isinstance(below, Fraction) or above > 2000:
            return None
        return comb(above, below) if 0 <= below <= above else 0
    if kind == "call" and parts[0] == "factorial" and numbers and isinstance(numbers[0], int) and 0 <= numbers[0] < 200:
        return factorial(numbers[0])
    return None


def _whole(value: Value) -> Value:
    return value.numerator if isinstance(value, Fraction) and value.denominator == 1 else value


def compare(sign: str, left: Index, right: Index, values: Mapping[str, int]) -> bool | None:
    """Whether a comparison holds at some numbers; None where it cannot be told."""
    a, b = value_of(left, values), value_of(right, values)
    if a is None or b is None:
        return None
    return {"<": a < b, ">": a > b, "≤": a <= b, "≥": a >= b, "=": a == b, "≠": a != b}.get(sign)


# --- polynomials --------------------------------------------------------------------------------


def polynomial_of(index: Index, length: Length | None = None) -> Polynomial | None:
    """An integer expression as a polynomial; `length` says what |…| comes to.  None where it holds an ellipsis or an
    unknown length.
    """
    kind, parts = index.kind, index.parts
    if kind == "number":
        return Polynomial.of(index.number or 0)
    if kind == "name":
        return Polynomial.symbol(str(parts[0]))
    if kind in ("dots", "sigma"):
        return None
    if kind == "length":
        return length(parts[0]) if length is not None else None
    inner = [polynomial_of(part, length) for part in parts if isinstance(part, Index)]
    if any(part is None for part in inner):
        return None
    return _composed(kind, [part for part in inner if part is not None], index)


def _composed(kind: str, inner: list[Polynomial], index: Index) -> Polynomial | None:
    if kind == "sum":
        total = Polynomial()
        for part in inner:
            total = total + part
        return total
    if kind == "negative":
        return -inner[0]
    if kind == "product":
        product = Polynomial.of(1)
        for part in inner:
            product = product * part
        return product
    if kind == "power":
        return power(inner[0], inner[1])
    if kind == "quotient":
        below = inner[1].constant
        return inner[0].scaled(Fraction(1) / Fraction(below)) if below else None
    if kind in ("floor", "ceiling"):
        return _rounded(kind, inner[0])
    constants = [part.constant for part in inner]
    if all(constant is not None for constant in constants):
        value = value_of(index, {})
        return None if value is None else Polynomial.of(value)
    return Polynomial.symbol(f"{kind}({', '.join(str(part) for part in inner)})")


def _rounded(kind: str, inner: Polynomial) -> Polynomial:
    if inner.constant is not None:
        return Polynomial.of(floor(inner.constant) if kind == "floor" else ceil(inner.constant))
    if not any(isinstance(c, Fraction) for _, c in inner.terms):
        return inner
    return Polynomial.symbol(f"{kind}({inner})")


def power(base: Polynomial, exponent: Polynomial) -> Polynomial | None:
    """A power; 2^{j-1} is half of the symbol 2^{j}."""
    fixed = exponent.constant
    if fixed is not None:
        if isinstance(fixed, Fraction) or fixed < 0 or (fixed > MOST_POWER and base.constant is None):
            return Polynomial.symbol(f"({base})^{{{exponent}}}")
        if fixed > 64:
            return None
        result = Polynomial.of(1)
        for _ in range(fixed):
            result = result * base
        return result
    shift = next((c for monomial, c in exponent.terms if not monomial), 0)
    moving = exponent - Polynomial.of(shift)
    number = base.constant
    if number is not None and number > 0 and isinstance(shift, int) and abs(shift) < 40:
        return Polynomial.symbol(f"{number}^{{{moving}}}").scaled(Fraction(number) ** shift)
    if number is None and base.terms and len(base.terms) == 1 and len(base.terms[0][0]) == 1 and isinstance(shift, int):
        symbol = Polynomial.symbol(f"{base}^{{{moving}}}")
        if 0 <= shift <= MOST_POWER:
            for _ in range(shift):
                symbol = symbol * base
            return symbol
    return Polynomial.symbol(f"({base})^{{{exponent}}}")
