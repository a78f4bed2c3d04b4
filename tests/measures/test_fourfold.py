from __future__ import annotations

from typing import Any

import numpy as np
import pytest

from app.measures.fourfold import LARGEST_TOTAL, Fourfold
from app.measures.interval import normal_quantile


@pytest.mark.parametrize(
    ("counts", "message"),
    [
        ((2.9, 10, 1, 10), "events_intervention must be whole numbers"),
        ((np.nan, 10, 1, 10), "events_intervention must be whole numbers"),
        ((-1, 10, 1, 10), "events_intervention must lie between 0 and 1000000000"),
        ((1, LARGEST_TOTAL + 1, 1, 10), "total_intervention must lie between 0 and 1000000000"),
        ((1, 10, 1, 0), "total_comparator must be at least 1"),
        ((11, 10, 1, 10), "events_intervention must not exceed total_intervention"),
        ((1, 10, 11, 10), "events_comparator must not exceed total_comparator"),
    ],
)
def test_error_in_counts(counts: tuple[float, ...], message: str) -> None:
    with pytest.raises(ValueError, match=f"^{message}$"):
        Fourfold(*counts)


@pytest.mark.parametrize("bad", [True, "4", None])
def test_error_in_kind(bad: Any) -> None:
    with pytest.raises(TypeError, match="^events_intervention must be whole numbers, got "):
        Fourfold(bad, 10, 1, 10)


def test_counts_broadcast_to_one_shape() -> None:
    assert Fourfold([[1], [2]], 10, [3, 4, 5], 20).shape == (2, 3)


def test_cross_product_is_exact_at_the_largest_totals() -> None:
    n = LARGEST_TOTAL
    assert Fourfold(n - 1, n, n - 2, n).determinant == float(n)


@pytest.mark.parametrize("level", [0.0, 1.0, 95.0, -0.1])
def test_error_in_level(level: float) -> None:
    with pytest.raises(ValueError, match="^confidence_level must lie strictly between 0 and 1$"):
        normal_quantile(level)


def test_quantile_is_not_1_96() -> None:
    assert normal_quantile(0.95) == pytest.approx(1.959963984540054, rel=1e-15)
