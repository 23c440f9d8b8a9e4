"""A relation with numbers in all its indices, computed."""

from __future__ import annotations

from opslang.lint.context.names import nodes_in
from opslang.lint.model import Finding, Known, Operation, Statement, Sum, Verdict, found
from opslang.lint.numeric.desk import Decision, decide
from opslang.lint.rule import LintRule


def check(statement: Statement, known: Known) -> Verdict | None:
    """Whether a closed relation holds."""
    if statement.kind not in ("relation", "definition", "mapsto") or len(statement.sides) != 2 or statement.unread:
        return None
    left, right = statement.sides
    if not isinstance(left, Sum) or not isinstance(right, Sum) or statement.sign not in ("=", "≡"):
        return None
    if not any(isinstance(node, Operation) for node in nodes_in(statement)):
        return None
    decision = decide(left, right, known)
    if decision.answer == "true":
        return Verdict("true", reason=decision.reason)
    if not decision.certainly_false:
        return Verdict("not-checked", (), decision.special or decision.reason, decision.needed)
    again = decide(left, right, known, why=True)
    return found(_finding(statement, again))


def _finding(statement: Statement, decision: Decision) -> Finding:
    if decision.name in ("degrees-differ", "wrong-page"):
        return Finding("false-relation", "error", decision.reason, statement.at)
    what = "operations" if decision.sort == "operation" else "classes"
    if decision.right == "0":
        message = f"the left side is not 0\nit is {decision.left}"
    else:
        message = f"the two sides are different {what}\nthe right side should be {decision.left}"
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
