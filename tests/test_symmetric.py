"""The two ways to the splitting principle, partitions and Newton's identities, against each other and by hand."""

from __future__ import annotations

import pytest

from opslang.spaces import symmetric
from opslang.spaces.family import NotKnown


@pytest.fixture
def by_newton(monkeypatch: pytest.MonkeyPatch) -> None:
    """Only Newton's identities, and nothing remembered."""
    monkeypatch.setattr(symmetric, "FEW", -1)
    for function in (symmetric.linear_roots, symmetric.square_roots, symmetric.powers_of_roots):
        function.cache_clear()


def cases(p: int) -> list[tuple[int, int, int | None]]:
    """Triples (k, m, largest)."""
    return [(k, m, largest) for m in range(1, 6) for k in range(m + 1) for largest in (None, 3, 5) if m + k * p < 24]


@pytest.mark.parametrize("p", [3, 5, 7])
def test_both_ways_agree(p: int, by_newton: None, monkeypatch: pytest.MonkeyPatch) -> None:
    found = {
        (k, m, largest): (
            dict(symmetric.linear_roots(p, k, m, largest)),
            dict(symmetric.square_roots(p, k, m, largest)),
            dict(symmetric.powers_of_roots(p, min(k, 2), (p - 1) // 2, largest)),
        )
        for k, m, largest in cases(p)
    }
    monkeypatch.setattr(symmetric, "FEW", 10**9)
    for function in (symmetric.linear_roots, symmetric.square_roots, symmetric.powers_of_roots):
        function.cache_clear()
    for (k, m, largest), (linear, square, powers) in found.items():
        assert dict(symmetric.linear_roots(p, k, m, largest)) == linear, (k, m, largest)
        assert dict(symmetric.square_roots(p, k, m, largest)) == square, (k, m, largest)
        assert dict(symmetric.powers_of_roots(p, min(k, 2), (p - 1) // 2, largest)) == powers, (k, largest)


def test_by_hand(by_newton: None) -> None:
    """sum x_i^3 x_j = c_1^2 c_2 - 2 c_2^2 - c_1 c_3 + 4 c_4; at 3, P^1 p_1 = sum 2 y^2 = 2 p_1^2 - 4 p_2 (by hand)."""
    assert dict(symmetric.linear_roots(3, 1, 2)) == {(2, 1, 1): 1, (2, 2): 1, (3, 1): 2, (4,): 1}
    assert dict(symmetric.square_roots(3, 1, 1)) == {(1, 1): 2, (2,): 2}
    assert dict(symmetric.powers_of_roots(5, 1, 2)) == {(1, 1): 1, (2,): 3}


def test_too_much_work_is_refused_soon() -> None:
    with pytest.raises(NotKnown, match="splitting principle"):
        symmetric.linear_roots(7, 5, 20)
