"""Methods kept for checking print: each against its formula worked out here, or a published example."""

from __future__ import annotations

import math

import pytest

from app.measures.described import EffectMethod
from app.measures.fourfold import Fourfold
from app.measures.registry import EFFECT_METHODS, TESTS

Z = 1.959963984540054
A, N1, C, N2 = 46, 418, 67, 409
P1, P2 = A / N1, C / N2
TABLE = Fourfold(A, N1, C, N2)


def method(measure: str, key: str) -> EffectMethod:
    return next(m for m in EFFECT_METHODS if (m.measure, m.key) == (measure, key))


def limits(measure: str, key: str, table: Fourfold = TABLE) -> tuple[float, float]:
    low, high = method(measure, key).interval(table, 0.95)
    return float(low), float(high)


def test_pooled_and_corrected_plain_differences() -> None:
    pooled = (A + C) / (N1 + N2)
    half = Z * math.sqrt(pooled * (1 - pooled) * (1 / N1 + 1 / N2))
    assert limits("risk_difference", "wald_pooled") == pytest.approx((P1 - P2 - half, P1 - P2 + half))
    half = Z * math.sqrt(P1 * (1 - P1) / N1 + P2 * (1 - P2) / N2) + (1 / N1 + 1 / N2) / 2
    assert limits("risk_difference", "wald_cc") == pytest.approx((P1 - P2 - half, P1 - P2 + half))


def test_known_fault_of_a_score_routine() -> None:
    """METHODS.md, trap 1: 56/70 v 48/80 gives 0.0526 to 0.3440."""
    low, high = limits("risk_difference", "score_known_fault", Fourfold(56, 70, 48, 80))
    assert (round(low, 4), round(high, 4)) == (0.0526, 0.3440)


def test_ratio_as_if_counts_of_a_rate_and_test_based() -> None:
    half = Z * math.sqrt(1 / A + 1 / C)
    assert limits("risk_ratio", "poisson_model") == pytest.approx((P1 / P2 * math.exp(-half), P1 / P2 * math.exp(half)))
    determinant = A * N2 - C * N1
    m = A + C
    chi = abs(determinant) * math.sqrt((N1 + N2) / (N1 * N2 * m * (N1 + N2 - m)))
    ends = sorted(((P1 / P2) ** (1 - Z / chi), (P1 / P2) ** (1 + Z / chi)))
    assert limits("risk_ratio", "test_based") == pytest.approx(ends)


def test_half_added_only_where_a_cell_is_empty() -> None:
    for measure, plain, added in (("risk_ratio", "katz_log", "log_half_all_cells"), ("odds_ratio", "woolf_logit", "gart_half")):
        assert limits(measure, "half_when_empty") == limits(measure, plain)
        empty = Fourfold(5, 50, 0, 50)
        assert limits(measure, "half_when_empty", empty) == limits(measure, added, empty)


def test_zero_cell_in_print() -> None:
    """An odds ratio of 11.2 (0.56 to 222.99) is printed by the logit with 1/2 in every cell (phrasebook, section 9).

    The counts behind it are not given there; 5/45 v 0/45 is one table of that kind and is worked out here.
    """
    a, b, c, d = 5.5, 40.5, 0.5, 45.5
    half = Z * math.sqrt(1 / a + 1 / b + 1 / c + 1 / d)
    found = limits("odds_ratio", "half_when_empty", Fourfold(5, 45, 0, 45))
    assert found == pytest.approx((a * d / (b * c) * math.exp(-half), a * d / (b * c) * math.exp(half)))


def test_efficacy_from_the_exact_split() -> None:
    low, high = limits("risk_ratio", "efficacy_exact_split", Fourfold(5, 9000, 71, 9000))
    # Equal arms: the ratio is the odds of the split, whose exact limits put 2.5% in each tail.
    for share, tail in ((low / (1 + low), "above"), (high / (1 + high), "below")):
        terms = range(5, 77) if tail == "above" else range(6)
        chance = sum(math.comb(76, k) * share**k * (1 - share) ** (76 - k) for k in terms)
        assert chance == pytest.approx(0.025, rel=1e-9)


def test_z_tests() -> None:
    def two_sided(z: float) -> float:
        return math.erfc(abs(z) / math.sqrt(2))

    found = {t.key: float(t.p(TABLE)) for t in TESTS if not t.offered}
    b, d = N1 - A, N2 - C
    assert found["wald_z_difference"] == pytest.approx(
        two_sided((P1 - P2) / math.sqrt(P1 * (1 - P1) / N1 + P2 * (1 - P2) / N2))
    )
    assert found["wald_z_ratio"] == pytest.approx(two_sided(math.log(P1 / P2) / math.sqrt(1 / A - 1 / N1 + 1 / C - 1 / N2)))
    assert found["wald_z_odds"] == pytest.approx(
        two_sided(math.log(A * d / (b * C)) / math.sqrt(1 / A + 1 / b + 1 / C + 1 / d))
    )
