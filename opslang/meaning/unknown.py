"""What is said of a name that nobody declared: a mistyped one, a class of a space not chosen, `=` for `in`."""

from __future__ import annotations

import re

from opslang.ground.source import Span
from opslang.meaning.scope import Key, Scope, spelled
from opslang.report.diagnostic import Refusal, error

_COMMON = {"w": "BO", "W": "BSO", "c": "BU", "p": "BSO", "q": "BSp"}
"""The spaces whose classes have these letters by common practice."""

_COHOMOLOGY = re.compile(r"\s*let\b[^=#]*(=)\s*\Z")


def unknown_name(key: Key, span: Span, scope: Scope, text: str) -> Refusal:
    """The refusal of a name, with the likeliest mend."""
    letter, index, primes = key
    message = f"{spelled(key)} is not declared"
    given = _COHOMOLOGY.match(text, 0, span[0]) if letter == "H" and index is None else None
    if given is not None:
        help = "a class is declared with `in`: let x in H^2"
        return Refusal(error("unknown-name", message, (given.start(1), span[1]), help, "in H"))
    how = f"declare it first: let {spelled(key)} in H^n"
    if scope.space is None and not scope.lost and letter in _COMMON and index is not None and not primes:
        space = _COMMON[letter]
        how = f"choose {space}, which has such a class: on {space}; or {how}"
    close = scope.like(key)
    return Refusal(error("unknown-name", message, span, f"did you mean {close}? or {how}" if close else how, close))
