"""The author's own comments: `% opslang: …`.  Knows their words; the notation of scripts is left to a session.

% opslang: let x in H^2                 any declaration of a script: let, on, space, prime, map, manifold
% opslang: given d iota_4 = Sq^2 iota_3  a relation that holds in this draft
% opslang: convention Q_1 is Sq^1        also: Q_0 is Sq^1; P^i has degree i; lower squares; Sq^0 is an operation
% opslang: macro \\Square is Sq           a command that means an operation
% opslang: skip                          the next formula; `skip paragraph`; `skip all` until `resume`
% opslang: allow false-relation          findings of that name in the next formula
"""

from __future__ import annotations

import re
from collections.abc import Iterator

from attrs import define, field, frozen

from opslang.lint.model import Finding, Origin
from opslang.lint.reading import Directive, Document, Formula

SCRIPT = ("let", "on", "space", "prime", "map", "manifold", "bundle")
_CONVENTIONS = (
    (re.compile(r"Q_?0\s*(?:is|=)\s*(?:Sq\^?1|beta)$"), "Q", "0"),
    (re.compile(r"Q_?1\s*(?:is|=)\s*(?:Sq\^?1|beta)$"), "Q", "1"),
    (re.compile(r"P\^?i has degree i$"), "P", "degree"),
    (re.compile(r"P\^?i has degree 2i\(p-1\)$"), "P", "number"),
    (re.compile(r"lower (?:squares|indices)$"), "squares", "lower"),
    (re.compile(r"upper (?:squares|indices)$"), "squares", "upper"),
    (re.compile(r"Sq\^?0 is (?:not 1|not the identity|an operation)$"), "Sq^0", "free"),
)
_MACRO = re.compile(r"\\?(\w+)\s+(?:is|means)\s+(Sq|P|beta|Q|chi)$")


@frozen
class Said:
    """One directive that was understood: what kind, its words, and where it stands among the pieces."""

    kind: str
    words: tuple[str, ...]
    piece: int
    at: Origin


@define
class Allowed:
    """The stretches in which nothing, or nothing of some name, is said."""

    stretches: list[tuple[Origin, frozenset[str]]] = field(factory=list)

    def skips(self, at: Origin) -> bool:
        """Whether a place is skipped altogether."""
        return any(not names and _inside(at, place) for place, names in self.stretches)

    def allows(self, finding: Finding) -> bool:
        """Whether the author has allowed a finding."""
        return any(
            (not names or finding.name in names) and _inside(finding.at, place) for place, names in self.stretches
        )


def _inside(at: Origin, place: Origin) -> bool:
    return at.file == place.file and place.start <= at.start < place.end


def understood(directive: Directive, piece: int) -> Said | str:
    """The meaning of a directive, or in words why it has none."""
    at = Origin(directive.file, directive.start, directive.end)
    text = " ".join(directive.text.split()).rstrip(".")
    word, _, rest = text.partition(" ")
    if word in SCRIPT:
        return Said("script", (text,), piece, at)
    if word == "given" and "=" in rest:
        return Said("given", (rest,), piece, at)
    if word == "convention":
        for pattern, key, value in _CONVENTIONS:
            if pattern.match(rest):
                return Said("convention", (key, value), piece, at)
        return (
            "the conventions known are: Q_0 is Sq^1, Q_1 is Sq^1, P^i has degree i, lower squares, Sq^0 is an operation"
        )
    if word == "macro":
        found = _MACRO.match(rest)
        if found:
            return Said("macro", found.groups(), piece, at)
        return "write as in `macro \\Square is Sq`; what it may mean is Sq, P, beta, Q or chi"
    if word == "skip" and rest in ("", "paragraph", "all"):
        return Said("skip", (rest,), piece, at)
    if word == "resume" and not rest:
        return Said("resume", (), piece, at)
    if word == "allow" and rest:
        return Said("allow", tuple(rest.replace(",", " ").split()), piece, at)
    known = ", ".join((*SCRIPT, "given", "convention", "macro", "skip", "resume", "allow"))
    return f"a comment of this kind begins with one of: {known}"


def directives_of(document: Document) -> tuple[list[Said], list[Finding]]:
    """The directives of a draft, and findings on those that say nothing."""
    said: list[Said] = []
    trouble: list[Finding] = []
    for number, piece in enumerate(document.pieces):
        if isinstance(piece, Directive):
            found = understood(piece, number)
            if isinstance(found, Said):
                said.append(found)
            else:
                at = Origin(piece.file, piece.start, piece.end)
                message = f"`{piece.text.strip()}` is not understood\n{found}"
                trouble.append(Finding("unread-directive", "warning", message, at))
    return said, trouble


def allowed_in(document: Document, said: list[Said]) -> Allowed:
    """What the skip and allow directives cover."""
    allowed = Allowed()
    open_at: Said | None = None
    for one in said:
        if one.kind == "skip" and one.words[0] == "all":
            open_at = open_at or one
        elif one.kind == "resume" and open_at is not None:
            allowed.stretches += [(place, frozenset()) for place in _between(document, open_at.piece, one.piece)]
            open_at = None
        elif one.kind in ("skip", "allow"):
            names = frozenset(one.words if one.kind == "allow" else ())
            paragraph = one.kind == "skip" and one.words[0] == "paragraph"
            allowed.stretches += [(place, names) for place in _following(document, one.piece, paragraph)]
    if open_at is not None:
        last = len(document.pieces)
        allowed.stretches += [(place, frozenset()) for place in _between(document, open_at.piece, last)]
    return allowed


def _between(document: Document, first: int, last: int) -> Iterator[Origin]:
    for piece in document.pieces[first:last]:
        if isinstance(piece, Formula):
            yield Origin(piece.file, piece.start, piece.end)


def _following(document: Document, piece: int, paragraph: bool) -> Iterator[Origin]:
    """The next formula, or all those of its paragraph that come after the directive."""
    number = None
    for found in document.pieces[piece + 1 :]:
        if isinstance(found, Formula):
            if number is not None and found.where.paragraph != number:
                return
            yield Origin(found.file, found.start, found.end)
            number = found.where.paragraph
            if not paragraph:
                return
