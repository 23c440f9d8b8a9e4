"""A derivation for a reader: numbered lines, a TeX `align*`, and items of a record.

Each step is printed with its law, the instance of it that was used, the binomials that decided it, and the whole
element afterwards.  Steps in a row by one law whose instances are short share a number.  Nothing is computed but
instances of laws.
"""

from __future__ import annotations

import re
from collections.abc import Iterator
from typing import Any

from attrs import frozen

from opslang.ir.term import IDENTITY, Class, Element, Monomial
from opslang.laws.book import LAWS
from opslang.laws.derivation import Derivation, Step
from opslang.laws.law import Binomial, Equation, Law, Remark, single
from opslang.render.term_text import element_text, factor_text, letters_text, monomial_text, term_texts
from opslang.render.text import Notation, superscript
from opslang.spaces.family import Family


@frozen
class Group:
    """Steps that share a line: their numbers, their law, and what follows them."""

    first: int
    steps: tuple[Step, ...]
    law: Law

    @property
    def number(self) -> str:
        """The number of the step, or the range of numbers."""
        last = self.first + len(self.steps) - 1
        return str(self.first) if last == self.first else f"{self.first}-{last}"


def _is_blank(derivation: Derivation) -> bool:
    """Whether not even the first line could be written out."""
    return not derivation.finished and not derivation.steps and not derivation.start.terms


def _is_short(step: Step) -> bool:
    """Whether a step may share its line: its instance has one term at most and nothing more to show."""
    law = LAWS[step.law]
    if law.remarks(**step.bindings):
        return False
    return law.kills or (not law.binomials(**step.bindings) and len(law.instance(**step.bindings).rhs.terms) <= 1)


def _groups(derivation: Derivation) -> Iterator[Group]:
    waiting: list[Step] = []
    for number, step in enumerate(derivation.steps, start=1):
        if waiting and not (_is_short(step) and _is_short(waiting[0]) and _title(step) == _title(waiting[0])):
            yield Group(number - len(waiting), tuple(waiting), LAWS[waiting[0].law])
            waiting = []
        waiting.append(step)
    if waiting:
        yield Group(len(derivation.steps) + 1 - len(waiting), tuple(waiting), LAWS[waiting[0].law])


# --- one step -------------------------------------------------------------------------------------


def _equation(step: Step) -> Equation:
    """The instance that was used; where the law is one of operations, without what they act on."""
    law = LAWS[step.law]
    if isinstance(step.bindings.get("x"), Monomial):
        try:
            return law.instance(**{**step.bindings, "x": IDENTITY})
        except ValueError:
            # A law of classes does not hold for operations: print it with its class.
            return law.instance(**step.bindings)
    return law.instance(**step.bindings)


def equation_text(equation: Equation, notation: Notation) -> str:
    """An equation as it is written."""
    if equation.part is not None:
        return f"{monomial_text(equation.part, equation.rhs.prime, notation)} = {element_text(equation.rhs, notation)}"
    lhs = factor_text(equation.factor, equation.rhs.prime, notation)
    if equation.power > 1:
        lhs = (lhs if isinstance(equation.factor, Class) else f"({lhs})") + superscript(equation.power, notation)
    return f"{lhs} = {element_text(equation.rhs, notation)}"


def _numbers(step: Step) -> list[str]:
    """The integers that the law was used with: `a = 2`."""
    return [
        f"{name} = {value}"
        for name, value in step.bindings.items()
        if isinstance(value, int) and name not in ("p", "token", "number")
    ]


def _title(step: Step) -> str:
    """The name of the law, in the words of this instance where it has some."""
    law = LAWS[step.law]
    return law.words(**step.bindings) if law.words else law.title


_POWER = re.compile(r"([A-Z]+)\^(\d+)")


def _words_in_tex(words: str) -> str:
    return r"\text{" + _POWER.sub(r"$\1^{\2}$", words).replace("…", r"$\dots$") + "}" if words else ""


def _remark_text(remark: Remark, p: int, notation: Notation) -> str:
    """A remark; in TeX the words are in \\text."""
    text = ""
    for piece in remark:
        if isinstance(piece, Equation):
            text += equation_text(piece, notation)
        elif isinstance(piece, Monomial):
            text += monomial_text(piece, p, notation)
        elif notation == "latex":
            text += _words_in_tex(piece)
        else:
            text += piece if notation == "unicode" else piece.replace("…", "...")
    return text


def remark_texts(step: Step, notation: Notation) -> list[str]:
    """What else there is to say of an instance."""
    return [_remark_text(remark, step.after.prime, notation) for remark in LAWS[step.law].remarks(**step.bindings)]


def _binomials(step: Step) -> tuple[Binomial, ...]:
    return LAWS[step.law].binomials(**step.bindings)


def _binomial_text(binomial: Binomial, p: int, notation: Notation) -> str:
    n, k, value = binomial
    shown = rf"\tbinom{{{n}}}{{{k}}}" if notation == "latex" else f"C({n},{k})"
    equals = "=" if p > n or not 0 <= k <= n else {"latex": r"\equiv", "unicode": "≡", "text": "="}[notation]
    return f"{shown} {equals} {value}"


# --- text -----------------------------------------------------------------------------------------


def _wrap(pieces: list[str], first: str, indent: str, width: int, joint: str) -> list[str]:
    """Pieces joined and broken between them; a piece is never cut."""
    rows, row = [], first
    for at, piece in enumerate(pieces):
        piece = piece + (joint.rstrip() if at + 1 < len(pieces) else "")
        if len(row) + len(piece) > width and row.strip() and row != first:
            rows.append(row.rstrip())
            row = indent
        row += piece + " "
    return [*rows, row.rstrip()]


def _sum_rows(element: Element, notation: Notation, first: str, width: int) -> list[str]:
    terms = term_texts(element, notation) or ["0"]
    pieces = [terms[0], *("+ " + term for term in terms[1:])]
    return _wrap(pieces, first, " " * (len(first) + 2), width, " ")


def _group_rows(group: Group, p: int, notation: Notation, width: int, margin: int) -> list[str]:
    space = " " * margin
    step = group.steps[0]
    about = _title(step)
    if len(group.steps) == 1 and _numbers(step):
        about += ", " + ", ".join(_numbers(step))
    label = f"{group.number}.".ljust(margin)
    instances = list(dict.fromkeys(equation_text(_equation(each), notation) for each in group.steps))
    rows = [f"{label}{about}:"]
    if len(instances) == 1 and len(rows[0]) + len(instances[0]) + 1 <= width:
        rows[0] += " " + instances[0]
    else:
        for each in instances:
            lhs, rhs = each.split(" = ", 1)
            terms = rhs.split(" + ")
            rows += _wrap(
                [f"{lhs} = {terms[0]}", *("+ " + t for t in terms[1:])], space + "  ", space + "    ", width, " "
            )
    binomials = [_binomial_text(b, p, notation) for b in _binomials(step)] if len(group.steps) == 1 else []
    if binomials:
        rows += _wrap(binomials, space + f"mod {p}: ", space + "       ", width, ", ")
    for remark in dict.fromkeys(text for each in group.steps for text in remark_texts(each, notation)):
        rows += _wrap(remark.split(" "), space, space + "  ", width, "")
    return rows + _sum_rows(group.steps[-1].after, notation, space + "= ", width)


def lines(derivation: Derivation, notation: Notation = "text", width: int = 80) -> list[str]:
    """The derivation as numbered lines, broken to the width between terms."""
    p = derivation.start.prime
    groups = list(_groups(derivation))
    margin = max((len(group.number) for group in groups), default=1) + 2
    rows = [] if _is_blank(derivation) else _sum_rows(derivation.start, notation, " " * margin, width)
    for group in groups:
        rows += _group_rows(group, p, notation, width, margin)
    if not derivation.finished:
        dots = "…" if notation == "unicode" else "..."
        rows.append(f"{' ' * margin}{dots} not written out to its end: {derivation.stopped}")
    elif not groups:
        rows.append(" " * margin + "no law applies: this is the canonical form")
    return rows


# --- TeX ------------------------------------------------------------------------------------------

_ROW = 48
"""Characters of plain text that a row of the align* may hold."""

_PAGE = 62
"""Characters of plain text that a row may hold together with the reason at its right."""


def _tex_rows(element: Element) -> list[tuple[str, int]]:
    """A sum in rows short enough for a page, with their lengths judged by the plain spelling."""
    rows: list[tuple[str, int]] = []
    for plain, tex in zip(term_texts(element, "text"), term_texts(element, "latex")):
        if not rows:
            rows.append((tex, len(plain)))
        elif rows[-1][1] + len(plain) > _ROW:
            rows.append((r"\quad {}+ " + tex, len(plain) + 5))
        else:
            rows[-1] = (f"{rows[-1][0]} + {tex}", rows[-1][1] + len(plain) + 3)
    return rows or [("0", 1)]


def _reason(group: Group, p: int, notation: Notation, remarks: bool = True) -> list[str]:
    """The law, the numbers it was used with, its binomials and remarks: pieces for one row or more."""
    title = _title(group.steps[0])
    about = [rf"\text{{by {title}}}" if notation == "latex" else f"by {title}"]
    if len(group.steps) == 1:
        about += _numbers(group.steps[0])
        about += [_binomial_text(b, p, notation) for b in _binomials(group.steps[0])]
        about += remark_texts(group.steps[0], notation) if remarks else []
    return about


def _remark_rows(step: Step) -> list[str]:
    """The remarks in TeX rows, broken between words."""
    p = step.after.prime
    rows = []
    for remark in LAWS[step.law].remarks(**step.bindings):
        row: list[Any] = []
        length = 0
        pieces = [
            part for piece in remark for part in (re.findall(r"\S+ ?| ", piece) if isinstance(piece, str) else [piece])
        ]
        for piece in pieces:
            size = len(_remark_text((piece,), p, "text"))
            if row and length + size > _ROW:
                rows.append(row)
                row, length = [], 0
            if row and isinstance(piece, str) and isinstance(row[-1], str):
                row[-1] += piece
            else:
                row.append(piece)
            length += size
        rows.append(row)
    return [r"& \qquad " + _remark_text(tuple(row), p, "latex") for row in rows]


def _reason_rows(group: Group, p: int) -> list[str]:
    """The reason on rows of its own, with the instances that fit in one."""
    pieces = list(zip(_reason(group, p, "text", False), _reason(group, p, "latex", False)))
    for each in dict.fromkeys(map(_equation, group.steps)):
        if len(equation_text(each, "text")) <= _ROW:
            pieces.append((equation_text(each, "text"), equation_text(each, "latex")))
    rows: list[list[str]] = [[]]
    length = 0
    for plain, tex in pieces:
        if rows[-1] and length + len(plain) > _ROW:
            rows.append([])
            length = 0
        rows[-1].append(tex)
        length += len(plain) + 2
    remarks = _remark_rows(group.steps[0]) if len(group.steps) == 1 else []
    return [r"& \qquad " + r",\ ".join(row) for row in rows] + remarks


def align(derivation: Derivation) -> str:
    """The derivation as a TeX `align*` for amsmath, a law to each step, long sums broken between terms.

    The laws stand at the right where all rows leave room for them, else on rows of their own.
    """
    p = derivation.start.prime
    start = _tex_rows(derivation.start)
    steps = [(_tex_rows(group.steps[-1].after), group) for group in _groups(derivation)]
    widest = max(length for rows, _ in [(start, None), *steps] for _, length in rows)
    reasons = max((len(", ".join(_reason(group, p, "text"))) for _, group in steps), default=0)
    beside = widest + reasons <= _PAGE
    rows = [] if _is_blank(derivation) else ["& " + row for row, _ in start]
    for broken, group in steps:
        if not beside:
            rows += _reason_rows(group, p)
        rows += ["&= " + broken[0][0], *("& " + row for row, _ in broken[1:])]
        if beside:
            rows[-1] += " && " + r",\ ".join(_reason(group, p, "latex"))
    if not derivation.finished:
        rows.append(r"&= \cdots")
    return "\\begin{align*}\n" + " \\\\\n".join(rows) + "\n\\end{align*}"


# --- records --------------------------------------------------------------------------------------


def _plain(name: str, value: Any, p: int) -> Any:
    """A binding as JSON: numbers, texts, and pairs of a text and an exponent."""
    if isinstance(value, int | str):
        return value
    if isinstance(value, Family):
        return value.text
    if isinstance(value, Class):
        value = single(value)
    if isinstance(value, Monomial):
        return monomial_text(value, p, "text")
    if name == "parts":
        return [[monomial_text(part, p, "text"), exponent] for part, exponent in value]
    return letters_text(value if value and isinstance(value[0], tuple) else (value,), p, "text")


def items(derivation: Derivation) -> list[dict[str, Any]]:
    """One JSON object a step: the law, its bindings and binomials, the instance, and the element before and after."""
    p = derivation.start.prime
    found = []
    before = derivation.start
    for number, step in enumerate(derivation.steps, start=1):
        equation = _equation(step)
        found.append(
            {
                "step": number,
                "law": step.law,
                "title": _title(step),
                "remarks": remark_texts(step, "text"),
                "bindings": {name: _plain(name, value, p) for name, value in step.bindings.items()},
                "binomials": [list(binomial) for binomial in _binomials(step)],
                "path": list(step.path),
                "instance": equation_text(equation, "text"),
                "instance_latex": equation_text(equation, "latex"),
                "before": element_text(before, "text"),
                "after": element_text(step.after, "text"),
                "after_latex": element_text(step.after, "latex"),
            }
        )
        before = step.after
    return found
