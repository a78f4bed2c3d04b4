"""Every registered measure, interval and test for a set of fourfold tables, by one array path."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass

import numpy as np

from app.measures.difference import risk_difference
from app.measures.fourfold import Counts, Floats, Fourfold
from app.measures.interval import Interval
from app.measures.odds import odds_ratio
from app.measures.ratio import risk_ratio
from app.measures.registry import (
    MEASURES,
    RISK_METHODS,
    TESTS,
    EffectMethod,
    Measure,
    NoDifferenceTest,
    RiskMethod,
    effect_methods,
    quick_tests,
)

ESTIMATES: Mapping[Measure, Callable[[Fourfold], Floats]] = {
    "risk_difference": risk_difference,
    "risk_ratio": risk_ratio,
    "odds_ratio": odds_ratio,
}


@dataclass(frozen=True, slots=True)
class RiskResult:
    """The risk of one arm in each table [0 to 1], with every registered interval."""

    estimate: Floats
    intervals: tuple[tuple[RiskMethod, Interval], ...]


@dataclass(frozen=True, slots=True)
class EffectResult:
    """One measure of two arms in each table, with every registered interval, the default first.

    `own_estimates` holds, by key, those of the methods that do not report the raw one.
    """

    estimate: Floats
    intervals: tuple[tuple[EffectMethod, Interval], ...]
    own_estimates: Mapping[str, Floats]

    @property
    def default(self) -> tuple[EffectMethod, Interval]:
        """The default method and its interval."""
        return next(pair for pair in self.intervals if pair[0].default)


@dataclass(frozen=True, slots=True)
class TestResult:
    """One test of no difference in each table: p and its base-10 logarithm."""

    test: NoDifferenceTest
    p: Floats
    log10_p: Floats


@dataclass(frozen=True, slots=True)
class Effects:
    """All that the counts alone give, for each of the tables."""

    table: Fourfold
    confidence_level: float
    intervention: RiskResult
    comparator: RiskResult
    measures: Mapping[Measure, EffectResult]
    tests: tuple[TestResult, ...]


def risk_of(events: Counts, total: Counts, confidence_level: float) -> RiskResult:
    """The risk of one arm and its intervals; `events` and `total` of one shape."""
    intervals = tuple((method, method.interval(events, total, confidence_level)) for method in RISK_METHODS)
    return RiskResult(np.asarray(events / total), intervals)


def _test(test: NoDifferenceTest, table: Fourfold) -> TestResult:
    log_p = test.log_p(table)
    return TestResult(test, np.asarray(np.exp(log_p)), np.asarray(log_p / np.log(10.0)))


def effect_of(measure: Measure, table: Fourfold, confidence_level: float) -> EffectResult:
    """One measure with every interval offered for it, for each of the tables."""
    intervals = tuple((method, method.interval(table, confidence_level)) for method in effect_methods(measure))
    own = {method.key: method.estimate(table) for method in effect_methods(measure) if method.estimate is not None}
    return EffectResult(ESTIMATES[measure](table), intervals, own)


def effects_of(table: Fourfold, confidence_level: float, *, exact_unconditional: bool = False) -> Effects:
    """Every measure, interval and test offered, for each of the tables.

    The exact unconditional tests take long in large tables and come only when asked for.
    """
    measures = {measure: effect_of(measure, table, confidence_level) for measure in MEASURES}
    asked = tuple(test for test in TESTS if test.on_request) if exact_unconditional else ()
    tests = tuple(_test(test, table) for test in quick_tests() + asked)
    return Effects(
        table,
        confidence_level,
        risk_of(table.events_intervention, table.total_intervention, confidence_level),
        risk_of(table.events_comparator, table.total_comparator, confidence_level),
        measures,
        tests,
    )
