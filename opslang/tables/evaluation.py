"""One statement's walk over its typed tree, with the rings and algebras of this room.

Strategy.  Words act on classes from the right, one letter at a time, so that instability prunes early; words of the
algebra are first searched for short factors that vanish, so that a word that is 0 is seen to be so however large the
rest of it is."""

from __future__ import annotations

from collections.abc import Iterator
from itertools import pairwise
from typing import TYPE_CHECKING, Any

from opslang.ground.grading import token_degree
from opslang.ir import tree as ir
from opslang.tables.bockstein import higher
from opslang.tables.budget import TooLarge

if TYPE_CHECKING:
    from opslang.tables.engine import Engine, Ring

_PAIR = 256
"""Pairs of letters are tried for 0 before a word is applied where their sum is below this."""
_EASY = 20_000
"""Terms that a word may take before its factors are searched for one that vanishes."""


def sorted_keys(waiting: dict[int, Any], below: int) -> Iterator[int]:
    """The keys below a bound, least first, of a dict that grows at greater keys meanwhile."""
    while (least := min(waiting, default=below)) < below:
        yield least


class Evaluation:
    """One statement's walk over its tree; remembers the values of shared nodes."""

    def __init__(self, engine: Engine, ring: Ring) -> None:
        self.engine = engine
        self.ring: Any = ring
        self.algebra: Any = ring.algebra
        self.prime = engine.prime
        self._values: dict[int, Any] = {}

    # --- operations as elements of the algebra --------------------------------------------------

    def operation(self, tree: ir.Op) -> Any:
        """An operation as a packed element; not to be changed in place."""
        found = self._values.get(id(tree))
        if found is None:
            found = self._values[id(tree)] = self._operation(tree)
        return found

    def _one(self) -> Any:
        return {0} if self.prime == 2 else {0: 1}

    def _operation(self, tree: ir.Op) -> Any:
        match tree:
            case ir.Composite():
                return self.word(tree.word)
            case ir.Compose():
                element = self._one()
                for factor in reversed(tree.factors):
                    element = self.compose(factor, element)
                    if not element:
                        break
                return element
            case ir.OpSum():
                result = self.ring.zero()
                for c, term in tree.terms:
                    self.ring.add(result, self.operation(term), c)
                return result
            case ir.OpPower():
                return self.op_power(self.operation(tree.base), tree.exponent)
            case ir.Chi():
                return self.conjugate(tree.argument)
            case ir.MilnorQ():
                return self.primitive(tree.k)

    def word(self, word: ir.Word) -> Any:
        """A word's canonical form."""
        short = len(word) < 3 or (len(word) == 3 and max(word) < _PAIR)
        element = None if short else self._quickly(word)
        if element is None:
            element = self.algebra.normal(word)
        return element

    def _quickly(self, word: ir.Word) -> Any:
        """A word's canonical form if little work gives it, or if a factor of it is seen to be 0; else None."""
        budget, algebra = self.engine.budget, self.algebra
        left = budget.left
        try:
            budget.left = min(left, _EASY)
            return algebra.normal(word)
        except TooLarge:
            return self._vanishing_factor(word)
        finally:
            budget.left = left

    def _vanishing_factor(self, word: ir.Word) -> Any:
        """0 if a factor of the word is seen to vanish, the word itself if all factors turn out small; else None.

        Factors are tried in order of length; each is a letter times the factor one shorter, while those stay small.
        """
        budget, algebra = self.engine.budget, self.algebra
        budget.left = _EASY
        factors: list[Any] = [algebra.normal(word[at : at + 1]) for at in range(len(word))]
        for length in range(2, len(word) + 1):
            longer: list[Any] = []
            for at in range(len(word) - length + 1):
                value = None
                if factors[at + 1] is not None:
                    budget.left = _EASY // 4
                    try:
                        value = algebra.times(word[at], factors[at + 1])
                    except TooLarge:
                        pass
                    if value is not None and not value:
                        return self.ring.zero()
                longer.append(value)
            factors = longer
            if all(value is None for value in factors):
                return None
        return factors[0]

    def compose(self, op: ir.Op, element: Any) -> Any:
        """An operation times an element of the algebra."""
        if isinstance(op, ir.Composite):
            for token in reversed(op.word):
                element = self.algebra.times(token, element)
            return element
        return self.times(self.operation(op), element)

    def times(self, f: Any, g: Any) -> Any:
        """The product of two elements of the algebra.  Words of the left one with a common end share the work on it."""
        unpack = self.algebra.unpack
        return self._times([(unpack(x), 1 if self.prime == 2 else f[x]) for x in f], g)

    def _times(self, words: list[tuple[ir.Word, int]], g: Any) -> Any:
        result = self.ring.zero()
        by_end: dict[int, list[tuple[ir.Word, int]]] = {}
        for word, c in words:
            if word:
                by_end.setdefault(word[-1], []).append((word[:-1], c))
            else:
                self.ring.add(result, g, c)
        for token, rest in by_end.items():
            part = self.algebra.times(token, g)
            if part:
                self.ring.add(result, self._times(rest, part))
        return result

    def op_power(self, base: Any, exponent: int) -> Any:
        """A power by composition, through the binary digits of the exponent."""
        result = self._one()
        while exponent:
            if exponent & 1:
                result = self.times(result, base)
            exponent >>= 1
            if exponent and result:
                base = self.times(base, base)
            if not result:
                break
        return result

    def conjugate(self, tree: ir.Op) -> Any:
        """The conjugate of an operation."""
        result = self.ring.zero()
        element = self.operation(tree)
        for x in element:
            word = self.algebra.unpack(x)
            part = self._one()
            for token in word:
                part = self.times(self._conjugate_letter(token), part)
            self.ring.add(result, part, self._reversal_sign(word) * (1 if self.prime == 2 else element[x]))
        return result

    def _reversal_sign(self, word: ir.Word) -> int:
        """The sign of chi on a word: that of the reversal of its Bocksteins, and chi(beta) = -beta for each."""
        boundary = word.count(0) if self.prime != 2 else 0
        return -1 if (boundary * (boundary + 1) // 2) % 2 else 1

    def _conjugate_letter(self, token: int) -> Any:
        """chi of a letter, by sum_i P^i chi(P^{n-i}) = 0; without the sign where the letter is a Bockstein."""
        if self.prime != 2 and token == 0:
            return self.algebra.times(0, self._one())
        found = [self._one()]
        for n in range(1, token + 1):
            self.engine.budget.spend(n)
            value = self.ring.zero()
            for i in range(1, n + 1):
                self.ring.add(value, self.algebra.times(i, found[n - i]), -1)
            found.append(value)
        return found[token]

    def primitive(self, k: int) -> Any:
        """Milnor's primitive: Q_0 is the Bockstein, Q_{j+1} the commutator of P^{p^j} (Sq^{2^{j+1}}) with Q_j
        (Milnor 1958)."""
        p = self.prime
        element = self.algebra.times(1 if p == 2 else 0, self._one())
        for j in range(k):
            letter = self.algebra.times(2 ** (j + 1) if p == 2 else p**j, self._one())
            result = self.times(letter, element)
            self.ring.add(result, self.times(element, letter), -1)
            element = result
        return element

    # --- classes --------------------------------------------------------------------------------

    def cls(self, tree: ir.Cls) -> Any:
        """A class as a packed element; not to be changed in place."""
        if type(tree) is ir.Fundamental:
            return self.ring.generator(tree.of)
        found = self._values.get(id(tree))
        if found is None:
            found = self._values[id(tree)] = self._cls(tree)
        return found

    def _cls(self, tree: ir.Cls) -> Any:
        ring = self.ring
        match tree:
            case ir.Fundamental():
                return ring.generator(tree.of)
            case ir.Apply():
                return ring.zero() if self._unstable(tree) else self.apply(tree.op, self.cls(tree.argument))
            case ir.ClassSum():
                result = ring.zero()
                for c, term in tree.terms:
                    ring.add(result, self.cls(term), c)
                return result
            case ir.Cup():
                if any(type(factor) is ir.Apply and self._unstable(factor) for factor in tree.factors):
                    return ring.zero()
                element = self.cls(tree.factors[0])
                for factor in tree.factors[1:]:
                    if not element:
                        break
                    element = ring.multiply(element, self.cls(factor))
                return element
            case ir.ClassPower():
                return ring.power(self.cls(tree.base), tree.exponent)
            case ir.Unit():
                return ring.unit()
            case ir.Total():
                return ring.total(self.cls(tree.argument))
            case ir.HigherBockstein():
                value, modulo = higher(ring, tree.k, self.cls(tree.argument))
                if modulo:
                    self.engine.modulo = True
                    self.engine.modulo_order = max(self.engine.modulo_order, tree.k)
                return value

    def _unstable(self, tree: ir.Apply) -> bool:
        """Whether a word on a class of known degree is 0 by instability: a letter is above the degree it meets."""
        if type(tree.op) is not ir.Composite or tree.argument.degree is None:
            return False
        p, degree = self.prime, tree.argument.degree
        for token in reversed(tree.op.word):
            if token > degree if p == 2 else 2 * token > degree:
                return True
            degree += token_degree(token, p)
        return False

    def _kills(self, word: ir.Word) -> bool:
        """Whether two neighbouring letters of a word compose to 0."""
        pair = self.algebra.pair
        for a, b in pairwise(word):
            if self.prime == 2:
                if a < 2 * b and a + b < _PAIR and not pair(a, b):
                    return True
            elif a == b == 0 or (0 < a < self.prime * b and a + b < _PAIR and not pair(a, b, 0)):
                return True
        return False

    def apply(self, op: ir.Op, element: Any) -> Any:
        """An operation applied to an element of H^*."""
        ring = self.ring
        match op:
            case ir.Composite():
                if len(op.word) > 1 and self._kills(op.word):
                    return ring.zero()
                for token in reversed(op.word):
                    element = ring.letter(token, element)
                    if not element:
                        break
                return element
            case ir.Compose():
                for factor in reversed(op.factors):
                    element = self.apply(factor, element)
                    if not element:
                        break
                return element
            case ir.OpSum():
                result = ring.zero()
                for c, term in op.terms:
                    ring.add(result, self.apply(term, element), c)
                return result
            case ir.OpPower():
                if op.exponent > 64:
                    return self._apply_element(self.operation(op), element)
                for _ in range(op.exponent):
                    element = self.apply(op.base, element)
                return element
            case ir.Chi():
                return self._apply_conjugate(op.argument, element)
            case ir.MilnorQ():
                return self._apply_primitive(op.k, element)

    def _apply_element(self, op: Any, element: Any) -> Any:
        """A packed element of the algebra applied to an element of H^*."""
        result = self.ring.zero()
        for x in op:
            value = self.apply(ir.Composite(self.algebra.unpack(x), 0), element)
            self.ring.add(result, value, 1 if self.prime == 2 else op[x])
        return result

    def _apply_conjugate(self, tree: ir.Op, element: Any) -> Any:
        """chi of an operation applied to an element of H^*."""
        if not isinstance(tree, ir.Composite):
            return self._apply_element(self.conjugate(tree), element)
        for token in tree.word:
            element = self._apply_conjugate_letter(token, element)
        result = self.ring.zero()
        self.ring.add(result, element, self._reversal_sign(tree.word))
        return result

    def _apply_conjugate_letter(self, token: int, element: Any) -> Any:
        """chi of a letter on an element, by the same sum as in the algebra, over the degrees where something is
        left."""
        ring = self.ring
        if self.prime != 2 and token == 0:
            return ring.letter(0, element)
        waiting: dict[int, Any] = {0: element}
        top = max((ring.degree(x) for x in element), default=0)
        step = 1 if self.prime == 2 else 2 * (self.prime - 1)
        for n in sorted_keys(waiting, token):
            value = waiting.pop(n)
            if not value:
                continue
            reach = top + n * step if self.prime == 2 else (top + n * step) // 2
            # on the p^j-th power of something only every p^j-th operation is not 0
            every = min(ring.root_exponent(x) for x in value)
            for i in range(every, min(token - n, reach) + 1, every):
                self.engine.budget.spend(4)
                part = ring.letter(i, value)
                if part:
                    ring.add(waiting.setdefault(n + i, ring.zero()), part, -1)
        return waiting.get(token, ring.zero())

    def _apply_primitive(self, k: int, element: Any) -> Any:
        """Q_k of an element of H^*: the derivation given by its values on generators."""
        return self.ring.derivation(element, lambda slot: self._primitive_of(k, slot), 1)

    def _primitive_of(self, k: int, slot: int) -> Any:
        """Q_k of a generator, by the commutator."""
        ring, p = self.ring, self.prime
        key = (k, slot)
        found = ring._primitives.get(key)
        if found is None:
            generator = ring.multiply(ring.unit(), {1 << slot * ring.width} if p == 2 else {1 << slot * ring.width: 1})
            if k == 0:
                found = ring.letter(1 if p == 2 else 0, generator)
            else:
                letter = 2**k if p == 2 else p ** (k - 1)
                found = ring.zero()
                inner = self._apply_primitive(k - 1, generator)
                if inner:
                    ring.add(found, ring.letter(letter, inner))
                moved = ring.letter(letter, generator)
                if moved:
                    ring.add(found, self._apply_primitive(k - 1, moved), -1)
            ring._primitives[key] = found
        return found
