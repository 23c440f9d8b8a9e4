"""Reads plain lines straight into surface nodes: the same nodes with the same places that the grammar gives.

Strategy.  One regular expression takes a symbol with its scripts as one token, and one loop with its own stack puts
products and sums together; the statements with a keyword have a pattern each in `plain_statements.py`.
Whatever is not surely plain (TeX spelling, index expressions, anything wrong) gives None, and the grammar reads it:
this file never explains and never guesses.
"""

from __future__ import annotations

import re
from collections.abc import Callable

from opslang.syntax.spellings import GREEK_NAMES, KEYWORDS, SUBSCRIPTS, SUPERSCRIPTS
from opslang.syntax.surface import (
    Bockstein,
    Conjugate,
    ExpressionStatement,
    Factor,
    Fundamental,
    Group,
    Milnor,
    Name,
    Number,
    Operation,
    Power,
    Product,
    RelationStatement,
    Statement,
    Sum,
    WhyStatement,
)

DEEPEST = 60
"""Deeper brackets are left to the grammar."""

NUMBER = r"[0-9]{1,99}(?![0-9])"
LETTER = rf"(?:[A-OR-Za-z]|{'|'.join(sorted(GREEK_NAMES, key=len, reverse=True))})(?![A-Za-z0-9])"
_RAISED = rf"(?:\^(?:{NUMBER}|\{{{NUMBER}\}})|[⁰¹²³⁴-⁹]{{1,99}})"
LOWERED = rf"(?:_(?:{NUMBER}|\{{{NUMBER}\}})|[₀-₉]{{1,99}})"
_LIST = rf"\^\{{{NUMBER}(?:,[ ]?{NUMBER}){{1,400}}\}}"

_TOKEN = re.compile(
    rf"""[ \t\r\n]*(?:
      (Sq|P)({_RAISED}|{_LIST})()                                  # 1 head, 2 indices, 3
    | ((?:iota|ι)({LOWERED})('*))({_RAISED})?()                    # 4 symbol, 5 degree, 6 primes, 7 power, 8
    | (({LETTER})({LOWERED})?('*))({_RAISED})?()               # 9 symbol, 10 letter, 11 index, 12, 13 power, 14
    | (\+|-|−)()                                                   # 15 sign, 16
    | (\*|·|⋅|∪|⌣|⊗|×|∘)()                                         # 17 glue, 18
    | (=)()                                                        # 19, 20
    | ({NUMBER})({_RAISED})?()                                     # 21 number, 22 power, 23
    | (?:beta(?![A-Za-z0-9])|β(?![0-9]))({LOWERED})?()             # 24 order, 25
    | (\(|chi\(|χ\()()                                             # 26 opening, 27
    | (\))({_RAISED})?()                                           # 28 closing, 29 power, 30
    | (Q)({LOWERED})({_RAISED})?()                                 # 31 Q, 32 index, 33 power, 34
    | (Sq|P)(?![A-Za-z])(?![ \t\r\n]*[0-9])()                      # 35 head, 36
    | ()                                                           # 37: not plain
    )""",
    re.VERBOSE,
)
_OPERATION, _IOTA, _NAME, _SIGN, _GLUE, _EQUALS, _NUMBER = 3, 8, 14, 16, 18, 20, 23
_BETA, _OPEN, _CLOSE, _MILNOR, _TOTAL = 25, 27, 30, 34, 36

_GLUES = {"*": "*", "·": "*", "⋅": "*", "∪": "cup", "⌣": "cup", "⊗": "cross", "×": "cross", "∘": "compose"}
_DIGITS = str.maketrans({**SUPERSCRIPTS, **SUBSCRIPTS})
_FIRST_WORD = re.compile(r"[ \t\r\n]*([a-z]+)(?![A-Za-z0-9_])")


def read(text: str) -> Statement | None:
    """The statement of a plain line; None where the line is not surely plain."""
    end = len(text)
    if "#" in text:
        if "\n" in text:
            return None
        end = text.index("#")
    word = _FIRST_WORD.match(text, 0, end)
    keyword = word.group(1) if word is not None else ""
    if word is None or keyword not in KEYWORDS:
        return _formula(text, 0, end)
    if keyword == "why":
        body = _formula(text, word.end(), end)
        return None if body is None else WhyStatement(body, (word.start(1), body.span[1]))
    from opslang.syntax.plain_statements import READERS

    reader = READERS.get(keyword)
    return None if reader is None else reader(text[:end])


def value_of(script: str) -> int:
    """The number in a script: `^4`, `_{12}`, `⁴²`."""
    if script[0] == "^" or script[0] == "_":
        return int(script[2:-1] if script[1] == "{" else script[1:])
    return int(script.translate(_DIGITS))


_Match = re.Match[str]


def _operation(found: _Match) -> Factor:
    head, indices = found.group(1, 2)
    span = (found.start(1), found.end())
    if "," in indices:
        return Operation(head, tuple(map(int, indices[2:-1].split(","))), span)
    return Operation(head, (value_of(indices),), span)


def _iota(found: _Match) -> Factor:
    degree, primes, power = found.group(5, 6, 7)
    start, end = found.span(4)
    base = Fundamental(value_of(degree), len(primes), (start, end))
    return base if power is None else Power(base, value_of(power), (start, found.end()))


def _name(found: _Match) -> Factor:
    letter, index, primes, power = found.group(10, 11, 12, 13)
    start, end = found.span(9)
    base = Name(letter, None if index is None else value_of(index), len(primes), (start, end))
    return base if power is None else Power(base, value_of(power), (start, found.end()))


def _number(found: _Match) -> Factor:
    number, power = found.group(21, 22)
    start, end = found.span(21)
    base = Number(int(number), (start, end))
    return base if power is None else Power(base, value_of(power), (start, found.end()))


def _beta(found: _Match) -> Factor:
    order = found.group(24)
    end = found.end()
    if order is None:
        return Bockstein(None, (end - (1 if found.group()[-1] == "β" else 4), end))
    length = 1 if "β" in found.group() else 4
    return Bockstein(value_of(order), (found.start(24) - length, end))


def _milnor(found: _Match) -> Factor:
    start = found.start(31)
    base = Milnor(value_of(found.group(32)), (start, found.end(32)))
    return base if found.group(33) is None else Power(base, value_of(found.group(33)), (start, found.end()))


def _total(found: _Match) -> Factor:
    return Operation(found.group(35), (), found.span(35))


_ATOMS: dict[int, Callable[[_Match], Factor]] = {
    _OPERATION: _operation,
    _IOTA: _iota,
    _NAME: _name,
    _NUMBER: _number,
    _BETA: _beta,
    _MILNOR: _milnor,
    _TOTAL: _total,
}


class _Open:
    """A sum that is being read, and the bracket it stands in."""

    __slots__ = ("begin", "factors", "glue", "glues", "mark", "sign", "start", "terms")

    def __init__(self, mark: str, start: int) -> None:
        self.mark = mark
        self.start = start
        self.terms: list[tuple[int, Product]] = []
        self.factors: list[Factor] = []
        self.glues: list[str] = []
        self.glue = ""
        self.sign = 0  # 0: none was written yet
        self.begin = -1

    def end_product(self) -> bool:
        """Puts the product down; False where there is none, or where it ends in a sign."""
        factors = self.factors
        if not factors or self.glue:
            return False
        span = (factors[0].span[0], factors[-1].span[1])
        self.terms.append((self.sign or 1, Product(tuple(factors), tuple(self.glues), span)))
        if self.begin < 0:
            self.begin = span[0]
        self.factors, self.glues = [], []
        return True

    def ended(self) -> Sum | None:
        """The sum; None where something is missing."""
        if not self.end_product():
            return None
        return Sum(tuple(self.terms), (self.begin, self.terms[-1][1].span[1]))


def _formula(text: str, at: int, end: int) -> ExpressionStatement | RelationStatement | None:
    """An expression or a relation."""
    sides = sums(text, at, end)
    if not sides:
        return None
    span = (sides[0].span[0], sides[-1].span[1])
    return ExpressionStatement(sides[0], span) if len(sides) == 1 else RelationStatement(tuple(sides), None, span)


def sums(text: str, at: int, end: int) -> list[Sum] | None:
    """The sides of a chain of equations; None where the text is not surely plain."""
    while end > at and text[end - 1] in " \t\r\n":
        end -= 1
    sides: list[Sum] = []
    stack: list[_Open] = []
    now = _Open("", at)
    atoms = _ATOMS
    for found in _TOKEN.finditer(text, at, end):
        kind = found.lastindex
        make = atoms.get(kind)  # type: ignore[arg-type]
        if make is not None:
            now.factors.append(make(found))
            now.glues.append(now.glue)
            now.glue = ""
        elif kind == _SIGN:
            if not _signed(now, found):
                return None
        elif kind == _GLUE:
            if now.glue or not now.factors:
                return None
            now.glue = _GLUES[found.group(17)]
        elif kind == _OPEN and len(stack) < DEEPEST:
            stack.append(now)
            now = _Open(found.group(26), found.start(26))
        elif kind == _CLOSE and stack:
            factor = _closed(now, found)
            now = stack.pop()
            if factor is None:
                return None
            now.factors.append(factor)
            now.glues.append(now.glue)
            now.glue = ""
        elif kind == _EQUALS and not stack:
            side = now.ended()
            if side is None:
                return None
            sides.append(side)
            now = _Open("", at)
        else:
            # The end of the text gives one empty match; anything else here is not plain.
            if found.start() != end or found.end() != end:
                return None
    last = None if stack else now.ended()
    return None if last is None else [*sides, last]


def _signed(now: _Open, found: _Match) -> bool:
    if now.factors:
        if not now.end_product():
            return False
    elif now.sign or now.terms:
        return False
    else:
        now.begin = found.start(15)
    now.sign = 1 if found.group(15) == "+" else -1
    return True


def _closed(now: _Open, found: _Match) -> Factor | None:
    """The factor that a closing bracket completes."""
    body = now.ended()
    if body is None:
        return None
    span = (now.start, found.end(28))
    base = Group(body, span) if now.mark == "(" else Conjugate(body, span)
    power = found.group(29)
    return base if power is None else Power(base, value_of(power), (now.start, found.end()))
