"""A relation with numbers in all its indices, computed."""

from __future__ import annotations

from attrs import evolve

from opslang.lint.context.names import nodes_in
from opslang.lint.model import (
    Call,
    ClassName,
    Finding,
    Known,
    Operation,
    Product,
    Statement,
    Sum,
    Verdict,
    found,
)
from opslang.lint.numeric.bundles import DUAL
from opslang.lint.numeric.desk import Decision, decide
from opslang.lint.numeric.rules_given import transgresses
from opslang.lint.rule import LintRule
from opslang.lint.symbolic.values import polynomial_of

ODD_PRIMES = (3, 5)
STABLE = (8, 9, 11)


def check(statement: Statement, known: Known) -> Verdict | None:
    """Whether a closed relation holds."""
    sides = _sides(statement, known)
    if sides is None:
        return None
    left, right = sides
    decision = decide(left, right, known)
    if known.prime is None and known.conventions.get("prime") == "odd":
        return _at_odd_primes(statement, left, right, known)
    if decision.answer == "unknown" and known.rules:
        tried = _stable(statement, left, right, known)
        return tried or Verdict("not-checked", (), decision.reason, decision.needed)
    if decision.answer == "true":
        return Verdict("true", reason=decision.reason)
    if not decision.certainly_false:
        return Verdict("not-checked", (), decision.special or decision.reason, decision.needed)
    if known.explain:
        decision = decide(left, right, known, why=True)
    return found(_finding(statement, decision))


def _sides(statement: Statement, known: Known) -> tuple[Sum, Sum] | None:
    """The sides of a relation that can be computed; a row of a differential gets its differential."""
    if len(statement.sides) != 2 or statement.unread:
        return None
    left, right = statement.sides
    if not isinstance(left, Sum) or not isinstance(right, Sum):
        return None
    nodes = list(nodes_in(statement))
    if statement.kind == "mapsto":
        letters = {transgresses(rule) for rule in known.rules} - {""}
        if len(letters) != 1 or not any(isinstance(node, ClassName) and node.letter == "iota" for node in nodes):
            return None
        letter = letters.pop()
        call = Call(letter, letter, (left,), at=left.at)
        return Sum(((1, Product((call,), ("",), left.at)),), left.at), right
    if statement.kind not in ("relation", "definition") or statement.sign not in ("=", "≡"):
        return None
    if any(isinstance(node, Operation) for node in nodes):
        return left, right
    names = {node.letter for node in nodes if isinstance(node, ClassName)}
    characteristic = "w" in names and names & {"v", DUAL} and names <= set(known.families) | {DUAL}
    differential = known.rules and any(isinstance(node, Call) for node in nodes)
    return (left, right) if characteristic or differential else None


def _at_odd_primes(statement: Statement, left: Sum, right: Sum, known: Known) -> Verdict:
    """A relation at any odd prime, tried at some."""
    answers = [(p, decide(left, right, evolve(known, prime=p), {"p": p})) for p in ODD_PRIMES]
    if all(answer.answer == "true" for _, answer in answers):
        return Verdict("agrees", reason="agrees for p = " + ", ".join(str(p) for p, _ in answers))
    if all(answer.certainly_false for _, answer in answers):
        return found(_finding(statement, answers[0][1], f"at p = {answers[0][0]} "))
    first = next((answer for _, answer in answers if answer.answer != "true"), answers[0][1])
    return Verdict("not-checked", (), first.special or first.reason or "it holds at some primes only", first.needed)


def _stable(statement: Statement, left: Sum, right: Sum, known: Known) -> Verdict | None:
    """A relation with one symbol for a degree, tried on large values: those of the stable range."""
    symbols: set[str] = set()
    for node in nodes_in(statement):
        for index in node.index if isinstance(node, ClassName) else ():
            degree = polynomial_of(index)
            symbols |= degree.symbols if degree is not None else set()
    if len(symbols) != 1:
        return None
    name = symbols.pop()
    answers = [(n, decide(left, right, known, {name: n})) for n in STABLE]
    if all(answer.answer == "true" for _, answer in answers):
        return Verdict("agrees", reason=f"agrees for {name} = " + ", ".join(str(n) for n, _ in answers))
    if all(answer.certainly_false for _, answer in answers):
        return found(_finding(statement, answers[0][1], f"for {name} = {answers[0][0]} "))
    first = next(answer for _, answer in answers if answer.answer != "true")
    return Verdict("not-checked", (), first.special or first.reason or "it holds for some values only", first.needed)


def _finding(statement: Statement, decision: Decision, where: str = "") -> Finding:
    if decision.name in ("degrees-differ", "wrong-page"):
        return Finding("false-relation", "error", where + decision.reason, statement.at)
    what = "operations" if decision.sort == "operation" else "classes"
    if decision.right == "0":
        message = f"{where}the left side is not 0\nit is {decision.left}"
    else:
        message = f"{where}the two sides are different {what}\nthe right side should be {decision.left}"
        if decision.right:
            message += f"; as written it is {decision.right}"
    return Finding("false-relation", "error", message, statement.at, derivation=decision.derivation)


RULE = LintRule(
    name="false-relation",
    title="the two sides are not equal",
    why=(
        "Both sides are brought to their canonical form, and the forms differ.  Classes are as general as the draft "
        "says, so a relation that holds only for special classes is false until that is said."
    ),
    bad=(
        r"$\mathrm{Sq}^2\mathrm{Sq}^3=\mathrm{Sq}^5$",
        r"Let $x\in H^2(X;\mathbb{Z}/2)$. Then $\mathrm{Sq}^2\mathrm{Sq}^1x=0$.",
    ),
    good=(
        r"$\mathrm{Sq}^2\mathrm{Sq}^3=\mathrm{Sq}^5+\mathrm{Sq}^4\mathrm{Sq}^1$",
        r"Let $x\in H^2(X;\mathbb{Z}/2)$. Then $\mathrm{Sq}^3\mathrm{Sq}^1x=(\mathrm{Sq}^1x)^2$.",
        r"On the class $x$ of the space $Y$ we have $\mathrm{Sq}^2x=0$.",
    ),
    check=check,
    rank=30,
    source="Adem 1952; Cartan 1950; Serre 1953",
)
