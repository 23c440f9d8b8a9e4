"""The short programs that a user would write, the baseline: dictionaries of tuples, leftmost pair first."""

from __future__ import annotations

from math import comb

Word = tuple[int, ...]


def squares(word: Word) -> dict[Word, int]:
    """The admissible form of a word of squares."""
    todo, done = {word: 1}, {}
    while todo:
        w, c = todo.popitem()
        if c % 2 == 0:
            continue
        at = next((i for i in range(len(w) - 1) if w[i] < 2 * w[i + 1]), None)
        if at is None:
            done[w] = (done.get(w, 0) + 1) % 2
            continue
        a, b = w[at], w[at + 1]
        for j in range(a // 2 + 1):
            if a - 2 * j <= b - 1 - j and (b - 1 - j) & (a - 2 * j) == a - 2 * j:
                new = w[:at] + ((a + b - j, j) if j else (a + b,)) + w[at + 2 :]
                todo[new] = todo.get(new, 0) + 1
    return {w: 1 for w, c in done.items() if c}


def powers(word: Word, p: int = 3) -> dict[Word, int]:
    """The admissible form of a word of reduced powers and Bocksteins (0)."""
    todo, done = {word: 1}, {}

    def binomial(n: int, k: int) -> int:
        return comb(n, k) % p if 0 <= k <= n else 0

    def put(w: Word, c: int) -> None:
        if c % p:
            todo[w] = (todo.get(w, 0) + c) % p

    while todo:
        w, c = todo.popitem()
        for i in range(len(w)):
            head, tail = w[:i], w[i + 2 :]
            if w[i : i + 2] == (0, 0):
                break
            if i + 1 < len(w) and w[i] and w[i + 1] and w[i] < p * w[i + 1]:
                a, b = w[i], w[i + 1]
                for j in range(a // p + 1):
                    middle = (a + b - j, j) if j else (a + b,)
                    put(head + middle + tail, c * (-1) ** (a + j) * binomial((p - 1) * (b - j) - 1, a - p * j))
                break
            if i + 2 < len(w) and w[i] and w[i + 1] == 0 and w[i + 2] and w[i] <= p * w[i + 2]:
                a, b, tail = w[i], w[i + 2], w[i + 3 :]
                for j in range(a // p + 1):
                    last = (j,) if j else ()
                    sign = (-1) ** (a + j)
                    put((*head, 0, a + b - j, *last, *tail), c * sign * binomial((p - 1) * (b - j), a - p * j))
                    put((*head, a + b - j, 0, *last, *tail), -c * sign * binomial((p - 1) * (b - j) - 1, a - p * j - 1))
                break
        else:
            done[w] = (done.get(w, 0) + c) % p
    return {w: c for w, c in done.items() if c}
