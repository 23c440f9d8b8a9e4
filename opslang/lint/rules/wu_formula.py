"""Wu's formula with symbols: binomial, indices, limits."""

from __future__ import annotations

from opslang.lint.rule import LintRule
from opslang.lint.templates.wu import judge

_CLASSES = r"Let $w_i=w_i(E)$ be the Stiefel--Whitney classes of a real vector bundle. "
RULE = LintRule(
    name="wu-formula",
    title="Wu's formula with a wrong binomial, index or limit",
    why="Wu's formula is quoted often and its binomial is easily misremembered.",
    bad=(_CLASSES + r"$\mathrm{Sq}^k(w_m)=\sum_{t=0}^{k}\binom{m-k+t}{t}w_{k-t}w_{m+t}$ for $0<k<m$",),
    good=(
        _CLASSES + r"$\mathrm{Sq}^k(w_m)=\sum_{t=0}^{k}\binom{m-k+t-1}{t}w_{k-t}w_{m+t}$ for $0<k<m$",
        _CLASSES + r"$\mathrm{Sq}^1(w_m)=w_1w_m+(m-1)w_{m+1}$",
    ),
    check=judge,
    rank=20,
    source="Wu 1950; Milnor and Stasheff 1974, problem 8-A",
)
