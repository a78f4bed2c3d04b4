"""The one list of methods. The panels, the API, the Methods page and the hand-out all read it.

Rows stand in `app/measures/listed/`, what a row tells in `app/measures/described.py`. A key, once
released, is never renamed (`tests/measures/test_registry.py` holds the list).
"""

from __future__ import annotations

from app.measures.described import (
    Described,
    EffectMethod,
    Measure,
    NoDifferenceTest,
    RateEffectMethod,
    RateMeasure,
    RateMethod,
    RateTest,
    RiskMethod,
    StrataMethod,
    StrataTestMethod,
)
from app.measures.listed.differences import DIFFERENCES
from app.measures.listed.odds_ratios import ODDS_RATIOS
from app.measures.listed.rates import RATE_EFFECTS, RATE_METHODS, RATE_TESTS
from app.measures.listed.ratios import RATIOS
from app.measures.listed.risks import RISK_METHODS
from app.measures.listed.strata import STRATA_METHODS, STRATA_TESTS
from app.measures.listed.tests_of_difference import TESTS

__all__ = [
    "EFFECT_METHODS",
    "MEASURES",
    "RATE_EFFECTS",
    "RATE_METHODS",
    "RATE_TESTS",
    "RISK_METHODS",
    "STRATA_METHODS",
    "STRATA_TESTS",
    "TESTS",
    "Described",
    "EffectMethod",
    "Measure",
    "NoDifferenceTest",
    "RateEffectMethod",
    "RateMeasure",
    "RateMethod",
    "RateTest",
    "RiskMethod",
    "StrataMethod",
    "StrataTestMethod",
    "effect_methods",
    "everything",
    "quick_tests",
]

EFFECT_METHODS: tuple[EffectMethod, ...] = DIFFERENCES + RATIOS + ODDS_RATIOS
MEASURES: tuple[Measure, ...] = ("risk_difference", "risk_ratio", "odds_ratio")


def effect_methods(measure: Measure) -> tuple[EffectMethod, ...]:
    """The interval methods of one measure that are offered as results, the default first."""
    return tuple(method for method in EFFECT_METHODS if method.measure == measure and method.offered)


def quick_tests() -> tuple[NoDifferenceTest, ...]:
    """The tests that are offered as results without being asked for."""
    return tuple(test for test in TESTS if test.offered and not test.on_request)


def everything() -> tuple[Described, ...]:
    """Every registered row."""
    rows: tuple[tuple[Described, ...], ...] = (
        RISK_METHODS,
        EFFECT_METHODS,
        TESTS,
        RATE_METHODS,
        RATE_EFFECTS,
        RATE_TESTS,
        STRATA_METHODS,
        STRATA_TESTS,
    )
    return tuple(row for kind in rows for row in kind)
