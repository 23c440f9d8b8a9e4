"""The sign in the derivation formula of the Bockstein at odd primes."""

from __future__ import annotations

import re

from attrs import evolve

from opslang.lint.context.names import names_of
from opslang.lint.model import ClassFact, Finding, Group, Known, Operation, Statement, Sum, Verdict
from opslang.lint.numeric.desk import decide
from opslang.lint.rule import LintRule
from opslang.lint.symbolic.polynomial import Polynomial

_PARITY = re.compile(r"\b(odd|even)\b", re.IGNORECASE)
_DEGREES = {"odd": ((1, 1),), "even": ((2, 2),), "": ((1, 1), (1, 2), (2, 1), (2, 2))}
PRIME = 3


def check(statement: Statement, known: Known) -> Verdict | None:
    """β(xy) = β(x) y ± x β(y), x and y of any degree or of the parity that the words before it say."""
    if statement.kind != "relation" or len(statement.sides) != 2 or statement.unread or known.prime == 2:
        return None
    left, right = statement.sides
    if not isinstance(left, Sum) or not isinstance(right, Sum) or len(right.terms) != 2:
        return None
    names = _product(left)
    if names is None or any(known.fact(name) is not None for name in names_of(left)):
        return None
    if known.prime is None and known.conventions.get("prime") != "odd":
        return None
    said = [found.group().lower() for found in _PARITY.finditer(known.lead)]
    answers = []
    for degrees in _DEGREES[said[-1] if said else ""]:
        facts = {name: ClassFact(Polynomial.of(degree), 1) for name, degree in zip(names, degrees)}
        values = {f"|{name}|": degree for name, degree in zip(names, degrees)}
        here = evolve(known, prime=known.prime or PRIME, classes={**known.classes, **facts}, space="", conventions={})
        answers.append((degrees, decide(left, right, here, values)))
    if all(answer.answer == "true" for _, answer in answers):
        return Verdict("agrees", reason="agrees for degrees 1 and 2")
    wrong = next(((degrees, answer) for degrees, answer in answers if answer.certainly_false), None)
    if wrong is None:
        return None
    (first, second), answer = wrong
    message = (
        f"the sign is wrong for |{names[0]}| = {first}, |{names[1]}| = {second}\nthere the right side should "
        f"be {answer.left}; "
        f"beta(xy) = beta(x) y + (-1)^|x| x beta(y)"
    )
    return Verdict("finding", (Finding("bockstein-sign", "error", message, statement.at),))


def _product(side: Sum) -> tuple[str, str] | None:
    """The two classes in β(xy)."""
    factors = side.terms[0][1].factors if len(side.terms) == 1 else ()
    if len(factors) != 2 or not isinstance(factors[0], Operation) or not isinstance(factors[1], Group):
        return None
    operation = factors[0]
    if operation.head != "beta" or operation.upper or (operation.lower is not None and operation.lower.number != 1):
        return None
    body = factors[1].body
    names = names_of(body)
    if len(body.terms) != 1 or len(names) != 2 or len(body.terms[0][1].factors) != 2 or names[0] == names[1]:
        return None
    return names[0].spelling, names[1].spelling


RULE = LintRule(
    name="bockstein-sign",
    title="the Bockstein of a product has the wrong sign",
    why="At an odd prime beta(xy) = beta(x) y + (-1)^|x| x beta(y); the sign is lost where it is copied from "
    "the prime 2.",
    bad=(r"Let $p$ be an odd prime. Then $\beta(xy)=\beta(x)y+x\beta(y)$.",),
    good=(
        r"Let $p$ be an odd prime. Then $\beta(xy)=\beta(x)y+(-1)^{|x|}x\beta(y)$.",
        r"Let $p$ be an odd prime. If $x$ and $y$ have odd degree, then $\beta(xy)=\beta(x)y-x\beta(y)$.",
    ),
    check=check,
    rank=15,
    source="Steenrod and Epstein 1962, chapter VI",
)
