"""Every law of the book: its words, its examples, and its instances against the witness.

A newcomer's law needs an entry in `law_grids.py` and then gets all of these tests.
"""

from __future__ import annotations

import re
from pathlib import Path
from random import Random

import pytest
from law_grids import GRID, OUTSIDE
from termination import greater
from terms import CLASSES, Images, images, value_of_element, value_of_factor
from terms_of_spaces import restriction

from opslang import Script
from opslang.ir.term import Class, Monomial, degree_of_monomial, of_monomial, quotient
from opslang.laws.book import BOOK, LAWS
from opslang.laws.law import Bindings, Law
from opslang.spaces.family import Family
from opslang.witness.polynomial import Ring

BY_NAME = pytest.mark.parametrize("law", BOOK, ids=lambda law: law.name)


def test_the_names_are_distinct_and_every_law_has_its_grid() -> None:
    assert len(LAWS) == len(BOOK)
    assert set(GRID) == set(OUTSIDE) == set(LAWS)


@BY_NAME
def test_formula_condition_and_source_are_there(law: Law) -> None:
    assert law.formula and law.condition and law.examples
    assert re.search(r"\b(19|20)\d\d\b", law.source), "a source has a year"
    assert re.fullmatch(r"[a-z]+(-[a-z0-9]+)*", law.name)
    # Titles are set in TeX and in text as they stand.
    assert re.fullmatch(r"[A-Za-z0-9 ,'-]+", law.title)


@BY_NAME
def test_the_examples_hold_and_use_the_law(law: Law) -> None:
    script = Script()
    script.run("\n".join(law.setting))
    used = set()
    for example in law.examples:
        assert script.compare(example).verdict == "true", example
        used |= {step["law"] for step in script.explain(example).steps}
    assert law.name in used


@BY_NAME
def test_both_sides_have_one_degree(law: Law) -> None:
    for bindings in GRID[law.name]:
        equation, p = law.instance(**bindings), bindings["p"]
        degree = degree_of_monomial(equation.lhs, p)
        assert equation.rhs.prime == p
        if degree is not None:
            assert all(degree_of_monomial(m, p) == degree for m, _ in equation.rhs.terms)
        assert not (law.kills and equation.rhs.terms)


def of_a_space(bindings: Bindings) -> bool:
    """Whether an instance is about classes of a named space."""
    values = list(bindings.values())
    values += [f for value in values if isinstance(value, Monomial) for f, _ in value.blocks]
    return any(isinstance(value, Family) or (isinstance(value, Class) and value.ring is not None) for value in values)


def maps(rng: Random, bindings: Bindings) -> tuple[Ring, Images]:
    """A product of spaces and where the classes of the instance go."""
    return restriction(bindings["p"]) if of_a_space(bindings) else images(rng, bindings["p"])


@BY_NAME
def test_both_sides_act_alike_in_the_witness(law: Law) -> None:
    if law.unseen:
        files = Path(__file__).parent.glob("test_*.py")
        assert any(f"def {law.unseen}(" in file.read_text(encoding="utf-8") for file in files), (
            "there is a stand-in test"
        )
        return
    rng = Random(law.name)
    for bindings in GRID[law.name]:
        equation = law.instance(**bindings)
        for _ in range(1 if of_a_space(bindings) else 2):
            ring, where = maps(rng, bindings)
            left = value_of_factor(equation.factor, ring, where)
            power = ring.power(left, equation.power)
            assert power == value_of_element(equation.rhs, ring, where), (law.name, bindings)


def test_the_witness_sees_most_laws() -> None:
    """Laws with a right side that is not 0 must be seen to be more than 0 = 0 in the witness."""
    for law in BOOK:
        if law.kills or law.unseen:
            continue
        rng = Random(law.name)
        seen = 0
        for bindings in GRID[law.name]:
            ring, where = maps(rng, bindings)
            seen += bool(value_of_element(law.instance(**bindings).rhs, ring, where))
        assert seen, law.name


@BY_NAME
def test_match_finds_the_left_side_of_an_instance(law: Law) -> None:
    for bindings in GRID[law.name]:
        equation = law.instance(**bindings)
        found = law.match(equation.factor, equation.power, bindings["p"])
        if found is None and law.match_product is not None:
            found = law.match_product(equation.lhs, 0, bindings["p"])
        assert found is not None, (law.name, bindings)
        again = law.instance(**found)
        # Another way to split the same product is as good, if it gives the same left side.
        assert (again.factor, again.power) == (equation.factor, equation.power)
        assert again.rhs == equation.rhs or law.name == "cartan"


@BY_NAME
def test_the_termination_order_drops(law: Law) -> None:
    for bindings in GRID[law.name]:
        equation = law.instance(**bindings)
        for monomial, _ in equation.rhs.terms:
            if isinstance(equation.factor, Class):
                # a relation goes down in the order of its Gröbner basis, so its right side does not hold the left one
                assert quotient(monomial, equation.lhs) is None, (law.name, bindings)
                continue
            assert all(greater(equation.factor, factor) for factor, _ in monomial.blocks), (law.name, bindings)


@BY_NAME
def test_outside_the_condition_an_instance_is_refused(law: Law) -> None:
    for bindings in OUTSIDE[law.name]:
        with pytest.raises((ValueError, TypeError)):
            law.instance(**bindings)


@pytest.mark.parametrize("p", (2, 3))
def test_higher_bockstein_of_a_power_modulo_lower_ones(p: int) -> None:
    """beta_{r+1}(x^p) is defined modulo the image of beta_r; where every class has order r it lies in that image.

    In products of the spaces K(Z/p^r, 1) the r-th page of the Bockstein spectral sequence is acyclic in positive
    degrees, so beta_r kills the right side (May 1970, section 10; for r = 1, p = 2 that is
    Sq^1(x Sq^1 x + Sq^{2q} Sq^1 x) = (Sq^1 x)^2 + Sq^{2q+1} Sq^1 x = 0).
    """
    law = LAWS["higher-bockstein-of-a-power"]
    rng = Random(p)
    nonzero = 0
    for bindings in GRID[law.name]:
        if bindings["p"] != p:
            continue
        r = bindings["k"] - 1
        for _ in range(6):
            ring, where = images(rng, p)
            value = value_of_element(law.instance(**bindings).rhs, ring, where)
            nonzero += bool(value)
            if r == 1 or p > 2:
                assert ring.bockstein(r, value) == {}, bindings
            else:
                # beta_r(x beta_r x) = (beta_r x)^2, which is Sq^1 of Sq^{2q} beta_r x.
                root = value_of_element(of_monomial(p, bindings["x"]), ring, where)
                below = ring.bockstein(r, root)
                degree = degree_of_monomial(bindings["x"], p)
                assert degree is not None
                assert ring.bockstein(r, value) == ring.act((1, degree), below)
    assert nonzero > 3


def test_the_images_respect_coefficients() -> None:
    """The maps send an integral class to something that all Bocksteins kill, and so on: else they prove nothing."""
    rng = Random(1)
    for p in (2, 3):
        ring, where = images(rng, p)
        assert isinstance(ring, Ring)
        for of in CLASSES:
            if of.order != 1:
                for k in range(1, of.order or 4):
                    assert ring.bockstein(k, where[of]) == {}, (of, k)


@BY_NAME
def test_vanishes_tells_the_truth(law: Law) -> None:
    if law.vanishes is None:
        return
    outcomes = set()
    for bindings in GRID[law.name]:
        said = law.vanishes(**bindings)
        outcomes.add(said)
        equation = law.instance(**bindings)
        assert said <= (not equation.rhs.terms), (law.name, bindings)
    assert outcomes == {True, False}
