"""A small reader of formulas for the tests: sums of products of letters, read straight into another basis.

It is not the project's parser and does not share a line with it.  What it computes in is given from outside: `letter`,
`product`, `add`, `conjugate`, `primitive` and the `one` of that algebra.
"""

from __future__ import annotations

import re
from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

TOKEN = re.compile(r"\s*(?:(Sq|P|Q)[\^_](\d+)|(beta|chi)|(\d+)|([-+()^]))")


@dataclass
class Algebra:
    """What a formula is computed in."""

    one: Any
    letter: Callable[[str, int], Any]
    product: Callable[[Any, Any], Any]
    add: Callable[[Any, Any, int], Any]
    conjugate: Callable[[Any], Any]


class Reader:
    """Recursive descent: sum, product, power, atom."""

    def __init__(self, text: str, algebra: Algebra) -> None:
        self.algebra = algebra
        self.tokens: list[tuple[str, str]] = []
        at, text = 0, text.rstrip()
        while at < len(text):
            found = TOKEN.match(text, at)
            if not found:
                raise ValueError(f"cannot read {text[at:]!r}")
            name, index, word, number, mark = found.groups()
            self.tokens.append((name or word or mark or "number", index or number or ""))
            at = found.end()
        self.tokens.append(("end", ""))
        self.at = 0

    def next(self) -> str:
        return self.tokens[self.at][0]

    def take(self) -> tuple[str, str]:
        self.at += 1
        return self.tokens[self.at - 1]

    def read(self) -> Any:
        value = self.sum()
        if self.next() != "end":
            raise ValueError(f"something is left over: {self.tokens[self.at :]}")
        return value

    def sum(self) -> Any:
        algebra = self.algebra
        total = algebra.add(algebra.one, algebra.one, -1)
        sign = 1
        if self.next() in "+-":
            sign = -1 if self.take()[0] == "-" else 1
        while True:
            total = algebra.add(total, self.term(), sign)
            if self.next() not in ("+", "-"):
                return total
            sign = -1 if self.take()[0] == "-" else 1

    def term(self) -> Any:
        algebra = self.algebra
        zero = algebra.add(algebra.one, algebra.one, -1)
        value = algebra.one
        if self.next() == "number":
            value = algebra.add(zero, value, int(self.take()[1]))
        while self.next() in ("Sq", "P", "Q", "beta", "chi", "("):
            value = algebra.product(value, self.power())
        return value

    def power(self) -> Any:
        value = result = self.atom()
        if self.next() == "^":
            self.take()
            for _ in range(int(self.take()[1]) - 1):
                result = self.algebra.product(result, value)
        return result

    def atom(self) -> Any:
        name, index = self.take()
        if name in ("(", "chi"):
            if name == "chi":
                self.take()
            value = self.sum()
            self.take()
            return self.algebra.conjugate(value) if name == "chi" else value
        return self.algebra.letter(name, int(index or 0))


def read(text: str, algebra: Algebra) -> Any:
    """The value of a formula in an algebra."""
    return Reader(text, algebra).read()
