"""The excess of a word, as the draft says it."""

from __future__ import annotations

from opslang.lint.formula.integers import as_index
from opslang.lint.model import Call, Finding, Known, Operation, Statement, Sum, Verdict
from opslang.lint.numeric.words import Word, excess_of
from opslang.lint.rule import LintRule
from opslang.lint.symbolic.values import value_of


def check(statement: Statement, known: Known) -> Verdict | None:
    """e(5, 2, 1) = 2."""
    if statement.kind != "relation" or len(statement.sides) != 2:
        return None
    for side, other in (statement.sides, statement.sides[::-1]):
        word = _argument(side)
        said = as_index(other) if isinstance(other, Sum) else None
        value = value_of(said, {}) if said is not None else None
        if word is None or not isinstance(value, int) or known.prime not in (None, 2):
            continue
        excess = excess_of(word, 2)
        if excess == value:
            return Verdict("true", reason=f"the excess is {excess}")
        total = sum(index for _, index in word)
        message = f"the excess is {excess}\n2·{word[0][1]} - {total} = {excess}"
        return Verdict("finding", (Finding("false-excess", "error", message, statement.at),))
    return None


def _argument(side: object) -> Word | None:
    """The indices in e(i_1, …, i_r)."""
    if not isinstance(side, Sum) or len(side.terms) != 1 or len(side.terms[0][1].factors) != 1:
        return None
    call = side.terms[0][1].factors[0]
    if not isinstance(call, Call) or call.name not in ("e", "excess") or not call.arguments:
        return None
    if len(call.arguments) == 1:
        factors = call.arguments[0].terms[0][1].factors
        if all(isinstance(factor, Operation) and factor.head == "Sq" for factor in factors):
            return _numbers([index for factor in factors if isinstance(factor, Operation) for index in factor.upper])
    indices = [as_index(argument) for argument in call.arguments]
    return _numbers(indices)


def _numbers(indices: list) -> Word | None:  # type: ignore[type-arg]
    values = [value_of(index, {}) if index is not None else None for index in indices]
    word = tuple([("Sq", value) for value in values if isinstance(value, int)])
    return word if len(word) == len(values) and word else None


RULE = LintRule(
    name="false-excess",
    title="the excess of a word is another number",
    why="The excess of Sq^{i_1} … Sq^{i_r} is 2 i_1 - (i_1 + … + i_r); a word kills all classes of smaller degree.",
    bad=(r"$e(7,2)=4$",),
    good=(r"$e(7,2)=5$", r"$e(I)=2I_1-I_+$", r"the charge $e=1$"),
    check=check,
    rank=30,
    source="Serre 1953; Steenrod and Epstein 1962, chapter I",
)
