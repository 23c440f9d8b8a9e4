"""Declared maps: every class of the target has an image, and the images are checked.

Checked are degrees, coefficients (`integral.py`), the relations of the target, and that the operations on its
generators go
over to the images, for the indecomposable operations Sq^{2^j}, P^{p^j} and the Bockstein: the others follow.  What
passes
is a map of unstable algebras; whether a map of spaces gives it is not asked.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator

from attrs import define, field

from opslang.ground.source import Span
from opslang.inquiry.integral import reason_against
from opslang.inquiry.standard import standard
from opslang.ir import tree as ir
from opslang.ir.measure import element_degree
from opslang.ir.outcome import Outcome, changed
from opslang.ir.tree import Class, ClassElement, Generator
from opslang.meaning.canonical import Arithmetic, element_value, pieces
from opslang.meaning.lower import Lowering
from opslang.meaning.maps import MapValue, pulled_back
from opslang.meaning.pulling import arithmetic, belongs, in_space, map_named, total_class
from opslang.meaning.scope import spelled
from opslang.meaning.spaces import space_value
from opslang.meaning.value import NONE, Value, as_sort, cls, polynomial_value
from opslang.render.text import element_text
from opslang.report.diagnostic import Refusal, error, note, warning
from opslang.spaces.characteristic import Classifying
from opslang.spaces.family import Family, NotKnown, Polynomial
from opslang.spaces.space import Localised, SpaceValue, localise
from opslang.spaces.thom import Thom
from opslang.syntax import surface as sf
from opslang.tables.bockstein import Undefined
from opslang.tables.engine import Engine
from opslang.tables.generators import series

FURTHEST = 64
"""In a target without end, classes up to this degree are looked at when the map is declared."""
Image = Callable[[Class], Value]


def refusal(name: str, message: str, span: Span, help: str = "") -> Refusal:
    """A refusal of a map."""
    return Refusal(error(name, message, span, help))


def declared(statement: sf.MapStatement, blank: Outcome, lowering: Lowering, engine: Engine) -> Outcome:
    """`map f : X -> Y …`."""
    scope = lowering.scope
    source, target = space_value(statement.source, scope), space_value(statement.target, scope)
    there = localise(target, scope.prime)
    if there.thom is not None or any(isinstance(family, Thom) for family in there.families):
        message = "maps into Thom spaces are not known here: their classes are no polynomials in generators"
        raise refusal("map", message, statement.span)
    if statement.how == "with":
        image = _given(statement, source, target, lowering, engine)
    else:
        image = standard(statement, source, target, scope.prime)
    put(MapValue(statement.name, source, target, scope.prime, image), statement.span, lowering)
    return changed(blank, space=source.text)


def put(value: MapValue, span: Span, lowering: Lowering) -> None:
    """Enter a map into the scope."""
    known = lowering.scope.maps.get(value.name)
    if known is not None:
        message = f"{value.name} was the map {known.text}; from here on it is what this line says"
        lowering.diagnostics.append(warning("redeclared", message, span))
    lowering.scope.maps[value.name] = value


def composed(statement: sf.ComposeStatement, blank: Outcome, lowering: Lowering) -> Outcome:
    """`map h = g f`: first f, then g, so that h^* is f^* g^*."""
    maps = []
    for factor, glue in zip(statement.body.factors, statement.body.glues):
        if (
            not isinstance(factor, sf.Name)
            or glue not in ("", "compose")
            or not isinstance(factor.index, (int, type(None)))
        ):
            raise refusal("unknown-map", "maps are composed by their names: map h = g f", factor.span)
        maps.append(map_named(lowering, spelled((factor.letter, factor.index, factor.primes)), factor.span))
    for outer, inner in zip(maps, maps[1:]):
        if outer.source.factors != inner.target.factors:
            message = f"{inner.text} does not end where {outer.text} begins"
            raise refusal("map", message, statement.body.span, "the map on the right comes first")
    prime = lowering.scope.prime

    def image(of: Class) -> Value:
        value = maps[0].image(of)
        for inner in maps[1:]:
            value = pulled_back(value, inner.image, prime)
        return value

    put(MapValue(statement.name, maps[-1].source, maps[0].target, prime, image), statement.span, lowering)
    return changed(blank, space=maps[-1].source.text)


# --- the images that are given ---------------------------------------------------------------------


@define
class _Images:
    """The images read so far; those of a total class stand for all classes of its family."""

    single: dict[Class, ClassElement] = field(factory=dict)
    totals: dict[Family, dict[int, ClassElement]] = field(factory=dict)

    def of(self, cls_: Class) -> ClassElement | None:
        """The image of a class; None where none was given."""
        found = self.single.get(cls_)
        if found is None and cls_.ring in self.totals:
            parts = self.totals[cls_.ring]
            found = parts.get(cls_.degree)
            if found is None and parts:
                return ClassElement(next(iter(parts.values())).prime, ())
        return found


def _given(
    statement: sf.MapStatement, source: SpaceValue, target: SpaceValue, lowering: Lowering, engine: Engine
) -> Image:
    prime = lowering.scope.prime
    a = arithmetic(lowering)
    there = localise(target, prime)
    images = _Images()
    for assignment in statement.assignments:
        _read(assignment, there, source, target, lowering, images)
    filled = _Filled(statement, source, target, prime, images)
    names = _classes(there, prime, images)
    check = Check(a, engine, lambda of: element_value(filled(of), of.degree), statement.span)
    for of in names:
        image = filled(of)
        reason = reason_against(image, of.order, source, a, engine)
        if reason is not None:
            shown = f"{spelled((of.letter, of.index, of.primes))} cannot go to {element_text(image)}: {reason}"
            raise refusal("map-coefficients", shown, statement.span)
    for failure in check.failures(there, names):
        message = f"the images are not compatible with {failure}"
        raise refusal("map-operations", message, statement.span, "a pull-back commutes with operations and products")
    for words in check.unknown:
        lowering.diagnostics.append(note("map-unchecked", words, statement.span))
    return lambda of: element_value(filled(of), of.degree)


def _read(
    assignment: sf.Assignment,
    there: Localised,
    source: SpaceValue,
    target: SpaceValue,
    lowering: Lowering,
    images: _Images,
) -> None:
    a = arithmetic(lowering)
    if _total_of(assignment.left, there) is None:
        right = as_sort(in_space(lowering, source).sum(assignment.right), "class", assignment.right.span)
    else:
        right = total_class(lowering, source, assignment.right)
    if right.sort != "class":
        raise refusal("sorts-differ", "a class goes to a class, and this is an operation", assignment.right.span)
    belongs(right, source, a.prime, "the source of the map", assignment.right.span)
    element = a.evaluate(right)
    family = _total_of(assignment.left, there)
    if family is not None:
        parts = pieces(element)
        if parts.get(0) != a.one():
            raise refusal("map", "a total class begins with 1", assignment.right.span)
        images.totals[family] = parts
        return
    of = _generator(assignment.left, target, lowering)
    degree = element_degree(element)
    if element.terms and degree != of.degree:
        name = spelled((of.letter, of.index, of.primes))
        shown = "is inhomogeneous" if degree is None else f"has degree {degree}"
        message = f"{name} has degree {of.degree}, and its image {shown}"
        raise refusal("degrees-differ", message, assignment.span)
    if of in images.single:
        raise refusal("map", "the image of this class is given twice", assignment.span)
    images.single[of] = element


def _total_of(left: sf.Sum, there: Localised) -> Family | None:
    """The family whose total class stands at the left: w, c, q or p without an index."""
    if len(left.terms) == 1 and left.terms[0][0] == 1 and len(left.terms[0][1].factors) == 1:
        name = left.terms[0][1].factors[0]
        if isinstance(name, sf.Name) and name.index is None and not name.primes:
            found = [f for f in there.families if isinstance(f, Classifying) and f.letter == name.letter]
            return found[0] if len(found) == 1 else None
    return None


def _generator(left: sf.Sum, target: SpaceValue, lowering: Lowering) -> Class:
    """The class at the left.  Refusal where it is none of the generators of the target."""
    value = as_sort(in_space(lowering, target).sum(left), "class", left.span)
    if value.sort == "class":
        belongs(value, target, lowering.scope.prime, "the target of the map", left.span)
        element = arithmetic(lowering).evaluate(value)
        if len(element.terms) == 1:
            monomial, c = element.terms[0]
            if c == 1 and len(monomial) == 1 and monomial[0][1] == 1 and not monomial[0][0].word:
                generator: Generator = monomial[0][0]
                return generator.of
    help = "the images of products and operations follow from those of the generators"
    raise refusal(
        "map", f"only generators of the target are sent somewhere, and this is none of {target.text}", left.span, help
    )


@define
class _Filled:
    """The image of every class: as given, or 0 where the source has no class of that degree."""

    statement: sf.MapStatement
    source: SpaceValue
    target: SpaceValue
    prime: int
    images: _Images
    _empty: dict[int, bool] = field(factory=dict)

    def __call__(self, of: Class) -> ClassElement:
        found = self.images.of(of)
        if found is not None:
            return found
        if of.degree not in self._empty:
            self._empty[of.degree] = not series(self.prime, localise(self.source, self.prime), of.degree)[of.degree]
        if self._empty[of.degree]:
            return ClassElement(self.prime, ())
        name = spelled((of.letter, of.index, of.primes))
        help = f"write {name} -> …" + (f", or {of.letter} -> … for the total class" if of.index is not None else "")
        raise refusal(
            "map-incomplete", f"it is not said where {name} of {self.target.text} goes", self.statement.span, help
        )


def _classes(there: Localised, prime: int, images: _Images) -> list[Class]:
    """The generators of the target, those of a ring without end up to the last degree that counts."""
    found = list(there.classes)
    for family in there.families:
        end = 1 << 20
        if isinstance(family, Classifying) and family.rank is None:
            totals = images.totals.get(family)
            given = [of.degree for of in images.single if of.ring == family]
            end = max(totals) if totals else max([FURTHEST, *given])
        found += family.classes(prime, end)
    return found


# --- checks ----------------------------------------------------------------------------------------


@define
class Check:
    """Whether images of generators respect operations and relations.  `unknown` gathers what could not be looked at."""

    arithmetic: Arithmetic
    engine: Engine
    image: Image
    span: Span
    unknown: list[str] = field(factory=list)

    def pulled(self, polynomial: Polynomial) -> ClassElement:
        """A polynomial in the generators, at the images."""
        if not polynomial:
            return self.arithmetic.zero()
        value = polynomial_value(polynomial, self.arithmetic.prime, self.span)
        return self.arithmetic.evaluate(pulled_back(value, self.image, self.arithmetic.prime))

    def failures(self, there: Localised, names: list[Class]) -> Iterator[str]:
        """The operations and relations that fail, in words, from low degrees on."""
        for of in sorted(names, key=lambda of: of.degree):
            if of.ring is not None:
                yield from self._operations(of, of.ring)
                yield from self._height(of, of.ring)
        for family in there.families:
            for lead, tail in family.rules(self.arithmetic.prime):
                if {of for of, _ in lead} <= set(names):
                    yield from self._compared(
                        self.pulled(((1, lead),)), self.pulled(tail), "a relation of " + family.text
                    )

    def _compared(self, left: ClassElement, right: ClassElement, words: str) -> Iterator[str]:
        if left != right:
            yield f"{words}: the left side goes to {element_text(left)}, the right side to {element_text(right)}"

    def _height(self, of: Class, family: Family) -> Iterator[str]:
        height = family.height(self.arithmetic.prime, of)
        if height is not None:
            name = spelled((of.letter, of.index, of.primes))
            power = self.arithmetic.power(self.arithmetic.evaluate(self.image(of)), height)
            yield from self._compared(power, self.arithmetic.zero(), f"{name}^{height} = 0")

    def _operations(self, of: Class, family: Family) -> Iterator[str]:
        a, p = self.arithmetic, self.arithmetic.prime
        name = spelled((of.letter, of.index, of.primes))
        for token in _tokens(p, of):
            letter = f"Sq^{token}" if p == 2 else f"P^{token}" if token else "beta"
            try:
                value = family.operation(p, token, of)
            except NotKnown:
                self.unknown.append(f"{letter} {name} is not known, so that its image was not checked")
                continue
            image = a.applied(token, a.evaluate(self.image(of)))
            yield from self._compared(image, self.pulled(value), f"{letter} {name} = {_text(value, p)}")
        if of.order > 1:
            yield from self._higher(of, family, name)

    def _higher(self, of: Class, family: Family, name: str) -> Iterator[str]:
        order, value = family.bockstein(self.arithmetic.prime, of)
        if order is None or order < 2:
            return
        image = self.image(of)
        tree = ir.HigherBockstein(order, image.cls, of.degree + 1, image.top + 1)
        try:
            self.engine.modulo = False
            found = self.arithmetic.evaluate(cls(tree, image.classes or NONE))
        except Undefined as reason:
            yield f"beta_{order} {name} = {_text(value, self.arithmetic.prime)}: {reason}"
            return
        if self.engine.modulo:
            self.unknown.append(f"beta_{order} of the image of {name} has an indeterminacy, and was not compared")
            return
        yield from self._compared(
            found, self.pulled(value), f"beta_{order} {name} = {_text(value, self.arithmetic.prime)}"
        )


def _tokens(p: int, of: Class) -> list[int]:
    """The indecomposable operations that may be other than 0 on a class and are no top power."""
    if p == 2:
        return [1 << j for j in range(of.degree.bit_length()) if 1 << j < of.degree]
    found = [0]
    power = 1
    while 2 * power < of.degree:
        found.append(power)
        power *= p
    return found


def _text(polynomial: Polynomial, p: int) -> str:
    terms = tuple([(tuple([(Generator((), of), e) for of, e in powers]), c) for c, powers in polynomial])
    return element_text(ClassElement(p, terms))
