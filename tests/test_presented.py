"""Presented rings: what is accepted, what is rejected and for which reason, and what the operations give."""

from __future__ import annotations

from math import comb
from random import Random

import pytest

from opslang.ground.source import Source
from opslang.ir.outcome import Outcome
from opslang.pipeline import Session
from opslang.render.text import element_text


def ran(*lines: str, prime: int = 2) -> list[Outcome]:
    """The outcomes of a few lines."""
    session = Session(prime)
    return [session.run(Source("a.ops", line)) for line in lines]


def value(outcome: Outcome) -> str:
    """The canonical form as text."""
    assert outcome.verdict == "ok" and outcome.element is not None, outcome.message
    return element_text(outcome.element)


# Rings of spaces; the operations from the sources named.
ACCEPTED = {
    # common practice: Sq^1 a = a^2 on classes of degree 1
    "RP^2 x RP^3": (2, "F_2[a:1, b:1] / (a^3, b^4) where Sq^1 a = a^2, Sq^1 b = b^2", [1, 2, 3, 3, 2, 1, 0]),
    "CP^3": (2, "F_2[y:2] / (y^4)", [1, 0, 1, 0, 1, 0, 1, 0, 0]),
    "lens space at 3": (3, "F_3[x:1, y:2] where beta x = y", [1, 1, 1, 1, 1, 1]),
    # Milnor and Stasheff 1974, problem 8-A (Wu's formula)
    "BSO(3)": (2, "F_2[w_2:2, w_3:3] where Sq^1 w_2 = w_3, Sq^2 w_3 = w_2 w_3", [1, 0, 1, 1, 1, 1, 2]),
    # Borel 1953: exterior on the suspensions of the universal classes
    "SU(3)": (2, "F_2[x_3:3, x_5:5] / (x_3^2, x_5^2) where Sq^2 x_3 = x_5", [1, 0, 0, 1, 0, 1, 0, 0, 1]),
    "Sp(2)": (2, "F_2[x_3:3, x_7:7] / (x_3^2, x_7^2)", [1, 0, 0, 1, 0, 0, 0, 1, 0, 0, 1]),
    "Sp(2) at 3": (3, "F_3[x_3:3, x_7:7] where P^1 x_3 = x_7", [1, 0, 0, 1, 0, 0, 0, 1, 0, 0, 1]),
    # Borel 1954, from memory
    "G_2": (2, "F_2[x_3:3, x_5:5] / (x_3^4, x_5^2) where Sq^2 x_3 = x_5, Sq^4 x_5 = 0", [1, 0, 0, 1, 0, 1, 1, 0, 1, 1]),
    # the 5-manifold SU(3)/SO(3), from memory
    "SU(3)/SO(3)": (2, "F_2[u:2, v:3] / (u^2, v^2) where Sq^1 u = v, Sq^2 v = u v", [1, 0, 1, 1, 0, 1, 0]),
    # HP^infinity at 3: P^1 u = 2 u^2, u restricting to y^2; common practice
    "HP at 3": (3, "F_3[u:4] where P^1 u = 2 u^2", [1, 0, 0, 0, 1]),
}


@pytest.mark.parametrize("name", ACCEPTED)
def test_rings_of_spaces_are_accepted(name: str) -> None:
    prime, text, dimensions = ACCEPTED[name]
    declared, series = ran(f"space R = {text}", f"series R to {len(dimensions) - 1}", prime=prime)
    assert declared.verdict == "ok" and not declared.diagnostics, declared.diagnostics
    assert list(series.items) == dimensions


# A planted fault each: the presentation, the name of the error, words of its message, the place.
REJECTED = [
    (2, "F_2[u:2, v:4] where Sq^1 u = v", "given-degree", "Sq^1 u has degree 3, and v, given for it, degree 4", "v"),
    (2, "F_2[u:2, v:5] where Sq^3 u = v", "given-unstable", "Sq^3 u is 0 by instability", "v"),
    (2, "F_2[u:2, v:4] where Sq^2 u = v", "given-unstable", "Sq^2 u is u^2 by instability", "v"),
    (3, "F_3[u:2, v:6] where P^1 u = v", "given-unstable", "P^1 u is u^3 by instability", "v"),
    (3, "F_3[u:2, v:7] where beta P^1 u = v", "given-unstable", "beta P^1 u is 0 by instability", "v"),
    (2, "F_2[u:2, v:3] where Sq^1 u = v, Sq^2 v = 0", "adem-violated", "Sq^3 v, which is v^2", "Sq^2 v = 0"),
    (2, "F_2[u:2, v:3, w:4] where Sq^1 u = v, Sq^1 v = w", "adem-violated", "Sq^1 Sq^1 u is w", "Sq^1 v = w"),
    (3, "F_3[u:4, v:8] where P^1 u = v, P^1 v = 0, P^2 u = 0", "given-unstable", "P^2 u is u^3", "0"),
    (3, "F_3[u:6, v:10, w:14] where P^1 u = v, P^1 v = 0, P^2 u = w", "adem-violated", "2 P^2 u", "P^1 v = 0"),
    (3, "F_3[x:1, y:2, z:3] where beta x = y, beta y = z", "bockstein-squared", "beta beta x is z", "beta y = z"),
    (2, "F_2[u:2, v:3] / (u^3 + v^2) where Sq^1 u = v, Sq^2 v = u v", "ideal-not-closed", "u^2 v", "u^3 + v^2"),
    (3, "F_3[x:1, y:2] / (x y) where beta x = y", "ideal-not-closed", "beta(x y) = y^2", "x y"),
    (2, "F_2[u:2, v:3] / (u^2 + v)", "relation-degrees", "u^2 has degree 4, v has degree 3", "u^2 + v"),
    (2, "F_2[u:2] / (u^3, 1)", "relation-unit", "makes the whole ring 0", "1"),
    (2, "F_2[u:2] / (u v)", "unknown-name", "v is no generator", "v"),
    (2, "F_2[u:2, u:3]", "declared-twice", "u stands twice", "u:3"),
    (2, "F_2[u:2, v:3] where Sq^1 u = v, Sq^1 u = v", "given-twice", "second time", "Sq^1 u = v"),
    (2, "F_2[u:2, v:3] where Sq^1 (u^2) = 0", "given-form", "not an operation on a generator", "Sq^1 (u^2)"),
    (2, "F_2[u:2, v:3] / (Sq^1 u + v)", "not-a-polynomial", "polynomials in its generators", "Sq^1"),
    (2, "F_3[u:2]", "coefficients-prime", "the prime is 2", "F_3[u:2]"),
    (2, "F_4[u:2]", "coefficients-prime", "4 is not a prime", "F_4[u:2]"),
    (2, "F_2[u:2] where P^1 u = 0", "prime-of-operation", "at odd primes", "P^1"),
    (3, "F_3[x:1, y:3] / (x y - y x)", "graded-sign", "anticommute", "x y - y x"),
    (2, "F_2[u:0]", "degree-range", "from 1", "u:0"),
    (2, "F_2[u:2] where Sq u = u^2", "given-form", "begins with the class", "u^2"),
    (2, "F_2[u:2] where Sq u = u + u^3", "given-degree", "a term of degree 6", "u + u^3"),
]


@pytest.mark.parametrize(("prime", "text", "name", "words", "place"), REJECTED, ids=[row[1] for row in REJECTED])
def test_planted_faults_are_found_at_their_place(prime: int, text: str, name: str, words: str, place: str) -> None:
    line = f"space R = {text}"
    (outcome,) = ran(line, prime=prime)
    assert (outcome.verdict, outcome.name) == ("error", name), outcome
    first = next(d for d in outcome.diagnostics if d.severity == "error")
    assert words in first.message
    assert line[first.span[0] : first.span[1]] == place
    assert ran(line, "on R", prime=prime)[1].name == "unknown-space", "a rejected presentation names nothing"


def test_every_fault_of_given_operations_is_told_at_once() -> None:
    (outcome,) = ran("space R = F_2[u:2, v:4] where Sq^1 u = v, Sq^2 u = v")
    assert [d.name for d in outcome.diagnostics] == ["given-degree", "given-unstable"]


@pytest.mark.parametrize(
    ("prime", "text"),
    [
        # K(Z/2, 2) has generators in degrees 2, 3, 5, 9, … (Serre 1953); fewer of them are no algebra of this kind
        (2, "F_2[u:2, v:3] where Sq^1 u = v, Sq^2 v = 0"),
        (2, "F_2[u:2, v:3, w:5] where Sq^1 u = v, Sq^2 v = w, Sq^4 w = 0"),
        (2, "F_2[u:2, v:3, w:5] where Sq^1 u = v, Sq^2 v = w, Sq^4 w = u^2 w"),
        (2, "F_2[u:2, v:3, w:5] / (u^4) where Sq^1 u = v, Sq^2 v = w, Sq^4 w = 0"),
    ],
)
def test_a_truncated_eilenberg_maclane_space_is_rejected(prime: int, text: str) -> None:
    (outcome,) = ran(f"space R = {text}", prime=prime)
    assert outcome.name in ("adem-violated", "ideal-not-closed")


def test_the_closure_is_offered_and_is_accepted() -> None:
    line = "space R = F_2[u:2, v:3] / (u^3) where Sq^1 u = v, Sq^2 v = u v"
    found = ran(line)[0].diagnostics[0]
    assert found.help == "the relations that are missing: u^2 v, u v^2, v^3"
    assert found.mend == "u^3, u^2 v, u v^2, v^3"
    mended = line[: found.span[0]] + found.mend + line[found.span[1] :]
    assert ran(mended)[0].verdict == "ok"


def test_an_operation_that_was_not_given_is_refused_by_name_and_not_0() -> None:
    outcomes = ran(
        "space R = F_2[u:4, v:5] / (u^3, v^2, u v)", "on R", "Sq^1 u", "Sq^1(u^2)", "Sq^3 u", "Sq^4 u", "Sq^1 v"
    )
    (said,) = outcomes[0].diagnostics
    assert said.name == "not-given" and said.message.startswith(
        "not given, and not determined by what is given: Sq^1 u;"
    )
    assert outcomes[2].name == "not-known" and "Sq^1 u was not given" in str(outcomes[2].message)
    assert value(outcomes[3]) == "0"  # Cartan: the two terms cancel
    assert value(outcomes[4]) == "0"  # H^7 is 0
    assert value(outcomes[5]) == "u^2"  # instability
    assert value(outcomes[6]) == "0"  # H^6 is 0


def test_what_adem_relations_determine_need_not_be_given() -> None:
    # Sq^1 v = Sq^1 Sq^1 u = 0; Sq^3 w = Sq^1 Sq^2 w; both from what is given
    lines = "space R = F_2[u:2, v:3] where Sq^1 u = v, Sq^2 v = u v", "on R", "Sq^1 v", "Sq^3 Sq^1 (u^2)", "Sq^1(u v)"
    outcomes = ran(*lines)
    assert not outcomes[0].diagnostics
    assert [value(one) for one in outcomes[2:]] == ["0", "0", "v^2"]


def test_total_operations_and_longer_words_may_be_given() -> None:
    total = ran("space R = F_2[a:1, u:2] / (a^4) where Sq a = a + a^2, Sq u = u + a u + u^2", "on R", "Sq^1 u")
    assert value(total[2]) == "a u"
    words = "space R = F_2[u:2, v:3, w:5] where Sq^1 u = v, Sq^2 Sq^1 u = w", "on R", "Sq^2 v", "Sq^1 w"
    assert [value(one) for one in ran(*words)[2:]] == ["w", "v^2"]
    # Milnor and Stasheff 1974, problem 8-A again, as total squares
    assert (
        ran("space B = F_2[w_2:2, w_3:3] where Sq w_2 = w_2 + w_3 + w_2^2, Sq w_3 = w_3 + w_2 w_3 + w_3^2")[0].verdict
        == "ok"
    )


def test_products_with_other_spaces() -> None:
    outcomes = ran(
        "space R = F_2[u:2, v:3] / (u^2, v^2) where Sq^1 u = v, Sq^2 v = u v",
        "on R x K(Z/2, 3)",
        "Sq^2(v iota_3)",
        "series R x K(Z/2, 3) to 6",
        "on R x RP^5",
        "Sq^2(u x)",
        "basis H^4",
        "on R x R",
        "Sq^1(u u')",
    )
    # Cartan by hand
    assert value(outcomes[2]) == "u iota_3 v + (Sq^2 iota_3) v"
    # (1 + t^2 + t^3 + t^5) times 1, 0, 0, 1, 1, 1, 2 (Serre 1953)
    assert list(outcomes[3].items) == [1, 0, 1, 2, 1, 3, 4]
    assert value(outcomes[5]) == "x^2 v"
    assert [len(monomial) for monomial in outcomes[6].items] == [1, 2, 2]
    assert value(outcomes[8]) == "u v' + u' v"


def test_a_generator_that_relations_make_of_others_is_written_so() -> None:
    outcomes = ran("space R = F_2[a:1, b:2] / (b + a^2)", "on R", "b", "Sq^1(a b)", "basis H^4", "series to 3")
    assert outcomes[0].verdict == "ok" and not outcomes[0].diagnostics
    assert value(outcomes[2]) == "a^2" and value(outcomes[3]) == "a^4"
    assert list(outcomes[5].items) == [1, 1, 1, 1] and len(outcomes[4].items) == 1


def test_signs_of_odd_classes() -> None:
    lines = (
        "space T = F_3[a:3, b:3, c:3, d:3] / (c d - a b) where P^1 a = 0, P^1 b = 0, P^1 c = 0, P^1 d = 0, "
        "beta a = 0, beta b = 0, beta c = 0, beta d = 0"
    )
    outcomes = ran(lines, "on T", "d c", "d a", "d c + a b", "(a + d) (c + b)", prime=3)
    # the product d c is met first in this order of the classes: -a b
    assert [value(one) for one in outcomes[2:]] == ["2 a b", "2 a d", "0", "a c + 2 b d"]
    session = Session(3)
    for line in (lines, "on T", "d", "c", "d c + a b", "c d"):
        outcome = session.run(Source("a.ops", line))
    assert value(outcome) == "a b"


def test_at_another_prime_the_ring_is_refused() -> None:
    outcomes = ran("space R = F_2[u:2]", "prime 3", "on R")
    assert outcomes[2].name == "not-known" and "F_2" in str(outcomes[2].message)


def test_the_degree_up_to_which_is_checked_is_stated() -> None:
    # CP^infinity x S^40: by Cartan and instability
    line = "space R = F_2[y:2, b:40] / (b^2) where Sq^2 b = 0, Sq^4 b = 0, Sq^8 b = 0, Sq^16 b = 0, Sq^32 b = 0"
    (outcome,) = ran(line)
    (said,) = outcome.diagnostics
    assert said.name == "checked-in-part" and "to degree 64" in said.message and "`to 156`" in said.help
    assert not ran(line + " to 156")[0].diagnostics
    # without the relation Sq^40 b = b^2 is not made of the operations given: found in degree 80 only
    hidden = line.replace(" / (b^2)", "")
    assert ran(hidden)[0].verdict == "ok" and ran(hidden + " to 80")[0].name == "adem-violated"


def test_a_presentation_that_is_too_large_is_refused_and_not_endless() -> None:
    names = [f"x_{i}" for i in range(1, 13)]
    relations = [" + ".join(f"{a}^3 {b}" for a, b in zip(names[i:], reversed(names))) for i in range(10)]
    declared = ", ".join(f"{name}:1" for name in names)
    session = Session(limit=20_000)
    outcome = session.run(Source("a.ops", f"space R = F_2[{declared}] / ({', '.join(relations)})"))
    assert outcome.name in ("too-large", "ideal-not-closed")
    huge = session.run(Source("a.ops", "space R = F_2[x:1, y:1] / ((x + y)^{100000} x^{99999})"))
    assert huge.verdict == "ok" or huge.name in ("too-large", "ideal-not-closed")


def test_operations_on_products_of_projective_spaces_are_binomials() -> None:
    session = Session()
    session.run(Source("a.ops", "space R = F_2[a:1, b:1] / (a^7, b^6) where Sq^1 a = a^2, Sq^1 b = b^2"))
    assert session.run(Source("a.ops", "on R")).verdict == "ok"
    random = Random(5)
    for _ in range(60):
        m, n, k = random.randint(0, 6), random.randint(0, 5), random.randint(1, 6)
        outcome = session.run(Source("a.ops", f"Sq^{k}(a^{m} b^{n})"))
        assert outcome.element is not None
        found = {
            tuple({g.of.letter: e for g, e in monomial}.get(letter, 0) for letter in "ab")
            for monomial, _ in outcome.element.terms
        }
        expected = {
            (m + i, n + k - i) for i in range(k + 1) if comb(m, i) * comb(n, k - i) % 2 and m + i < 7 and n + k - i < 6
        }
        assert found == expected, (m, n, k)
