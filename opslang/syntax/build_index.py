"""The rules of index positions, as methods of the builder."""

from __future__ import annotations

import re
from typing import Any

from lark.visitors import Transformer_NonRecursive

from opslang.report.diagnostic import Refusal, error
from opslang.syntax import surface as s
from opslang.syntax.indices import binomial, power_of, product_of, sum_of
from opslang.syntax.parts import Part, Sign, nodes_of, single, span_of
from opslang.syntax.shapes import shown


class IndexRules(Transformer_NonRecursive):  # type: ignore[type-arg]
    """`argument`, `index` and what they are made of; each gives a `Part`."""

    text: str

    def argument(self, children: list[Any]) -> Part:
        first = children[0]
        kind = getattr(first, "type", "")
        span = span_of(children)
        if kind == "NUMBER":
            return Part((int(first.value),), span)
        if kind == "MINUS":
            return Part((-int(children[1].value),), span)
        if kind in ("LBRACE", "LPAR"):
            return Part(tuple(part.value for part in nodes_of(children)), span)
        return Part((s.IndexExpression("name", (first.value,), span),), span)

    def index(self, children: list[Any]) -> Part:
        signs: list[int] = []
        terms: list[Part] = []
        sign = 1
        for child in children:
            if isinstance(child, Sign):
                sign = child.value
            else:
                signs.append(sign)
                terms.append(child)
        return sum_of(signs, terms, span_of(children))

    def index_term(self, children: list[Any]) -> Part:
        side = _side_by_side(children, self.text)
        if side is not None:
            raise side
        return product_of(nodes_of(children), span_of(children))

    def index_power(self, children: list[Any]) -> Part:
        exponent = children[2]
        return power_of(children[0], Part(single(exponent), exponent.span), span_of(children))

    def index_number(self, children: list[Any]) -> Part:
        return Part(int(children[0].value), span_of(children))

    def index_letter(self, children: list[Any]) -> Part:
        return Part(children[0].value, span_of(children))

    def index_subscript(self, children: list[Any]) -> Part:
        number = children[0] if len(children) == 1 else children[1]
        return Part(int(number.value), span_of(children))

    def index_variable(self, children: list[Any]) -> Part:
        name = children[0].value
        for child in children[1:]:
            if isinstance(child, Part):
                name += f"_{child.value}"
            elif child.type == "PRIME":
                name += child.value
        span = span_of(children)
        return Part(s.IndexExpression("name", (name,), span), span)

    def index_group(self, children: list[Any]) -> Part:
        return Part(children[1].value, span_of(children))

    def binom(self, children: list[Any]) -> Part:
        top, bottom = nodes_of(children)
        return binomial(top, bottom, span_of(children))

    def length(self, children: list[Any]) -> Part:
        of = children[1]
        if not isinstance(of, (s.Name, s.Fundamental)):
            raise Refusal(error("misplaced-script", "the bars of a degree hold one class", of.span))
        span = span_of(children)
        return Part(s.IndexExpression("length", (of,), span), span)


_OF_OPERATION = re.compile(r"(?:Sq|P)[ }]*\^\s*[{(][\d\s,]*\Z")


def _side_by_side(children: list[Any], text: str) -> Refusal | None:
    """The refusal of `{4 2 1}`: whether a product, a list or one number is meant cannot be told."""
    numbers = [isinstance(child, Part) and text[child.span[0] : child.span[0] + 1].isdigit() for child in children]
    at = next((at for at in range(1, len(numbers)) if numbers[at - 1] and numbers[at]), None)
    if at is None:
        return None
    end = next((end for end in range(at, len(numbers)) if not numbers[end]), len(numbers))
    span = span_of(children[at - 1 : end])
    pieces = [text[slice(*child.span)] for child in children[at - 1 : end]]
    written = text[span[0] : span[1]]
    message = f"numbers stand side by side in an index: {shown(written)}"
    if _OF_OPERATION.search(text, 0, span[0]) and len(written) < 40:
        mend = ",".join(pieces)
        return Refusal(error("index-numbers", message, span, f"several indices are written {{{mend}}}", mend))
    return Refusal(
        error("index-numbers", message, span, "one number stands here; a product of numbers is written 4 * 2")
    )
