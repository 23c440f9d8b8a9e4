"""Words of operations with numbers: read off a tree, measured, and the generators of H^*(K(G, n)) listed.

Letters are ("Sq", i), ("P", i), ("beta", k).  Admissible, excess: Serre 1953; Cartan 1954; Steenrod and Epstein 1962,
chapters I and VI; the generators of K(G, n) also in May 1970, theorem 10.3."""

from __future__ import annotations

from collections.abc import Iterator

from opslang.lint.model import ClassName, Dots, Group, Operation, Product, Sum
from opslang.lint.symbolic.values import value_of

Letter = tuple[str, int]
Word = tuple[Letter, ...]


def word_on(product: Product) -> tuple[Word, ClassName | None] | None:
    """The word in a product and the class that it acts on; None where the product is no such thing."""
    letters: list[Letter] = []
    name: ClassName | None = None
    for factor, glue in zip(product.factors, product.glues):
        if name is not None or glue not in ("", "compose", "*"):
            return None
        if isinstance(factor, Operation):
            found = _letters(factor)
            if found is None:
                return None
            letters += found
        elif isinstance(factor, ClassName):
            name = factor
        elif isinstance(factor, Group) and len(factor.body.terms) == 1:
            inner = word_on(factor.body.terms[0][1])
            if inner is None or factor.body.terms[0][0] != 1:
                return None
            letters += inner[0]
            name = inner[1]
        else:
            return None
    return tuple(letters), name


def _letters(operation: Operation) -> list[Letter] | None:
    if operation.bound or operation.tensor:
        return None
    if operation.head == "beta" and not operation.upper:
        order = 1 if operation.lower is None else value_of(operation.lower, {})
        return [("beta", order)] if isinstance(order, int) else None
    if operation.head not in ("Sq", "P") or operation.lower is not None or not operation.upper:
        return None
    indices = [value_of(index, {}) for index in operation.upper]
    found = [(operation.head, index) for index in indices if isinstance(index, int)]
    return found if len(found) == len(indices) else None


def only_word(side: object) -> tuple[Word, ClassName | None] | None:
    """The word that a side consists of."""
    if isinstance(side, Sum) and len(side.terms) == 1 and side.terms[0][0] == 1:
        return word_on(side.terms[0][1])
    return None


def is_dots(side: object) -> bool:
    """Whether a side is an ellipsis."""
    return isinstance(side, Sum) and len(side.terms) == 1 and isinstance(side.terms[0][1].factors[0], Dots)


def word_text(word: Word) -> str:
    """A word as it is typed."""
    return " ".join(
        "beta" if letter == ("beta", 1) else f"{letter[0]}{'_' if letter[0] == 'beta' else '^'}{letter[1]}"
        for letter in word
    )


# --- measures -----------------------------------------------------------------------------------


def degree_of(word: Word, prime: int) -> int:
    """The degree of a word."""
    step = 1 if prime == 2 else 2 * (prime - 1)
    return sum(1 if head == "beta" else step * index for head, index in word)


def squares(word: Word) -> tuple[int, ...]:
    """The indices at the prime 2, a Bockstein of any order counting as Sq^1."""
    return tuple([1 if head == "beta" else index for head, index in word])


def powers(word: Word) -> tuple[tuple[int, ...], tuple[int, ...]]:
    """(epsilons, indices) of a word at an odd prime; epsilons are one more."""
    epsilons, indices = [0], []
    for head, index in word:
        if head == "beta":
            epsilons[-1] += 1
        else:
            indices.append(index)
            epsilons.append(0)
    return tuple(epsilons), tuple(indices)


def inadmissible_at(word: Word, prime: int) -> tuple[int, int, int] | None:
    """(s, t, bound): the first neighbours with s < bound, or None for an admissible word."""
    if prime == 2:
        indices = squares(word)
        return next(((s, t, 2 * t) for s, t in zip(indices, indices[1:]) if s < 2 * t), None)
    epsilons, indices = powers(word)
    for s, t, epsilon in zip(indices, indices[1:], epsilons[1:]):
        if s < prime * t + epsilon:
            return s, t, prime * t + epsilon
    if any(epsilon > 1 for epsilon in epsilons):
        return 1, 1, 2
    return None


def excess_of(word: Word, prime: int) -> int:
    """The excess of an admissible word."""
    if not word:
        return 0
    if prime == 2:
        indices = squares(word)
        return 2 * indices[0] - sum(indices)
    epsilons, indices = powers(word)
    first = indices[0] if indices else 0
    return 2 * prime * first + 2 * epsilons[0] - degree_of(word, prime)


def is_generator(word: Word, prime: int, n: int) -> bool:
    """Whether an admissible word on the class of degree n is a generator, and no power or 0."""
    excess = excess_of(word, prime)
    return excess < n or (prime > 2 and excess == n and word[:1] == (("beta", 1),))


# --- the generators of K(G, n) ------------------------------------------------------------------


def generators(prime: int, n: int, order: int, top: int) -> tuple[Word, ...]:
    """The words of the generators of H^*(K(G, n); F_p) up to a degree; `order` as in `ClassFact`.  Needs n >= 2 or
    order 1.
    """
    found = [word for word in _admissible(prime, top - n) if is_generator(word, prime, n) and _fits(word, prime, order)]
    renamed = [_with_order(word, order) for word in found]
    return tuple(sorted(renamed, key=lambda word: (degree_of(word, prime), word)))


def _fits(word: Word, prime: int, order: int) -> bool:
    last = word[-1:] in ((("Sq", 1),), (("beta", 1),))
    return not (last and order == 0)


def _with_order(word: Word, order: int) -> Word:
    if order >= 2 and word[-1:] in ((("Sq", 1),), (("beta", 1),)):
        return (*word[:-1], ("beta", order))
    return word


def _admissible(prime: int, top: int) -> Iterator[Word]:
    """All admissible words up to a degree, the empty one too."""
    waiting: list[Word] = [()]
    while waiting:
        word = waiting.pop()
        yield word
        waiting += _longer(word, prime, top - degree_of(word, prime))


def _longer(word: Word, prime: int, room: int) -> list[Word]:
    if prime == 2:
        low = 2 * word[0][1] if word else 1
        return [(("Sq", i), *word) for i in range(low, room + 1)]
    found: list[Word] = []
    if room >= 1 and word[:1] != (("beta", 1),):
        found.append((("beta", 1), *word))
    epsilons, indices = powers(word)
    low = prime * indices[0] + epsilons[0] if indices else 1
    step = 2 * (prime - 1)
    return found + [(("P", i), *word) for i in range(low, room // step + 1)]
