"""Single operations, from surface to values: letters, multi-indices, Bocksteins, primitives.

A *marker* is what is not an element of the algebra: a total operation, or beta_k with k >= 2.  It may only be
applied to a class.
"""

from __future__ import annotations

from attrs import frozen

from opslang.ground.grading import token_degree
from opslang.ground.source import Span
from opslang.ir import tree as ir
from opslang.meaning.indices import MOST_BITS, bounded, number
from opslang.meaning.value import Value, operation
from opslang.report.diagnostic import Refusal, error
from opslang.syntax import surface as sf


@frozen
class Marker:
    """A total operation (order 0) or beta_order; `span` is where it stands."""

    order: int
    span: Span

    @property
    def name(self) -> str:
        """What it is, in words."""
        return f"beta_{self.order}" if self.order else "a total operation"


def letter(factor: sf.Operation | sf.Bockstein | sf.Milnor, prime: int) -> Value | Marker:
    """The value of one operation as written."""
    if isinstance(factor, sf.Operation):
        return _squares_or_powers(factor, prime)
    if isinstance(factor, sf.Milnor):
        return _primitive(factor, prime)
    order = 1 if factor.order is None else number(factor.order, factor.span)
    if order < 1:
        raise Refusal(error("index-range", f"beta_k needs k >= 1, and here k is {order}", factor.span))
    if order > 1:
        return Marker(order, factor.span)
    return word_value((1,) if prime == 2 else (0,), prime, factor.span)


def index_meant(last: tuple[Value | Marker, Span], n: int, span: Span, text: str) -> None:
    """Refuse a total operation on a number above 1: `Sq(2)` can only be meant for Sq^2."""
    value, at = last
    if type(value) is Marker and not value.order and n > 1:
        head = text[at[0] : at[1]]
        mend = f"{head}^{n}"
        raise Refusal(
            error("index-place", f"the index of {head} stands above, behind ^", (at[0], span[1]), f"write {mend}", mend)
        )


def word_applied(pending: list[tuple[Value | Marker, Span]], argument: Value, span: Span) -> Value | None:
    """Letters applied to a class, run together into one word; None where the pending operations are not all words.

    Most of a script is this, so it takes the straight way.
    """
    if not pending:
        return argument
    word: ir.Word = ()
    degree = 0
    for value, _ in pending:
        tree = value.tree if type(value) is Value else None
        if type(tree) is not ir.Composite:
            return None
        word += tree.word
        degree += tree.degree
    top = degree + argument.top
    if top.bit_length() > MOST_BITS:
        return None
    reached = None if argument.degree is None else degree + argument.degree
    applied = ir.Apply(ir.Composite(word, degree, span), argument.cls, reached, top, span)
    return Value("class", reached, top, applied, argument.classes)


def word_value(word: ir.Word, prime: int, span: Span) -> Value:
    """A word of letters."""
    degree = sum([token_degree(token, prime) for token in word])
    return operation(ir.Composite(word, degree, span), degree)


_SEEN: dict[tuple[int, str, tuple[sf.Index, ...]], Value] = {}
"""Words met before: scripts say the same few letters over and over."""
_MOST_SEEN = 1 << 12


def _squares_or_powers(factor: sf.Operation, prime: int) -> Value | Marker:
    head = factor.head
    key = (prime, head, factor.indices)
    seen = _SEEN.get(key)
    if seen is not None:
        return seen
    value = _read_squares_or_powers(factor, head, prime)
    if isinstance(value, Value):
        if len(_SEEN) >= _MOST_SEEN:
            _SEEN.clear()
        _SEEN[key] = value
    return value


def _read_squares_or_powers(factor: sf.Operation, head: str, prime: int) -> Value | Marker:
    if head == "Sq" and prime != 2:
        raise Refusal(
            error(
                "prime-of-operation",
                f"Sq is an operation at the prime 2, and the prime is {prime}",
                factor.span,
                "write P^i or beta",
            )
        )
    if head == "P" and prime == 2:
        what = "P^i is an operation at odd primes, and the prime is 2"
        if not factor.indices:
            what = "the total power P is for odd primes, and the prime is 2; Pontryagin squares are not yet supported"
        raise Refusal(
            error("prime-of-operation", what, factor.span, "write Sq^i, or choose an odd prime with `prime 3`")
        )
    if not factor.indices:
        return Marker(0, factor.span)
    indices = [number(index, factor.span) for index in factor.indices]
    degree = sum([index if prime == 2 else 2 * index * (prime - 1) for index in indices])
    if any(index < 0 for index in indices):
        return operation(ir.OpSum((), degree, factor.span), max(degree, 0))
    word = tuple([index for index in indices if index])
    return operation(ir.Composite(word, degree, factor.span), degree)


def _primitive(factor: sf.Milnor, prime: int) -> Value:
    k = number(factor.index, factor.span)
    if k < 0:
        raise Refusal(error("index-range", f"Q_k needs k >= 0, and here k is {k}", factor.span))
    if k * prime.bit_length() > 1_900:
        raise Refusal(error("index-too-large", f"Q_{k} has a degree of more than 1,900 bits", factor.span))
    degree = bounded(2 ** (k + 1) - 1 if prime == 2 else 2 * prime**k - 1, factor.span)
    return operation(ir.MilnorQ(k, degree, factor.span), degree)
