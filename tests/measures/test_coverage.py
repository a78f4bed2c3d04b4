"""Stored coverage against the enumeration it comes from, and against a plain double loop."""

from __future__ import annotations

import math

import numpy as np
import pytest

from app.measures.coverage import SIZES, effect_coverage, risk_coverage, size_of_test
from app.measures.fourfold import Fourfold
from app.measures.registry import MEASURES, RISK_METHODS, TESTS, effect_methods
from tests.generate_coverage import GRID
from tests.generate_coverage import effect_coverage as enumerated


@pytest.mark.parametrize(
    ("measure", "key", "row", "column"),
    [
        ("risk_difference", "wald", 0, 0),
        ("risk_difference", "newcombe", 3, 9),
        ("risk_ratio", "katz_log", 1, 20),
        ("odds_ratio", "woolf_logit", 10, 11),
    ],
)
def test_coverage_agrees_with_a_plain_double_loop(measure: str, key: str, row: int, column: int) -> None:
    """Table by table, probabilities by factorials, in ordinary arithmetic."""
    method = next(m for m in effect_methods(measure) if m.key == key)  # type: ignore[arg-type]
    n = 20
    first, second = GRID[::2][row], GRID[::2][column]
    true = {
        "risk_difference": first - second,
        "risk_ratio": first / second,
        "odds_ratio": first / (1 - first) / (second / (1 - second)),
    }[measure]
    covered = 0.0
    for a in range(n + 1):
        for c in range(n + 1):
            low, high = (float(x) for x in method.interval(Fourfold(a, n, c, n), 0.95))
            if math.isnan(low) or (low <= true + 1e-12 and true - 1e-12 <= high):
                chance = math.comb(n, a) * first**a * (1 - first) ** (n - a)
                covered += chance * math.comb(n, c) * second**c * (1 - second) ** (n - c)
    stored = effect_coverage(measure, key)[0]
    assert stored.people == n
    assert stored.values[row][column] == pytest.approx(covered, abs=0.00051)


@pytest.mark.parametrize("measure", MEASURES)
def test_stored_coverage_is_what_the_generator_gives(measure: str) -> None:
    for method in effect_methods(measure):  # type: ignore[arg-type]
        stored = effect_coverage(measure, method.key)[0]
        fresh = enumerated(method, 20, GRID[::14])
        kept = np.array(stored.values)[::7, ::7]
        np.testing.assert_allclose(kept, fresh, atol=0.00051)


def test_every_method_offered_has_its_coverage() -> None:
    for measure in MEASURES:
        for method in effect_methods(measure):
            assert [c.people for c in effect_coverage(measure, method.key)] == list(SIZES)
    for risk in RISK_METHODS:
        assert [c.people for c in risk_coverage(risk.key)] == list(SIZES)
    for test in TESTS:
        assert [s.people for s in size_of_test(test.key)] == (list(SIZES) if test.offered else [])


def test_exact_methods_keep_their_level() -> None:
    for found in (*risk_coverage("clopper_pearson"), *effect_coverage("odds_ratio", "fisher_exact_cond")):
        assert found.least >= 0.95
    for key in ("fisher_irwin", "fisher_double", "barnard_pooled_z", "boschloo_irwin", "boschloo_twice_one_sided"):
        assert all(size.largest <= 0.05 for size in size_of_test(key))
