"""Reads one statement: text in, its surface tree or the reasons why there is none out.  Never raises.

Plain lines are read by `plain.py` at once.  The rest goes by the grammar: `spelling.py` makes tokens,
`mistakes.py` looks for the usual slips, lark's tables decide, `build.py` makes nodes.  lark is imported only then.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from opslang.ground.source import Source
from opslang.report.diagnostic import Diagnostic, Refusal, error
from opslang.syntax import plain
from opslang.syntax.layout import KEPT, STATEMENT_LIMIT
from opslang.syntax.surface import Statement

if TYPE_CHECKING:
    from opslang.syntax.spelling import Reading

Parsed = tuple[Statement | None, tuple[Diagnostic, ...]]


def parse(source: Source, limit: int = STATEMENT_LIMIT) -> Parsed:
    """The statement in one piece of text, with warnings; or None with the errors that say why.

    A piece that holds nothing but white space and comments gives None and no diagnostic.
    """
    text = source.text
    limit = min(limit, KEPT)
    if len(text) > limit:
        message = f"the statement has {len(text):,} characters; the limit is {limit:,}"
        first = len(text) - len(text.lstrip())
        return None, (error("long-statement", message, (first, first + 1), "name its parts with `let`"),)
    statement = plain.read(text)
    if statement is not None:
        return statement, ()
    return by_grammar(text)


def by_grammar(text: str) -> Parsed:
    """What `parse` does with a text that is not plain."""
    from opslang.syntax import modulus
    from opslang.syntax.mistakes import mistakes
    from opslang.syntax.spelling import Reading

    reading = Reading(text)
    number = None
    if not reading.stop and reading.tokens:
        number = modulus.take(reading)
        reading.errors += mistakes(reading)
    if reading.errors or not reading.tokens:
        ordered = sorted(reading.errors, key=lambda found: found.span)
        return None, tuple(ordered)
    try:
        return modulus.bearing(_tree(reading), number), tuple(reading.warnings)
    except Refusal as refusal:
        return None, (refusal.diagnostic,)


def _tree(reading: Reading) -> Statement:
    """The tree of the tokens.  Raises Refusal where they are no statement, or an index has no meaning."""
    from lark import Token, UnexpectedInput
    from lark.exceptions import VisitError

    from opslang.syntax.build import Builder
    from opslang.syntax.expected import unexpected
    from opslang.syntax.loader import parser

    state: Any = parser().parse_interactive()
    read = 0
    try:
        for kind, value, start, end in reading.tokens:
            state.feed_token(Token(kind, value, start_pos=start, end_pos=end))
            read += 1
        tree = state.feed_eof(Token("$END", ""))
    except UnexpectedInput:
        raise Refusal(unexpected(reading, read, state.accepts())) from None
    try:
        return Builder(reading.text).transform(tree)  # type: ignore[no-any-return]
    except VisitError as fault:
        if isinstance(fault.orig_exc, Refusal):
            raise fault.orig_exc from None
        raise
