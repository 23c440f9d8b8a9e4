"""Lists of generators of H^*(K(G, n); F_p): every member one, and none left out."""

from __future__ import annotations

import re

from opslang.lint.model import ClassFact, ClassName, Finding, Known, Operation, Origin, Product, Statement, Sum, Verdict
from opslang.lint.numeric.words import (
    Word,
    degree_of,
    excess_of,
    generators,
    inadmissible_at,
    is_dots,
    is_generator,
    only_word,
    word_text,
)
from opslang.lint.rule import LintRule

_THROUGH = re.compile(
    r"(?:through|up to|upto|below and in)\s+(?:and including\s+)?(?:degree|dimension)s?\s+\$?(\d+)", re.IGNORECASE
)
MOST = 60


def check(statement: Statement, known: Known) -> Verdict | None:
    """The members of a list that begins with a fundamental class."""
    if statement.kind != "list" or len(statement.sides) < 2 or known.prime is None:
        return None
    first = only_word(statement.sides[0])
    if first is None or first[0] or first[1] is None:
        return None
    name = first[1]
    fact = known.classes.get(name.spelling)
    n = fact.degree.constant if fact is not None and fact.degree is not None else None
    if fact is None or not isinstance(n, int) or not fact.space.startswith(("K(", "B^")) or fact.order is None:
        return None
    if n < 2 and fact.order != 1:
        return None
    return _judged(statement, known, name, fact, n)


def _judged(statement: Statement, known: Known, name: ClassName, fact: ClassFact, n: int) -> Verdict | None:
    prime = known.prime or 2
    listed: list[Word] = []
    findings: list[Finding] = []
    order = fact.order or 0
    for side in statement.sides:
        if is_dots(side):
            continue
        read = only_word(side)
        if read is None or read[1] is None or read[1].spelling != name.spelling:
            run_on = _run_on(side, name)
            if run_on is None:
                return None
            findings.append(run_on)
            continue
        word = _plain(read[0], prime, order)
        listed.append(word)
        trouble = _member(word, prime, n, order, name)
        if trouble:
            findings.append(Finding("generator-list", "error", trouble, side.at))
    if not findings:
        findings = _missing(statement, known, listed, prime, n, order, name)
    if findings:
        return Verdict("finding", tuple(findings))
    return Verdict("true", reason="each member is a generator")


def _plain(word: Word, prime: int, order: int) -> Word:
    """At the prime 2, beta is Sq^1."""
    return tuple([("Sq", 1) if prime == 2 and letter == ("beta", 1) else letter for letter in word])


def _member(word: Word, prime: int, n: int, order: int, name: ClassName) -> str:
    text = f"{word_text(word)} {name.spelling}"
    worn = inadmissible_at(word, prime)
    if worn is not None:
        return (
            f"{word_text(word)} is not admissible: {worn[0]} < {worn[2]}\na generator is an admissible word "
            f"on {name.spelling}"
        )
    excess = excess_of(word, prime)
    if not is_generator(word, prime, n):
        what = "a power of another generator" if excess == n else "0"
        return (
            f"{text} is {what}: its excess is {excess}, and the class has degree {n}\na generator has "
            f"excess less than {n}"
        )
    if word and word[-1] in (("Sq", 1), ("beta", 1)) and order != 1:
        wanted = f"; the second generator is beta_{order} {name.spelling}" if order else ""
        return (
            f"{text} is 0: {name.spelling} is the reduction of a class "
            f"with {'integral' if not order else 'other'} coefficients{wanted}"
        )
    bocksteins = [index for head, index in word if head == "beta" and index > 1]
    if bocksteins and (bocksteins != [order] or word[-1] != ("beta", order)):
        return f"{text} is no generator\nthe Bockstein of this group has order {order}"
    return ""


def _run_on(side: object, name: ClassName) -> Finding | None:
    """Two members with no comma between them."""
    if not isinstance(side, Sum) or len(side.terms) != 1:
        return None
    product = side.terms[0][1]
    factors = product.factors
    cuts = [
        at + 1
        for at, factor in enumerate(factors[:-1])
        if isinstance(factor, ClassName) and factor.spelling == name.spelling
    ]
    if len(cuts) != 1 or not isinstance(factors[cuts[0]], Operation):
        return None
    halves = [
        Product(factors[: cuts[0]], product.glues[: cuts[0]]),
        Product(factors[cuts[0] :], ("", *product.glues[cuts[0] + 1 :])),
    ]
    if any(only_word(Sum(((1, half),))) is None for half in halves):
        return None
    message = "a product stands in this list of generators\na comma is missing before the second operation"
    first, second = factors[cuts[0] - 1].at, factors[cuts[0]].at
    gap = Origin(first.file, first.end, first.end)
    known_places = first.file == second.file and side.at.start < first.end <= second.start
    if not known_places:
        return Finding("generator-list", "error", message, side.at)
    return Finding("generator-list", "error", message, gap, mend=",", certain=True)


def _missing(
    statement: Statement, known: Known, listed: list[Word], prime: int, n: int, order: int, name: ClassName
) -> list[Finding]:
    dots = any(is_dots(side) for side in statement.sides)
    top = max(degree_of(word, prime) for word in listed) + n
    said = [*_THROUGH.finditer(known.lead)] or [*_THROUGH.finditer(known.sentences)][:1]
    through = said[-1] if said else None
    if through is not None and not dots:
        limit = int(through[1])
        if top > limit:
            return []  # the list goes on beyond the degree: it is not what the words speak of
    elif dots:
        limit = top - 1
    else:
        return []
    if limit > MOST + n:
        return []
    absent = [word for word in generators(prime, n, order, limit) if word not in listed]
    if not absent:
        return []
    shown = ", ".join(f"{word_text(word)} {name.spelling}" for word in absent[:4])
    message = f"a generator is missing\n{shown}" + (" and more" if len(absent) > 4 else "")
    return [Finding("generator-list", "error", message, statement.at)]


_HEAD = r"\newcommand{\Sq}{\mathrm{Sq}}"
RULE = LintRule(
    name="generator-list",
    title="a list of generators has a wrong member or lacks one",
    why=(
        "The cohomology of K(G, n) is free on the admissible words of excess less than n on the fundamental "
        "class; a word of "
        "excess n gives a power, one of greater excess 0.  Where the draft says up to which degree the list "
        "goes, or the "
        "list ends in dots, it must not leave any out before that."
    ),
    bad=(
        _HEAD + r"The generators of $H^*(K(\mathbb{Z}/2,2))$ are $\iota_2, \Sq^1\iota_2, \Sq^2\iota_2, \ldots$",
        _HEAD + r"Through degree $7$ those of $K(\mathbb{Z}/2,3)$ are $\iota_3, \Sq^1\iota_3, \Sq^2\iota_3, "
        r"\Sq^2\Sq^1\iota_3$.",
        _HEAD + r"The generators for $K(\mathbb{Z},5)$ are $\iota_5, \Sq^2\iota_5\ \Sq^3\iota_5, \Sq^4\iota_5$.",
    ),
    good=(
        _HEAD + r"The generators of $H^*(K(\mathbb{Z}/2,2))$ are $\iota_2, \Sq^1\iota_2, \Sq^2\Sq^1\iota_2, \ldots$",
        _HEAD + r"Through degree $6$ those of $K(\mathbb{Z}/2,3)$ are $\iota_3, \Sq^1\iota_3, \Sq^2\iota_3, "
        r"\Sq^2\Sq^1\iota_3$.",
    ),
    check=check,
    rank=35,
    source="Serre 1953; Cartan 1954; May 1970, theorem 10.3",
)
