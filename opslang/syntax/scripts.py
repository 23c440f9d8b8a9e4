"""Sorts out what stands above and below a symbol.  Knows which scripts a symbol may bear, and no mathematics."""

from __future__ import annotations

from typing import Any, TypeVar

from opslang.ground.source import Span
from opslang.report.diagnostic import Refusal, error
from opslang.syntax import surface as s
from opslang.syntax.parts import Part, Script, Scripted, end, single, start
from opslang.syntax.shapes import shown

Base = TypeVar("Base", s.Bockstein, s.Milnor, s.Fundamental, s.Name, s.Number, s.Group, s.Conjugate, s.Construction)


def sorted_scripts(base: Any, scripts: list[Script], text: str, allowed: str) -> Scripted:
    """The scripts of one symbol.

    `allowed` holds the kinds that the symbol may bear.  Raises Refusal at a script of another kind, at a second
    power or index, and at a prime behind a power.
    """
    index: s.Index | None = None
    primes, last = 0, end(base)
    power = pull = None
    lowered = False
    for script in scripts:
        if script.kind not in allowed or pull is not None:
            raise _misplaced(script, text)
        if script.kind == "power":
            if power is not None:
                raise two_powers(start(base), power, script, text)
            power = script
            single(Part(script.indices, script.span))
            continue
        if script.kind == "pull_back":
            pull = script
            continue
        if script.kind == "prime":
            if power is not None:
                help = "primes belong to the name and stand before its power"
                raise Refusal(error("misplaced-script", "a prime stands behind a power", script.span, help))
            primes += len(script.indices)
        else:
            if lowered:
                raise Refusal(error("misplaced-script", "this symbol has an index already", script.span))
            index, lowered = single(Part(script.indices, script.span)), True
        last = script.span[1]
    return Scripted(last, index, primes, power, pull)


def _misplaced(script: Script, text: str) -> Refusal:
    what = {"power": "a power", "lower": "an index below", "prime": "a prime", "pull_back": "^*"}[script.kind]
    written = shown(text[script.span[0] : script.span[1]])
    return Refusal(error("misplaced-script", f"{what} ({written}) has no meaning at this symbol", script.span))


def two_powers(begin: int, first: Script, second: Script, text: str) -> Refusal:
    """The refusal of `Sq^2^2`: which of the two readings is meant cannot be told."""
    base, top = text[begin : first.span[1]], text[second.span[0] : second.span[1]]
    mend = f"({base}){top}"
    symbol, inner = text[begin : first.span[0]], text[first.span[0] : first.span[1]].removeprefix("^")
    help = f"write {mend}, or {symbol}^{{{inner}{top}}}" if len(mend) < 40 else ""
    return Refusal(error("two-powers", f"two powers stand behind {shown(symbol)}", (begin, second.span[1]), help, mend))


def with_power(base: Base, scripts: Scripted) -> Base | s.Power:
    """The symbol itself, or its power."""
    if scripts.power is None:
        return base
    span: Span = (base.span[0], max(base.span[1], scripts.power.span[1]))
    return s.Power(base, scripts.power.indices[0], span)


def operation_indices(head: Any, scripts: list[Script], text: str) -> tuple[s.Index, ...]:
    """The indices of `Sq^4`, `P^{3,1}`; none for the total operation.  Raises Refusal at anything further."""
    if not scripts:
        return ()
    if scripts[0].kind != "power":
        raise _misplaced(scripts[0], text)
    if len(scripts) > 1:
        if scripts[1].kind == "power":
            raise two_powers(start(head), scripts[0], scripts[1], text)
        raise _misplaced(scripts[1], text)
    return scripts[0].indices


def bare(name: Any) -> s.Name:
    """A name that is to be given: with no power and no map.  Raises Refusal."""
    if isinstance(name, s.Name):
        return name
    raise Refusal(error("bad-name", "a name with a power cannot be given to a class", name.span))
