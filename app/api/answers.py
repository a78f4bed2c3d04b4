"""Results as JSON values: undefined is null, infinite is "inf" or "-inf"."""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence
from fractions import Fraction
from typing import Any

import app.measures.backcalc as back
from app import __version__
from app.appraisal.effects import EffectResult, Effects, RiskResult
from app.appraisal.rates import RateResult, Rates
from app.appraisal.run import exact_difference
from app.intake.counts import ClusterInput, EffectsInput, PairedInput, ProbabilityInput, RatesInput, StrataInput
from app.intake.estimates import BackInput, EValueInput, HazardInput, InteractionInput, TranslateInput
from app.measures import bayes, cluster, evalue, hazard, needed, paired, ratio, translate
from app.measures.fourfold import Floats
from app.measures.interval import Interval, single
from app.measures.needed import Segment, direction_of, needed_segments, rounded_needed
from app.measures.registry import STRATA_METHODS, STRATA_TESTS, Described, Measure

Json = dict[str, Any]

CASE_CONTROL = (
    "In a case-control study the number of cases and controls was chosen, so the totals hold no risk; only the odds ratio "
    "can be had."
)


def number(value: float | Floats) -> float | str | None:
    """One number for JSON."""
    plain = float(value)
    if math.isnan(plain):
        return None
    if math.isinf(plain):
        return "inf" if plain > 0 else "-inf"
    return plain


def versioned(**parts: Any) -> Json:
    """An answer with the version that made it."""
    return {**parts, "version": __version__}


def _interval(method: Described, interval: Interval) -> Json:
    return {"method": method.key, "low": number(interval.low), "high": number(interval.high), "default": method.default}


def limits(estimate: float | Floats, low: float | Floats, high: float | Floats) -> Json:
    """An estimate with its limits."""
    return {"estimate": number(estimate), "low": number(low), "high": number(high)}


def _measure(result: EffectResult) -> Json:
    intervals = []
    for method, interval in result.intervals:
        shown = _interval(method, interval)
        if method.key in result.own_estimates:
            shown["estimate"] = number(result.own_estimates[method.key])
        intervals.append(shown)
    return {"estimate": number(result.estimate), "intervals": intervals}


def _risk(result: RiskResult) -> Json:
    return {"estimate": number(result.estimate), "intervals": [_interval(m, i) for m, i in result.intervals]}


def _reduction(result: EffectResult) -> Json:
    intervals = []
    for method, interval in result.intervals:
        shown = _interval(method, Interval(1.0 - interval.high, 1.0 - interval.low))
        if method.key in result.own_estimates:
            shown["estimate"] = number(1.0 - result.own_estimates[method.key])
        intervals.append(shown)
    return {"estimate": number(1.0 - result.estimate), "intervals": intervals}


def segments_json(segments: Iterable[Segment]) -> list[Json]:
    """Stretches of a number needed to treat."""
    return [{"direction": s.direction, "low": number(s.low), "high": number(s.high)} for s in segments]


_LEAST = Fraction(1, 10**300)  # a smaller difference has no number needed that a float could hold


def needed_json(difference: Fraction, unwanted: bool) -> Json:
    """A number needed to treat from an exact difference, without its interval."""
    direction = direction_of(difference, unwanted)
    exact = abs(Fraction(1) / difference) if abs(difference) > _LEAST else None
    rounded = rounded_needed(exact, direction) if exact else None
    return {
        "estimate": number(math.inf if exact is None else float(exact)),
        "rounded": None if rounded is None else whole_if(rounded.value),
        "rule": None if rounded is None else rounded.rule,
        "direction": direction,
    }


def whole_if(value: Fraction) -> int | float:
    """A fraction as a whole number where it is one."""
    return value.numerator if value.denominator == 1 else float(value)


def effects_answer(effects: Effects, given: EffectsInput) -> Json:
    """The answer of /effects for one table; measures that the design forbids are null, and say why."""
    measures = effects.measures
    unwanted = given.event_is == "unwanted"
    with_intervals = needed_json(exact_difference(effects.table, 0), unwanted)
    with_intervals["intervals"] = [
        {"method": method.key, "segments": segments_json(needed_segments(interval, unwanted)), "default": method.default}
        for method, interval in measures["risk_difference"].intervals
    ]
    risks = {"intervention": _risk(effects.intervention), "comparator": _risk(effects.comparator)}
    found: Json = {
        "risk_difference": _measure(measures["risk_difference"]),
        "risk_ratio": _measure(measures["risk_ratio"]),
        "odds_ratio": _measure(measures["odds_ratio"]),
        "relative_risk_reduction": _reduction(measures["risk_ratio"]),
        "number_needed_to_treat": with_intervals,
    }
    forbidden = ("risks", *(name for name in found if name != "odds_ratio")) if given.design == "case_control" else ()
    return versioned(
        risks=None if "risks" in forbidden else risks,
        effects={name: None if name in forbidden else value for name, value in found.items()},
        p_values=[
            {"test": r.test.key, "p": number(r.p), "log10_p": number(r.log10_p), "default": r.test.default}
            for r in effects.tests
        ],
        refused=[{"measure": name, "why": CASE_CONTROL} for name in forbidden],
    )


def _rate(result: RateResult, factor: float = 1.0) -> Json:
    intervals = [_interval(m, Interval(i.low * factor, i.high * factor)) for m, i in result.intervals]
    return {"estimate": number(result.estimate * factor), "intervals": intervals}


def rates_answer(rates: Rates, given: RatesInput) -> Json:
    """The answer of /rates."""

    def arms(factor: float) -> Json:
        return {"intervention": _rate(rates.intervention, factor), "comparator": _rate(rates.comparator, factor)}

    return versioned(
        rates=arms(1.0),
        rate_ratio=_rate(rates.measures["rate_ratio"]),
        rate_difference=_rate(rates.measures["rate_difference"]),
        scaled={
            "per": given.per,
            "rates": arms(given.per),
            "rate_difference": _rate(rates.measures["rate_difference"], given.per),
        },
        mean_follow_up=dict(zip(("intervention", "comparator"), _mean_follow_up(given), strict=True)),
        person_time_needed=_person_time_needed(rates),
        p_values=[{"test": test.key, "p": number(p), "default": test.default} for test, p in rates.tests],
    )


def _mean_follow_up(given: RatesInput) -> list[float | None]:
    """Person-time over people, where the people are given."""
    times = float(given.data.time_intervention), float(given.data.time_comparator)
    return [time / total if total else None for time, total in zip(times, given.totals, strict=True)]


def _person_time_needed(rates: Rates) -> Json:
    """Person-time to one event fewer or more, its interval the inverted default one of the difference."""
    result = rates.measures["rate_difference"]
    _, interval = next(pair for pair in result.intervals if pair[0].default)
    words = {"benefit": "fewer", "harm": "more"}
    segments = segments_json(needed_segments(interval, True))
    return {
        "estimate": number(needed.number_needed(result.estimate)),
        "segments": [{**segment, "direction": words[segment["direction"]]} for segment in segments],
        "assumes": "Person-time for one event fewer or more at a constant rate; not a number of people.",
    }


def strata_answer(given: StrataInput) -> Json:
    """The answer of /strata."""

    def pooled(measure: Measure) -> Json:
        found = [(m, m.pooled(given.strata, given.confidence_level)) for m in STRATA_METHODS if m.measure == measure]
        intervals = [_interval(method, result.interval) for method, result in found]
        return {"estimate": number(found[0][1].estimate), "intervals": intervals}

    tests = [(row.key, row.test(given.strata)) for row in STRATA_TESTS]
    return versioned(
        odds_ratio=pooled("odds_ratio"),
        risk_ratio=pooled("risk_ratio"),
        risk_difference=pooled("risk_difference"),
        tests=[{"test": key, "statistic": number(t.statistic), "df": t.df, "p": number(t.p)} for key, t in tests],
    )


def hazard_answer(given: HazardInput) -> Json:
    """The answer of /hazard: the ratio's limits carried to the risk, the comparator's risk taken as known."""
    estimate, low, high = given.hazard_ratio
    risks = [float(hazard.risk_with(hr, given.comparator_risk)) for hr in (estimate, low, high)]
    differences = [float(hazard.risk_difference_at(hr, given.comparator_risk)) for hr in (estimate, low, high)]
    unwanted = given.event_is == "unwanted"
    estimate_only = needed_json(Fraction(differences[0]), unwanted)
    interval = single(*differences[1:])
    return versioned(
        risk_with=limits(*risks),
        risk_difference=limits(*differences),
        number_needed_to_treat={**estimate_only, "segments": segments_json(needed_segments(interval, unwanted))},
        assumes="The ratio of the hazards is the same at all times up to this one.",
    )


def back_answer(given: BackInput) -> Json:
    """The answer of /back-calculation."""
    if given.limits is not None:
        low, high = given.limits
        found = back.p_from_interval(given.estimate, low, high, given.scale, given.confidence_level, sides=given.sides)
        interval = single(low, high)
    else:
        interval, found = back.interval_from_p(
            given.estimate, given.p or 1.0, given.scale, given.confidence_level, sides=given.sides
        )
    return versioned(
        z=number(found.z),
        standard_error=number(found.standard_error),
        p=number(found.p),
        low=number(interval.low),
        high=number(interval.high),
    )


def translate_answer(given: TranslateInput) -> Json:
    """The answer of /translate: impossible risks are said to be so, not clipped."""
    rows = []
    for start in given.starting_risks:
        carry = translate.risk_from_odds_ratio if given.measure == "odds_ratio" else translate.risk_from_risk_ratio
        risk = float(carry(given.ratio, start))
        possible = 0.0 <= risk <= 1.0
        same = given.ratio if given.measure == "risk_ratio" else translate.risk_ratio_from_odds_ratio(given.ratio, start)
        rows.append(
            {
                "starting_risk": start,
                "possible": possible,
                "risk_with": number(risk) if possible else None,
                "difference": number(risk - start) if possible else None,
                "risk_ratio": number(same),
            }
        )
    return versioned(risks=rows)


def e_value_answer(given: EValueInput) -> Json:
    """The answer of /e-value."""
    estimate, low, high = (evalue.as_risk_ratio(value, given.reported) for value in given.estimate)
    return versioned(
        risk_ratio=number(estimate),
        e_value=number(evalue.e_value(estimate)),
        e_value_of_limit=number(evalue.e_value_of_limit(estimate, low, high)),
    )


def interaction_answer(given: InteractionInput) -> Json:
    """The answer of /interaction."""
    found = back.interaction(given.first, given.second, given.scale, given.confidence_level)
    return versioned(
        contrast=limits(found.contrast, *found.interval),
        difference=number(found.difference),
        standard_error=number(found.standard_error),
        z=number(found.z),
        p=number(found.p),
    )


def cluster_answer(given: ClusterInput) -> Json:
    """The answer of /cluster."""
    effect = cluster.design_effect(given.cluster_size, given.intracluster_correlation)
    counts: Sequence[Floats] = cluster.effective_counts(given.table, effect)
    interval = cluster.effective_risk_ratio(given.table, effect, given.confidence_level)
    a, n1, c, n2 = (float(count) for count in counts)
    return versioned(
        design_effect=float(effect),
        intervention={"events": a, "total": n1},
        comparator={"events": c, "total": n2},
        risk_ratio=limits(ratio.risk_ratio(given.table), *interval),
    )


def paired_answer(given: PairedInput) -> Json:
    """The answer of /paired."""
    tests = (
        ("mcnemar_midp", paired.mcnemar_midp, True),
        ("mcnemar", paired.mcnemar, False),
        ("mcnemar_cc", paired.mcnemar_cc, False),
        ("mcnemar_exact", paired.mcnemar_exact, False),
    )
    return versioned(
        p_values=[
            {"test": key, "p": number(p(given.first_only, given.second_only)), "default": default} for key, p, default in tests
        ]
    )


def probability_answer(given: ProbabilityInput) -> Json:
    """The answer of /probability."""
    return versioned(probability_lower=float(bayes.probability_lower(given.table, given.prior)), prior=given.prior)
