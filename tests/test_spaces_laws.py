"""Derivations on named spaces: what the polynomial witness cannot see, both engines on random elements, the words."""

from __future__ import annotations

import os
from random import Random, SystemRandom

import pytest
from law_grids import GRID
from random_trees import random_tree
from spaces_by_name import PAIR, SIGNED, localised
from terms import value_of_element
from terms_of_spaces import restriction
from test_kernel import forgeries, true_all_the_same

from opslang import Script
from opslang.ground.source import Source
from opslang.ir import tree as ir
from opslang.ir.convert import to_canonical
from opslang.ir.term import Class, Monomial, cup, of_factor, of_monomial
from opslang.kernel.check import Rejected, check
from opslang.laws.book import BOOK, LAWS
from opslang.laws.derivation import Derivation
from opslang.pipeline import Session
from opslang.rewrite.engine import derive, run
from opslang.spaces.family import NotKnown
from opslang.spaces.space import Localised
from opslang.tables.bockstein import Undefined
from opslang.tables.budget import Budget
from opslang.tables.engine import Engine
from opslang.tables.generators import basis

SEED = int(os.environ.get("OPSLANG_SEED") or SystemRandom().randrange(10**9))

GIVEN = {
    "R": (2, "F_2[x:1, y:1]/(x^3, y^4)"),
    "S": (2, "F_2[u:2, v:3]/(u^3 + v^2, u^2 v) where Sq^1 u = v, Sq^2 v = u v"),
    "T": (2, "F_2[a:1, b:1]/(a^3, a b + b^2)"),
    "L": (3, "F_3[x:1, y:2]/(y^4) where beta x = y"),
    "H": (3, "F_3[u:4]/(u^3) where P^1 u = 2 u^2"),
}


def home(p: int, text: str) -> Localised:
    """A space at a prime, or a ring of `GIVEN`."""
    if text not in GIVEN:
        return localised(text, p)
    session = Session(p)
    outcomes = [session.run(Source("test", line)) for line in (f"space {text} = {GIVEN[text][1]}", f"on {text}")]
    assert not any(outcome.error for outcome in outcomes), outcomes[0].message
    here = session.scope.localised()
    assert here is not None
    return here


SPACES = {
    2: (
        "BO", "BO(3)", "BSO(4)", "BSpin", "BSpin(7)", "BU(3)", "BSU", "BSp(2)", "RP^5", "RP^4 x CP^2", "HP^3",
        "lens(4)", "lens(2) x RP(a)", "thom(BO(3))", "thom(BSO(4))", "thom(BU(2))", "thom(BSpin(7))",
        "BO(2) x K(Z/2, 2)", "lens(4) x K(Z/4, 2)",
    ),
    3: (
        "BO(4)", "BSO(5)", "BSO(4)", "BU(3)", "BSU(3)", "BSp(2)", "CP^4", "HP^5", "lens(3)", "lens(9)", "RP^5",
        "thom(BU(2))", "thom(BSO(4))", "lens(3) x K(Z/3, 2)", "BSp", "thom(BSO(3))",
    ),
    5: ("BU(3)", "BSO(6)", "BSp(2)", "CP^7", "HP^4", "lens(5) x HP^2", "thom(BSO(6))"),
    7: ("BU(2)", "BSp(2)", "HP^9", "lens(7)", "CP"),
}  # fmt: skip
PAIRS = [(p, text) for p, texts in SPACES.items() for text in texts]
ROOM = {2: 14, 3: 26, 5: 40, 7: 50}


def trees(rng: Random, p: int, text: str, many: int) -> list[ir.Cls]:
    """Random classes of a space."""
    here = home(p, text)
    classes = here.classes + tuple(of for family in here.families for of in family.classes(p, 8))
    found: list[ir.Cls] = []
    while len(found) < many:
        some = tuple(rng.sample(classes, min(3, len(classes))))
        tree = random_tree(rng, p, some, ROOM[p])
        if tree.degree is not None and tree.degree <= ROOM[p]:
            found.append(tree)
    return found


@pytest.mark.parametrize(("p", "text"), PAIRS + [(p, text) for text, (p, _) in GIVEN.items()])
def test_both_engines_agree_on_named_spaces(p: int, text: str) -> None:
    """The derivation ends in what the tables give, and the kernel accepts it."""
    rng, engine = Random(f"{SEED} {text} {p}"), Engine(p)
    finished = 0
    for tree in trees(rng, p, text, 12):
        engine.start()
        try:
            expected = engine.normal_class(tree)
        except (NotKnown, Undefined):
            continue
        derivation, _ = derive(tree, p, fuel=200)
        check(derivation, LAWS)
        assert "does not apply" not in derivation.stopped, f"seed {SEED}: {derivation.stopped}"
        if derivation.finished:
            finished += 1
            assert to_canonical(derivation.result, False) == expected, f"seed {SEED}: {tree} at {p}"
    assert finished > 4 or "BSpin" in text


@pytest.mark.parametrize(("p", "text"), [pair for pair in PAIRS if "BSpin" not in pair[1]][::3])
def test_the_order_of_the_book_does_not_change_the_answer(p: int, text: str) -> None:
    rng = Random(f"{SEED} order {text} {p}")
    for tree in trees(rng, p, text, 4):
        first, _ = derive(tree, p, fuel=150)
        laws = list(BOOK)
        rng.shuffle(laws)
        other = run(first.start, laws, 400)
        check(other, LAWS)
        if first.finished and other.finished:
            assert other.result == first.result, f"seed {SEED}: {tree} at {p}"


SEEN = {
    2: (
        "BO",
        "BO(3)",
        "BSO(4)",
        "BU(3)",
        "BSp(2)",
        "lens(4)",
        "thom(BO(3))",
        "thom(BSO(4))",
        "thom(BU(2))",
        "RP",
        "HP",
    ),
    3: ("BO(4)", "BSO(4)", "BU(3)", "BSp(2)", "CP", "HP", "lens(9)", "thom(BU(2))", "thom(BSO(4))", "BSp"),
    5: ("BU(3)", "BSO(6)", "BSp(2)", "CP", "HP", "thom(BSO(6))"),
    7: ("BU(2)", "BSp(2)", "CP"),
}


@pytest.mark.parametrize("p", (2, 3, 5, 7))
def test_results_have_the_same_image_in_roots(p: int) -> None:
    """The start and the end of a derivation go to one polynomial."""
    rng = Random(f"{SEED} roots {p}")
    shown = 0
    for text in SEEN[p]:
        for tree in trees(rng, p, text, 6):
            derivation, _ = derive(tree, p, fuel=200)
            if derivation.finished:
                ring, where = restriction(p)
                value = value_of_element(derivation.result, ring, where)
                assert value == value_of_element(derivation.start, ring, where), f"seed {SEED}: {tree} at {p}"
                shown += bool(value)
    assert shown * 3 > len(SEEN[p]), f"seed {SEED}: nearly everything went to 0"


# --- stand-ins for the witness --------------------------------------------------------------------


def test_truncated_rings() -> None:
    """H^*(RP^n), H^*(CP^n), H^*(HP^n) are truncated at x^{n+1} (Milnor and Stasheff 1974, § 4 and 14)."""
    for p, text, d, n in ((2, "RP^3", 1, 3), (2, "HP^2", 4, 2), (3, "CP^2", 2, 2), (5, "HP^1", 4, 1)):
        here = localised(text, p)
        dimensions = [len(basis(p, here, degree, Budget(10**6))) for degree in range(d * (n + 3))]
        assert dimensions == [int(degree % d == 0 and degree <= d * n) for degree in range(d * (n + 3))]


def test_degrees_without_classes() -> None:
    """Where the law says that a degree is empty it is."""
    for bindings in GRID["empty-degree"]:
        p, x = bindings["p"], bindings["x"]
        ((of, exponent),) = x.blocks
        degree = of.degree * exponent + bindings["i"] * (1 if p == 2 else 2 * (p - 1))
        assert not basis(p, localised(of.ring.text, p), degree, Budget(10**6)), bindings


def test_relations_of_thom_spaces_hold_in_roots() -> None:
    """U restricts to the Euler class e along the zero section, so U^2 and eU both go to e^2 (Thom 1952)."""
    seen = 0
    for bindings in GRID["relation-of-the-ring"]:
        if bindings["space"] in (PAIR, SIGNED):
            continue
        equation = LAWS["relation-of-the-ring"].instance(**bindings)
        ring, where = restriction(bindings["p"])
        left = ring.power(value_of_element(of_factor(bindings["p"], equation.factor), ring, where), equation.power)
        if bindings["p"] == 3 and bindings["space"].text == "thom(BO(3))":
            continue
        assert left == value_of_element(equation.rhs, ring, where) != {}, bindings
        seen += 1
    assert seen == 5


def test_a_relation_whose_left_side_is_a_product() -> None:
    """a^2 b^3 c with ab = b^2 is b^5 c; with b a = c in odd degrees, a b is -c: signs of the reordering."""
    a, b = (of_factor(2, of) for of in PAIR.classes(2, 2))
    x = of_factor(2, Class("x", None, 0, 3))
    derivation = run(cup(a, a, b, b, b, x))
    check(derivation, LAWS)
    assert [step.law for step in derivation.steps] == ["relation-of-the-ring"] * 2
    assert derivation.result == cup(b, b, b, b, b, x)
    s, t = (of_factor(3, of) for of in SIGNED.classes(3, 1))
    c = of_factor(3, SIGNED.rules(3)[0][1][0][1][0][0])
    y = of_factor(3, Class("r", None, 0, 1))
    derivation = run(cup(s, y, t))
    check(derivation, LAWS)
    # s y t = -y s t = y t s = y c
    assert derivation.finished and derivation.result == cup(y, c)
    forged = Derivation(cup(s, y), derivation.steps)
    with pytest.raises(Rejected):
        check(forged, LAWS)
    assert to_canonical(run(of_monomial(2, Monomial(()))).result, False).terms


LINES = [
    (2, "BO(5)", "Sq^2 Sq^3 w_5"),
    (2, "thom(BSO(4))", "Sq^4 U w_2 + Sq^2(w_2 U)"),
    (2, "RP^5 x CP^2", "Sq^2(x^3 y)"),
    (2, "BU x HP^2", "Sq^3(c_2 u) + Sq^4(c_3 u)"),
    (2, "lens(4)", "beta_2 (x y^2)"),
    (3, "BU(3)", "P^1(c_1 c_2)"),
    (3, "thom(BSO(4))", "P^1(p_1 U^2)"),
    (3, "lens(3) x CP^2(a)", "beta P^1(x y a)"),
]


@pytest.mark.parametrize(("p", "text", "line"), LINES)
def test_every_forgery_of_one_field_is_rejected(p: int, text: str, line: str) -> None:
    """As in the tests of the kernel; but another law that kills the same factor is a proof as good."""
    session = Session(p)
    session.run(Source("test", f"on {text}"))
    (derivation,) = session.run(Source("test", f"why {line}")).derivations
    assert derivation.steps
    check(derivation, LAWS)
    for what, forged in forgeries(derivation):
        try:
            check(forged, LAWS)
        except Rejected:
            continue
        name = what.removeprefix("law ")
        assert true_all_the_same(what, forged) or (name in LAWS and LAWS[name].kills), f"{what} in {forged}"


# --- words ----------------------------------------------------------------------------------------


def explained(space: str, text: str, prime: int = 2) -> str:
    return "\n".join(Script(prime, space).explain(text).lines)


def test_wu_names_the_binomials_and_what_is_out_of_range() -> None:
    assert explained("BO(5)", "Sq^3 w_5") == (
        "   Sq^3 w_5\n"
        "1. Wu's formula, k = 3, m = 5: Sq^3 w_5 = w_3 w_5\n"
        "   mod 2: C(1,0) = 1, C(2,1) = 0, C(3,2) = 1, C(4,3) = 0\n"
        "   w_7 = 0 on BO(5)\n"
        "   = w_3 w_5"
    )


def test_spin_names_the_relation() -> None:
    assert "w_17 = w_4 w_13 + w_6 w_11 + w_7 w_10 on BSpin, from" in explained("BSpin", "Sq^1 w_16")
    assert "w_5 = 0 on BSpin, from Sq^2 Sq^1 w_2 = 0" in explained("BSpin", "Sq^1 w_4")


def test_splitting_names_the_symmetric_polynomial() -> None:
    text = explained("BU(3)", "P^1 c_2", 3)
    assert "the splitting principle, k = 1: P^1 c_2 = c_1^2 c_2 + 2 c_1 c_3 + c_2^2" in text
    assert "the sum of all x_1^3 x_2 in the roots, with P x = x + x^3" in text and "c_4 = 0 on BU(3)" in text


def test_other_laws_are_named() -> None:
    assert "Thom's formula, k = 2: Sq^2 U = w_2 U" in explained("thom(BO(3))", "Sq^2(w_2 U)")
    assert "the Euler class times it: U^2 = w_3 U" in explained("thom(BO(3))", "U^2")
    assert "binomial formula on a projective space, i = 2, m = 3" in explained("RP^5 x CP^2", "Sq^2(x^3 y)")
    assert "C(3,2) = 1" in explained("RP^5 x CP^2", "Sq^2(x^3 y)")
    assert "the truncation of the ring" in explained("RP^3", "Sq^1(x^3)")
    assert "the Bockstein of a lens space" in explained("lens(4)", "beta_2 x")
    assert "multiples of 2" in explained("BU", "Sq^3 c_2")


def test_what_is_not_known_ends_a_derivation() -> None:
    (of,) = [of for of in localised("BSpin(8)", 2).families[0].classes(2, 8) if of.letter == "Delta"]
    tree = ir.Apply(ir.Composite((4,), 4), ir.Fundamental(of, 8, 8), 12, 12)
    derivation, found = derive(tree, 2)
    assert "not known" in derivation.stopped and [d.name for d in found] == ["derivation-too-long"]
