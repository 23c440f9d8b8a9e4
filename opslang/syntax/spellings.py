"""The spellings of the notation: words, Unicode signs and TeX commands, each with the token it stands for.

Tables only.  Knows nothing of statements, sorts or degrees.
"""

from __future__ import annotations

import re

Meaning = tuple[str, str]
"""The kind of a token and its value, alike for every spelling."""

KEYWORDS: dict[str, str] = {
    "prime": "PRIME_WORD",
    "space": "SPACE_WORD",
    "on": "ON",
    "let": "LET",
    "why": "WHY",
    "basis": "BASIS",
    "series": "SERIES",
    "map": "MAP",
    "bundle": "BUNDLE",
    "compare": "COMPARE",
}
"""The first words of the statements that are read, with their tokens."""

LATER: dict[str, str] = {
    "manifold": "the statement `manifold`",
    "kernel": "the statement `kernel`",
    "image": "the statement `image`",
    "rank": "the statement `rank`",
    "solve": "the statement `solve`",
    "relations": "the statement `relations`",
    "for": "a family `for all …`",
    "sum": "a sum over a variable",
}
"""The first words of statements that belong to the language and are not yet supported."""

LATER_INSIDE: dict[str, str] = {
    "for": "a family `for all …`",
    "sum": "a sum over a variable",
    "where": "a condition `where …`",
    "with": "a condition `with …`",
}
"""Words of the same kind that may stand further on in a line."""

STATEMENT_WORDS = frozenset(KEYWORDS) | frozenset(LATER)

INSIDE: dict[str, dict[str, str]] = {
    "SPACE_WORD": {"where": "WHERE", "to": "TO"},
    "SERIES": {"to": "TO"},
    "COMPARE": {"to": "TO"},
    "MAP": {"with": "WITH", "diagonal": "DIAGONAL", "projection": "PROJECTION", "standard": "STANDARD"},
    "BUNDLE": {"with": "WITH", "over": "OVER", "of": "OF", "rank": "RANK"},
}
"""Words that have a meaning inside the statement of a keyword, with their tokens."""

RESERVED: dict[str, Meaning] = {
    "Sq": ("SQ", "Sq"),
    "P": ("PP", "P"),
    "beta": ("BETA", "beta"),
    "chi": ("CHI", "chi"),
    "Q": ("QQ", "Q"),
    "iota": ("IOTA", "iota"),
}
"""Names that are taken."""

_LETTERS: dict[str, Meaning] = {
    "Z": ("LETTER_Z", "Z"),
    "F": ("LETTER_F", "F"),
    "H": ("LETTER_H", "H"),
    "K": ("LETTER_K", "K"),
    "x": ("LETTER_X", "x"),
}

_SMALL_GREEK = {
    "alpha": "α",
    "beta": "β",
    "gamma": "γ",
    "delta": "δ",
    "epsilon": "εϵ",
    "zeta": "ζ",
    "eta": "η",
    "theta": "θϑ",
    "iota": "ι",
    "kappa": "κϰ",
    "lambda": "λ",
    "mu": "μµ",
    "nu": "ν",
    "xi": "ξ",
    "omicron": "ο",
    "pi": "πϖ",
    "rho": "ρϱ",
    "sigma": "σς",
    "tau": "τ",
    "upsilon": "υ",
    "phi": "φϕ",
    "chi": "χ",
    "psi": "ψ",
    "omega": "ω",
}
_GREAT_GREEK = {
    "Gamma": "Γ",
    "Delta": "Δ",
    "Theta": "Θ",
    "Lambda": "Λ",
    "Xi": "Ξ",
    "Pi": "Π",
    "Sigma": "Σ",
    "Upsilon": "Υ",
    "Phi": "Φ",
    "Psi": "Ψ",
    "Omega": "Ω",
}
_VARIANTS = ("epsilon", "theta", "pi", "rho", "sigma", "phi", "kappa")
_GREEK = {**_SMALL_GREEK, **_GREAT_GREEK}
GREEK_NAMES = frozenset(name for name in _GREEK if name not in RESERVED)
"""The spelled Greek letters that name classes; var forms are the same letter."""


def letter_meaning(letter: str) -> Meaning:
    """The token of a single letter or of a spelled Greek one."""
    return RESERVED.get(letter) or _LETTERS.get(letter) or ("NAME", letter)


WORDS: dict[str, Meaning] = {
    **RESERVED,
    **{name: letter_meaning(name) for name in _GREEK},
    "binom": ("BINOM", "binom"),
    "cup": ("CUP", "cup"),
    "cross": ("CROSS", "cross"),
    "transgression": ("CONSTRUCT", "transgression"),
    "suspension": ("CONSTRUCT", "suspension"),
    "dual": ("CONSTRUCT", "dual"),
}
"""Words that are one token wherever they stand as a whole run of letters."""

SYMBOLS: dict[str, Meaning] = {
    "^": ("CARET", "^"),
    "_": ("UNDER", "_"),
    "(": ("LPAR", "("),
    ")": ("RPAR", ")"),
    "[": ("LSQUARE", "["),
    "]": ("RSQUARE", "]"),
    "{": ("LBRACE", "{"),
    "}": ("RBRACE", "}"),
    "|": ("BAR", "|"),
    "∣": ("BAR", "|"),
    "+": ("PLUS", "+"),
    "-": ("MINUS", "-"),
    "−": ("MINUS", "-"),
    "–": ("MINUS", "-"),
    "‒": ("MINUS", "-"),
    "*": ("STAR", "*"),
    "∗": ("STAR", "*"),
    "·": ("STAR", "*"),
    "⋅": ("STAR", "*"),
    "∙": ("STAR", "*"),
    "∪": ("CUP", "cup"),
    "⌣": ("CUP", "cup"),
    "⊗": ("CROSS", "cross"),
    "×": ("TIMES", "cross"),
    "∘": ("COMPOSE", "compose"),
    "⊕": ("OPLUS", "+"),
    "=": ("EQUALS", "="),
    "≡": ("EQUALS", "="),
    "∞": ("INFINITY", "∞"),
    "/": ("SLASH", "/"),
    ",": ("COMMA", ","),
    ";": ("SEMICOLON", ";"),
    "∈": ("IN", "in"),
    ":": ("COLON", ":"),
    "→": ("ARROW", "->"),
    "↦": ("ARROW", "->"),
    ".": ("DOT", "."),
    "…": ("DOTS", "…"),
    "⋯": ("DOTS", "…"),
    "∑": ("LATER", "sum"),
    "ℤ": ("LETTER_Z", "Z"),
    "𝔽": ("LETTER_F", "F"),
    "𝒫": ("PP", "P"),
    "𝔓": ("PP", "P"),
    **{sign: letter_meaning(name) for name, signs in _GREEK.items() for sign in signs},
}
"""Single code points."""

COMMANDS: dict[str, Meaning] = {
    **{name: letter_meaning(name) for name in _GREEK},
    **{"var" + name: letter_meaning(name) for name in _VARIANTS},
    "Sq": ("SQ", "Sq"),
    "P": ("PP", "P"),
    "Z": ("LETTER_Z", "Z"),
    "ZZ": ("LETTER_Z", "Z"),
    "F": ("LETTER_F", "F"),
    "FF": ("LETTER_F", "F"),
    "binom": ("BINOM", "binom"),
    "tbinom": ("BINOM", "binom"),
    "dbinom": ("BINOM", "binom"),
    "cup": ("CUP", "cup"),
    "smile": ("CUP", "cup"),
    "smallsmile": ("CUP", "cup"),
    "otimes": ("CROSS", "cross"),
    "times": ("TIMES", "cross"),
    "cdot": ("STAR", "*"),
    "ast": ("STAR", "*"),
    "circ": ("COMPOSE", "compose"),
    "oplus": ("OPLUS", "+"),
    "in": ("IN", "in"),
    "equiv": ("EQUALS", "="),
    "infty": ("INFINITY", "∞"),
    "mod": ("MOD", "mod"),
    "bmod": ("MOD", "mod"),
    "pmod": ("MOD", "mod"),
    "colon": ("COLON", ":"),
    "to": ("ARROW", "->"),
    "rightarrow": ("ARROW", "->"),
    "longrightarrow": ("ARROW", "->"),
    "mapsto": ("ARROW", "->"),
    "lvert": ("BAR", "|"),
    "rvert": ("BAR", "|"),
    "vert": ("BAR", "|"),
    "prime": ("PRIME", "'"),
    "sum": ("LATER", "sum"),
    "dots": ("DOTS", "…"),
    "ldots": ("DOTS", "…"),
    "cdots": ("DOTS", "…"),
    "dotsb": ("DOTS", "…"),
    "dotsc": ("DOTS", "…"),
    "lbrack": ("LSQUARE", "["),
    "rbrack": ("RSQUARE", "]"),
}
"""TeX commands that stand for a token, without the backslash."""

INFINITE = frozenset(("oo", "infty", "infinity"))
"""What ∞ is typed as, in the power of a space."""

FONTS = (
    *("mathrm", "operatorname*", "operatorname", "textrm", "textup", "textit", "textsf", "textbf", "text", "mathit"),
    *("mathsf", "mathbf", "mathtt", "mathcal", "mathfrak", "mathscr", "mathbb", "mathnormal", "boldsymbol", "bm"),
)
"""TeX commands that set their argument in another face, which means nothing here."""

LAYOUT = frozenset(
    """quad qquad left right middle big Big bigg Bigg bigl bigr Bigl Bigr biggl biggr Biggl Biggr bigm Bigm limits
    nolimits displaystyle textstyle scriptstyle scriptscriptstyle rm it bf sf cal nonumber notag mathstrut strut
    allowbreak nobreak thinspace medspace thickspace negthinspace enspace space relax mathop mathbin mathrel mathord
    mathstrut hfill hfil qedhere""".split()
) | frozenset(font.rstrip("*") for font in FONTS)
"""TeX commands that fall away."""

SURROUNDINGS = "equation|displaymath|math|align|aligned|flalign|gather|gathered|multline|multlined|split|eqnarray"
"""TeX's surroundings of a formula, which mean nothing here; a star may follow each."""

SUPERSCRIPTS: dict[str, str] = {
    **dict(zip("⁰¹²³⁴⁵⁶⁷⁸⁹⁺⁻⁽⁾", "0123456789+-()")),
    **dict(zip("ᵃᵇᶜᵈᵉᶠᵍʰⁱʲᵏˡᵐⁿᵒᵖʳˢᵗᵘᵛʷˣʸᶻ", "abcdefghijklmnoprstuvwxyz")),
}
SUBSCRIPTS: dict[str, str] = {
    **dict(zip("₀₁₂₃₄₅₆₇₈₉₊₋₍₎", "0123456789+-()")),
    **dict(zip("ₐₑₕᵢⱼₖₗₘₙₒₚᵣₛₜᵤᵥₓ", "aehijklmnoprstuvx")),
}
PRIMES: dict[str, int] = {"'": 1, "′": 1, "’": 1, "″": 2, "‴": 3, "⁗": 4}

_TEX = re.compile(r"#[^\n]*|(\\(?![ \t]*(?:\r?\n|\Z))|[$&~])")


def is_tex(text: str) -> bool:
    """Whether a statement is in TeX spelling: it holds a TeX command, `$`, `&` or `~` outside its comments."""
    if "\\" not in text and "$" not in text and "&" not in text and "~" not in text:
        return False
    return any(found.group(1) for found in _TEX.finditer(text))
