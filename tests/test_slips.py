"""Slips of a first hour: what was written, the error it gets, and the mend that is offered."""

from __future__ import annotations

import pytest

from opslang.ground.source import Source
from opslang.report.diagnostic import Diagnostic
from opslang.syntax.parser import parse


def errors(text: str) -> tuple[Diagnostic, ...]:
    statement, diagnostics = parse(Source("a.ops", text))
    assert statement is None, text
    return diagnostics


def mended(text: str) -> str:
    """The text with the mend of its first error put in place."""
    found = errors(text)[0]
    assert found.mend is not None, found
    return text[: found.span[0]] + found.mend + text[found.span[1] :]


@pytest.mark.parametrize(
    ("text", "better"),
    [
        ("Sq_2 iota_3", "Sq^2 iota_3"),
        ("Sq_3 iota_5", "Sq^3 iota_5"),
        ("P_1 iota_4", "P^1 iota_4"),
        ("P_2 iota_4", "P^2 iota_4"),
        ("Sq_{12} iota_4", "Sq^{12} iota_4"),
        ("Sq₂ ι₃", "Sq^2 ι₃"),
        ("Sq_n iota_5", "Sq^n iota_5"),
        (r"\Sq_{2} \iota_3", r"\Sq^{2} \iota_3"),
        ("Sq^{4 2 1}", "Sq^{4,2,1}"),
        ("Sq^{12 3} iota_4", "Sq^{12,3} iota_4"),
        (r"\mathrm{Sq}^{4 2}", r"\mathrm{Sq}^{4,2}"),
        ("P^{3 1}", "P^{3,1}"),
        ("Sq^{2,}", "Sq^{2}"),
        ("Sq^{4,2,} iota_3", "Sq^{4,2} iota_3"),
        ("Sq^2,1", "Sq^{2,1}"),
        ("Sq^4,2,1 iota_3", "Sq^{4,2,1} iota_3"),
        (r"\sq^2 \iota_3", r"\Sq^2 \iota_3"),
        (r"\SQ^2", r"\Sq^2"),
    ],
)
def test_the_mend_is_what_was_meant(text: str, better: str) -> None:
    assert mended(text) == better
    assert parse(Source("a.ops", better))[0] is not None


@pytest.mark.parametrize("text", ["iota_{1 2}", "Q_{1 0}", "x_{2 3}", "x^{2 3}", "on K(Z/2, 3 4)", "series to 2 0"])
def test_numbers_side_by_side_are_no_product(text: str) -> None:
    found = errors(text)
    assert [one.name for one in found] == ["index-numbers"] and found[0].mend is None and "one number" in found[0].help


@pytest.mark.parametrize(
    "text", ["Sq^{2n}", "Sq^{2 n}", "Sq^{4 * 2}", "Sq^{2(3+1)}", "Sq^{2 binom(4,2)}", "iota_{2 * 3}"]
)
def test_other_products_in_an_index_are_read(text: str) -> None:
    assert parse(Source("a.ops", text))[1] == ()
