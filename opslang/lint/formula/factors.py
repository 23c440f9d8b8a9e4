"""Single factors: operations, classes, brackets, coefficients, maps.  Knows how they are written, not what they are."""

from __future__ import annotations

from collections.abc import Callable

from opslang.lint.formula.indices import GREEK, chosen, index_of, read_indices, read_length
from opslang.lint.formula.signs import ACCENTS, CHARACTERISTIC, DIFFERENTIAL, GROUPS, SUMS
from opslang.lint.formula.stretch import NotRead, Stretch, shown
from opslang.lint.model import Call, ClassName, Coefficient, Conjugate, Factor, Group, Index, Operation, Origin, Sum

SPACE_LETTERS = frozenset("H K B M N E".split())


def starts_factor(stretch: Stretch) -> bool:
    """Whether a factor can begin at the next token."""
    token = stretch.tokens[stretch.at]
    if token.kind in ("letter", "digit", "open", "word"):
        return True
    if token.kind not in ("command", "other"):
        return False
    text = token.text
    return text in GREEK or text in FACTORS or text in SUMS or text in ("\\ldots", "\\cdots", "\\dots", "…", "⋯")


# --- operations ---------------------------------------------------------------------------------


def operation(stretch: Stretch, head: str, start: int) -> Operation:
    """What stands above and below the head of an operation."""
    upper: tuple[Index, ...] = ()
    lower: Index | None = None
    bound, tensor = "", False
    while (token := stretch.peek()) is not None and token.kind in ("sup", "sub"):
        if token.kind == "sup":
            if upper:
                break
            stretch.at += 1
            upper, bound, tensor = _above(stretch.argument())
        else:
            if lower is not None:
                break
            stretch.at += 1
            below = stretch.argument()
            if below.sees("<", ">", "\\leq", "\\geq"):
                bound = below.tokens[below.at].text
                below.at += 1
            indices = read_indices(Stretch(below.tokens, below.pairs, below.at, below.end))
            lower = indices[0] if len(indices) == 1 else Index("call", ("pair", *indices), below.whole())
    return Operation(head, upper, lower, bound, tensor, stretch.origin(start))


def _above(inner: Stretch) -> tuple[tuple[Index, ...], str, bool]:
    bound, tensor = "", False
    if inner.done:
        return (), "", False
    if inner.takes("\\otimes", "⊗"):
        tensor = True
    for sign in (">", "<", "\\geq", "\\leq"):
        if inner.takes(sign):
            bound = {"\\geq": "≥", "\\leq": "≤"}.get(sign, sign)
    if inner.sees("(") and inner.pairs.get(inner.at) == inner.end - 1:
        inner = inner.enclosed()
    return read_indices(inner), bound, tensor


def word_factor(stretch: Stretch) -> Factor:
    """A name in upright letters."""
    start = stretch.at
    text = stretch.tokens[start].text
    if text in ("Sq", "SQ"):
        stretch.at += 1
        return operation(stretch, "Sq", start)
    if text in ("deg", "dim"):
        return Coefficient(read_length(stretch), stretch.origin(start))
    raise NotRead(f"the word {text}", stretch.origin(start, start + 1))


# --- letters ------------------------------------------------------------------------------------


def letter_factor(stretch: Stretch) -> Factor:
    """A letter: the head of an operation, a class, or a map."""
    start = stretch.at
    token = stretch.tokens[start]
    text, style = token.text, token.style
    after = stretch.peek(1)
    if text == "S" and after is not None and after.text == "q" and after.kind == "letter":
        stretch.at += 2
        return operation(stretch, "Sq", start)
    if style in GROUPS or text in ("\\Delta", "\\Lambda"):
        raise NotRead("a group or a space among the factors", stretch.origin(start, start + 1))
    if text == "P" and after is not None and (after.kind == "sup" or (style and after.kind != "sub")):
        stretch.at += 1
        return operation(stretch, "P", start)
    if text in ("\\beta", "β"):
        stretch.at += 1
        return operation(stretch, "beta", start)
    if text == "Q" and after is not None and after.kind == "sub":
        stretch.at += 1
        return operation(stretch, "Q", start)
    if text == "C" and not style and after is not None and after.kind in ("sub", "sup"):
        binomial = _subsets(stretch)
        if binomial is not None:
            return binomial
    if text in ("\\chi", "χ") and after is not None and after.text not in (")", "]", ",", "="):
        return _conjugate(stretch)
    stretch.at += 1
    name = text.lstrip("\\") if not style or style in ("it", "rm", "bf", "sf") else f"{style}:{text}"
    return named(stretch, name, start)


def _subsets(stretch: Stretch) -> Factor | None:
    """C_n^k, the number of k-subsets of n things."""
    start = stretch.at
    trial = Stretch(stretch.tokens, stretch.pairs, start + 1, stretch.end)
    scripts: dict[str, Index] = {}
    while (token := trial.peek()) is not None and token.kind in ("sub", "sup") and token.kind not in scripts:
        trial.at += 1
        try:
            scripts[token.kind] = index_of(trial.argument())
        except NotRead:
            return None
    if len(scripts) != 2:
        return None
    stretch.at = trial.at
    at = stretch.origin(start)
    return Coefficient(Index("binom", (scripts["sub"], scripts["sup"]), at), at)


def _conjugate(stretch: Stretch) -> Factor:
    from opslang.lint.formula.expression import read_factor, sum_of
    from opslang.lint.model import Product

    start = stretch.at
    stretch.at += 1
    if stretch.sees("(", "["):
        return Conjugate(sum_of(stretch.enclosed()), stretch.origin(start))
    if stretch.done or not starts_factor(stretch) or stretch.sees("\\chi", "χ"):
        return ClassName("chi", at=stretch.origin(start))
    factor = read_factor(stretch)
    if not isinstance(factor, Operation):
        raise NotRead("chi is followed by something that is no operation", stretch.origin(start))
    return Conjugate(Sum(((1, Product((factor,), ("",), factor.at)),), factor.at), stretch.origin(start))


def named(stretch: Stretch, name: str, start: int) -> Factor:
    """A letter with what stands below it, its primes, and what may follow: a class, a family's member or a map."""
    index: tuple[Index, ...] = ()
    label, primes, star = "", 0, ""
    while (token := stretch.peek()) is not None and token.kind in ("sub", "prime", "sup"):
        if token.kind == "prime":
            stretch.at += 1
            primes += 1
        elif token.kind == "sub":
            if index:
                raise NotRead("two indices", stretch.origin(start))
            stretch.at += 1
            index = _class_index(stretch.argument())
        else:
            inner = Stretch(stretch.tokens, stretch.pairs, stretch.at + 1, stretch.end).argument()
            if inner.sees("*", "\\sharp", "\\#", "\\bullet"):
                star = "*"
            elif _is_label(inner) and (name == "iota" or index):
                label = shown(inner.rest())
            else:
                break
            stretch.at += 1
            stretch.argument()
    if star or _is_map(stretch, name, index):
        return _map(stretch, name, index, star, start)
    family = _family(stretch, name, index)
    if not family and stretch.sees("(") and name not in SPACE_LETTERS and _function_call(stretch):
        return _map(stretch, name, index, "", start)
    return ClassName(name, index, primes, label, family, stretch.origin(start))


def _class_index(inner: Stretch) -> tuple[Index, ...]:
    if inner.done:
        return ()
    if inner.sees("*", "\\bullet"):
        raise NotRead("a lower star", inner.whole())
    try:
        return read_indices(Stretch(inner.tokens, inner.pairs, inner.at, inner.end))
    except NotRead:
        return (Index("name", (shown(inner.rest()),), inner.whole()),)


def _is_label(inner: Stretch) -> bool:
    """Whether what stands above a letter names a group or the like, and is no power."""
    return any(
        token.style in ("bb", "frak") or token.kind == "text" or token.text in ("(", "[") for token in inner.rest()
    )


def _is_map(stretch: Stretch, name: str, index: tuple[Index, ...]) -> bool:
    if "\\" + name not in DIFFERENTIAL and name not in DIFFERENTIAL:
        return False
    return not stretch.done and starts_factor(stretch)


def _map(stretch: Stretch, name: str, index: tuple[Index, ...], star: str, start: int) -> Factor:
    """A map with its argument: the bracket, or the rest of the run of operations up to the class they act on."""
    from opslang.lint.formula.expression import sum_of
    from opslang.lint.model import spelled

    below = ",".join(spelled(part) for part in index)
    spelling = name + (f"_{below}" if below else "") + ("^*" if star else "")
    if stretch.sees("(", "["):
        inner = stretch.enclosed()
        arguments = _arguments(inner)
        return Call(spelling, name, arguments, index, star, stretch.origin(start))
    if stretch.done or not starts_factor(stretch):
        return Call(spelling, name, (), index, star, stretch.origin(start))
    mark = stretch.at
    inner = Stretch(stretch.tokens, stretch.pairs, mark, _argument_end(stretch))
    body = sum_of(inner)
    stretch.at = inner.end
    return Call(spelling, name, (body,), index, star, stretch.origin(start))


def _argument_end(stretch: Stretch) -> int:
    """Where the argument of a map without brackets ends: after the first class, operations before it included."""
    from opslang.lint.formula.expression import read_factor

    trial = Stretch(stretch.tokens, stretch.pairs, stretch.at, stretch.end)
    while not trial.done and (starts_factor(trial) or trial.takes("\\circ")):
        factor = read_factor(trial)
        if not isinstance(factor, (Operation, Conjugate)):
            break
    return trial.at


def _arguments(inner: Stretch) -> tuple[Sum, ...]:
    from opslang.lint.formula.expression import read_sum

    found = [read_sum(inner)]
    while inner.takes(","):
        found.append(read_sum(inner))
    if not inner.done:
        raise NotRead("arguments that were not understood", inner.whole())
    return tuple(found)


def _family(stretch: Stretch, name: str, index: tuple[Index, ...]) -> str:
    """The bundle in w_i(E): a bracket with letters for bundles and spaces."""
    if name not in CHARACTERISTIC or not stretch.sees("("):
        return ""
    close = stretch.pairs.get(stretch.at)
    if close is None:
        return ""
    inside = stretch.tokens[stretch.at + 1 : close]
    if not inside or any(
        token.kind in ("digit",) or token.text in ("+", "=", ",", "\\cdot")
        for token in inside
        if token.text != "\\oplus"
    ):
        return ""
    if not any(
        token.text.isupper()
        or token.text in ("\\xi", "\\eta", "\\tau", "\\nu", "\\gamma", "\\lambda", "\\zeta")
        or token.style
        for token in inside
    ):
        return ""
    stretch.at = close + 1
    return shown(inside)


def _function_call(stretch: Stretch) -> bool:
    """Whether the bracket after a letter holds arguments with commas, or a single number: e(5, 2), f(3)."""
    close = stretch.pairs.get(stretch.at)
    if close is None:
        return False
    return _has_comma(Stretch(stretch.tokens, stretch.pairs, stretch.at + 1, close))


# --- brackets and coefficients ------------------------------------------------------------------


def _group(stretch: Stretch) -> Factor:
    from opslang.lint.formula.expression import sum_of

    start = stretch.at
    shape = stretch.tokens[start].text
    inner = stretch.enclosed()
    if shape == "[" and _has_comma(inner):
        return Call("[,]", "[,]", _arguments(inner), (), "", stretch.origin(start))
    only = inner.tokens[inner.at] if inner.at < inner.end else None
    if only is not None and only.kind == "open" and inner.pairs.get(inner.at) == inner.end - 1:
        value = chosen(Stretch(inner.tokens, inner.pairs, inner.at + 1, inner.end - 1), stretch, start)
        if value is not None:
            return Coefficient(value, stretch.origin(start))
    return Group(sum_of(inner), shape, stretch.origin(start))


def _has_comma(inner: Stretch) -> bool:
    at = inner.at
    while at < inner.end:
        if inner.tokens[at].text == ",":
            return True
        at = inner.pairs.get(at, at) + 1
    return False


def _pairing(stretch: Stretch) -> Factor:
    start = stretch.at
    arguments = _arguments(stretch.enclosed())
    return Call("pairing", "pairing", arguments, (), "", stretch.origin(start))


def _braces(stretch: Stretch) -> Factor:
    from opslang.lint.formula.expression import sum_of

    start = stretch.at
    inner = stretch.enclosed()
    value = chosen(inner, stretch, start)
    if value is not None:
        return Coefficient(value, stretch.origin(start))
    if inner.done:
        raise NotRead("empty braces", stretch.origin(start))
    body = sum_of(inner)
    if len(body.terms) == 1 and body.terms[0][0] > 0 and len(body.terms[0][1].factors) == 1:
        return body.terms[0][1].factors[0]
    return Group(body, "{", stretch.origin(start))


def _coefficient(stretch: Stretch) -> Factor:
    start = stretch.at
    kind = "binom" if stretch.tokens[start].text == "\\binom" else "quotient"
    stretch.at += 1
    above, below = index_of(stretch.argument()), index_of(stretch.argument())
    at = stretch.origin(start)
    return Coefficient(Index(kind, (above, below), at), at)


def _length(stretch: Stretch) -> Factor:
    start = stretch.at
    value = read_length(stretch)
    return Coefficient(value, stretch.origin(start))


def _accent(stretch: Stretch) -> Factor:
    start = stretch.at
    accent = ACCENTS[stretch.tokens[start].text]
    stretch.at += 1
    inner = stretch.argument()
    letters = inner.rest()
    if len(letters) == 1 and (letters[0].kind == "letter" or letters[0].text in GREEK):
        return named(stretch, f"{accent} {letters[0].text.lstrip(chr(92))}", start)
    mark = inner.at
    factor = letter_factor(inner) if letters and letters[0].kind == "letter" else None
    if isinstance(factor, ClassName) and inner.done:
        return ClassName(
            f"{accent} {factor.letter}", factor.index, factor.primes, factor.label, "", stretch.origin(start)
        )
    raise NotRead("an accent over several signs", Origin(*stretch.origin(mark)))


FACTORS: dict[str, Callable[[Stretch], Factor]] = {
    "(": _group,
    "[": _group,
    "\\langle": _pairing,
    "{": _braces,
    "\\binom": _coefficient,
    "\\frac": _coefficient,
    "|": _length,
    "\\lvert": _length,
    "\\deg": _length,
    **dict.fromkeys(ACCENTS, _accent),
}
"""Readers of factors by their first sign."""
