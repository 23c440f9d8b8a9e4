"""For every law of the book, bindings inside its condition and bindings outside it."""

from __future__ import annotations

from spaces_by_name import PAIR, SIGNED, classes, space
from terms import Z4, A, S, T, U, V, W, X, Y, of, product

from opslang.ir.term import IDENTITY, UNIT, Apply, Monomial
from opslang.ir.tree import Class
from opslang.laws.law import Bindings

x, y, a, w, z, u, v, s = (of(name) for name in (X, Y, A, W, Z4, U, V, S))
XY, X2, A3W = product((X, 1), (Y, 1)), product((X, 2)), product((A, 3), (W, 1))
SQ1X = of(Apply("Sq", 1, x))
PY = of(Apply("P", 1, y))
BX = of(Apply("beta", 1, x))


def _adem() -> list[Bindings]:
    return [{"p": 2, "a": i, "b": j, "x": on} for j in range(1, 6) for i in range(1, 2 * j) for on in (w, A3W)]


def _powers(bockstein: bool) -> list[Bindings]:
    found: list[Bindings] = []
    for p, most in ((3, 3), (5, 1)):
        for j in range(1, most + 1):
            found += [{"p": p, "a": i, "b": j, "x": w} for i in range(1, p * j + bockstein)]
    return found


def _both(*rows: Bindings) -> list[Bindings]:
    return [{"p": p, **row} for p in (2, 3, 5) for row in rows]


def _conjugates() -> list[Bindings]:
    return [{"p": p, "n": n, "x": on} for p, most in ((2, 6), (3, 2)) for n in range(1, most + 1) for on in (y, w)]


def named(text: str, p: int, letter: str, index: int | None = None) -> Class:
    """A class of a named space."""
    return next(of for of in classes(text, p, 40) if (of.letter, of.index) == (letter, index))


def _wu_grid() -> list[Bindings]:
    found: list[Bindings] = []
    for text, letter, most in (
        ("BO", "w", 6),
        ("BO(4)", "w", 4),
        ("BU(3)", "c", 3),
        ("BU", "c", 4),
        ("BSp(3)", "q", 3),
        ("BSO(4)", "w", 4),
    ):
        for m in range(2 + (text == "BSO(4)"), most + 1):
            found += [{"p": 2, "k": k, "m": m, "of": named(text, 2, letter, m)} for k in range(1, m)]
    return found


def _thom_grid() -> list[Bindings]:
    spaces = (("BO(4)", 4), ("BU(3)", 6), ("BSp(2)", 8))
    return [{"p": 2, "k": k, "of": named(f"thom({t})", 2, "U")} for t, n in spaces for k in range(1 + (n > 4), n)]


def _splitting_grid() -> list[Bindings]:
    found: list[Bindings] = []
    for p in (3, 5):
        for text in (
            "BU(3)",
            "BU",
            "BO(6)",
            "BSO(4)",
            "BSO(6)",
            "BSp(2)",
            "BSp",
            "thom(BU(3))",
            "thom(BSO(4))",
            "thom(BSp(2))",
        ):
            for of_space in classes(text, p, 12):
                if text.startswith("thom") and of_space.letter != "U":
                    continue
                found += [
                    {"p": p, "k": k, "of": of_space} for k in range(1, {3: 4, 5: 3}[p]) if 2 * k < of_space.degree
                ]
    return found


def _binomial_grid() -> list[Bindings]:
    rows = ((2, "RP", "x"), (2, "CP^9", "y"), (2, "HP", "u"), (2, "lens(4)", "y"), (2, "lens(2)", "x"))
    found: list[Bindings] = []
    for p, text, letter in (
        *rows,
        (3, "CP", "y"),
        (3, "HP^20", "u"),
        (5, "HP", "u"),
        (3, "lens(9)", "y"),
        (5, "CP", "y"),
    ):
        of_space = named(text, p, letter)
        found += [{"p": p, "i": i, "m": m, "x": of_space} for m in range(1, 8) for i in range(1, 9)]
    return found


ODD = [{"p": p, "x": m} for p in (3, 5) for m in (y, XY, of(Apply("P", 1, w)))]

GRID: dict[str, list[Bindings]] = {
    "adem": _adem(),
    "adem-powers": _powers(False),
    "adem-bockstein": _powers(True),
    "beta-squared": ODD,
    "instability": [
        {"p": 2, "i": i, "x": m} for m, n in ((x, 2), (XY, 5), (SQ1X, 3), (UNIT, 0)) for i in (n + 1, n + 4)
    ]
    + [{"p": p, "i": i, "x": m} for p in (3, 5) for m, n in ((x, 2), (XY, 5), (BX, 3)) for i in (n // 2 + 1, n)],
    "excess": [{"p": p, "i": i, "x": m} for p in (3, 5) for m, i in ((x, 1), (y, 2), (XY, 3), (w, 2), (w, 3))],
    "top-power": [{"p": 2, "i": i, "x": m} for m, i in ((a, 1), (x, 2), (XY, 5), (SQ1X, 3), (u, 1), (z, 4))]
    + [{"p": p, "i": i, "x": m} for p in (3, 5) for m, i in ((x, 1), (w, 2), (X2, 2), (z, 2))],
    "unit": [{"p": p, "key": key, "index": i} for p in (2, 3) for key, i in (("beta", 2), ("Q", 0), ("Q", 1))]
    + [{"p": 3, "key": "beta", "index": 1}, {"p": 2, "key": "chi", "index": (("Sq", 3), ("Sq", 1))}],
    "square-of-degree-1": [{"p": 2, "x": T}, {"p": 2, "x": U}],
    "odd-square": [{"p": p, "x": m} for p in (3, 5) for m in (a, y, u, BX)],
    "cartan": [
        {"p": p, "k": k, "parts": parts}
        for p in (2, 3)
        for k in range(1, 6)
        for parts in (((x, 1), (y, 1)), ((x, 1), (x, p)), ((x, p), (w, 1)), ((x, 1), (y, 1), (w, 1)))
    ],
    "frobenius": [
        {"p": p, "k": k, "y": m, "n": n}
        for p in (2, 3)
        for k in range(1, 7)
        for m, n in ((x, p), (product((X, 1), (W, 1)), p), (a if p == 2 else x, p * p))
    ],
    "bockstein-of-a-product": [
        {"p": p, "parts": parts}
        for p in (3, 5)
        for parts in (((x, 1), (y, 1)), ((y, 1), (w, 1)), ((x, 2),), ((a, 1), (x, 4), (y, 1)), ((a, 1), (y, 1)))
    ],
    "bockstein-of-a-power": [{"p": p, "y": m} for p in (3, 5) for m in (x, w, product((X, 1), (W, 1)))],
    "integral": [{"p": p, "x": m} for p in (2, 3) for m in (z, u, v, s, of(T), of(Apply("beta", 2, v)))],
    "below-the-order": [{"p": p, "k": k, "x": c} for p in (2, 3) for k, c in ((2, S), (2, Z4), (5, Z4), (3, T))],
    "bockstein-of-a-bockstein": [{"p": 2, "k": k, "x": m} for k in (2, 3) for m in (SQ1X, of(Apply("Sq", 3, w)))]
    + [{"p": p, "k": k, "x": of(Apply("beta", 2, v))} for p in (2, 3) for k in (2, 3)]
    + [{"p": 3, "k": 2, "x": BX}],
    "bockstein-of-an-odd-square": [{"p": 2, "k": k, "y": m} for k in (2, 3) for m in (y, a, SQ1X)],
    "higher-bockstein-of-a-product": [
        {"p": p, "k": 2, "parts": parts}
        for p in (2, 3)
        for parts in (
            ((u, 1), (v, 1)),
            ((v, 1), (z, 1)),
            ((v, 2),),
            ((v, 3), (z, 2)),
            ((u, 1), (of(Apply("beta", 2, u)), 2)),
        )
    ]
    + [{"p": 2, "k": 3, "parts": ((s, 1), (z, 2))}, {"p": 2, "k": 2, "parts": ((product((A, 2)), 1), (v, 1))}],
    "higher-bockstein-of-a-power": [{"p": 2, "k": 2, "x": m} for m in (x, w, X2)]
    + [{"p": 3, "k": 2, "x": m} for m in (x, w, X2)]
    + [{"p": p, "k": 3, "x": m} for p in (2, 3) for m in (v, z, product((V, 2)))],
    "milnor-zero": _both({"x": x}, {"x": y}, {"x": XY}),
    "milnor-degree-one": [{"p": 2, "k": k, "x": A} for k in range(4)],
    "milnor-of-a-product": [
        {"p": p, "k": k, "parts": parts}
        for p in (2, 3)
        for k in (0, 1)
        for parts in (((x, 1), (y, 1)), ((a, 1), (x, 2)), ((x, p),))
    ],
    "milnor-commutator": [{"p": p, "k": k, "x": m} for p in (2, 3) for k in (1, 2) for m in (a, x, y)],
    "milnor-squared": [{"p": p, "k": k, "x": m} for p in (2, 3) for k in (0, 1) for m in (a, x, XY)],
    "conjugate-twice": [{"p": 2, "letters": (("Sq", 3), ("Sq", 1)), "x": w}, {"p": 3, "letters": (("P", 1),), "x": w}],
    "conjugate-of-a-primitive": [{"p": p, "letter": ("Q", k), "x": m} for p in (2, 3) for k in (0, 1) for m in (x, y)]
    + [{"p": 3, "letter": ("beta", 1), "x": y}],
    "conjugate-of-a-product": [
        {"p": 2, "letters": (("Sq", 2), ("Sq", 3)), "x": w},
        {"p": 2, "letters": (("Sq", 1), ("Q", 1), ("Sq", 2)), "x": y},
        {"p": 3, "letters": (("beta", 1), ("P", 1)), "x": w},
        {"p": 3, "letters": (("P", 1), ("beta", 1)), "x": y},
        {"p": 3, "letters": (("beta", 1), ("P", 1), ("beta", 1)), "x": y},
        {"p": 3, "letters": (("Q", 1), ("beta", 1)), "x": y},
    ],
    "conjugate-of-a-full-square": [{"p": 2, "n": n, "x": m} for n in (3, 7) for m in (y, w)],
    "conjugate-of-a-letter": _conjugates(),
    "total": _both({"x": x}, {"x": XY}, {"x": of(Apply("Q", 0, x))}),
    "wu": _wu_grid(),
    "thom": _thom_grid(),
    "splitting-principle": _splitting_grid(),
    "projective-power": _binomial_grid(),
    "empty-degree": [
        {"p": p, "i": i, "x": Monomial(((named(text, p, letter, index), n),))}
        for p, text, letter, index, i in (
            (2, "BU", "c", 2, 3),
            (2, "BSp(2)", "q", 1, 2),
            (2, "CP^3", "y", None, 1),
            (2, "HP", "u", None, 6),
            (3, "RP^5", "x", None, 1),
        )
        for n in (1, 2)
    ],
    "operation-of-the-space": [{"p": p, "token": 0, "of": named(f"lens({p})", p, "x")} for p in (3, 5)],
    "bockstein-of-the-space": [
        {"p": p, "k": k, "of": named(f"lens({p**k})", p, letter)} for p in (2, 3) for k in (2, 3) for letter in "xy"
    ],
    "truncated": [
        {"p": p, "h": h, "x": named(text, p, letter)}
        for p, text, letter, h in ((2, "RP^3", "x", 4), (3, "CP^2", "y", 3), (5, "HP^1", "u", 2))
    ],
    "relation-of-the-ring": [
        {"p": 2, "number": 1, "space": space(f"thom({t})", 2)} for t in ("BO(3)", "BU(2)", "BSp(1)")
    ]
    + [{"p": 3, "number": 1, "space": space(f"thom({t})", 3)} for t in ("BSO(4)", "BU(2)")]
    + [{"p": 2, "number": 1, "space": PAIR}]
    + [{"p": 3, "number": n, "space": SIGNED} for n in (1, 2)],
}

OUTSIDE: dict[str, list[Bindings]] = {
    "adem": [{"p": 2, "a": 4, "b": 2, "x": w}, {"p": 2, "a": 0, "b": 2, "x": w}, {"p": 3, "a": 1, "b": 1, "x": w}],
    "adem-powers": [
        {"p": 3, "a": 3, "b": 1, "x": w},
        {"p": 2, "a": 1, "b": 1, "x": w},
        {"p": 3, "a": 0, "b": 1, "x": w},
    ],
    "adem-bockstein": [{"p": 3, "a": 4, "b": 1, "x": w}, {"p": 2, "a": 1, "b": 1, "x": w}],
    "beta-squared": [{"p": 2, "x": w}],
    "instability": [
        {"p": 2, "i": 2, "x": x},
        {"p": 3, "i": 1, "x": x},
        {"p": 2, "i": 9, "x": IDENTITY},
        {"p": 2, "i": 9, "x": of(Apply("total", 0, x))},
    ],
    "excess": [{"p": 3, "i": 1, "x": y}, {"p": 2, "i": 9, "x": y}, {"p": 3, "i": 9, "x": IDENTITY}],
    "top-power": [{"p": 2, "i": 3, "x": x}, {"p": 3, "i": 2, "x": x}, {"p": 3, "i": 1, "x": y}],
    "unit": [{"p": 2, "key": "Sq", "index": 0}, {"p": 2, "key": "total", "index": 0}],
    "square-of-degree-1": [{"p": 2, "x": A}, {"p": 2, "x": Z4}, {"p": 3, "x": U}],
    "odd-square": [{"p": 3, "x": x}, {"p": 2, "x": y}, {"p": 3, "x": XY}],
    "cartan": [
        {"p": 2, "k": 1, "parts": ((x, 1),)},
        {"p": 2, "k": 1, "parts": ((x, 3), (y, 1))},
        {"p": 2, "k": 1, "parts": ((y, 1), (IDENTITY, 1))},
        {"p": 3, "k": 1, "parts": ((x, 1), (y, 3))},
    ],
    "frobenius": [{"p": 2, "k": 1, "y": x, "n": 3}, {"p": 3, "k": 1, "y": y, "n": 3}, {"p": 2, "k": 1, "y": x, "n": 1}],
    "bockstein-of-a-product": [
        {"p": 2, "parts": ((x, 1), (y, 1))},
        {"p": 3, "parts": ((x, 1),)},
        {"p": 3, "parts": ((y, 1), (a, 1))},
    ],
    "bockstein-of-a-power": [{"p": 2, "y": x}, {"p": 3, "y": y}],
    "integral": [{"p": 2, "x": x}, {"p": 3, "x": y}, {"p": 2, "x": IDENTITY}, {"p": 2, "x": of(Apply("Sq", 2, z))}],
    "below-the-order": [
        {"p": 2, "k": 2, "x": V},
        {"p": 2, "k": 3, "x": V},
        {"p": 2, "k": 1, "x": Z4},
        {"p": 2, "k": 2, "x": X},
    ],
    "bockstein-of-a-bockstein": [
        {"p": 2, "k": 2, "x": of(Apply("Sq", 2, w))},
        {"p": 2, "k": 2, "x": v},
        {"p": 3, "k": 2, "x": PY},
    ],
    "bockstein-of-an-odd-square": [
        {"p": 2, "k": 2, "y": x},
        {"p": 3, "k": 2, "y": y},
        {"p": 2, "k": 1, "y": y},
        {"p": 2, "k": 2, "y": XY},
    ],
    "higher-bockstein-of-a-product": [
        {"p": 2, "k": 2, "parts": ((x, 1), (v, 1))},
        {"p": 2, "k": 3, "parts": ((v, 1), (z, 1))},
        {"p": 2, "k": 2, "parts": ((v, 1),)},
    ],
    "higher-bockstein-of-a-power": [
        {"p": 2, "k": 2, "x": y},
        {"p": 2, "k": 3, "x": x},
        {"p": 2, "k": 2, "x": product((A, 1), (Y, 1))},
    ],
    "milnor-zero": [{"p": 2, "k": 0, "x": x, "extra": 1}],
    "milnor-degree-one": [{"p": 2, "k": 1, "x": U}, {"p": 3, "k": 1, "x": A}, {"p": 2, "k": 1, "x": X}],
    "milnor-of-a-product": [{"p": 2, "k": 1, "parts": ((x, 1),)}, {"p": 3, "k": 1, "parts": ((y, 1), (a, 1))}],
    "milnor-commutator": [{"p": 2, "k": 0, "x": x}],
    "milnor-squared": [{"p": 2, "k": -1, "x": x}],
    "conjugate-twice": [{"p": 2, "letters": (), "x": x}],
    "conjugate-of-a-primitive": [{"p": 2, "letter": ("Sq", 2), "x": x}],
    "conjugate-of-a-product": [{"p": 2, "letters": (("Sq", 2),), "x": x}],
    "conjugate-of-a-full-square": [{"p": 2, "n": n, "x": x} for n in (1, 2, 5)] + [{"p": 3, "n": 3, "x": x}],
    "conjugate-of-a-letter": [{"p": 2, "n": 0, "x": x}],
    "total": [{"p": 2, "x": IDENTITY}, {"p": 2, "x": of(Apply("total", 0, x))}],
    "wu": [
        {"p": 2, "k": 3, "m": 3, "of": named("BO", 2, "w", 3)},
        {"p": 2, "k": 0, "m": 3, "of": named("BO", 2, "w", 3)},
        {"p": 2, "k": 1, "m": 4, "of": named("BO", 2, "w", 3)},
        {"p": 3, "k": 1, "m": 3, "of": named("BU", 3, "c", 3)},
        {"p": 2, "k": 1, "m": 3, "of": Class("w", 3, 0, 3)},
    ],
    "thom": [
        {"p": 2, "k": 3, "of": named("thom(BO(3))", 2, "U")},
        {"p": 2, "k": 1, "of": named("BO", 2, "w", 3)},
        {"p": 3, "k": 1, "of": named("thom(BSO(3))", 3, "U")},
    ],
    "splitting-principle": [
        {"p": 2, "k": 1, "of": named("BU", 2, "c", 3)},
        {"p": 3, "k": 3, "of": named("BU", 3, "c", 3)},
        {"p": 3, "k": 0, "of": named("BU", 3, "c", 3)},
        {"p": 3, "k": 1, "of": named("CP", 3, "y")},
    ],
    "projective-power": [
        {"p": 2, "i": 1, "m": 0, "x": named("CP", 2, "y")},
        {"p": 2, "i": 0, "m": 2, "x": named("RP", 2, "x")},
        {"p": 3, "i": 1, "m": 1, "x": named("RP^5", 3, "x")},
        {"p": 2, "i": 1, "m": 2, "x": A},
    ],
    "empty-degree": [
        {"p": 2, "i": 2, "x": of(named("CP", 2, "y"))},
        {"p": 2, "i": 1, "x": of(named("BO", 2, "w", 3))},
        {"p": 2, "i": 1, "x": x},
        {"p": 2, "i": 1, "x": product((X, 1), (named("CP", 2, "y"), 1))},
    ],
    "operation-of-the-space": [
        {"p": 2, "token": 1, "of": named("BO", 2, "w", 3)},
        {"p": 2, "token": 1, "of": named("lens(4)", 2, "x")},
        {"p": 3, "token": 0, "of": A},
    ],
    "bockstein-of-the-space": [
        {"p": 2, "k": 3, "of": named("lens(4)", 2, "x")},
        {"p": 2, "k": 1, "of": named("lens(4)", 2, "x")},
        {"p": 2, "k": 2, "of": named("BO", 2, "w", 3)},
        {"p": 2, "k": 2, "of": U},
    ],
    "truncated": [
        {"p": 2, "h": 3, "x": named("RP^3", 2, "x")},
        {"p": 2, "h": 4, "x": named("RP", 2, "x")},
        {"p": 2, "h": 4, "x": A},
    ],
    "relation-of-the-ring": [
        {"p": 2, "number": 0, "space": PAIR},
        {"p": 2, "number": 2, "space": PAIR},
        {"p": 2, "number": 1, "space": space("BO(3)", 2)},
    ],
}


def left_side(bindings: Bindings) -> Monomial | None:
    """What the law acts on, where it is bound as one monomial."""
    found = bindings.get("x")
    return found if isinstance(found, Monomial) else None
