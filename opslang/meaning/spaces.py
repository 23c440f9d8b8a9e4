"""Spaces and coefficient groups, from surface to values."""

from __future__ import annotations

import re
from itertools import groupby

from opslang.meaning.indices import number
from opslang.meaning.scope import Scope, spelled
from opslang.report.diagnostic import Diagnostic, Refusal, error
from opslang.spaces.family import NotKnown
from opslang.spaces.space import WORDS, AnyFactor, Factor, NamedFactor, SpaceValue, class_order
from opslang.syntax import surface as sf

MOST_FACTORS = 1_000


def summand_text(order: int, copies: int = 1, local: int = 0) -> str:
    """Z, Z/m, Z^2, (Z/2)^2, Z_(p)."""
    name = f"Z_({local})" if local else "Z" if order == 0 else f"Z/{order}"
    if copies == 1:
        return name
    return f"{name}^{copies}" if order == 0 else f"({name})^{copies}"


def _eilenberg_maclane(space: sf.EilenbergMacLane) -> tuple[list[AnyFactor], str]:
    degree = number(space.degree, space.span)
    if degree < 1:
        raise Refusal(error("degree-range", f"K(G, n) needs n >= 1, and here n is {degree}", space.span))
    factors: list[AnyFactor] = []
    names = []
    for summand in space.group.summands:
        if summand.order < 0 or summand.copies < 0:
            raise Refusal(error("group", "a cyclic group is Z or Z/m with m >= 1", summand.span))
        if len(factors) + summand.copies > MOST_FACTORS:
            raise Refusal(error("group", f"a space may have at most {MOST_FACTORS} factors", summand.span))
        factors += [Factor(summand.order, degree, summand.local)] * summand.copies
        names.append(summand_text(summand.order, summand.copies, summand.local))
    return factors, f"K({' + '.join(names)}, {degree})"


def eilenberg_maclane_value(factors: tuple[Factor, ...]) -> SpaceValue:
    """K(G, n) of its factors, which have one degree."""
    groups = groupby(factors, key=lambda factor: (factor.order, factor.local))
    names = [summand_text(order, len(list(copies)), local) for (order, local), copies in groups]
    return SpaceValue(factors, f"K({' + '.join(names)}, {factors[0].degree})")


def space_value(space: sf.Space, scope: Scope) -> SpaceValue:
    """A space as a value; a Refusal where it is not known."""
    factors: list[AnyFactor] = []
    names = []
    parts = space.factors if isinstance(space, sf.SpaceProduct) else (space,)
    for part in parts:
        if isinstance(part, sf.EilenbergMacLane):
            found, name = _eilenberg_maclane(part)
        else:
            found, name = _named(part, scope)
        if factors and any(getattr(factor, "stands_first", False) for factor in found):
            message = "the Thom space of a declared bundle stands first in a product"
            raise Refusal(error("space-arguments", message, part.span))
        factors += found
        names.append(name)
        if len(factors) > MOST_FACTORS:
            raise Refusal(error("group", f"a space may have at most {MOST_FACTORS} factors", part.span))
    return SpaceValue(tuple(factors), " x ".join(names))


def _named(part: sf.NamedSpace, scope: Scope) -> tuple[list[AnyFactor], str]:
    """A space named in the script, or one of the named spaces."""
    if part.power is None and not part.arguments and part.name in scope.spaces:
        value = scope.spaces[part.name]
        return list(value.factors), value.text
    if part.name == "thom" and len(part.arguments) == 1:
        over = _thom_of_bundle(part, scope)
        if over is not None:
            return over
    if part.name in WORDS:
        factor = _named_factor(part, scope)
        try:
            return [factor], factor.family(scope.prime, 0).text
        except NotKnown as reason:
            raise Refusal(error("not-known", str(reason), part.span)) from reason
    numbered = _NUMBERED.fullmatch(part.name)
    if numbered is not None and part.power is None and not part.arguments:
        raise Refusal(_number_misplaced(part, numbered[1], int(numbered[2])))
    known = ", ".join(scope.spaces) or "none so far"
    raise Refusal(
        error(
            "unknown-space",
            f"no space is called {part.name}",
            part.span,
            f"spaces named in this script: {known}; others are K(G, n), {', '.join(WORDS)}",
        )
    )


_NUMBERED = re.compile(rf"({'|'.join(word for word in WORDS if word != 'thom')})_([0-9]+)")
_PROJECTIVE = ("RP", "CP", "HP")


def _number_misplaced(part: sf.NamedSpace, word: str, size: int) -> Diagnostic:
    """`BO_3`, `BO^3`, `RP(3)`."""
    mend = f"{word}^{size}" if word in _PROJECTIVE else f"{word}({size})"
    return error("space-arguments", f"the number of {word} stands elsewhere", part.span, f"write {mend}", mend)


def _thom_of_bundle(part: sf.NamedSpace, scope: Scope) -> tuple[list[AnyFactor], str] | None:
    """thom(E) for a declared bundle E; None where no bundle of that name is declared."""
    inner = part.arguments[0]
    if isinstance(inner, sf.Name) and isinstance(inner.index, (int, type(None))):
        found = scope.bundles.get(spelled((inner.letter, inner.index, inner.primes)))
        if found is not None:
            from opslang.meaning.bundles import NoBundle
            from opslang.meaning.thom import thom_space

            try:
                return thom_space(found, part.span)
            except NoBundle as reason:
                raise Refusal(error("bundle", str(reason), part.span)) from reason
    return None


def _named_factor(part: sf.NamedSpace, scope: Scope) -> NamedFactor:
    if part.name == "thom":
        inner = part.arguments[0] if len(part.arguments) == 1 else None
        base = _base(inner, scope)
        if base is None:
            raise Refusal(error("space-arguments", "thom takes one space in brackets: thom(BO(3))", part.span))
        return NamedFactor("thom", base=base)
    letters = []
    numbers: list[sf.Index] = []
    for argument in part.arguments:
        if isinstance(argument, sf.Number):
            numbers.append(argument.value)
        elif isinstance(argument, sf.Name) and argument.index is None and not argument.primes:
            letters.append(argument.letter)
        else:
            raise Refusal(
                error(
                    "space-arguments",
                    f"{part.name} takes a number or the letters of its classes in brackets",
                    part.span,
                )
            )
    if part.power is not None:
        numbers.append(part.power)
    projective = part.name in _PROJECTIVE
    misplaced = part.power is None if projective else part.power is not None
    if misplaced and len(numbers) == 1 and not letters and isinstance(numbers[0], int):
        raise Refusal(_number_misplaced(part, part.name, numbers[0]))
    most = 2 if part.name == "lens" else 1 if projective else 0
    if len(numbers) > 1 or len(letters) > most or (projective and part.power is None and numbers):
        how = (
            f"{part.name}^n, or {part.name}^n(a)"
            if projective
            else "lens(m)"
            if part.name == "lens"
            else f"{part.name}, or {part.name}(n)"
        )
        raise Refusal(error("space-arguments", f"{part.name} is written {how}", part.span))
    size = number(numbers[0], part.span) if numbers else None
    if part.name == "lens" and not size:
        raise Refusal(error("space-arguments", "lens takes the order of the group in brackets: lens(4)", part.span))
    if size is not None and (size < 0 or (size < 1 and not projective)):
        raise Refusal(
            error("degree-range", f"the number of {part.name} is at least 1, and here it is {size}", part.span)
        )
    return NamedFactor(part.name, size, tuple(letters))


def _base(inner: object, scope: Scope) -> NamedFactor | None:
    if isinstance(inner, sf.Name) and inner.index is None:
        inner = sf.NamedSpace(inner.letter)
    if not isinstance(inner, sf.NamedSpace):
        return None
    factors, _ = _named(inner, scope)
    return factors[0] if len(factors) == 1 and isinstance(factors[0], NamedFactor) else None


def coefficient_order(group: sf.Coefficients | None, prime: int) -> int | None:
    """The `Class.order` of declared coefficients; None where the group is 0 at the prime."""
    if group is None:
        return 1
    if len(group.summands) != 1 or group.summands[0].copies != 1:
        raise Refusal(error("group", "a class has coefficients in one cyclic group: Z, Z/m or F_p", group.span))
    summand = group.summands[0]
    if summand.field and summand.order != prime:
        raise Refusal(
            error(
                "coefficients-prime",
                f"the coefficients are F_{summand.order}, and the prime is {prime}",
                group.span,
                f"write `prime {summand.order}` first, or F_{prime}",
            )
        )
    return class_order(summand.order, prime, summand.local)
