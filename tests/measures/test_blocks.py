"""Large arrays are computed in blocks: the same figures, and memory that does not grow with the temporaries."""

from __future__ import annotations

import tracemalloc

import numpy as np
import pytest

from app.measures.fourfold import Fourfold
from app.measures.interval import BLOCK
from app.measures.registry import EFFECT_METHODS, TESTS, EffectMethod, NoDifferenceTest

RANDOM = np.random.default_rng(20261201)
COUNT = BLOCK + 700
N1, N2 = (RANDOM.integers(5, 60, COUNT) for _ in range(2))
MANY = Fourfold(RANDOM.binomial(N1, 0.3), N1, RANDOM.binomial(N2, 0.4), N2)
PLACES = np.array([0, 17, BLOCK - 1, BLOCK, COUNT - 1])
FEW = Fourfold(*(x[PLACES].astype(int) for x in MANY.floats()))


@pytest.mark.parametrize("method", EFFECT_METHODS, ids=lambda m: f"{m.measure}-{m.key}")
def test_intervals_of_many_tables(method: EffectMethod) -> None:
    many, few = method.interval(MANY, 0.95), method.interval(FEW, 0.95)
    assert many.low.shape == many.high.shape == (COUNT,)
    np.testing.assert_allclose(many.low[PLACES], few.low, rtol=1e-12)
    np.testing.assert_allclose(many.high[PLACES], few.high, rtol=1e-12)


@pytest.mark.parametrize("test", [t for t in TESTS if not t.on_request], ids=lambda t: t.key)
def test_p_of_many_tables(test: NoDifferenceTest) -> None:
    np.testing.assert_allclose(test.log_p(MANY)[PLACES], test.log_p(FEW), rtol=1e-12)


def test_memory_stays_near_the_answer() -> None:
    count = 400_000
    table = Fourfold(np.full(count, 12), 100, np.arange(count) % 90, 100)
    for key in ("newcombe", "miettinen_nurminen", "wald"):
        method = next(m for m in EFFECT_METHODS if m.key == key)
        tracemalloc.start()
        method.interval(table, 0.95)
        peak = tracemalloc.get_traced_memory()[1]
        tracemalloc.stop()
        # Two limits of 8 bytes a table, once more while the blocks are joined; temporaries would add ten times that.
        assert peak < 8 * count * 8
