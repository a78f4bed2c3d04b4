"""Results as JSON values: undefined is null, infinite is "inf" or "-inf"."""

from __future__ import annotations

import math
from fractions import Fraction
from typing import Any

from app import __version__
from app.appraisal.effects import EffectResult, Effects, RiskResult
from app.appraisal.run import exact_difference
from app.appraisal.sheet import EventIs
from app.measures.fourfold import Floats
from app.measures.interval import Interval
from app.measures.needed import direction_of, needed_segments, rounded_needed

Json = dict[str, Any]


def number(value: float | Floats) -> float | str | None:
    """One number for JSON."""
    plain = float(value)
    if math.isnan(plain):
        return None
    if math.isinf(plain):
        return "inf" if plain > 0 else "-inf"
    return plain


def _interval(key: str, interval: Interval, default: bool) -> Json:
    return {"method": key, "low": number(interval.low), "high": number(interval.high), "default": default}


def _measure(result: EffectResult | RiskResult) -> Json:
    intervals = [_interval(method.key, interval, method.default) for method, interval in result.intervals]
    return {"estimate": number(result.estimate), "intervals": intervals}


def _reduction(ratio: EffectResult) -> Json:
    intervals = [
        _interval(method.key, Interval(1.0 - interval.high, 1.0 - interval.low), method.default)
        for method, interval in ratio.intervals
    ]
    return {"estimate": number(1.0 - ratio.estimate), "intervals": intervals}


def _needed(effects: Effects, event_is: EventIs) -> Json:
    unwanted = event_is == "unwanted"
    difference = exact_difference(effects.table, 0)
    direction = direction_of(difference, unwanted)
    exact = abs(Fraction(1) / difference) if difference else None
    rounded = rounded_needed(exact, direction) if exact else None
    return {
        "estimate": number(math.inf if exact is None else float(exact)),
        "rounded": None if rounded is None else plain(rounded.value),
        "rule": None if rounded is None else rounded.rule,
        "direction": direction,
        "intervals": [
            {
                "method": method.key,
                "segments": [
                    {"direction": segment.direction, "low": number(segment.low), "high": number(segment.high)}
                    for segment in needed_segments(interval, unwanted)
                ],
                "default": method.default,
            }
            for method, interval in effects.measures["risk_difference"].intervals
        ],
    }


def plain(value: Fraction) -> int | float:
    """A fraction as a whole number where it is one."""
    return value.numerator if value.denominator == 1 else float(value)


def effects_answer(effects: Effects, event_is: EventIs) -> Json:
    """The answer of /effects for one table."""
    measures = effects.measures
    return {
        "risks": {"intervention": _measure(effects.intervention), "comparator": _measure(effects.comparator)},
        "effects": {
            "risk_difference": _measure(measures["risk_difference"]),
            "risk_ratio": _measure(measures["risk_ratio"]),
            "odds_ratio": _measure(measures["odds_ratio"]),
            "relative_risk_reduction": _reduction(measures["risk_ratio"]),
            "number_needed_to_treat": _needed(effects, event_is),
        },
        "p_values": [
            {"test": r.test.key, "p": number(r.p), "log10_p": number(r.log10_p), "default": r.test.default}
            for r in effects.tests
        ],
        "version": __version__,
    }
