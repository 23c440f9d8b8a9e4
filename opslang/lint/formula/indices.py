"""Integer expressions over tokens: what stands above and below, in limits and in comparisons.

Knows the shapes of integers; a letter here is a number and nothing else.
"""

from __future__ import annotations

from opslang.lint.formula.stretch import NotRead, Stretch, shown
from opslang.lint.model import Index

DOTS = frozenset(("\\ldots", "\\cdots", "\\dots", "\\vdots", "…", "⋯", "\\dotsm", "\\dotsb"))
FUNCTIONS = frozenset("e \\alpha \\nu \\mu \\operatorname".split())
WORDS_OF_DEGREE = frozenset(("\\deg", "deg", "\\dim", "dim"))
NOT_LETTERS = frozenset(
    "\\infty \\colon \\lfloor \\rfloor \\lceil \\rceil \\binom \\frac \\deg \\dim \\min \\max".split()
)
GREEK = frozenset(
    "\\" + name
    for name in (
        "alpha beta gamma delta epsilon varepsilon zeta eta theta vartheta iota kappa lambda mu nu xi pi varpi rho "
        "varrho sigma varsigma tau upsilon phi varphi chi psi omega Gamma Delta Theta Lambda Xi Pi Sigma Upsilon Phi "
        "Psi Omega ell"
    ).split()
)
ENDS_LENGTH = frozenset(("|", "\\|"))


def read_indices(stretch: Stretch) -> tuple[Index, ...]:
    """Integer expressions with commas between them, to the end of the stretch."""
    found = [read_index(stretch)]
    while stretch.takes(",", ";"):
        if stretch.done:
            break
        found.append(read_index(stretch))
    if not stretch.done:
        raise NotRead("an index that was not understood", stretch.whole())
    return tuple(found)


def index_of(stretch: Stretch) -> Index:
    """One integer expression that fills the stretch."""
    found = read_index(stretch)
    if not stretch.done:
        raise NotRead("an index that was not understood", stretch.whole())
    return found


def read_index(stretch: Stretch) -> Index:
    """A sum of integers."""
    start = stretch.at
    parts: list[Index] = []
    sign = 1
    if stretch.takes("-", "−"):
        sign = -1
    else:
        stretch.takes("+")
    while True:
        part = _product(stretch)
        parts.append(part if sign > 0 else Index("negative", (part,), part.at))
        if stretch.takes("+"):
            sign = 1
        elif stretch.takes("-", "−"):
            sign = -1
        else:
            break
    return parts[0] if len(parts) == 1 else Index("sum", tuple(parts), stretch.origin(start))


def _product(stretch: Stretch) -> Index:
    start = stretch.at
    parts = [_power(stretch)]
    while not stretch.done:
        if stretch.takes("/"):
            below = _power(stretch)
            above = parts[0] if len(parts) == 1 else Index("product", tuple(parts), stretch.origin(start))
            parts = [Index("quotient", (above, below), stretch.origin(start))]
        elif stretch.takes("\\cdot", "*", "\\times"):
            parts.append(_power(stretch))
        elif _starts(stretch):
            parts.append(_power(stretch))
        else:
            break
    return parts[0] if len(parts) == 1 else Index("product", tuple(parts), stretch.origin(start))


def _starts(stretch: Stretch) -> bool:
    """Whether an integer can begin at the next token."""
    token = stretch.peek()
    if token is None:
        return False
    if token.kind in ("letter", "digit", "open"):
        return True
    if token.kind == "word":
        return token.text in WORDS_OF_DEGREE
    if token.text == "|":  # |a||b|: another pair of bars
        return any(later.text == "|" for later in stretch.tokens[stretch.at + 1 : stretch.end])
    return token.text in GREEK or token.text in (
        "(", "\\lfloor", "\\lceil", "\\binom", "\\frac", "\\lvert", "\\deg", "\\dim", "\\infty",
    )  # fmt: skip


def _power(stretch: Stretch) -> Index:
    start = stretch.at
    atom = _atom(stretch)
    while True:
        token = stretch.peek()
        if token is not None and token.kind == "sup":
            stretch.at += 1
            atom = Index("power", (atom, index_of(stretch.argument())), stretch.origin(start))
        elif token is not None and token.text == "!" and token.kind == "other":
            stretch.at += 1
            atom = Index("call", ("factorial", atom), stretch.origin(start))
        else:
            return atom


def _atom(stretch: Stretch) -> Index:
    token = stretch.peek()
    start = stretch.at
    if token is None:
        raise NotRead("an integer is missing", stretch.origin(stretch.at - 1, stretch.at))
    if token.kind == "digit":
        digits = ""
        while (token := stretch.peek()) is not None and token.kind == "digit":
            digits += token.text
            stretch.at += 1
        return Index("number", (int(digits),), stretch.origin(start))
    if token.kind == "letter" or token.text in GREEK:
        return _name(stretch)
    if token.kind == "open":
        inner = stretch.enclosed()
        return chosen(inner, stretch, start) or index_of(inner)
    if token.text == "(":
        inner = stretch.enclosed()
        atop = inner.tokens[inner.at] if inner.at < inner.end else None
        if atop is not None and atop.kind == "open" and inner.pairs.get(inner.at) == inner.end - 1:
            found = chosen(Stretch(inner.tokens, inner.pairs, inner.at + 1, inner.end - 1), stretch, start)
            if found is not None:
                return found
        return index_of(inner)
    return _special(stretch, start, token.text)


def _special(stretch: Stretch, start: int, text: str) -> Index:
    if text in ("\\lfloor", "\\lceil", "["):
        inner = index_of(stretch.enclosed())
        return Index("ceiling" if text == "\\lceil" else "floor", (inner,), stretch.origin(start))
    if text in DOTS:
        stretch.at += 1
        return Index("dots", (), stretch.origin(start))
    if text == "\\infty":
        stretch.at += 1
        return Index("name", ("infinity",), stretch.origin(start))
    if text in ("\\binom", "\\frac"):
        stretch.at += 1
        above, below = index_of(stretch.argument()), index_of(stretch.argument())
        return Index("binom" if text == "\\binom" else "quotient", (above, below), stretch.origin(start))
    if text in ("|", "\\lvert", "\\|") or text in WORDS_OF_DEGREE:
        return read_length(stretch)
    raise NotRead(f"{text} in an integer expression", stretch.origin(start, start + 1))


def _name(stretch: Stretch) -> Index:
    """A letter with what stands below it."""
    start = stretch.at
    token = stretch.tokens[start]
    stretch.at += 1
    name = token.text.lstrip("\\") if token.text != "\\ell" else "ell"
    while (after := stretch.peek()) is not None and after.kind in ("sub", "prime"):
        stretch.at += 1
        if after.kind == "prime":
            name += "'"
        else:
            name += "_" + _below(stretch.argument())
    if token.text in FUNCTIONS and stretch.sees("("):
        arguments = read_indices(stretch.enclosed())
        return Index("call", (name, *arguments), stretch.origin(start))
    return Index("name", (name,), stretch.origin(start))


def _below(stretch: Stretch) -> str:
    from opslang.lint.model import spelled

    mark = stretch.at
    try:
        return ",".join(spelled(index) for index in read_indices(stretch))
    except NotRead:
        return shown(stretch.tokens[mark : stretch.end])


def read_length(stretch: Stretch) -> Index:
    """|x|, \\lvert x \\rvert, \\deg x: the degree of a class, an operation or a multi-index."""
    start = stretch.at
    token = stretch.tokens[start]
    if token.text == "\\lvert":
        inner = stretch.enclosed()
    elif token.text in ("|", "\\|"):
        close = start + 1
        while close < stretch.end and stretch.tokens[close].text not in ENDS_LENGTH:
            close = stretch.pairs.get(close, close) + 1
        if close >= stretch.end:
            raise NotRead("a bar without its partner", stretch.origin(start, start + 1))
        inner = Stretch(stretch.tokens, stretch.pairs, start + 1, close)
        stretch.at = close + 1
    else:
        stretch.at += 1
        return _degree_word(stretch, start, token.text)
    return Index("length", (_measured(inner),), stretch.origin(start))


def _degree_word(stretch: Stretch, start: int, word: str) -> Index:
    from opslang.lint.formula.expression import read_factor

    if word.endswith("dim"):
        raise NotRead("a dimension", stretch.origin(start))
    if stretch.sees("("):
        return Index("length", (_measured(stretch.enclosed()),), stretch.origin(start))
    factor = read_factor(stretch)
    from opslang.lint.model import Product, Sum

    body = Sum(((1, Product((factor,), ("",), factor.at)),), factor.at)
    return Index("length", (body,), stretch.origin(start))


def _measured(inner: Stretch) -> object:
    """What stands between bars: a multi-index, or an expression of classes and operations."""
    from opslang.lint.formula.expression import sum_of

    only = inner.tokens[inner.at] if inner.end == inner.at + 1 else None
    if only is not None and only.kind == "letter" and only.text in "IJKLRS" and not only.style:
        return index_of(inner)
    if inner.done:
        raise NotRead("nothing between bars", inner.whole())
    return sum_of(inner)


def chosen(inner: Stretch, outer: Stretch, start: int) -> Index | None:
    """{n \\choose k} or {n \\atop k}; None where the group is neither."""
    at = inner.at
    while at < inner.end:
        token = inner.tokens[at]
        if token.kind == "command" and token.text in ("\\choose", "\\atop"):
            above = index_of(Stretch(inner.tokens, inner.pairs, inner.at, at))
            below = index_of(Stretch(inner.tokens, inner.pairs, at + 1, inner.end))
            return Index("binom", (above, below), outer.origin(start))
        at = inner.pairs.get(at, at) + 1
    return None
