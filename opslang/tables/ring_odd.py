"""H^* of a product of Eilenberg-MacLane spaces at an odd prime, on packed monomials.  Knows no text.

A monomial is one int: the exponent of generator number s stands in slot s of `width` bits; generators of odd degree
have exponents 0 and 1.  The order of the slots is the order of the factors; signs come from it.  An element is a
dict from monomials to coefficients 1 … p-1.

Strategy.  As at p = 2: the Cartan formula is a product of truncated total powers, one for each unit of each base-p
digit
of each exponent, the digit at p^j contributing the p^j-th power of the total power.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from math import gcd

from opslang.ground.arith import digits, p_part
from opslang.ir.tree import Class, Generator, Monomial
from opslang.spaces.family import Polynomial
from opslang.tables.budget import Budget
from opslang.tables.powers import Powers
from opslang.tables.slots import Slots, decode, exponents

Poly = dict[int, int]
Terms = tuple[tuple[int, int], ...]


class RingOdd:
    """The ring and its reduced powers and Bockstein.  Exponents, and twice the letters of words, must stay below
    2**width."""

    def __init__(self, prime: int, width: int, budget: Budget) -> None:
        self.prime = prime
        self.width = width
        self.budget = budget
        self.algebra = Powers(prime, width, budget)
        self.slots = Slots(prime, width, budget)
        self._powers: dict[tuple[int, int], Terms] = {}
        self._primitives: dict[tuple[int, int], Poly] = {}

    # --- elements -------------------------------------------------------------------------------

    def zero(self) -> Poly:
        """The element 0."""
        return {}

    def unit(self) -> Poly:
        """The element 1."""
        return {0: 1}

    def generator(self, of: Class, bockstein: int = 0) -> Poly:
        """A class, or its beta_k."""
        if bockstein and of.ring is not None:
            return self.polynomial(of.ring.bockstein(self.prime, of)[1])
        root = self.slots.root_of(of, bockstein)
        return {1 << self.width * self.slots.slot(root, 0, self.slots.roots[root].degree): 1}

    def place(self, of: Class | Generator) -> int:
        """A class, or a word on one, as a packed monomial."""
        if isinstance(of, Generator):
            return self.slots.place(of, self.algebra.pack)
        (monomial,) = self.generator(of)
        return monomial

    def single(self, monomial: int) -> Poly:
        """A packed monomial as an element."""
        return {monomial: 1}

    def polynomial(self, terms: Polynomial) -> Poly:
        """A polynomial in the classes of a named space."""
        found: Poly = {}
        for c, powers in terms:
            product: Poly = {0: c % self.prime}
            for of, exponent in powers:
                place = self.place(of)
                if exponent > 1 and place & self.slots.nilpotent:
                    product = {}
                product = self._product(product, {place * exponent: 1})
            self.add(found, product)
        return self.reduce(found)

    def reduce(self, f: Poly) -> Poly:
        """The normal form of an element modulo the relations of named spaces."""
        slots = self.slots
        slots.load_rules(self.place, self.polynomial)
        if not slots.rules:
            return f
        done: Poly = {}
        waiting = list(f.items())
        while waiting:
            x, c = waiting.pop()
            rule = slots.dividing(x)
            if rule is None:
                self.add(done, {x: c})
            elif rule.tail:
                self.budget.spend(1)
                # the sign of x = rest · lead, then the product with what stands for lead
                rest = x - rule.packed
                sign = self._product({rest: 1}, {rule.packed: 1})[x]
                waiting += self._product({rest: c * sign % self.prime}, rule.tail).items()
        return done

    def add(self, into: Poly, element: Mapping[int, int], coefficient: int = 1) -> None:
        """Add a multiple of an element to `into`."""
        p, get = self.prime, into.get
        for x, c in element.items():
            value = (get(x, 0) + coefficient * c) % p
            if value:
                into[x] = value
            else:
                into.pop(x, None)

    def degree(self, monomial: int) -> int:
        """The degree of a packed monomial."""
        degrees = self.slots.degree
        return sum([degrees[slot] * exponent for slot, exponent in exponents(monomial, self.width)])

    def root_exponent(self, monomial: int) -> int:
        """The greatest p^j of which the monomial is a power; 1 for the unit."""
        found = gcd(*[exponent for _, exponent in exponents(monomial, self.width)])
        return self.prime ** p_part(found, self.prime) if found else 1

    def _negative(self, x: int, y: int) -> bool:
        """Whether putting the odd generators of x y in order changes the sign; x, y hold lowest bits of odd slots
        only."""
        parity = 0
        while y:
            low = y & -y
            parity ^= (x >> low.bit_length()).bit_count() & 1
            y ^= low
        return bool(parity)

    def multiply(self, f: Mapping[int, int], g: Mapping[int, int]) -> Poly:
        """The cup product, with the sign of graded commutativity."""
        product = self._product(f, g)
        return self.reduce(product) if self.slots.families else product

    def _product(self, f: Mapping[int, int], g: Mapping[int, int]) -> Poly:
        self.budget.spend(len(f) * len(g) * (1 + (len(self.slots.word) >> 7)))
        p, odd = self.prime, self.slots.nilpotent
        result: Poly = {}
        get = result.get
        for x, c in f.items():
            x_odd = x & odd
            for y, e in g.items():
                if x_odd:
                    y_odd = y & odd
                    if x_odd & y_odd:
                        continue
                    if y_odd and self._negative(x_odd, y_odd):
                        e = -e
                result[x + y] = get(x + y, 0) + c * e
        return {x: r for x, c in result.items() if (r := c % p)}

    def frobenius(self, f: Mapping[int, int], j: int) -> Poly:
        """The p^j-th power, j >= 1: additive, since odd classes square to 0 and even ones commute."""
        odd, scale = self.slots.nilpotent, self.prime**j
        return {x * scale: c for x, c in f.items() if not x & odd}

    def power(self, f: Mapping[int, int], n: int) -> Poly:
        """The n-th power, n >= 0, through the base-p digits of n."""
        result: Poly = {0: 1}
        for j, digit in enumerate(digits(n, self.prime)):
            base: Mapping[int, int] = self.frobenius(f, j) if j else f
            while digit:
                if digit & 1:
                    result = self.multiply(result, base)
                digit >>= 1
                if digit:
                    base = self.multiply(base, base)
        return result

    # --- operations -----------------------------------------------------------------------------

    def bockstein_of(self, slot: int) -> Poly:
        """The Bockstein of the generator in a slot."""
        slots, word = self.slots, self.slots.word[slot]
        root = slots.root[slot]
        of = slots.roots[root].of
        if of.ring is not None:
            return self.polynomial(of.ring.operation(self.prime, 0, of))
        if word & 1 or (not word and slots.roots[root].killed):
            return {}
        return {1 << self.width * slots.slot(root, word | 1, slots.degree[slot] + 1): 1}

    def reduced_power(self, slot: int, i: int) -> Terms:
        """P^i of the generator in a slot, i >= 0."""
        key = (slot, i)
        found = self._powers.get(key)
        if found is None:
            if len(self._powers) > 1 << 17:
                self._powers.clear()
            found = self._powers[key] = self._reduced_power(slot, i)
        return found

    def _reduced_power(self, slot: int, i: int) -> Terms:
        slots, width, p = self.slots, self.width, self.prime
        degree = slots.degree[slot]
        place = 1 << slot * width
        if i == 0:
            return ((place, 1),)
        if 2 * i > degree:
            return ()
        if 2 * i == degree:
            return ((place * p, 1),)
        root = slots.root[slot]
        ring = slots.roots[root].of.ring
        if ring is not None:
            return tuple(self.polynomial(ring.operation(p, i, slots.roots[root].of)).items())
        n, killed = slots.roots[root].degree, slots.roots[root].killed
        algebra, word = self.algebra, slots.word[slot]
        mask = algebra.mask
        total = degree - n + 2 * i * (p - 1)
        head = word & mask
        if i >= p * (head >> 1) + (head & 1):
            words = {word << width | i << 1: 1}
        else:
            words = algebra.product(i, word)
        terms = []
        for v, c in words.items():
            head = v & mask
            if p * (head & ~1) + 2 * (head & 1) - total > n:
                continue
            if killed and v >> (v.bit_length() - 1) // width * width == 1:
                continue
            power, rest = 1, total
            while not head & 1 and p * head - rest == n:
                # excess n and no Bockstein in front: the p-th power of what stands behind the first letter
                v >>= width
                rest -= head * (p - 1)
                head = v & mask
                power *= p
            terms.append(((1 << slots.slot(root, v, rest + n) * width) * power, c))
        self.budget.spend(len(terms) + 1)
        return tuple(terms)

    def letter(self, token: int, f: Mapping[int, int]) -> Poly:
        """The Bockstein (token 0) or P^token of an element."""
        if not token:
            return self.derivation(f, self.bockstein_of, 1)
        result: Poly = {}
        for x, c in f.items():
            if x:
                self.add(result, self.cartan(token, x), c)
        return self.reduce(result) if self.slots.families else result

    def _pieces(self, monomial: int) -> list[tuple[int, int]]:
        """The pairs (p^j, slot) of a monomial, one for each unit of each digit, slots increasing."""
        p, pieces = self.prime, []
        for slot, exponent in exponents(monomial, self.width):
            for j, digit in enumerate(digits(exponent, p)):
                pieces += [(p**j, slot)] * digit
        return pieces

    def cartan(self, k: int, monomial: int) -> Poly:
        """P^k of one monomial, by the Cartan formula."""
        degrees = self.slots.degree
        pieces = self._pieces(monomial)
        reach = [degrees[slot] // 2 * scale for scale, slot in pieces]
        rest = sum(reach)
        if k > rest:
            return {}
        spend = self.budget.spend
        sums: dict[int, Poly] = {0: {0: 1}}
        for (scale, slot), most in zip(pieces, reach):
            rest -= most
            following: dict[int, Poly] = {}
            needed = max(sums)
            series = []
            for i in range(max(0, k - rest - needed) // scale, min(k, most) // scale + 1):
                spend(1)
                terms = self.reduced_power(slot, i)
                if terms:
                    series.append((i * scale, {t * scale: c for t, c in terms}))
            for d, f in sums.items():
                for i, g in series:
                    if k - rest - d <= i <= k - d:
                        part = self._product(f, g)
                        if d + i in following:
                            self.add(following[d + i], part)
                        else:
                            following[d + i] = part
            sums = following
            if not sums:
                return {}
        return sums.get(k, {})

    def total(self, f: Mapping[int, int]) -> Poly:
        """The total reduced power of an element."""
        result: Poly = {}
        for x, c in f.items():
            term: Poly = {0: 1}
            for scale, slot in self._pieces(x):
                series: Poly = {}
                for i in range(self.slots.degree[slot] // 2 + 1):
                    self.budget.spend(1)
                    self.add(series, {t * scale: e for t, e in self.reduced_power(slot, i)})
                term = self.multiply(term, series)
            self.add(result, term, c)
        return result

    def derivation(self, f: Mapping[int, int], on_generator: Callable[[int], Mapping[int, int]], degree: int) -> Poly:
        """The derivation of the given degree that is `on_generator` on the generators of slots (sign (-1)^{degree
        |x|})."""
        p, odd, width = self.prime, self.slots.nilpotent, self.width
        result: Poly = {}
        for x, c in f.items():
            for slot, exponent in exponents(x, width):
                if exponent % p:
                    image = on_generator(slot)
                    if image:
                        place = slot * width
                        before = x & ((1 << place) - 1)
                        left = before | exponent - 1 << place
                        sign = -1 if degree % 2 and (before & odd).bit_count() % 2 else 1
                        right = x >> place + width << place + width
                        term = self.multiply(self.multiply({left: c * exponent % p}, image), {right: 1})
                        self.add(result, term, sign)
        return result

    # --- out ------------------------------------------------------------------------------------

    def decode(self, f: Mapping[int, int]) -> tuple[tuple[Monomial, int], ...]:
        """The terms of an element in canonical order."""
        slots, unpack = self.slots, self.algebra.unpack
        found = sorted([(*decode(slots, unpack, x), c) for x, c in f.items()], key=lambda term: term[:2])
        return tuple([(monomial, self.prime - c if negative else c) for _, _, monomial, negative, c in found])
