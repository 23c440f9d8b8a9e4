"""The kernel accepts what the engine derives and rejects every forgery of one field."""

from __future__ import annotations

from collections.abc import Iterator
from random import Random
from typing import Any

import pytest
from attrs import evolve
from random_trees import random_class, random_tree, random_word

from opslang.ground.grading import degree
from opslang.ir import tree as ir
from opslang.ir.term import UNIT, Class, Element, Monomial, add, collect, of_monomial
from opslang.kernel.check import Rejected, check
from opslang.laws.book import LAWS
from opslang.laws.derivation import Derivation, Step
from opslang.rewrite.engine import derive, run

PRIMES = (2, 3, 5, 7)
ROOM = {2: 14, 3: 26, 5: 40, 7: 50}


def derivations(p: int, many: int = 25) -> list[Derivation]:
    """Finished derivations with at least one step, of operations and of classes."""
    rng, found = Random(p), []
    while len(found) < many:
        if rng.random() < 0.4:
            word = random_word(rng, p, 4, 6)
            tree: ir.Tree = ir.Composite(word, degree(word, p))
        else:
            tree = random_tree(rng, p, tuple(random_class(rng, p, name) for name in ("x", "y")), ROOM[p])
        derivation, _ = derive(tree, p, fuel=60)
        if derivation.finished and derivation.steps:
            found.append(derivation)
    return found


@pytest.mark.parametrize("p", PRIMES)
def test_what_the_engine_derives_is_accepted(p: int) -> None:
    for derivation in derivations(p):
        check(derivation, LAWS)


def other_elements(element: Element) -> Iterator[Element]:
    """The element with a term dropped, added, or multiplied."""
    p = element.prime
    for at, (monomial, c) in enumerate(element.terms):
        yield Element(p, element.terms[:at] + element.terms[at + 1 :])
        if p > 2:
            yield Element(p, (*element.terms[:at], (monomial, c % (p - 1) + 1), *element.terms[at + 1 :]))
    yield add(p, (1, element), (1, collect(p, [(Monomial(((Class("q", None, 0, 99), 1),)), 1)])))
    yield Element(3 if p == 2 else 2, element.terms)


def other_values(name: str, value: Any) -> Iterator[Any]:
    """Other values for a binding."""
    if isinstance(value, int):
        yield from (value - 1, value + 1, value + 2)
    elif isinstance(value, Monomial):
        yield UNIT
        yield of_monomial(2, value, 1)
        yield Monomial(((Class("q", None, 0, 3), 1),))
    elif isinstance(value, Class):
        yield evolve(value, degree=value.degree + 1)
    elif isinstance(value, tuple) and value:
        yield value[1:]
        yield value[:-1]
        yield (*value, value[0])
    yield None


def forgeries(derivation: Derivation) -> Iterator[tuple[str, Derivation]]:
    """The derivation with one field of one step, or its start, changed."""

    def with_step(at: int, step: Step) -> Derivation:
        return evolve(derivation, steps=(*derivation.steps[:at], step, *derivation.steps[at + 1 :]))

    for start in other_elements(derivation.start):
        yield "start", evolve(derivation, start=start)
    for at, step in enumerate(derivation.steps):
        for after in other_elements(step.after):
            yield "after", with_step(at, evolve(step, after=after))
        yield "no such law", with_step(at, evolve(step, law="no-such-law"))
        for name in LAWS:
            if name != step.law:
                yield f"law {name}", with_step(at, evolve(step, law=name))
        for path in ((), step.path[:-1], (*step.path, 0), (step.path[0] + 1, *step.path[1:]), (-1, *step.path[1:])):
            yield "path", with_step(at, evolve(step, path=path))
        for name, value in step.bindings.items():
            for other in other_values(name, value):
                if other != value:
                    yield f"binding {name}", with_step(at, evolve(step, bindings={**step.bindings, name: other}))
            less = {key: v for key, v in step.bindings.items() if key != name}
            yield f"no binding {name}", with_step(at, evolve(step, bindings=less))
        yield "more bindings", with_step(at, evolve(step, bindings={**step.bindings, "more": 1}))


def true_all_the_same(what: str, forged: Derivation) -> bool:
    """A start with another coefficient in a term that is killed later: a derivation that holds, of something else."""
    return what == "start" and run(forged.start).result == forged.result


@pytest.mark.parametrize("p", PRIMES)
def test_every_forgery_of_one_field_is_rejected(p: int) -> None:
    tried = spared = 0
    for derivation in derivations(p, 8):
        for what, forged in forgeries(derivation):
            tried += 1
            try:
                check(forged, LAWS)
            except Rejected:
                continue
            assert true_all_the_same(what, forged), f"accepted: {what} in {forged}"
            spared += 1
    assert tried > 500 and spared * 10 < tried


def test_the_message_names_the_step() -> None:
    derivation, _ = derive(ir.Composite((2, 2, 2), 6), 2)
    forged = evolve(
        derivation, steps=(derivation.steps[0], evolve(derivation.steps[1], law="cartan"), *derivation.steps[2:])
    )
    with pytest.raises(Rejected, match="step 2: cartan"):
        check(forged, LAWS)
