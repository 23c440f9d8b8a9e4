"""Declarations: what a statement changes in the scope.  Computes nothing."""

from __future__ import annotations

from opslang.ground.arith import is_prime
from opslang.ground.source import Span
from opslang.ir import tree as ir
from opslang.ir.tree import Class
from opslang.meaning.indices import number
from opslang.meaning.lower import Lowering
from opslang.meaning.scope import Key, Scope, spelled
from opslang.meaning.spaces import coefficient_order, space_value
from opslang.meaning.value import NONE, Value, cls
from opslang.report.diagnostic import Diagnostic, Refusal, error, note, warning
from opslang.syntax import surface as sf

LARGEST_PRIME = 1 << 62
DEFAULT_LIMIT = 1_000_000


def prime(statement: sf.PrimeStatement, scope: Scope) -> list[Diagnostic]:
    """`prime p`."""
    p = statement.value
    if p >= LARGEST_PRIME:
        raise Refusal(error("not-a-prime", f"the prime must be below {LARGEST_PRIME}", statement.span))
    if not is_prime(p):
        raise Refusal(error("not-a-prime", f"{p} is not a prime", statement.span))
    if scope.set_prime(p):
        return [
            note(
                "classes-dropped",
                f"the prime is now {p}: the classes and abbreviations declared so far are dropped",
                statement.span,
            )
        ]
    return []


def space(statement: sf.SpaceStatement, scope: Scope, limit: int = DEFAULT_LIMIT) -> list[Diagnostic]:
    """`space X = …`; `limit` bounds the terms that working out a presentation may take."""
    found: list[Diagnostic] = []
    if isinstance(statement.space, sf.Presentation):
        from opslang.meaning.presentations import presented

        value, found = presented(statement.name, statement.space, scope.prime, limit)
    else:
        value = space_value(statement.space, scope)
    known = scope.spaces.get(statement.name)
    scope.spaces[statement.name] = value
    if known is not None and known != value:
        before = f"was {known.text} and is now {value.text}" if known.text != value.text else "was presented before"
        found.append(warning("redeclared", f"{statement.name} {before}", statement.span))
    return found


def on(statement: sf.OnStatement, scope: Scope) -> list[Diagnostic]:
    """`on X`.  What was declared under the name of a class of the space gives way to it."""
    scope.space = space_value(statement.space, scope)
    scope.lost = False
    here = scope.localised()
    found: list[Diagnostic] = []
    if here is not None and here.vanishing:
        names = ", ".join(spelled(("iota", degree, primes)) for degree, primes in sorted(here.vanishing))
        found.append(note("zero-at-the-prime", f"at the prime {scope.prime} this is 0: {names}", statement.span))
    hidden = [key for key in scope.names if scope.class_of_space(key)]
    for key in hidden:
        del scope.names[key]
    if hidden:
        names = ", ".join(spelled(key) for key in hidden)
        words = f"from here on {names} means what {scope.space.text} calls so, and no longer what was declared before"
        found.append(warning("redeclared", words, statement.span))
    return found


def _free(scope: Scope, key: Key, span: Span) -> None:
    """Refuse a name that the current space gives to a class of its own."""
    if scope.space is not None and scope.class_of_space(key):
        raise Refusal(
            error(
                "name-taken",
                f"{spelled(key)} is a class of the current space, {scope.space.text}",
                span,
                "choose another name",
            )
        )


def declare(statement: sf.DeclareStatement, scope: Scope) -> list[Diagnostic]:
    """`let x, y in H^n(X; G)`."""
    degree = number(statement.degree, statement.span)
    if degree < 1:
        raise Refusal(
            error("degree-range", f"a declared class has degree at least 1, and here it is {degree}", statement.span)
        )
    order = coefficient_order(statement.coefficients, scope.prime)
    found: list[Diagnostic] = []
    values: dict[Key, Value] = {}
    for name in statement.names:
        index = None if name.index is None else number(name.index, name.span)
        key = (name.letter, index, name.primes)
        _free(scope, key, name.span)
        if key in values:
            raise Refusal(error("declared-twice", f"{spelled(key)} stands twice in this declaration", name.span))
        if order is None:
            found.append(
                note(
                    "zero-at-the-prime",
                    f"the coefficients have no {scope.prime}-part, so {spelled(key)} is 0",
                    name.span,
                )
            )
            values[key] = cls(ir.ClassSum((), degree, degree, name.span), NONE)
            continue
        of = Class(name.letter, index, name.primes, degree, order)
        values[key] = cls(ir.Fundamental(of, degree, degree, name.span), frozenset((of,)))
    for key, value in values.items():
        found += _put(scope, key, value, statement)
    return found


def congruence(statement: sf.RelationStatement, scope: Scope) -> None:
    """Refuses a relation modulo another number than the prime."""
    modulus = statement.modulus
    if modulus is None or modulus.value == scope.prime:
        return
    prime = is_prime(modulus.value)
    help = f"write `prime {modulus.value}` on a line before it" if prime else "relations are modulo the prime"
    message = f"the relation is modulo {modulus.value}, and the prime is {scope.prime}"
    raise Refusal(error("modulus", message, modulus.span, help))


def abbreviate(statement: sf.AbbreviateStatement, scope: Scope, lowering: Lowering) -> Value:
    """`let u = …`; the value is put into the scope."""
    name = statement.name
    index = None if name.index is None else number(name.index, name.span)
    _free(scope, (name.letter, index, name.primes), name.span)
    value = lowering.sum(statement.body)
    lowering.diagnostics += _put(scope, (name.letter, index, name.primes), value, statement)
    return value


def _put(
    scope: Scope, key: Key, value: Value, statement: sf.DeclareStatement | sf.AbbreviateStatement
) -> list[Diagnostic]:
    known = scope.names.get(key)
    scope.names[key] = value
    if known is not None and known != value:
        return [
            warning(
                "redeclared",
                f"{spelled(key)} was declared before; from here on it is what this line says",
                statement.span,
            )
        ]
    return []
