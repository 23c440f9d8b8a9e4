r"""Slips that authors make, planted in true formulas of the drafts.

What a reader of this corpus must know
--------------------------------------
Each folder beside this file is an invented draft, in a style of its own (`style` in its `marks.toml`); the names of
the authors are invented too.  The drafts compile with pdflatex and need amsart, amsmath, amssymb, amsthm, booktabs,
graphicx, hyperref, marginnote, mathtools, tikz-cd, xcolor and what these draw in.  `marks.toml` judges the formulas:

- `file`, `line`, `column`, `quote`: where the formula begins (from 1, in code points) and its text, letter by letter;
  a quote may include the dollars, and words, where the claim does ("$\Sq^k x=0$ for $k>m$").
- `verdict`: "true", "false" or "undecidable".  False means that a finding is right there; `severity` tells a plain
  error from what only deserves a warning.  Undecidable means that nothing can or should be said: a bare mention, a
  declaration, a hypothesis, something that is not an operation at all, or mathematics beyond the primary operations
  (then the reason says whether it is correct).  A finding on a true or undecidable formula is a false alarm.
- `kind`: what would have to be known to judge it: degree, signature, adem, cartan, wu, ..., `-template` for the
  general statements; `needs` and `given`: the declaration or rule that it needs and whether the text, or a comment,
  gives it.
- `relation`: a row with a relation, for the share of rows understood.
- `reason`: worked out by hand.  `judged` is "formula by formula", or "by its shape" for declarations and mentions
  that were sorted by what they look like, with one reason for all; these are always undecidable.
- `plant = false`: no slip may be planted there, though it is true (its terms may be 0 for reasons of the text).

The marks were written with the drafts, before there was anything to check them with; numeric relations between squares
were tried with `squares.py`, which shares nothing with opslang.  Binomials are 0 outside 0 <= lower <= upper.

What the program does
---------------------
`candidates()` lists every slip that can be planted; `plant(seed, count)` chooses some, at most one a formula, going
round the kinds so that each is there; the same seed gives the same slips.  A slip carries the modified source of its
file, the place of the formula and of the change, and why the formula is now false.  `certainty` says how we know:

- "degrees": one side or term has now another degree and no side is 0;
- "counterexample": a general statement that fails for the named small values;
- "evaluation": a numeric relation whose sides now act differently on a product of classes of degree one;
- "structure": a list or basis that has lost, or gained, a member; a value known from the reason of the mark;
- "binding": a letter that nothing binds any more;
- "convention": false as it is usually read, a warning being enough;
- "notation": TeX prints another formula than the one meant.
"""

from __future__ import annotations

import random
from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache

from drafts.corpus import Draft, Mark, drafts, offset_of, place_of
from drafts.slip_kinds import KINDS, Change

WARNINGS = ("convention", "notation")


@dataclass(frozen=True)
class Slip:
    """One planted slip: the modified source of one file, and what is wrong in it."""

    draft: str
    file: str
    source: str
    kind: str
    line: int
    column: int
    at_line: int
    at_column: int
    original: str
    formula: str
    why: str
    certainty: str
    mark: Mark

    @property
    def place(self) -> tuple[str, str, int, int]:
        return self.draft, self.file, self.line, self.column

    @property
    def severity(self) -> str:
        return "warning" if self.certainty in WARNINGS else "error"


def may_plant(mark: Mark) -> bool:
    """Only formulas judged true one by one, with what they need at hand, are touched."""
    return mark.verdict == "true" and mark.plant and mark.given != "missing" and mark.judged == "formula by formula"


def planted(draft: Draft, mark: Mark, kind: str, change: Change) -> Slip:
    """The draft's file with one change made in one formula."""
    text = draft.source(mark.file)
    begin = offset_of(text, mark.line, mark.column)
    formula = mark.quote[: change.start] + change.text + mark.quote[change.end :]
    source = text[:begin] + formula + text[begin + len(mark.quote) :]
    at_line, at_column = place_of(source, begin + change.start)
    return Slip(
        draft=draft.name, file=mark.file, source=source, kind=kind, line=mark.line, column=mark.column,
        at_line=at_line, at_column=at_column, original=mark.quote, formula=formula,
        why=change.why, certainty=change.certainty, mark=mark,
    )  # fmt: skip


@cache
def candidates() -> tuple[Slip, ...]:
    """Every slip of every kind, by draft, formula and kind."""
    return tuple(
        planted(draft, mark, name, change)
        for draft in drafts()
        for mark in draft.marks
        if may_plant(mark)
        for name, changes in KINDS.items()
        for change in changes(mark)
        if mark.quote[change.start : change.end] != change.text
    )


def plant(seed: int, count: int) -> tuple[Slip, ...]:
    """`count` slips (fewer if there are not so many), no two in one formula; in the order of the drafts.

    The kinds take turns, rare ones first, lest the others use up their formulas.
    """
    groups: dict[str, list[Slip]] = {name: [] for name in KINDS}
    for slip in candidates():
        groups[slip.kind].append(slip)
    lots = random.Random(seed)
    kinds = sorted(groups.values(), key=len)
    for slips in kinds:
        lots.shuffle(slips)
    chosen: dict[tuple[str, str, int, int], Slip] = {}
    while any(kinds) and len(chosen) < count:
        for slips in kinds:
            found = next_free(slips, chosen)
            if found is not None and len(chosen) < count:
                chosen[found.place] = found
    return tuple(chosen[place] for place in sorted(chosen))


def next_free(slips: list[Slip], chosen: Mapping[tuple[str, str, int, int], Slip]) -> Slip | None:
    """The next slip of a kind in a formula that has none yet; the list grows shorter."""
    while slips:
        slip = slips.pop()
        if slip.place not in chosen:
            return slip
    return None
