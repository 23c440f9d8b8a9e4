"""Spaces and coefficient groups as drafts write them: K(\\mathbb{Z}/2, n), B^2\\mathbb{Z}_2, \\mathbb{RP}^\\infty,
BSO(3).

Knows spellings, no cohomology."""

from __future__ import annotations

import re
from collections.abc import Sequence

from attrs import frozen

from opslang.lint.reading.document import Token

_GROUP = (
    r"(?P<group>Z(?:/\(?(?P<order>\d+|[a-zA-Z])(?:\^\{?(?P<power>[\w+-]+)\}?)?\)?|_\{?(?P<low>\d+|"
    r"[a-zA-Z])(?:\^\{?(?P<lowpower>\w+)\}?)?\}?)?|F_\{?(?P<field>\w+)\}?)"
)
_EM = re.compile(rf"K\({_GROUP},(?P<degree>[^(),]+)\)$")
_DELOOPED = re.compile(rf"B\^\{{?(?P<degree>\w+)\}}?{_GROUP}$")
_ONLY_GROUP = re.compile(_GROUP + "$")
_NAMED = re.compile(r"(RP|CP|HP|BO|BSO|BSpin|BU|BSU|BSp|MO|MSO|MU|Th|T)(?:\^\{?(\w+|\\infty)\}?)?(?:\((\w+)\))?$")
_WORDS = {"RP": "RP", "CP": "CP", "HP": "HP"}
_FALLS_AWAY = frozenset(("gap", "align", "row", "note"))


def written(tokens: Sequence[Token]) -> str:
    """Tokens in one plain spelling: \\mathbb{Z}_2 is Z_2, \\mathbb{RP}^{\\infty} is RP^{\\infty}."""
    parts = []
    for token in tokens:
        if token.kind in _FALLS_AWAY:
            continue
        text = {"open": "{", "close": "}", "sup": "^", "sub": "_"}.get(token.kind, token.text)
        parts.append(text)
    return "".join(parts).replace("\\mathord", "").replace(" ", "").replace("\\ell", "l")


@frozen
class GroupSaid:
    """A cyclic group: `order` as `ClassFact.order` at the prime 2 or p, or None with `text` where it is a symbol.

    `prime` is the prime that the group shows: that of F_3, of Z/3 and Z/9.
    """

    order: int | None
    text: str = ""
    prime: int | None = None


def group_said(text: str) -> GroupSaid | None:
    """The group that a plain spelling stands for."""
    found = _ONLY_GROUP.match(text)
    return _group(found) if found else None


def _group(found: re.Match[str]) -> GroupSaid | None:
    if found["field"]:
        return GroupSaid(1, "", int(found["field"]) if found["field"].isdigit() else None)
    root = found["order"] or found["low"]
    power = found["power"] or found["lowpower"]
    if root is None:
        return GroupSaid(0)
    if not root.isdigit():
        if root != "p":
            return GroupSaid(None, root)
        return GroupSaid(1) if power is None else _powered(power, None)
    number = int(root)
    prime = _only_prime(number)
    if prime is None:
        return GroupSaid(None, root)
    exponent = _exponent(number, prime)
    if power is None:
        return GroupSaid(exponent, "", prime)
    return _powered(power, prime) if exponent == 1 else GroupSaid(None, f"{root}^{power}", prime)


def _powered(power: str, prime: int | None) -> GroupSaid:
    return GroupSaid(int(power), "", prime) if power.isdigit() else GroupSaid(None, power, prime)


def _only_prime(number: int) -> int | None:
    if number < 2 or number > 10**6:
        return None
    prime = next(d for d in range(2, number + 1) if number % d == 0)
    while number % prime == 0:
        number //= prime
    return prime if number == 1 else None


def _exponent(number: int, prime: int) -> int:
    count = 0
    while number > 1:
        number //= prime
        count += 1
    return count


@frozen
class SpaceSaid:
    """A space: `kind` is "K" (then group and degree, as text), a named family ("RP", "BSO", …), "letter" or "other"."""

    kind: str
    text: str
    degree: str = ""
    group: GroupSaid | None = None


def space_said(tokens: Sequence[Token]) -> SpaceSaid:
    """The space that some tokens stand for."""
    return space_written(written(tokens))


def space_written(text: str) -> SpaceSaid:
    """The space of a plain spelling."""
    text = text.rstrip(".,;")
    if text.startswith("{") and text.endswith("}"):
        text = text[1:-1]
    found = _EM.match(text) or _DELOOPED.match(text)
    if found:
        group = _group(found)
        degree = found["degree"].strip("{}")
        return SpaceSaid("K", text, degree, group)
    named = _NAMED.match(text.replace("\\mathrm", "").replace("{RP}", "RP").replace("{CP}", "CP"))
    if named:
        return SpaceSaid(named[1], text, named[2] or named[3] or "")
    if re.match(r"^(?:[A-Z]|-|\\bullet|\\cdot)(?:_\{?\w\}?|')*$", text):
        return SpaceSaid("letter", text)
    return SpaceSaid("other", text)


_MENTIONED = re.compile(rf"K\({_GROUP},(?P<degree>[^(),]+)\)|B\^\{{?(?P<deloop>\w+)\}}?(?P<group2>Z_\{{?2\}}?|Z/2)")


def mentioned(text: str) -> list[SpaceSaid]:
    """The Eilenberg–MacLane spaces named in a plain spelling."""
    found = []
    for one in _MENTIONED.finditer(text):
        if one["deloop"]:
            found.append(SpaceSaid("K", one.group(), one["deloop"], GroupSaid(1, "", 2)))
        else:
            found.append(SpaceSaid("K", one.group(), one["degree"].strip("{}"), _group(one)))
    return found


_NAMES = re.compile(r"\b(RP|CP|HP)\^\{?(\w+|\\infty)\}?")


def named_in(text: str) -> list[SpaceSaid]:
    """The projective spaces named in a plain spelling."""
    return [
        SpaceSaid(found[1], found[0], found[2])
        for found in _NAMES.finditer(text.replace("{RP}", "RP").replace("{CP}", "CP"))
    ]


NO_GROUP = "a space with a group that is 0"


def particular(text: str) -> str:
    """A space of finite dimension, or a group said to be 0, in a plain spelling: there more holds than in general."""
    for space in named_in(text):
        if space.degree.isdigit():
            return space.text
    if re.match(r"H\^.*=0[.,;]?$", text):
        return NO_GROUP
    return ""
