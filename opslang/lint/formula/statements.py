"""Statements out of segments: chains, memberships, signatures, maps, lists, conditions.  Knows no degrees."""

from __future__ import annotations

from attrs import define, evolve, field

from opslang.lint.formula.bounds import comparisons
from opslang.lint.formula.integers import as_index, number_letters, with_numbers
from opslang.lint.formula.rows import Segment, segments_of
from opslang.lint.formula.sides import has_operation, kind_of, read_set, read_side, signs_of
from opslang.lint.formula.signs import (
    ARROWS,
    COLONS,
    CONDITIONAL,
    MEMBER,
    ORDERS,
)
from opslang.lint.formula.stretch import NotRead, Stretch, shown
from opslang.lint.model import (
    Condition,
    Kind,
    Origin,
    Side,
    Statement,
    Sum,
    Unread,
)
from opslang.lint.reading.document import Formula

_MODULI = frozenset(("\\pmod", "\\mod", "\\bmod", "\\pod"))
_CONTINUES = frozenset(
    ("and", "respectively", "resp.", "or", "hence", "so", "thus", "that is", "also", "while", "but", "i.e.")
)
COUNTERS = frozenset("i j k l m n r s t p q d a b c e h N".split())


def statements_of(formula: Formula) -> tuple[Statement, ...]:
    """What a formula says, in order.  Never raises: what was not understood is marked in the statement."""
    builder = _Builder(formula)
    for segment in segments_of(formula):
        builder.segment(segment)
    return builder.finished()


@define
class _Builder:
    formula: Formula
    done: list[Statement] = field(factory=list)
    waiting: list[tuple[Side, Segment, tuple[Unread, ...]]] = field(factory=list)
    """Bare expressions that may turn out to be members of a list, or what a membership speaks of."""
    chain: int = 0
    conditional: bool = False
    last: Side | None = None

    # --- one segment ----------------------------------------------------------------------------

    def segment(self, segment: Segment) -> None:
        """Take in the next segment."""
        stretch = segment.stretch
        self._words(segment)
        if "row" in segment.before and self.waiting:
            self._flush()
        if self._condition_in_brackets(segment):
            return
        modulus = self._modulus(stretch)
        signs = signs_of(stretch)
        if not signs:
            if not self._set(segment):
                self._bare(segment)
            return
        if self.conditional and not self._starts_anew(segment, signs):
            self._hypothesis(segment)
            return
        self._relation(segment, signs, modulus)

    def _words(self, segment: Segment) -> None:
        if "row" in segment.before:
            self.conditional = False
        if segment.words:
            words = segment.words.lower().strip(" ,.;()")
            self.conditional = words.startswith(CONDITIONAL) or words.endswith(CONDITIONAL)
            self._note(segment.words)

    def _note(self, words: str) -> None:
        if self.done:
            self.done[-1] = evolve(self.done[-1], notes=(*self.done[-1].notes, words))

    def _starts_anew(self, segment: Segment, signs: list[int]) -> bool:
        """Whether a segment in the scope of an `if` is a statement of its own: a comma or gap, then an equation of
        operations.
        """
        if segment.words or not ({"gap", "row", ";"} & set(segment.before)):
            return False
        return has_operation(segment.stretch)

    def _modulus(self, stretch: Stretch) -> str:
        at = stretch.at
        while at < stretch.end:
            token = stretch.tokens[at]
            if token.text in _MODULI or (token.kind == "word" and token.text == "mod"):
                tail = shown(stretch.tokens[at + 1 : stretch.end])
                end = at
                if end > stretch.at and stretch.tokens[end - 1].text == "(":
                    end -= 1
                stretch.end = end
                return tail
            at = stretch.pairs.get(at, at) + 1
        return ""

    def _condition_in_brackets(self, segment: Segment) -> bool:
        stretch = segment.stretch
        if not (stretch.sees("(", "[") and stretch.pairs.get(stretch.at) == stretch.end - 1):
            return False
        inner = Stretch(stretch.tokens, stretch.pairs, stretch.at + 1, stretch.end - 1)
        try:
            conditions = comparisons(inner)
        except NotRead:
            return bool(signs_of(inner)) and self._words_condition(segment)
        if not conditions:
            return False
        self._add_conditions(conditions, segment)
        return True

    def _words_condition(self, segment: Segment) -> bool:
        text = shown(segment.stretch.rest())
        self._add_conditions((Condition("words", None, None, text, segment.stretch.whole()),), segment)
        return True

    def _add_conditions(self, conditions: tuple[Condition, ...], segment: Segment) -> None:
        self._flush()
        stretch = segment.stretch
        if self.done and self.done[-1].kind != "condition":
            self.done[-1] = evolve(self.done[-1], conditions=(*self.done[-1].conditions, *conditions))
            return
        at = stretch.origin(stretch.at, stretch.end)
        self.done.append(Statement("condition", (), "", conditions, row=segment.row, formula=self.formula, at=at))

    # --- bare expressions -----------------------------------------------------------------------

    def _bare(self, segment: Segment) -> None:
        stretch = segment.stretch
        side, unread = read_side(stretch)
        if self.conditional or (segment.after not in (",", "", "row", "gap", ";", ".") and isinstance(side, Sum)):
            if as_index(side) is not None and isinstance(side, Sum):
                text = f"{shown(stretch.rest())} {segment.after}".strip()
                self._add_conditions((Condition("words", None, None, text, stretch.whole()),), segment)
                return
        if self.waiting and not ("," in segment.before or "gap" in segment.before):
            self._flush()
        self.waiting.append((side, segment, unread))

    def _set(self, segment: Segment) -> bool:
        """{members | conditions}, F_2[members | conditions]."""
        found = read_set(segment.stretch)
        if found is None:
            return False
        self._flush()
        members, conditions, unread, at = found
        self.chain += 1
        self._put("list", members, "{", segment, unread, at, "", False)
        self.done[-1] = evolve(self.done[-1], conditions=conditions, in_set=True)
        return True

    def _flush(self) -> None:
        if not self.waiting:
            return
        waiting, self.waiting = self.waiting, []
        sides = tuple([side for side, _, _ in waiting])
        unread = tuple([one for _, _, many in waiting for one in many])
        kind: Kind = "list" if len(sides) > 1 else "mention"
        self._add(kind, sides, "", waiting[0][1], waiting[-1][1], unread)

    # --- relations ------------------------------------------------------------------------------

    def _hypothesis(self, segment: Segment) -> None:
        stretch = segment.stretch
        try:
            conditions = comparisons(Stretch(stretch.tokens, stretch.pairs, stretch.at, stretch.end))
        except NotRead:
            conditions = ()
        if not conditions:
            conditions = (Condition("words", None, None, shown(stretch.rest()), stretch.whole()),)
        self._add_conditions(conditions, segment)

    def _relation(self, segment: Segment, signs: list[int], modulus: str) -> None:
        stretch = segment.stretch
        texts = [stretch.tokens[at].text for at in signs]
        if texts and set(texts) <= set(ORDERS) - {"\\neq", "≠"} and self._comparison(segment):
            return
        if texts[-1] in COLONS and signs[-1] == stretch.end - 1:
            self._label(segment, signs[-1])
            return
        if any(text in COLONS for text in texts) and any(text in ARROWS for text in texts):
            self._signature(segment, signs, texts)
            return
        edges = [stretch.at - 1, *signs, stretch.end]
        spans = [(first + 1, last) for first, last in zip(edges, edges[1:])]
        inherited = spans[0][0] >= spans[0][1]
        if not inherited:
            self.chain += 1
        self._links(segment, texts, signs, spans, inherited, modulus)

    def _links(
        self,
        segment: Segment,
        texts: list[str],
        signs: list[int],
        spans: list[tuple[int, int]],
        inherited: bool,
        modulus: str,
    ) -> None:
        stretch = segment.stretch
        read = [read_side(Stretch(stretch.tokens, stretch.pairs, *span)) for span in spans]
        left, unread = read[0]
        if inherited:
            if self.last is None:
                return
            left, unread = self.last, ()
        elif self.waiting and texts[0] in MEMBER:
            self._members(segment, left, read[1], stretch.origin(signs[0] + 1, spans[1][1]))
            read, spans, texts = read[1:], spans[1:], texts[1:]
            left, unread = read[0]
            if not texts:
                return
        else:
            self._flush()
        start = spans[0][0]
        for number, text in enumerate(texts):
            right, missing = read[number + 1]
            kind = kind_of(text, left, right)
            begin = (
                start
                if number == 0 and not inherited
                else (signs[number] if inherited and number == 0 else spans[number][0])
            )
            at = stretch.origin(begin, spans[number + 1][1])
            first = inherited and number == 0
            self._put(kind, (left, right), text, segment, (*unread, *missing), at, modulus, first)
            left, unread = right, missing
        self.last = left

    def _members(self, segment: Segment, left: Side, right: tuple[Side, tuple[Unread, ...]], at: Origin) -> None:
        waiting, self.waiting = self.waiting, []
        sides = (*[side for side, _, _ in waiting], left, right[0])
        first = waiting[0][1].stretch
        where = first.origin(first.at, segment.stretch.end)
        self._put("membership", sides, "\\in", segment, right[1], where, "", False)

    def _comparison(self, segment: Segment) -> bool:
        stretch = segment.stretch
        try:
            conditions = comparisons(Stretch(stretch.tokens, stretch.pairs, stretch.at, stretch.end))
        except NotRead:
            return False
        self._add_conditions(conditions, segment)
        return bool(conditions)

    def _label(self, segment: Segment, colon: int) -> None:
        """A row label `k = n+1:`; it says what holds in the row."""
        stretch = segment.stretch
        inner = Stretch(stretch.tokens, stretch.pairs, stretch.at, colon)
        self._flush()
        try:
            conditions = comparisons(inner)
        except NotRead:
            conditions = ()
        at = stretch.origin(stretch.at, stretch.end)
        self.done.append(Statement("condition", (), ":", conditions, row=segment.row, formula=self.formula, at=at))

    def _signature(self, segment: Segment, signs: list[int], texts: list[str]) -> None:
        stretch = segment.stretch
        self._flush()
        colon = next(at for at, text in zip(signs, texts) if text in COLONS)
        arrow = next((at for at, text in zip(signs, texts) if text in ARROWS and at > colon), None)
        if arrow is None:
            return
        end = next((at for at in signs if at > arrow), stretch.end)
        after = arrow + 1
        while after < end and stretch.tokens[after].kind in ("sup", "sub"):  # what is written over the arrow
            after = stretch.pairs.get(after + 1, after + 1) + 1
        first = next((at + 1 for at in reversed(signs) if at < colon), stretch.at)  # a = b : X -> Y
        spans = ((first, colon), (colon + 1, arrow), (after, end))
        read = [read_side(Stretch(stretch.tokens, stretch.pairs, *span)) for span in spans]
        unread = tuple([one for _, many in read for one in many])
        at = stretch.origin(stretch.at, stretch.end)
        self.chain += 1
        self._put("signature", tuple([side for side, _ in read]), "\\to", segment, unread, at, "", False)

    # --- adding ---------------------------------------------------------------------------------

    def _add(
        self, kind: Kind, sides: tuple[Side, ...], sign: str, first: Segment, last: Segment, unread: tuple[Unread, ...]
    ) -> None:
        at = first.stretch.origin(first.stretch.at, last.stretch.end)
        self.chain += 1
        self._put(kind, sides, sign, first, unread, at, "", False)

    def _put(
        self,
        kind: Kind,
        sides: tuple[Side, ...],
        sign: str,
        segment: Segment,
        unread: tuple[Unread, ...],
        at: Origin,
        modulus: str,
        inherited: bool,
    ) -> None:
        letters = number_letters(sides)
        if letters:
            sides = tuple([with_numbers(side, letters) for side in sides])
        self.done.append(
            Statement(
                kind,
                sides,
                sign,
                (),
                modulus,
                (),
                unread,
                segment.row,
                self.chain,
                inherited,
                formula=self.formula,
                at=at,
            )
        )

    def finished(self) -> tuple[Statement, ...]:
        """All statements of the formula."""
        self._flush()
        return tuple(self.done)
