"""The project's own workloads, from a small generator with fixed seeds, so that every program sees the same."""

from __future__ import annotations

Word = tuple[int, ...]
_MODULUS = (1 << 61) - 1


class Generator:
    """A multiplicative congruential generator modulo the Mersenne prime 2^61 - 1."""

    def __init__(self, seed: int) -> None:
        self._state = seed % (_MODULUS - 1) + 1

    def below(self, n: int) -> int:
        """A number 0 … n-1."""
        self._state = self._state * 37_000_003_147 % _MODULUS
        return (self._state >> 12) % n


def composition(rng: Generator, total: int, parts: int) -> Word:
    """A way to write `total` as a sum of `parts` positive numbers, in order."""
    cuts: set[int] = set()
    while len(cuts) < parts - 1:
        cuts.add(1 + rng.below(total - 1))
    marks = [0, *sorted(cuts), total]
    return tuple([high - low for low, high in zip(marks, marks[1:])])


def pairs(top: int = 160) -> list[Word]:
    """All Sq^a Sq^b with a + b <= top."""
    return [(a, b) for a in range(1, top) for b in range(1, top - a + 1)]


def words(count: int = 1500, top: int = 140, seed: int = 5) -> list[Word]:
    """Words of three to six squares of degree at most `top`."""
    rng = Generator(seed)
    found = []
    for _ in range(count):
        letters = 3 + rng.below(4)
        found.append(composition(rng, 4 * letters + rng.below(top - 4 * letters + 1), letters))
    return found


def falling(letters: int, degree: int, count: int = 20, seed: int = 8) -> list[Word]:
    """Words of squares with falling exponents: the direction in which the normal form is long."""
    rng = Generator(seed + 100 * letters + degree)
    return [tuple(sorted(composition(rng, degree, letters), reverse=True)) for _ in range(count)]


def odd_words(count: int = 60, top: int = 140, seed: int = 9) -> list[Word]:
    """Words at p = 3 (0 is the Bockstein) with falling powers, dense enough to take time."""
    rng = Generator(seed)
    found = []
    for _ in range(count):
        word: list[int] = []
        for power in sorted(composition(rng, 60 + rng.below(top - 60), 3 + rng.below(3)), reverse=True):
            word.append(power)
            if rng.below(3) == 0:
                word.append(0)
        found.append(tuple(word))
    return found


GENERATORS: tuple[Word, ...] = ((), (1,), (2,), (2, 1), (4, 2))
"""Generators of H^*(K(Z/2, 3)) as words on the fundamental class."""


def monomials(count: int = 30, low: int = 6, seed: int = 10) -> list[tuple[int, Word]]:
    """Pairs (k, exponents of the five generators): Sq^k of the monomial."""
    rng = Generator(seed)
    return [(low + rng.below(14), tuple([1 + rng.below(5) for _ in GENERATORS])) for _ in range(count)]


def script(lines: int, seed: int = 11) -> str:
    """A script of relations between sums of products, declarations first.  Most relations are false."""
    rng = Generator(seed)
    names = ("a", "b", "s", "t")
    found = [f"let {name} in H^{degree}\n" for degree, name in enumerate(names, 2)]

    def factor() -> str:
        operations = "".join(f"Sq^{1 + rng.below(12)} " for _ in range(rng.below(4)))
        base = f"iota_{2 + rng.below(5)}" if rng.below(2) else names[rng.below(4)]
        return operations + base + (f"^{2 + rng.below(4)}" if rng.below(4) == 0 else "")

    def side() -> str:
        return " + ".join(" * ".join(factor() for _ in range(1 + rng.below(2))) for _ in range(1 + rng.below(3)))

    found += [f"{side()} = {side()}\n" for _ in range(lines)]
    return "".join(found)
