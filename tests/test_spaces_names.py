"""Names: those of a space and those declared, classes of different spaces, repeated factors, a lost `on`."""

from __future__ import annotations

import pytest

from opslang.ground.source import Source
from opslang.ir.outcome import Outcome
from opslang.pipeline import Session
from opslang.render.text import element_text


def run(*lines: str) -> list[Outcome]:
    session = Session()
    return [session.run(Source("a.ops", line)) for line in lines]


def last(*lines: str) -> str:
    outcome = run(*lines)[-1]
    assert outcome.element is not None, outcome.message
    return element_text(outcome.element)


def test_a_space_chosen_later_takes_its_names() -> None:
    found = run("let x in H^2", "on RP^4", "x^5")
    assert [d.name for d in found[1].diagnostics] == ["redeclared"]
    assert last("let x in H^2", "on RP^4", "x^5") == "0"
    assert last("let x in H^2", "on RP^4(x)", "x^5") == "0"


def test_a_name_of_the_current_space_is_taken() -> None:
    for line in ("let x in H^2", "let x = 1"):
        assert run("on RP^4", line)[-1].name == "name-taken"
    assert run("on BO(2)", "let w_2 in H^2")[-1].name == "name-taken"


def test_classes_of_different_spaces_do_not_meet() -> None:
    assert run("on RP^4", "let a = x^2", "on BSO(3)", "w_2 + a")[-1].name == "classes-of-different-spaces"
    assert run("on RP^4", "let a = x^2", "on BSO(3)", "Sq^1 a = w_3")[-1].name == "classes-of-different-spaces"
    assert run("on K(Z, 2)", "let b = iota_2", "on RP^4", "x^2 + b")[-1].name == "classes-of-different-spaces"
    assert last("on RP^4", "let a = x^2", "on BSO(3)", "a") == "x^2"
    assert last("on thom(BO(2)) x K(Z/2, 2)", "w_1 U iota_2") == "w_1 iota_2 U"
    assert last("let y in H^3", "on RP^4", "x y") == "x y"


def test_repeated_factors_are_numbered_by_primes() -> None:
    """The Whitney sum formula, w_2 of the sum over BO(2) x BO(2): common practice."""
    assert last("on BO(2) x BO(2)", "Sq^1 w_2'") == "w_1' w_2'"
    assert last("on RP^2 x RP^3", "x'^3") == "x'^3"
    assert last("on RP^2 x RP^3", "x^3") == "0"
    assert last("on RP^2(a) x RP^2(a)", "Sq^1(a a')") == "a^2 a' + a a'^2"
    assert run("series RP^2 x RP^3 to 5")[-1].items == (1, 2, 3, 3, 2, 1)  # (1+t+t^2)(1+t+t^2+t^3), by hand
    assert len(run("basis H^3(RP^2 x RP^3)")[-1].basis) == 3


@pytest.mark.parametrize("line", ["iota_3", "basis H^3", "series to 4", "iota_3 = 0"])
def test_after_an_on_that_failed_there_is_no_space(line: str) -> None:
    assert run("on K(Z/4, 3)", "on MO(3)", line)[-1].name == "no-space"
    assert run("on K(Z/4, 3)", "on MO(3)", "on K(Z, 3)", "Sq^1 iota_3")[-1].verdict == "ok"
    assert last("on MO(3)", "Sq^2 Sq^2") == "Sq^3 Sq^1"


def test_what_lower_bocksteins_cannot_reach_is_false() -> None:
    """H^4(K(Z/4, 2)) is spanned by iota^2, and beta_1 and beta_2 of it are 0: nothing to calculate modulo (by hand)."""
    assert run("on K(Z/4, 2)", "beta_3(iota_2^2) = iota_2 beta_2 iota_2")[-1].verdict == "true"
    right = "iota_2 beta_2 iota_2 + Sq^2 beta_2 iota_2"
    assert run("on K(Z/4, 2)", f"beta_3(iota_2^2) = {right}")[-1].verdict == "false"


def test_a_number_in_brackets_behind_a_square_is_an_index_meant() -> None:
    found = run("Sq(2)")[-1]
    assert found.name == "index-place"
    assert found.error is not None and found.error.mend == "Sq^2"
    assert run("let x in H^2", "Sq(3) x")[-1].name == "index-place"
    assert last("Sq(1)") == "1"
