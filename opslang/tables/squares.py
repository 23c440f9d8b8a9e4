"""The Steenrod algebra at p = 2 on packed words.  Knows no classes and no text.

A word is one int: the first exponent in the lowest slot, the next one above it; a slot has `width` bits,
so the widest exponent must stay below 2**width.  The empty word is 0.  An element is a set of words.

Strategy.  Only products of one square with an admissible word are remembered, and only where the product is
not admissible as it stands; the memory is emptied when it holds too many entries or terms (measured: a small
memory costs little).  Rows of Adem's relation for small exponents come from a table in which one byte is one
coefficient; the decoding is then done by `itertools.compress` in C.
"""

from __future__ import annotations

from collections.abc import Collection, Iterable
from itertools import compress

from opslang.laws.adem import iter_squares
from opslang.tables.budget import Budget

Packed = int
EMPTY: frozenset[int] = frozenset()
_ROWS: list[list[int]] = []
_TABLE = 256


def _row_table(b: int) -> list[int]:
    """Byte lanes of the relations Sq^a Sq^b for all a < 2b: lane j of entry a is C(b-1-j, a-2j) mod 2.

    By Pascal's rule the entry (a, b) is the entry (a, b-1) plus the entry (a-1, b-1), lane by lane, once the
    three lanes on the edge (where Pascal's rule meets C(-1, 0)) are put in by hand.
    """
    while len(_ROWS) <= b:
        n = len(_ROWS) - 1  # the upper argument at j = 0
        if n < 0:
            _ROWS.append([])
            continue
        below = _ROWS[-1]
        size = 2 * n + 2
        row = [0] * size
        held = len(below)
        for a in range(size):
            value = below[a] if a < held else 0
            if 0 < a <= held:
                value ^= below[a - 1]
            row[a] = value
        # Where the upper argument is 0 (j = n) Pascal's rule would need C(-1, .), which is read as 0.
        if size > 2 * n:
            row[2 * n] = row[2 * n] & ~(255 << 8 * n) | 1 << 8 * n
        row[2 * n + 1] &= ~(255 << 8 * n)
        _ROWS.append(row)
    return _ROWS[b]


class Squares:
    """Products in the Steenrod algebra at p = 2 of words whose exponents are below 2**width."""

    def __init__(self, width: int, budget: Budget, entries: int = 1 << 14, stored: int = 1 << 18) -> None:
        self.width = width
        self.mask = (1 << width) - 1
        self.budget = budget
        self._memo: dict[int, Collection[int]] = {}
        self._rows: dict[int, Collection[int]] = {}
        self._entries = entries
        self._stored = stored
        self._held = 0

    def pack(self, word: Iterable[int]) -> Packed:
        """The packed form of a word without Sq^0."""
        value = at = 0
        for token in word:
            value |= token << at
            at += self.width
        return value

    def unpack(self, word: Packed) -> tuple[int, ...]:
        """The tokens of a packed word."""
        width, mask = self.width, self.mask
        tokens = []
        while word:
            tokens.append(word & mask)
            word >>= width
        return tuple(tokens)

    def pair(self, a: int, b: int) -> list[Packed]:
        """Sq^a Sq^b, 0 < a < 2b, in canonical order."""
        if b < _TABLE:
            lanes = (_ROWS[b] if b < len(_ROWS) else _row_table(b))[a]
            step = self.mask
            first = a + b
            return list(compress(range(first, first + step * (a // 2 + 1), step), lanes.to_bytes(a // 2 + 1, "little")))
        step, first = self.mask, a + b
        spend = self.budget.spend
        terms = []
        for _, j in iter_squares(a, b):
            spend(1)
            terms.append(first + step * j)
        return terms

    def row(self, a: int, b: int) -> Collection[Packed]:
        """`pair`, remembered."""
        key = b << self.width | a
        found = self._rows.get(key)
        if found is None:
            found = self.pair(a, b)
            if len(found) < _TABLE:
                if len(self._rows) >= self._entries:
                    self._rows.clear()
                self._rows[key] = found
        return found

    def product(self, a: int, word: Packed) -> Collection[Packed]:
        """Sq^a times an admissible word with which it is not admissible; distinct words, in no order."""
        width, mask = self.width, self.mask
        rest = word >> width
        if not rest:
            return self.pair(a, word)
        memo = self._memo
        key = word << width | a
        found = memo.get(key)
        if found is not None:
            return found
        product = self.product
        bound = 2 * (rest & mask)
        shifted = rest << width
        result: set[int] = set()
        toggle = result.symmetric_difference_update
        add = result.add
        for pair in self.row(a, word & mask):
            k, j = pair & mask, pair >> width
            if j >= bound:
                add((shifted | j) << width | k)
            elif j:
                inner = memo.get(shifted | j)
                if inner is None:
                    inner = product(j, rest)
                half = k >> 1
                good = [x << width | k for x in inner if x & mask <= half]
                if good:
                    toggle(good)
                if len(good) != len(inner):
                    for x in inner:
                        if x & mask > half:
                            other = memo.get(x << width | k)
                            toggle(product(k, x) if other is None else other)
            elif k >= bound:
                toggle((shifted | k,))
            else:
                toggle(product(k, rest))
        held = len(result)
        self.budget.spend(held + 1)
        if len(memo) >= self._entries or self._held > self._stored:
            memo.clear()
            self._held = 0
        self._held += held
        memo[key] = result if result else EMPTY
        return result

    def times(self, a: int, element: Iterable[Packed]) -> set[Packed]:
        """Sq^a (a > 0) times an element in canonical form."""
        width, mask = self.width, self.mask
        half = a >> 1
        result: set[int] = set()
        tops = []
        for x in element:
            if x & mask <= half:
                result.add(x << width | a)
            else:
                tops.append(x)
        toggle = result.symmetric_difference_update
        for x in tops:
            toggle(self.product(a, x))
        self.budget.spend(len(result))
        return result

    def normal(self, word: tuple[int, ...]) -> Iterable[Packed]:
        """The canonical form of a word of positive exponents: distinct admissible words, in no order."""
        if len(word) == 2:
            a, b = word
            if a < 2 * b:
                return self.pair(a, b)
            return (b << self.width | a,)
        element: Iterable[int] = (0,)
        for a in reversed(word):
            element = self.times(a, element)
            if not element:
                return EMPTY
        return element
