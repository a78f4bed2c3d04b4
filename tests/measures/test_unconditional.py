"""Unconditional tests: the maximum found is certified by a dense grid, and ties are exact."""

from __future__ import annotations

from fractions import Fraction

import numpy as np
import pytest

from app.measures.fourfold import Fourfold
from app.measures.registry import TESTS
from app.measures.unconditional import LARGEST, certified_bound, log_barnard_pooled_z, pooled_z_region


@pytest.mark.parametrize("cells", [(7, 50, 15, 50), (3, 20, 9, 33), (11, 18, 7, 22), (0, 12, 4, 9)])
def test_maximum_is_within_a_thousandth_of_its_certificate(cells: tuple[int, int, int, int]) -> None:
    """|d arcsin sqrt(P) / d arcsin sqrt(risk)| <= sqrt(N) (numerics, section 4)."""
    found = float(np.exp(log_barnard_pooled_z(Fourfold(*cells))))
    bound = certified_bound(pooled_z_region(*cells), 200_001)
    assert found <= bound <= found * 1.001


def test_ties_of_the_statistic_are_exact() -> None:
    a, n1, c, n2 = 11, 18, 7, 22

    def statistic(x1: int, x2: int) -> Fraction:
        m = x1 + x2
        if m in (0, n1 + n2):
            return Fraction(0)
        return Fraction((x1 * n2 - x2 * n1) ** 2, m * (n1 + n2 - m))

    region = pooled_z_region(a, n1, c, n2)
    exact = [[statistic(x1, x2) >= statistic(a, c) for x2 in range(n2 + 1)] for x1 in range(n1 + 1)]
    assert (region == np.array(exact)).all()


def test_too_many_people_are_not_tried() -> None:
    table = Fourfold(1, LARGEST, 1, 1)
    for test in (t for t in TESTS if t.on_request):
        assert np.isnan(test.p(table))
