"""Laws and edges of rates; the check values are met through the API (tests/api/test_endpoints.py)."""

from __future__ import annotations

import math
from fractions import Fraction

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.measures.persontime import PersonTime
from app.measures.rates import rate_difference, rate_ratio
from app.measures.registry import RATE_EFFECTS, RATE_METHODS, RATE_TESTS, RateEffectMethod

EVENTS = st.integers(0, 200)
TIME = st.floats(0.5, 1e5)
DATA = st.builds(PersonTime, EVENTS, TIME, EVENTS, TIME)
EFFECTS = pytest.mark.parametrize("method", RATE_EFFECTS, ids=lambda m: f"{m.measure}-{m.key}")


def _ends(method: RateEffectMethod, data: PersonTime) -> tuple[float, float]:
    low, high = method.interval(data, 0.95)
    return float(low), float(high)


def _close(found: float, expected: float) -> bool:
    if math.isnan(expected):
        return math.isnan(found)
    return found == expected or math.isclose(found, expected, rel_tol=1e-9, abs_tol=1e-13)


@EFFECTS
@given(data=DATA, unit=st.sampled_from([0.01, 12.0, 365.25]))
def test_the_unit_of_time_changes_rates_only(method: RateEffectMethod, data: PersonTime, unit: float) -> None:
    _, t1, _, t2 = data.floats()
    other = PersonTime(data.events_intervention, t1 * unit, data.events_comparator, t2 * unit)
    factor = 1.0 if method.measure == "rate_ratio" else unit
    for found, expected in zip(_ends(method, other), _ends(method, data), strict=True):
        assert _close(found * factor, expected)
    for test in RATE_TESTS:
        assert math.isclose(float(test.p(other)), float(test.p(data)), rel_tol=1e-6)


@EFFECTS
@given(data=DATA)
def test_swapping_the_arms_turns_the_interval_round(method: RateEffectMethod, data: PersonTime) -> None:
    low, high = _ends(method, data)
    other_low, other_high = _ends(method, data.swapped())
    if method.measure == "rate_difference":
        assert _close(other_low, -high)
        assert _close(other_high, -low)
    else:
        with np.errstate(divide="ignore"):
            assert _close(other_low, float(1 / np.float64(high)))
            assert _close(other_high, float(1 / np.float64(low)))


@given(st.integers(0, 12), st.integers(0, 12), st.integers(1, 5), st.integers(1, 5))
def test_exact_p_by_rational_arithmetic(e1: int, e2: int, t1: int, t2: int) -> None:
    n, share = e1 + e2, Fraction(t1, t1 + t2)
    weights = [math.comb(n, k) * share**k * (1 - share) ** (n - k) for k in range(n + 1)]
    found = {test.key: float(test.p(PersonTime(e1, float(t1), e2, float(t2)))) for test in RATE_TESTS}
    tails = sum(weights[: e1 + 1]), sum(weights[e1:])
    assert math.isclose(found["exact_cond"], float(sum(w for w in weights if w <= weights[e1])), rel_tol=1e-9)
    assert math.isclose(found["exact_cond_double"], min(1.0, 2.0 * float(min(tails))), rel_tol=1e-9)
    assert math.isclose(found["mid_p"], min(1.0, float(2 * min(tails) - weights[e1])), rel_tol=1e-9)


def test_edges() -> None:
    none, empty = PersonTime(0, 10.0, 0, 12.0), PersonTime(5, 10.0, 0, 12.0)
    assert math.isnan(rate_ratio(none))
    assert rate_ratio(empty) == math.inf
    assert rate_difference(none) == 0.0
    for method in (m for m in RATE_EFFECTS if m.measure == "rate_ratio"):
        low, high = _ends(method, none)
        assert (low, high) == (0.0, math.inf) or (method.key == "log_wald" and math.isnan(low))
        low, high = _ends(method, empty)
        assert high == math.inf or (method.key == "log_wald" and math.isnan(high))
    for rate in (m for m in RATE_METHODS if m.key != "log_wald"):
        assert float(rate.interval(np.array(0.0), np.array(10.0), 0.95).low) == 0.0


@pytest.mark.parametrize("time", [0.0, -1.0, math.inf, math.nan])
def test_error_in_person_time(time: float) -> None:
    with pytest.raises(ValueError, match="^time_comparator must be finite and above 0$"):
        PersonTime(1, 10.0, 1, time)
