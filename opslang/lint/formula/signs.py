"""Signs of formulas and what they are: relations, products, words of conditions.  A table, no code."""

from __future__ import annotations

GLUES: dict[str, str] = {
    "\\cdot": "*", "*": "*", "\\star": "*", "⋅": "*", "·": "*", "\\cup": "cup", "\\smile": "cup", "\\smallsmile": "cup",
    "∪": "cup", "⌣": "cup", "\\wedge": "cup", "∧": "cup", "\\otimes": "cross", "⊗": "cross", "\\boxtimes": "cross",
    "\\times": "times", "×": "times", "\\circ": "compose", "∘": "compose", "/": "/",
}  # fmt: skip
"""How a sign joins two factors (opslang.lint.model.Product)."""

EQUALS = frozenset(("=", "\\equiv", "≡"))
DEFINES = frozenset(("\\coloneqq", ":=", "\\coloneq", "\\eqqcolon", "\\triangleq", "\\defeq", "≔"))
ORDERS: dict[str, str] = {
    "<": "<", ">": ">", "\\leq": "≤", "\\geq": "≥", "\\neq": "≠", "≤": "≤", "≥": "≥", "\\ll": "<", "\\gg": ">",
    "≠": "≠",
}  # fmt: skip
MEMBER = frozenset(("\\in", "∈"))
MAPS = frozenset(("\\mapsto", "↦"))
ARROWS = frozenset(
    (
        "\\to",
        "→",
        "\\hookrightarrow",
        "\\twoheadrightarrow",
        "\\xrightarrow",
        "\\gets",
        "\\rightsquigarrow",
        "\\implies",
    )
)
COLONS = frozenset((":", "\\colon"))
OTHERS = frozenset(
    "\\cong \\simeq \\approx \\sim \\subset \\subseteq \\supset \\supseteq \\ni \\notin \\mid \\Rightarrow "
    "\\Leftrightarrow \\iff \\Longrightarrow \\leftrightarrow \\propto \\perp \\subsetneq "
    "\\Longleftrightarrow ∉ ⊂ ⊆ ≅ ≃ \\preceq "
    "\\leftarrow \\nmid \\prec \\succ \\rightleftarrows \\rightrightarrows".split()
)
"""Relations that are read only so far as to part two sides."""

PUNCTUATION = frozenset((",", ";", "."))

CONDITIONAL = (
    "if", "for", "when", "whenever", "where", "with", "provided", "unless", "such that", "because", "since",
    "as long as", "in case", "on", "assuming", "s.t.",
)  # fmt: skip
"""Words after which a condition stands."""

SUMS = frozenset("\\sum \\prod \\bigoplus \\bigotimes \\bigcup ∑ \\coprod".split())
ACCENTS: dict[str, str] = {
    "\\overline": "bar", "\\bar": "bar", "\\tilde": "tilde", "\\widetilde": "tilde", "\\hat": "hat",
    "\\widehat": "hat", "\\underline": "under", "\\vec": "vec", "\\dot": "dot", "\\check": "check",
    "\\breve": "breve", "\\mathring": "ring", "\\acute": "acute", "\\grave": "grave", "\\ddot": "ddot",
}  # fmt: skip
MAP_LETTERS = frozenset(("d", "\\partial", "\\delta", "\\tau", "\\varphi"))
"""Letters that are read as a map where something stands at their right that they may act on."""
DIFFERENTIAL = frozenset(("d", "\\partial", "\\delta"))
CHARACTERISTIC = frozenset(("w", "v", "c", "p", "s", "e", "W", "bar w", "tilde w", "hat w", "bar v", "u"))
"""Letters of characteristic classes, which take a bundle in brackets."""
GROUPS = frozenset(("bb", "frak"))
"""Alphabets in which no class is written."""
