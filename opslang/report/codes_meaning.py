"""The diagnostic names of lowering and normalising."""

from __future__ import annotations

from opslang.report.code import Code

MEANING_CODES: dict[str, Code] = {
    "ambiguous-power": Code(
        title="An operation before a bracket with a power",
        explanation=(
            "Sq^2(x)^2 is Sq^2 of x^2, because a power binds tighter than an operation. For the square of Sq^2 x "
            "write (Sq^2 x)^2."
        ),
        example="let x in H^2\nSq^2(x)^2",
    ),
    "ambiguous-scope": Code(
        title="An operation before a product",
        explanation=(
            "An operation acts on the one factor at its right: Sq^2 x y is (Sq^2 x) y. To apply it to the product"
            " write Sq^2(x y)."
        ),
        example="let x, y in H^2\nSq^2 x y",
    ),
    "bockstein-undefined": Code(
        title="A higher Bockstein where it is not defined",
        explanation=(
            "beta_k is defined on classes on which the lower Bocksteins vanish. On a class with coefficients "
            "Z/p^j it is 0 for k < j, a class for k = j, and not defined in general for k > j."
        ),
        example="let x in H^2\nbeta_2 x",
    ),
    "classes-dropped": Code(
        title="A new prime drops the classes",
        explanation=(
            "A class has coefficients at one prime. After `prime p` the classes and abbreviations declared before"
            " are gone; spaces stay."
        ),
        example="let x in H^2\nprime 3",
    ),
    "classes-of-different-spaces": Code(
        title="One name, two classes",
        explanation=(
            "Two classes of the same name, from different spaces or declarations, stand in one expression, so its"
            " value could not be read. Give one of them another name."
        ),
        example="on K(Z, 3)\nlet u = iota_3\non K(Z/2, 3)\nu + iota_3",
    ),
    "coefficients-prime": Code(
        title="Coefficients at another prime",
        explanation=("A class with coefficients F_q belongs to the prime q. Choose the prime before the declaration."),
        example="let x in H^2(X; F_3)",
    ),
    "modulus": Code(
        title="A congruence modulo another number",
        explanation=(
            "Relations are modulo the prime, 2 unless `prime` says otherwise.  A final `(mod 2)` falls away where it"
            " names that prime."
        ),
        example="Sq^1 Sq^2 = Sq^3 (mod 3)",
    ),
    "declared-twice": Code(
        title="A name stands twice in one declaration",
        explanation=("Each name of a declaration is a class of its own."),
        example="let x, x in H^2",
    ),
    "degree-range": Code(
        title="A degree out of range",
        explanation=("Fundamental and declared classes have degree at least 1."),
        example="let x in H^0",
    ),
    "degrees-differ": Code(
        title="The sides of a relation have different degrees",
        explanation=(
            "An equation between homogeneous elements is possible in one degree only, so the relation is false."
        ),
        example="Sq^2 Sq^2 iota_3 = Sq^3 iota_3",
    ),
    "derivation-too-long": Code(
        title="A derivation longer than anybody reads",
        explanation=(
            "The derivation is cut off after its first steps, or left out. The answer does not depend on it: it "
            "is computed by the fast engine."
        ),
        example="why Sq^40 Sq^39 Sq^38 Sq^37",
    ),
    "engines-disagree": Code(
        title="The two engines give different answers",
        explanation=(
            "The engine that computes and the engine that explains are two programs. Where they differ one of "
            "them is wrong, and no answer is given. Please report the expression."
        ),
        example="",
    ),
    "group": Code(
        title="A group that does not fit here",
        explanation=(
            "Classes are declared with coefficients in one cyclic group; spaces take any finitely generated "
            "abelian group, as a sum of cyclic ones."
        ),
        example="let x in H^2(X; Z^2)",
    ),
    "index-range": Code(
        title="An index out of range",
        explanation=("beta_k needs k >= 1, Q_k needs k >= 0, an exponent is at least 0."),
        example="let x in H^2\nbeta_0 x",
    ),
    "index-too-large": Code(
        title="A number beyond all use",
        explanation=("Numbers and degrees are kept below 2 to the power 2,000."),
        example="let x in H^2\nQ_5000 x",
    ),
    "index-variable": Code(
        title="A variable where a number is needed",
        explanation=("Letters in index positions are index variables. Relations with variables are not decided yet."),
        example="Sq^{2n-1} Sq^n = 0",
    ),
    "inhomogeneous-sum": Code(
        title="A sum of different degrees",
        explanation=("A sum of terms of different degrees is an element, but more often it is a slip."),
        example="let x in H^2\nx + Sq^1 x",
    ),
    "modulo-lower-bocksteins": Code(
        title="A value defined modulo lower Bocksteins",
        explanation=(
            "On p-th powers beta_{r+1} is defined modulo the images of beta_1 … beta_r. Relations are decided "
            "modulo them."
        ),
        example="let x in H^2\nbeta_2(x^2)",
    ),
    "no-space": Code(
        title="No space to look at",
        explanation=("basis and series need a space: name one, or choose one with `on` before."),
        example="basis H^4",
    ),
    "no-such-class": Code(
        title="A fundamental class that the space does not have",
        explanation=(
            "iota_n is the fundamental class of degree n of the current space; primes number several of the same "
            "degree."
        ),
        example="on K(Z/2, 3)\niota_4",
    ),
    "not-a-prime": Code(
        title="The number is not a prime",
        explanation=("`prime p` takes a prime number."),
        example="prime 4",
    ),
    "not-in-the-algebra": Code(
        title="A total or higher operation without a class",
        explanation=(
            "Total operations and beta_k with k >= 2 are not elements of the Steenrod algebra; they may be "
            "applied to a class, nothing else."
        ),
        example="beta_2 Sq^2",
    ),
    "not-known": Code(
        "outside what is known of the space",
        "The space is known, but not what is asked of it: an operation on a class on which "
        "it was not given, a rank or a degree out of "
        "range, a bundle without a Thom class.",
        "on BSpin(10)",
    ),
    "ambiguous-class": Code(
        "A class name that several factors have",
        "In a product of spaces the classes of a later factor carry primes where an earlier one has the same names, x "
        "and x'; that is seen to up to degree 64. Beyond it give the classes different letters.",
        "space R = F_2[u:80] / (u^2) where Sq u = u\non R x R\nu",
    ),
    "bundle": Code(
        "a bundle that cannot be, or a class that it does not have",
        "The declared total class is not that of a bundle (Wu's formula, degrees, rank, coefficients), or what is "
        "asked of a bundle is not known here.",
        "on RP^4\nbundle E of rank 3 over RP^4 with w = 1 + x^3",
    ),
    "map": Code(
        "a map that cannot be read",
        "A map says where each generator of its target goes, or is the diagonal, a projection or a standard map; "
        "maps are composed where they meet.",
        "map f : K(Z/2, 2) -> K(Z/2, 2) with iota_2^2 -> iota_2",
    ),
    "map-coefficients": Code(
        "the image of a class with larger coefficients",
        "An integral class, or one with coefficients Z/p^k, goes to a class that is seen to be the reduction of "
        "one: its Bocksteins vanish.",
        "map f : K(Z/2, 2) -> K(Z, 2) with iota_2 -> iota_2",
    ),
    "map-incomplete": Code(
        "a generator without an image",
        "Every generator of the target of a map has an image. It is 0 of itself only where the source has no class "
        "of that degree.",
        "map f : CP^3 -> K(Z, 2) x K(Z, 4) with iota_2 -> y",
    ),
    "map-operations": Code(
        "images that no map gives",
        "A pull-back is a map of rings and commutes with operations. Here an operation on a generator of the "
        "target, or a relation, does not hold for the images.",
        "map f : RP^4(a) -> BO(3) with w -> 1 + a^3",
    ),
    "map-unchecked": Code(
        "images that were not checked throughout",
        "An operation on a class of the target is not known here, or has an indeterminacy, so that the images were "
        "not compared there.",
        "map f : HP^3 -> BSpin(5) with w_4 -> u, Delta_8 -> u^2",
    ),
    "not-transgressive": Code(
        "a class without transgression or suspension",
        "In K(G, n) -> * -> K(G, n+1) the transgressive classes are the P^I iota_n and their p^j-th powers, and "
        "sums of these. Both belong to one K(G, n).",
        "on K(Z/2, 2)\ntransgression(iota_2 Sq^1 iota_2)",
    ),
    "unknown-map": Code(
        "a map that is not named",
        "Maps are named with `map f : X -> Y with …`.",
        "g^*(Sq^2 iota_3)",
    ),
    "not-yet-supported": Code(
        title="Not yet supported",
        explanation=("The notation is known, but what it means is not built yet."),
        example="space B = BO(3)",
    ),
    "operation-after-class": Code(
        title="An operation with nothing to act on",
        explanation=(
            "An operation acts on the one factor at its right; after the last class of a product there is none."
        ),
        example="let x in H^2\nx Sq^1",
    ),
    "prime-of-operation": Code(
        title="An operation of another prime",
        explanation=("Sq^i are operations at 2, P^i at odd primes. The Bockstein beta exists at all of them."),
        example="prime 3\nSq^2 Sq^2",
    ),
    "redeclared": Code(
        title="A name is declared again",
        explanation=("From this line on the name stands for the new declaration."),
        example="let x in H^2\nlet x in H^3",
    ),
    "sorts-differ": Code(
        title="Operations and classes mixed",
        explanation=(
            "Every expression is an operation or a class. They cannot be added or compared; an operation is "
            "applied to a class at its right."
        ),
        example="let x in H^2\nSq^2 + x",
    ),
    "space-arguments": Code(
        "a named space written otherwise",
        "BO, BO(n), RP^n, RP^n(a), lens(m), thom(BO(n)): a number, or letters for the classes, stand in the brackets.",
        "on lens",
    ),
    "too-large": Code(
        title="More terms than the limit",
        explanation=("The statement needs more terms than the limit allows. `--limit N` raises it."),
        example="Sq^{512} Sq^{500} Sq^{490} Sq^{480} Sq^{470} Sq^{460}",
    ),
    "unknown-name": Code(
        title="A name that is not declared",
        explanation=("Classes and abbreviations are declared with `let`."),
        example="y",
    ),
    "unknown-space": Code(
        title="A space that is not named",
        explanation=("Spaces are named with `space X = …`."),
        example="on Y",
    ),
    "zero-at-the-prime": Code(
        title="A class that is 0 at the prime",
        explanation=(
            "At the prime p only the p-part of Z/m counts; where there is none the space is a point at p and its "
            "classes are 0."
        ),
        example="on K(Z/3, 2)",
    ),
}
