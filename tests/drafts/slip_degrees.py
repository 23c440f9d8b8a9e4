r"""Slips that show in the degrees, or in what is said about them: each a function from a true formula to changes of it.

A change is a span of the quote, its new text and the reason.  Nothing here reads a file or draws lots.
"""

from __future__ import annotations

import re
from collections.abc import Iterator
from dataclasses import dataclass

from drafts.corpus import Mark


@dataclass(frozen=True)
class Change:
    """`text` in place of quote[start:end]."""

    start: int
    end: int
    text: str
    why: str
    certainty: str


BRACED = r"\{(?:[^{}]|\{[^{}]*\})*\}"
HEADS = r"(?:\\(?:Sq|Square|PP|Pp|Pow|P)(?![A-Za-z])|\\mathrm\{Sq\}|(?<![\\A-Za-z])(?:Sq|P(?=\^))|\\mathcal\{P\})"
INDEX = re.compile(HEADS + rf"\s*\^?\s*({BRACED}|\d|[a-z](?![a-z]))")
CLASS_INDEX = re.compile(rf"(?<![A-Za-z\\])(?:w|c|\\iota)_({BRACED}|\d|[a-z])")
POWER = re.compile(rf"(?:(?<![A-Za-z\\_])[a-z]|\b[wc]_\d|\\iota_\d|\))\^({BRACED}|\d)")
HOMOGENEOUS = {
    "adem", "cartan", "wu", "top-square", "transgression", "conjugation", "milnor", "thom", "chern", "naturality",
    "bockstein", "adem-template", "cartan-template", "wu-template",
}  # fmt: skip
NESTED = re.compile(r"\\(?:cdots|ldots|dots|ne(?![a-z])|neq|begin|overline)|>")


def raised(index: str) -> str:
    """An index one larger, without its braces: 2 to 3, n-1 to n, k to k+1."""
    inner = index[1:-1] if index.startswith("{") else index
    if inner.isdigit():
        return str(int(inner) + 1)
    if tail := re.search(r"([+-])(\d+)$", inner):
        value = int(tail[1] + tail[2]) + 1
        return inner[: tail.start()] + (f"{value:+d}" if value else "")
    return inner + "+1"


def wrapped(inner: str) -> str:
    """An index as TeX wants it: braces for more than one sign."""
    return inner if len(inner) == 1 else f"{{{inner}}}"


def claim_of(quote: str) -> str:
    r"""The part of a quote before its hypothesis (`\text{for ...}`, `\qquad(0<a<2b)`, words after the dollars)."""
    cut = re.search(r"\\q?quad|\\text\{(?!Sq)|\\(?:pmod|tag)|\(0<|(?<=.)\$(?=.)| for (?:all|every)", quote)
    return quote[: cut.start()] if cut else quote


def is_zero(side: str) -> bool:
    """Whether a side of a relation is 0, whatever stands around it."""
    return re.sub(r"[&$\s.,]|\\[,!;()\[\]]|\\q?quad", "", side) == "0"


def homogeneous(mark: Mark) -> bool:
    """A relation of one degree, with no side 0 and no side equal to 0 by a rule."""
    claim = claim_of(mark.quote)
    if mark.kind not in HOMOGENEOUS or NESTED.search(mark.quote) or not re.search(r"=|\\mapsto", claim):
        return False
    return not any(is_zero(side) for side in re.split(r"=|\\mapsto|\\why\{[^{}]*\{[^{}]*\}\}", claim))


def index_by_one(mark: Mark) -> Iterator[Change]:
    """The index of one operation, one too large."""
    if homogeneous(mark):
        for found in INDEX.finditer(claim_of(mark.quote)):
            new = raised(found[1])
            why = f"the term with index {new} has one degree more (at p = 2; 2(p-1) more at odd p) than the others"
            yield Change(*found.span(1), wrapped(new), why, "degrees")


def class_by_one(mark: Mark) -> Iterator[Change]:
    """The index, that is the degree, of one class on the right side, one too large."""
    claim = claim_of(mark.quote)
    if homogeneous(mark) and mark.kind in ("wu", "wu-template", "chern", "transgression"):
        for found in CLASS_INDEX.finditer(claim, claim.find("=") + 1):
            new = raised(found[1])
            yield Change(*found.span(1), wrapped(new), f"the class with index {new} has the wrong degree", "degrees")


def power_by_one(mark: Mark) -> Iterator[Change]:
    """The exponent of a power of a class, one too large."""
    if homogeneous(mark) and mark.kind in ("top-square", "cartan", "wu", "bockstein", "thom", "milnor"):
        for found in POWER.finditer(claim_of(mark.quote)):
            new = raised(found[1])
            yield Change(*found.span(1), wrapped(new), f"the power {new} adds the degree of the class", "degrees")


def wrong_total(mark: Mark) -> Iterator[Change]:
    """The indices of a Cartan sum add up to one too many."""
    if mark.kind == "cartan-template":
        for found in re.finditer(r"\\sum_\{[^{}=]*\+[^{}=]*=\s*([a-z])\}", mark.quote):
            yield Change(*found.span(1), f"{found[1]}+1", "the summands have one degree too many", "degrees")


def weak_instability(mark: Mark) -> Iterator[Change]:
    r"""`>` becomes `\ge`, or turns round, in a statement of instability."""
    if mark.kind != "vanishing" or not re.search(r"Sq|\\P", mark.quote):
        return
    for found in re.finditer(r"(?<=[a-z} ])>(?=\s*[a-zA-Z|\\])", mark.quote):
        if "{" not in mark.quote[found.start() - 3 : found.start()]:
            yield Change(*found.span(), r"\ge ", "the top square is the square of the class, not 0", "counterexample")
            yield Change(*found.span(), "<", "below the degree squares need not vanish", "counterexample")


def signature_degree(mark: Mark) -> Iterator[Change]:
    """The degree of the target is one too large, or the reduced power is counted as i(p-1)."""
    if mark.kind != "signature":
        return
    targets = list(re.finditer(rf"(?:H\^|\\coh\s*)({BRACED}|\w)", mark.quote))
    if not targets or len(targets) < 2 or not re.search(r"\\to|\\longrightarrow", mark.quote):
        return
    last = targets[-1]
    if "2i(p-1)" in last[1]:
        new = last[1].replace("2i(p-1)", "i(p-1)")
        yield Change(*last.span(1), new, "a reduced power of number i has degree 2i(p-1)", "degrees")
    elif last[1] != r"{*}":
        yield Change(*last.span(1), f"{{{raised(last[1])}}}", "the target has one degree too many", "degrees")


def claimed_degree(mark: Mark) -> Iterator[Change]:
    """A degree that is claimed outright, one too large."""
    if mark.kind == "degree":
        for found in re.finditer(r"\\in\s*H\^(\{[^{}]*\}|\d)", mark.quote):
            yield Change(*found.span(1), wrapped(raised(found[1])), "the class has one degree less", "degrees")
        for found in re.finditer(r"\|=2\^(?:\{[^{}]*\}|\w)(-1)", mark.quote):
            yield Change(*found.span(1), "", "the degree is one less than a power of two", "degrees")
        for found in re.finditer(r",n\+(\d)\)", mark.quote):
            new = str(int(found[1]) + 1)
            yield Change(*found.span(1), new, "the class has one degree less than the space wants", "degrees")


def vanishing_at_the_degree(mark: Mark) -> Iterator[Change]:
    """A square just above the degree is lowered to the degree, where it is the square of the class."""
    if mark.kind == "vanishing" and (degree := re.search(r"of degree (\d)", mark.needs)):
        above = str(int(degree[1]) + 1)
        for found in INDEX.finditer(mark.quote):
            if found[1].strip("{}") == above and len(INDEX.findall(mark.quote)) == 1:
                yield Change(*found.span(1), degree[1], "the top square is the square of the class", "counterexample")
