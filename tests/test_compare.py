"""Comparisons: symmetrical, silent on isomorphic spaces, and right about those that textbooks tell apart."""

from __future__ import annotations

from typing import Any

import pytest

from opslang.api import Script

WEDGE = "space R = F_2[u:2, v:4] / (u^2, v^2, u v) where Sq^1 u = 0, Sq^2 v = 0"
SPHERES = "space R = F_2[u:3, v:5] / (u^2, v^2) where Sq^1 u = 0, Sq^2 u = 0, Sq^1 v = 0, Sq^2 v = 0, Sq^4 v = 0"
SPECIAL = "space Q = F_2[u:3, v:5] / (u^2, v^2) where Sq^1 u = 0, Sq^2 u = v, Sq^1 v = 0, Sq^2 v = 0, Sq^4 v = 0"
CIRCLES = "space R = F_2[u:1, v:1, w:2] / (u^2, v^2, w^2, u v, u w, v w) where Sq^1 w = 0"


def compared(prime: int, lines: list[str], left: str, right: str, to: int) -> Any:
    found = Script(prime)
    for line in lines:
        found.run(line)
    (outcome,) = found.run(f"compare {left}, {right} to {to}")
    assert outcome.kind == "listing" and outcome.verdict == "ok" and outcome.items is not None
    return outcome.items[0] if outcome.items else None


APART = [
    # CP^2 and S^2 v S^4: the Hopf map is essential (Mosher and Tangora 1968, chapter 4)
    (2, [WEDGE], "CP^2", "R", 8, 2, "the rank of Sq^2: H^2 -> H^4", [1, 0]),
    # SU(3) and S^3 x S^5 (Borel and Serre 1953)
    (2, [SPHERES, SPECIAL], "R", "Q", 8, 3, "the rank of Sq^2: H^3 -> H^5", [0, 1]),
    # common practice
    (2, [], "RP^4", "CP^2", 8, 1, "the dimension of H^1", [1, 0]),
    (2, [], "CP^3", "CP^1 x HP^1", 8, 2, "the rank of Sq^2: H^2 -> H^4", [1, 0]),
    (3, [], "CP^3", "CP^1 x HP^1", 8, 2, "the rank of P^1: H^2 -> H^6", [1, 0]),
    (5, [], "CP^3", "CP^1 x HP^1", 8, 4, "the rank of the cup product H^2 ⊗ H^2 -> H^4", [1, 0]),
    (3, [], "lens(3)", "lens(9)", 4, 1, "the rank of beta: H^1 -> H^2", [1, 0]),
    (2, [], "lens(2)", "lens(4)", 4, 1, "the rank of Sq^1: H^1 -> H^2", [1, 0]),
    # the torus and S^1 v S^1 v S^2 have the same groups and operations, and other products
    (2, [CIRCLES], "K(Z, 1) x K(Z, 1)", "R", 4, 2, "the rank of the cup product H^1 ⊗ H^1 -> H^2", [1, 0]),
    (2, [], "K(Z/2, 2)", "BSO(3)", 8, 5, "the dimension of H^5", [2, 1]),
]


@pytest.mark.parametrize(("prime", "lines", "left", "right", "to", "degree", "measured", "results"), APART)
def test_spaces_that_are_told_apart(
    prime: int, lines: list[str], left: str, right: str, to: int, degree: int, measured: str, results: list[int]
) -> None:
    found = compared(prime, lines, left, right, to)
    assert (found["degree"], found["measured"], found["results"]) == (degree, measured, results)
    other = compared(prime, lines, right, left, to)
    assert (other["degree"], other["measured"], other["results"]) == (degree, measured, results[::-1])
    assert other["values"] == found["values"][::-1]


@pytest.mark.parametrize(
    ("prime", "left", "right"),
    [
        # homotopy equivalences, and spaces alike at the prime (common practice)
        (2, "K(Z, 2)", "CP"),
        (2, "BU(1)", "CP"),
        (2, "BSO(2)", "CP"),
        (2, "BSU(2)", "HP"),
        (3, "BSp(1)", "HP"),
        (3, "BSO(3)", "BSU(2)"),
        (2, "K(Z/2, 1)", "RP"),
        (3, "K(Z/9, 1)", "lens(9)"),
        (2, "K(Z/2, 2) x RP^3", "RP^3 x K(Z/2, 2)"),
        (2, "BSpin(5)", "BSp(2)"),
        (2, "K(Z/6, 2)", "K(Z/2, 2)"),
    ],
)
def test_spaces_that_are_alike(prime: int, left: str, right: str) -> None:
    if "BSpin(5)" in (left, right):
        to = 7  # operations on the class of the spin representation are not known
    else:
        to = 9
    assert compared(prime, [], left, right, to) is None
    assert compared(prime, [], right, left, to) is None


def test_what_is_printed_never_says_equal() -> None:
    (outcome,) = Script(2).run("compare CP, K(Z, 2) to 6")
    assert outcome.lines == ("not told apart to degree 6",)
    (outcome,) = Script(2).run("compare CP^2, RP^2 x RP^2 to 4")
    assert outcome.lines[0] == "told apart in degree 1: the dimension of H^1"
