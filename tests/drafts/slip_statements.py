r"""Slips in numeric words, general statements, lists and bindings: functions from a true formula to changes of it.

The degrees mostly agree after these, so that only the value, the range, a binomial or a letter gives them away.
"""

from __future__ import annotations

import re
from collections.abc import Iterator

from drafts.corpus import Mark
from drafts.slip_degrees import INDEX, Change, raised, wrapped
from drafts.squares import differ, read_relation

BINOMIAL = re.compile(r"\\binom\{([^{}]*)\}\{([^{}]*)\}|\{([^{}]*?)\\(?:choose|atop)\s*([^{}]*)\}")
ADEM = ("adem-template",)


def index_in_vanishing(mark: Mark) -> Iterator[Change]:
    """A numeric relation with a side 0, one index changed: false by evaluation."""
    if (relation := read_relation(mark.quote)) and not all(relation):
        for found in INDEX.finditer(mark.quote):
            new = wrapped(raised(found[1]))
            after = read_relation(mark.quote[: found.start(1)] + new + mark.quote[found.end(1) :])
            if after and differ(*after):
                yield Change(*found.span(1), new, "the word is not 0 any more", "evaluation")


def swapped_indices(mark: Mark) -> Iterator[Change]:
    """Two neighbours of a numeric word in the wrong order: degrees agree, values do not."""
    if not read_relation(mark.quote):
        return
    for found in re.finditer(r"\\Sq\^(\d|\{\d+\})\\Sq\^(\d|\{\d+\})", mark.quote):
        new = rf"\Sq^{found[2]}\Sq^{found[1]}"
        after = read_relation(mark.quote[: found.start()] + new + mark.quote[found.end() :])
        if found[1] != found[2] and after and differ(*after):
            yield Change(*found.span(), new, "the two squares do not commute", "evaluation")


def dropped_term(mark: Mark) -> Iterator[Change]:
    """The last term of a numeric sum is gone."""
    found = re.search(r"\+[^+=]*$", mark.quote.rstrip("$"))
    if not found or not read_relation(mark.quote):
        return
    after = read_relation(mark.quote[: found.start()] + mark.quote[found.end() :])
    if after and differ(*after):
        yield Change(*found.span(), "", "the term that is gone is a member of the admissible basis", "evaluation")


def binomial_upper(mark: Mark) -> Iterator[Change]:
    """The -1 in the upper entry of a binomial is forgotten."""
    if mark.kind not in ("adem-template", "wu-template"):
        return
    why = {
        "adem-template": "Sq^1 Sq^1 (or Sq^7) gets a term too many, P^1 P^b the factor b, P^2 beta P^1 a factor 2",
        "wu-template": "Sq^1 w_2 (or Sq^2 c_2) loses its second term",
    }[mark.kind]
    for found in BINOMIAL.finditer(mark.quote):
        group = 1 if found[1] is not None else 3
        upper = found[group]
        if re.search(r"(?<!p)-1", upper):
            yield Change(*found.span(group), re.sub(r"(?<!p)-1", "", upper, count=1), why, "counterexample")


def binomial_lower(mark: Mark) -> Iterator[Change]:
    """The factor of the summation variable in the lower entry is forgotten: a-2j becomes a-j."""
    if mark.kind not in ADEM:
        return
    for found in BINOMIAL.finditer(mark.quote):
        group = 2 if found[1] is not None else 4
        lower = found[group]
        new = re.sub(r"-(?:2|p)(?=[a-z])", "-", lower, count=1)
        why = "Sq^2 Sq^2 loses its last term; at p = 3 so do P^3 P^2, P^3 beta P^1, P^4 beta P^2"
        if "mathclap" not in mark.quote:
            yield Change(*found.span(group), new, why, "counterexample")


def wrong_limit(mark: Mark) -> Iterator[Change]:
    """The upper limit of an Adem sum made from the other index, or cut to a half."""
    if mark.kind not in ADEM:
        return
    for found in re.finditer(r"\\lfloor\s*([a-z])/(2|p)\\rfloor", mark.quote):
        word = re.search(r"\^\{?([a-z])\}?\\(?:bo)?.*?\^\{?([a-z])\}?", mark.quote)
        other = word[2] if word else "b"
        why = "at a = 4, b = 3 (odd: p = 3, a = 3, b = 2 or 1) the only term, or one of them, is beyond this limit"
        yield Change(*found.span(1), other, why, "counterexample")
        if found[2] == "2":
            yield Change(*found.span(2), "4", "Sq^2 Sq^2 loses its only term, at j = 1", "counterexample")


def wrong_start(mark: Mark) -> Iterator[Change]:
    """A sum begins one too late."""
    if mark.kind in ("adem-template", "wu-template", "cartan-template", "conjugation"):
        for found in re.finditer(r"\\sum_\{[a-z]=(0)\}", mark.quote):
            why = "the term with 0 is missing: Sq^3 = Sq^1 Sq^2, w_k w_m, x Sq^k y, or chi Sq^1"
            yield Change(*found.span(1), "1", why, "counterexample")


def dropped_range(mark: Mark) -> Iterator[Change]:
    """The range of an Adem relation is left out where nothing else gives it."""
    if mark.needs == "range in the formula" and (found := re.search(r"\\qquad\(0<[^()]*\)", mark.quote)):
        why = "without a range the sum is 0 at (4, 1), and Sq^4 Sq^1 is not"
        yield Change(*found.span(), "", why, "convention")


def turned_range(mark: Mark) -> Iterator[Change]:
    """The range of an Adem relation with the inequality the wrong way."""
    if mark.kind in ADEM and (found := re.search(r"0<([a-z])<2([a-z])", mark.quote)):
        why = "at (4, 1) the left side is admissible and the sum is 0"
        yield Change(*found.span(), f"{found[1]}>2{found[2]}>0", why, "convention")


def turned_binomial(mark: Mark) -> Iterator[Change]:
    """The entries of the binomial in the action on powers are interchanged."""
    if mark.kind == "cartan":
        for found in re.finditer(r"\\binom\{([^{}]*)\}\{([^{}]*)\}", mark.quote):
            new = rf"\binom{{{found[2]}}}{{{found[1]}}}"
            yield Change(*found.span(), new, "Sq^1(a^3) = a^4, and P^1 of the generator, would be 0", "counterexample")


def dropped_summand(mark: Mark) -> Iterator[Change]:
    """The last monomial of a value is gone; only where the monomials are independent."""
    free = mark.draft in ("short_words", "bundle_notes", "unary_square") and "closed" not in mark.needs
    if not free or mark.kind not in ("cartan", "wu", "chern") or mark.quote.count("=") > 1 or "sum" in mark.quote:
        return
    quote = mark.quote.rstrip("$")
    pluses = [i for i, sign in enumerate(quote) if sign == "+" and balanced(quote[i:])]
    if pluses and pluses[-1] > quote.index("="):
        yield Change(pluses[-1], len(quote), "", "the monomials are independent in the universal case", "structure")


def balanced(text: str) -> bool:
    """Whether every bracket that closes in a text was opened in it."""
    depth = 0
    for sign in text:
        depth += (sign in "{(") - (sign in "})")
        if depth < 0:
            return False
    return True


def wrong_excess(mark: Mark) -> Iterator[Change]:
    """The excess of a word, one too large."""
    if mark.kind == "excess" and (found := re.search(r"e\([\d,]+\)=(\d+)", mark.quote)):
        yield Change(*found.span(1), str(int(found[1]) + 1), "the excess is 2 i_1 - |I|, one less", "structure")


def wrong_basis(mark: Mark) -> Iterator[Change]:
    """The bound on the excess admits squares, or admissibility is said with the wrong inequality."""
    if mark.kind != "basis":
        return
    for found in re.finditer(r"<(?=\s*[nq])", mark.quote):
        why = "words of excess equal to the degree give squares of generators, which are no generators"
        yield Change(*found.span(), r"\le ", why, "structure")
    for found in re.finditer(r"\\ge(?=2I)", mark.quote):
        yield Change(*found.span(), ">", "the word Sq^2 Sq^1 is lost", "structure")
    for found in re.finditer(r"(?<=\\ge)2(?=I)", mark.quote):
        yield Change(*found.span(), " ", "Sq^3 Sq^2 would be let in, and it is 0", "structure")


def generators(mark: Mark) -> list[re.Match[str]]:
    """The separators of a list of generators on one fundamental class."""
    if mark.kind != "list" or "iota" not in mark.quote:
        return []
    return list(re.finditer(r",(?:\\ |\\quad|\s)*(?=\\|[a-z])", mark.quote))


def dropped_comma(mark: Mark) -> Iterator[Change]:
    """Two generators become a product."""
    for found in generators(mark):
        if "quad" not in found[0] and "dots" not in mark.quote[found.end() : found.end() + 7]:
            why = "the two neighbours are multiplied, and both are missing from the list"
            yield Change(found.start(), found.start() + 1, "", why, "structure")


def dropped_generator(mark: Mark) -> Iterator[Change]:
    """A generator from the middle of the list is missing."""
    commas = generators(mark)
    for before, after in zip(commas, commas[1:]):
        gone = mark.quote[before.end() : after.start()]
        if "dots" not in mark.quote[after.end() : after.end() + 7]:
            yield Change(before.end(), after.end(), "", f"{gone} is missing, and later ones are there", "structure")


def inadmissible_member(mark: Mark) -> Iterator[Change]:
    r"""`\Sq^2\Sq^1` is written the wrong way round."""
    if mark.kind == "list":
        for found in re.finditer(r"(?<!\d)\\Sq\^2\\Sq\^1", mark.quote):
            why = "Sq^1 Sq^2 is not admissible, and Sq^2 Sq^1 is missing"
            yield Change(*found.span(), r"\Sq^1\Sq^2", why, "structure")


def wrong_sign(mark: Mark) -> Iterator[Change]:
    """A sign at an odd prime is lost, or a coefficient."""
    if mark.kind == "adem-template":
        for found in re.finditer(r"\(-1\)\^\{[a-z]\+j(?:-1)?\}", mark.quote):
            yield Change(*found.span(), "(-1)^{j}", "P^1 P^1 (or P^1 beta P^1) gets the wrong sign", "counterexample")
    if mark.kind == "cartan-template":
        for found in re.finditer(r"\(-1\)\^\{\|[a-z]\|\}", mark.quote):
            yield Change(*found.span(), "", "for x of odd degree at an odd prime the sign is -", "counterexample")
    if mark.kind == "conjugation" and "p odd" in mark.needs:
        for found in re.finditer(r"=-(?=\\|\s*\\)", mark.quote.replace("&", "")):
            shift = mark.quote.index("-", mark.quote.index("="))
            if "&" in mark.quote or found.end() - 1 == shift:
                yield Change(shift, shift + 1, "", "the antipode of a primitive is its negative", "counterexample")
    if mark.kind == "adem" and "p=3" in mark.needs and (coefficient := re.search(r"=(2)\\", mark.quote)):
        yield Change(*coefficient.span(1), "", "P^1 P^1 = 2 P^2, and P^2 is not 0", "counterexample")


def loose_variable(mark: Mark) -> Iterator[Change]:
    """The summation variable is renamed in one place and no longer bound there."""
    if not (found := re.search(r"\\sum(?:_\{([a-z])[=+]|_([a-z])(?![a-z])|_\{\\mathclap\{0<([a-z]))", mark.quote)):
        return
    variable = found[1] or found[2] or found[3]
    letters = re.sub(r"\\[A-Za-z]+", "", mark.quote)
    new = next(letter for letter in "lrsmuvq" if letter not in letters)
    body = mark.quote.find(variable, mark.quote.find("}", found.end()) if found[1] or found[3] else found.end())
    for use in re.finditer(rf"(?<![A-Za-z\\]){variable}(?![A-Za-z])", mark.quote):
        if use.start() >= body and "-" + variable not in mark.quote[use.start() - 1 : use.end()]:
            yield Change(*use.span(), new, f"nothing binds {new}", "binding")


def lost_braces(mark: Mark) -> Iterator[Change]:
    """An index of two digits without its braces."""
    for found in re.finditer(r"\\Sq\^(\{\d\d\})", mark.quote):
        why = "TeX takes the first digit only for the index"
        yield Change(*found.span(1), found[1][1:-1], why, "notation")
