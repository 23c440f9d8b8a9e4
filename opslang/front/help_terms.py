"""Help on the terms of the trade that the tool uses.  Text only; the examples are run by the tests and by `help`.

Sources: Steenrod and Epstein, Cohomology Operations (Annals of Mathematics Studies 50, 1962); Serre, Cohomologie
modulo 2 des complexes d'Eilenberg-MacLane (Comment. Math. Helv. 27, 1953); Milnor, The Steenrod algebra and its dual
(Annals of Mathematics 67, 1958); Adem, The iteration of the Steenrod squares (Proc. Nat. Acad. Sci. 38, 1952).
"""

from __future__ import annotations

from opslang.front.help_statements import Topic

TERMS: dict[str, Topic] = {
    "operation": Topic(
        "A natural map between cohomology groups. The stable ones with F_p coefficients form the Steenrod algebra. "
        "Every expression here is either an operation or a class; the two are not added.",
        ("Sq^2 Sq^1", "Sq^2 Sq^1 iota_2"),
        ("steenrod algebra", "sort"),
    ),
    "class": Topic("An element of the cohomology of a space with coefficients F_p.", ("let x in H^2", "Sq^2 x = x^2")),
    "square": Topic(
        "Sq^i raises the degree by i at the prime 2. Sq^0 is the identity, Sq^1 the Bockstein, Sq^n x = x^2 for x"
        " of degree n.",
        ("Sq^3 iota_3 = iota_3^2", "Sq^4 iota_3 = 0"),
        ("sq", "steenrod square"),
    ),
    "reduced power": Topic(
        "P^i raises the degree by 2i(p - 1) at an odd prime p. P^0 is the identity; P^n x = x^p for x of degree 2n.",
        ("prime 3", "P^2 iota_4 = iota_4^3"),
        ("p", "power"),
    ),
    "bockstein": Topic(
        "beta is the connecting map of 0 -> Z/p -> Z/p^2 -> Z/p -> 0; at 2 it is Sq^1. beta_k belongs to 0 -> Z/p"
        " -> Z/p^{k+1} -> Z/p^k -> 0 and is defined on classes whose lower Bocksteins vanish, up to the images of"
        " those.",
        ("beta beta = 0", "let z in H^3(X; Z/4)", "Sq^1 z = 0", "beta_2 z"),
        ("beta", "higher bockstein"),
    ),
    "admissible": Topic(
        "A word Sq^{i_1} Sq^{i_2} ... is admissible when each i_j >= 2 i_{j+1}; at odd p, when each s_j >= p "
        "s_{j+1} + e_j, with e_j = 1 where a Bockstein stands between them. The admissible words are a basis of "
        "the Steenrod algebra.",
        ("Sq^4 Sq^2 Sq^1", "Sq^2 Sq^4"),
        ("admissible word", "word"),
    ),
    "adem": Topic(
        "The Adem relations write Sq^a Sq^b with a < 2b by admissible words: Sq^a Sq^b = sum over j of C(b - 1 - "
        "j, a - 2j) Sq^{a+b-j} Sq^j. At odd primes there are two, for P^a P^b and for P^a beta P^b.",
        ("Sq^2 Sq^4 = Sq^6 + Sq^5 Sq^1", "why Sq^2 Sq^2"),
        ("adem relation", "adem relations"),
    ),
    "cartan": Topic(
        "The Cartan formula: Sq^n (x y) is the sum of Sq^i x Sq^{n-i} y. The total operation Sq is "
        "multiplicative; beta is a derivation with a sign.",
        ("let x, y in H^1", "Sq^2 (x y) = x^2 y^2"),
        ("cartan formula",),
    ),
    "instability": Topic(
        "Sq^i x = 0 for i above the degree of x, and Sq^i x = x^2 for i equal to it; at odd p, P^i x = 0 for 2i "
        "above the degree.",
        ("Sq^5 iota_3 = 0", "Sq^2 Sq^1 iota_1 = iota_1^4"),
        ("unstable", "instability condition"),
    ),
    "excess": Topic(
        "Of an admissible word at 2: 2 i_1 - (i_1 + i_2 + ...), the sum of the i_j - 2 i_{j+1}. A word of excess "
        "above n is 0 on a class of degree n; one of excess n gives a p-th power. The excess of a sum is the "
        "least of its terms'.",
        ("Sq^4 Sq^2 Sq^1", "Sq^4 Sq^1 iota_2 = 0", "Sq^3 Sq^1 iota_2 = (Sq^1 iota_2)^2"),
    ),
    "degree": Topic(
        "How far an operation raises, or where a class lives. A relation between different degrees is false.",
        ("Sq^4 Sq^2", "Sq^4 Sq^2 iota_4"),
    ),
    "fundamental class": Topic(
        "iota_n, the class of K(G, n) that every class of degree n is pulled back from. With no space chosen it "
        "is that of K(Z/p, n). In a product iota_n' is the second of its degree.",
        ("on K(Z/2, 3) x K(Z/2, 3)", "Sq^2 iota_3 iota_3'"),
        ("iota", "universal example", "universal class"),
    ),
    "eilenberg-mac lane space": Topic(
        "K(G, n) has the group G in the homotopy of degree n and nothing else. At 2 the cohomology of K(Z/2, n) "
        "is the polynomial algebra on Sq^I iota_n, I admissible of excess below n.",
        ("basis H^6(K(Z/2, 2))", "series K(Z, 3) to 10"),
        ("k(g, n)", "k", "eilenberg-maclane space"),
    ),
    "canonical form": Topic(
        "A sum of distinct terms in a fixed order: admissible words for operations; for classes, monomials in the"
        " generators of the space. The same element is always written alike, and reads back.",
        ("Sq^2 Sq^3 = Sq^5 + Sq^4 Sq^1", "iota_2 Sq^1 iota_2 + Sq^1 iota_2 iota_2"),
        ("normal form",),
    ),
    "conjugation": Topic(
        "chi, the antipode of the Steenrod algebra: it reverses products (with a sign at odd p).",
        ("chi(Sq^4)", "chi(chi(Sq^4 Sq^2)) = Sq^4 Sq^2"),
        ("chi", "antipode"),
    ),
    "milnor primitive": Topic(
        "Q_0 is the Bockstein, and Q_{k+1} the commutator of P^{p^k} (at 2, Sq^{2^{k+1}}) and Q_k. Each is a "
        "derivation and squares to 0.",
        ("Q_1 = Sq^3 + Sq^2 Sq^1", "Q_1 Q_1 = 0"),
        ("q", "milnor's primitive", "primitive"),
    ),
    "total operation": Topic(
        "Sq without an index is the sum of all Sq^i, P that of all P^i. It is multiplicative. It is no element of"
        " the algebra and acts on classes only.",
        ("let x in H^1", "Sq(x)", "Sq(x^3)"),
        ("total square", "total power"),
    ),
    "suspension": Topic(
        "The suspension takes iota_{n+1} to iota_n, commutes with operations, and kills products. So an operation"
        " that is the top square on iota_n is decomposable there, and is no product any more one degree higher.",
        ("Sq^3 iota_3", "Sq^3 iota_4"),
        ("stable",),
    ),
    "transgression": Topic(
        "In the path fibration over K(Z/p, n + 1) the class iota_n of the fibre transgresses to iota_{n+1}, and "
        "operations go along: Sq^I iota_n to Sq^I iota_{n+1}. This is how the cohomology of K(Z/2, n) is found "
        "from that of K(Z/2, 1).",
        ("Sq^2 iota_2 = iota_2^2", "Sq^2 iota_3"),
        ("transgress", "path fibration"),
    ),
    "cup product": Topic(
        "The product of classes: x y, x * y or x \\cup y. It is graded commutative.",
        ("prime 3", "let x, y in H^3", "x y = - y x"),
        ("cup", "product"),
    ),
    "cross product": Topic(
        "a \\otimes b: in a product of spaces, the cup product of the two classes pulled back.",
        ("on K(Z/2, 1) x K(Z/2, 2)", "Sq^1 (iota_1 ⊗ iota_2)"),
        ("cross", "tensor"),
    ),
    "integral class": Topic(
        "A class with coefficients Z. Its reduction mod p is killed by every Bockstein.",
        ("let c in H^3(X; Z)", "Sq^1 c = 0", "Sq^3 c = c^2"),
        ("integral", "reduction"),
    ),
    "indeterminacy": Topic(
        "beta_k of a class is defined modulo the images of the lower Bocksteins. A relation that depends on the "
        "choice is not decided.",
        ("let z in H^2(X; Z/4)", "beta_2 z"),
    ),
    "scalar": Topic(
        "An integer, read mod p. 0 and 1 take the sort of what they are added to or compared with.",
        ("prime 5", "7 P^1 = 2 P^1"),
        ("coefficient",),
    ),
}
"""The terms of the trade."""
