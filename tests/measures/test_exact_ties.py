"""Fisher's p and its mid-P rules on every small table, by exact integers; and with the arms exchanged."""

from __future__ import annotations

from collections.abc import Callable
from fractions import Fraction
from math import comb

import numpy as np
import pytest

from app.measures.fourfold import Fourfold
from app.measures.registry import TESTS, NoDifferenceTest

RULES: dict[str, Callable[[dict[int, Fraction], int], Fraction]] = {
    "fisher_irwin": lambda p, a: sum((x for x in p.values() if x <= p[a]), Fraction(0)),
    "fisher_double": lambda p, a: min(Fraction(1), 2 * min(_tail(p, a, -1), _tail(p, a, 1))),
    "fisher_midp_double": lambda p, a: min(Fraction(1), 2 * (min(_tail(p, a, -1), _tail(p, a, 1)) - p[a] / 2)),
    "fisher_midp_irwin_halfobs": lambda p, a: sum((x for x in p.values() if x <= p[a]), Fraction(0)) - p[a] / 2,
    "fisher_midp_irwin_halfties": lambda p, a: sum((x if x < p[a] else x / 2 for x in p.values() if x <= p[a]), Fraction(0)),
}


def _tail(p: dict[int, Fraction], a: int, way: int) -> Fraction:
    return sum((x for k, x in p.items() if (k - a) * way >= 0), Fraction(0))


def _points(n1: int, m: int, n2: int) -> dict[int, Fraction]:
    whole = comb(n1 + n2, m)
    return {k: Fraction(comb(n1, k) * comb(n2, m - k), whole) for k in range(max(0, m - n2), min(n1, m) + 1)}


@pytest.mark.parametrize("key", RULES)
def test_every_table_up_to_nine_by_eight(key: str) -> None:
    test = next(t for t in TESTS if t.key == key)
    for n1 in range(1, 10):
        for n2 in range(1, 9):
            cells = [(a, c) for a in range(n1 + 1) for c in range(n2 + 1) if 0 < a + c < n1 + n2]
            expected = [float(RULES[key](_points(n1, a + c, n2), a)) for a, c in cells]
            a, c = np.array(cells).T
            np.testing.assert_allclose(test.p(Fourfold(a, n1, c, n2)), expected, rtol=1e-12)


@pytest.mark.parametrize("test", [t for t in TESTS if not t.on_request], ids=lambda t: t.key)
def test_exchanging_the_arms_changes_no_p(test: NoDifferenceTest) -> None:
    a, c = (x.ravel() for x in np.meshgrid(np.arange(0, 13), np.arange(0, 10)))
    table = Fourfold(a, 12, c, 9)
    np.testing.assert_allclose(test.p(table), test.p(table.swapped()), rtol=1e-11, atol=1e-300)


def test_large_arms_one_event_apart() -> None:
    """832/1000 v 831/1000: both cells are modes, and each is half a tie (exact sum over the hypergeometric)."""
    points = _points(1000, 1663, 1000)
    for key in ("fisher_midp_irwin_halfobs", "fisher_midp_irwin_halfties"):
        test = next(t for t in TESTS if t.key == key)
        assert test.p(Fourfold(832, 1000, 831, 1000)) == pytest.approx(float(RULES[key](points, 832)), rel=1e-9)
