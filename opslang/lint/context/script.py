"""The author's declarations at work: lines of scripts run through a session, rules and conventions kept beside them.

What holds at a formula is what was declared before it in reading order; a later declaration of the same name overrides.
"""

from __future__ import annotations

import re
from collections.abc import Mapping, Sequence

from attrs import define, evolve, field, frozen

from opslang.ground.source import Source
from opslang.lint.context.directives import Said
from opslang.lint.context.sayings import from_formula
from opslang.lint.formula import statements_of
from opslang.lint.model import Call, ClassFact, ClassName, Finding, Origin, Rule, Statement, Sum
from opslang.lint.reading import Formula, read_text
from opslang.lint.symbolic.polynomial import Polynomial
from opslang.pipeline import Session

_GREEK = re.compile(
    r"(?<![\\A-Za-z])(alpha|beta|gamma|delta|epsilon|zeta|eta|theta|iota|kappa|lambda|mu|nu|xi|pi|rho|sigma|tau|upsilon|"
    r"phi|chi|psi|omega)(?![A-Za-z])"
)
_LONG = re.compile(r"([\^_])(\d\d+)")


@frozen
class Context:
    """What the author has declared so far."""

    prime: int | None = None
    lines: tuple[str, ...] = ()
    facts: Mapping[str, ClassFact] = field(factory=dict)
    rules: tuple[Rule, ...] = ()
    operations: Mapping[str, str] = field(factory=dict)
    conventions: Mapping[str, str] = field(factory=dict)
    maps: Mapping[str, Polynomial] = field(factory=dict)


@define
class Scripts:
    """The contexts of a draft, one after each directive."""

    said: Sequence[Said]
    trouble: list[Finding] = field(factory=list)
    _steps: list[tuple[tuple[int, int], Context]] = field(factory=list)
    _session: Session | None = None

    def __attrs_post_init__(self) -> None:
        context = Context()
        for one in self.said:
            context = self._after(context, one)
            self._steps.append(((one.at.file, one.at.start), context))

    @property
    def macros(self) -> tuple[str, ...]:
        """The commands that the author says mean an operation."""
        return tuple([name for _, context in self._steps[-1:] for name in context.operations])

    def at(self, formula: Formula | None) -> Context:
        """What is declared where a formula stands."""
        if not self._steps or formula is None:
            return EMPTY
        found = EMPTY
        for (file, start), context in self._steps:
            if (file == formula.file and start < formula.start) or file < formula.file:
                found = context
        return found

    def _after(self, context: Context, one: Said) -> Context:
        if one.kind == "script":
            return self._declared(context, one)
        if one.kind == "given":
            rule = rule_of(one.words[0], one.at)
            if rule is None:
                self._refused(one, "a rule is an equation: `given d iota_4 = Sq^2 iota_3`")
                return context
            maps = {node.letter: Polynomial.of(1) for node in _maps_in(rule.left)}
            return evolve(context, rules=(*context.rules, rule), maps={**context.maps, **maps})
        if one.kind == "convention":
            return evolve(context, conventions={**context.conventions, one.words[0]: one.words[1]})
        if one.kind == "macro":
            return evolve(context, operations={**context.operations, one.words[0]: one.words[1]})
        return context

    def _declared(self, context: Context, one: Said) -> Context:
        line = one.words[0]
        symbolic = _symbolic_facts(line, one.at)
        if symbolic:
            return evolve(context, facts={**context.facts, **symbolic})
        if self._session is None:
            self._session = Session()
        outcome = self._session.run(Source("% opslang:", line))
        if outcome.verdict == "error":
            self._refused(one, outcome.message or "the line was not understood")
            return context
        word = line.split()[0]
        prime = self._session.scope.prime if word == "prime" else context.prime
        facts = {**context.facts, **_facts_of(self._session, one.at)}
        return evolve(context, prime=prime, lines=(*context.lines, line), facts=facts)

    def _refused(self, one: Said, reason: str) -> None:
        message = f"`{' '.join(one.words)}` is not understood\n{reason}"
        self.trouble.append(Finding("unread-directive", "warning", message, one.at))


EMPTY = Context()


def _facts_of(session: Session, at: Origin) -> dict[str, ClassFact]:
    """The classes declared in a session, as facts."""
    facts = {}
    for (letter, index, primes), value in session.scope.names.items():
        if value.sort != "class" or value.degree is None:
            continue
        only = next(iter(value.classes)) if len(value.classes) == 1 else None
        order = only.order if only is not None and (only.letter, only.index) == (letter, index) else None
        spelling = letter + ("" if index is None else f"_{index}") + "'" * primes
        facts[spelling] = ClassFact(Polynomial.of(value.degree), order, "", "", "the author's comment", at)
    return facts


def _symbolic_facts(line: str, at: Origin) -> dict[str, ClassFact]:
    """`let x in H^n(X; Z)` with a degree that is no number."""
    found = re.match(r"let (.+?) in (H\^.*)$", line)
    if not found:
        return {}
    facts = {}
    for name in found[1].split(","):
        formula = formula_of(f"{name.strip()} \\in {found[2]}")
        if formula is None:
            return {}
        for saying in from_formula(statements_of(formula), formula):
            if saying.degree is None or saying.degree.constant is not None:
                return {}
            facts[saying.name] = ClassFact(
                saying.degree, saying.order, saying.order_text, "", "the author's comment", at
            )
    return facts


def formula_of(text: str) -> Formula | None:
    """A line in the notation of scripts, as a formula of a draft."""
    tex = _LONG.sub(r"\1{\2}", _GREEK.sub(r"\\\1 ", text))
    document = read_text(f"${tex}$", "-.tex")
    return next(iter(document.formulas()), None)


def rule_of(text: str, at: Origin) -> Rule | None:
    """The rule that an equation in the notation of scripts states."""
    formula = formula_of(text)
    statements: Sequence[Statement] = statements_of(formula) if formula is not None else ()
    if len(statements) != 1 or statements[0].kind != "relation" or statements[0].unread:
        return None
    left, right = statements[0].sides
    if not isinstance(left, Sum) or not isinstance(right, Sum):
        return None
    return Rule(left, right, text, at)


def _maps_in(side: Sum) -> list[Call]:
    return [factor for _, product in side.terms for factor in product.factors if isinstance(factor, Call)]


__all__ = ["EMPTY", "ClassName", "Context", "Scripts", "formula_of", "rule_of"]
