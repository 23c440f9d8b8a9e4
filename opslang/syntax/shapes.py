"""The shapes of tokens: one pattern cuts a text into pieces, and each piece has a name by which it is read.

Knows code points.  What a piece means is settled in `spelling.py`.
"""

from __future__ import annotations

import re
from typing import NamedTuple

from opslang.syntax.spellings import FONTS, PRIMES, SUBSCRIPTS, SUPERSCRIPTS, SURROUNDINGS


class Token(NamedTuple):
    """A token with the stretch of text it was read from; parts of a Unicode script may have no width."""

    kind: str
    value: str
    start: int
    end: int


_FONT = "|".join(re.escape(font) for font in FONTS)
_SHAPES = rf"""
      (?P<space>[ \t\r\n\u00a0\u2000-\u200b\u2028\u2029\u202f\u205f\u3000\ufeff]+)
    | (?P<comment>\#[^\n]*)
    | (?P<dangling>\\[ \t\r\n]*\Z)
    | (?P<joint>\\[ \t]*\r?\n)
    | (?P<number>[0-9]+)
    | (?P<foreign>(?:(?![0-9])\d)+)
    | (?P<dead>[ˆ´])
    | (?P<unequal>!= | =\? | \?= | [≠≢≟] | \\not\s*(?: = | \\equiv(?![A-Za-z]) ) | \\neq?(?![A-Za-z])
        | \\(?:stackrel|overset)\s*\{{\s*\?\s*\}}\s*\{{\s*=\s*\}} )
    | (?P<word>[A-Za-z]+)
    | (?P<pull>\^\s*(?: \* | ∗ | \\ast(?![A-Za-z]) | \{{\s*(?: \* | ∗ | \\ast )\s*\}} ))
    | (?P<raised_prime>\^\s*(?: \\prime(?![A-Za-z]) | \{{\s*(?: (?: \\prime(?![A-Za-z]) | ['′″‴’] )\s* )+ \}} ))
    | (?P<raised>[{"".join(SUPERSCRIPTS)}]+)
    | (?P<lowered>[{"".join(SUBSCRIPTS)}]+)
    | (?P<primes>[{"".join(PRIMES)}]+)
    | (?P<face>\\(?:{_FONT})(?![A-Za-z])\s*(?: \{{\s*(?P<faced>[A-Za-z]+)\s*\}} | (?P<single>[A-Za-z])(?![A-Za-z]) ))
    | (?P<aside>\\(?:label|tag\*?|hspace\*?|vspace\*?|phantom|hphantom)\s*\{{[^{{}}]*\}} | \\(?:left|right)\s*\.)
    | (?P<surrounding>\\(?:begin|end)\s*\{{\s*(?:{SURROUNDINGS})\*?\s*\}})
    | (?P<command>\\[A-Za-z]+)
    | (?P<row>\\\\(?:\s*\[\s*-?[0-9.]+\s*[a-z]{{2}}\s*\])?)
    | (?P<escape>\\.)
    | (?P<dots>\.\.+)
    | (?P<arrow>-{{1,2}}>)
    | (?P<sign>.)
    """
_FLAGS = re.VERBOSE | re.DOTALL
PLAIN_TOKEN = re.compile(_SHAPES, _FLAGS)
TEX_TOKEN = re.compile(_SHAPES.replace(r"(?P<comment>\#", r"(?P<comment>[\#%]"), _FLAGS)
SKIPPED = frozenset(("space", "comment", "joint"))


def shown(text: str) -> str:
    """A piece of text for a message: its beginning where it is long, its code points where it cannot be printed."""
    if len(text) > 40:
        text = text[:30] + "…"
    if text.isprintable():
        return text
    return " ".join(f"U+{ord(char):04X}" for char in text)
