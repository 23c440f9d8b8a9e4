"""A relation with symbols that fails for small values."""

from __future__ import annotations

from opslang.lint.rule import LintRule
from opslang.lint.templates.judge import relation

RULE = LintRule(
    name="false-for-small-values",
    title="a relation with symbols that fails for small values",
    why="One counterexample disproves a relation; that none was found for small values is said as such, and no more.",
    bad=(
        r"$\mathrm{Sq}^{2n}\mathrm{Sq}^n=0$ for all $n\ge1$",
        r"$\mathrm{Sq}^3\mathrm{Sq}^{4n+2}=\mathrm{Sq}^{4n+4}\mathrm{Sq}^1$",
    ),
    good=(
        r"$\mathrm{Sq}^{2n-1}\mathrm{Sq}^n=0$ for all $n\ge1$",
        r"For $n$ even, $\mathrm{Sq}^1\mathrm{Sq}^n=\mathrm{Sq}^{n+1}$.",
    ),
    check=relation,
    rank=40,
    source="computed",
)
