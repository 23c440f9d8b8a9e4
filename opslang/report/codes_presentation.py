"""The diagnostic names of presented rings: what can be wrong with generators, relations and given operations."""

from __future__ import annotations

from opslang.report.code import Code

PRESENTATION_CODES: dict[str, Code] = {
    "adem-violated": Code(
        title="Given operations that break an Adem relation",
        explanation=(
            "Both sides of the relation are computed from what was given, and they differ. The place is that of the "
            "last given operation that the left side uses; any other one of them may be the wrong one."
        ),
        example="space R = F_2[u:2, v:3] where Sq^1 u = v, Sq^2 v = 0",
    ),
    "bockstein-squared": Code(
        title="Given Bocksteins whose square is not 0",
        explanation="The Bockstein of a Bockstein is 0.",
        example="prime 3\nspace R = F_3[x:1, y:2, z:3] where beta x = y, beta y = z, P^1 z = 0",
    ),
    "checked-in-part": Code(
        title="A presentation checked up to a degree",
        explanation=(
            "What there is to check of a presentation is finite. It is looked at up to degree 64, or to N where "
            "`to N` stands at the end; this note says that something lies above."
        ),
        example="space R = F_2[u:40] where Sq^1 u = 0",
    ),
    "given-degree": Code(
        title="A given value of the wrong degree",
        explanation="Sq^i raises the degree by i, P^i by 2i(p-1), the Bockstein by 1.",
        example="space R = F_2[u:2, v:4] where Sq^1 u = v",
    ),
    "given-form": Code(
        title="What is given is not an operation on a generator",
        explanation=(
            "Behind `where` stand operations on generators: `Sq^2 u = …`, `P^1 u = …`, `beta u = …`, or the total "
            "operation, `Sq u = u + …`. A longer word may stand there where all its letters but the first give "
            "generators: `Sq^2 Sq^1 u = w` behind `Sq^1 u = v`."
        ),
        example="space R = F_2[u:2, v:3] where Sq^1 (u^2) = 0",
    ),
    "given-twice": Code(
        title="An operation given twice",
        explanation="Each operation on a generator has one value. A total operation gives all of them at once.",
        example="space R = F_2[u:2, v:3] where Sq^1 u = v, Sq^1 u = 0",
    ),
    "given-unstable": Code(
        title="A given value against instability",
        explanation=(
            "Sq^i u is 0 for i > |u| and u^2 for i = |u|; P^i u is 0 for 2i > |u| and u^p for 2i = |u|, and "
            "beta P^i u is 0 for 2i >= |u|."
        ),
        example="space R = F_2[u:2, v:4] where Sq^2 u = v",
    ),
    "graded-sign": Code(
        title="A sum that overlooks the sign of odd classes",
        explanation=(
            "At an odd prime y x = -x y for classes of odd degree. The sum would be 0 if they commuted, so it is "
            "likely meant to say that they do; with the sign it says that a product is 0."
        ),
        example="prime 3\nspace R = F_3[x:1, y:3] / (x y - y x)",
    ),
    "ideal-not-closed": Code(
        title="Relations that are not closed under the operations",
        explanation=(
            "By the Cartan formula an operation on a relation is a polynomial in the generators, and it must be 0 by "
            "the relations. The help names the relations that are missing, those of lowest degree first."
        ),
        example="space R = F_2[u:2, v:3] / (u^3) where Sq^1 u = v, Sq^2 v = u v",
    ),
    "not-a-polynomial": Code(
        title="A relation or a value that is no polynomial in the generators",
        explanation="Relations and values are made of generators, numbers, sums, products and powers.",
        example="space R = F_2[u:2, v:3] / (Sq^1 u + v)",
    ),
    "not-given": Code(
        title="Operations on generators that were not given",
        explanation=(
            "What is not given is not 0. It may follow: from its degree, from instability, from a group that is 0, "
            "from the Adem relations. Where nothing determines an operation it is refused when it is needed."
        ),
        example="space R = F_2[u:2, v:3]",
    ),
    "odd-square": Code(
        title="The square of a class of odd degree",
        explanation="At an odd prime the square of a class of odd degree is 0, so a product that holds it is 0.",
        example="prime 3\nspace R = F_3[x:1, y:2] where beta x = x x",
    ),
    "relation-degrees": Code(
        title="A relation with terms of different degrees",
        explanation="A cohomology ring is graded, so its relations are homogeneous.",
        example="space R = F_2[u:2, v:3] / (u^2 + v)",
    ),
    "relation-unit": Code(
        title="A relation that makes the ring 0",
        explanation="A relation of degree 0 says that 1 is 0.",
        example="space R = F_2[u:2] / (1)",
    ),
}
