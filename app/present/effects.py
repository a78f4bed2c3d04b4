"""Each measure of two arms as a card: value, interval, strip, and what to read beside it."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from fractions import Fraction

from markupsafe import Markup

from app.appraisal.model import BothArms, IntervalRange, MeasureAppraisal, OutcomeInput, Range
from app.appraisal.sheet import Design, EventIs
from app.measures.needed import Segment, rounded_needed
from app.present.figures.strip import Marks, strip
from app.present.numerals import (
    UNDEFINED,
    decimals_showing_sides,
    difference_decimals,
    fixed,
    needed,
    per_1000_decimals,
    percentages,
    ratio_decimals,
    sizes,
    spread,
    step_decimals,
)
from app.present.wording import DIRECTIONS, FEWER_MORE, LOWER_HIGHER, NAIVE, PER_CENT, POINTS, Names, signed_spread


@dataclass(frozen=True, slots=True)
class OtherInterval:
    """An interval by another registered method."""

    method: str
    interval: str


@dataclass(frozen=True, slots=True)
class MeasureView:
    """One measure: its value, its interval, the method, a strip, and what to read beside it."""

    key: str
    name: str
    value: str
    interval: str
    method: str
    beside: str
    strip: Markup
    naive: str = ""
    unsettled: bool = False
    others: tuple[OtherInterval, ...] = ()


def hull(interval: IntervalRange) -> tuple[float, float]:
    """The widest interval over the tables that fit."""
    return interval.low.low, interval.high.high


def percent_spread(low: float, high: float, decimals: int) -> str:
    """Two probabilities as percentages, "8.4 to 14.4%"."""
    texts = percentages((low, high), decimals)
    return f"{spread(texts)}%"


def difference_views(both: BothArms, names: Names, decimals: int, given: OutcomeInput) -> tuple[MeasureView, MeasureView]:
    """Risk difference and number needed to treat."""
    result = both.measures["risk_difference"]
    low, high = hull(result.default)
    low, high = max(low, -1.0), min(high, 1.0)  # some formulas leave the scale
    least = difference_decimals([100 * v for v in result.estimate], max(decimals, 1))
    shared = decimals_showing_sides([100 * v for v in (*result.estimate, low, high)], least, (0.0,))

    def points(values: Sequence[float], words: tuple[str, str] = LOWER_HIGHER) -> str:
        return signed_spread(values, sizes(values, 100.0, shared), words)

    people_decimals = per_1000_decimals(result.estimate, (low, high))

    def per_1000(values: Sequence[float]) -> str:
        return signed_spread(values, sizes(values, 1000.0, people_decimals), FEWER_MORE)

    same = result.estimate == (0.0, 0.0)
    value, interval = "no difference" if same else points(result.estimate, POINTS), points((low, high))
    difference = MeasureView(
        key="risk_difference",
        name="Risk difference",
        value=value,
        interval=interval,
        method=result.intervals[0][0].name,
        beside=f"{per_1000(result.estimate)} per 1000{names.within} ({per_1000((low, high))})",
        strip=strip(
            Marks(
                result.estimate,
                low,
                high,
                0.0,
                False,
                lambda v, step: fixed(100 * v, step_decimals(100 * step)) if abs(v) > 1e-12 else "0",
                f"Risk difference {value}, interval {interval}, no effect at 0",
            )
        ),
        naive=NAIVE[given.follow_up],
        others=tuple(
            OtherInterval(method.name, points(_within_scale(hull(other))))
            for method, other in result.intervals
            if not method.default
        ),
    )
    return difference, _needed_view(both, names, difference, given.event_is)


def _within_scale(ends: tuple[float, float]) -> tuple[float, float]:
    """Limits of a difference of risks, cut where a formula leaves -1 to 1."""
    return max(ends[0], -1.0), min(ends[1], 1.0)


def segment_text(segment: Segment) -> tuple[str, str]:
    """The two ends of one segment of a number needed to treat, rounded outward."""
    ends = []
    for value, limit in ((segment.low, "low"), (segment.high, "high")):
        if math.isinf(value):
            ends.append(needed(math.inf, 0))
        else:
            rounded = rounded_needed(max(Fraction(1), Fraction(value)), segment.direction, limit=limit)  # type: ignore[arg-type]
            ends.append(needed(rounded.value, rounded.decimals))
    return ends[0], ends[1]


def needed_interval(segments: Sequence[Segment], direction: str, words: Mapping[str, str]) -> str:
    """An interval of the number needed to treat; through infinity where it runs across no difference."""
    if not segments:
        return UNDEFINED
    if len(segments) == 2:
        (benefit, _), (harm, _) = (segment_text(segment) for segment in segments)
        return f"{benefit} {words['benefit']} … ∞ … {harm} {words['harm']}"
    text = spread(segment_text(segments[0]))
    return text if segments[0].direction == direction else f"{text} {words[segments[0].direction]}"


def _needed_beside(both: BothArms, names: Names) -> str:
    result = both.needed
    against = f"against {names.comparator}{names.within}"
    if result.exact is None or result.rounded is None:
        why = "there is no difference to invert" if result.direction == "none" else "the tables that fit differ in direction"
        return f"{against}; {why}"
    unrounded = spread([fixed(float(exact), 2 if exact < 10 else 1) for exact in result.exact])
    risk = percent_spread(*both.comparator.estimate, 1)
    return f"{against}, where the risk is {risk}. Unrounded {unrounded}, rounded {result.rounded[0].rule}; limits outward"


def _needed_view(both: BothArms, names: Names, difference: MeasureView, event_is: EventIs) -> MeasureView:
    result = both.needed
    words = DIRECTIONS[event_is]
    if result.rounded is None:
        value = "none" if result.direction == "none" else "either way"
    else:
        value = f"{spread([needed(r.value, r.decimals) for r in result.rounded])} {words[result.direction]}"
    measure = both.measures["risk_difference"]
    low, high = hull(measure.default)
    interval = needed_interval(result.segments, result.direction, words)
    beside = _needed_beside(both, names)
    return MeasureView(
        key="number_needed_to_treat",
        name="Number needed to treat",
        value=value,
        interval=interval,
        method=f"{measure.intervals[0][0].name}, inverted",
        beside=f"Direction not settled; {beside}" if len(result.segments) == 2 and result.rounded else beside,
        strip=strip(
            Marks(
                measure.estimate,
                low,
                high,
                0.0,
                False,
                lambda v, _step: "∞" if abs(v) < 1e-12 else fixed(abs(1 / v), 0 if abs(v) <= 0.2 else 1),
                f"Number needed to treat {value}, interval {interval}, no effect at infinity",
            )
        ),
        naive=difference.naive,
        unsettled=len(result.segments) == 2,
        others=tuple(
            OtherInterval(method.name, needed_interval(segments, result.direction, words)) for method, segments in result.others
        ),
    )


def _ratio_text(low: float, high: float, decimals: int) -> str:
    """A ratio interval in words, open where a limit cannot be had."""
    if math.isnan(low) or math.isnan(high):
        return "cannot be stated"
    if low == 0 and math.isinf(high):
        return "any ratio"
    if math.isinf(high):
        return f"{fixed(low, decimals)} or more"
    return spread([fixed(low, decimals), fixed(high, decimals)])


def _ratio_decimals(ends: tuple[float, float], least: int) -> int:
    """Decimals that keep a positive limit from 0."""
    figures = [v for v in ends if math.isfinite(v)]
    return max(least, decimals_showing_sides(figures, least, (0.0, 1.0)))


def _cannot_be_stated(estimate: Range) -> bool:
    return math.isnan(estimate.low) or math.isinf(estimate.high)


def _ratio_view(key: str, name: str, measure: MeasureAppraisal, beside: str, why_not: str) -> MeasureView:
    low, high = hull(measure.default)
    missing = _cannot_be_stated(measure.estimate)
    figures = [v for v in (*measure.estimate, low, high) if math.isfinite(v)]
    decimals = decimals_showing_sides(figures, ratio_decimals(figures), (0.0, 1.0))
    value = "cannot be stated" if missing else spread([fixed(v, decimals) for v in measure.estimate])
    interval = _ratio_text(low, high, decimals)
    return MeasureView(
        key=key,
        name=name,
        value=value,
        interval=interval,
        method=measure.intervals[0][0].name,
        beside=why_not if missing else beside,
        strip=strip(
            Marks(
                measure.estimate,
                low,
                high,
                1.0,
                True,
                lambda v, _step: fixed(v, step_decimals(v)),
                f"{name} {value}, interval {interval}, no effect at 1",
            )
        ),
        others=tuple(
            OtherInterval(method.name, _ratio_text(*hull(other), _ratio_decimals(hull(other), decimals)))
            for method, other in measure.intervals
            if not method.default
        ),
    )


def _change_text(values: Sequence[float], decimals: int, *, bare: bool) -> str:
    """1 - ratio (low and high ratio given) as "5 to 53%", or with words where the sides differ.

    `bare` leaves the word out where both lie on the side that the card's name says.
    """
    low, high = values
    if math.isnan(low) or math.isnan(high):
        return "cannot be stated"
    if math.isinf(high):
        if low == 0:
            return "any change"
        size = fixed(abs(100 * (low - 1)), decimals)
        return f"{size}% higher or more" if low >= 1 else f"from {size}% lower, with no upper limit"
    changes = (low - 1.0, high - 1.0)
    sizes_ = [fixed(abs(100 * change), decimals) for change in changes]
    text = signed_spread(changes, sizes_, PER_CENT)
    return text.removesuffix(" lower").removesuffix(" higher") if bare and low != high and (high <= 1 or low >= 1) else text


def _reduction_view(measure: MeasureAppraisal, names: Names, why_not: str) -> MeasureView:
    low, high = hull(measure.default)
    estimate = measure.estimate
    missing = _cannot_be_stated(estimate)
    changes = [100 * (v - 1) for v in (*estimate, low, high) if math.isfinite(v)]
    decimals = decimals_showing_sides(changes, 0, (0.0, -100.0))
    increase = estimate.low > 1
    name = "Relative risk increase" if increase else "Relative risk reduction"
    left = spread([fixed(100 * v, decimals) for v in estimate])
    one_side = estimate.high <= 1 or increase
    value = "cannot be stated" if missing else _change_text(estimate, decimals, bare=False)
    if one_side and not missing:
        value = value.removesuffix(" lower").removesuffix(" higher")
    interval = _change_text((low, high), decimals, bare=one_side and not missing)

    def tick(ratio: float, _step: float) -> str:
        if ratio == 1:
            return "0"
        change = 100 * (ratio - 1)
        return f"{fixed(change, decimals_showing_sides((change,), 1 if 0.9 < ratio < 1.1 else 0, (0.0, -100.0)))}%"

    return MeasureView(
        key="relative_risk_reduction",
        name=name,
        value=value,
        interval=interval,
        method=f"{'ratio − 1' if increase else '1 − ratio'}, {measure.intervals[0][0].name}",
        beside=why_not if missing else f"{left}% of the risk with {names.comparator}",
        strip=strip(Marks(estimate, low, high, 1.0, True, tick, f"{name} {value}, interval {interval}, no effect at 0")),
        others=tuple(
            OtherInterval(method.name, _change_text(hull(other), decimals, bare=False))
            for method, other in measure.intervals
            if not method.default
        ),
    )


def _why_not(both: BothArms) -> str:
    """Why a ratio cannot be stated."""
    events = both.fits.tables.events_comparator
    if events.any():
        return "in some of the tables that fit, the comparator has no events"
    return "no events in the comparator" if both.fits.tables.events_intervention.any() else "no events in either arm"


def relative_views(both: BothArms, names: Names, design: Design) -> tuple[MeasureView, ...]:
    """Risk ratio, relative reduction and odds ratio; the last alone where the design forbids the others."""
    ratio, odds = both.measures["risk_ratio"], both.measures["odds_ratio"]
    why_not = _why_not(both)
    no_odds = why_not if not both.fits.tables.events_comparator.any() else "a cell is empty"
    if design == "case_control":
        return (
            _ratio_view(
                "odds_ratio", "Odds ratio", odds, f"of exposure, {names.intervention} over {names.comparator}", no_odds
            ),
        )
    stands_for = ""
    if not _cannot_be_stated(ratio.estimate):
        decimals = decimals_showing_sides(ratio.estimate, ratio_decimals(ratio.estimate), (1.0,))
        same = spread([fixed(v, decimals) for v in ratio.estimate])
        risk = percent_spread(*both.comparator.estimate, 1)
        stands_for = f"odds, not risk: at {risk} with {names.comparator} it is a risk ratio of {same}"
    return (
        _ratio_view(
            "risk_ratio", "Risk ratio", ratio, f"of {names.counted}, {names.intervention} over {names.comparator}", why_not
        ),
        _reduction_view(ratio, names, why_not),
        _ratio_view("odds_ratio", "Odds ratio", odds, stands_for, no_odds),
    )
