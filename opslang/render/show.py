"""What a statement prints on standard output, in the three notations.  Knows outcomes and widths, no terminals."""

from __future__ import annotations

from opslang.ir.outcome import Outcome
from opslang.ir.tree import Element
from opslang.render.text import Notation, element_text, monomial_text, term_texts
from opslang.report.render import cells

MARGIN = 28
"""The column at which degree and excess begin, where the result is short."""
RELATION_MARGIN = 44
"""The same for the degree of a relation."""
ECHO = 52
"""The same for the statement as written, behind its result."""
BLOCK = 100
"""Dimensions that are set in columns of one width: those far on have many more digits."""
MINUS: dict[str, str] = {"text": "left - right", "unicode": "left − right", "latex": "left - right"}


def columns(entries: list[str], width: int, indent: str = "") -> list[str]:
    """Entries set in as many columns of one width as fit, read along the rows."""
    widest = max(map(cells, entries), default=0) + 2
    count = max(1, (width - len(indent) + 2) // widest)
    rows = [entries[i : i + count] for i in range(0, len(entries), count)]
    return [(indent + "".join(entry + " " * (widest - cells(entry)) for entry in row)).rstrip() for row in rows]


def measure(degree: int | None, excess: int | None) -> str:
    """Degree and excess in words; nothing for what is not known."""
    parts = [] if degree is None else [f"degree {degree}"]
    if excess is not None:
        parts.append(f"excess {excess}")
    return "   ".join(parts)


def sum_lines(element: Element, notation: Notation, width: int, indent: str = "") -> list[str]:
    """An element on one line where it fits, else its terms in columns, a plus sign before each but the first."""
    terms = term_texts(element, notation)
    if len(terms) < width or notation == "latex":
        whole = " + ".join(terms) or "0"
        if cells(whole) + len(indent) <= width or notation == "latex":
            return [indent + whole]
    return columns([terms[0]] + ["+ " + term for term in terms[1:]], width, indent)


def with_measure(lines: list[str], words: str, width: int, margin: int = MARGIN) -> list[str]:
    """The lines of an element with degree and excess behind the last one, or below it where they do not fit."""
    if not words:
        return lines
    last = lines[-1]
    padded = last + " " * max(3, margin - cells(last)) + words
    if len(lines) == 1 and cells(padded) <= width:
        return [padded]
    return [*lines, "    " + words]


def _statement(outcome: Outcome) -> str:
    """The statement as written, its white space and comments reduced."""
    start, end = outcome.span
    lines = [line.split("#", 1)[0].rstrip().removesuffix("\\") for line in outcome.source.text[start:end].split("\n")]
    text = " ".join(" ".join(lines).split())
    return text.removeprefix("why ") if outcome.kind == "derivation" else text


def _relation(outcome: Outcome, notation: Notation, width: int) -> list[str]:
    assert outcome.element is not None
    if notation == "latex":
        sign = " = " if outcome.verdict == "true" else r" \neq "
        sides = [element_text(side, notation) for side in outcome.sides]
        if outcome.links:
            signs = [" = " if link.verdict == "true" else r" \neq " for link in outcome.links]
            return [sides[0] + "".join(s + side for s, side in zip(signs, sides[1:])) + f" % {outcome.verdict}"]
        return [sides[0] + sign + sides[1] + f" % {outcome.verdict}"]
    head = (outcome.verdict + "  ").ljust(8)
    first = head + _statement(outcome)
    if outcome.verdict == "true":
        return (
            with_measure([first], measure(outcome.degree, None), width, RELATION_MARGIN)
            if outcome.degree is not None
            else [first]
        )
    lines = [first]
    indent = " " * 8
    if outcome.message:
        lines.append(indent + outcome.message)
    pairs = list(zip(outcome.links, outcome.sides, outcome.sides[1:])) if outcome.links else []
    for number, (link, left, right) in enumerate(pairs, 1):
        if link.verdict != "true":
            lines += _apart(left, right, link.difference, f"link {number}, ", notation, width)
    if not pairs:
        lines += _apart(outcome.sides[0], outcome.sides[1], outcome.element, "", notation, width)
    return lines


def _apart(left: Element, right: Element, difference: Element, which: str, notation: Notation, width: int) -> list[str]:
    lines = []
    for words, element in (("left", left), ("right", right), (MINUS[notation], difference)):
        if words == "right" and len(element.terms) == 0:
            continue
        if words == MINUS[notation] and not right.terms:
            continue
        lines += _labelled(f"{which}{words}: ", sum_lines(element, notation, width - 24))
    return lines


def _labelled(label: str, lines: list[str]) -> list[str]:
    pad = " " * 8
    return [pad + label + lines[0], *[pad + " " * len(label) + line for line in lines[1:]]]


def _listing(outcome: Outcome, notation: Notation, width: int) -> list[str]:
    items = outcome.items or ()
    if outcome.lines:
        return list(outcome.lines)
    if outcome.degree is None:
        cells = [f"{n}: {dimension}" for n, dimension in enumerate(items)]
        return [row for at in range(0, len(cells), BLOCK) for row in columns(cells[at : at + BLOCK], width)]
    head = f"dimension {len(items)} in degree {outcome.degree}"
    if not items:
        return [head]
    names = [monomial_text(monomial, outcome.prime, notation) for monomial in outcome.basis]
    return [head, *columns(names, width, "    ")]


def _derivations(outcome: Outcome, notation: Notation, width: int) -> list[str]:
    """The derivations of a statement; of the sides of a relation those that have steps, each under its name."""
    from opslang.render.derivation import align
    from opslang.render.derivation import lines as steps

    lines: list[str] = []
    for number, derivation in enumerate(outcome.derivations):
        if outcome.sides and not derivation.steps:
            continue
        if outcome.sides and notation != "latex":
            lines.append(f"side {number + 1}" if len(outcome.sides) > 2 else ("left side", "right side")[number])
        lines += [align(derivation)] if notation == "latex" else list(steps(derivation, notation, width))
    return lines


def show(outcome: Outcome, notation: Notation = "text", width: int = 80, echo: bool = False) -> str:
    """What the statement prints, without a final line end; empty for declarations and errors.

    With `echo` an expression that was not in canonical form stands behind its result, as a comment.
    """
    if outcome.verdict == "error" or outcome.kind == "declaration":
        return ""
    if outcome.kind == "listing":
        return "\n".join(_listing(outcome, notation, width))
    lines = _derivations(outcome, notation, width) if outcome.kind == "derivation" else []
    if outcome.sides:
        lines += _relation(outcome, notation, width)
    elif outcome.element is not None and outcome.kind == "element":
        words = measure(outcome.degree, outcome.excess) if notation != "latex" else ""
        shown = with_measure(sum_lines(outcome.element, notation, width), words, width)
        written = _statement(outcome)
        if echo and notation != "latex" and written != element_text(outcome.element, notation):
            shown = _echoed(shown, written, width)
        lines += shown
    return "\n".join(lines)


def _echoed(lines: list[str], written: str, width: int) -> list[str]:
    last = lines[-1] + " " * max(3, ECHO - cells(lines[-1])) + "# " + written
    if cells(last) <= width:
        return [*lines[:-1], last]
    room = max(width - 6, 20)
    return [*lines, "    # " + (written if cells(written) <= room else written[: room - 1] + "…")]
