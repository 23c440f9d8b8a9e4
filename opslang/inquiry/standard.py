"""Maps that need no further word: projections, diagonals, and the standard maps between named spaces.

Standard are: inclusions BO(m) -> BO(n) and the like, BSO -> BO, BSpin -> BSO, BSU -> BU; the real bundle under a
complex one
BU(n) -> BO(2n), complexification BO(n) -> BU(n), BSp(n) -> BU(2n) and BU(n) -> BSp(n); sums of lines RP^… x … x RP^…
-> BO(n)
and CP^… x … -> BU(n); RP^m -> RP^n, CP^m -> CP^n, HP^m -> HP^n for m <= n, RP^m -> CP^n, CP^m -> HP^n; reductions
RP^{2n+1} -> CP^n, CP^{2n+1} -> HP^n; K(Z, n) -> K(Z/m, n) and K(Z/m, n) -> K(Z/d, n) for d dividing m.  Source:
Milnor and Stasheff 1974.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import cast

from opslang.ir import tree as ir
from opslang.ir.tree import Class
from opslang.meaning.value import NONE, Value, cls, polynomial_value
from opslang.report.diagnostic import Refusal, error
from opslang.spaces.characteristic import Classifying, Pontryagin
from opslang.spaces.family import ONE, Family, Polynomial, collected, generator
from opslang.spaces.projective import Projective
from opslang.spaces.reductions import pontryagin, signed, times
from opslang.spaces.space import AnyFactor, Factor, Localised, NamedFactor, SpaceValue, localise
from opslang.syntax import surface as sf

Image = Callable[[Class], Value]
ORTHOGONAL = ("Spin", "SO", "O")
UNITARY = ("SU", "U")


def _refusal(message: str, statement: sf.MapStatement, help: str = "") -> Refusal:
    return Refusal(error("map", message, statement.span, help))


def standard(statement: sf.MapStatement, source: SpaceValue, target: SpaceValue, prime: int) -> Image:
    """The images under the map that the statement names.  Refusal where there is none."""
    if statement.how == "projection":
        return _projection(statement, source, target, prime)
    if statement.how == "diagonal":
        return _diagonal(statement, source, target, prime)
    for find in (_coefficients, _lines, _between):
        found = find(source, target, prime)
        if found is not None:
            return found
    message = f"no standard map {source.text} -> {target.text} is known here"
    raise _refusal(message, statement, "say where the classes go: map f : X -> Y with y -> x^2")


def _zero(of: Class) -> Value:
    return cls(ir.ClassSum((), of.degree, of.degree), NONE)


def _value(polynomial: Polynomial, of: Class, prime: int) -> Value:
    return polynomial_value(polynomial, prime, ir.HERE) if polynomial else _zero(of)


# --- products --------------------------------------------------------------------------------------


def _alike(one: AnyFactor, other: AnyFactor) -> bool:
    """Whether two factors are the same space, whatever their classes are called."""
    if isinstance(one, NamedFactor) and isinstance(other, NamedFactor):
        return (one.word, one.number, one.base) == (other.word, other.number, other.base)
    return one == other


def _members(space: SpaceValue, here: Localised, at: int, prime: int) -> Callable[[Class], Class] | None:
    """For factor `at` of a space: the class there that corresponds to a class of another copy of the factor."""
    position = at if len(space.factors) > 1 else 0
    if isinstance(space.factors[at], Factor):
        found = [of for of in here.classes if of.factor == position]
        return (lambda of: found[0]) if found else None
    family = next((f for f in here.families if getattr(f, "factor", 0) == position), None)
    if family is None:
        return None

    def member(of: Class) -> Class:
        there = cast(Family, of.ring).classes(prime, of.degree)
        return family.classes(prime, of.degree)[there.index(of)]

    return member


def _along(statement: sf.MapStatement, source: SpaceValue, target: SpaceValue, prime: int, factors: list[int]) -> Image:
    """The map whose factor j of the target is factor factors[j] of the source."""
    here = localise(source, prime)
    members = [_members(source, here, at, prime) for at in factors]

    def image(of: Class) -> Value:
        member = members[of.factor if len(target.factors) > 1 else 0]
        if member is None:
            return _zero(of)
        found = member(of)
        return cls(ir.Fundamental(found, found.degree, found.degree), frozenset((found,)))

    return image


def _projection(statement: sf.MapStatement, source: SpaceValue, target: SpaceValue, prime: int) -> Image:
    at, size = statement.number - 1, len(target.factors)
    if not (0 <= at and at + size <= len(source.factors)):
        raise _refusal(
            f"{source.text} has {len(source.factors)} factors, and the projection begins at factor {at + 1}", statement
        )
    if not all(map(_alike, source.factors[at : at + size], target.factors)):
        raise _refusal(f"factor {at + 1} of {source.text} is not {target.text}", statement)
    return _along(statement, source, target, prime, list(range(at, at + size)))


def _diagonal(statement: sf.MapStatement, source: SpaceValue, target: SpaceValue, prime: int) -> Image:
    size = len(source.factors)
    copies, rest = divmod(len(target.factors), size)
    if rest or not all(_alike(source.factors[j % size], factor) for j, factor in enumerate(target.factors)):
        help = "X x X may give the classes of its factors other letters"
        raise _refusal(f"the target of a diagonal is a product of copies of {source.text}", statement, help)
    return _along(statement, source, target, prime, list(range(size)) * copies)


# --- Eilenberg-MacLane spaces ----------------------------------------------------------------------


def _coefficients(source: SpaceValue, target: SpaceValue, prime: int) -> Image | None:
    """The reduction of coefficients."""
    if len(source.factors) != 1 or len(target.factors) != 1:
        return None
    one, other = source.factors[0], target.factors[0]
    if not (isinstance(one, Factor) and isinstance(other, Factor)) or one.degree != other.degree:
        return None
    onto = one == other or (other.order and not one.order % other.order and one.local in (0, prime))
    if not onto:
        return None
    here, there = localise(source, prime), localise(target, prime)
    if not here.classes or not there.classes:
        return _zero
    iota = here.classes[0]
    return lambda of: cls(ir.Fundamental(iota, iota.degree, iota.degree), frozenset((iota,)))


# --- classifying and projective spaces -------------------------------------------------------------


def _total(family: Family, prime: int, letter: str, i: int) -> Polynomial | None:
    """Class i of the bundle that a space carries: its universal one, or the canonical line (CP^n: c_1 = y; HP^n: c_2
    = -u)."""
    if i == 0:
        return ONE
    if isinstance(family, Classifying):
        return _of_classifying(family, prime, letter, i)
    if isinstance(family, Projective):
        of = family.classes(prime, 4)
        if family.field == "R":
            line = generator(of[0]) if of and prime == 2 else ()
            return _of_line(line, prime, letter, i, real=True)
        if family.field == "C":
            return _of_line(generator(of[0]) if of else (), prime, letter, i, real=False)
        if letter in ("c", "q"):
            step = 2 if letter == "c" else 1
            if i != step or not of:
                return ()
            return signed(generator(of[0]), -1 if letter == "c" else 1, prime)
    return None


def _squared(value: Polynomial, prime: int) -> Polynomial:
    return collected(times(value, value), prime)


def _of_line(x: Polynomial, prime: int, letter: str, i: int, real: bool) -> Polynomial | None:
    """The classes of a line bundle with first class x."""
    if real:
        value = {"w": x, "c": _squared(x, prime)}.get(letter)
        return None if value is None else value if i == 1 else ()
    if letter == "c":
        return x if i == 1 else ()
    if letter == "w":
        return x if i == 2 else ()
    return _squared(x, prime) if i == 1 else ()


def _of_classifying(family: Classifying, prime: int, letter: str, i: int) -> Polynomial | None:
    """A class of the universal bundle, as a real, a complex or a quaternionic one."""
    if letter == family.letter:
        return family.member(i)
    if family.letter == "w" and letter == "c":
        return _squared(family.member(i), 2)
    if family.letter == "p" and letter == "c":
        return () if i % 2 else signed(family.member(i // 2), (-1) ** (i // 2), prime)
    if family.letter == "c":
        if letter == "w":
            return () if i % 2 else family.member(i // 2)
        return pontryagin(family, i, prime)  # p_i, and q_i of E ⊗ H
    if family.letter == "q" and letter == "c":
        return () if i % 2 else signed(family.member(i // 2), (-1) ** (i // 2), prime)
    if family.letter == "q" and letter == "w":
        return () if i % 4 else family.member(i // 4)
    return None


def _real_rank(family: Family) -> tuple[float, str]:
    """The rank of the bundle over its own field, and the field: R, C or H."""
    if isinstance(family, Projective):
        return 1, family.field
    assert isinstance(family, Classifying)
    written = family.written if isinstance(family, Pontryagin) else family.rank
    own = "R" if family.letter in "wp" else "C" if family.letter == "c" else "H"
    return (float("inf") if written is None else written), own


def _goes(source: Family, target: Classifying) -> bool:
    """Whether the universal bundle of the source is a bundle with the structure of the target, of at most its rank."""
    rank, own = _real_rank(source)
    most, field = _real_rank(target)
    group = source.group if isinstance(source, Classifying) else ""
    weight = {"R": 1, "C": 2, "H": 4}
    if own != field:
        # complexification (R to C), E ⊗ H (C to H) keep the rank; forgetting multiplies it
        rank = rank * weight[own] / weight[field] if weight[own] > weight[field] else rank
        if (own, field) == ("R", "H") or (target.group == "SU" and own == "R"):
            return False
        if target.group == "Spin":
            return group == "SU" or own == "H"
        return rank <= most
    ranks = ORTHOGONAL if own == "R" else UNITARY
    if own != "H" and group not in ranks and target.group in ("SO", "Spin", "SU"):
        return False
    if group in ranks and target.group in ranks and ranks.index(group) > ranks.index(target.group):
        return False
    return rank <= most


def _lines(source: SpaceValue, target: SpaceValue, prime: int) -> Image | None:
    """Sums of canonical lines."""
    if len(source.factors) < 2 or len(target.factors) != 1:
        return None
    here, there = localise(source, prime), localise(target, prime)
    lines = [f for f in here.families if isinstance(f, Projective)]
    goal = there.families[0] if there.families else None
    if not isinstance(goal, Classifying) or len(lines) != len(source.factors):
        return None
    if len({f.field for f in lines}) > 1 or goal.group not in ("O", "U", "Sp"):
        return None
    rank, field = _real_rank(goal)
    if field != lines[0].field or len(lines) > rank:
        return None
    parts: dict[tuple[int, int], Polynomial] = {}

    def product(count: int, i: int) -> Polynomial:
        """Class i of the sum of the first lines."""
        if not count:
            return ONE if i == 0 else ()
        if (count, i) not in parts:
            first = _total(lines[count - 1], prime, goal.letter, 1) or ()
            terms = times(product(count - 1, i - 1), first) if i else []
            parts[count, i] = collected([*terms, *times(product(count - 1, i), ONE)], prime)
        return parts[count, i]

    return lambda of: _value(product(len(lines), of.index or 0), of, prime) if of.letter != "e" else _zero(of)


def _between(source: SpaceValue, target: SpaceValue, prime: int) -> Image | None:
    """Maps between single named spaces."""
    if len(source.factors) != 1 or len(target.factors) != 1:
        return None
    here, there = localise(source, prime).families, localise(target, prime).families
    if not here or not there:
        return None
    mine, goal = here[0], there[0]
    if isinstance(goal, Projective):
        return _of_projective(mine, goal, prime)
    if not isinstance(goal, Classifying) or not isinstance(mine, (Classifying, Projective)) or not _goes(mine, goal):
        return None

    def image(of: Class) -> Value:
        if of.letter in ("e", "Delta"):
            return _euler(of, mine, goal, prime)
        found = _total(mine, prime, goal.letter, of.index or 0)
        if found is None:
            raise Refusal(error("map", f"the image of {of.letter}_{of.index} under this map is not known here", (0, 0)))
        return _value(found, of, prime)

    return image


def _euler(of: Class, mine: Family, goal: Classifying, prime: int) -> Value:
    """e and the class of the spin representation: those of the same space go to themselves, e goes to e or c_n."""
    rank, own = _real_rank(mine)
    most, _ = _real_rank(goal)
    if of.letter == "e" and isinstance(mine, Classifying):
        real = rank * {"R": 1, "C": 2, "H": 4}[own]
        if real < most:
            return _zero(of)
        if isinstance(mine, Pontryagin) and mine.euler:
            return _value(generator(mine.euler_class()), of, prime)
        if own == "C":
            return _value(mine.member(int(rank)), of, prime)
    if isinstance(mine, Classifying) and mine.text == goal.text:
        twin = next(one for one in mine.classes(prime, of.degree) if (one.letter, one.index) == (of.letter, of.index))
        return _value(generator(twin), of, prime)
    raise Refusal(error("map", f"the image of {of.letter} under this map is not known here", (0, 0)))


def _of_projective(mine: Family, goal: Projective, prime: int) -> Image | None:
    """Inclusions of projective spaces, and those that make lines larger."""
    if not isinstance(mine, Projective):
        return None
    fields = "RCH"
    step = fields.index(goal.field) - fields.index(mine.field)
    size, most = mine.size, goal.size
    # with step 1 there are the inclusion (size <= most) and the quotient RP^{2n+1} -> CP^n, CP^{2n+1} -> HP^n
    if not 0 <= step <= 1 or (most is not None and (size is None or size > (2 * most + 1 if step else most))):
        return None

    def image(of: Class) -> Value:
        own = mine.classes(prime, of.degree)
        if not own or own[0].degree > of.degree or of.degree % own[0].degree:
            return _zero(of)
        exponent = of.degree // own[0].degree
        if prime != 2 and mine.field == "R":
            return _value(generator(own[0]), of, prime) if mine == goal else _zero(of)
        return _value(generator(own[0], exponent), of, prime)

    return image
