"""Linear algebra over F_p on sparse vectors.  Knows keys and coefficients, nothing of what they stand for."""

from __future__ import annotations

from collections.abc import Hashable, Iterable, Mapping
from typing import Generic, TypeVar

Key = TypeVar("Key", bound=Hashable)


class Span(Generic[Key]):
    """The span of the vectors added so far, in echelon form: each row has coefficient 1 at its pivot."""

    def __init__(self, prime: int) -> None:
        self.prime = prime
        self._rows: dict[Key, dict[Key, int]] = {}

    @property
    def rank(self) -> int:
        """Its dimension."""
        return len(self._rows)

    def reduced(self, vector: Mapping[Key, int]) -> dict[Key, int]:
        """What is left of a vector modulo the span; empty where it lies in it."""
        p = self.prime
        rest = dict(vector)
        waiting = [key for key in rest if key in self._rows]
        while waiting:
            key = waiting.pop()
            c = rest.get(key, 0)
            if not c:
                continue
            for other, d in self._rows[key].items():
                value = (rest.get(other, 0) - c * d) % p
                if value:
                    rest[other] = value
                    if other in self._rows:
                        waiting.append(other)
                else:
                    rest.pop(other, None)
        return rest

    def add(self, vector: Mapping[Key, int]) -> bool:
        """Add a vector; whether the span has grown."""
        rest = self.reduced(vector)
        if not rest:
            return False
        pivot = next(iter(rest))
        inverse = pow(rest[pivot], -1, self.prime)
        row = {key: c * inverse % self.prime for key, c in rest.items()}
        for other in self._rows.values():
            c = other.get(pivot)
            if c:
                for key, d in row.items():
                    value = (other.get(key, 0) - c * d) % self.prime
                    if value:
                        other[key] = value
                    else:
                        other.pop(key, None)
        self._rows[pivot] = row
        return True


def rank(prime: int, vectors: Iterable[Mapping[Key, int]]) -> int:
    """The dimension of the span of vectors."""
    places: dict[Key, int] = {}
    if prime == 2:
        return _rank_at_two([sum([1 << places.setdefault(key, len(places)) for key in vector]) for vector in vectors])
    rows: dict[int, dict[int, int]] = {}
    for vector in vectors:
        rest = {places.setdefault(key, len(places)): c for key, c in vector.items()}
        while rest:
            pivot = max(rest)
            row = rows.get(pivot)
            if row is None:
                inverse = pow(rest[pivot], -1, prime)
                rows[pivot] = {at: c * inverse % prime for at, c in rest.items()}
                break
            c = rest[pivot]
            for at, d in row.items():
                value = (rest.get(at, 0) - c * d) % prime
                if value:
                    rest[at] = value
                else:
                    rest.pop(at, None)
    return len(rows)


def _rank_at_two(vectors: Iterable[int]) -> int:
    """The same for vectors of bits."""
    rows: dict[int, int] = {}
    for vector in vectors:
        while vector:
            row = rows.get(vector.bit_length())
            if row is None:
                rows[vector.bit_length()] = vector
                break
            vector ^= row
    return len(rows)
