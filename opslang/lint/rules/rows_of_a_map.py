"""The rows of a table of one map raise the degree by one and the same number."""

from __future__ import annotations

from collections import Counter, defaultdict
from collections.abc import Iterable

from opslang.lint.model import Finding, Known, Statement, Sum
from opslang.lint.rule import Draft, LintRule
from opslang.lint.symbolic.degrees import Measure, Unmeasured
from opslang.lint.symbolic.polynomial import Polynomial
from opslang.lint.symbolic.walk import about_operations


def check(draft: Draft) -> Iterable[Finding]:
    """Rows that differ from all the others of their formula."""
    tables: dict[int, list[tuple[Statement, Polynomial]]] = defaultdict(list)
    for unit in draft.units:
        statement = unit.statement
        if statement.kind != "mapsto" or statement.unread or statement.formula is None:
            continue
        shift = _shift(statement, unit.known) if about_operations(statement, unit.known) else None
        if shift is not None:
            tables[id(statement.formula)].append((statement, shift))
    for rows in tables.values():
        yield from _odd_rows(rows)


def _shift(statement: Statement, known: Known) -> Polynomial | None:
    left, right = statement.sides
    if not isinstance(left, Sum) or not isinstance(right, Sum):
        return None
    measure = Measure(known)
    try:
        (source, sort), (target, other) = measure.sum(left), measure.sum(right)
    except Unmeasured:
        return None
    if sort != "class" or other != "class" or measure.unknown:
        return None
    return target - source


def _odd_rows(rows: list[tuple[Statement, Polynomial]]) -> Iterable[Finding]:
    count = Counter(shift for _, shift in rows)
    usual, often = count.most_common(1)[0]
    if often < 3 or len(rows) - often > 1:
        return
    for statement, shift in rows:
        if shift != usual:
            message = (
                f"this row raises the degree by {shift}, the other rows by {usual}\none map raises all degrees alike"
            )
            yield Finding("rows-of-a-map", "error", message, statement.at)


RULE = LintRule(
    name="rows-of-a-map",
    title="a row of a table of a map that raises the degree by another number",
    why="A table of a differential has one degree; a row that differs has a slip in an index.",
    bad=(
        r"\begin{align*}\iota_4&\mapsto\mathrm{Sq}^2\iota_3\\ \mathrm{Sq}^1\iota_4&\mapsto\mathrm{Sq}^3\iota_3\\"
        r" \mathrm{Sq}^4\iota_4&\mapsto\mathrm{Sq}^4\mathrm{Sq}^2\iota_3\\"
        r" \mathrm{Sq}^2\mathrm{Sq}^1\iota_4&\mapsto\mathrm{Sq}^6\iota_3\end{align*}",
    ),
    good=(
        r"\begin{align*}\iota_4&\mapsto\mathrm{Sq}^2\iota_3\\ \mathrm{Sq}^1\iota_4&\mapsto\mathrm{Sq}^3\iota_3\\"
        r" \mathrm{Sq}^4\iota_4&\mapsto\mathrm{Sq}^4\mathrm{Sq}^2\iota_3\end{align*}",
    ),
    draft=check,
    rank=50,
    source="common practice",
)
