"""The diagnostic names of lowering and normalising."""

from __future__ import annotations

from opslang.report.code import Code

MEANING_CODES: dict[str, Code] = {
    "ambiguous-power": Code(
        "an operation before a bracket with a power",
        "Sq^2(x)^2 is Sq^2 of x^2, because a power binds tighter than an operation. For the square of Sq^2 x write (Sq^2 x)^2.",
        "let x in H^2\nSq^2(x)^2",
    ),
    "ambiguous-scope": Code(
        "an operation before a product",
        "An operation acts on the one factor at its right: Sq^2 x y is (Sq^2 x) y. To apply it to the product write Sq^2(x y).",
        "let x, y in H^2\nSq^2 x y",
    ),
    "bockstein-undefined": Code(
        "a higher Bockstein where it is not defined",
        "beta_k is defined on classes on which the lower Bocksteins vanish. On a class with coefficients Z/p^j it is 0 for k < j, "
        "a class for k = j, and not defined in general for k > j.",
        "let x in H^2\nbeta_2 x",
    ),
    "classes-dropped": Code(
        "a new prime drops the classes",
        "A class has coefficients at one prime. After `prime p` the classes and abbreviations declared before are gone; spaces stay.",
        "let x in H^2\nprime 3",
    ),
    "classes-of-different-spaces": Code(
        "one name, two classes",
        "Two classes of the same name, from different spaces or declarations, stand in one expression, so its value could not be read. "
        "Give one of them another name.",
        "on K(Z, 3)\nlet u = iota_3\non K(Z/2, 3)\nu + iota_3",
    ),
    "coefficients-prime": Code(
        "coefficients at another prime",
        "A class with coefficients F_q belongs to the prime q. Choose the prime before the declaration.",
        "let x in H^2(X; F_3)",
    ),
    "declared-twice": Code(
        "a name stands twice in one declaration", "Each name of a declaration is a class of its own.", "let x, x in H^2"
    ),
    "degree-range": Code(
        "a degree out of range",
        "Fundamental and declared classes have degree at least 1.",
        "let x in H^0",
    ),
    "degrees-differ": Code(
        "the sides of a relation have different degrees",
        "An equation between homogeneous elements is possible in one degree only, so the relation is false.",
        "Sq^2 Sq^2 iota_3 = Sq^3 iota_3",
    ),
    "engines-disagree": Code(
        "the two engines give different answers",
        "The engine that computes and the engine that explains are two programs. Where they differ one of them is wrong, and no answer is given. "
        "Please report the expression.",
        "",
    ),
    "group": Code(
        "a group that does not fit here",
        "Classes are declared with coefficients in one cyclic group; spaces take any finitely generated abelian group, as a sum of cyclic ones.",
        "let x in H^2(X; Z^2)",
    ),
    "index-range": Code(
        "an index out of range",
        "beta_k needs k >= 1, Q_k needs k >= 0, an exponent is at least 0.",
        "let x in H^2\nbeta_0 x",
    ),
    "index-too-large": Code(
        "a number beyond all use",
        "Numbers and degrees are kept below 2 to the power 2,000.",
        "let x in H^2\nQ_5000 x",
    ),
    "index-variable": Code(
        "a variable where a number is needed",
        "Letters in index positions are index variables. Relations with variables are not decided yet.",
        "Sq^{2n-1} Sq^n = 0",
    ),
    "inhomogeneous-sum": Code(
        "a sum of different degrees",
        "A sum of terms of different degrees is an element, but more often it is a slip.",
        "let x in H^2\nx + Sq^1 x",
    ),
    "interrupted": Code("stopped by an interrupt", "The statement was stopped; the rest of the script still runs.", ""),
    "modulo-lower-bocksteins": Code(
        "a value defined modulo lower Bocksteins",
        "On p-th powers beta_{r+1} is defined modulo the images of beta_1 … beta_r. Relations are decided modulo them.",
        "let x in H^2\nbeta_2(x^2)",
    ),
    "no-such-class": Code(
        "a fundamental class that the space does not have",
        "iota_n is the fundamental class of degree n of the current space; primes number several of the same degree.",
        "on K(Z/2, 3)\niota_4",
    ),
    "no-space": Code(
        "no space to look at", "basis and series need a space: name one, or choose one with `on` before.", "basis H^4"
    ),
    "not-a-prime": Code("the number is not a prime", "`prime p` takes a prime number.", "prime 4"),
    "not-in-the-algebra": Code(
        "a total or higher operation without a class",
        "Total operations and beta_k with k >= 2 are not elements of the Steenrod algebra; they may be applied to a class, nothing else.",
        "beta_2 Sq^2",
    ),
    "not-yet-supported": Code(
        "not yet supported", "The notation is known, but what it means is not built yet.", "space B = BO(3)"
    ),
    "operation-after-class": Code(
        "an operation with nothing to act on",
        "An operation acts on the one factor at its right; after the last class of a product there is none.",
        "let x in H^2\nx Sq^1",
    ),
    "prime-of-operation": Code(
        "an operation of another prime",
        "Sq^i are operations at 2, P^i at odd primes. The Bockstein beta exists at all of them.",
        "prime 3\nSq^2 Sq^2",
    ),
    "redeclared": Code(
        "a name is declared again",
        "From this line on the name stands for the new declaration.",
        "let x in H^2\nlet x in H^3",
    ),
    "sorts-differ": Code(
        "operations and classes mixed",
        "Every expression is an operation or a class. They cannot be added or compared; an operation is applied to a class at its right.",
        "let x in H^2\nSq^2 + x",
    ),
    "too-large": Code(
        "more terms than the limit",
        "The statement needs more terms than the limit allows. `--limit N` raises it.",
        "Sq^{512} Sq^{500} Sq^{490} Sq^{480} Sq^{470} Sq^{460}",
    ),
    "too-many-steps": Code(
        "a derivation longer than is shown",
        "Only the first steps of the derivation are shown; the answer is complete.",
        "",
    ),
    "unknown-name": Code("a name that is not declared", "Classes and abbreviations are declared with `let`.", "y"),
    "unknown-space": Code("a space that is not named", "Spaces are named with `space X = …`.", "on Y"),
    "zero-at-the-prime": Code(
        "a class that is 0 at the prime",
        "At the prime p only the p-part of Z/m counts; where there is none the space is a point at p and its classes are 0.",
        "on K(Z/3, 2)",
    ),
}
