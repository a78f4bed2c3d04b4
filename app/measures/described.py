"""What a registered method tells of itself, and the kinds of method there are."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Literal

import numpy as np

from app.measures.fourfold import Counts, Floats, Fourfold
from app.measures.interval import Interval
from app.measures.persontime import PersonTime
from app.measures.strata import Pooled, StrataTest

Measure = Literal["risk_difference", "risk_ratio", "odds_ratio"]
RateMeasure = Literal["rate_ratio", "rate_difference"]
PrintedUse = Literal["usual", "seldom", "never"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Described:
    """What every registered row tells of itself.

    `formula` is LaTeX; `assumes` what must hold; `caveat` when it misleads; `sources` keys of
    `app.sources.SOURCES`; `printed_use` how often papers print it. What is not `offered` is kept for
    checking print only and is never a result.
    """

    key: str
    name: str
    formula: str
    assumes: str
    caveat: str
    sources: tuple[str, ...]
    printed_use: PrintedUse
    default: bool = False
    offered: bool = True


@dataclass(frozen=True, slots=True, kw_only=True)
class RiskMethod(Described):
    """An interval for one risk: (events, total, confidence level) -> Interval."""

    interval: Callable[[Counts, Counts, float], Interval]


@dataclass(frozen=True, slots=True, kw_only=True)
class EffectMethod(Described):
    """An interval for a measure of two arms: (table, confidence level) -> Interval.

    `estimate` is its own estimate where that is not the raw one.
    """

    measure: Measure
    interval: Callable[[Fourfold, float], Interval]
    estimate: Callable[[Fourfold], Floats] | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class NoDifferenceTest(Described):
    """A test of no difference: table -> natural log of p, which outlasts p itself when p is tiny.

    One that is `on_request` takes long in large tables and is computed only when asked for.
    """

    log_p: Callable[[Fourfold], Floats]
    on_request: bool = False

    def p(self, table: Fourfold) -> Floats:
        """P of each table; 0 where it is too small for a float."""
        return np.asarray(np.exp(self.log_p(table)))


@dataclass(frozen=True, slots=True, kw_only=True)
class RateMethod(Described):
    """An interval for one rate: (events, person-time, confidence level) -> Interval."""

    interval: Callable[[Floats, Floats, float], Interval]


@dataclass(frozen=True, slots=True, kw_only=True)
class RateEffectMethod(Described):
    """An interval for a measure of two rates: (data, confidence level) -> Interval."""

    measure: RateMeasure
    interval: Callable[[PersonTime, float], Interval]


@dataclass(frozen=True, slots=True, kw_only=True)
class RateTest(Described):
    """A test of no difference in rates: data -> p."""

    p: Callable[[PersonTime], Floats]


@dataclass(frozen=True, slots=True, kw_only=True)
class StrataMethod(Described):
    """A pooled estimate over strata: (strata, confidence level) -> Pooled."""

    measure: Measure
    pooled: Callable[[Fourfold, float], Pooled]


@dataclass(frozen=True, slots=True, kw_only=True)
class StrataTestMethod(Described):
    """A test over strata: strata -> statistic, degrees of freedom and p."""

    test: Callable[[Fourfold], StrataTest]
