"""Faults planted on purpose, and who sees each: the kernel, the comparison of the engines, Milnor's product.

All words Sq^a Sq^b Sq^c with a, b, c <= 5 are derived under each fault.  No one check sees every fault; together they
do.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence

import pytest
from attrs import evolve, frozen

from opslang.ir import tree as ir
from opslang.ir.convert import from_tree, to_canonical
from opslang.ir.term import Element, Monomial, Path
from opslang.ir.term import replace as replaced
from opslang.kernel import check as kernel
from opslang.laws import composition
from opslang.laws.book import BOOK, LAWS
from opslang.laws.law import Bindings, Law
from opslang.rewrite import engine as rewriting
from opslang.tables.engine import Engine
from opslang.witness import milnor

WORDS = [(a, b, c) for a in range(1, 6) for b in range(1, 6) for c in range(1, 6)]


@frozen
class Flagged:
    """How many words each check flagged."""

    kernel: int
    engines: int
    witness: int


def flagged(laws: Sequence[Law] = BOOK) -> Flagged:
    """Derive every word with these laws, replay it with the true book, and compare the ends."""
    by_kernel = by_engines = by_witness = 0
    fast = Engine(2)
    for word in WORDS:
        tree = ir.Composite(word, sum(word))
        derivation = rewriting.run(from_tree(tree, 2), laws, fuel=60, operation=True)
        try:
            kernel.check(derivation, LAWS)
        except kernel.Rejected:
            by_kernel += 1
        try:
            found = to_canonical(derivation.result, True)
        except ValueError:
            # Not admissible: no canonical element to compare, which is seen by both comparisons.
            by_engines += 1
            by_witness += 1
            continue
        fast.start()
        by_engines += found != fast.normal_operation(tree, sum(word))
        assert isinstance(found, ir.OperationElement)
        by_witness += dict(found.terms) != milnor.normal_form(word, 2)
    return Flagged(by_kernel, by_engines, by_witness)


def with_adem(match: Callable[..., Bindings | None]) -> list[Law]:
    """The book with another search for Adem's relation."""
    return [evolve(law, match=match, vanishes=None) if law.name == "adem" else law for law in BOOK]


def test_no_fault_no_flag() -> None:
    assert flagged() == Flagged(0, 0, 0)


def test_a_wrong_binomial_in_the_law(monkeypatch: pytest.MonkeyPatch) -> None:
    """The kernel trusts the law; the witness does not."""

    def squares(a: int, b: int) -> tuple[tuple[int, int], ...]:
        return tuple((a + b - j, j) for j in range(a // 2 + 1) if not (a - 2 * j) & ~(b - j))

    monkeypatch.setattr(composition.adem, "squares", squares)
    found = flagged()
    assert found.kernel == 0 and found.witness > 40


def dropping(element: Element, path: Path, lhs_power: int, rhs: Element, part: Monomial | None = None) -> Element:
    """`replace`, which loses the last term of a sum."""
    result = replaced(element, path, lhs_power, rhs, part)
    return Element(result.prime, result.terms[:-1]) if len(result.terms) > 1 else result


def test_the_rewriter_drops_terms(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(rewriting, "replace", dropping)
    found = flagged()
    assert min(found.kernel, found.engines, found.witness) > 5


def test_replace_drops_terms_for_rewriter_and_kernel(monkeypatch: pytest.MonkeyPatch) -> None:
    """What both share the kernel cannot see; the comparisons can."""
    monkeypatch.setattr(rewriting, "replace", dropping)
    monkeypatch.setattr(kernel, "replace", dropping)
    found = flagged()
    assert found.kernel == 0 and min(found.engines, found.witness) > 5


def test_match_returns_wrong_bindings() -> None:
    adem = LAWS["adem"].match

    def match(factor: object, exponent: int, p: int) -> Bindings | None:
        bindings = adem(factor, exponent, p)  # type: ignore[arg-type]
        return bindings and {**bindings, "b": bindings["b"] + 1}

    found = flagged(with_adem(match))
    assert min(found.kernel, found.engines, found.witness) > 60


def test_match_misses_a_redex() -> None:
    """A valid derivation need not be finished."""
    adem = LAWS["adem"].match

    def match(factor: object, exponent: int, p: int) -> Bindings | None:
        bindings = adem(factor, exponent, p)  # type: ignore[arg-type]
        return None if bindings and bindings["a"] == 1 else bindings

    found = flagged(with_adem(match))
    assert found.kernel == 0 and min(found.engines, found.witness) > 5
