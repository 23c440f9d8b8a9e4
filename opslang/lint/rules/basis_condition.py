"""Sets of words described by a condition: {Sq^I iota_n | I admissible, e(I) < n}."""

from __future__ import annotations

import re

from opslang.lint.context.names import nodes_in
from opslang.lint.context.spaces import written
from opslang.lint.model import ClassName, Condition, Finding, Index, Known, Operation, Statement, Verdict
from opslang.lint.rule import LintRule
from opslang.lint.symbolic.polynomial import Polynomial
from opslang.lint.symbolic.values import polynomial_of

_ALGEBRA = re.compile(r"\b(?:polynomial|algebra|ring|generat\w+)\b", re.IGNORECASE)


def check(statement: Statement, known: Known) -> Verdict | None:
    """The conditions of a set of words on a class."""
    if not statement.in_set or not statement.conditions:
        return None
    nodes = list(nodes_in(statement))
    words = [node for node in nodes if isinstance(node, Operation) and node.head == "Sq" and len(node.upper) == 1]
    names = [node for node in nodes if isinstance(node, ClassName)]
    if len(words) != 1 or words[0].upper[0].kind != "name":
        return None
    multi = str(words[0].upper[0].parts[0])
    findings = []
    for condition in statement.conditions:
        findings += _admissible(condition, multi)
        if names and _is_algebra(statement, known):
            findings += _excess(condition, multi)
    if findings:
        return Verdict("finding", tuple(findings))
    return Verdict("consistent", reason="the conditions are those of a basis")


def _is_algebra(statement: Statement, known: Known) -> bool:
    """Whether the set generates an algebra, by its bracket or by the words before it."""
    plain = written(statement.formula.tokens) if statement.formula is not None else ""
    if re.search(r"F_\{?2\}?\[", plain):
        return True
    return bool(_ALGEBRA.search(known.lead)) and "module" not in known.lead.lower()


def _admissible(condition: Condition, multi: str) -> list[Finding]:
    """I_j > 2 I_{j+1} or I_j ≥ I_{j+1} where I_j ≥ 2 I_{j+1} is meant."""
    left, right = condition.left, condition.right
    if condition.sign not in (">", "<", "≥", "≤") or left is None or right is None:
        return []
    if condition.sign in ("<", "≤"):
        left, right = right, left
    larger, smaller = polynomial_of(left), polynomial_of(right)
    if larger is None or smaller is None or len(larger.symbols) != 1 or len(smaller.symbols) != 1:
        return []
    first, second = next(iter(larger.symbols)), next(iter(smaller.symbols))
    follows = first.startswith(multi + "_") and second == first + "+1" and larger == Polynomial.symbol(first)
    bound = smaller.linear_in(second)
    if not follows or bound is None or bound[0].constant not in (1, 2):
        return []
    if condition.sign in ("≥", "≤") and smaller == Polynomial.symbol(second).scaled(2):
        return []
    message = f"admissible is {first} ≥ 2 {second}, with equality\nSq^2 Sq^1 is admissible, Sq^1 Sq^1 is not"
    return [Finding("basis-condition", "error", message, condition.at)]


def _excess(condition: Condition, multi: str) -> list[Finding]:
    """Excess ≤ n where < is meant."""
    if condition.sign != "≤" or condition.left is None or not _is_excess(condition.left, multi):
        return []
    message = (
        "the excess must be less than the degree\na word of excess equal to the degree gives a square, "
        "which is no generator"
    )
    return [Finding("basis-condition", "error", message, condition.at)]


def _is_excess(index: Index, multi: str) -> bool:
    if index.kind == "call":
        return (
            index.parts[0] == "e"
            and len(index.parts) == 2
            and isinstance(index.parts[1], Index)
            and index.parts[1].parts[0] == multi
        )
    value = polynomial_of(index)
    if value is None:
        return False
    terms = dict(value.terms)
    total = terms.get((f"{multi}_+",)) == -1 or terms.get((f"|{multi}|",)) == -1
    return terms.get((f"{multi}_1",)) == 2 and total


_HEAD = r"\newcommand{\Sq}{\mathrm{Sq}}"
RULE = LintRule(
    name="basis-condition",
    title="the condition of a basis has the wrong sign",
    why=(
        "Admissible means I_j ≥ 2 I_{j+1}.  The generators of the algebra H^*(K(Z/2, n)) are the admissible "
        "words of excess less than "
        "n; excess n gives squares (a module has excess at most n)."
    ),
    bad=(
        _HEAD + r"It is $\mathbb{F}_2[\Sq^I\iota_q\mid I_j\ge2I_{j+1},\ 2I_1-I_+\le q]$.",
        _HEAD + r"A basis is $\{\Sq^I\mid I_j>2I_{j+1}\}$.",
    ),
    good=(
        _HEAD + r"It is $\mathbb{F}_2[\Sq^I\iota_q\mid I_j\ge2I_{j+1},\ 2I_1-I_+<q]$.",
        _HEAD + r"A basis of the module is $\{\Sq^I\iota_q\mid I\text{ admissible},\ e(I)\le q\}$.",
    ),
    check=check,
    rank=35,
    source="Serre 1953; Steenrod and Epstein 1962, chapter II",
)
