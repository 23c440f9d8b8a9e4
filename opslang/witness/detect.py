"""One class on which all operations up to a degree act differently.  Knows Cartan's formula and nothing else.

The class is y_1 … y_a x_1 … x_b (p odd; the x in slots of their own), or x_1 … x_b with |x| = 1 (p = 2).  It
detects every sum of words with at most `a` Bocksteins and at most `b` for the sum of the indices of its squares or
powers: the coaction is prod (y + sum x^(p^i) tau_i) prod (sum x^(p^i) xi_i), where each monomial of the dual algebra in
question has a place of its own (Milnor 1958, sections 4 to 7; Serre 1953 at p = 2).

Every power of x that occurs is x^(p^k), and an operation takes it to itself or to x^(p^(k+1)).  What occurs is
symmetric in the x, so a *state* stands for a whole orbit sum: the levels of the `a` first variables one by one (-1 for
y, k for x^(p^k)), and for the others only how many stand at each level.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from math import comb

from opslang.ground.grading import Word

State = tuple[tuple[int, ...], tuple[int, ...]]
Orbits = dict[State, int]


def detecting_class(bocksteins: int, variables: int) -> Orbits:
    """The class y_1 … y_a x_1 … x_b as a sum of orbits: one term."""
    return {((-1,) * bocksteins, (variables,)): 1}


def _steps_singly(levels: tuple[int, ...], amount: int, p: int) -> Iterator[tuple[tuple[int, ...], int]]:
    """Each choice of variables to raise by one level, with what is left of the amount; raising x^(p^k) costs p^k."""
    partial: list[tuple[tuple[int, ...], int]] = [((), amount)]
    for level in levels:
        stay = [((*head, level), left) for head, left in partial]
        rise = (
            [] if level < 0 else [((*head, level + 1), left - p**level) for head, left in partial if left >= p**level]
        )
        partial = stay + rise
    yield from partial


def _steps_in_orbit(counts: tuple[int, ...], amount: int, p: int) -> Iterator[tuple[tuple[int, ...], int]]:
    """Each way to raise the symmetric variables by exactly the amount, with its multiplicity.

    If d_k variables leave level k, the new counts are n'_k = n_k - d_k + d_(k-1).  A monomial of the new orbit comes
    from as many monomials of the old one as there are choices, at each level, of the d_(k-1) that came from below.
    """
    partial: list[tuple[tuple[int, ...], int]] = [((), amount)]
    for level, count in enumerate(counts):
        cost = p**level
        partial = [((*up, d), left - d * cost) for up, left in partial for d in range(min(count, left // cost) + 1)]
    for up, left in partial:
        if left:
            continue
        arrive, leave = (0, *up), (*up, 0)
        fresh = tuple(n - d + e for n, d, e in zip((*counts, 0), leave, arrive))
        ways = 1
        for n, e in zip(fresh, arrive):
            ways = ways * comb(n, e) % p
        if ways:
            yield (fresh if fresh[-1] else fresh[:-1]), ways


def _raise(amount: int, f: Mapping[State, int], p: int) -> Orbits:
    total: Orbits = {}
    for (levels, counts), coefficient in f.items():
        for raised, left in _steps_singly(levels, amount, p):
            for fresh, ways in _steps_in_orbit(counts, left, p):
                state = (raised, fresh)
                total[state] = (total.get(state, 0) + coefficient * ways) % p
    return {state: coefficient for state, coefficient in total.items() if coefficient}


def _bockstein(f: Mapping[State, int], p: int) -> Orbits:
    total: Orbits = {}
    for (levels, counts), coefficient in f.items():
        sign = 1
        for place, level in enumerate(levels):
            if level < 0:
                state = ((*levels[:place], 0, *levels[place + 1 :]), counts)
                total[state] = (total.get(state, 0) + sign * coefficient) % p
                sign = -sign
    return {state: coefficient for state, coefficient in total.items() if coefficient}


def act_on_orbits(word: Word, f: Mapping[State, int], p: int) -> Orbits:
    """A word on a sum of orbits."""
    result = dict(f)
    for token in reversed(word):
        result = _bockstein(result, p) if token == 0 else _raise(token, result, p)
    return result


def _image(terms: Mapping[Word, int], start: Orbits, p: int) -> Orbits:
    total: Orbits = {}
    for word, coefficient in terms.items():
        for state, value in act_on_orbits(word, start, p).items():
            total[state] = (total.get(state, 0) + coefficient * value) % p
    return {state: coefficient for state, coefficient in total.items() if coefficient}


def same_action(a: Mapping[Word, int], b: Mapping[Word, int], p: int, upto: int | None = None) -> bool:
    """Whether two linear combinations of words are the same operation.

    They are compared on a class that detects every difference between them.  `upto` lowers the number of polynomial
    variables to at most that many: quicker, and then a True says no more than that they agree on that class.
    """
    words = [*a, *b]
    bocksteins = max((word.count(0) for word in words), default=0)
    variables = max((sum(word) for word in words), default=0)
    if upto is not None:
        variables = min(variables, upto)
    start = detecting_class(bocksteins, variables)
    return _image(a, start, p) == _image(b, start, p)
