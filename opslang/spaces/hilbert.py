"""How many monomials no leading monomial divides, degree by degree.  Knows exponents and degrees only.

Strategy.  The numerator of the Hilbert series of a monomial ideal, by splitting along a power of the commonest
variable until the leading monomials are powers of different variables.  Source: common practice.
"""

from __future__ import annotations

from opslang.spaces.groebner import Exponents, Work, divides

Series = dict[int, int]


def _minimal(leads: list[Exponents]) -> list[Exponents]:
    found: list[Exponents] = []
    for lead in sorted(set(leads), key=sum):
        if not any(divides(other, lead) for other in found):
            found.append(lead)
    return found


def _plus(f: Series, g: Series, shift: int, to: int) -> Series:
    """f + t^shift g."""
    result = dict(f)
    for d, c in g.items():
        if d + shift <= to:
            result[d + shift] = result.get(d + shift, 0) + c
    return {d: c for d, c in result.items() if c}


def numerator(degrees: tuple[int, ...], leads: list[Exponents], to: int, work: Work) -> Series:
    """The series times the product of the 1 - t^d, up to a degree.  Raises TooMany."""
    leads = _minimal([lead for lead in leads if sum([d * e for d, e in zip(degrees, lead)]) <= to])
    work.spend(1 + len(leads))
    if any(not any(lead) for lead in leads):
        return {}
    counts = [sum(1 for lead in leads if lead[at]) for at in range(len(degrees))]
    if max(counts, default=0) <= 1:
        result: Series = {0: 1}
        for lead in leads:
            negative = {d: -c for d, c in result.items()}
            result = _plus(result, negative, sum([d * e for d, e in zip(degrees, lead)]), to)
        return result
    at = max(range(len(degrees)), key=counts.__getitem__)
    powers = sorted(lead[at] for lead in leads if lead[at])
    # a pure power of the variable has the greatest exponent of all, so this one is no lead itself
    exponent = powers[(len(powers) - 1) // 2]
    pivot = tuple([exponent if i == at else 0 for i in range(len(degrees))])
    below = numerator(degrees, [*leads, pivot], to, work)
    quotients = [tuple([max(0, e - exponent) if i == at else e for i, e in enumerate(lead)]) for lead in leads]
    shift = exponent * degrees[at]
    above = numerator(degrees, quotients, to - shift, work) if shift <= to else {}
    return _plus(below, above, shift, to)


def dimensions(degrees: tuple[int, ...], leads: list[Exponents], to: int, work: Work) -> list[int]:
    """The number of monomials in each degree 0 … to that no lead divides.  Raises TooMany."""
    top = numerator(degrees, leads, to, work)
    found = [top.get(d, 0) for d in range(to + 1)]
    for degree in degrees:
        work.spend(to)
        for d in range(degree, to + 1):
            found[d] += found[d - degree]
    return found
