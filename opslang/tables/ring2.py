"""H^* of a product of Eilenberg-MacLane spaces at p = 2, on packed monomials.  Knows no text.

A monomial is one int: the exponent of generator number s stands in slot s of `width` bits.  An element is a set of
monomials; a product of monomials is a sum of ints, the square of an element a shift by one bit.

Strategy.  The Cartan formula is a product of truncated total squares, one for each binary digit of each exponent (a
digit
2^j contributes the 2^j-th power of the total square, by Frobenius), highest digit first; partial degrees that can no
longer reach the target are dropped.
"""

from __future__ import annotations

from collections.abc import Callable, Collection, Iterable

from opslang.ir.tree import Class, Generator, Monomial
from opslang.spaces.family import Polynomial
from opslang.tables.budget import Budget
from opslang.tables.slots import Slots, decode, exponents
from opslang.tables.squares import Squares

Poly = set[int]
Terms = tuple[int, ...]


class Ring2:
    """The ring and its Steenrod squares.  Exponents and the letters of words must stay below 2**width."""

    prime = 2

    def __init__(self, width: int, budget: Budget) -> None:
        self.width = width
        self.budget = budget
        self.algebra = Squares(width, budget)
        self.slots = Slots(2, width, budget)
        self._squares: dict[tuple[int, int], Terms] = {}
        self._classes: dict[tuple[Class, int], Poly] = {}
        self._primitives: dict[tuple[int, int], frozenset[int]] = {}

    # --- elements -------------------------------------------------------------------------------

    def zero(self) -> Poly:
        """The element 0."""
        return set()

    def unit(self) -> Poly:
        """The element 1."""
        return {0}

    def generator(self, of: Class, bockstein: int = 0) -> Poly:
        """A class, or its beta_k.  Not to be changed in place."""
        found = self._classes.get((of, bockstein))
        if found is None:
            found = self._classes[of, bockstein] = self._generator(of, bockstein)
        return found

    def _generator(self, of: Class, bockstein: int) -> Poly:
        if bockstein and of.ring is not None:
            return self.polynomial(of.ring.bockstein(2, of)[1])
        root = self.slots.root_of(of, bockstein)
        return {1 << self.width * self.slots.slot(root, 0, self.slots.roots[root].degree)}

    def place(self, of: Class | Generator) -> int:
        """A class, or a word on one, as a packed monomial."""
        if isinstance(of, Generator):
            return self.slots.place(of, self.algebra.pack)
        (monomial,) = self.generator(of)
        return monomial

    def single(self, monomial: int) -> Poly:
        """A packed monomial as an element."""
        return {monomial}

    def polynomial(self, terms: Polynomial) -> Poly:
        """A polynomial in the classes of a named space."""
        found: Poly = set()
        for c, powers in terms:
            if c & 1:
                found ^= {sum([self.place(of) * exponent for of, exponent in powers])}
        return self.reduce(found)

    def reduce(self, f: Poly) -> Poly:
        """The normal form of an element modulo the relations of named spaces."""
        slots = self.slots
        slots.load_rules(self.place, self.polynomial)
        if not slots.rules:
            return f
        done: Poly = set()
        waiting = list(f)
        while waiting:
            x = waiting.pop()
            rule = slots.dividing(x)
            if rule is None:
                done ^= {x}
            elif rule.tail:
                self.budget.spend(1)
                rest = x - rule.packed
                nilpotent = slots.nilpotent
                waiting += [rest + t for t in rule.tail if not rest & t & nilpotent]
        return done

    def add(self, into: Poly, element: Iterable[int], coefficient: int = 1) -> None:
        """Add a multiple of an element to `into`."""
        if coefficient & 1:
            into.symmetric_difference_update(element)

    def degree(self, monomial: int) -> int:
        """The degree of a packed monomial."""
        degrees = self.slots.degree
        return sum([degrees[slot] * exponent for slot, exponent in exponents(monomial, self.width)])

    def root_exponent(self, monomial: int) -> int:
        """The greatest 2^j of which the monomial is a power; 1 for the unit."""
        width, least = self.width, self.width
        while monomial:
            low = monomial & -monomial
            least = min(least, (low.bit_length() - 1) % width)
            monomial ^= low
        return 1 << least if least < width else 1

    def multiply(self, f: Collection[int], g: Collection[int]) -> Poly:
        """The cup product."""
        if len(f) > len(g):
            f, g = g, f
        nilpotent = self.slots.nilpotent
        if len(f) == 1:
            (x,) = f
            if not x & nilpotent:
                return self.reduce({x + y for y in g}) if self.slots.families else {x + y for y in g}
        self.budget.spend(len(f) * len(g) * self._length())
        result: Poly = set()
        for x in f:
            if x & nilpotent:
                result ^= {x + y for y in g if not x & y & nilpotent}
            else:
                result ^= {x + y for y in g}
        return self.reduce(result) if self.slots.families else result

    def power(self, f: Collection[int], n: int) -> Poly:
        """The n-th power, n >= 0, through the binary digits of n."""
        result: Poly
        if len(f) == 1:
            (x,) = f
            result = set() if n > 1 and x & self.slots.nilpotent else {x * n}
            return self.reduce(result) if self.slots.families else result
        result = {0}
        nilpotent = self.slots.nilpotent
        digit = 0
        while n >> digit:
            if n >> digit & 1:
                result = self.multiply(result, [x << digit for x in f if not (digit and x & nilpotent)])
            digit += 1
        return result

    # --- operations -----------------------------------------------------------------------------

    def square(self, slot: int, i: int) -> Terms:
        """Sq^i of the generator in a slot, i >= 0."""
        key = (slot, i)
        found = self._squares.get(key)
        if found is None:
            if len(self._squares) > 1 << 17:
                self._squares.clear()
            found = self._squares[key] = self._square(slot, i)
        return found

    def _square(self, slot: int, i: int) -> Terms:
        slots, width = self.slots, self.width
        place = 1 << slot * width
        degree = slots.degree[slot]
        if i == 0:
            return (place,)
        if i > degree or (i == degree and place & slots.nilpotent):
            return ()
        if i == degree:
            return (place << 1,)
        root = slots.root[slot]
        ring = slots.roots[root].of.ring
        if ring is not None:
            return tuple(self.polynomial(ring.operation(2, i, slots.roots[root].of)))
        n = slots.roots[root].degree
        killed = slots.roots[root].killed
        total = degree - n + i
        algebra, word = self.algebra, slots.word[slot]
        mask = algebra.mask
        words: Iterable[int]
        if i >= 2 * (word & mask):
            words = (word << width | i,)
        else:
            words = algebra.product(i, word)
        terms = []
        for v in words:
            head = v & mask
            if 2 * head - total > n:
                continue
            if killed and v >> (v.bit_length() - 1) // width * width == 1:
                continue
            power, rest = 0, total
            while v and 2 * head - rest == n:
                # excess n: Sq^head is the top square of what stands behind it
                v >>= width
                rest -= head
                head = v & mask
                power += 1
            terms.append(1 << slots.slot(root, v, rest + n) * width + power)
        self.budget.spend(len(terms) + 1)
        return tuple(terms)

    def letter(self, i: int, f: Iterable[int]) -> Poly:
        """Sq^i of an element, i > 0."""
        width = self.width
        result: Poly = set()
        toggle = result.symmetric_difference_update
        for x in f:
            if x & (x - 1):
                toggle(self.cartan(i, x))
            elif x:
                slot, digit = divmod(x.bit_length() - 1, width)
                if not i & ((1 << digit) - 1):
                    terms = self.square(slot, i >> digit)
                    toggle([t << digit for t in terms] if digit else terms)
        return self.reduce(result) if self.slots.families else result

    def _pieces(self, monomial: int) -> list[tuple[int, int]]:
        """The pairs (digit, slot) of a monomial's exponents, highest digit first."""
        width, pieces = self.width, []
        while monomial:
            low = monomial & -monomial
            slot, digit = divmod(low.bit_length() - 1, width)
            pieces.append((digit, slot))
            monomial ^= low
        pieces.sort(reverse=True)
        return pieces

    def cartan(self, k: int, monomial: int) -> Poly:
        """Sq^k of one monomial, by the Cartan formula."""
        degrees = self.slots.degree
        pieces = self._pieces(monomial)
        reach = [degrees[slot] << digit for digit, slot in pieces]
        rest = sum(reach)
        if k >= rest:
            return {monomial << 1} if k == rest and not monomial & self.slots.nilpotent else set()
        squares, square = self._squares, self.square
        sums: dict[int, Collection[int]] = {0: (0,)}
        last = len(pieces) - 1
        for at in range(last):
            digit, slot = pieces[at]
            most = reach[at]
            rest -= most
            series = []
            for i in range(max(0, k - rest - max(sums)) + (1 << digit) - 1 >> digit, (min(k, most) >> digit) + 1):
                terms = squares.get((slot, i))
                if terms is None:
                    terms = square(slot, i)
                if terms:
                    series.append((i << digit, [t << digit for t in terms] if digit else terms))
            self.budget.spend(len(series) + 1)
            following: dict[int, Collection[int]] = {}
            for d, f in sums.items():
                low, high = k - rest - d, k - d
                for i, g in series:
                    if low <= i <= high:
                        self._accumulate(following, d + i, f, g)
            sums = following
            if not sums:
                return set()
        digit, slot = pieces[last]
        found: dict[int, Collection[int]] = {}
        for d, f in sums.items():
            i = k - d
            if not i & ((1 << digit) - 1):
                terms = square(slot, i >> digit)
                if terms:
                    self._accumulate(found, k, f, [t << digit for t in terms] if digit else terms)
        result = found.get(k)
        return result if isinstance(result, set) else set(result) if result else set()

    def _accumulate(self, sums: dict[int, Collection[int]], d: int, f: Collection[int], g: Collection[int]) -> None:
        """Add the product of two sums of monomials to the entry d."""
        many, few = len(f), len(g)
        if few > many:
            f, g, many, few = g, f, few, many
        into = sums.get(d)
        if few == 1:
            (y,) = g
            if into is None:
                sums[d] = {x + y for x in f}
                return
            if many == 1:
                (x,) = f
                x += y
                if x in into:
                    into.remove(x)  # type: ignore[attr-defined]
                else:
                    into.add(x)  # type: ignore[attr-defined]
                return
            self.budget.spend(1 + (many * self._length() >> 2))
            into.symmetric_difference_update([x + y for x in f])  # type: ignore[attr-defined]
            return
        self.budget.spend(1 + (many * few * self._length() >> 2))
        part: Poly = set() if into is None else into  # type: ignore[assignment]
        toggle = part.symmetric_difference_update
        for y in g:
            toggle([x + y for x in f])
        sums[d] = part

    def _length(self) -> int:
        """How long monomials are, in units of some hundred generators."""
        return 1 + (len(self.slots.word) >> 7)

    def total(self, f: Iterable[int]) -> Poly:
        """The total square of an element."""
        result: Poly = set()
        for x in f:
            term: Poly = {0}
            for digit, slot in self._pieces(x):
                series: Poly = set()
                for i in range(self.slots.degree[slot] + 1):
                    self.budget.spend(1)
                    series.symmetric_difference_update([t << digit for t in self.square(slot, i)])
                term = self.multiply(term, series)
            result ^= term
        return result

    def derivation(self, f: Iterable[int], on_generator: Callable[[int], Collection[int]], degree: int) -> Poly:
        """The derivation that is `on_generator` on the generators of slots."""
        result: Poly = set()
        for x in f:
            for slot, exponent in exponents(x, self.width):
                if exponent & 1:
                    image = on_generator(slot)
                    if image:
                        result ^= self.multiply([x - (1 << slot * self.width)], image)
        return result

    # --- out ------------------------------------------------------------------------------------

    def decode(self, f: Iterable[int]) -> tuple[tuple[Monomial, int], ...]:
        """The terms of an element in canonical order."""
        slots, unpack = self.slots, self.algebra.unpack
        known = slots.decoded.get
        found = [known(x) or decode(slots, unpack, x) for x in f]
        if len(found) > 1:
            found.sort()
        return tuple([(term[2], 1) for term in found])
