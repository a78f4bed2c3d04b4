"""Every registered rate, measure and test for events over person-time."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass

import numpy as np

from app.measures.fourfold import Floats
from app.measures.interval import Interval
from app.measures.persontime import PersonTime
from app.measures.rates import rate_difference, rate_ratio
from app.measures.registry import (
    RATE_EFFECTS,
    RATE_METHODS,
    RATE_TESTS,
    RateEffectMethod,
    RateMeasure,
    RateMethod,
    RateTest,
)

_ESTIMATES: Mapping[RateMeasure, Callable[[PersonTime], Floats]] = {
    "rate_ratio": rate_ratio,
    "rate_difference": rate_difference,
}


@dataclass(frozen=True, slots=True)
class RateResult:
    """An estimate with every registered interval, the default first."""

    estimate: Floats
    intervals: tuple[tuple[RateMethod | RateEffectMethod, Interval], ...]


@dataclass(frozen=True, slots=True)
class Rates:
    """All that events over person-time give, per unit of person-time."""

    intervention: RateResult
    comparator: RateResult
    measures: Mapping[RateMeasure, RateResult]
    tests: tuple[tuple[RateTest, Floats], ...]


def _rate(events: Floats, time: Floats, confidence_level: float) -> RateResult:
    return RateResult(np.asarray(events / time), tuple((m, m.interval(events, time, confidence_level)) for m in RATE_METHODS))


def rates_of(data: PersonTime, confidence_level: float) -> Rates:
    """Every rate, measure, interval and test."""
    e1, t1, e2, t2 = data.floats()
    measures = {
        measure: RateResult(
            estimate(data), tuple((m, m.interval(data, confidence_level)) for m in RATE_EFFECTS if m.measure == measure)
        )
        for measure, estimate in _ESTIMATES.items()
    }
    tests = tuple((test, test.p(data)) for test in RATE_TESTS)
    return Rates(_rate(e1, t1, confidence_level), _rate(e2, t2, confidence_level), measures, tests)
