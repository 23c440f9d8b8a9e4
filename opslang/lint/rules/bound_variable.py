"""The variable of a sum: bound once, used, and nowhere else."""

from __future__ import annotations

from opslang.lint.model import Finding, Known, Statement, Verdict
from opslang.lint.rule import LintRule
from opslang.lint.symbolic.binding import Misbound, slips
from opslang.lint.symbolic.walk import about_operations

_WORDS = {
    "own-limit": "the summation variable {0} stands in its own limit",
    "shadowed": "the letter {0} is the summation variable, and stands outside the sum as well",
    "unused": "the sum runs over {0}, and {0} does not occur in the summand",
    "unbound": "the letter {0} in the summand is bound by nothing",
}
_HELP = {
    "own-limit": "a limit may hold every letter but the one that runs",
    "shadowed": "take another letter for the summation variable",
    "unused": "put the variable where it belongs",
    "unbound": "it stands nowhere else in the formula",
}


def check(statement: Statement, known: Known) -> Verdict | None:
    """The slips in the bound variables of a statement."""
    if not about_operations(statement, known):
        return None
    found = tuple(_finding(slip) for slip in slips(statement, known))
    return Verdict("finding", found[:1]) if found else None


def _finding(slip: Misbound) -> Finding:
    message = f"{_WORDS[slip.kind].format(slip.letter)}\n{_HELP[slip.kind]}"
    return Finding("bound-variable", "error", message, slip.big.at)


RULE = LintRule(
    name="bound-variable",
    title="a summation variable that leaks, is shadowed, unused, or stands in its own limit",
    why="These slips are visible without any algebra, and make the formula say something else or nothing.",
    bad=(
        r"$\mathrm{Sq}^k(xy)=\sum_{k=0}^{k}\mathrm{Sq}^k x\,\mathrm{Sq}^{k-k}y$",
        r"$\mathrm{Sq}^n(xy)=\sum_{i=0}^{i}\mathrm{Sq}^i x\,\mathrm{Sq}^{n-i}y$",
        r"$\mathrm{Sq}^n(xy)=\sum_{i=0}^{n}\mathrm{Sq}^n x\,\mathrm{Sq}^{n-n}y$",
        r"$\mathrm{Sq}^n(xy)=\sum_{i=0}^{n}\mathrm{Sq}^i x\,\mathrm{Sq}^{n-j}y$",
    ),
    good=(
        r"$\mathrm{Sq}^k(xy)=\sum_{i=0}^{k}\mathrm{Sq}^i x\,\mathrm{Sq}^{k-i}y$",
        r"$\mathrm{Sq}^k(xy)=\sum_{i+j=k}\mathrm{Sq}^i x\,\mathrm{Sq}^{j}y$",
        r"$\mathrm{Sq}=\sum_{i\ge0}\mathrm{Sq}^i$",
    ),
    check=check,
    rank=5,
    source="common practice",
)
