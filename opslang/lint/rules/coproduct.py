"""The coproduct of the Steenrod algebra: Sq^n goes to the sum of all Sq^i ⊗ Sq^j with i + j = n."""

from __future__ import annotations

from collections import Counter

from opslang.lint.model import Finding, Known, Number, Operation, Product, Statement, Sum, Verdict, found
from opslang.lint.rule import LintRule


def check(statement: Statement, known: Known) -> Verdict | None:
    """A coproduct written out, with numbers."""
    if statement.kind not in ("mapsto", "relation") or statement.unread or len(statement.sides) != 2:
        return None
    left, right = statement.sides
    if not isinstance(left, Sum) or not isinstance(right, Sum):
        return None
    n = _single(left)
    pairs = [_pair(product) for _, product in right.terms]
    if n is None or any(pair is None for pair in pairs) or len(pairs) < 2:
        return None
    written = Counter(pair for pair in pairs if pair is not None)
    wanted = Counter((i, n - i) for i in range(n + 1))
    odd = {pair for pair in written | wanted if (written[pair] - wanted[pair]) % 2}
    if not odd:
        return Verdict("true", reason="Cartan's formula")
    missing = [f"Sq^{i} ⊗ Sq^{j}" for i, j in sorted(odd, reverse=True) if (i, j) in wanted]
    extra = [f"Sq^{i} ⊗ Sq^{j}" for i, j in sorted(odd, reverse=True) if (i, j) not in wanted]
    words = [f"missing: {', '.join(missing)}"] if missing else []
    words += [f"does not belong: {', '.join(extra)}"] if extra else []
    return found(
        Finding("coproduct", "error", f"this is not the coproduct of Sq^{n}\n{'; '.join(words)}", statement.at)
    )


def _single(side: Sum) -> int | None:
    if len(side.terms) != 1 or len(side.terms[0][1].factors) != 1:
        return None
    return _index(side.terms[0][1].factors[0])


def _index(factor: object) -> int | None:
    """The index of a lone Sq^n; 0 for the number 1."""
    if isinstance(factor, Number):
        return 0 if factor.value == 1 else None
    if isinstance(factor, Operation) and factor.head == "Sq" and len(factor.upper) == 1 and factor.lower is None:
        return factor.upper[0].number
    return None


def _pair(product: Product) -> tuple[int, int] | None:
    if len(product.factors) != 2 or product.glues[1] != "cross":
        return None
    first, second = _index(product.factors[0]), _index(product.factors[1])
    return None if first is None or second is None else (first, second)


RULE = LintRule(
    name="coproduct",
    title="a coproduct with a term too few or too many",
    why="The coproduct of Sq^n has n + 1 terms, the two outer ones too.",
    bad=(r"$\mathrm{Sq}^2\mapsto\mathrm{Sq}^2\otimes1+\mathrm{Sq}^1\otimes\mathrm{Sq}^1$",),
    good=(r"$\mathrm{Sq}^2\mapsto\mathrm{Sq}^2\otimes1+\mathrm{Sq}^1\otimes\mathrm{Sq}^1+1\otimes\mathrm{Sq}^2$",),
    check=check,
    rank=20,
    source="Cartan 1950; Milnor 1958",
)
