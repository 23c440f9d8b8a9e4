"""The Steenrod algebra at an odd prime on packed words.  Knows no classes and no text.

A word is one int of slots, lowest first; a slot holds s << 1 | eps and stands for beta^eps P^s.  A word that ends in
a Bockstein has a last slot with s = 0.  The empty word is 0.  An element is a dict from words to coefficients 1 … p-1.

Strategy.  As at p = 2: only products of one power with an admissible word are remembered, and only where the
product is not admissible as it stands.  A Bockstein on the left flips one bit.  Coefficients are reduced once, at
the end of a product.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping

from opslang.laws.adem import iter_powers, iter_powers_bockstein, powers, powers_bockstein
from opslang.tables.budget import Budget

Packed = int
Packeds = dict[int, int]
_SHORT = 512
Row = Iterable[tuple[int, int, int]]


class Powers:
    """Products in the Steenrod algebra at an odd prime of words whose slots are below 2**width."""

    def __init__(self, prime: int, width: int, budget: Budget, entries: int = 1 << 14, stored: int = 1 << 18) -> None:
        self.prime = prime
        self.width = width
        self.mask = (1 << width) - 1
        self.budget = budget
        self._memo: dict[int, Packeds] = {}
        self._rows: dict[tuple[int, int, int], tuple[Row, Row]] = {}
        self._entries = entries
        self._stored = stored
        self._held = 0

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

    def _row(self, a: int, b: int, bockstein: int) -> tuple[Row, Row]:
        """The rows of P^a beta^bockstein P^b: with the Bockstein (if any) on the left, and between the powers."""
        p = self.prime
        if a + b > _SHORT:
            if bockstein:
                return iter_powers_bockstein(a, b, p)
            return (), iter_powers(a, b, p)
        key = (a, b, bockstein)
        found = self._rows.get(key)
        if found is None:
            found = powers_bockstein(a, b, p) if bockstein else ((), powers(a, b, p))
            if len(self._rows) >= self._entries:
                self._rows.clear()
            self._rows[key] = found
        return found

    def product(self, a: int, word: Packed) -> Packeds:
        """P^a times an admissible word with which it is not admissible."""
        width, mask, p = self.width, self.mask, self.prime
        memo = self._memo
        key = word << width | a
        found = memo.get(key)
        if found is not None:
            return found
        slot = word & mask
        rest = word >> width
        bockstein = slot & 1
        head = rest & mask
        bound = p * (head >> 1) + (head & 1)
        shifted = rest << width
        result: Packeds = {}
        get = result.get
        left, middle = self._row(a, slot >> 1, bockstein)
        plain: Packeds = {}
        for begins, between, row in ((1, 0, left), (0, bockstein, middle)):
            for c, k, j in row:
                if j >= bound and j:
                    plain = {shifted | j << 1 | between: 1}
                elif j:
                    plain = memo.get(shifted | j) or self.product(j, rest)
                    if between:
                        plain = {x | 1: e for x, e in plain.items() if not x & 1}
                elif not between:
                    plain = {rest: 1}
                elif head & 1:
                    continue
                else:
                    plain = {rest | 1: 1}
                low = k << 1 | begins
                for x, e in plain.items():
                    top = x & mask
                    if k >= p * (top >> 1) + (top & 1):
                        y = x << width | low
                        result[y] = get(y, 0) + c * e
                    else:
                        e *= c
                        for y, f in (memo.get(x << width | k) or self.product(k, x)).items():
                            if begins:
                                if y & 1:
                                    continue
                                y |= 1
                            result[y] = get(y, 0) + e * f
        result = {x: r for x, e in result.items() if (r := e % p)}
        held = len(result)
        self.budget.spend(held + 1)
        if len(memo) >= self._entries or self._held > self._stored:
            memo.clear()
            self._held = 0
        self._held += held
        memo[key] = result
        return result

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
                for y, e in self.product(token, x).items():
                    result[y] = get(y, 0) + c * e
            result = {x: r for x, c in result.items() if (r := c % p)}
        self.budget.spend(len(result))
        return result

    def normal(self, word: tuple[int, ...]) -> Packeds:
        """The canonical form of a word of letters."""
        element: Packeds = {0: 1}
        for token in reversed(word):
            element = self.times(token, element)
            if not element:
                break
        return element
