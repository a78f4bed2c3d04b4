"""Score limits of the difference against the textbook form: restricted fit by bisection, limit by bisection."""

from __future__ import annotations

import numpy as np
import pytest

from app.measures.fourfold import Floats, Fourfold
from app.measures.interval import normal_quantile
from app.measures.score import miettinen_nurminen_difference


def _restricted_variance(difference: Floats, a: Floats, n1: int, c: Floats, n2: int) -> Floats:
    low, high = np.maximum(0.0, -difference), np.minimum(1.0, 1.0 - difference)
    for _ in range(80):
        t = (low + high) / 2
        with np.errstate(all="ignore"):
            slope = a / (t + difference) - (n1 - a) / (1 - t - difference) + c / t - (n2 - c) / (1 - t)
        rising = np.nan_to_num(slope) > 0
        low, high = np.where(rising, t, low), np.where(rising, high, t)
    t = (low + high) / 2
    return (t + difference) * (1 - t - difference) / n1 + t * (1 - t) / n2


@pytest.mark.parametrize(("n1", "n2"), [(30, 30), (38, 18), (7, 29), (1, 13), (2, 2)])
def test_lower_limit_of_every_table_of_a_design(n1: int, n2: int) -> None:
    a, c = (x.ravel() for x in np.meshgrid(np.arange(n1 + 1), np.arange(n2 + 1)))
    cells = a.astype(float), n1, c.astype(float), n2
    total = n1 + n2
    zz = normal_quantile(0.95) ** 2 * total / (total - 1)
    estimate = a / n1 - c / n2
    low, high = np.full_like(estimate, -1.0), estimate.copy()
    for _ in range(60):
        middle = (low + high) / 2
        outside = (estimate - middle) ** 2 > zz * _restricted_variance(middle, *cells)
        low, high = np.where(outside, middle, low), np.where(outside, high, middle)
    found = miettinen_nurminen_difference(Fourfold(a, n1, c, n2), 0.95).low
    np.testing.assert_allclose(found, low, atol=1e-12)


def test_slope_that_jumps_does_not_swing_for_ever() -> None:
    """34/38 v 0/18: Newton alone swung between two sides and gave 0.7627."""
    low = float(miettinen_nurminen_difference(Fourfold(34, 38, 0, 18), 0.95).low)
    around = [float(miettinen_nurminen_difference(Fourfold(a, 38, 0, 18), 0.95).low) for a in (33, 35)]
    assert around[0] < low < around[1]
    assert low == pytest.approx(0.7020, abs=5e-4)
