"""The rules of groups and spaces, as methods of the builder."""

from __future__ import annotations

import re
from typing import Any

from attrs import evolve
from lark.visitors import Transformer_NonRecursive

from opslang.ground.arith import is_prime
from opslang.ground.source import Span
from opslang.report.diagnostic import Refusal, error
from opslang.syntax import surface as s
from opslang.syntax.indices import power_of
from opslang.syntax.parts import Arguments, Copies, Part, Word, nodes_of, single, span_of
from opslang.syntax.scripts import bare
from opslang.syntax.spellings import GREEK_NAMES


class SpaceRules(Transformer_NonRecursive):  # type: ignore[type-arg]
    """`space`, `coefficients` and what they are made of."""

    text: str

    def space_product(self, children: list[Any]) -> s.SpaceProduct:
        factors: list[Any] = []
        for child in nodes_of(children):
            factors.extend(child.factors if isinstance(child, s.SpaceProduct) else (child,))
        return s.SpaceProduct(tuple(factors), span_of(children))

    def space_group(self, children: list[Any]) -> s.Space:
        return evolve(children[1], span=span_of(children))  # type: ignore[no-any-return]

    def eilenberg_mac_lane(self, children: list[Any]) -> s.EilenbergMacLane:
        return s.EilenbergMacLane(children[2], children[4].value, span_of(children))

    def named_space(self, children: list[Any]) -> s.NamedSpace | Word:
        word, *rest = children
        if not rest:
            return s.NamedSpace(word.value, None, (), word.span)
        power: s.Index | None = None
        arguments: tuple[object, ...] = ()
        for child in rest:
            if isinstance(child, Arguments):
                arguments = child.value
            else:
                power = child.value
                if power is None and word.value not in ("RP", "CP", "HP"):
                    help = "RP, CP and HP have infinite powers; BO and the like are stable without a number"
                    raise Refusal(error("expected", f"{word.value} has no infinite power", child.span, help))
        return s.NamedSpace(word.value, power, arguments, span_of(children))

    def space_word(self, children: list[Any]) -> Word:
        index, primes = None, 0
        for child in children[1:]:
            if isinstance(child, Part):
                if index is not None:
                    raise Refusal(error("misplaced-script", "this name has an index already", child.span))
                index = child.value
            elif child.type == "PRIME":
                primes += len(child.value)
        return Word(children[0].value, index, primes, span_of(children))

    k_word = space_word

    def space_name(self, children: list[Any]) -> Word:
        return children[0]  # type: ignore[no-any-return]

    def space_power(self, children: list[Any]) -> Part:
        if any(getattr(child, "type", "") == "INFINITY" for child in children):
            return Part(None, span_of(children))
        return Part(single(children[1]), span_of(children))

    def space_arguments(self, children: list[Any]) -> Arguments:
        return Arguments(tuple(_argument(child) for child in nodes_of(children)), span_of(children))

    def space_number(self, children: list[Any]) -> s.Number:
        return s.Number(int(children[0].value), span_of(children))

    def field(self, children: list[Any]) -> Word:
        return Word(
            "Z",
            children[2].value[0] if isinstance(children[2].value, tuple) else children[2].value,
            0,
            span_of(children),
        )

    def presented_class(self, children: list[Any]) -> s.PresentedClass:
        return s.PresentedClass(bare(children[0]), children[2].value, span_of(children))

    def ideal(self, children: list[Any]) -> Part:
        return Part(tuple([child for child in children if isinstance(child, s.Sum)]), span_of(children))

    def presentation(self, children: list[Any]) -> s.Presentation:
        word = children[0]
        if word.letter not in ("F", "Z") or word.index is None or word.primes:
            help = "a presented ring begins with its coefficients: F_2[u:2, v:3], F_3[…]"
            raise Refusal(error("expected", f"expected F_p, not {word.value}", word.span, help))
        relations: tuple[s.Sum, ...] = ()
        to: s.Index | None = None
        for before, child in zip(children, children[1:]):
            if isinstance(child, Part) and getattr(before, "type", "") == "TO":
                to = child.value
            elif isinstance(child, Part):
                relations = child.value
        generators = tuple([child for child in children if isinstance(child, s.PresentedClass)])
        given = tuple([child for child in children if isinstance(child, s.Assignment)])
        return s.Presentation(word.index, generators, relations, given, to, span_of(children))

    def coefficients(self, children: list[Any]) -> s.Coefficients:
        summands: list[s.Summand] = []
        for child in nodes_of(children):
            summands.extend(child.value if isinstance(child, Part) else (child,))
        return s.Coefficients(tuple(summands), span_of(children))

    def summand(self, children: list[Any]) -> s.Summand:
        order, copies, local = 0, 1, 0
        for child in nodes_of(children):
            if isinstance(child, Copies):
                copies = child.value
            else:
                value = single(child) if isinstance(child.value, tuple) else child.value
                order = _closed(value, child.span, "the order of a group")
                if _under_z(children) and _BRACKETED.fullmatch(self.text, *child.span):
                    order, local = 0, _localised_at(order, child.span)
        return s.Summand(order, copies, children[0].type == "LETTER_F", local, span_of(children))

    def summand_group(self, children: list[Any]) -> Part:
        copies = children[3].value if len(children) > 3 else 1
        inner = children[1].summands
        return Part(tuple(evolve(one, copies=one.copies * copies) for one in inner), span_of(children))

    def copies(self, children: list[Any]) -> Copies:
        count = _closed(single(children[1]), children[1].span, "the number of copies")
        return Copies(count, span_of(children))

    def order(self, children: list[Any]) -> Part:
        base = children[0]
        if isinstance(base.value, str):
            base = Part(s.IndexExpression("name", (base.value,), base.span), base.span)
        if len(children) == 1:
            return base  # type: ignore[no-any-return]
        return power_of(base, Part(single(children[2]), children[2].span), span_of(children))


_BRACKETED = re.compile(r"\{?\s*(?:\\left\s*)?[(₍].*[)₎]\s*\}?", re.DOTALL)


def _under_z(children: list[Any]) -> bool:
    return [getattr(child, "type", "") for child in children[:2]] == ["LETTER_Z", "UNDER"]


def _localised_at(prime: int, span: Span) -> int:
    """The p of Z_(p).  Raises Refusal where it is no prime."""
    if not is_prime(prime):
        message = f"Z_(p) is Z localised at a prime p, and {prime} is none"
        raise Refusal(error("group-number", message, span, f"write Z/{prime} for the cyclic group"))
    return prime


def _closed(value: s.Index, span: Span, what: str) -> int:
    if not isinstance(value, int) or value < 0:
        raise Refusal(error("group-number", f"{what} must be a number, 0 or more", span))
    return value


def label_of(space: Any, text: str) -> str:
    """A space as a mere label, spelled alike however it was written; a K(G, n) as it stands."""
    if isinstance(space, s.SpaceProduct):
        return " x ".join(label_of(factor, text) for factor in space.factors)
    if isinstance(space, s.NamedSpace):
        power = "" if space.power is None else f"^{_index(space.power, text)}"
        inner = ", ".join(label_of(one, text) for one in space.arguments)
        return space.name + power + (f"({inner})" if inner else "")
    if isinstance(space, s.Name):
        return Word(space.letter, space.index if isinstance(space.index, int) else None, space.primes, space.span).value
    if isinstance(space, s.Number):
        return str(space.value)
    return "".join(text[space.span[0] : space.span[1]].split())


def _index(index: s.Index, text: str) -> str:
    return str(index) if isinstance(index, int) else "{" + text[index.span[0] : index.span[1]] + "}"


_CLASS = re.compile(r"([A-Za-z]+)(?:_([0-9]+))?('*)\Z")


def _argument(space: Any) -> object:
    """What stands in the brackets of a space: a lone letter is a `Name` (of a class, or of a space)."""
    if not isinstance(space, s.NamedSpace) or space.power is not None or space.arguments:
        return space
    found = _CLASS.match(space.name)
    if found is None or not (len(found[1]) == 1 or found[1] in GREEK_NAMES):
        return space
    return s.Name(found[1], int(found[2]) if found[2] else None, len(found[3]), space.span)
