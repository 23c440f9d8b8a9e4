"""What stands between lark's tree and the surface nodes: pieces that are no node of their own, with their places."""

from __future__ import annotations

from typing import Any

from attrs import field, frozen

from opslang.ground.source import Span
from opslang.report.diagnostic import Refusal, error
from opslang.syntax import surface as s


@frozen
class Part:
    """A value with its place."""

    value: Any
    span: Span


@frozen
class Sign:
    """A plus or a minus, as +1 or -1."""

    value: int
    span: Span


@frozen
class Glue:
    """A sign between factors."""

    value: str
    span: Span


@frozen
class Copies:
    """How often a group is taken."""

    value: int
    span: Span


@frozen
class Arguments:
    """What stands in the brackets of a space."""

    value: tuple[object, ...]
    span: Span


@frozen
class Word:
    """The name of a space, in its pieces."""

    letter: str
    index: int | None
    primes: int
    span: Span

    @property
    def value(self) -> str:
        """The name as it is spelled."""
        return self.letter + ("" if self.index is None else f"_{self.index}") + "'" * self.primes


@frozen
class Pull:
    """`f^*` before it has found what it acts on."""

    name: str
    span: Span


@frozen
class Script:
    """What stands above or below a symbol: "power", "lower", "prime" (indices: how many) or "pull_back"."""

    kind: str
    indices: tuple[s.Index, ...]
    span: Span


@frozen
class Scripted:
    """The scripts of one symbol, sorted; `end` is where the symbol ends without its powers."""

    end: int
    index: s.Index | None = None
    primes: int = 0
    power: Script | None = None
    pull: Script | None = field(default=None)


def start(part: Any) -> int:
    """Where a token or a node begins."""
    place = getattr(part, "start_pos", None)
    return int(part.span[0] if place is None else place)


def end(part: Any) -> int:
    """Where a token or a node ends."""
    place = getattr(part, "end_pos", None)
    return int(part.span[1] if place is None else place)


def span_of(children: list[Any]) -> Span:
    """The stretch from the first child to the last."""
    return start(children[0]), end(children[-1])


def nodes_of(children: list[Any]) -> list[Any]:
    """The children that are no tokens."""
    return [child for child in children if not hasattr(child, "type")]


def single(part: Part) -> s.Index:
    """The one index of an argument.  Raises Refusal where there are several."""
    if len(part.value) > 1:
        raise Refusal(error("many-indices", "one index is wanted here, not several", part.span))
    return part.value[0]  # type: ignore[no-any-return]
