"""The usual slips, found before the grammar is asked, each with its likely mend.

Knows tokens and how people misspell them.  What it does not find is left to `expected.py`.
"""

from __future__ import annotations

from collections.abc import Callable
from itertools import islice

from opslang.report.diagnostic import Diagnostic, error
from opslang.syntax.shapes import Token, shown
from opslang.syntax.spelling import MANY, Reading
from opslang.syntax.spellings import KEYWORDS, RESERVED, STATEMENT_WORDS
from opslang.syntax.words import LONGEST_SPLIT, SPACES, is_word, meant, nearly, said

_TAKEN = frozenset(kind for kind, _ in RESERVED.values())
_LETTERS = frozenset(("NAME", "LETTER_Z", "LETTER_F", "LETTER_H", "LETTER_K", "LETTER_X"))
_SPATIAL = frozenset(("PRIME_WORD", "SPACE_WORD", "ON", "BASIS", "SERIES", "MAP", "BUNDLE", "COMPARE"))
_JOINING = frozenset(("PLUS", "MINUS", "STAR", "CUP", "CROSS", "TIMES", "COMPOSE", "OPLUS", "EQUALS"))
_PROJECTIVE = frozenset(("RP", "CP", "HP"))
INDEX_LIMIT = 2_000
"""How many symbols one index may be made of."""


def mistakes(reading: Reading) -> list[Diagnostic]:
    """The slips of one statement, from left to right, a handful at most."""
    tokens = reading.tokens
    first = _several(reading) or _first_word(reading)
    if first is not None:
        return [first]
    indices = index_positions(tokens)
    long = _long_index(tokens, indices)
    if long is not None:
        return [long]
    spaces = _spaces_among(tokens)
    found: list[Diagnostic] = []
    for at, token in enumerate(tokens):
        check = (_AMONG_SPACES if at in spaces else _CHECKS).get(token.kind)
        if check is None or (indices[at] and token.kind not in ("RUN", "COMMA")):
            continue
        slip = check(reading, at)
        if slip is not None:
            found.append(slip)
            if len(found) == MANY or (token.kind == "RUN" and token.value in STATEMENT_WORDS):
                break  # behind a keyword another statement is meant
    return found


def _several(reading: Reading) -> Diagnostic | None:
    """A display whose rows are statements of their own: no operator stands at the end of one or begins the next."""
    tokens = reading.tokens
    for at in reading.rows:
        if 0 < at < len(tokens) and tokens[at - 1].kind not in _JOINING and tokens[at].kind not in _JOINING | {"MOD"}:
            message = "another statement begins here, and a display holds one"
            span = (tokens[at].start, max(tokens[at].end, tokens[at].start + 1))
            return error("several-statements", message, span, "write one statement a line")
    return None


def _spaces_among(tokens: list[Token]) -> range:
    """The places at which names are names of spaces."""
    end = len(tokens)
    if tokens[0].kind in ("MAP", "BUNDLE"):
        return range(next((at for at, token in enumerate(tokens) if token.kind in ("WITH", "EQUALS")), end))
    if tokens[0].kind == "SPACE_WORD":
        return range(next((at for at, token in enumerate(tokens) if token.kind == "LSQUARE"), end))
    if tokens[0].kind in _SPATIAL:
        return range(end)
    if tokens[0].kind == "LET":
        return range(next((at for at, token in enumerate(tokens) if token.kind == "IN"), end), end)
    return range(0)


def index_positions(tokens: list[Token]) -> list[bool]:
    """For every token whether it stands in an index position."""
    marks: list[bool] = []
    depth = 0
    opened: list[bool] = []
    previous = ""
    for token in tokens:
        raised = previous in ("CARET", "UNDER", "BINOM") or (previous == "MINUS" and marks[-1] and not depth)
        marks.append(raised or depth > 0)
        if token.kind in ("LBRACE", "LPAR", "LSQUARE"):
            opened.append(marks[-1] or token.kind == "LBRACE")
            depth += opened[-1]
        elif token.kind in ("RBRACE", "RPAR", "RSQUARE") and opened:
            depth -= opened.pop()
        previous = token.kind
    return marks


def _long_index(tokens: list[Token], indices: list[bool]) -> Diagnostic | None:
    """An index with more symbols than anybody reads."""
    length = 0
    for at, inside in enumerate(indices):
        length = length + 1 if inside else 0
        if length > INDEX_LIMIT:
            first = tokens[at - INDEX_LIMIT]
            message = f"this index is made of more than {INDEX_LIMIT:,} symbols"
            return error("number-too-large", message, (first.start, max(first.end, first.start + 1)))
    return None


_NO_STATEMENT = "a space is no statement: `on` chooses one"


def _first_run(reading: Reading, first: Token, follows: str) -> Diagnostic | None:
    """A misspelt keyword, a space, or a word of no meaning at the beginning."""
    word, span = first.value, (first.start, first.end)
    for keyword in sorted(STATEMENT_WORDS):
        if nearly(word, keyword) and follows not in ("EQUALS", "PLUS", "CARET", "UNDER"):
            help = f"write `{keyword}`" if keyword in KEYWORDS else f"`{keyword}` belongs to the language"
            return error("unknown-statement", f"no statement begins with `{shown(word)}`", span, help, keyword)
    if word in SPACES:
        return error("unknown-statement", _NO_STATEMENT, span, f"write on {word}", f"on {word}")
    if reading.text[first.start] != "\\" and len(word) <= LONGEST_SPLIT and is_word(word):
        message, help = said(word, True)
        return error("unknown-statement", message, span, help)
    return None


def _first_word(reading: Reading) -> Diagnostic | None:
    """A misspelt keyword, or `in` with no `let` before it."""
    first, *others = reading.tokens
    if first.kind == "RUN":
        wrong = _first_run(reading, first, others[0].kind if others else "")
        if wrong is not None:
            return wrong
    if first.kind == "LETTER_K" and others and others[0].kind == "LPAR" and len(others) > 3:
        if others[1].kind == "LETTER_Z" and others[2].kind in ("SLASH", "COMMA", "UNDER", "PLUS"):
            return error("unknown-statement", _NO_STATEMENT, (first.start, first.end), "write on K(…)", "on K")
    if first.kind in _LETTERS | {"RUN"} and any(token.kind == "IN" for token in islice(others, 40)):
        mend = "let " + reading.text[first.start : first.end]
        message = "a class is declared by a statement that begins with `let`"
        return error("unknown-statement", message, (first.start, first.end), f"write {mend} …", mend)
    return None


# --- among operations and classes ----------------------------------------------------------------


def _next(reading: Reading, at: int) -> Token | None:
    return reading.tokens[at + 1] if at + 1 < len(reading.tokens) else None


def _written(reading: Reading, token: Token) -> str:
    return reading.text[token.start : token.end]


def _braced(reading: Reading, number: str) -> str:
    return f"{{{number}}}" if reading.tex and len(number) > 1 else number


def _index_place(reading: Reading, token: Token, other: Token, sign: str, end: int, index: str) -> Diagnostic:
    mend = f"{_written(reading, token)}{sign}{_braced(reading, index)}"
    message = f"the index of {token.value} stands {'above, behind ^' if sign == '^' else 'below, behind _'}"
    return error("index-place", message, (token.start, end), f"write {mend}", mend)


def _run(reading: Reading, at: int) -> Diagnostic | None:
    token = reading.tokens[at]
    span = (token.start, token.end)
    if reading.text[token.start] == "\\":
        return error("run-of-letters", f"the word {shown(token.value)} has no meaning in a formula", span)
    likely = None if len(token.value) > LONGEST_SPLIT else meant(token.value)
    if likely is not None:
        message = f"{shown(token.value)} is no name: names are single letters and spelled Greek letters"
        return error("run-of-letters", message, span, f"write {likely}", likely)
    message, help = said(shown(token.value), False)
    return error("run-of-letters", message, span, help)


def _square(reading: Reading, at: int) -> Diagnostic | None:
    """`Sq 4`, `Sq4` and `Sq_4`; `P` likewise."""
    token, other = reading.tokens[at], _next(reading, at)
    if other is None:
        return None
    if other.kind == "NUMBER":
        return _index_place(reading, token, other, "^", other.end, other.value)
    if other.kind == "UNDER":
        return _lowered(reading, at)
    return None


def _lowered(reading: Reading, at: int) -> Diagnostic:
    """`Sq_4`, `Sq_{12}`, `Sq₄`: an index that stands below instead of above."""
    token, under = reading.tokens[at : at + 2]
    message = f"the index of {token.value} stands above, behind ^"
    first = reading.tokens[at + 2] if at + 2 < len(reading.tokens) else None
    last = first
    if first is not None and first.kind == "LBRACE":
        last = next((one for one in islice(reading.tokens, at + 3, None) if one.kind == "RBRACE"), None)
    if first is None or last is None:
        span = (token.start, max(under.end, token.end))
        return error("index-place", message, span, f"write {token.value}^n with its index for n")
    index = first.value if first is last else reading.text[first.start : last.end]
    if first.kind == "LBRACE" and first.end == first.start:  # a Unicode script, with braces of no width
        index = "{" + "".join(one.value for one in reading.tokens[at + 3 : reading.tokens.index(last)]) + "}"
    mend = f"{_written(reading, token)}^{index}"
    return error("index-place", message, (token.start, last.end), f"write {mend}", mend)


def _below(reading: Reading, at: int) -> Diagnostic | None:
    """`iota3`, `iota 3`, `iota^3`; `Q` likewise."""
    token, other = reading.tokens[at], _next(reading, at)
    if other is None:
        return None
    if other.kind == "NUMBER":
        return _index_place(reading, token, other, "_", other.end, other.value)
    third = reading.tokens[at + 2] if at + 2 < len(reading.tokens) else None
    follows = reading.tokens[at + 3].kind if at + 3 < len(reading.tokens) else ""
    if other.kind == "CARET" and third is not None and third.kind == "NUMBER" and follows != "UNDER":
        return _index_place(reading, token, third, "_", third.end, third.value)
    return None


def _against(reading: Reading, at: int) -> Diagnostic | None:
    """`x2`, `beta2`: a number against a name."""
    token, other = reading.tokens[at], _next(reading, at)
    if reading.tex or other is None or other.kind != "NUMBER" or other.start != token.end:
        return None
    return _index_place(reading, token, other, "_", other.end, other.value)


def _chi(reading: Reading, at: int) -> Diagnostic | None:
    """`chi Sq^4`."""
    token, other = reading.tokens[at], _next(reading, at)
    if other is not None and other.kind in ("LPAR", "LSQUARE"):
        return None
    span, mend = (token.start, token.end), None
    end = _symbol_end(reading, at + 1)
    if end is not None and other is not None:
        span, mend = (token.start, end), f"{_written(reading, token)}({reading.text[other.start : end]})"
    help = f"write {mend}" if mend else "write chi(…)"
    return error("chi-brackets", "chi takes its operation in brackets", span, help, mend)


def _symbol_end(reading: Reading, at: int) -> int | None:
    """Where the symbol at a token ends, its scripts with it; None where no operation stands there."""
    tokens = reading.tokens
    if at >= len(tokens) or tokens[at].kind not in ("SQ", "PP", "BETA", "QQ", "NAME", "LETTER_X"):
        return None
    symbol = tokens[at : at + 200]
    marks = index_positions(symbol)
    end = 1
    while end < len(symbol) and (marks[end] or symbol[end].kind in ("CARET", "UNDER", "RBRACE")):
        end += 1
    return symbol[end - 1].end


def _doubled(reading: Reading, at: int) -> Diagnostic | None:
    """`==` and `**`."""
    token, other = reading.tokens[at], _next(reading, at)
    if other is None or other.kind != token.kind or other.start != token.end:
        return None
    mend = "=" if token.kind == "EQUALS" else "^"
    meaning = "an equation has one =" if mend == "=" else "a power is written with ^"
    return error("expected", meaning, (token.start, other.end), f"write {mend}", mend)


def _comma(reading: Reading, at: int) -> Diagnostic | None:
    """`Sq^{2,}`."""
    token, other = reading.tokens[at], _next(reading, at)
    if other is None or other.kind != "RBRACE":
        return None
    return error("expected", "no index follows the comma", (token.start, other.end), "leave the comma out", "}")


def _modulus(reading: Reading, at: int) -> Diagnostic:
    """`mod 2` elsewhere than at the end of a relation."""
    token = reading.tokens[at]
    message = "a modulus, as in (mod 2), stands at the end of a relation, and is the prime"
    return error("expected", message, (token.start, token.end), "the prime is chosen by a line of its own: prime 3")


def _let(reading: Reading, at: int) -> Diagnostic | None:
    """A name that is taken in a `let`, and `=` for `in`."""
    for place, token in enumerate(islice(reading.tokens, 1, None), start=1):
        if token.kind == "IN":
            return None
        if token.kind == "EQUALS":
            return _group_given(reading, place)
        if token.kind in _TAKEN:
            message = f"{token.value} is taken: it names an operation or a fundamental class"
            return error("name-taken", message, (token.start, token.end), "choose another letter")
    return None


def _group_given(reading: Reading, at: int) -> Diagnostic | None:
    """`let x = H^2(X; Z)`; `let x = H^2` is seen where names have a meaning, since H may be a class."""
    kinds = [token.kind for token in islice(reading.tokens, at + 1, None)]
    if kinds[:2] != ["LETTER_H", "CARET"] or not {"SEMICOLON", "COMMA", "SLASH", "RUN"} & set(kinds):
        return None
    token = reading.tokens[at]
    return error("expected", "a class is declared with `in`", (token.start, token.end), "write let x in H^n", "in")


# --- among spaces --------------------------------------------------------------------------------


def _space_number(reading: Reading, at: int) -> Diagnostic | None:
    """`BO3`, `RP5`, `X1`: a number against the name of a space."""
    token, other = reading.tokens[at], _next(reading, at)
    if other is None or other.kind != "NUMBER" or other.start != token.end:
        return None
    written = _written(reading, token)
    if token.value in _PROJECTIVE:
        mend = f"{written}^{_braced(reading, other.value)}"
    elif token.kind == "RUN":
        mend = f"{written}({other.value})"
    else:
        mend = f"{written}_{_braced(reading, other.value)}"
    message = f"a number stands against {shown(token.value)}"
    return error("index-place", message, (token.start, other.end), f"write {mend}", mend)


_Check = Callable[[Reading, int], "Diagnostic | None"]
_CHECKS: dict[str, _Check] = {
    "RUN": _run,
    "SQ": _square,
    "PP": _square,
    "QQ": _below,
    "IOTA": _below,
    "BETA": _against,
    "CHI": _chi,
    "EQUALS": _doubled,
    "STAR": _doubled,
    "LET": _let,
    "COMMA": _comma,
    "MOD": _modulus,
    **dict.fromkeys(_LETTERS, _against),
}
_AMONG_SPACES: dict[str, _Check] = {"RUN": _space_number, **dict.fromkeys(_LETTERS - {"LETTER_X"}, _space_number)}
