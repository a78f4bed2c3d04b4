"""Every registered measure, interval and test for a set of fourfold tables, by one array path."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from app.measures.difference import risk_difference
from app.measures.fourfold import Counts, Floats, Fourfold
from app.measures.interval import Interval
from app.measures.odds import odds_ratio
from app.measures.ratio import risk_ratio
from app.measures.registry import (
    RISK_METHODS,
    TESTS,
    EffectMethod,
    Measure,
    NoDifferenceTest,
    RiskMethod,
    effect_methods,
)

ESTIMATES = {"risk_difference": risk_difference, "risk_ratio": risk_ratio, "odds_ratio": odds_ratio}


@dataclass(frozen=True, slots=True)
class RiskResult:
    """The risk of one arm in each table [0 to 1], with every registered interval."""

    estimate: Floats
    intervals: tuple[tuple[RiskMethod, Interval], ...]


@dataclass(frozen=True, slots=True)
class EffectResult:
    """One measure of two arms in each table, with every registered interval, the default first."""

    estimate: Floats
    intervals: tuple[tuple[EffectMethod, Interval], ...]

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


def effects_of(table: Fourfold, confidence_level: float) -> Effects:
    """Every registered measure, interval and test for each of the tables."""
    measures: dict[Measure, EffectResult] = {}
    for measure, estimate in ESTIMATES.items():
        methods = effect_methods(measure)  # type: ignore[arg-type]
        intervals = tuple((method, method.interval(table, confidence_level)) for method in methods)
        measures[measure] = EffectResult(estimate(table), intervals)  # type: ignore[index]
    tests = tuple(TestResult(test, test.p(table), test.log_p(table) / np.log(10.0)) for test in TESTS)
    return Effects(
        table,
        confidence_level,
        risk_of(table.events_intervention, table.total_intervention, confidence_level),
        risk_of(table.events_comparator, table.total_comparator, confidence_level),
        measures,
        tests,
    )
