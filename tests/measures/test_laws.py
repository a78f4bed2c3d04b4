"""Laws that every interval and test must obey, whatever the counts."""

from __future__ import annotations

import math
from fractions import Fraction

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.measures.exact import log_fisher_irwin
from app.measures.fourfold import Fourfold
from app.measures.interval import normal_quantile
from app.measures.pvalues import n_minus_1_statistic
from app.measures.registry import EFFECT_METHODS, RISK_METHODS, TESTS, EffectMethod, effect_methods

OFFERED = [m for m in EFFECT_METHODS if m.offered]
ADDED = {"adj_log_half_half"}  # half an event added to totals too: not symmetric in events and non-events
BOTH = pytest.mark.parametrize("method", OFFERED, ids=lambda m: f"{m.measure}-{m.key}")


@st.composite
def tables(draw: st.DrawFn, most: int = 400) -> Fourfold:
    n1, n2 = draw(st.integers(1, most)), draw(st.integers(1, most))
    return Fourfold(draw(st.integers(0, n1)), n1, draw(st.integers(0, n2)), n2)


def _same(found: float, expected: float, tolerance: float = 1e-9) -> bool:
    if math.isnan(expected):
        return math.isnan(found)
    return found == expected or math.isclose(found, expected, rel_tol=tolerance, abs_tol=1e-12)


@BOTH
@given(table=tables())
def test_swapping_the_arms_turns_the_interval_round(method: EffectMethod, table: Fourfold) -> None:
    low, high = (float(x) for x in method.interval(table, 0.95))
    other_low, other_high = (float(x) for x in method.interval(table.swapped(), 0.95))
    if method.measure == "risk_difference":
        assert _same(other_low, -high)
        assert _same(other_high, -low)
    else:
        with np.errstate(divide="ignore"):
            assert _same(other_low, float(1 / np.float64(high)))
            assert _same(other_high, float(1 / np.float64(low)))


@BOTH
@given(table=tables())
def test_counting_the_others_turns_difference_and_odds_round(method: EffectMethod, table: Fourfold) -> None:
    low, high = (float(x) for x in method.interval(table, 0.95))
    other_low, other_high = (float(x) for x in method.interval(table.complement(), 0.95))
    if method.measure == "risk_difference":
        assert _same(other_low, -high)
        assert _same(other_high, -low)
    elif method.measure == "odds_ratio":
        with np.errstate(divide="ignore"):
            assert _same(other_low, float(1 / np.float64(high)))
            assert _same(other_high, float(1 / np.float64(low)))


@BOTH
@given(table=tables(), levels=st.tuples(st.floats(0.5, 0.99), st.floats(0.001, 0.009)))
def test_a_higher_level_holds_the_lower_one(method: EffectMethod, table: Fourfold, levels: tuple[float, float]) -> None:
    level, more = levels
    inner, outer = method.interval(table, level), method.interval(table, level + more)
    if not math.isnan(float(inner.low)):
        assert float(outer.low) <= float(inner.low) * (1 + 1e-12) + 1e-12
        assert float(outer.high) >= float(inner.high) * (1 - 1e-12) - 1e-12


@pytest.mark.parametrize("method", [m for m in EFFECT_METHODS if m.default], ids=lambda m: m.measure)
@given(table=tables(120))
def test_default_limits_are_monotone_in_the_counts(method: EffectMethod, table: Fourfold) -> None:
    """What `reconstruct.tables` rests on when it computes on the ends of runs only."""
    n1, n2 = int(table.total_intervention), int(table.total_comparator)
    c = int(table.events_comparator)
    rising = method.interval(Fourfold(np.arange(n1 + 1), n1, c, n2), 0.95)
    for limit in rising:
        finite = limit[np.isfinite(limit)]
        assert np.all(np.diff(finite) >= -1e-9 * np.maximum(1.0, np.abs(finite[1:])))


@BOTH
@given(many=st.lists(tables(), min_size=1, max_size=12))
def test_an_array_is_a_loop(method: EffectMethod, many: list[Fourfold]) -> None:
    columns = [[int(x) for x in column] for column in zip(*(t._integers() for t in many), strict=True)]
    together = method.interval(Fourfold(*columns), 0.95)
    for i, table in enumerate(many):
        alone = method.interval(table, 0.95)
        assert _same(float(together.low[i]), float(alone.low), 1e-13)
        assert _same(float(together.high[i]), float(alone.high), 1e-13)


def test_the_shape_of_the_counts_is_kept() -> None:
    table = Fourfold(np.arange(6).reshape(2, 3), 20, 4, 20)
    for method in OFFERED:
        assert method.interval(table, 0.95).low.shape == (2, 3)
    for test in TESTS:
        assert test.p(table).shape == (2, 3)
    for risk in RISK_METHODS:
        assert risk.interval(table.events_intervention, table.total_intervention, 0.95).high.shape == (2, 3)


@given(table=tables(), level=st.sampled_from([0.9, 0.95, 0.99]))
def test_the_three_score_intervals_and_the_test_agree_about_no_effect(table: Fourfold, level: float) -> None:
    z = normal_quantile(level)
    statistic = float(n_minus_1_statistic(table))
    if math.isnan(statistic) or abs(statistic - z * z) < 1e-9 * z * z:
        return  # no test, or exactly on the edge
    inside = statistic <= z * z
    for measure, no_effect in (("risk_difference", 0.0), ("risk_ratio", 1.0), ("odds_ratio", 1.0)):
        low, high = effect_methods(measure)[0].interval(table, level)  # type: ignore[arg-type]
        assert (float(low) <= no_effect <= float(high)) == inside


@given(table=tables(14))
def test_fisher_is_exact(table: Fourfold) -> None:
    a, n1, c, n2 = (int(x) for x in table._integers())
    m = a + c
    weights = {x: math.comb(n1, x) * math.comb(n2, m - x) for x in range(max(0, m - n2), min(n1, m) + 1)}
    expected = Fraction(sum(w for w in weights.values() if w <= weights[a]), sum(weights.values()))
    assert math.isclose(math.exp(float(log_fisher_irwin(table))), float(expected), rel_tol=1e-12)
