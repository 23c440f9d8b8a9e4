"""Help on statements: of the language, and of the shell.  Text only; the tests and `help` run the examples."""

from __future__ import annotations

from typing import NamedTuple


class Topic(NamedTuple):
    """One page: what the word means, lines to try, and words that lead to the same page."""

    text: str
    example: tuple[str, ...] = ()
    also: tuple[str, ...] = ()


STATEMENTS: dict[str, Topic] = {
    "expression": Topic(
        "A line that is a formula is brought to its canonical form, with degree and excess. "
        "An operation acts on the one factor at its right: brackets let it act on a product.",
        ("let x, y in H^2", "Sq^2 (x y)", "Sq^4 Sq^2 iota_3"),
        ("formula", "normalise"),
    ),
    "relation": Topic(
        "Formulas with = between them are compared: true, or false with the difference. Chains a = b = c are "
        "compared link by link.",
        ("Sq^2 Sq^2 = Sq^3 Sq^1", "Sq^2 Sq^2 iota_3 = Sq^3 Sq^1 iota_3"),
        ("=",),
    ),
    "let": Topic(
        "Declares classes, of which nothing but the degree is known, or abbreviates an expression. With "
        "coefficients Z or Z/m the class is the reduction of an integral or a Z/m class, and its Bocksteins "
        "follow.",
        ("let x, y in H^2", "let c in H^3(X; Z)", "let u = Sq^1 x + c", "Sq^1 u"),
    ),
    "prime": Topic(
        "Chooses the prime. Classes and abbreviations declared so far are dropped; spaces stay.",
        ("prime 3", "P^1 P^1 = 2 P^2"),
    ),
    "space": Topic(
        "Names a space: an Eilenberg-MacLane space, a named one such as BO(3) or RP^5, a product of spaces, or a ring "
        "by generators, relations and operations. A presentation is checked: faults are told at their place.",
        (
            "space X = K(Z/4, 3) x K(Z, 5)",
            "on X",
            "beta_2 iota_3",
            "space W = F_2[u:2, v:3] / (u^2, v^2) where Sq^1 u = v, Sq^2 v = u v",
            "on W",
            "Sq^2 Sq^1 u",
        ),
        ("presentation",),
    ),
    "on": Topic("Chooses the space that iota_n belongs to from here on.", ("on K(Z, 3)", "Sq^1 iota_3 = 0")),
    "why": Topic(
        "Derives an expression or a relation, law by law. In the shell `why` alone derives the last answer, and "
        "`why that_3` result 3.",
        ("why Sq^2 Sq^2 iota_3",),
        ("derivation",),
    ),
    "basis": Topic(
        "Lists the basis of one degree of the cohomology of a space; without a space, of the current one.",
        ("basis H^9(K(Z/2, 3))",),
    ),
    "series": Topic(
        "Gives the dimensions of the cohomology of a space from degree 0 on.",
        ("series K(Z/4, 3) to 12",),
        ("dimension", "poincare series"),
    ),
    "map": Topic(
        "Names a map of spaces by the classes that those of its target are taken to; f^* pulls classes back. The "
        "map is checked: degrees, coefficients, relations and operations of the target. `standard`, `diagonal` "
        "and `projection 1` name maps that need no further word; `map h = g f` composes.",
        (
            "map f : K(Z/2, 3) -> K(Z/2, 5) with iota_5 -> Sq^2 iota_3",
            "f^*(Sq^1 iota_5)",
            "map r : BU(3) -> BO(6) standard",
            "r^* w_4",
        ),
        ("pull-back",),
    ),
    "bundle": Topic(
        "Names a vector bundle by its total class w, c or p; w_i(E), c_i(E), W_i(E) are classes of its base, "
        "sums, inverses and tensor products with line bundles are bundles, and thom(E) is a space. The declared "
        "class is checked.",
        ("bundle E of rank 3 over RP^4(a) with w = 1 + a", "w_2(E + E)", "on thom(E)", "Sq^1 U"),
        ("vector bundle", "whitney sum"),
    ),
    "compare": Topic(
        "Compares two spaces up to a degree: dimensions, ranks of operations, of their composites, of cup "
        "products. What it prints shows that the two are not isomorphic; that it finds nothing shows nothing.",
        ("compare RP^4, CP^2 to 8",),
    ),
    "comment": Topic(
        "Everything from # to the end of the line is a comment. A line that is one is kept in a saved session.",
        ("# the first relation", "Sq^1 Sq^1 = 0"),
        ("#",),
    ),
}
"""The statements of the language."""

SHELL: dict[str, Topic] = {
    "help": Topic(
        "`help` lists the topics; `help excess` opens one. Names of diagnostics and laws are topics too. A question "
        "mark stands for the word: `?`, `? excess`.",
        ("help excess",),
        ("?",),
    ),
    "explain": Topic(
        "`explain sorts-differ` says what the name of a diagnostic, a law or a finding stands for; `explain` lists "
        "the names.",
        ("explain sorts-differ",),
    ),
    "that": Topic(
        "`that` stands for the last result, `that_3` for result 3: the number of the prompt at which it was "
        "found. A false relation leaves its difference as a result. In a saved session a reference becomes a name"
        " with a `let` line of its own.",
        ("Sq^2 iota_3", "Sq^1 that"),
        ("result", "last"),
    ),
    "declared": Topic("Lists the prime, the space, and every name with its meaning.", ("let x in H^2", "declared")),
    "results": Topic("Lists the results by number.", ("Sq^2 Sq^2", "results")),
    "undo": Topic(
        "Takes back the last declaration (let, space, on, prime), and those results after it that rest on it; "
        "others stay.",
        ("let x in H^2", "undo"),
    ),
    "notation": Topic(
        "Chooses how results are written: as text, in Unicode, or in TeX. All three can be read back.",
        ("notation unicode", "Sq^2 Sq^2 iota_3", "notation latex", "that"),
    ),
    "keys": Topic(
        "Chooses the keys of the line editor: those of Emacs or those of vi.",
        ("keys vi", "keys emacs"),
        ("emacs", "vi"),
    ),
    "copy": Topic(
        "Writes the TeX of the last answer, or of a result by number, and puts it on the clipboard where the "
        "terminal allows it (by the escape OSC 52).",
        ("Sq^2 Sq^2 iota_3", "copy"),
        ("clipboard",),
    ),
    "save": Topic(
        "Writes the session as a script that `opslang run` answers alike. A file that exists is kept, unless "
        "`save over FILE` says otherwise.",
        (),
        ("script",),
    ),
    "read": Topic("Runs the lines of a script as if they were typed here.", ()),
    "limit": Topic(
        "Shows or sets the number of terms that one computation may work with. Ctrl-C stops a computation at any time.",
        ("limit 5000000",),
    ),
    "afresh": Topic("Forgets everything said in this session and begins a new one.", ("afresh",)),
    "leave": Topic("Ends the session, as Ctrl-D on an empty line does.", (), ("exit", "quit", "q")),
    "editing": Topic(
        "Enter runs the input, or goes on to a next line while a bracket is open or an operator stands at the "
        "end; Alt-Enter (with the keys of Emacs) always begins a next line. Tab completes: \\iota becomes its "
        "sign. Ctrl-R searches earlier lines; Up finds those that begin alike. Ctrl-C drops the input, or stops a"
        " computation.",
        (),
        ("tab", "enter", "history", "search", "keyboard"),
    ),
}
"""The statements of the shell, and what else belongs to it."""
