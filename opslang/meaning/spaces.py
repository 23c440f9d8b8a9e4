"""Spaces and coefficient groups, from surface to values."""

from __future__ import annotations

from opslang.ir.spaces import Factor, SpaceValue, class_order
from opslang.meaning.indices import number
from opslang.meaning.scope import Scope
from opslang.report.diagnostic import Refusal, error
from opslang.syntax import surface as sf

MOST_FACTORS = 1_000
KNOWN = ("BO", "BSO", "BSpin", "BU", "BSU", "BSp", "RP", "CP", "HP", "lens", "thom", "S")


def summand_text(order: int, copies: int = 1) -> str:
    """Z, Z/m, Z^2, (Z/2)^2."""
    name = "Z" if order == 0 else f"Z/{order}"
    if copies == 1:
        return name
    return f"{name}^{copies}" if order == 0 else f"({name})^{copies}"


def _eilenberg_maclane(space: sf.EilenbergMacLane) -> tuple[list[Factor], str]:
    degree = number(space.degree, space.span)
    if degree < 1:
        raise Refusal(error("degree-range", f"K(G, n) needs n >= 1, and here n is {degree}", space.span))
    factors: list[Factor] = []
    names = []
    for summand in space.group.summands:
        if summand.order < 0 or summand.copies < 0:
            raise Refusal(error("group", "a cyclic group is Z or Z/m with m >= 1", summand.span))
        if len(factors) + summand.copies > MOST_FACTORS:
            raise Refusal(error("group", f"a space may have at most {MOST_FACTORS} factors", summand.span))
        factors += [Factor(summand.order, degree)] * summand.copies
        names.append(summand_text(summand.order, summand.copies))
    return factors, f"K({' + '.join(names)}, {degree})"


def space_value(space: sf.Space, scope: Scope) -> SpaceValue:
    """A space as a value; a Refusal where it is not known."""
    factors: list[Factor] = []
    names = []
    parts = space.factors if isinstance(space, sf.SpaceProduct) else (space,)
    for part in parts:
        if isinstance(part, sf.EilenbergMacLane):
            found, name = _eilenberg_maclane(part)
        else:
            value = _named(part, scope)
            found, name = list(value.factors), value.text
        factors += found
        names.append(name)
        if len(factors) > MOST_FACTORS:
            raise Refusal(error("group", f"a space may have at most {MOST_FACTORS} factors", part.span))
    return SpaceValue(tuple(factors), " x ".join(names))


def _named(part: sf.NamedSpace, scope: Scope) -> SpaceValue:
    plain = part.power is None and not part.arguments
    if plain and part.name in scope.spaces:
        return scope.spaces[part.name]
    if part.name in KNOWN:
        raise Refusal(error("not-yet-supported", f"the space {part.name} is not yet supported", part.span))
    known = ", ".join(scope.spaces) or "none so far"
    raise Refusal(
        error("unknown-space", f"no space is called {part.name}", part.span, f"spaces named in this script: {known}; or write K(G, n)")
    )


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
    return class_order(summand.order, prime)
