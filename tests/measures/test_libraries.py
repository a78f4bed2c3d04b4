"""Cross-checks against scipy and statsmodels, and the faults of theirs to steer clear of (tests/checks/METHODS.md).

A library is compared where it is right. Each documented fault has a test that shows it: when one fails, the
library has been mended and the warning can go.
"""

from __future__ import annotations

import warnings

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy import stats
from scipy.stats.contingency import odds_ratio as scipy_odds_ratio
from statsmodels.stats.contingency_tables import StratifiedTable
from statsmodels.stats.proportion import confint_proportions_2indep, proportion_confint

from app.measures import strata
from app.measures.conditional import conditional_estimate, fisher_exact_cond
from app.measures.fourfold import Fourfold
from app.measures.registry import RISK_METHODS, TESTS, effect_methods

COUNTS = st.tuples(st.integers(2, 150), st.integers(2, 150)).flatmap(
    lambda n: st.tuples(st.integers(1, n[0] - 1), st.just(n[0]), st.integers(1, n[1] - 1), st.just(n[1]))
)


def _limits(measure: str, key: str, cells: tuple[int, ...]) -> tuple[float, float]:
    method = next(m for m in effect_methods(measure) if m.key == key)  # type: ignore[arg-type]
    low, high = method.interval(Fourfold(*cells), 0.95)
    return float(low), float(high)


def _p(key: str, cells: tuple[int, ...]) -> float:
    return float(next(t for t in TESTS if t.key == key).p(Fourfold(*cells)))


def _matrix(cells: tuple[int, ...]) -> np.ndarray[tuple[int, int], np.dtype[np.int64]]:
    a, n1, c, n2 = cells
    return np.array([[a, n1 - a], [c, n2 - c]])


@given(COUNTS)
def test_one_risk_against_statsmodels(cells: tuple[int, ...]) -> None:
    names = {
        "wald": "normal",
        "wilson": "wilson",
        "clopper_pearson": "beta",
        "agresti_coull": "agresti_coull",
        "jeffreys_raw": "jeffreys",
    }
    a, n1, _, _ = cells
    for method in (m for m in RISK_METHODS if m.key in names):
        low, high = method.interval(np.array(a), np.array(n1), 0.95)
        theirs = proportion_confint(a, n1, method=names[method.key])
        # Theirs cuts plain limits at 0 and 1; ours are raw.
        assert np.clip([float(low), float(high)], 0, 1) == pytest.approx(np.clip(theirs, 0, 1), rel=1e-8, abs=1e-12)


@given(COUNTS)
def test_two_arms_against_statsmodels(cells: tuple[int, ...]) -> None:
    compared = [
        ("risk_difference", "wald", "diff", "wald"),
        ("risk_difference", "newcombe", "diff", "newcomb"),
        ("risk_difference", "agresti_caffo", "diff", "agresti-caffo"),
        ("risk_ratio", "katz_log", "ratio", "log"),
        ("odds_ratio", "woolf_logit", "odds-ratio", "logit"),
    ]
    for measure, key, compare, name in compared:
        theirs = confint_proportions_2indep(*cells, compare=compare, method=name)
        assert _limits(measure, key, cells) == pytest.approx(theirs, rel=1e-8, abs=1e-12)


@given(COUNTS)
def test_p_against_scipy(cells: tuple[int, ...]) -> None:
    matrix = _matrix(cells)
    assert _p("pearson", cells) == pytest.approx(stats.chi2_contingency(matrix, correction=False)[1], rel=1e-9)
    assert _p("yates", cells) == pytest.approx(stats.chi2_contingency(matrix, correction=True)[1], rel=1e-9)
    theirs = stats.chi2_contingency(matrix, correction=False, lambda_="log-likelihood")[1]
    assert _p("likelihood_ratio", cells) == pytest.approx(theirs, rel=1e-8)
    assert _p("fisher_irwin", cells) == pytest.approx(stats.fisher_exact(matrix)[1], rel=1e-8)


@given(COUNTS)
def test_conditional_odds_ratio_puts_half_of_alpha_in_each_tail(cells: tuple[int, ...]) -> None:
    """The limits put back into scipy's tail probability (its own limits carry fewer digits)."""
    a, n1, c, n2 = cells
    low, high = (float(x) for x in fisher_exact_cond(Fourfold(*cells), 0.95))
    m = a + c
    if low > 0:
        assert stats.nchypergeom_fisher.sf(a - 1, n1 + n2, n1, m, low) == pytest.approx(0.025, rel=1e-6)
    if np.isfinite(high):
        assert stats.nchypergeom_fisher.cdf(a, n1 + n2, n1, m, high) == pytest.approx(0.025, rel=1e-6)


def test_conditional_estimate_against_scipy() -> None:
    for cells in ((7, 40, 12, 38), (3, 60, 9, 55), (1, 20, 1, 30)):
        theirs = scipy_odds_ratio(_matrix(cells), kind="conditional").statistic
        assert float(conditional_estimate(Fourfold(*cells))) == pytest.approx(theirs, rel=1e-7)


def test_strata_against_statsmodels() -> None:
    tables = [(12, 100, 20, 95), (5, 40, 9, 44), (30, 210, 41, 205)]
    ours = Fourfold(*zip(*tables, strict=True))
    theirs = StratifiedTable([_matrix(t).T for t in tables])
    assert strata.mh_rbg(ours).estimate == pytest.approx(theirs.oddsratio_pooled, rel=1e-10)
    assert strata.mh_rbg(ours).standard_error == pytest.approx(theirs.logodds_pooled_se, rel=1e-10)
    assert strata.cmh(ours).p == pytest.approx(theirs.test_null_odds(correction=False).pvalue, rel=1e-9)
    assert strata.breslow_day(ours).p == pytest.approx(theirs.test_equal_odds().pvalue, rel=1e-7)
    assert strata.breslow_day_tarone(ours).p == pytest.approx(theirs.test_equal_odds(adjust=True).pvalue, rel=1e-7)


def test_fault_of_the_score_interval_for_the_difference() -> None:
    """METHODS.md, trap 1: 56/70 v 48/80 gives 0.0526 to 0.3440 there, 0.0528 to 0.3382 is right."""
    with warnings.catch_warnings():
        warnings.simplefilter("ignore")
        theirs = confint_proportions_2indep(56, 70, 48, 80, compare="diff", method="score", correction=True)
    assert [round(x, 4) for x in theirs] == [0.0526, 0.3440]
    assert [round(x, 4) for x in _limits("risk_difference", "miettinen_nurminen", (56, 70, 48, 80))] == [0.0528, 0.3382]


def test_fault_of_the_score_interval_for_the_ratio() -> None:
    """METHODS.md, trap 2: 116/137 v 55/55 has its low at 0.8906 there (a false root), 0.7770 is right."""
    with warnings.catch_warnings():
        warnings.simplefilter("ignore")
        theirs = confint_proportions_2indep(116, 137, 55, 55, compare="ratio", method="score", correction=False)
    assert round(float(theirs[0]), 4) == 0.8906
    assert round(_limits("risk_ratio", "koopman", (116, 137, 55, 55))[0], 4) == 0.7770


def test_fault_of_the_unconditional_test() -> None:
    """METHODS.md, trap 4: 11/18 v 7/22 is 0.0684 there (a tie lost), 0.0729 is right."""
    theirs = stats.barnard_exact(_matrix((11, 18, 7, 22)).T, pooled=True).pvalue
    assert round(float(theirs), 4) == 0.0684
    assert round(_p("barnard_pooled_z", (11, 18, 7, 22)), 4) == 0.0729
