"""Plain statements that begin with a keyword, a pattern each.  Gives None for whatever is not surely plain."""

from __future__ import annotations

import re
from collections.abc import Callable

from opslang.ground.source import Span
from opslang.syntax.plain import LETTER, LOWERED, NUMBER, sums, value_of
from opslang.syntax.spellings import WORDS
from opslang.syntax.surface import (
    AbbreviateStatement,
    BasisStatement,
    Coefficients,
    DeclareStatement,
    EilenbergMacLane,
    Name,
    NamedSpace,
    OnStatement,
    PrimeStatement,
    SeriesStatement,
    Space,
    SpaceProduct,
    SpaceStatement,
    Statement,
    Summand,
)

_GAP = r"[ \t]*"
_SPACE = r"[ \t]+"
_GROUP = rf"(?:Z(?:/{NUMBER}|_{NUMBER})?|F_{NUMBER})"
_LABEL = r"[A-Z][A-Za-z]*"
_DEGREE = rf"(?:{NUMBER}|\{{{NUMBER}\}})"
_FACTOR = rf"(?:K\({_GAP}{_GROUP}{_GAP},{_GAP}{NUMBER}{_GAP}\)|{_LABEL}(?![A-Za-z0-9_^(']))"
_SPACES = rf"{_FACTOR}(?:(?:{_SPACE}x{_SPACE}|{_GAP}×{_GAP}){_FACTOR})*"

_NAME = re.compile(rf"({LETTER})({LOWERED})?('*)")
_GIVEN = re.compile(rf"{_GAP}let{_SPACE}({LETTER}{LOWERED}?'*){_GAP}=")
_DECLARED = re.compile(
    rf"{_GAP}(let{_SPACE}({LETTER}{LOWERED}?'*(?:{_GAP},{_GAP}{LETTER}{LOWERED}?'*)*){_SPACE}in{_SPACE}H"
    rf"\^({_DEGREE})(?:\({_GAP}({_LABEL})?{_GAP}(?:[;,]{_GAP}({_GROUP}))?{_GAP}\))?){_GAP}\Z"
)
# Compiled when first asked for: a script of relations needs none of these.
_PRIME = rf"{_GAP}(prime{_SPACE}({NUMBER})){_GAP}\Z"
_ON = rf"{_GAP}(on{_SPACE}({_SPACES})){_GAP}\Z"
_SPACE_IS = rf"{_GAP}(space{_SPACE}({_LABEL}){_GAP}={_GAP}({_SPACES})){_GAP}\Z"
_BASIS = rf"{_GAP}(basis{_SPACE}H\^({_DEGREE})(?:\({_GAP}({_SPACES}){_GAP}\))?){_GAP}\Z"
_SERIES = rf"{_GAP}(series(?:{_SPACE}({_SPACES}))?{_SPACE}to{_SPACE}({NUMBER})){_GAP}\Z"
_ONE_FACTOR = re.compile(rf"K\({_GAP}({_GROUP}){_GAP},{_GAP}({NUMBER}){_GAP}\)|({_LABEL})")
_READ = re.compile(rf"([ZF])(?:[/_]({NUMBER}))?")


def _name(text: str, start: int, end: int) -> Name | None:
    found = _NAME.fullmatch(text, start, end)
    if found is None:
        return None
    letter, index, primes = found.groups()
    return Name(letter, None if index is None else value_of(index), len(primes), (start, end))


def _group(text: str, span: Span) -> Coefficients | None:
    found = _READ.fullmatch(text, *span)
    if found is None:
        return None
    order = int(found.group(2) or 0)
    return Coefficients((Summand(order, 1, found.group(1) == "F", 0, span),), span)


def _space(text: str, span: Span) -> Space | None:
    factors: list[EilenbergMacLane | NamedSpace] = []
    for found in _ONE_FACTOR.finditer(text, *span):
        label = found.group(3)
        if label is not None:
            if label in WORDS and label not in ("P", "Q"):
                return None
            factors.append(NamedSpace(label, None, (), found.span()))
            continue
        group = _group(text, found.span(1))
        if group is None:
            return None
        factors.append(EilenbergMacLane(group, int(found.group(2)), found.span()))
    return factors[0] if len(factors) == 1 else SpaceProduct(tuple(factors), span)


def _let(text: str) -> Statement | None:
    given = _GIVEN.match(text)
    if given is not None:
        name = _name(text, *given.span(1))
        sides = sums(text, given.end(), len(text))
        if name is None or not sides or len(sides) > 1:
            return None
        begin = given.start() + given.group().index("let")
        return AbbreviateStatement(name, sides[0], (begin, sides[0].span[1]))
    found = _DECLARED.match(text)
    if found is None or found.group(4) in WORDS:
        return None
    names = tuple(_name(text, *one.span()) for one in _NAME.finditer(text, *found.span(2)))
    coefficients = None if found.group(5) is None else _group(text, found.span(5))
    degree = int(found.group(3).strip("{}"))
    return DeclareStatement(names, degree, found.group(4), coefficients, found.span(1))  # type: ignore[arg-type]


def _prime(text: str) -> Statement | None:
    found = re.match(_PRIME, text)
    return None if found is None else PrimeStatement(int(found.group(2)), found.span(1))


def _on(text: str) -> Statement | None:
    found = re.match(_ON, text)
    space = None if found is None else _space(text, found.span(2))
    return None if found is None or space is None else OnStatement(space, found.span(1))


def _space_is(text: str) -> Statement | None:
    found = re.match(_SPACE_IS, text)
    if found is None or found.group(2) in WORDS:
        return None
    space = _space(text, found.span(3))
    return None if space is None else SpaceStatement(found.group(2), space, found.span(1))


def _basis(text: str) -> Statement | None:
    found = re.match(_BASIS, text)
    if found is None:
        return None
    degree = int(found.group(2).strip("{}"))
    if found.group(3) is None:
        return BasisStatement(degree, None, found.span(1))
    space = _space(text, found.span(3))
    return None if space is None else BasisStatement(degree, space, found.span(1))


def _series(text: str) -> Statement | None:
    found = re.match(_SERIES, text)
    if found is None:
        return None
    if found.group(2) is None:
        return SeriesStatement(None, int(found.group(3)), found.span(1))
    space = _space(text, found.span(2))
    return None if space is None else SeriesStatement(space, int(found.group(3)), found.span(1))


READERS: dict[str, Callable[[str], Statement | None]] = {
    "let": _let,
    "prime": _prime,
    "on": _on,
    "space": _space_is,
    "basis": _basis,
    "series": _series,
}
