r"""The modulus of a congruence, `(mod 2)` or `\pmod{2}`, at the end of a relation.  Knows tokens, no primes."""

from __future__ import annotations

import re

import attrs

from opslang.syntax import surface as s
from opslang.syntax.spelling import Reading
from opslang.syntax.spellings import KEYWORDS

_TAIL = re.compile(r"\b(?:LPAR )?MOD (?:LBRACE )?(?:NUMBER|NAME)(?: RBRACE)?(?: RPAR)?\Z")
_OTHERS = frozenset(KEYWORDS.values()) - {"WHY"}


def take(reading: Reading) -> s.Number | None:
    """Takes the modulus of a relation away from its tokens, and gives it; None for `mod p`, and where there is none."""
    tokens = reading.tokens
    found = _TAIL.search(" ".join(token.kind for token in tokens[-6:]))
    if found is None or tokens[0].kind in _OTHERS:
        return None
    at = len(tokens) - len(found.group().split())
    kinds = [token.kind for token in tokens[:at]]
    if (tokens[at].kind == "LPAR") != (tokens[-1].kind == "RPAR") or "EQUALS" not in kinds or kinds[-1] == "EQUALS":
        return None
    modulus = next(token for token in tokens[at:] if token.kind in ("NUMBER", "NAME"))
    if modulus.kind == "NAME" and modulus.value != "p":
        return None
    del tokens[at:]
    return None if modulus.kind == "NAME" else s.Number(int(modulus.value), (modulus.start, modulus.end))


def bearing(statement: s.Statement, modulus: s.Number | None) -> s.Statement:
    """The statement with the modulus that stood behind its relation."""
    if modulus is None:
        return statement
    if isinstance(statement, s.WhyStatement) and isinstance(statement.body, s.RelationStatement):
        return attrs.evolve(statement, body=attrs.evolve(statement.body, modulus=modulus))
    return attrs.evolve(statement, modulus=modulus) if isinstance(statement, s.RelationStatement) else statement
