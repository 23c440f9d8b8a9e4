"""The nonzero binomials of an Adem row, found digit by digit.  Knows numbers and nothing else.

A row is the list of the j >= 0 with C(n - (p-1) j, k - p j) nonzero modulo p, with its values.  Writing j = p j' + e
gives, by Lucas' theorem, C(n - (p-1) e mod p, k mod p) times the same binomial for
(n - (p-1) e) div p, (k div p) - e and j'.  On every level of that recursion only a few pairs (n, k) occur, so the
dead ones are struck out first and the cost is the number of the terms that survive.
"""

from __future__ import annotations

from collections.abc import Iterator
from functools import lru_cache

from opslang.ground.arith import binomial_mod

State = tuple[int, int]
Branch = tuple[int, int, State]
"""A digit of j, its factor, and the state that the higher digits are read in."""

_SHORT = 1 << 10
"""Rows whose k is below this are kept as tuples; longer ones are walked."""


def _branches(state: State, p: int) -> Iterator[Branch]:
    n, k = state
    for e in range(min(p, k // p + 1)):
        top = n - (p - 1) * e
        if top < 0:
            return
        factor = binomial_mod(top % p, k % p, p)
        if factor:
            yield e, factor, (top // p, k // p - e)


def _reachable(n: int, k: int, p: int) -> tuple[list[dict[State, list[Branch]]], dict[State, int]]:
    """The states of every level with their branches, and the ends (k < p, where j = 0) with their values."""
    levels: list[dict[State, list[Branch]]] = []
    ends: dict[State, int] = {}
    seen: set[State] = {(n, k)}
    while seen:
        level: dict[State, list[Branch]] = {}
        following: set[State] = set()
        for state in seen:
            if state[1] < p:
                ends[state] = binomial_mod(*state, p)
                continue
            level[state] = list(_branches(state, p))
            following.update(branch[2] for branch in level[state])
        levels.append(level)
        seen = following
    return levels, ends


def _counts(levels: list[dict[State, list[Branch]]], ends: dict[State, int]) -> dict[State, int]:
    """How many terms survive below every state; strikes out the branches that lead to none."""
    counts = {state: int(value != 0) for state, value in ends.items()}
    for level in reversed(levels):
        for state, branches in level.items():
            branches[:] = [branch for branch in branches if counts[branch[2]]]
            counts[state] = sum(counts[branch[2]] for branch in branches)
    return counts


@lru_cache(maxsize=1 << 12)
def count(n: int, k: int, p: int) -> int:
    """The number of j with C(n - (p-1) j, k - p j) nonzero mod p, without listing them."""
    if n < 0 or k < 0:
        return 0
    return _counts(*_reachable(n, k, p))[n, k]


def walk(n: int, k: int, p: int) -> Iterator[tuple[int, int]]:
    """The pairs (j, C(n - (p-1) j, k - p j) mod p) with a nonzero value, in no particular order, one at a time."""
    if n < 0 or k < 0:
        return
    levels, ends = _reachable(n, k, p)
    counts = _counts(levels, ends)
    table = {state: branches for level in levels for state, branches in level.items()}
    waiting = [((n, k), 0, 1, 1)] if counts[n, k] else []
    while waiting:
        state, j, place, value = waiting.pop()
        if state in ends:
            yield j, value * ends[state] % p
            continue
        for e, factor, after in table[state]:
            waiting.append((after, j + e * place, place * p, value * factor % p))


@lru_cache(maxsize=64)
def _digits(p: int) -> tuple[tuple[int, ...], ...]:
    """The binomials C(a, b) mod p of two digits, row by row."""
    return tuple([tuple([binomial_mod(a, b, p) for b in range(p)]) for a in range(p)])


_SMALL_PRIME = 64
"""Below it the binomials of digits are kept in a table."""


@lru_cache(maxsize=1 << 13)
def _short_row(n: int, k: int, p: int) -> tuple[tuple[int, int], ...]:
    if n < 0 or k < 0:
        return ()
    if k < p:
        value = binomial_mod(n, k, p)
        return ((0, value),) if value else ()
    found: list[tuple[int, int]] = []
    if p < _SMALL_PRIME:
        table, low, high = _digits(p), k % p, k // p
        for e in range(min(p, high + 1)):
            top = n - (p - 1) * e
            if top < 0:
                break
            factor = table[top % p][low]
            if factor:
                found += [(p * j + e, factor * value % p) for j, value in _short_row(top // p, high - e, p)]
    else:
        for e, factor, after in _branches((n, k), p):
            found += [(p * j + e, factor * value % p) for j, value in _short_row(*after, p)]
    found.sort()
    return tuple(found)


def row(n: int, k: int, p: int) -> tuple[tuple[int, int], ...]:
    """The pairs (j, C(n - (p-1) j, k - p j) mod p) with a nonzero value, j increasing."""
    if k < _SHORT:
        return _short_row(n, k, p)
    return tuple(sorted(walk(n, k, p)))
