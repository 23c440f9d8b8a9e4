"""Maps: pull-backs commute with everything, standard maps are maps of algebras, and what is no map is refused."""

from __future__ import annotations

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

import opslang
from opslang.api import OpslangError, Script

K_MAPS = {
    2: [
        ("K(Z/2, 2)", "K(Z/2, 3)", "iota_3 -> Sq^1 iota_2"),
        ("K(Z/2, 2)", "K(Z/2, 5)", "iota_5 -> Sq^2 Sq^1 iota_2 + iota_2 Sq^1 iota_2"),
        ("K(Z/2, 1)", "K(Z/2, 3)", "iota_3 -> iota_1^3"),
        ("RP(a) x RP(b)", "K(Z/2, 2)", "iota_2 -> a b + a^2"),
        ("BSO(4)", "K(Z/2, 3) x K(Z/2, 2)", "iota_3 -> w_3, iota_2 -> w_2"),
        ("K(Z/4, 2)", "K(Z/4, 2) x K(Z, 3)", "iota_2 -> iota_2, iota_3 -> beta_2 iota_2"),
    ],
    3: [
        ("K(Z/3, 2)", "K(Z/3, 3)", "iota_3 -> beta iota_2"),
        ("K(Z/3, 3)", "K(Z/3, 7)", "iota_7 -> 2 P^1 iota_3"),
        ("lens(3)", "K(Z/3, 3)", "iota_3 -> x y"),
        ("BU(2)", "K(Z, 4) x K(Z, 2)", "iota_4 -> c_2 - c_1^2, iota_2 -> 2 c_1"),
    ],
}


def script(prime: int, *lines: str) -> Script:
    found = Script(prime)
    for line in lines:
        found.run(line)
    return found


def letters(prime: int) -> st.SearchStrategy[str]:
    if prime == 2:
        return st.integers(1, 5).map(lambda i: f"Sq^{i}")
    return st.sampled_from(["beta", "P^1", "P^2"])


@st.composite
def classes(draw: st.DrawFn, prime: int, target: str) -> str:
    """A product of words on fundamental classes of the target."""
    degrees = [part.split(",")[1].strip(" )") for part in target.split(" x ")]
    factors = []
    for _ in range(draw(st.integers(1, 3))):
        word = " ".join(draw(st.lists(letters(prime), max_size=2)))
        factors.append(f"({word} iota_{draw(st.sampled_from(degrees))})")
    return " ".join(factors)


@pytest.mark.parametrize(("prime", "case"), [(p, case) for p, cases in K_MAPS.items() for case in cases])
def test_pull_backs_commute_with_everything(prime: int, case: tuple[str, str, str]) -> None:
    """The canonical form in the target, the operations and the products go over to the source."""
    source, target, images = case
    lines = script(prime, f"map f : {source} -> {target} with {images}")
    there = script(prime, f"on {target}")

    @settings(deadline=None, max_examples=12)
    @given(classes(prime, target), classes(prime, target), letters(prime))
    def commutes(x: str, y: str, op: str) -> None:
        assert lines.compare(f"f^*({op}({x} {y})) = {op}(f^*({x}) f^*({y}))")
        assert lines.compare(f"f^*({op}({x})) = f^*({there.normalise(f'{op}({x})').text})")

    commutes()


STANDARD = [
    (2, "BSO(4)", "BO(4)", "w_2 w_3 w_4"),
    (2, "BO(3)", "BO", "w_1 w_2 w_3 w_4"),
    (2, "BSpin(7)", "BSO(7)", "w_2 w_4 w_5 w_6"),
    (2, "BU(3)", "BSO(6)", "w_2 w_3 w_4 w_6"),
    (2, "BO(3)", "BU(3)", "c_1 c_2 c_3"),
    (2, "BSp(2)", "BU(4)", "c_1 c_2 c_4"),
    (2, "BU(2)", "BSp(2)", "q_1 q_2"),
    (2, "BSU(3)", "BU(3)", "c_1 c_2 c_3"),
    (2, "RP(a) x RP(b) x RP(c)", "BO(3)", "w_1 w_2 w_3"),
    (2, "CP(a) x CP(b)", "BU(2)", "c_1 c_2"),
    (2, "RP^7", "CP^3", "y"),
    (2, "CP^7", "HP^3", "u"),
    (2, "CP^3", "HP^3", "u"),
    (2, "RP^3", "RP^5", "x"),
    (2, "HP^3", "BSp(2)", "q_1 q_2"),
    (2, "HP^3", "BU(2)", "c_1 c_2"),
    (2, "K(Z, 3)", "K(Z/2, 3)", "iota_3"),
    (2, "K(Z/4, 2)", "K(Z/2, 2)", "iota_2"),
    (3, "BU(3)", "BSO(6)", "p_1 p_2 e"),
    (3, "BSO(5)", "BU(5)", "c_1 c_2 c_4"),
    (3, "BSp(2)", "BU(4)", "c_2 c_4"),
    (3, "BU(3)", "BSp(3)", "q_1 q_2 q_3"),
    (3, "BSO(4)", "BSO(6)", "p_1 p_2 e"),
    (5, "HP^4", "BU(2)", "c_1 c_2"),
    (3, "CP(a) x CP(b)", "BU(2)", "c_1 c_2"),
    (3, "CP^4", "HP^4", "u"),
]


@pytest.mark.parametrize(
    ("prime", "source", "target", "names"), STANDARD, ids=[f"{s}->{t} at {p}" for p, s, t, _ in STANDARD]
)
def test_standard_maps_are_maps_of_algebras(prime: int, source: str, target: str, names: str) -> None:
    lines = script(prime, f"map f : {source} -> {target} standard")
    there = script(prime, f"on {target}")
    operations = ["Sq^1", "Sq^2", "Sq^3", "Sq^4"] if prime == 2 else ["beta", "P^1", "P^2"]
    for name in names.split():
        for op in operations:
            assert lines.compare(f"f^*({there.normalise(f'{op} {name}').text}) = {op} f^*({name})"), f"{op} {name}"


@pytest.mark.parametrize(
    ("prime", "lines", "relation"),
    [
        # Milnor and Stasheff 1974, problem 14-B and chapter 15: real bundles under complex ones
        (2, ["map r : BU(3) -> BO(6) standard"], "r^*(w_4 + w_3 + w_2) = r^*w_4 + r^*w_2"),
        (2, ["map r : BU(2) -> BO(4) standard", "on BU(2)"], "r^* w_4 = c_2"),
        (3, ["map r : BU(2) -> BSO(4) standard", "on BU(2)"], "r^* p_1 = c_1^2 - 2 c_2"),
        (3, ["map r : BU(2) -> BSO(4) standard", "on BU(2)"], "r^* e = c_2"),
        # the complexification: c_i mod 2 is w_i^2 (Milnor and Stasheff 1974, problem 15-A)
        (2, ["map c : BO(3) -> BU(3) standard", "on BO(3)"], "c^* c_2 = w_2^2"),
        # the diagonal gives the cup product (common practice)
        (
            2,
            ["map d : K(Z/2, 3) -> K(Z/2, 3) x K(Z/2, 3) diagonal", "on K(Z/2, 3)"],
            "d^*(iota_3 ⊗ iota_3') = iota_3^2",
        ),
        (2, ["map d : RP -> RP(a) x RP(b) diagonal", "on RP"], "d^*(a b^2) = x^3"),
        (3, ["map d : K(Z/3, 3) -> K(Z/3, 3) x K(Z/3, 3) diagonal", "on K(Z/3, 3)"], "d^*(iota_3 ⊗ iota_3') = 0"),
        (
            2,
            ["map q : K(Z/2, 2) x K(Z/2, 2) -> K(Z/2, 2) projection 2", "on K(Z/2, 2) x K(Z/2, 2)"],
            "q^* iota_2 = iota_2'",
        ),
        (2, ["map q : RP^3(a) x BO(2) x CP^2 -> BO(2) x CP^2 projection 2"], "q^*(w_1 y) = q^* w_1 q^* y"),
        # BSpin -> BSO -> BO kills w_1, w_2, w_3 (Quillen 1971)
        (
            2,
            ["map f : BSpin -> BSO standard", "map g : BSO -> BO standard", "map h = g f", "on BSpin"],
            "h^*(w_1 + w_4) = w_4",
        ),
        # a total class
        (2, ["map h : RP^4(a) -> BO(2) with w -> 1 + a", "on RP^4(a)"], "h^*(w_1 + w_2) = a"),
        # the Pontryagin square lifts the square; beta_2 of it (Browder and Thomas 1962)
        (
            2,
            ["map m : K(Z/2, 2) -> K(Z/4, 4) with iota_4 -> iota_2^2", "on K(Z/2, 2)"],
            "m^* beta_2 iota_4 = iota_2 Sq^1 iota_2 + Sq^2 Sq^1 iota_2",
        ),
    ],
)
def test_values_of_maps(prime: int, lines: list[str], relation: str) -> None:
    assert script(prime, *lines).compare(relation)


@pytest.mark.parametrize(
    ("prime", "line", "name"),
    [
        (2, "map f : K(Z/2, 3) -> K(Z/2, 5) with iota_5 -> Sq^1 iota_3", "degrees-differ"),
        (2, "map f : K(Z/2, 3) -> K(Z/2, 5) with iota_5 -> iota_5", "no-such-class"),
        (2, "map f : K(Z/2, 3) -> K(Z/2, 6) with Sq^1 iota_6 -> Sq^4 iota_3", "map"),
        (2, "map f : K(Z/2, 3) -> K(Z/2, 3) x K(Z/2, 4) with iota_3 -> iota_3", "map-incomplete"),
        (2, "map f : K(Z/2, 3) -> K(Z, 3) with iota_3 -> iota_3", "map-coefficients"),
        (2, "map f : K(Z/2, 3) -> K(Z/4, 4) with iota_4 -> Sq^1 iota_3 ", None),
        (2, "map f : K(Z/2, 2) -> K(Z, 4) with iota_4 -> iota_2^2", "map-coefficients"),
        (2, "map f : K(Z/4, 2) -> K(Z, 2) with iota_2 -> iota_2", "map-coefficients"),
        (2, "map f : BSO(4) -> K(Z, 4) with iota_4 -> w_2^2", None),
        (2, "map f : BSO(4) -> K(Z, 4) with iota_4 -> w_4", None),
        (2, "map f : RP^4(a) -> BO(3) with w -> 1 + a^3", "map-operations"),
        (2, "map f : RP^5(a) -> RP^4(b) with b -> a", "map-operations"),
        (2, "map f : CP^3 -> HP^3 with u -> y^2", None),
        (3, "map f : HP^3 -> CP^3 with y -> u", "degrees-differ"),
        (3, "map f : K(Z/3, 2) -> CP with y -> iota_2", "map-coefficients"),
        (3, "map f : CP^4 -> HP^4 with u -> -y^2", "map-operations"),
        (2, "map f : lens(4) -> lens(2) with x -> x, y -> y", "map"),
        (2, "map f : RP^3 -> K(Z/2, 1) diagonal", "map"),
        (2, "map f : RP^3 -> RP^2 projection 2", "map"),
        (2, "map f : BO(3) -> BSO(3) standard", "map"),
        (2, "map f : BO(3) -> BO(2) standard", "map"),
        (2, "map f : RP^3 -> RP^2 standard", "map"),
        (2, "map f : RP^3(a) -> BO(2) with w -> a", "map"),
        (2, "map f : RP^3(a) -> K(Z/2, 1) with iota_1 -> a, iota_1 -> 0", "map"),
        (2, "map f : RP^3(a) -> K(Z/2, 1) with iota_1 -> Sq^1", "sorts-differ"),
        (2, "map h = g f", "unknown-map"),
        (2, "map f : BO(3) -> thom(BO(3)) with U -> w_3", "map"),
    ],
)
def test_what_is_a_map_and_what_is_none(prime: int, line: str, name: str | None) -> None:
    if name is None:
        script(prime, line)
        return
    with pytest.raises(OpslangError) as refused:
        script(prime, line)
    assert refused.value.name == name


def test_classes_of_two_spaces_do_not_meet() -> None:
    lines = script(2, "map f : RP^3(a) -> K(Z/2, 2) with iota_2 -> a^2", "on K(Z/2, 2)")
    with pytest.raises(OpslangError) as refused:
        lines.normalise("f^* iota_2 + iota_2")
    assert refused.value.name == "classes-of-different-spaces"
    with pytest.raises(OpslangError) as refused:
        script(2, "map f : RP^3(a) -> RP^3(a) standard", "map g : CP^2 -> CP^3 standard", "map h = g f")
    assert refused.value.name == "map"
    with pytest.raises(OpslangError) as refused:
        script(2, "map f : RP^3(a) -> RP^3(b) standard", "let z in H^1").normalise("f^* z")
    assert refused.value.name == "no-such-class"


def test_maps_go_with_the_prime() -> None:
    lines = script(2, "map f : RP^3(a) -> RP^3(b) standard", "prime 3")
    with pytest.raises(OpslangError) as refused:
        lines.normalise("f^* b")
    assert refused.value.name == "unknown-map"


# --- transgression and suspension ------------------------------------------------------------------


@settings(deadline=None, max_examples=40)
@given(st.sampled_from((2, 3)), st.integers(1, 4), st.data())
def test_transgression_and_suspension_commute_with_operations(p: int, n: int, data: st.DataObject) -> None:
    """In K(Z/p, n) -> * -> K(Z/p, n+1): P^I iota_n goes to P^I iota_{n+1}, and back (Serre 1953; Cartan 1954-55)."""
    word = " ".join(data.draw(st.lists(letters(p), max_size=3)))
    op = data.draw(letters(p))
    here = script(p, f"on K(Z/{p}, {n})")
    above = script(p, f"on K(Z/{p}, {n + 1})")
    assert above.compare(f"suspension({word} iota_{n + 1}) = {here.normalise(f'{word} iota_{n}').text}")
    assert above.compare(f"suspension({op} {word} iota_{n + 1}) = {op} suspension({word} iota_{n + 1})")
    value = here.normalise(f"{word} iota_{n}")
    moved = here.normalise(f"transgression({word} iota_{n})")
    assert script(p, f"on K(Z/{p}, {n + 1})").compare(f"suspension({moved.text}) = {value.text}")


def test_values_of_the_transgression() -> None:
    # Serre 1953, § 2: the path fibration over K(Z/2, 2)
    assert opslang.normalise("transgression(iota_1^2)").text == "Sq^1 iota_2"
    assert opslang.normalise("transgression(iota_1^4)").text == "Sq^2 Sq^1 iota_2"
    # the p-th power of a class of degree 2 (Cartan 1954-55)
    assert opslang.normalise("transgression(iota_2^3)", prime=3).text == "P^1 iota_3"
    assert opslang.normalise("suspension(beta_2 iota_3)", on="K(Z/4, 3)").text == "beta_2 iota_2"
    assert opslang.normalise("suspension(iota_2^2)").text == "0"
    for text in ("transgression(iota_2 Sq^1 iota_2)", "transgression(1)", "suspension(1)", "suspension(w_2)"):
        with pytest.raises(OpslangError):
            script(2, "on BO(2)" if "w_" in text else "on K(Z/2, 2)").normalise(text)
    with pytest.raises(OpslangError) as refused:
        opslang.normalise("transgression(iota_2^2)", prime=3)
    assert refused.value.name == "not-transgressive"
