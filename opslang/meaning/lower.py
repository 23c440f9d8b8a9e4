"""Expressions, from surface to typed tree: factors are grouped by sort, and every sort error is found here.

An operation acts on the one factor at its right; a power binds tighter than an operation; scalars lead.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import Any, NoReturn, cast

from attrs import define, field

from opslang.ground.source import Span
from opslang.ir import tree as ir
from opslang.ir.tree import Class
from opslang.meaning.characteristic import Characteristic
from opslang.meaning.indices import bounded, number
from opslang.meaning.letters import Marker, index_meant, letter, word_applied
from opslang.meaning.scope import Key, Scope, spelled
from opslang.meaning.unknown import unknown_name
from opslang.meaning.value import (
    NONE,
    Sort,
    Value,
    as_sort,
    cls,
    degrees_of,
    multiple,
    operation,
    polynomial_value,
    scalar,
    total,
)
from opslang.report.diagnostic import Diagnostic, Refusal, error, note, warning
from opslang.spaces.family import NotKnown
from opslang.spaces.space import Localised, SpaceValue, localise
from opslang.syntax import surface as sf

Pending = list[tuple["Value | Marker", Span]]
"""Operations that wait for the class they act on, with their places (those of an abbreviation's tree lie elsewhere)."""


def refuse(name: str, message: str, span: Span, help: str = "", mend: str | None = None) -> NoReturn:
    """Raise the refusal of a statement."""
    raise Refusal(error(name, message, span, help, mend))


@define
class Lowering:
    """The lowering of one statement in a scope; warnings gather in `diagnostics`.

    `evaluate` gives canonical forms, which bundles, transgression and suspension need; `home` is the space that
    pulled-back
    classes and classes of bundles live in, where some occur; `chosen` says whether classes of the current space occur.
    """

    scope: Scope
    text: str
    diagnostics: list[Diagnostic] = field(factory=list)
    evaluate: Callable[[Value], Any] | None = None
    home: SpaceValue | None = None
    chosen: bool = False

    # --- sums -----------------------------------------------------------------------------------

    def sum(self, body: sf.Sum, mixed_degrees: bool = False) -> Value:
        """A sum.  All terms must be of one sort; terms of different degrees are warned about."""
        terms = [(sign, self.product(product)) for sign, product in body.terms]
        if len(terms) == 1 and terms[0][0] == 1:
            return terms[0][1]
        sorts: list[Sort] = [value.sort for _, value in terms]
        sort: Sort = next((s for s in sorts if s != "scalar"), "scalar")
        if sort == "scalar":
            return scalar(sum([sign * value.number for sign, value in terms]))
        for (_, product), other in zip(body.terms, sorts):
            if other not in (sort, "scalar"):
                self._mixed(body, sorts, sort, product.span)
        lifted = [(sign, as_sort(value, sort, product.span)) for (sign, value), (_, product) in zip(terms, body.terms)]
        degrees = degrees_of(lifted)
        if len(degrees) > 1 and None not in degrees and not mixed_degrees:
            listed = ", ".join(str(d) for d in sorted(d for d in degrees if d is not None))
            self.diagnostics.append(
                warning("inhomogeneous-sum", f"the terms of this sum have different degrees: {listed}", body.span)
            )
        return total(lifted, sort, self.scope.prime, body.span)

    def _mixed(self, body: sf.Sum, sorts: list[Sort], first: Sort, span: Span) -> NoReturn:
        message = "a class is added to an operation" if first == "operation" else "an operation is added to a class"
        described = "; ".join(
            f"`{self.quote(product.span)}` is {'an operation' if sort == 'operation' else 'a class'}"
            for (_, product), sort in zip(body.terms, sorts)
            if sort != "scalar"
        )
        refuse("sorts-differ", message, span, described if len(described) < 300 else "")

    def quote(self, span: Span) -> str:
        """What is written at a place."""
        return self.text[span[0] : span[1]]

    # --- products -------------------------------------------------------------------------------

    def product(self, body: sf.Product) -> Value:
        """A flat product: scalars are drawn to the front, operations gather until the class they act on."""
        if self.scope.bundles:
            from opslang.meaning.bundle_classes import merged

            body = merged(self, body)
        if len(body.factors) == 1:
            value = self.factor(body.factors[0])
            if isinstance(value, Marker):
                self._needs_class(value)
            return value
        coefficient = 1
        pending: Pending = []
        cups: list[Value] = []
        last: tuple[sf.Factor, bool] | None = None  # the last class factor, and whether an operation acts on it
        saw_scalar = False
        glues = body.glues
        for at, factor in enumerate(body.factors):
            value = _READERS[type(factor)](self, factor)
            if type(value) is Value:
                sort = value.sort
                if sort == "scalar":
                    if pending and type(factor) is sf.Group:
                        index_meant(pending[-1], value.number, factor.span, self.text)
                    if not (pending and at == len(glues) - 1 and type(factor) is sf.Group):
                        coefficient *= value.number
                        saw_scalar = True
                        continue
                    value = as_sort(value, "class", factor.span)
                    sort = "class"
            else:
                sort = "operation"
            glue = glues[at]
            if sort == "operation":
                if glue == "cross":
                    self._check_glue(body, at, bool(pending), bool(cups))
                pending.append((value, factor.span))
                continue
            self._check_class(factor, glue, pending, last)
            start = pending[0][1][0] if pending else factor.span[0]
            cups.append(self._apply(pending, cast(Value, value), (start, factor.span[1])))
            last = (factor, bool(pending) and type(factor) is not sf.Group)
            pending = []
        return self._assembled(body, coefficient, pending, cups, saw_scalar)

    def _assembled(
        self, body: sf.Product, coefficient: int, pending: Pending, cups: list[Value], saw_scalar: bool
    ) -> Value:
        if not cups:
            if not pending:
                return scalar(coefficient)
            value = self._composed(pending, body.span)
        else:
            if pending:
                refuse(
                    "operation-after-class",
                    "an operation stands after the last class of the product, with nothing to act on",
                    pending[0][1],
                    "an operation acts on the one factor at its right",
                )
            value = cups[0] if len(cups) == 1 else self._cup(cups, body.span)
        return multiple(value, coefficient, self.scope.prime, body.span) if saw_scalar else value

    def _check_class(self, factor: sf.Factor, glue: str, pending: Pending, last: tuple[sf.Factor, bool] | None) -> None:
        """What is to be said of a class at its place in a product."""
        if pending:
            if type(factor) is sf.Power and type(factor.base) is sf.Group:
                self._ambiguous_power(pending, factor)
        elif glue == "compose":
            refuse("sorts-differ", "∘ composes operations, and a class stands at its right", factor.span)
        elif glue == "" and last is not None and last[1]:
            self._ambiguous(last[0], factor)

    def _check_glue(self, body: sf.Product, at: int, pending: bool, cups: bool) -> None:
        if at and body.glues[at] == "cross" and (pending or not cups):
            refuse(
                "sorts-differ", "⊗ joins classes, and an operation stands at one of its sides", body.factors[at].span
            )

    def _ambiguous(self, acted: sf.Factor, factor: sf.Factor) -> None:
        inner = f"{self.quote(acted.span)} {self.quote(factor.span)}"
        self.diagnostics.append(
            warning(
                "ambiguous-scope",
                f"the operation acts on `{self.quote(acted.span)}` alone",
                (acted.span[0], factor.span[1]),
                f"to apply it to the product write ({inner}) in brackets behind it",
                f"({inner})",
            )
        )

    def _ambiguous_power(self, pending: Pending, factor: sf.Power) -> None:
        start = pending[-1][1][0]
        whole = f"({self.text[start : factor.base.span[1]]})^{self._exponent_text(factor)}"
        self.diagnostics.append(
            warning(
                "ambiguous-power",
                f"the operation acts on the power `{self.quote(factor.span)}`",
                (start, factor.span[1]),
                f"for the power of the value write {whole}",
                whole,
            )
        )

    def _exponent_text(self, factor: sf.Power) -> str:
        return str(factor.exponent) if isinstance(factor.exponent, int) else self.quote(factor.exponent.span)

    def _needs_class(self, marker: Marker) -> NoReturn:
        refuse(
            "not-in-the-algebra",
            f"{marker.name} is not in the Steenrod algebra: it may be applied to a class, and to nothing else",
            marker.span,
            "write the class at its right",
        )

    def _composed(self, pending: Pending, span: Span) -> Value:
        """Operations side by side, with no class at their right: letters run together into one word."""
        values = []
        for value, _ in pending:
            if isinstance(value, Marker):
                self._needs_class(value)
            values.append(value)
        return self._compose(values, span)

    def _compose(self, values: list[Value], span: Span) -> Value:
        if len(values) == 1:
            return values[0]
        degree = _degree_sum(values)
        top = bounded(sum(value.top for value in values), span)
        merged: list[ir.Op] = []
        for value in values:
            op = value.op
            if merged and type(op) is ir.Composite and type(merged[-1]) is ir.Composite:
                merged[-1] = ir.Composite(merged[-1].word + op.word, merged[-1].degree + op.degree, span)
            else:
                merged.append(op)
        if len(merged) == 1:
            return operation(merged[0], top)
        return operation(ir.Compose(tuple(merged), degree, span), top)

    def _apply(self, pending: Pending, argument: Value, span: Span) -> Value:
        """The pending operations applied to a class, rightmost first."""
        quick = word_applied(pending, argument, span)
        if quick is not None:
            return quick
        run: list[Value] = []
        for value, _ in reversed(pending):
            if type(value) is Marker:
                argument = self._apply_run(run, argument, span)
                run = []
                argument = self._apply_marker(value, argument)
            else:
                run.append(cast(Value, value))
        return self._apply_run(run, argument, span)

    def _apply_run(self, run: list[Value], argument: Value, span: Span) -> Value:
        if not run:
            return argument
        op = self._compose(run[::-1], span)
        degree = None if op.degree is None or argument.degree is None else op.degree + argument.degree
        top = bounded(op.top + argument.top, span)
        return cls(ir.Apply(op.op, argument.cls, degree, top, span), argument.classes)

    def _apply_marker(self, marker: Marker, argument: Value) -> Value:
        span = (marker.span[0], argument.cls.span[1])
        if marker.order:
            degree = None if argument.degree is None else argument.degree + 1
            tree: ir.Cls = ir.HigherBockstein(marker.order, argument.cls, degree, bounded(argument.top + 1, span), span)
        else:
            top = bounded(argument.top * self.scope.prime, span)
            tree = ir.Total(argument.cls, 0 if argument.degree == 0 else None, top, span)
        return cls(tree, argument.classes)

    def _cup(self, cups: list[Value], span: Span) -> Value:
        degree = _degree_sum(cups)
        top = bounded(sum(value.top for value in cups), span)
        return cls(
            ir.Cup(tuple([value.cls for value in cups]), degree, top, span),
            NONE.union(*[value.classes for value in cups]),
        )

    # --- factors --------------------------------------------------------------------------------

    def factor(self, factor: sf.Factor) -> Value | Marker:
        """One factor."""
        return _READERS[type(factor)](self, factor)

    def _letter(self, factor: sf.Operation | sf.Bockstein | sf.Milnor) -> Value | Marker:
        return letter(factor, self.scope.prime)

    def _number(self, factor: sf.Number) -> Value:
        return scalar(bounded(factor.value, factor.span))

    def _made(self, factor: sf.PullBack | sf.Construction | Characteristic) -> Value:
        from opslang.meaning.pulling import made

        return made(self, factor)

    def _choose(self, span: Span) -> None:
        """Note that a class of the current space occurs."""
        self.chosen = True
        if self.home is not None and self.scope.space is not None:
            from opslang.meaning.pulling import live_in

            live_in(self, self.scope.space, span)

    def _group(self, group: sf.Group) -> Value | Marker:
        terms = group.body.terms
        if len(terms) == 1 and terms[0][0] == 1 and len(terms[0][1].factors) == 1:
            return self.factor(terms[0][1].factors[0])
        return self.sum(group.body)

    def _name(self, name: sf.Name) -> Value:
        index = None if name.index is None else number(name.index, name.span)
        key = (name.letter, index, name.primes)
        value = self.scope.names.get(key)
        if value is not None:
            return value
        here = self.scope.localised()
        if here is not None and here.families:
            return self._class_of_space(name, key, here)
        raise unknown_name(key, name.span, self.scope, self.text)

    def _class_of_space(self, name: sf.Name, key: Key, here: Localised) -> Value:
        """A name that a named factor of the current space has."""
        prime = self.scope.prime
        self._choose(name.span)
        try:
            found = here.named(prime, *key)
        except NotKnown as reason:
            refuse("not-known", str(reason), name.span)
        if len(found) > 1:
            refuse(
                "ambiguous-class",
                f"several factors of the space have a class {spelled(key)}",
                name.span,
                "name the classes: RP^5(a) x RP^2(b)",
            )
        if not found:
            known = "; ".join(f"{family.text}: {family.names(prime)}" for family in here.families)
            refuse(
                "no-such-class",
                f"the space has no class {spelled(key)}, and none was declared",
                name.span,
                f"its classes: {known}",
            )
        if found[0]:
            return polynomial_value(found[0], prime, name.span)
        degree = here.name_degree(prime, *key)
        return cls(ir.ClassSum((), degree, degree, name.span), NONE)

    def _fundamental(self, factor: sf.Fundamental) -> Value:
        degree = number(factor.degree, factor.span)
        try:
            of = self.scope.fundamental(degree, factor.primes)
            self._choose(factor.span)
        except KeyError:
            of = self._fundamental_of_home(factor, degree)
        if of is None:
            self.diagnostics.append(
                note(
                    "zero-at-the-prime",
                    f"the group of this class has no {self.scope.prime}-part, so the class is 0",
                    factor.span,
                )
            )
            return cls(ir.ClassSum((), degree, degree, factor.span), NONE)
        return cls(ir.Fundamental(of, degree, degree, factor.span), frozenset((of,)))

    def _fundamental_of_home(self, factor: sf.Fundamental, degree: int) -> Class:
        """A fundamental class of the space that a transgression or a pull-back leads to.  Refusal where there is
        none."""
        for of in () if self.home is None else localise(self.home, self.scope.prime).classes:
            if (of.degree, of.primes) == (degree, factor.primes):
                return of
        name = spelled(("iota", degree, factor.primes))
        here = self.scope.localised()
        if here is None or self.scope.space is None:
            if degree < 1:
                refuse("degree-range", f"iota_n needs n >= 1, and here n is {degree}", factor.span)
            refuse(
                "no-such-class",
                f"{name} belongs to a product of spaces, and no space is chosen",
                factor.span,
                "choose one: on K(Z/2, 3) x K(Z/2, 3)",
            )
        known = ", ".join(spelled(("iota", of.degree, of.primes)) for of in here.classes) or "none at this prime"
        refuse(
            "no-such-class",
            f"{self.scope.space.text} has no class {name}",
            factor.span,
            f"its fundamental classes: {known}",
        )

    def _power(self, factor: sf.Power) -> Value:
        exponent = number(factor.exponent, factor.span)
        if exponent < 0:
            refuse("index-range", f"an exponent is at least 0, and here it is {exponent}", factor.span)
        base = self.factor(factor.base)
        if isinstance(base, Marker):
            self._needs_class(base)
        if base.sort == "scalar":
            if base.number not in (-1, 0, 1) and exponent > 100_000:
                return scalar(pow(base.number, exponent, self.scope.prime))
            return scalar(bounded(base.number**exponent, factor.span))
        degree = None if base.degree is None else base.degree * exponent
        top = bounded(base.top * exponent, factor.span)
        if base.sort == "operation":
            return operation(ir.OpPower(base.op, exponent, degree, factor.span), top)
        return cls(ir.ClassPower(base.cls, exponent, degree, top, factor.span), base.classes)

    def _conjugate(self, factor: sf.Conjugate) -> Value:
        value: Any = self.sum(factor.body)
        if value.sort == "scalar":
            return scalar(value.number)
        if value.sort == "class":
            refuse(
                "sorts-differ",
                "chi is the conjugation of the Steenrod algebra, and a class stands in its brackets",
                factor.body.span,
            )
        return operation(ir.Chi(value.op, value.degree, factor.span), value.top)


def _degree_sum(values: list[Value]) -> int | None:
    total_degree = 0
    for value in values:
        if value.degree is None:
            return None
        total_degree += value.degree
    return total_degree


_READERS: dict[type, Callable[[Lowering, Any], Value | Marker]] = {
    sf.Operation: Lowering._letter,
    sf.Bockstein: Lowering._letter,
    sf.Milnor: Lowering._letter,
    sf.Name: Lowering._name,
    sf.Fundamental: Lowering._fundamental,
    sf.Power: Lowering._power,
    sf.Number: Lowering._number,
    sf.Group: Lowering._group,
    sf.Conjugate: Lowering._conjugate,
    **dict.fromkeys((sf.PullBack, sf.Construction, Characteristic), Lowering._made),
}
