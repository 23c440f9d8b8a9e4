"""Declared bundles: the total class is read, and what cannot be one is refused.

A total class w of a bundle of rank n over X is the image of the universal one under a map X -> BO(n), so that Wu's
formula holds
between its parts: w_i is determined by the w_{2^k}.  Chern classes are checked in BU(n), Pontryagin and Euler classes
at odd
primes in BSO(n).  A class that passes need not belong to a bundle.
"""

from __future__ import annotations

from attrs import evolve

from opslang.ground.source import Span
from opslang.inquiry.integral import reason_against
from opslang.inquiry.maps import Check
from opslang.ir.outcome import Outcome, changed
from opslang.ir.tree import Class, ClassElement
from opslang.meaning import bundle_classes
from opslang.meaning.bundles import STEP, Bundle
from opslang.meaning.canonical import Arithmetic, element_value, pieces
from opslang.meaning.indices import number
from opslang.meaning.lower import Lowering
from opslang.meaning.pulling import arithmetic, belongs, total_class
from opslang.meaning.spaces import space_value
from opslang.meaning.value import Value, polynomial_value
from opslang.render.text import element_text
from opslang.report.diagnostic import Refusal, error, warning
from opslang.spaces import characteristic
from opslang.spaces.family import Family, Polynomial
from opslang.spaces.projective import Projective
from opslang.spaces.space import Localised, SpaceValue, localise
from opslang.spaces.spin import Spin
from opslang.syntax import surface as sf
from opslang.tables.engine import Engine


def _refusal(message: str, span: Span, help: str = "", name: str = "bundle") -> Refusal:
    return Refusal(error(name, message, span, help))


def declared(statement: sf.BundleStatement, blank: Outcome, lowering: Lowering, engine: Engine) -> Outcome:
    """`bundle E of rank n over X with …`."""
    rank = None if statement.rank is None else number(statement.rank, statement.span)
    if rank is not None and not 0 <= rank <= bundle_classes.MOST_RANK:
        raise _refusal(f"a rank lies between 0 and {bundle_classes.MOST_RANK:,}, and here it is {rank}", statement.span)
    space = None if statement.space is None else space_value(statement.space, lowering.scope)
    if not statement.classes:
        if space is None:
            raise _refusal("a bundle is declared over a space or with its classes", statement.span)
        bundle = universal(statement.name, rank, space, arithmetic(lowering), statement.span)
    else:
        bundle = _given(statement, rank, space, lowering)
        _check(bundle, statement, lowering, engine)
    _put(bundle, statement.span, lowering)
    return changed(blank, space=space.text if space else None)


def named(statement: sf.BundleSumStatement, blank: Outcome, lowering: Lowering) -> Outcome:
    """`bundle D = E + F`."""
    if not bundle_classes.is_bundle(lowering, statement.body):
        message = "a bundle is made of bundles that are declared: bundle E over X with w = 1 + a"
        raise _refusal(message, statement.body.span)
    bundle = evolve(bundle_classes.bundle_of(lowering, statement.body), name=statement.name)
    _put(bundle, statement.span, lowering)
    return changed(blank, space=bundle.space.text if bundle.space else None)


def _put(bundle: Bundle, span: Span, lowering: Lowering) -> None:
    if bundle.name in lowering.scope.bundles:
        message = f"{bundle.name} was a bundle already; from here on it is what this line says"
        lowering.diagnostics.append(warning("redeclared", message, span))
    lowering.scope.bundles[bundle.name] = bundle


# --- universal bundles -----------------------------------------------------------------------------


def universal(name: str, rank: int | None, space: SpaceValue, a: Arithmetic, span: Span) -> Bundle:
    """The universal bundle of a classifying space, or the canonical one of a projective space.  Refusal."""
    here = localise(space, a.prime)
    if len(space.factors) != 1 or len(here.families) != 1:
        raise _no_universal(space, span)
    family = here.families[0]
    found = _universal(name, family, space, a, span)
    if rank is not None and found.rank != rank:
        shown = "no rank" if found.rank is None else f"rank {found.rank}"
        raise _refusal(f"the universal bundle over {space.text} has {shown}, not {rank}", span)
    return found


def _no_universal(space: SpaceValue, span: Span) -> Refusal:
    help = "write `with w = 1 + …` (c, or p at an odd prime)"
    return _refusal(f"{space.text} has no universal bundle: its classes are to be given", span, help)


def _canonical(polynomial: Polynomial, a: Arithmetic) -> ClassElement:
    return a.evaluate(polynomial_value(polynomial, a.prime, (0, 0))) if polynomial else a.zero()


def _universal(name: str, family: Family, space: SpaceValue, a: Arithmetic, span: Span) -> Bundle:
    if isinstance(family, Projective):
        return _over_projective(name, family, space, a, span)
    if not isinstance(family, characteristic.Classifying):
        raise _no_universal(space, span)
    letter, rank = family.letter, family.rank
    euler = None
    if isinstance(family, characteristic.Pontryagin):
        rank = family.written
        euler = _canonical(((1, ((family.euler_class(), 1),)),), a) if family.euler else None
    if letter == "q":
        double = None if rank is None else 2 * rank

        def chern(i: int) -> ClassElement:
            member = family.member(i // 2)
            return a.zero() if i % 2 else a.combined([((-1) ** (i // 2), _canonical(member, a), a.one())])

        return Bundle(name, "c", double, space, a, double, chern)
    last = rank if letter != "p" or rank is None else rank // 2
    if isinstance(family, Spin) and rank is None:
        last = None
    return Bundle(name, letter, rank, space, a, last, lambda i: _canonical(family.member(i), a), euler)


def _over_projective(name: str, family: Projective, space: SpaceValue, a: Arithmetic, span: Span) -> Bundle:
    """The canonical line: w_1 = x, c_1 = y; over HP^n the quaternionic line, c_2 = -u."""
    of = family.classes(a.prime, 4)
    letter, degree, sign = {"R": ("w", 1, 1), "C": ("c", 2, 1), "H": ("c", 4, -1)}[family.field]
    if letter == "w" and a.prime != 2:
        raise _no_universal(space, span)
    first = _canonical(((sign % a.prime, ((of[0], 1),)),), a) if of else a.zero()
    at = degree // STEP[letter]
    return Bundle(name, letter, at, space, a, at, lambda i: first if i == at else a.zero())


# --- declared classes ------------------------------------------------------------------------------


def _given(statement: sf.BundleStatement, rank: int | None, space: SpaceValue | None, lowering: Lowering) -> Bundle:
    a = arithmetic(lowering)
    total: dict[int, ClassElement] | None = None
    letter, euler = "", None
    for one in statement.classes:
        which = _letter(one.left, a.prime)
        element = _element(one.right, space, lowering)
        if which == "e":
            euler = element
            continue
        if total is not None:
            raise _refusal("one total class is given for a bundle", one.span)
        letter, total = which, pieces(element)
        _well_graded(total, letter, a, one.right.span)
    if total is None:
        raise _refusal("the total class is missing: with w = 1 + …", statement.span)
    last = max(total) // STEP[letter]
    most = None if rank is None else rank // 2 if letter == "p" else rank
    if most is not None and last > most:
        raise _refusal(f"{letter}_{last} is not 0, and the rank is {rank}", statement.span)
    step, values = STEP[letter], total
    if euler is not None:
        if letter != "p" or rank is None or rank % 2:
            message = "an Euler class is given beside p, for an even rank: of rank 4 over X with p = …, e = …"
            raise _refusal(message, statement.span)
        if set(pieces(euler)) - {rank}:
            raise _refusal(f"the Euler class has degree {rank}", statement.span)
    return Bundle(statement.name, letter, rank, space, a, last, lambda i: values.get(step * i, a.zero()), euler)


def _letter(left: sf.Sum, prime: int) -> str:
    """The letter at the left of a total class."""
    if len(left.terms) == 1 and left.terms[0][0] == 1 and len(left.terms[0][1].factors) == 1:
        name = left.terms[0][1].factors[0]
        if isinstance(name, sf.Name) and name.index is None and not name.primes and name.letter in ("w", "c", "p", "e"):
            if name.letter == "w" and prime != 2:
                message = f"Stiefel-Whitney classes are classes at 2, and the prime is {prime}"
                raise _refusal(message, left.span, "give p (with e for an even rank) or c")
            if name.letter in "pe" and prime == 2:
                raise _refusal("at the prime 2 a real bundle is given by w", left.span, "write w = 1 + …")
            return name.letter
    raise _refusal("a bundle is given by its total class w, c or p", left.span, "write w = 1 + …")


def _element(right: sf.Sum, space: SpaceValue | None, lowering: Lowering) -> ClassElement:
    value = total_class(lowering, space, right)
    if value.sort != "class":
        raise _refusal("a characteristic class is a class, and this is an operation", right.span, name="sorts-differ")
    if space is not None:
        belongs(value, space, lowering.scope.prime, "the base of the bundle", right.span)
    return arithmetic(lowering).evaluate(value)


def _well_graded(total: dict[int, ClassElement], letter: str, a: Arithmetic, span: Span) -> None:
    if total.get(0) != a.one():
        raise _refusal("a total class begins with 1", span)
    odd = [degree for degree in total if degree % STEP[letter]]
    if odd:
        shown = element_text(total[min(odd)])
        raise _refusal(
            f"{letter} has parts in degrees divisible by {STEP[letter]}, and {shown} has degree {min(odd)}", span
        )


# --- checks ----------------------------------------------------------------------------------------


def _check(bundle: Bundle, statement: sf.BundleStatement, lowering: Lowering, engine: Engine) -> None:
    """Refusal where the classes cannot be those of a bundle."""
    a = bundle.arithmetic
    rank = bundle.rank
    family: Family
    if bundle.letter == "c":
        family = characteristic.unitary("U", rank, a.prime, -1)
    else:
        family = characteristic.orthogonal("O" if a.prime == 2 or bundle.euler is None else "SO", rank, a.prime, -1)
    last = bundle.last or 0
    names = list(family.classes(a.prime, STEP[bundle.letter] * last))
    if bundle.euler is not None:
        names = [*[of for of in names if of.letter != "e"], family.euler_class()]  # type: ignore[attr-defined]

    def image(of: Class) -> Value:
        element = bundle.euler if of.letter == "e" else bundle.piece(of.index or 0)
        return element_value(element if element is not None else a.zero(), of.degree)

    what = {"w": "a Stiefel-Whitney class", "c": "a Chern class", "p": "a Pontryagin class"}[bundle.letter]
    for of in names:
        if bundle.space is not None and of.order == 0:
            element = a.evaluate(image(of))
            reason = reason_against(element, 0, bundle.space, a, engine)
            if reason is not None:
                shown = f"{bundle.letter}_{of.index} = {element_text(element)} cannot be {what}: {reason}"
                raise _refusal(shown, statement.span)
    check = Check(a, engine, image, statement.span)
    here = Localised((), frozenset(), (family,))
    for failure in check.failures(here, names):
        message = f"the declared class cannot be {what} of a bundle: it is not compatible with {failure}"
        help = "w_i of every bundle is determined by the w_{2^k}, by Wu's formula" if bundle.letter == "w" else ""
        raise _refusal(message, statement.span, help)
    if bundle.euler is not None and rank is not None:
        square = a.power(bundle.euler, 2)
        if square != bundle.piece(rank // 2):
            shown = f"e^2 is p_{rank // 2}, and here e^2 = {element_text(square)}"
            raise _refusal(shown, statement.span)
