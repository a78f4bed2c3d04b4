"""The edge table of DEVELOPERS.md, walked over every registered method. Never a warning: pytest makes it an error."""

from __future__ import annotations

import math

import numpy as np
import pytest

from app.appraisal.effects import effects_of
from app.measures.difference import risk_difference
from app.measures.fourfold import LARGEST_TOTAL, Fourfold
from app.measures.odds import odds_ratio
from app.measures.ratio import risk_ratio
from app.measures.registry import EFFECT_METHODS, RISK_METHODS, TESTS, EffectMethod, RiskMethod

NONE = Fourfold(0, 40, 0, 50)
NO_COMPARATOR = Fourfold(5, 50, 0, 50)
NO_INTERVENTION = Fourfold(0, 50, 5, 50)
ALL = Fourfold(40, 40, 50, 50)
APART = Fourfold(10, 10, 0, 12)
ONE_EACH = Fourfold(1, 1, 0, 1)
HUGE = Fourfold(3, LARGEST_TOTAL, 500_000_000, LARGEST_TOTAL)
EDGES = {
    "none": NONE,
    "no_comparator": NO_COMPARATOR,
    "no_intervention": NO_INTERVENTION,
    "all": ALL,
    "apart": APART,
    "one_each": ONE_EACH,
    "huge": HUGE,
}
LOGARITHMIC = {"katz_log", "woolf_logit", "inv_sinh"}
ADDED = {"adj_log_half_half", "log_half_all_cells", "gart_half"}
"""Half an event added: defined everywhere, and with an estimate of their own."""
OFFERED = [m for m in EFFECT_METHODS if m.offered]


def _ends(method: EffectMethod, table: Fourfold) -> tuple[float, float]:
    low, high = method.interval(table, 0.95)
    return float(low), float(high)


@pytest.mark.parametrize("name", EDGES)
@pytest.mark.parametrize("method", OFFERED, ids=lambda m: f"{m.measure}-{m.key}")
def test_limits_are_ordered_or_undefined(method: EffectMethod, name: str) -> None:
    low, high = _ends(method, EDGES[name])
    assert (math.isnan(low) and math.isnan(high)) or low <= high


@pytest.mark.parametrize("method", [m for m in OFFERED if m.measure == "risk_difference"], ids=lambda m: m.key)
def test_no_events_gives_a_finite_interval_about_zero(method: EffectMethod) -> None:
    low, high = _ends(method, NONE)
    if method.key == "wald":
        assert (low, high) == (0.0, 0.0)  # no width: never shown without its caveat
        return
    assert -1 < low < 0 < high < 1


@pytest.mark.parametrize("method", [m for m in OFFERED if m.measure != "risk_difference"], ids=lambda m: m.key)
def test_no_events_leaves_the_ratio_open_or_undefined(method: EffectMethod) -> None:
    low, high = _ends(method, NONE)
    if method.key in LOGARITHMIC:
        assert math.isnan(low)
        assert math.isnan(high)
    elif method.key in ADDED:
        assert 0.0 < low < high < math.inf
    else:
        assert (low, high) == (0.0, math.inf)


@pytest.mark.parametrize("method", [m for m in OFFERED if m.measure != "risk_difference"], ids=lambda m: m.key)
def test_empty_comparator_has_a_lower_limit_only(method: EffectMethod) -> None:
    low, high = _ends(method, NO_COMPARATOR)
    if method.key in LOGARITHMIC:
        assert math.isnan(low)
        assert math.isnan(high)
    elif method.key in ADDED:
        assert 0.0 < low < high < math.inf
    else:
        assert 0.9 < low < math.inf  # the exact one is wider than the score ones, which exclude 1 here
        assert high == math.inf


def test_published_example_of_an_empty_comparator() -> None:
    """5/50 v 0/50: the risk ratio is 1.35 or more (requirements R41, computed there)."""
    method = next(m for m in OFFERED if m.measure == "risk_ratio" and m.default)
    assert round(_ends(method, NO_COMPARATOR)[0], 2) == 1.35


def test_difference_of_one_ends_exactly_there() -> None:
    method = next(m for m in OFFERED if m.measure == "risk_difference" and m.default)
    assert _ends(method, APART)[1] == 1.0
    assert _ends(method, APART.swapped())[0] == -1.0


def test_estimates_at_the_edges() -> None:
    assert math.isnan(risk_ratio(NONE))
    assert math.isnan(odds_ratio(NONE))
    assert risk_ratio(NO_COMPARATOR) == math.inf
    assert odds_ratio(NO_COMPARATOR) == math.inf
    assert risk_ratio(NO_INTERVENTION) == 0.0
    assert risk_ratio(ALL) == 1.0
    assert math.isnan(odds_ratio(ALL))
    assert risk_difference(APART) == 1.0


@pytest.mark.parametrize("method", RISK_METHODS, ids=lambda m: m.key)
def test_risk_limits_reach_exactly_zero_and_one(method: RiskMethod) -> None:
    low, high = method.interval(np.array([0, 20]), np.array([20, 20]), 0.95)
    if method.key == "agresti_coull":
        assert low[0] < 0.0  # raw limits leave 0 to 1
        assert high[1] > 1.0
    elif method.key == "jeffreys_raw":
        assert low[0] > 0.0  # the observed risk lies outside
        assert high[1] < 1.0
    else:
        assert low[0] == 0.0
        assert high[1] == 1.0


def test_p_where_everybody_or_nobody_has_the_event() -> None:
    for table in (NONE, ALL):
        values = {test.key: float(test.p(table)) for test in TESTS if test.offered}
        for key, value in values.items():
            if key in ("pearson", "n_minus_1", "yates", "likelihood_ratio"):
                assert math.isnan(value)
            elif key.startswith("fisher_midp_irwin"):
                assert value == 0.5  # half of the one table possible
            else:
                assert value == 1.0


def test_p_too_small_for_a_float_keeps_its_logarithm() -> None:
    """0/2000 v 2000/2000: Fisher's p is 1e-1202 (numerics, section 3)."""
    test = next(t for t in TESTS if t.key == "fisher_irwin")
    table = Fourfold(0, 2000, 2000, 2000)
    assert test.p(table) == 0.0
    assert round(float(test.log_p(table)) / math.log(10)) == -1202


@pytest.mark.parametrize("method", [m for m in EFFECT_METHODS if not m.offered], ids=lambda m: f"{m.measure}-{m.key}")
@pytest.mark.parametrize("name", EDGES)
def test_methods_for_checking_print_are_silent_too(method: EffectMethod, name: str) -> None:
    low, high = _ends(method, EDGES[name])
    assert math.isnan(low) or math.isnan(high) or low <= high


@pytest.mark.parametrize("name", EDGES)
def test_everything_at_once_is_silent(name: str) -> None:
    effects_of(EDGES[name], 0.95)
