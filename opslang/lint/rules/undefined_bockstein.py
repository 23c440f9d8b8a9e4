"""A Bockstein of higher order on a class on which it is not defined."""

from __future__ import annotations

from opslang.lint.context.names import nodes_in
from opslang.lint.model import ClassName, Finding, Known, Operation, Statement, Sum, Verdict
from opslang.lint.numeric.desk import decide
from opslang.lint.rule import LintRule
from opslang.lint.symbolic.values import polynomial_of


def check(statement: Statement, known: Known) -> Verdict | None:
    """β_k, k ≥ 2, on classes whose coefficients are known."""
    high = [node for node in nodes_in(statement) if isinstance(node, Operation) and _is_high(node)]
    if not high or known.conventions.get("hypothesis"):
        return None
    for side in statement.sides:
        if isinstance(side, Sum):
            trouble = _computed(side, known) or (_symbolic(side, known) if statement.kind == "membership" else "")
            if trouble:
                return Verdict("finding", (Finding("undefined-bockstein", "error", trouble, side.at),))
    return None


def _is_high(operation: Operation) -> bool:
    if operation.head != "beta" or operation.lower is None:
        return False
    number = operation.lower.number
    return number is None or number > 1


def _computed(side: Sum, known: Known) -> str:
    names = [name for name in _names(side) if name.letter]
    facts = [known.fact(name) or known.classes.get(f"{name.spelling}^{name.label}") for name in names]
    if not names or any(fact is None or (fact.order is None and not known.rules) for fact in facts):
        return ""
    decision = decide(side, side, known)
    if decision.name != "bockstein-undefined" or decision.special:
        return ""
    return f"this Bockstein is not defined here\n{decision.reason}"


def _symbolic(side: Sum, known: Known) -> str:
    """β_n on a class with coefficients Z/2^i, where i is no n."""
    factors = side.terms[0][1].factors if len(side.terms) == 1 else ()
    if len(factors) != 2:
        return ""
    operation, name = factors
    if (
        not isinstance(operation, Operation)
        or not isinstance(name, ClassName)
        or operation.lower is None
        or operation.bound
    ):
        return ""
    fact = known.fact(name)
    order = polynomial_of(operation.lower)
    if fact is None or not fact.order_text or order is None or str(order) == fact.order_text:
        return ""
    degree = fact.degree
    if degree is None or order != degree:
        return ""
    return (
        f"the order of the Bockstein is that of the coefficients, {fact.order_text}\nas written it is the "
        f"degree of the class"
    )


def _names(side: Sum) -> list[ClassName]:
    from opslang.lint.context.names import names_of

    return names_of(side)


_HEAD = r"\newcommand{\Sq}{\mathrm{Sq}}"
RULE = LintRule(
    name="undefined-bockstein",
    title="a Bockstein where it is not defined",
    why=(
        "The Bockstein of order k is defined on classes on which those of lower order vanish: on the reduction "
        "of a Z/p^k class, "
        "but not on any mod p class."
    ),
    bad=(r"Let $x\in H^2(X;\mathbb{Z}/2)$. Then $\beta_2x\in H^3(X;\mathbb{Z}/2)$.",),
    good=(
        r"Let $z\in H^2(X;\mathbb{Z}/4)$. Then $\beta_2z\in H^3(X;\mathbb{Z}/2)$.",
        r"Where $\beta_2x$ is defined, it is a class of degree $3$.",
    ),
    check=check,
    rank=20,
    source="Browder 1961; May 1970, section 6",
)
