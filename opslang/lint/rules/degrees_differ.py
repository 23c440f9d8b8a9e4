"""Both sides of a relation have one degree; a class lies in the group it is said to lie in; an operation raises as
it should.
"""

from __future__ import annotations

from opslang.lint.rule import LintRule
from opslang.lint.symbolic.homogeneity import judge

_HEAD = r"\newcommand{\Sq}{\mathrm{Sq}}"
RULE = LintRule(
    name="degrees-differ",
    title="the two sides have different degrees",
    why="An equation is possible in one degree only, and most slips of the pen show in the degree.",
    bad=(
        r"Let $x\in H^n(X)$. Then $\mathrm{Sq}^{2n}(x^2)=(\mathrm{Sq}^{n+1}x)^2$.",
        r"$\mathrm{Sq}^2\mathrm{Sq}^6=\mathrm{Sq}^7\mathrm{Sq}^2$",
        r"$\mathrm{Sq}^i\colon H^n(X)\to H^{n-i}(X)$",
        r"$\mathrm{Sq}^k(xy)=\sum_{i+j=k}\mathrm{Sq}^i x\,\mathrm{Sq}^{k}y$",
    ),
    good=(
        r"Let $x\in H^n(X)$. Then $\mathrm{Sq}^{2n}(x^2)=(\mathrm{Sq}^{n}x)^2$.",
        r"$\mathrm{Sq}^a\mathrm{Sq}^b=\sum_j\binom{b-1-j}{a-2j}\mathrm{Sq}^{a+b-j}\mathrm{Sq}^j$ for $0<a<2b$",
        r"$\mathrm{Sq}^i\colon H^n(X)\to H^{n+i}(X)$",
        r"$\mathrm{Sq}^n x=x^2$",
    ),
    check=judge,
    rank=10,
    source="degrees: Steenrod and Epstein 1962, chapters I and VI; Milnor 1958",
)
