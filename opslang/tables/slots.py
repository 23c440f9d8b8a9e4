"""The polynomial generators of one computation, numbered as they appear.  Knows roots and words, no products.

A *root* is a class of `ir.tree.Class`, or the class beta_k of one whose coefficients are Z/p^k.  Each polynomial
generator is an admissible word on a root.  A root that is not a plain mod p class is killed by the Bockstein, and
the words on it are those that do not end in one (Serre 1953; Cartan 1954-55; May 1970, thm 10.3).
"""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from attrs import frozen

from opslang.ground.grading import Word
from opslang.ground.grading import degree as word_degree
from opslang.ir.order import generator_key
from opslang.ir.tree import Class, Generator, Monomial
from opslang.tables.budget import Budget


@frozen
class Root:
    """What words act on: a class, or its beta_k when `bockstein` is k; `killed` says that the Bockstein of it is 0."""

    of: Class
    bockstein: int
    degree: int
    killed: bool


@frozen
class Rule:
    """A relation of a named space: the exponents of its leading monomial, that monomial packed, what it equals
    (None: 0)."""

    lead: tuple[tuple[int, int], ...]
    packed: int
    tail: Any


class Slots:
    """The generators seen so far: slot number <-> (root, packed word)."""

    def __init__(self, prime: int, width: int, budget: Budget) -> None:
        self.prime = prime
        self.width = width
        self._budget = budget
        self.roots: list[Root] = []
        self._root_of: dict[tuple[Class, int], int] = {}
        self._slot_of: dict[tuple[int, int], int] = {}
        self.root: list[int] = []
        self.word: list[int] = []
        self.degree: list[int] = []
        self.nilpotent = 0
        """The lowest bit of every slot whose generator squares to 0: odd degree at an odd prime; at 2 degree 1 and
        killed by Sq^1."""
        self.decoded: dict[int, Decoded] = {}
        """Monomials decoded lately."""
        self.rules: list[Rule] = []
        self.families: set[Any] = set()
        self._unruled: list[Any] = []
        self._generators: list[Generator] = []
        self._keys: list[tuple[Any, ...]] = []

    def root_of(self, of: Class, bockstein: int = 0) -> int:
        """The number of the root of a class (bockstein 0) or of its beta_k."""
        key = (of, bockstein)
        found = self._root_of.get(key)
        if found is None:
            found = len(self.roots)
            killed = bool(bockstein) or of.order != 1
            self.roots.append(Root(of, bockstein, of.degree + bool(bockstein), killed))
            self._root_of[key] = found
        return found

    def slot(self, root: int, word: int, degree: int) -> int:
        """The slot of a packed word on a root; `degree` is that of the generator."""
        key = (root, word)
        found = self._slot_of.get(key)
        if found is None:
            found = len(self.word)
            # monomials are ints as long as the number of slots
            self._budget.spend(1 + (found >> 6))
            self._slot_of[key] = found
            self.root.append(root)
            self.word.append(word)
            self.degree.append(degree)
            at = self.roots[root]
            self._meet(at.of)
            if degree % 2 if self.prime != 2 else degree == 1 and at.killed:
                self.nilpotent |= 1 << self.width * found
        return found

    def place(self, generator: Generator, pack: Callable[[Word], int]) -> int:
        """A polynomial generator as a packed monomial; `pack` packs the tokens of a word."""
        word, order = generator.word, 0
        if word and word[-1] < 0:
            word, order = word[:-1], -word[-1]
        root = self.root_of(generator.of, order)
        degree = self.roots[root].degree + word_degree(word, self.prime)
        return 1 << self.width * self.slot(root, pack(word), degree)

    def load_rules(self, place: Callable[[Class], int], pack: Callable[[Any], Any]) -> None:
        """Take over the relations of the named spaces whose classes were met since the last call.

        `place` gives the packed form of a class, `pack` that of a polynomial in classes.
        """
        while self._unruled:
            family = self._unruled.pop()
            for lead, tail in family.rules(self.prime):
                places = [(place(of), exponent) for of, exponent in lead]
                slots = [(place.bit_length() - 1) // self.width for place, _ in places]
                if sum([self.degree[slot] * exponent for slot, (_, exponent) in zip(slots, places)]) >> self.width:
                    continue  # of too high a degree to occur here
                if self._crossed(slots):
                    tail = tuple([(-c, powers) for c, powers in tail])
                packed = sum([place * exponent for place, exponent in places])
                self.rules.append(Rule(tuple(exponents(packed, self.width)), packed, pack(tail)))

    def _crossed(self, slots: list[int]) -> bool:
        """Whether putting the generators of these slots in the order of the slots changes the sign of their product."""
        if self.prime == 2:
            return False
        odd = [slot for slot in slots if self.degree[slot] % 2]
        return sum([a > b for i, a in enumerate(odd) for b in odd[i + 1 :]]) % 2 == 1

    def _meet(self, of: Class) -> None:
        """Note the relations that a class brings with it."""
        family = of.ring
        if family is None:
            return
        if family not in self.families:
            self.families.add(family)
            self._unruled.append(family)
        height = family.height(self.prime, of)
        if height is not None and not height * of.degree >> self.width:
            place = 1 << self.width * (len(self.word) - 1)
            self.rules.append(Rule(tuple(exponents(place * height, self.width)), place * height, None))

    def dividing(self, monomial: int) -> "Rule | None":
        """The first relation whose leading monomial divides this one."""
        width = self.width
        mask = (1 << width) - 1
        for rule in self.rules:
            if all((monomial >> slot * width & mask) >= exponent for slot, exponent in rule.lead):
                return rule
        return None

    def name(self, unpack: Callable[[int], Word], slot: int) -> tuple[Generator, tuple[Any, ...]]:
        """The generator in a slot and its key in the canonical order; `unpack` turns packed words into tokens."""
        while len(self._generators) <= slot:
            at = len(self._generators)
            root = self.roots[self.root[at]]
            word = unpack(self.word[at])
            if root.bockstein:
                word = (*word, -root.bockstein)
            generator = Generator(word, root.of)
            self._generators.append(generator)
            self._keys.append(generator_key(generator, self.prime))
        return self._generators[slot], self._keys[slot]


def exponents(monomial: int, width: int) -> list[tuple[int, int]]:
    """The pairs (slot, exponent) of a packed monomial, slots increasing."""
    mask = (1 << width) - 1
    found = []
    while monomial:
        slot = ((monomial & -monomial).bit_length() - 1) // width
        at = slot * width
        exponent = monomial >> at & mask
        found.append((slot, exponent))
        monomial ^= exponent << at
    return found


Decoded = tuple[int, tuple[Any, ...], Monomial, bool]
"""Degree, key in the canonical order, monomial, and whether its sign changes on the way to it."""


def decode(slots: Slots, unpack: Callable[[int], Word], monomial: int) -> Decoded:
    """A packed monomial in canonical order."""
    found = slots.decoded.get(monomial)
    if found is not None:
        return found
    parts = []
    degree = 0
    for slot, exponent in exponents(monomial, slots.width):
        generator, key = slots.name(unpack, slot)
        parts.append((key, -exponent, generator, slot))
        degree += slots.degree[slot] * exponent
    negative = False
    if len(parts) > 1:
        if slots.prime != 2:
            odd = [part[0] for part in parts if slots.degree[part[3]] % 2]
            negative = sum([a > b for i, a in enumerate(odd) for b in odd[i + 1 :]]) % 2 == 1
        parts.sort()
    found = (
        degree,
        tuple([part[:2] for part in parts]),
        tuple([(generator, -exponent) for _, exponent, generator, _ in parts]),
        negative,
    )
    if len(slots.decoded) > 1 << 14:
        slots.decoded.clear()
    slots.decoded[monomial] = found
    return found
