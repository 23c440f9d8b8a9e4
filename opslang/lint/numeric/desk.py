"""Decides closed relations: the classes are declared, the surface trees handed to a session, its outcome read.

A class of some space is the fundamental class of K(G, n) under another name: what holds for it holds for every such
class, and what fails for it fails for some.  A class of a particular space may satisfy more; then only "true" is
believed."""

from __future__ import annotations

import re
from collections.abc import Mapping
from functools import lru_cache
from typing import Literal

from attrs import evolve, field, frozen

from opslang.ground.source import Source, Span
from opslang.ir import tree as ir
from opslang.ir.outcome import Outcome
from opslang.ir.tree import Class
from opslang.lint.context.names import names_of
from opslang.lint.context.sayings import only_name
from opslang.lint.formula.closed import to_surface
from opslang.lint.model import ClassFact, ClassName, Known, Rule, Sum
from opslang.lint.numeric.bundles import KINDS, family_of, has_space, in_space, said_space, undualised
from opslang.lint.numeric.naming import Naming, Unnamed
from opslang.lint.numeric.rules_given import (
    OF_THE_SPACE,
    Transgression,
    Unfit,
    WrongPage,
    conventional,
    has_primitive,
    killed,
    other_rules,
    spelled_out,
)
from opslang.meaning.lower import Lowering
from opslang.meaning.value import cls
from opslang.pipeline import Session, derive_value
from opslang.report.diagnostic import Refusal
from opslang.syntax import surface as sf
from opslang.tables.bockstein import Undefined
from opslang.tables.budget import TooLarge

_GENERAL = re.compile(r"(?:|K\(.*|B\^.*|-|[A-Z](?:_\w)?'*)$")
LIMIT = 20_000
HIGHEST = 200
HIGHEST_CLASS = 40
LONGEST = 40
"""Derivations are looked for up to this degree, so that no draft makes the linter slow."""

KILLED = 2
"""The order under which a class with Sq^1 u = 0 is computed: that of the reduction of a Z/4 class."""

Answer = Literal["true", "false", "undecided", "unknown"]


@frozen
class Decision:
    """What is known of one closed relation.

    `name` is the session's word for what is wrong (degrees-differ, bockstein-undefined, …); `special` says why a
    class may satisfy more than is known of it, so that "false" cannot be believed.
    """

    answer: Answer
    reason: str = ""
    needed: str = ""
    left: str = ""
    right: str = ""
    name: str = ""
    special: str = ""
    of_class: bool = False
    sort: str = ""
    degree: int | None = None
    derivation: tuple[str, ...] = field(default=(), repr=False)

    @property
    def certainly_false(self) -> bool:
        """False, whatever the classes are: where the degrees differ, nothing that is not known of them can help."""
        return self.answer == "false" and (not self.special or (self.name == "degrees-differ" and self.of_class))


class Desk(Session):
    """A session that is asked with surface trees."""

    def answer(self, statement: sf.Statement, span: Span) -> Outcome:
        """The outcome of a statement that has been read already.  Never raises."""
        source = Source("", "")
        blank = Outcome(source, span, "relation", "ok", self.scope.prime)
        try:
            return self._answer(statement, blank, Lowering(self.scope, ""))
        except Refusal as refusal:
            found = refusal.diagnostic
            return evolve(blank, verdict="error", name=found.name, message=found.message)
        except Undefined as trouble:
            return evolve(blank, verdict="error", name="bockstein-undefined", message=str(trouble))
        except (TooLarge, RecursionError, MemoryError):
            return evolve(blank, verdict="error", name="too-large", message="too large to be tried")
        except Exception as trouble:  # a linter passes over what it cannot compute
            return evolve(blank, verdict="error", name="not-computed", message=str(trouble) or "not computed")


@lru_cache(maxsize=64)
def desk(prime: int, script: tuple[str, ...]) -> tuple[Desk, frozenset[str]]:
    """A session at a prime, after the author's declarations, and the names that these declare."""
    session = Desk(prime, LIMIT)
    for line in script:
        session.run(Source("% opslang:", line))
    kept = {
        letter + ("" if index is None else f"_{index}") + "'" * primes for letter, index, primes in session.scope.names
    }
    if any(line.startswith("on ") for line in script):
        kept |= _classes_here(session)
    return session, frozenset(kept)


def _classes_here(session: Desk) -> set[str]:
    """The spellings of the classes of the current space, those of infinite families up to some degree."""
    kept = {f"iota_{n}" for n in range(1, 100)}
    for letter in ("w", "c"):
        kept |= {f"{letter}_{n}" for n in range(HIGHEST_CLASS)}
    here = session.scope.localised()
    if here is not None:
        kept |= {of.letter + ("" if of.index is None else f"_{of.index}") + "'" * of.primes for of in here.classes}
    return kept


def decide(left: Sum, right: Sum, known: Known, values: Mapping[str, int] | None = None, why: bool = False) -> Decision:
    """Whether a closed relation holds; `values` are numbers for its symbols.

    Where the draft does not say whether Q_0 or Q_1 is Sq^1, only what both conventions agree on is believed.
    """
    letter = family_of(left, right, known)
    if letter and not has_space(known):
        return _of_bundles(left, right, known, values, why, letter)
    return _with_definitions(left, right, known, values, why)


def _of_bundles(
    left: Sum, right: Sum, known: Known, values: Mapping[str, int] | None, why: bool, letter: str
) -> Decision:
    """A relation between characteristic classes: true for all bundles, or for those that the draft speaks of."""
    left, right = undualised(left), undualised(right)
    said = said_space(known, letter)
    kinds = (said,) if said else KINDS[letter]
    answers = [_with_definitions(left, right, in_space(known, letter, space), values, why) for space in kinds]
    if said or all(answer.answer == answers[0].answer for answer in answers):
        return answers[0]
    if answers[0].answer == "true":
        return answers[0]
    return Decision("unknown", "it depends on the bundle", "whether the bundle is oriented, or spin")


def _with_definitions(left: Sum, right: Sum, known: Known, values: Mapping[str, int] | None, why: bool) -> Decision:
    own = evolve(known, rules=tuple([rule for rule in known.rules if rule.source == OF_THE_SPACE]))
    left, right = spelled_out(left, own), spelled_out(right, own)
    decision = _by_convention(left, right, known, values, why)
    whole = spelled_out(left, known), spelled_out(right, known)
    if decision.answer == "true" or whole == (left, right):
        return decision
    again = _by_convention(*whole, known, values, why)
    if again.answer in ("true", "unknown") or decision.answer == "unknown":
        return again
    if again.name == "degrees-differ" and decision.name != again.name:
        return decision  # the name stands for something else here
    return evolve(again, special=again.special or decision.special)


def _by_convention(left: Sum, right: Sum, known: Known, values: Mapping[str, int] | None, why: bool) -> Decision:
    said = known.conventions.get("Q")
    if not (has_primitive(left) or has_primitive(right)):
        return _decide(left, right, known, dict(values or {}), why, 0)
    if said is not None:
        return _decide(left, right, known, dict(values or {}), why, int(said))
    first = _decide(left, right, known, dict(values or {}), why, 0)
    second = _decide(left, right, known, dict(values or {}), why, 1)
    if first.answer == second.answer or "unknown" in (first.answer, second.answer):
        return first
    return Decision("unknown", "it depends on how the primitives are counted", "whether Q_0 or Q_1 is Sq^1")


def _decide(left: Sum, right: Sum, known: Known, numbers: dict[str, int], why: bool, first_primitive: int) -> Decision:
    prime = known.prime
    if prime is None:
        return Decision("unknown", "the prime is not known", "the prime")
    try:
        session, kept = desk(prime, known.script)
    except ValueError:
        return Decision("unknown", f"{prime} is not a prime", "the prime")
    naming = Naming(known, numbers, kept - killed(known))
    try:
        sides = [_prepared(side, known, numbers, naming, first_primitive) for side in (left, right)]
        special = _declare(session, naming, prime, numbers)
    except (Unnamed, Unfit) as missing:
        return Decision("unknown", f"{missing} is not known", str(missing))
    except WrongPage as page:
        message = f"the class transgresses by d_{page.wanted}, and d_{page.written} is written"
        return Decision("false", message, name="wrong-page")
    surfaces = [to_surface(side, numbers) for side in sides]
    if surfaces[0] is None or surfaces[1] is None:
        return Decision("unknown", "symbols stand in it")
    span = (left.at.start, right.at.end)
    statement = sf.RelationStatement((surfaces[0], surfaces[1]), span=span)
    outcome = session.answer(statement, span)
    of_class = bool(special)
    classes = frozenset(name.spelling for side in (left, right) for name in names_of(side))
    around = _circumstances(left, right, known) if classes else ""
    special, of_class = (around, False) if around else (special, of_class)
    if not special and any(_says_something(rule, known, numbers) for rule in other_rules(known, classes)):
        of_class = False
        special = "the draft has rules for its classes that are not worked in"
    return evolve(_read(outcome, session, statement, special, why), of_class=of_class)


def _says_something(rule: Rule, known: Known, numbers: dict[str, int]) -> bool:
    """Whether a rule is more than what holds for all classes anyway."""
    return _decide(rule.left, rule.right, evolve(known, rules=()), numbers, False, 0).answer != "true"


def _prepared(side: Sum, known: Known, numbers: Mapping[str, int], naming: Naming, first_primitive: int) -> Sum:
    """A side with rules and conventions worked in, and the names changed."""

    def degree(name: ClassName) -> int:
        fact = naming.fact(name)
        value = fact.degree.at(numbers) if fact.degree is not None else None
        if not isinstance(value, int):
            raise Unnamed(f"the degree of {name.spelling}")
        return value

    tree = Transgression(known, numbers, degree).worked_in(side) if known.rules else side
    return naming.renamed(conventional(tree, known, numbers, first_primitive))


def _circumstances(left: Sum, right: Sum, known: Known) -> str:
    """Why a relation of classes may be true though it is not true in general."""
    if known.space:
        return f"it is about {known.space}, where more may hold"
    if known.conventions.get("hypothesis"):
        return "it is a hypothesis"
    for side in (left, right):
        name = only_name(side)
        if name is not None and name.letter not in ("iota", "w", "c", "v", "omega"):
            return f"it may be what {name.spelling} stands for"
    return ""


def _declare(session: Desk, naming: Naming, prime: int, numbers: Mapping[str, int]) -> str:
    """Puts the classes of a statement into the scope; says why they may be more special than they look."""
    special = ""
    free = killed(naming.known)
    for (spelling, _), (letter, name) in naming.given.items():
        fact = naming.fact(name)
        assert fact.degree is not None
        degree = fact.degree.at(numbers)
        if not isinstance(degree, int):
            raise Unnamed(f"the degree of {spelling} as a number")
        if not 1 <= degree <= HIGHEST:
            raise Unnamed(f"a degree of {spelling} between 1 and {HIGHEST}")
        order = _order(fact, spelling, numbers)
        if order == 1 and name.spelling in free:
            order = KILLED
        index = int(spelling.partition("_")[2]) if spelling.partition("_")[2].isdigit() else None
        shown = spelling.rstrip("'") if index is None else name.letter
        of = Class(shown, index, name.primes, degree, order)
        session.scope.names[(letter, None, 0)] = cls(ir.Fundamental(of, degree, degree, (0, 0)), frozenset((of,)))
        special = special or _special(fact, spelling)
    return special


def _order(fact: ClassFact, spelling: str, numbers: Mapping[str, int]) -> int:
    if fact.order is not None:
        return fact.order
    if not fact.order_text:
        return 1
    value = numbers.get(fact.order_text)
    if value is None:
        raise Unnamed(f"the coefficients of {spelling}")
    return value


def _special(fact: ClassFact, spelling: str) -> str:
    if _GENERAL.match(fact.space):
        return ""
    return f"{spelling} is a class of {fact.space}, of which more may be known"


def _read(outcome: Outcome, session: Desk, statement: sf.RelationStatement, special: str, why: bool) -> Decision:
    from opslang.render.text import element_text

    name = outcome.name or ""
    if name == "degrees-differ" and any(not side.terms for side in outcome.sides):
        name = ""  # a side that comes to 0 has any degree
    if outcome.verdict == "error":
        return Decision("unknown", outcome.message or "it cannot be computed", name=name, special=special)
    texts = [element_text(side) for side in outcome.sides]
    left, right = texts if len(texts) == 2 else ("", "")
    answer: Answer = "undecided" if outcome.verdict == "undecided" else "true" if outcome.verdict == "true" else "false"
    steps: tuple[str, ...] = ()
    if why and (outcome.degree or 0) <= LONGEST:
        steps = _derivation(session, statement)
    sort = outcome.sort or ""
    return Decision(
        answer, outcome.message or "", "", left, right, name, special,
        sort=sort, degree=outcome.degree, derivation=steps,
    )  # fmt: skip


def _derivation(session: Desk, statement: sf.RelationStatement) -> tuple[str, ...]:
    from opslang.render.derivation import lines

    rows: list[str] = []
    try:
        for side in statement.sides:
            value = Lowering(session.scope, "").sum(side)
            if value.sort == "scalar":
                continue
            derivation, _ = derive_value(value, session.scope.prime)
            rows += lines(derivation)
    except Exception:  # what cannot be explained is left unexplained
        return ()
    return tuple(rows)
