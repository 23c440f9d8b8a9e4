"""Single sides of statements: expressions, groups, sets, and the signs between them.  Knows no rows and no words."""

from __future__ import annotations

from opslang.lint.formula.bounds import comparisons, parted
from opslang.lint.formula.expression import sum_of
from opslang.lint.formula.groups import cohomology, eilenberg, hom_set
from opslang.lint.formula.rows import RELATIONS
from opslang.lint.formula.signs import DEFINES, EQUALS, MAPS, MEMBER
from opslang.lint.formula.stretch import NotRead, Stretch, shown
from opslang.lint.model import Coefficient, Condition, Index, Kind, Opaque, Origin, Side, Unread


def signs_of(stretch: Stretch) -> list[int]:
    """The places of the signs of relation outside brackets."""
    found = []
    at = stretch.at
    while at < stretch.end:
        token = stretch.tokens[at]
        if token.kind in ("other", "command") and token.text in RELATIONS:
            found.append(at)
            if token.text == ":" and at + 1 < stretch.end and stretch.tokens[at + 1].text == "=":
                found.pop()
        at = stretch.pairs.get(at, at) + 1
    return found


def kind_of(sign: str, left: Side, right: Side) -> Kind:
    if sign in MEMBER:
        return "membership"
    if sign in MAPS:
        return "mapsto"
    if sign in DEFINES:
        return "definition"
    if sign in EQUALS:
        if isinstance(left, Index) or isinstance(right, Index):
            return "degree"
        return "relation"
    return "other"


def has_operation(stretch: Stretch) -> bool:
    """Whether the head of an operation stands among the tokens."""
    tokens = stretch.tokens
    for at in range(stretch.at, stretch.end):
        token = tokens[at]
        if token.kind == "word" and token.text in ("Sq", "SQ"):
            return True
        if token.text == "S" and at + 1 < stretch.end and tokens[at + 1].text == "q":
            return True
        if token.text in ("P", "Q", "\\beta", "\\chi") and token.kind in ("letter", "command"):
            return True
    return False


def read_set(stretch: Stretch) -> tuple[tuple[Side, ...], tuple[Condition, ...], tuple[Unread, ...], Origin] | None:
    """The members and the conditions of a set, or of a polynomial ring on one; None where there is no bar in it."""
    close = stretch.end - 1
    begin = next((at for at in range(stretch.at, stretch.end) if stretch.pairs.get(at) == close), None)
    if begin is None or stretch.tokens[begin].text not in ("\\{", "[", "("):
        return None
    bar = next((at for at in range(begin + 1, close) if stretch.tokens[at].text in ("\\mid", "|", ":")), None)
    if bar is None or begin > stretch.at + 6 or not has_operation(Stretch(stretch.tokens, stretch.pairs, begin, bar)):
        return None
    inner = Stretch(stretch.tokens, stretch.pairs, begin + 1, bar)
    read = [read_side(part) for part in parted(inner, ",")]
    conditions: list[Condition] = []
    for part in parted(Stretch(stretch.tokens, stretch.pairs, bar + 1, close), ",", ";"):
        try:
            found = comparisons(Stretch(part.tokens, part.pairs, part.at, part.end))
        except NotRead:
            found = ()
        conditions += found or (Condition("words", None, None, shown(part.rest()), part.whole()),)
    unread = tuple([one for _, many in read for one in many])
    return tuple([side for side, _ in read]), tuple(conditions), unread, stretch.origin(stretch.at, stretch.end)


def read_side(stretch: Stretch) -> tuple[Side, tuple[Unread, ...]]:
    """One side of a relation, and what of it was not understood."""
    trial = Stretch(stretch.tokens, stretch.pairs, stretch.at, stretch.end)
    if trial.done:
        return Opaque((), stretch.whole()), (Unread("nothing stands here", stretch.whole()),)
    for reader in (cohomology, eilenberg, hom_set):
        group = reader(trial)
        if group is not None:
            return group, ()
        trial.at = stretch.at
    try:
        body = sum_of(trial)
    except NotRead as trouble:
        return Opaque(tuple(stretch.rest()), stretch.whole()), (Unread(trouble.reason, trouble.at),)
    terms = body.terms
    if len(terms) == 1 and len(terms[0][1].factors) == 1:
        only = terms[0][1].factors[0]
        if isinstance(only, Coefficient) and only.value.kind == "length":
            return only.value, ()
    return body, ()
