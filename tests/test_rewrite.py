"""The engine that explains against the fast engine, on random input; its strategy, its limits, and terms."""

from __future__ import annotations

import os
from random import Random, SystemRandom

import pytest
from random_trees import random_class, random_tree, random_word
from terms import CLASSES, image, value_of_element

from opslang.ground.grading import degree, is_admissible
from opslang.ir import tree as ir
from opslang.ir.convert import from_tree, to_canonical
from opslang.ir.term import (
    Apply,
    Class,
    Element,
    Monomial,
    TooMany,
    add,
    apply,
    collect,
    cup,
    of_factor,
    of_monomial,
    power,
)
from opslang.kernel.check import check
from opslang.laws.book import BOOK, LAWS
from opslang.rewrite.engine import derive, run
from opslang.tables.bockstein import Undefined
from opslang.tables.engine import Engine
from opslang.witness.polynomial import Ring

PRIMES = (2, 3, 5, 7)
SEED = int(os.environ.get("OPSLANG_SEED") or SystemRandom().randrange(10**9))
ROOM = {2: 16, 3: 30, 5: 50, 7: 60}


def trees(rng: Random, p: int, many: int, room: int | None = None) -> list[ir.Cls]:
    found: list[ir.Cls] = []
    room = room or ROOM[p]
    while len(found) < many:
        classes = tuple(random_class(rng, p, name) for name in ("x", "y", "z")[: rng.randint(1, 3)])
        tree = random_tree(rng, p, classes, room)
        if tree.degree is not None and tree.degree <= room:
            total = rng.random() < 0.1 and tree.degree <= room // p
            found.append(ir.Total(tree, None, tree.degree * p) if total else tree)
    return found


@pytest.mark.parametrize("p", PRIMES)
def test_both_engines_agree_on_classes(p: int) -> None:
    rng, engine = Random(f"{SEED} classes {p}"), Engine(p)
    finished = 0
    for tree in trees(rng, p, 100):
        derivation, found = derive(tree, p, fuel=300)
        check(derivation, LAWS)
        assert derivation.finished == (not found)
        assert "does not apply" not in derivation.stopped, f"seed {SEED}: {derivation.stopped}"
        if derivation.finished:
            finished += 1
            engine.start()
            assert to_canonical(derivation.result, False) == engine.normal_class(tree), f"seed {SEED}: {tree} at {p}"
    assert finished > 90


@pytest.mark.parametrize("p", PRIMES)
def test_both_engines_agree_on_operations(p: int) -> None:
    rng, engine = Random(f"{SEED} operations {p}"), Engine(p)
    for _ in range(60):
        word = random_word(rng, p, 4, 8)
        inner = ir.Composite(word, degree(word, p))
        d = inner.degree
        op: ir.Op = rng.choice((inner, ir.OpSum(((2, inner), (1, inner)), d), ir.OpPower(inner, 2, 2 * d)))
        if d < (9 if p == 2 else 30) and rng.random() < 0.3:
            op = ir.Chi(inner, d)
        derivation, _ = derive(op, p, fuel=400)
        check(derivation, LAWS)
        if derivation.finished:
            engine.start()
            assert to_canonical(derivation.result, True) == engine.normal_operation(op, 2 * d), (
                f"seed {SEED}: {op} at {p}"
            )


@pytest.mark.parametrize("p", (2, 3))
def test_both_engines_agree_on_higher_bocksteins(p: int) -> None:
    """Where the fast engine finds beta_k undefined the derivation ends in a term that is not canonical."""
    rng, engine = Random(f"{SEED} bocksteins {p}"), Engine(p)
    defined = undefined = 0
    for inner in trees(rng, p, 250, 14 if p == 2 else 20):
        if inner.degree is None:
            continue
        tree = ir.HigherBockstein(rng.randint(2, 4), inner, inner.degree + 1, inner.degree + 1)
        derivation, _ = derive(tree, p, fuel=200)
        check(derivation, LAWS)
        if not derivation.finished:
            continue
        engine.start()
        try:
            expected = engine.normal_class(tree)
        except Undefined:
            undefined += 1
            with pytest.raises(ValueError):
                to_canonical(derivation.result, False)
            continue
        defined += 1
        assert to_canonical(derivation.result, False) == expected, f"seed {SEED}: {tree} at {p}"
    assert defined > 20 and undefined > 20


@pytest.mark.parametrize("p", PRIMES)
def test_what_is_normal_stays_and_every_redex_is_found(p: int) -> None:
    """Normalising twice changes nothing, and a term with no redex is canonical."""
    rng = Random(f"{SEED} twice {p}")
    for tree in trees(rng, p, 40):
        derivation, _ = derive(tree, p, fuel=200)
        if derivation.finished:
            again = run(derivation.result)
            assert again.finished and not again.steps
            to_canonical(derivation.result, False)


@pytest.mark.parametrize("p", PRIMES)
def test_the_order_of_the_book_does_not_change_the_answer(p: int) -> None:
    rng = Random(f"{SEED} order {p}")
    compared = 0
    for tree in trees(rng, p, 25, ROOM[p] // 2):
        start = from_tree(tree, p)
        first = run(start, BOOK, 200)
        for _ in range(2):
            laws = list(BOOK)
            rng.shuffle(laws)
            other = run(start, laws, 600)
            check(other, LAWS)
            assert "does not apply" not in other.stopped, f"seed {SEED}: {other.stopped}"
            if first.finished and other.finished:
                compared += 1
                assert other.result == first.result, f"seed {SEED}: {tree} at {p} by {[law.name for law in laws]}"
    assert compared > 40


# --- short proofs ---------------------------------------------------------------------------------


def laws_of(tree: ir.Tree, p: int = 2) -> list[str]:
    return [step.law for step in derive(tree, p)[0].steps]


def on(word: ir.Word, of: Class, p: int = 2) -> ir.Cls:
    d = degree(word, p)
    return ir.Apply(ir.Composite(word, d), ir.Fundamental(of, of.degree, of.degree), d + of.degree, d + of.degree)


IOTA = Class("iota", 3, 0, 3)


def test_short_proofs() -> None:
    """Instability before Adem, Cartan once for all factors, and a vanishing factor at once."""
    assert laws_of(on((2, 2), IOTA)) == ["adem"]
    assert laws_of(on((11, 4, 2, 1), IOTA)) == ["instability"]
    assert laws_of(on((40, 5, 3, 3), IOTA)) == ["instability"]
    assert laws_of(ir.Composite((7, 3, 2, 9, 5), 26)) == ["adem"]
    factors = tuple(ir.Fundamental(Class(name, None, 0, 1), 1, 1) for name in "abc")
    tree = ir.Apply(ir.Composite((3,), 3), ir.Cup(factors, 3, 3), 6, 6)
    assert laws_of(tree) == ["top-power"]
    tree = ir.Apply(ir.Composite((2,), 2), ir.Cup(factors, 3, 3), 5, 5)
    assert laws_of(tree) == ["cartan"] + ["top-power"] * 6


def test_an_answer_that_is_there_takes_no_step() -> None:
    assert laws_of(ir.Composite((), 0)) == [] == laws_of(ir.Composite((6, 3, 1), 10)) == laws_of(ir.OpSum((), 3))


# --- limits ---------------------------------------------------------------------------------------


def test_the_end_of_the_fuel_is_a_diagnostic() -> None:
    derivation, found = derive(ir.Composite((2, 2, 2), 6), 2, fuel=2)
    assert [d.name for d in found] == ["derivation-too-long"] and found[0].severity == "warning"
    assert len(derivation.steps) == 2 and not derivation.finished
    check(derivation, LAWS)


@pytest.mark.parametrize(
    ("tree", "p"),
    [
        (ir.Composite((10**6 - 3,) * 40, 0), 2),
        (ir.Composite((699_999, 600_001, 400_003), 0), 2),
        (ir.Composite((7, 0) * 400, 0), 3),
        (ir.Chi(ir.Composite((10**6,), 0), 0), 2),
        (ir.MilnorQ(10**4, 0), 3),
        (ir.OpPower(ir.OpSum(((1, ir.Composite((1,), 1)), (1, ir.Composite((2,), 2))), None), 10**6, None), 2),
        (on((10**9, 10**8), Class("x", None, 0, 10**10)), 2),
        (ir.Total(ir.ClassPower(ir.Fundamental(IOTA, 3, 3), 10**7, 3 * 10**7, 3 * 10**7), None, 6 * 10**7), 2),
    ],
)
def test_large_input_ends_at_once(tree: ir.Tree, p: int) -> None:
    derivation, found = derive(tree, p)
    assert derivation.finished or [d.name for d in found] == ["derivation-too-long"]
    check(derivation, LAWS)


def test_deeply_nested_abbreviations_end_in_a_message() -> None:
    op: ir.Op = ir.Composite((1,), 1)
    for _ in range(5000):
        op = ir.OpSum(((1, op),), 1)
    derivation, found = derive(op, 2)
    assert not derivation.finished and found[0].name == "derivation-too-long"


# --- terms ----------------------------------------------------------------------------------------


@pytest.mark.parametrize("p", (2, 3, 5))
def test_products_and_powers_of_terms_are_those_of_polynomials(p: int) -> None:
    """Signs of reordering, powers of sums: checked by the witness, which keeps its own order."""
    rng = Random(f"{SEED} cup {p}")
    names = [of for of in CLASSES if of.order == 1]

    def random_element() -> Element:
        parts = []
        for _ in range(rng.randint(1, 3)):
            term = of_monomial(p, Monomial(()), rng.randint(1, p))
            for _ in range(rng.randint(1, 3)):
                term = cup(term, of_factor(p, rng.choice(names)))
            parts.append((rng.randint(1, p), term))
        return add(p, *parts)

    for _ in range(40):
        ring = Ring(p, (1, 1, 1))
        where = {of: image(rng, ring, of) for of in names}
        a, b = random_element(), random_element()
        va, vb = (value_of_element(e, ring, where) for e in (a, b))
        assert value_of_element(cup(a, b), ring, where) == ring.product(va, vb), f"seed {SEED}"
        for n in range(p + 2):
            assert value_of_element(power(a, n), ring, where) == ring.power(va, n), f"seed {SEED}: {a} to the {n}"


def test_terms_are_canonical_on_construction() -> None:
    x, y = (of_factor(3, Class(name, None, 0, 3)) for name in "xy")
    assert cup(y, x) == add(3, (-1, cup(x, y))) and cup(x, y).terms[0][1] == 1
    assert add(3, (1, x), (2, x)).terms == ()
    assert apply("beta", 1, add(3, (1, x), (2, y))) == add(3, (1, apply("beta", 1, x)), (2, apply("beta", 1, y)))
    with pytest.raises(TooMany):
        collect(2, ((Monomial(((Class("x", i, 0, 1), 1),)), 1) for i in range(10**6)))


def test_a_term_that_is_not_normal_has_no_canonical_element() -> None:
    word = of_monomial(2, Monomial(((Apply("Sq", 1, Monomial(((IOTA, 1),))), 1),)))
    assert to_canonical(word, False)
    top = of_monomial(2, Monomial(((Apply("Sq", 3, Monomial(((IOTA, 1),))), 1),)))
    with pytest.raises(ValueError):
        to_canonical(top, False)
    with pytest.raises(ValueError):
        to_canonical(word, True)
    assert is_admissible((3,), 2)
