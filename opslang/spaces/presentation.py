"""An algebra by generators, relations and operations on generators, and the operations that follow on all its elements.

Operations act on polynomials in the generators by the Cartan formula.  On a generator an operation is known where it
was given; where its degree settles it (instability, a group that is 0); where the Adem relations make it of given ones
(Sq^i for i no power of 2, P^i for i no power of p); or where an Adem relation determines it.  Elsewhere it is Unknown,
never 0.  The Adem relations are written here once more, as pairs of words: the room of the laws lies above this one.
Source: Steenrod and Epstein 1962, ch. I and VI.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping

from attrs import frozen

from opslang.ground.arith import binomial_mod
from opslang.spaces.groebner import Exponents, Ideal, Poly, Ring, Work
from opslang.spaces.hilbert import dimensions

Frozen = tuple[tuple[Exponents, int], ...]
"""A polynomial as a value."""

MOST_DEGREE = 10_000
"""Generators have at most this degree, and presentations are checked up to it at most."""

Key = tuple[int, int]
"""A generator by its number, and a token."""


class Unknown(Exception):
    """An operation on a generator that was not given and is not determined.  Carries both."""

    def __init__(self, at: int, token: int) -> None:
        super().__init__(at, token)
        self.key: Key = (at, token)


@frozen
class Named:
    """A generator: its name and its degree."""

    letter: str
    index: int | None
    primes: int
    degree: int

    @property
    def text(self) -> str:
        """The name as it is typed."""
        return self.letter + ("" if self.index is None else f"_{self.index}") + "'" * self.primes


@frozen(cache_hash=True)
class Presentation:
    """What was written: exponents have one entry a generator, and one more that is always 0."""

    name: str
    prime: int
    generators: tuple[Named, ...]
    relations: tuple[Frozen, ...]
    given: tuple[tuple[Key, Frozen], ...]

    def ring(self, work: Work, formal: int = 1) -> Ring:
        """The free ring on the generators and a formal class of the given degree."""
        degrees = (*[of.degree for of in self.generators], formal)
        odd = [at for at, degree in enumerate(degrees) if degree % 2] if self.prime != 2 else []
        return Ring(self.prime, degrees, tuple(odd), work)

    def show(self, f: Mapping[Exponents, int]) -> str:
        """A polynomial as it is typed."""
        terms = []
        for m, c in sorted(f.items(), reverse=True):
            powers = [of.text + (f"^{e}" if e > 1 else "") for of, e in zip(self.generators, m) if e]
            terms.append(" ".join([*([str(c)] if c != 1 or not powers else []), *powers]))
        return " + ".join(terms) or "0"

    def operation(self, token: int) -> str:
        """A letter as it is typed."""
        return f"Sq^{token}" if self.prime == 2 else f"P^{token}" if token else "beta"


Word = tuple[int, ...]
Combination = list[tuple[int, Word]]


def adem(p: int, a: int, b: int, bockstein: bool = False) -> Combination:
    """What Sq^a Sq^b (0 < a < 2b), P^a P^b (0 < a < pb) or, with `bockstein`, P^a beta P^b (0 < a <= pb) equals."""
    if p == 2:
        rows = [(binomial_mod(b - 1 - j, a - 2 * j, 2), (a + b - j, j)) for j in range(a // 2 + 1)]
        return [(c, tuple([i for i in word if i])) for c, word in rows if c]
    found: Combination = []
    for j in range(a // p + 1):
        sign = (-1) ** (a + j)
        tail = (j,) if j else ()
        if not bockstein:
            found.append((sign * binomial_mod((p - 1) * (b - j) - 1, a - p * j, p) % p, (a + b - j, *tail)))
            continue
        found.append((sign * binomial_mod((p - 1) * (b - j), a - p * j, p) % p, (0, a + b - j, *tail)))
        found.append((-sign * binomial_mod((p - 1) * (b - j) - 1, a - p * j - 1, p) % p, (a + b - j, 0, *tail)))
    return [(c, word) for c, word in found if c]


class Action:
    """The operations on the algebra of a presentation, as far as they are known."""

    def __init__(self, presentation: Presentation, work: Work, more: tuple[Poly, ...] = ()) -> None:
        self.of = presentation
        self.prime = presentation.prime
        self.work = work
        self.ring = presentation.ring(work)
        self.ideal = Ideal(self.ring, [*map(dict, presentation.relations), *more])
        self.values: dict[Key, Poly] = {key: self.ideal.reduce(dict(value)) for key, value in presentation.given}
        self._found: dict[Key, Poly] = {}
        self._powers: dict[tuple[int, int, int], Poly] = {}
        self._monomials: dict[tuple[int, Exponents], Poly] = {}
        self._dimensions: list[int] = []

    def with_formal(self, key: Key) -> "Action":
        """The same, where the value of one unknown operation is the formal class."""
        at, token = key
        other = Action.__new__(Action)
        other.__dict__.update(self.__dict__)
        other.ring = self.of.ring(self.work, self.of.generators[at].degree + self.shift(token))
        other.ideal = self.ideal.within(other.ring)
        other.values = {**self.values, key: other.ring.variable(len(self.of.generators))}
        other._found, other._powers, other._monomials = {}, {}, {}
        return other

    def modulo(self, more: tuple[Poly, ...]) -> "Action":
        """The same modulo further relations."""
        other = Action(self.of, self.work, more)
        other.values = {key: other.ideal.reduce(value) for key, value in self.values.items()}
        return other

    def shift(self, token: int) -> int:
        """The degree of a letter."""
        if self.prime == 2:
            return token
        return 2 * token * (self.prime - 1) if token else 1

    def empty(self, degree: int) -> bool:
        """Whether the algebra is seen to be 0 in a degree: always where it is, up to MOST_DEGREE."""
        if degree > MOST_DEGREE:
            return False
        if degree >= len(self._dimensions):
            self._dimensions = self.dimensions(max(64, 2 * degree))
        return not self._dimensions[degree]

    def dimensions(self, to: int) -> list[int]:
        """The Poincaré series up to a degree."""
        ring = self.ring
        squares = [tuple([2 if i == at else 0 for i in range(len(ring.degrees) - 1)]) for at in ring.odd]
        leads = [lead[:-1] for lead in self.ideal.rules]
        return dimensions(ring.degrees[:-1], leads + [m for m in squares if any(m)], to, self.work)

    # --- on generators --------------------------------------------------------------------------

    def normal(self, at: int) -> Poly:
        """The normal form of a generator: another one than itself where the relations make it of others."""
        return self.ideal.reduce(self.ring.variable(at))

    def value(self, at: int, token: int) -> Poly:
        """A letter on a generator.  Raises Unknown."""
        ring, p = self.ring, self.prime
        if token == 0 and p == 2:
            return ring.variable(at)
        degree = ring.degrees[at]
        if token:
            twice = token if p == 2 else 2 * token
            if twice >= degree:
                return self.ideal.reduce(ring.variable(at, p)) if twice == degree else {}
        found = self.values.get((at, token))
        if found is None:
            found = self._found.get((at, token))
        if found is None:
            found = self._found[at, token] = self._derived(at, token)
        return found

    def _derived(self, at: int, token: int) -> Poly:
        if at < len(self.of.generators):
            normal = self.normal(at)
            if normal != self.ring.variable(at):
                return self.operate(token, normal)
            if self.empty(self.ring.degrees[at] + self.shift(token)):
                return {}
            parts = self._decomposed(token)
            if parts is not None:
                a, b, lead = parts
                result = self.word((a, b), at)
                for c, word in adem(self.prime, a, b):
                    if len(word) > 1:
                        self.ring.add(result, self.word(word, at), -c)
                scaled: Poly = {}
                self.ring.add(scaled, result, pow(lead, -1, self.prime))
                return scaled
        raise Unknown(at, token)

    def _decomposed(self, token: int) -> tuple[int, int, int] | None:
        """(a, b, c) with P^a P^b = c P^token + words of two letters; None for indecomposable letters."""
        p = self.prime
        power = 1
        while power * p <= token:
            power *= p
        if not token or power == token:
            return None
        for b in range(power, 0, -1):
            a = token - b
            if 0 < a < p * b:
                c = sum([c for c, word in adem(p, a, b) if word == (token,)]) % p
                if c:
                    return a, b, c
        return None

    def origin(self, at: int, token: int) -> str:
        """Why an operation on a generator is what it is, in words."""
        name = self.of.name
        if ((at, token)) in dict(self.of.given):
            return f"the operations given for {name}"
        if (at, token) in self.values:
            return f"an Adem relation and the operations given for {name}"
        if self.normal(at) != self.ring.variable(at):
            return f"the relations of {name}"
        degree = self.ring.degrees[at] + self.shift(token)
        if self.empty(degree):
            return f"H^{degree}({name}) = 0"
        parts = self._decomposed(token)
        word = " ".join(map(self.of.operation, parts[:2])) if parts else ""
        return f"the Adem relation of {word} and the operations given for {name}"

    # --- on polynomials -------------------------------------------------------------------------

    def word(self, word: Word, at: int) -> Poly:
        """A word on a generator.  Raises Unknown."""
        if not word:
            return self.normal(at)
        return self._run(word[:-1], self.value(at, word[-1]))

    def _run(self, word: Word, f: Poly) -> Poly:
        for token in reversed(word):
            f = self.operate(token, f)
        return f

    def operate(self, token: int, f: Mapping[Exponents, int]) -> Poly:
        """A letter on a polynomial, in normal form.  Raises Unknown."""
        result: Poly = {}
        for m, c in f.items():
            self.ring.add(result, self._on_monomial(token, m), c)
        return self.ideal.reduce(result)

    def _on_monomial(self, token: int, m: Exponents) -> Poly:
        found = self._monomials.get((token, m))
        if found is None:
            found = {}
            if m[-1] or not self.empty(self.ring.degree(m) + self.shift(token)):
                found = self._cartan(token, m) if token else self._bockstein(m)
            self._monomials[token, m] = found
        return found

    def _bockstein(self, m: Exponents) -> Poly:
        """The Bockstein of a monomial at an odd prime: a derivation of degree 1."""
        ring = self.ring
        result: Poly = {}
        passed = 0
        for at, e in enumerate(m):
            if e % self.prime:
                head = {(*m[:at], e - 1, *[0] * (len(m) - at - 1)): e % self.prime}
                tail = {(*[0] * (at + 1), *m[at + 1 :]): 1}
                term = ring.times(ring.times(head, self.value(at, 0)), tail)
                ring.add(result, term, -1 if passed % 2 else 1)
            passed += e * ring.degrees[at]
        return self.ideal.reduce(result)

    def _cartan(self, token: int, m: Exponents) -> Poly:
        """Sq^token or P^token of a monomial."""
        ring, p = self.ring, self.prime
        parts = [(at, e) for at, e in enumerate(m) if e]
        reach = [e * (ring.degrees[at] if p == 2 else ring.degrees[at] // 2) for at, e in parts]
        rest = sum(reach)
        sums: dict[int, Poly] = {0: ring.one()}
        for (at, e), most in zip(parts, reach):
            rest -= most
            following: dict[int, Poly] = {}
            for d, f in sums.items():
                for i in range(max(0, token - d - rest), min(token - d, most) + 1):
                    factor = self._on_power(at, e, i)
                    if factor:
                        product = self.ideal.reduce(ring.times(f, factor))
                        ring.add(following.setdefault(d + i, {}), product)
            sums = {d: f for d, f in following.items() if f}
        return sums.get(token, {})

    def _on_power(self, at: int, e: int, i: int) -> Poly:
        """Sq^i or P^i of a power of a generator."""
        if i == 0:
            return self.ring.variable(at, e)
        if e == 1:
            return self.value(at, i)
        found = self._powers.get((at, e, i))
        if found is not None:
            return found
        p, ring = self.prime, self.ring
        found = {}
        if e % p == 0:
            if i % p == 0:
                found = self.ideal.reduce(ring.frobenius(self._on_power(at, e // p, i // p)))
        else:
            for j in range(i + 1):
                right = self._on_power(at, e - 1, i - j)
                if right:
                    left = self.value(at, j) if j else ring.variable(at)
                    ring.add(found, self.ideal.reduce(ring.times(left, right)))
        self._powers[at, e, i] = found
        return found

    # --- the Adem relations ---------------------------------------------------------------------

    def adem_relations(self, at: int, to: int) -> Iterator[tuple[Word, Combination]]:
        """The relations that instability does not make true by itself on a generator, and whose degree is at most `to`
        and one in which the algebra is not 0: a word and what it equals.

        On a generator that is made of others there are none that closed relations do not give.
        """
        if self.normal(at) != self.ring.variable(at):
            return
        for word in self._words(at, to):
            self.work.spend(1)
            if not self.empty(self.ring.degrees[at] + sum(map(self.shift, word))):
                yield word, adem(self.prime, word[0], word[-1], len(word) > 2) if any(word) else []

    def _words(self, at: int, to: int) -> Iterator[Word]:
        degree, p = self.ring.degrees[at], self.prime
        room = to - degree
        if p == 2:
            for b in range(1, min(degree - 1, room) + 1):
                yield from [(a, b) for a in range(1, min(2 * b - 1, room - b) + 1)]
            return
        if room >= 2:
            yield 0, 0
        steps = room // (2 * (p - 1))
        for b in range(1, min((degree - 1) // 2, steps) + 1):
            yield from [(a, b) for a in range(1, min(p * b - 1, steps - b) + 1)]
            steps_left = (room - 1) // (2 * (p - 1)) - b
            yield from [(a, 0, b) for a in range(1, min(p * b, steps_left) + 1)]

    def highest_relation(self, at: int) -> int:
        """The highest degree of those relations."""
        if self.normal(at) != self.ring.variable(at):
            return 0
        degree, p = self.ring.degrees[at], self.prime
        if p == 2:
            return 4 * degree - 4 if degree > 1 else 0
        b = (degree - 1) // 2
        return degree + (2 * (p - 1) * (p + 1) * b + 1 if b else 2)

    def sides(self, at: int, word: Word, equals: Combination) -> tuple[Poly, Poly]:
        """Both sides of a relation on a generator.  Raises Unknown."""
        right: Poly = {}
        for c, other in equals:
            self.ring.add(right, self.word(other, at), c)
        return self.word(word, at), right

    def settle(self, key: Key, value: Poly) -> None:
        """Take over the value of an operation that was unknown; what was worked out without it stays right."""
        self.values[key] = value

    def determine(self, key: Key, at: int, word: Word, equals: Combination) -> Poly | None:
        """The value that a relation forces an unknown operation to have, if it does.  Raises Unknown."""
        left, right = self.with_formal(key).sides(at, word, equals)
        self.ring.add(left, right, -1)
        formal = [(m, c) for m, c in left.items() if m[-1]]
        if len(formal) != 1 or sum(formal[0][0]) != 1:
            return None
        value: Poly = {}
        self.ring.add(value, {m: c for m, c in left.items() if not m[-1]}, -pow(formal[0][1], -1, self.prime))
        return value
