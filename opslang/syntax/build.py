"""Makes surface nodes of lark's tree, from the leaves up and without recursion.

A method a rule of the grammar; spans come from the children.  Here the flat list of scripts behind a symbol is
sorted out, and closed index expressions become numbers.  Knows no sorts, degrees or primes.
Raises Refusal at a script or an index that has no meaning.
"""

from __future__ import annotations

from typing import Any

from opslang.report.diagnostic import Refusal, error
from opslang.syntax import surface as s
from opslang.syntax.build_index import IndexRules
from opslang.syntax.build_space import SpaceRules, label_of
from opslang.syntax.parts import Glue, Part, Pull, Script, Sign, Word, nodes_of, single, span_of, start
from opslang.syntax.scripts import bare, operation_indices, sorted_scripts, with_power

_OPERATIONS = (s.Operation, s.Bockstein, s.Milnor, s.Conjugate)


class Builder(IndexRules, SpaceRules):
    """Turns the tree of one statement into its surface node."""

    def __init__(self, text: str) -> None:
        super().__init__(visit_tokens=False)
        self.text = text

    def start(self, children: list[Any]) -> Any:
        return children[0]

    # --- statements ------------------------------------------------------------------------------

    def prime_statement(self, children: list[Any]) -> s.PrimeStatement:
        return s.PrimeStatement(int(children[1].value), span_of(children))

    def space_statement(self, children: list[Any]) -> s.SpaceStatement:
        return s.SpaceStatement(children[1].value, children[3], span_of(children))

    def on_statement(self, children: list[Any]) -> s.OnStatement:
        return s.OnStatement(children[1], span_of(children))

    def declare_statement(self, children: list[Any]) -> s.DeclareStatement:
        label, coefficients = children[6].value if len(children) > 6 else (None, None)
        return s.DeclareStatement(children[1].value, single(children[5]), label, coefficients, span_of(children))

    def names(self, children: list[Any]) -> Part:
        return Part(tuple(bare(name) for name in nodes_of(children)), span_of(children))

    def coefficient_part(self, children: list[Any]) -> Part:
        label = coefficients = None
        for child in nodes_of(children):
            if isinstance(child, s.Coefficients):
                coefficients = child
            else:
                label = label_of(child, self.text)
        return Part((label, coefficients), span_of(children))

    def abbreviate_statement(self, children: list[Any]) -> s.AbbreviateStatement:
        return s.AbbreviateStatement(bare(children[1]), children[3], span_of(children))

    def expression_statement(self, children: list[Any]) -> s.ExpressionStatement:
        return s.ExpressionStatement(children[0], span_of(children))

    def relation_statement(self, children: list[Any]) -> s.RelationStatement:
        return s.RelationStatement(tuple(nodes_of(children)), None, span_of(children))

    def why_statement(self, children: list[Any]) -> s.WhyStatement:
        return s.WhyStatement(children[1], span_of(children))

    def basis_statement(self, children: list[Any]) -> s.BasisStatement:
        space = children[5] if len(children) > 4 else None
        return s.BasisStatement(single(children[3]), space, span_of(children))

    def series_statement(self, children: list[Any]) -> s.SeriesStatement:
        space = children[1] if len(children) > 3 else None
        return s.SeriesStatement(space, children[-1].value, span_of(children))

    def map_statement(self, children: list[Any]) -> s.MapStatement:
        how = children[6]
        assignments = tuple([child for child in children[7:] if isinstance(child, s.Assignment)])
        number = int(children[7].value) if how.type == "PROJECTION" else 0
        word = how.type.lower()
        return s.MapStatement(children[1].value, children[3], children[5], word, assignments, number, span_of(children))

    def compose_statement(self, children: list[Any]) -> s.ComposeStatement:
        return s.ComposeStatement(children[1].value, children[3], span_of(children))

    def bundle_statement(self, children: list[Any]) -> s.BundleStatement:
        rank: s.Index | None = None
        space: s.Space | None = None
        for before, child in zip(children, children[1:]):
            if getattr(before, "type", "") == "RANK":
                rank = child.value
            elif getattr(before, "type", "") == "OVER":
                space = child
        classes = tuple([child for child in children if isinstance(child, s.Assignment)])
        return s.BundleStatement(children[1].value, rank, space, classes, span_of(children))

    def bundle_sum_statement(self, children: list[Any]) -> s.BundleSumStatement:
        return s.BundleSumStatement(children[1].value, children[3], span_of(children))

    def assignment(self, children: list[Any]) -> s.Assignment:
        return s.Assignment(children[0], children[2], span_of(children))

    total_class = assignment

    def compare_statement(self, children: list[Any]) -> s.CompareStatement:
        return s.CompareStatement(children[1], children[3], children[5].value, span_of(children))

    # --- expressions -----------------------------------------------------------------------------

    def sign(self, children: list[Any]) -> Sign:
        return Sign(-1 if children[0].type == "MINUS" else 1, span_of(children))

    def sum(self, children: list[Any]) -> s.Sum:
        terms = []
        sign = 1
        for child in children:
            if isinstance(child, Sign):
                sign = child.value
            else:
                terms.append((sign, child))
        return s.Sum(tuple(terms), span_of(children))

    def glue(self, children: list[Any]) -> Glue:
        return Glue(children[0].value, span_of(children))

    def product(self, children: list[Any]) -> s.Product:
        factors: list[s.Factor] = []
        glues: list[str] = []
        glue = ""
        at = 0
        while at < len(children):
            child = children[at]
            at += 1
            if isinstance(child, Glue):
                glue = child.value
                continue
            if isinstance(child, Pull):
                child, at = _pulled(child, children, at)
            factors.append(child)
            glues.append(glue)
            glue = ""
        return s.Product(tuple(factors), tuple(glues), span_of(children))

    def operation(self, children: list[Any]) -> s.Operation:
        head, *scripts = children
        return s.Operation(head.value, operation_indices(head, scripts, self.text), span_of(children))

    def bockstein(self, children: list[Any]) -> s.Bockstein | s.Power:
        scripts = sorted_scripts(children[0], children[1:], self.text, "lower power")
        return with_power(s.Bockstein(scripts.index, (start(children[0]), scripts.end)), scripts)

    def milnor(self, children: list[Any]) -> s.Milnor | s.Power:
        scripts = sorted_scripts(children[0], children[1:], self.text, "lower power")
        if scripts.index is None:
            raise _lacking("Q", "Q_1", children)
        return with_power(s.Milnor(scripts.index, (start(children[0]), scripts.end)), scripts)

    def fundamental(self, children: list[Any]) -> s.Fundamental | s.Power:
        scripts = sorted_scripts(children[0], children[1:], self.text, "lower power prime")
        if scripts.index is None:
            raise _lacking("iota", "iota_3", children)
        base = s.Fundamental(scripts.index, scripts.primes, (start(children[0]), scripts.end))
        return with_power(base, scripts)

    def name(self, children: list[Any]) -> s.Name | s.Power | Pull:
        letter = children[0]
        scripts = sorted_scripts(letter, children[1:], self.text, "lower power prime pull_back")
        base = s.Name(letter.value, scripts.index, scripts.primes, (letter.span[0], scripts.end))
        if scripts.pull is None:
            return with_power(base, scripts)
        if scripts.power is not None or not isinstance(scripts.index, (int, type(None))):
            raise Refusal(error("misplaced-script", "a map is a letter, with a number for an index", base.span))
        word = Word(letter.value, scripts.index, scripts.primes, base.span)
        return Pull(word.value, span_of(children))

    def number(self, children: list[Any]) -> s.Number | s.Power:
        scripts = sorted_scripts(children[0], children[1:], self.text, "power")
        return with_power(s.Number(int(children[0].value), span_of(children[:1])), scripts)

    def group(self, children: list[Any]) -> s.Group | s.Power:
        scripts = sorted_scripts(children[0], children[3:], self.text, "power")
        return with_power(s.Group(children[1], span_of(children[:3])), scripts)

    def conjugate(self, children: list[Any]) -> s.Conjugate | s.Power:
        scripts = sorted_scripts(children[0], children[4:], self.text, "power")
        return with_power(s.Conjugate(children[2], span_of(children[:4])), scripts)

    def construction(self, children: list[Any]) -> s.Construction | s.Power:
        scripts = sorted_scripts(children[0], children[4:], self.text, "power")
        return with_power(s.Construction(children[0].value, children[2], span_of(children[:4])), scripts)

    def letter(self, children: list[Any]) -> Part:
        return Part(children[0].value, span_of(children))

    def power(self, children: list[Any]) -> Script:
        return Script("power", children[1].value, span_of(children))

    def lower(self, children: list[Any]) -> Script:
        return Script("lower", children[1].value, span_of(children))

    def prime(self, children: list[Any]) -> Script:
        return Script("prime", (1,) * len(children[0].value), span_of(children))

    def pull_back(self, children: list[Any]) -> Script:
        return Script("pull_back", (), span_of(children))


def _lacking(symbol: str, example: str, children: list[Any]) -> Refusal:
    return Refusal(error("missing-index", f"{symbol} needs an index, as in {example}", span_of(children)))


def _pulled(pull: Pull, children: list[Any], at: int) -> tuple[s.PullBack, int]:
    """`f^*` takes the operations at its right and the one class behind them."""
    taken: list[s.Factor] = []
    while at < len(children) and not isinstance(children[at], (Glue, Pull)):
        taken.append(children[at])
        at += 1
        if not isinstance(taken[-1], _OPERATIONS):
            break
    if not taken or isinstance(taken[-1], _OPERATIONS):
        help = f"write {pull.name}^*(…) with the class in the brackets"
        raise Refusal(error("expected", f"expected a class after {pull.name}^*", pull.span, help))
    if len(taken) == 1 and isinstance(taken[0], s.Group):
        body = taken[0].body
    else:
        inner = span_of(list(taken))
        body = s.Sum(((1, s.Product(tuple(taken), ("",) * len(taken), inner)),), inner)
    return s.PullBack(pull.name, body, (pull.span[0], taken[-1].span[1])), at
