"""What sentences and formulas declare: degrees, coefficients, fundamental classes.  Knows English for mathematics.

A declaration is only what its sentence says word for word; a formula is one where it is nothing but a name in its group
(`x \\in H^n(X; G)`) or its degree (`|x| = n`).
"""

from __future__ import annotations

import re
from collections.abc import Callable, Iterator, Sequence

from attrs import evolve, frozen

from opslang.lint.context.facts import Saying, Spot
from opslang.lint.context.spaces import SpaceSaid, group_said, named_in, space_said, space_written, written
from opslang.lint.context.stream import SIGN, Paragraph
from opslang.lint.formula.integers import as_index
from opslang.lint.model import ClassName, Cohomology, Index, Origin, Statement, Sum
from opslang.lint.reading import Formula
from opslang.lint.symbolic.polynomial import Polynomial
from opslang.lint.symbolic.values import polynomial_of

F = SIGN
_AND = r"(?:\s*,?\s+and\s+|\s*,\s*|\s+or\s+|\s*;\s*)"
LIST = rf"{F}(?:{_AND}{F})*"
_WORD = r"(?:zero|one|two|three|four|five|six|seven|eight|nine|ten|\d+)"
NUMBER = rf"(?:{F}|{_WORD}\b)"
NUMBERS = rf"{NUMBER}(?:{_AND}{NUMBER})*"
_WORDS = "zero one two three four five six seven eight nine ten".split()
_KIND = r"(?:cohomology |integral |mod[- ]?\S+ |fixed |arbitrary |characteristic |homogeneous |nonzero |non-zero )*"
_NOUN = (
    rf"(?:(?:an?|the|any|some|every|two|three|both|our|its) )?{_KIND}(?:class|classes|element|elements|"
    rf"generator|generators|background|backgrounds)"
)
_CONDITIONAL = re.compile(
    r"\b(?:if|when|whenever|suppose|case|unless|would|needs?)\b[^.]{0,40}$|\b(?:for|on|where|with)\s+(?:all\s+)?$",
    re.IGNORECASE,
)

_OF_DEGREE = re.compile(
    rf"(?P<names>{LIST}),?\s+(?:(?:has|have|is|are|be|being|denotes?|stands? "
    rf"for)\s+)?(?:both\s+)?(?:{_NOUN}\s+)?(?:integral\s+)?(?:is\s+)?"
    rf"(?:of|in|has|have|with|having)?\s*(?:the\s+)?(?:cohomological\s+)?degrees?\s+(?P<degrees>{NUMBERS})",
    re.IGNORECASE,
)
_DEGREE_FIRST = re.compile(
    rf"(?:degree[- ](?P<degree>{NUMBER})\s+{_KIND}(?:class|"
    rf"classes)|{_NOUN}\s+of\s+degree\s+(?P<degree2>{NUMBER}))[, ]+(?P<names>{LIST})",
    re.IGNORECASE,
)
_LIES_IN = re.compile(
    rf"(?P<names>{LIST}),?\s+(?:(?:is|are|be|being|lies?)\s+)?(?:{_NOUN}\s+)?(?:in|of|from)\s+(?P<group>{F})",
    re.IGNORECASE,
)
_INTEGRAL_NOUN = re.compile(rf"\bintegral\s+(?:cohomology\s+)?(?:class|classes)\s+(?P<names>{LIST})", re.IGNORECASE)
_INTEGRAL = re.compile(
    rf"(?P<names>{LIST}),?\s+(?:which\s+)?(?:is|are|be|being|for)\s+(?:an?\s+|the\s+|both\s+)?(?:(?:mod\s+\S+\s+)?reductions?\s+of\s+(?:an?\s+)?)?integral(?:\s+class(?:es)?)?\b"
    rf"|(?:with|for)\s+(?P<names2>{LIST})\s+integral\b|(?P<names3>{LIST})\s+integral\s+of\s+degree",
    re.IGNORECASE,
)
_FUNDAMENTAL = re.compile(
    rf"(?P<names>{F})\s*,?\s*(?:(?:is|be|denotes?|for)\s+)?(?:the\s+)?fundamental\s+class\s+(?:of|in)\s+(?P<space>{F})"
    rf"|fundamental\s+class\s+(?P<names2>{F})\s+(?:of|in|on)\s+(?P<space2>{F})",
    re.IGNORECASE,
)
_NUMBERS_SAID = re.compile(
    rf"(?P<names>{LIST})\s+(?:are|is|be|being|denotes?)?\s*(?:an?\s+|the\s+|two\s+)?(?:odd\s+|even\s+|positive\s+|non-?negative\s+|fixed\s+)*"
    r"(?:integers?|numbers?|coordinates?|roots?|coefficients?|constants?|natural numbers?)\b"
    rf"|(?:coordinates?|roots?|integers?|numbers?)\s+(?P<names2>{LIST})",
    re.IGNORECASE,
)

_RING = re.compile(r"\b(?:ring|cohomology|algebra|generated|generators?|polynomial|exterior)\b", re.IGNORECASE)

_RING_SIGNS = re.compile(r"H\^\{?(?:\*|\\ast|\\bullet).*(?:\[|\\Lambda|\\bigwedge)")

Reader = Callable[[Formula], Sequence[Statement]]


@frozen
class Names:
    """What stands in the formula signs of one paragraph."""

    paragraph: Paragraph
    read: Reader

    def classes(self, text: str) -> list[tuple[ClassName, Formula]]:
        """The class names that a list of signs names; empty where one of the formulas is anything else."""
        found: list[tuple[ClassName, Formula]] = []
        for sign in re.findall(F, text):
            formula = self.paragraph.formula(sign)
            names = names_in(self.read(formula))
            if not names:
                return []
            found += [(name, formula) for name in names]
        return found

    def numbers(self, text: str) -> list[Index | None]:
        """The integers that a list of signs and words stands for."""
        return [self._number(part) for part in re.findall(NUMBER, text, re.IGNORECASE)]

    def _number(self, word: str) -> Index | None:
        if re.match(F, word):
            statements = self.read(self.paragraph.formula(word))
            only = statements[0] if len(statements) == 1 and len(statements[0].sides) == 1 else None
            return as_index(only.sides[0]) if only is not None else None
        lower = word.lower()
        return Index("number", (_WORDS.index(lower) if lower in _WORDS else int(word),))


def names_in(statements: Sequence[Statement]) -> list[ClassName]:
    """The names that a formula consists of, `x` or `x, y`; empty where it says more."""
    found: list[ClassName] = []
    for statement in statements:
        if statement.kind not in ("mention", "list"):
            return []
        for side in statement.sides:
            name = only_name(side)
            if name is None:
                return []
            found.append(name)
    return found


def only_name(side: object) -> ClassName | None:
    """The name that a side consists of."""
    if isinstance(side, Index) and side.kind == "name":
        return ClassName(str(side.parts[0]), at=side.at)
    if not isinstance(side, Sum) or len(side.terms) != 1:
        return None
    sign, product = side.terms[0]
    if sign != 1 or len(product.factors) != 1 or not isinstance(product.factors[0], ClassName):
        return None
    return product.factors[0]


# --- sentences ----------------------------------------------------------------------------------


def from_words(paragraph: Paragraph, read: Reader, spot_at: Callable[[int], Spot]) -> Iterator[Saying]:
    """What the sentences of a paragraph say of classes."""
    names = Names(paragraph, read)
    for saying, offset in _found_in_words(paragraph.text, names):
        before = paragraph.text[max(0, offset - 60) : offset]
        local = bool(_CONDITIONAL.search(before.rpartition(". ")[2]))
        yield in_its_ring(evolve(saying, spot=spot_at(offset), local=local, source="the text"), paragraph)


def in_its_ring(saying: Saying, paragraph: Paragraph) -> Saying:
    """A saying from a sentence that describes a ring: the class is its generator, of which more may be known."""
    if saying.space or saying.degree is None:
        return saying
    start, end = paragraph.sentences[saying.spot.sentence]
    signs = re.findall(F, paragraph.text[start:end])
    if not _RING.search(paragraph.text, start, end) and not any(_RING_SIGNS.search(paragraph.plain(s)) for s in signs):
        return saying
    for sign in signs:
        for space in named_in(paragraph.plain(sign)):
            generic = universal(space, saying.degree)
            if generic is not None:
                return evolve(saying, order=generic[0], space=generic[1])
    return evolve(saying, space="a ring that the text describes")


def _found_in_words(text: str, names: Names) -> Iterator[tuple[Saying, int]]:
    if "degree" in text:
        for found in _OF_DEGREE.finditer(text):
            yield from _degrees(names.classes(found["names"]), names.numbers(found["degrees"]), found.start("names"))
        for found in _DEGREE_FIRST.finditer(text):
            degree = found["degree"] or found["degree2"]
            yield from _degrees(names.classes(found["names"]), names.numbers(degree), found.start("names"))
    if "integral" in text:
        for found in (*_INTEGRAL.finditer(text), *_INTEGRAL_NOUN.finditer(text)):
            group = next(key for key, value in found.groupdict().items() if value)
            for name, formula in names.classes(found[group]):
                yield _saying(name, formula, order=0), found.start(group)
    if "fundamental" in text:
        for found in _FUNDAMENTAL.finditer(text):
            space = space_said(names.paragraph.formula(found["space"] or found["space2"]).tokens)
            for name, formula in names.classes(found["names"] or found["names2"]):
                yield from _fundamental(name, formula, space, found.start())
    for found in _LIES_IN.finditer(text):
        side = _group_of(names.read(names.paragraph.formula(found["group"])))
        if side is not None:
            for name, formula in names.classes(found["names"]):
                yield from _member(name, formula, side, found.start("names"))


def _degrees(
    found: list[tuple[ClassName, Formula]], degrees: list[Index | None], offset: int
) -> Iterator[tuple[Saying, int]]:
    degrees = degrees[: next((at for at, index in enumerate(degrees) if index is None), len(found))][: len(found)]
    if len(degrees) != 1 and len(degrees) != len(found):
        return
    # what follows behind a comma may be another formula: it is no degree, and nor is what comes after it
    for at, (name, formula) in enumerate(found):
        index = degrees[0] if len(degrees) == 1 else degrees[at]
        degree = polynomial_of(index) if index is not None else None
        if degree is not None:
            yield _saying(name, formula, degree=degree), offset


def _fundamental(name: ClassName, formula: Formula, space: SpaceSaid, offset: int) -> Iterator[tuple[Saying, int]]:
    if space.kind != "K" or space.group is None:
        return
    degree = degree_written(space.degree)
    yield (
        _saying(name, formula, degree=degree, order=space.group.order, order_text=space.group.text, space=space.text),
        offset,
    )


def degree_written(text: str) -> Polynomial | None:
    """A degree in plain spelling: 3, n, n+1."""
    total = Polynomial.of(0)
    for sign, part in re.findall(r"([+-]?)(\w+)", text):
        term = Polynomial.of(int(part)) if part.isdigit() else Polynomial.symbol(part)
        if not part.isdigit() and not part.isalpha():
            return None
        total = total - term if sign == "-" else total + term
    return total if re.fullmatch(r"\w+(?:[+-]\w+)*", text) else None


def _saying(name: ClassName, formula: Formula, **what: object) -> Saying:
    at = Origin(formula.file, formula.start, formula.end)
    spelling = name.spelling + (f"^{name.label}" if name.label else "")
    return Saying(spelling, Spot(0, 0, 0, 0), at=at, **what)  # type: ignore[arg-type]


# --- formulas -----------------------------------------------------------------------------------


def _group_of(statements: Sequence[Statement]) -> Cohomology | None:
    if len(statements) == 1 and len(statements[0].sides) == 1:
        side = statements[0].sides[0]
        return side if isinstance(side, Cohomology) else None
    return None


def from_formula(statements: Sequence[Statement], formula: Formula) -> Iterator[Saying]:
    """What a formula by itself declares."""
    for statement in statements:
        if statement.kind == "membership" and isinstance(statement.right, Cohomology):
            for side in statement.sides[:-1]:
                name = only_name(side)
                if name is not None:
                    yield from (saying for saying, _ in _member(name, formula, statement.right, 0))
        elif statement.kind == "degree":
            yield from _length(statement, formula)


def _length(statement: Statement, formula: Formula) -> Iterator[Saying]:
    if len(statement.sides) != 2 or statement.sign not in ("=", ":="):
        return
    left, right = statement.sides
    if not isinstance(left, Index) or left.kind != "length":
        return
    name = only_name(left.parts[0])
    number = right if isinstance(right, Index) else as_index(right)
    degree = polynomial_of(number) if number is not None else None
    if name is not None and degree is not None:
        yield _saying(name, formula, degree=degree)


def _member(name: ClassName, formula: Formula, group: Cohomology, offset: int) -> Iterator[tuple[Saying, int]]:
    """A class in H^n(X; G)."""
    if group.letter != "H" or group.lower or group.degree is None:
        return
    degree = polynomial_of(group.degree)
    if degree is None:
        return
    coefficients = group_said(written(group.coefficients)) if group.coefficients else None
    space = space_said(group.space)
    order = coefficients.order if coefficients is not None else None
    order_text = coefficients.text if coefficients is not None else ""
    text = space.text
    if space.kind == "K" and space.group is not None and degree_written(space.degree) == degree:
        order, order_text = space.group.order, space.group.text
    elif generic := universal(space, degree):
        order, text = generic
    yield _saying(name, formula, degree=degree, order=order, order_text=order_text, space=text), offset


def universal(space: SpaceSaid, degree: Polynomial) -> tuple[int, str] | None:
    """Order and universal example of the generator of a projective space whose dimension has no number."""
    if space.degree.isdigit():
        return None
    if space.kind == "RP" and degree.constant == 1:
        return 1, "K(Z/2,1)"
    return (0, "K(Z,2)") if space.kind == "CP" and degree.constant == 2 else None


def numbers_said(paragraph: Paragraph, read: Reader) -> list[ClassName]:
    """Names that the paragraph says are numbers, coordinates or roots."""
    names = Names(paragraph, read)
    found: list[ClassName] = []
    for one in _NUMBERS_SAID.finditer(paragraph.text):
        found += [name for name, _ in names.classes(one["names"] or one["names2"])]
    return found


def alias_of(formula_text: str) -> tuple[str, SpaceSaid] | None:
    """`L=K(Z/4,1)`, `P_n=K(Z,n)`: a letter that stands for a space."""
    left, sign, right = formula_text.rstrip(".,;").partition("=")
    if not sign or not re.fullmatch(r"[A-Z](?:_\{?\w+\}?)?", left):
        return None
    space = space_written(right)
    return (left, space) if space.kind not in ("letter", "other") else None
