"""Between the typed tree, terms that can be rewritten, and canonical elements.  Knows no law.

Lowering to terms uses bilinearity and nothing else: sums are multiplied out, while conjugates, Milnor's primitives,
total operations and higher Bocksteins stay letters for the laws to open.
"""

from __future__ import annotations

from opslang.ground.grading import degree, excess, is_admissible
from opslang.ir import tree
from opslang.ir.order import generator_key, monomial_key, word_key
from opslang.ir.term import (
    IDENTITY,
    STABLE,
    TERM_LIMIT,
    UNIT,
    Element,
    Letters,
    TooMany,
    add,
    apply,
    cup,
    of_factor,
    of_monomial,
    power,
    word_on_class,
    zero,
)

LETTER_LIMIT = 250
"""Letters in one word here: terms nest one level a letter."""

Words = dict[Letters, int]


def _product(a: Words, b: Words, p: int) -> Words:
    if len(a) * len(b) > TERM_LIMIT:
        raise TooMany(f"a product of {len(a):,} by {len(b):,} terms")
    total: Words = {}
    for left, first in a.items():
        for right, second in b.items():
            word = left + right
            if len(word) > LETTER_LIMIT:
                raise TooMany(f"a word of more than {LETTER_LIMIT} letters")
            total[word] = (total.get(word, 0) + first * second) % p
    return {word: c for word, c in total.items() if c}


def _letters(word: tree.Word, p: int) -> Letters:
    if len(word) > LETTER_LIMIT:
        raise TooMany(f"a word of more than {LETTER_LIMIT} letters")
    if p == 2:
        return tuple(("Sq", i) for i in word)
    return tuple(("P", i) if i else ("beta", 1) for i in word)


class _Lowering:
    """One conversion; remembers the nodes it has met, since trees share their parts."""

    def __init__(self, p: int) -> None:
        self.p = p
        self.words: dict[int, Words] = {}
        self.elements: dict[int, Element] = {}

    def operation(self, op: tree.Op) -> Words:
        """The operation as a linear combination of words of letters."""
        if id(op) not in self.words:
            self.words[id(op)] = self._operation(op)
        return self.words[id(op)]

    def _operation(self, op: tree.Op) -> Words:
        p = self.p
        if isinstance(op, tree.Composite):
            return {_letters(op.word, p): 1}
        if isinstance(op, tree.MilnorQ):
            return {(("Q", op.k),): 1}
        if isinstance(op, tree.Chi):
            return {((("chi", word),) if word else ()): c for word, c in self.operation(op.argument).items()}
        if isinstance(op, tree.OpSum):
            total: Words = {}
            for scalar, part in op.terms:
                for word, c in self.operation(part).items():
                    total[word] = (total.get(word, 0) + scalar * c) % p
            return {word: c for word, c in total.items() if c}
        result: Words = {(): 1}
        if isinstance(op, tree.OpPower):
            base = self.operation(op.base)
            if op.exponent > LETTER_LIMIT and base and base != {(): 1}:
                raise TooMany(f"a power of more than {LETTER_LIMIT} letters")
            for _ in range(op.exponent if base != {(): 1} else 0):
                result = _product(result, base, p)
            return result
        for part in op.factors:
            result = _product(result, self.operation(part), p)
        return result

    def act(self, words: Words, on: Element) -> Element:
        """A linear combination of words on an element."""
        parts = []
        for word, c in words.items():
            result = on
            for key, index in reversed(word):
                result = apply(key, index, result)
            parts.append((c, result))
        return add(self.p, *parts)

    def element(self, cls: tree.Cls) -> Element:
        """The class as a sum of products."""
        if id(cls) not in self.elements:
            self.elements[id(cls)] = self._element(cls)
        return self.elements[id(cls)]

    def _element(self, cls: tree.Cls) -> Element:
        p = self.p
        if isinstance(cls, tree.Fundamental):
            return of_factor(p, cls.of)
        if isinstance(cls, tree.Unit):
            return of_monomial(p, UNIT)
        if isinstance(cls, tree.Cup):
            return cup(of_monomial(p, UNIT), *map(self.element, cls.factors))
        if isinstance(cls, tree.ClassSum):
            return add(p, *((scalar, self.element(part)) for scalar, part in cls.terms))
        if isinstance(cls, tree.ClassPower):
            return power(self.element(cls.base), cls.exponent)
        if isinstance(cls, tree.Apply):
            return self.act(self.operation(cls.op), self.element(cls.argument))
        if isinstance(cls, tree.HigherBockstein):
            return apply("beta", cls.k, self.element(cls.argument))
        return apply("total", 0, self.element(cls.argument))


def from_tree(node: tree.Tree, prime: int) -> Element:
    """The term of a typed tree; an operation becomes words on `STABLE`.  TooMany where it is too large to read."""
    lowering = _Lowering(prime)
    try:
        if isinstance(node, tree.OPS):
            return lowering.act(lowering.operation(node), of_monomial(prime, IDENTITY))
        return lowering.element(node)
    except RecursionError:
        raise TooMany("abbreviations nested too deeply") from None


# --- canonical elements ---------------------------------------------------------------------------


def is_generator(word: tree.Word, of: tree.Class, p: int) -> bool:
    """Whether a word on a class is a generator of its cohomology.  Source: Serre 1953; Cartan 1954."""
    if of.ring is not None:
        # the space says what every operation on a class of its own is
        return not word
    if not is_admissible(word, p):
        return False
    if word:
        last = word[-1]
        if any(token < 0 for token in word[:-1]) or (last < 0 and (of.order < 2 or last != -of.order)):
            return False
        if of.order != 1 and last == (1 if p == 2 else 0):
            return False
    e = excess(word, p)
    if p == 2:
        # beta_k of a class of degree 1 has excess 1 but is no square: that class squares to 0.
        return e < of.degree or (word == (-of.order,) and of.degree == 1) or not word
    return e < of.degree or not word or (e == of.degree and word[0] <= 0)


def _rewritten(monomial: tree.Monomial, p: int) -> bool:
    """Whether the leading monomial of a relation of a named space divides a product of generators."""
    exponents = {generator.of: exponent for generator, exponent in monomial if not generator.word}
    rings = {of.ring for of in exponents if of.ring is not None}
    return any(all(exponents.get(of, 0) >= n for of, n in lead) for ring in rings for lead, _ in ring.rules(p))


def to_canonical(element: Element, operation: bool) -> tree.OperationElement | tree.ClassElement:
    """A normal term as a canonical element.  ValueError, naming the factor, where a term is not normal."""
    p = element.prime
    if operation:
        words = []
        for monomial, c in element.terms:
            plain = word_on_class(monomial.blocks[0][0], p) if len(monomial.blocks) == 1 else None
            if plain is None or plain[1] != STABLE or not is_admissible(plain[0], p) or min(plain[0], default=0) < 0:
                raise ValueError(f"{monomial} is not an admissible word")
            words.append((plain[0], c))
        words.sort(key=lambda term: (degree(term[0], p), word_key(term[0], p)))
        return tree.OperationElement(p, tuple(words))
    terms = []
    for monomial, c in element.terms:
        generators = []
        total = 0
        for factor, exponent in monomial.blocks:
            plain = word_on_class(factor, p)
            if plain is None or not is_generator(*plain, p):
                raise ValueError(f"{factor} is not a generator")
            word, of = plain
            dimension = degree(word, p) + of.degree
            exterior = (p > 2 and dimension % 2) or (p == 2 and of.order != 1 and dimension == 1)
            if exterior and exponent > 1:
                raise ValueError(f"{factor} squares to 0")
            if of.ring is not None and (of.ring.height(p, of) or exponent + 1) <= exponent:
                raise ValueError(f"{factor}^{exponent} is 0")
            total += dimension * exponent
            generators.append((tree.Generator(word, of), exponent))
        ordered = tuple(sorted(generators, key=lambda g: generator_key(g[0], p)))
        if ordered != tuple(generators):
            raise ValueError("the factors are not in the order of generators")
        if _rewritten(ordered, p):
            raise ValueError("a relation of the ring rewrites it")
        terms.append((total, ordered, c))
    terms.sort(key=lambda term: (term[0], monomial_key(term[1], p)))
    return tree.ClassElement(p, tuple((monomial, c) for _, monomial, c in terms))


__all__ = ["from_tree", "is_generator", "to_canonical", "zero"]
