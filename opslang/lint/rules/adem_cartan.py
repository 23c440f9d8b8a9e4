"""The relations of Adem and the formula of Cartan, as they are written with symbols: index, binomial, limits, range."""

from __future__ import annotations

from opslang.lint.rule import LintRule
from opslang.lint.templates.judge import template

RULE = LintRule(
    name="adem-cartan",
    title="a general relation with a wrong index, binomial, limit or without its range",
    why="The general relations are copied from paper to paper, and a slip in an index is copied with them.",
    bad=(
        r"$\mathrm{Sq}^a\mathrm{Sq}^b=\sum_{j=0}^{\lfloor a/2\rfloor}\binom{b-j}{a-2j}\mathrm{Sq}^{a+b-j}\mathrm{Sq}^j$"
        r" for $0<a<2b$",
        r"$\mathrm{Sq}^a\mathrm{Sq}^b=\sum_{j}{b-1-j \choose a-2j}\mathrm{Sq}^{a+b-j}\mathrm{Sq}^j$",
        r"$\mathrm{Sq}^k(xy)=\sum_{i=1}^{k}\mathrm{Sq}^i x\,\mathrm{Sq}^{k-i}y$",
    ),
    good=(
        r"$\mathrm{Sq}^a\mathrm{Sq}^b=\sum_{j}{b-1-j \choose a-2j}\mathrm{Sq}^{a+b-j}\mathrm{Sq}^j$ for $0<a<2b$",
        r"$\mathrm{Sq}^k(xy)=\sum_{i+j=k}\mathrm{Sq}^i x\,\mathrm{Sq}^{j}y$",
    ),
    check=template,
    rank=20,
    source="Adem 1952; Cartan 1950; Steenrod and Epstein 1962, chapters I and VI",
    also=("adem-relation", "cartan-formula", "range-missing"),
)
