"""The Steenrod algebra at an odd prime on packed words.  Knows no classes and no text.

A word is one int of slots, lowest first; a slot holds s << 1 | eps and stands for beta^eps P^s.  A word that ends in
a Bockstein has a last slot with s = 0.  The empty word is 0.  An element is a dict from words to coefficients 1 … p-1.

Strategy.  As at p = 2: only products of one power with an admissible word are remembered, and only where the
product is not admissible as it stands.  A Bockstein on the left flips one bit.  Coefficients are reduced once, at
the end of a product.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable, Mapping

from opslang.laws.adem import iter_powers, iter_powers_bockstein, powers, powers_bockstein
from opslang.tables.budget import Budget

Packed = int
Packeds = dict[int, int]
_SHORT = 512


class Products(dict[int, Packeds]):
    """Remembered products P^a w, w admissible and P^a w not: the key is w << width | a.  Missing ones are computed.

    Values are not to be changed.
    """

    __slots__ = ("_budget", "_entries", "_held", "_mask", "_pair", "_prime", "_stored", "_width")

    def __init__(
        self,
        prime: int,
        pair: Callable[[int, int, int], Packeds],
        width: int,
        budget: Budget,
        entries: int,
        stored: int,
    ) -> None:
        super().__init__()
        self._prime = prime
        self._pair = pair
        self._width = width
        self._mask = (1 << width) - 1
        self._budget = budget
        self._entries = entries
        self._stored = stored
        self._held = 0

    def __missing__(self, key: int) -> Packeds:
        width, mask, p = self._width, self._mask, self._prime
        a = key & mask
        word = key >> width
        slot = word & mask
        rest = word >> width
        if not rest:
            return self._keep(key, self._pair(a, slot >> 1, slot & 1))
        head = rest & mask
        bound = p * (head >> 1) + (head & 1)
        shifted = rest << width
        result: Packeds = {}
        get = result.get
        for pair, c in self[slot << width | a].items():
            low = pair & mask
            k = low >> 1
            second = pair >> width
            j = second >> 1
            between = second & 1
            if j >= bound and j:
                x = shifted | second
                # j >= bound: the word is admissible from the second letter on
                if k >= p * j + between:
                    x = x << width | low
                    result[x] = get(x, 0) + c
                    continue
                inner: Packeds = {x: 1}
            elif j:
                inner = self[shifted | j]
                if between:
                    inner = {x | 1: e for x, e in inner.items() if not x & 1}
            elif not between:
                inner = {rest: 1}
            elif head & 1:
                continue
            else:
                inner = {rest | 1: 1}
            begins = low & 1
            for x, e in inner.items():
                top = x & mask
                e *= c
                if k >= p * (top >> 1) + (top & 1):
                    y = x << width | low
                    result[y] = get(y, 0) + e
                elif begins:
                    for y, f in self[x << width | k].items():
                        if not y & 1:
                            result[y | 1] = get(y | 1, 0) + e * f
                else:
                    for y, f in self[x << width | k].items():
                        result[y] = get(y, 0) + e * f
        return self._keep(key, {x: r for x, e in result.items() if (r := e % p)})

    def _keep(self, key: int, value: Packeds) -> Packeds:
        held = len(value)
        self._budget.spend(held + 1)
        if len(self) >= self._entries or self._held > self._stored:
            self.clear()
            self._held = 0
        self._held += held
        self[key] = value
        return value


class Powers:
    """Products in the Steenrod algebra at an odd prime of words whose slots are below 2**width."""

    def __init__(self, prime: int, width: int, budget: Budget, entries: int = 1 << 14, stored: int = 1 << 18) -> None:
        self.prime = prime
        self.width = width
        self.mask = (1 << width) - 1
        self.budget = budget
        self._products = Products(prime, self.pair, width, budget, entries, stored)

    def pack(self, word: Iterable[int]) -> Packed:
        """The packed form of a word with no two Bocksteins side by side and no P^0."""
        value = at = bockstein = 0
        for token in word:
            if token:
                value |= (token << 1 | bockstein) << at
                at += self.width
                bockstein = 0
            else:
                bockstein = 1
        return value | bockstein << at

    def unpack(self, word: Packed) -> tuple[int, ...]:
        """The tokens of a packed word."""
        tokens = []
        while word:
            slot = word & self.mask
            if slot & 1:
                tokens.append(0)
            if slot >> 1:
                tokens.append(slot >> 1)
            word >>= self.width
        return tuple(tokens)

    def pair(self, a: int, b: int, bockstein: int) -> Packeds:
        """P^a beta^bockstein P^b where it is not admissible."""
        p, width = self.prime, self.width
        up = width + 1
        if a + b <= _SHORT:
            if not bockstein:
                return {j << up | k << 1: c for c, k, j in powers(a, b, p)}
            outside, inside = powers_bockstein(a, b, p)
            found = {j << up | k << 1 | 1: c for c, k, j in outside}
            for c, k, j in inside:
                found[(j << 1 | 1) << width | k << 1] = c
            return found
        rows: tuple[tuple[int, int, Iterable[tuple[int, int, int]]], ...] = ((0, 0, iter_powers(a, b, p)),)
        if bockstein:
            left, middle = iter_powers_bockstein(a, b, p)
            rows = ((1, 0, left), (0, 1, middle))
        found = {}
        for begins, between, row in rows:
            for c, k, j in row:
                self.budget.spend(1)
                found[(j << 1 | between) << width | k << 1 | begins] = c
        return found

    def product(self, a: int, word: Packed) -> Packeds:
        """P^a times an admissible word with which it is not admissible."""
        return self._products[word << self.width | a]

    def times(self, token: int, element: Mapping[Packed, int]) -> Packeds:
        """A letter times an element in canonical form: the Bockstein for token 0, else P^token."""
        if not token:
            return {x | 1: c for x, c in element.items() if not x & 1}
        width, mask, p = self.width, self.mask, self.prime
        result: Packeds = {}
        get = result.get
        rest = []
        for x, c in element.items():
            top = x & mask
            if token >= p * (top >> 1) + (top & 1):
                result[x << width | token << 1] = c
            else:
                rest.append((x, c))
        if rest:
            for x, c in rest:
                for y, e in self._products[x << width | token].items():
                    result[y] = get(y, 0) + c * e
            result = {x: r for x, c in result.items() if (r := c % p)}
        self.budget.spend(len(result))
        return result

    def normal(self, word: tuple[int, ...]) -> Packeds:
        """The canonical form of a word of letters."""
        length = len(word)
        if length == 2 and word[0] and word[1]:
            a, b = word
            return self.pair(a, b, 0) if a < self.prime * b else {b << self.width + 1 | a << 1: 1}
        if length == 3 and word[0] and not word[1] and word[2]:
            a, b = word[0], word[2]
            return self.pair(a, b, 1) if a <= self.prime * b else {(b << 1 | 1) << self.width | a << 1: 1}
        element: Packeds = {0: 1}
        for token in reversed(word):
            element = self.times(token, element)
            if not element:
                break
        return element
