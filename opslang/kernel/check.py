"""The kernel: replays a derivation step by step and never searches.

It trusts `Law.instance` and the constructors of terms, and nothing else: not `match`, not the engine, not what the
steps say.  A valid derivation need not be finished; whether its end is canonical is a second question.
"""

from __future__ import annotations

from collections.abc import Mapping

from opslang.ir.term import TooMany, factor_at, monomial_at, quotient, replace
from opslang.laws.derivation import Derivation
from opslang.laws.law import Law


class Rejected(Exception):
    """A derivation with a step that does not follow; the message says which."""


def check(derivation: Derivation, laws: Mapping[str, Law]) -> None:
    """Replay a derivation; Rejected at the first step that is no instance of its law at its place with its result."""
    current = derivation.start
    for number, step in enumerate(derivation.steps, start=1):
        if step.law not in laws:
            raise Rejected(f"step {number}: there is no law {step.law}")
        if step.bindings.get("p") != current.prime:
            raise Rejected(f"step {number}: {step.law} is used at another prime")
        try:
            equation = laws[step.law].instance(**step.bindings)
            factor, exponent = factor_at(current, step.path)
            room = monomial_at(current, step.path)
        except (ValueError, TypeError, AttributeError, IndexError, KeyError, AssertionError, TooMany) as reason:
            raise Rejected(f"step {number}: {step.law} has no such instance or place: {reason}") from reason
        if factor != equation.factor or exponent < equation.power or quotient(room, equation.lhs) is None:
            raise Rejected(f"step {number}: {step.law} does not apply there")
        current = replace(current, step.path, equation.power, equation.rhs, equation.part)
        if current != step.after:
            raise Rejected(f"step {number}: {step.law} gives another result")
