"""Edges that a mutation run found untested."""

from __future__ import annotations

import numpy as np
import pytest

from app.measures.backcalc import altman_bland_interval_from_p
from app.measures.cluster import design_effect
from app.measures.fourfold import Fourfold
from app.measures.hazard import risk_difference_at
from app.measures.paired import mcnemar_exact, mcnemar_midp
from app.measures.persontime import PersonTime
from app.measures.pvalues import likelihood_ratio_statistic
from app.measures.rate_pvalues import p_exact_cond, p_mid
from app.measures.strata import breslow_day, breslow_day_tarone
from app.measures.translate import risk_from_odds_ratio


def test_homogeneity_needs_two_strata_and_a_common_ratio() -> None:
    one = Fourfold([5], [20], [9], [20])
    never = Fourfold([0, 0], [20, 30], [9, 4], [20, 30])
    for test in (breslow_day, breslow_day_tarone):
        for strata in (one, never):
            assert np.isnan(test(strata).p)


def test_strata_of_one_odds_ratio_have_p_of_one() -> None:
    """Three equal strata: Tarone's correction takes off nothing but rounding, which must not make it negative."""
    for counts in ((20, 80, 67, 80), (29, 30, 11, 30)):
        strata = Fourfold([counts[0]] * 3, counts[1], [counts[2]] * 3, counts[3])
        found = breslow_day_tarone(strata)
        assert found.statistic == pytest.approx(0.0, abs=1e-20)
        assert found.p == 1.0


def test_no_events_in_one_arm_of_rates() -> None:
    """P of 0 v 4 events over equal time is 2 / 2^4 by doubling, less half the point by mid-P (exact binomial)."""
    data = PersonTime(0, 100.0, 4, 100.0)
    assert p_exact_cond(data) == pytest.approx(2 / 16, rel=1e-12)
    assert p_mid(data) == pytest.approx(1 / 16, rel=1e-12)


def test_no_risk_and_certain_risk_do_not_differ_by_any_hazard_ratio() -> None:
    np.testing.assert_array_equal(risk_difference_at(0.5, np.array([0.0, 1.0])), [0.0, 0.0])


def test_the_short_cut_gives_back_its_p() -> None:
    assert altman_bland_interval_from_p(0.7, 0.03, "ratio", 0.95)[1].p == 0.03


def test_likelihood_ratio_needs_events_and_non_events() -> None:
    assert np.isnan(likelihood_ratio_statistic(Fourfold([0, 5], [5, 5], [0, 7], [7, 7]))).all()


def test_no_discordant_pair_is_no_evidence() -> None:
    assert mcnemar_midp(0, 0) == mcnemar_exact(0, 0) == 1.0


def test_odds_ratios_at_the_ends_of_risk() -> None:
    """Nobody and everybody keep their risk; an infinite odds ratio makes any risk above 0 certain."""
    np.testing.assert_array_equal(risk_from_odds_ratio(np.inf, np.array([0.0, 0.3, 1.0])), [0.0, 1.0, 1.0])
    np.testing.assert_array_equal(risk_from_odds_ratio(2.0, np.array([0.0, 1.0])), [0.0, 1.0])
    assert risk_from_odds_ratio(2, 0) == 0.0


def test_a_correlation_of_one_is_allowed() -> None:
    assert design_effect(20.0, 1.0) == 20.0


def test_counts_of_those_without() -> None:
    others = Fourfold(3, 10, 4, 20).complement()
    assert [int(x) for x in (others.events_intervention, others.events_comparator, others.total_comparator)] == [7, 16, 20]
