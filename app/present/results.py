"""The results of one outcome as a template shows them: every number already text."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from fractions import Fraction

from markupsafe import Markup

from app.appraisal.model import BothArms, IntervalRange, MeasureAppraisal, OutcomeAppraisal, Range, RiskAppraisal
from app.measures.needed import Segment, rounded_needed
from app.present.figures.strip import Marks, strip
from app.present.numerals import (
    UNDEFINED,
    decimals_showing_sides,
    fixed,
    needed,
    p_value,
    people,
    percent_decimals,
    percentages,
    ratio_decimals,
    sizes,
    spread,
)
from app.present.people import PeopleView, people_view
from app.present.wording import (
    FEWER_MORE,
    LOWER_HIGHER,
    NAIVE,
    PER_CENT,
    POINTS,
    Names,
    NoteText,
    note_text,
    signed_spread,
)


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
    others: tuple[OtherInterval, ...] = ()


@dataclass(frozen=True, slots=True)
class ArmRow:
    """One row of the rebuilt fourfold table."""

    arm: str
    key: str
    events: str
    non_events: str
    total: str
    risk: str
    interval: str


@dataclass(frozen=True, slots=True)
class TablesView:
    """How many tables fit, and the fourfold table or the range of each cell."""

    summary: str
    in_words: str
    level: str
    rows: tuple[ArmRow, ...]


@dataclass(frozen=True, slots=True)
class ResultsView:
    """Everything that follows from one outcome's boxes."""

    tables: TablesView | None
    absolute: tuple[MeasureView, ...]
    relative: tuple[MeasureView, ...]
    p_values: str
    people: PeopleView | None
    notes: tuple[NoteText, ...]


def hull(interval: IntervalRange) -> tuple[float, float]:
    """The widest interval over the tables that fit."""
    return interval.low.low, interval.high.high


def _percent_spread(low: float, high: float, decimals: int) -> str:
    texts = percentages((low, high), decimals)
    return f"{spread(texts)}%"


def _arm_row(arm: RiskAppraisal, key: str, name: str) -> ArmRow:
    runs = arm.fits.runs
    columns = (
        [end for run in runs for end in (run.first, run.last)],
        [run.total - end for run in runs for end in (run.first, run.last)],
        [run.total for run in runs],
    )
    events, others, total = (spread([people(min(column)), people(max(column))]) for column in columns)
    low, high = hull(arm.intervals[0][1])
    return ArmRow(name, key, events, others, total, _percent_spread(*arm.estimate, 1), _percent_spread(low, high, 1))


def _tables(outcome: OutcomeAppraisal, names: Names) -> TablesView | None:
    arms = (("intervention", outcome.intervention), ("comparator", outcome.comparator))
    rows = tuple(_arm_row(arm, key, names.arm(key)) for key, arm in arms if arm is not None)
    if not rows:
        return None
    level = f"{fixed(100 * outcome.input.confidence_level, 0)}% interval"
    if outcome.both is None:
        return TablesView("One arm so far.", "", level, rows)
    count = outcome.both.fits.count
    if count == 1:
        summary = "One table fits."
    else:
        summary = f"{people(count)} tables fit. Each figure below is the range over all of them."
    in_words = " ".join(f"{row.events} of {row.total} with {row.arm} had {names.counted}{names.within}." for row in rows)
    return TablesView(summary, in_words, level, rows)


def _difference_views(both: BothArms, names: Names, decimals: int, naive: str) -> tuple[MeasureView, MeasureView]:
    result = both.measures["risk_difference"]
    low, high = hull(result.default)
    shared = decimals_showing_sides([100 * v for v in (*result.estimate, low, high)], max(decimals, 1), (0.0,))

    def points(values: Sequence[float], words: tuple[str, str] = LOWER_HIGHER) -> str:
        return signed_spread(values, sizes(values, 100.0, shared), words)

    def per_1000(values: Sequence[float]) -> str:
        return signed_spread(values, sizes(values, 1000.0, 0), FEWER_MORE)

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
                lambda v: fixed(100 * v, decimals_showing_sides((100 * v,), 0, (0.0,))) if abs(v) > 1e-12 else "0",
                f"Risk difference {value}, interval {interval}, no effect at 0",
            )
        ),
        naive=naive,
        others=tuple(
            OtherInterval(method.name, points(hull(other))) for method, other in result.intervals if not method.default
        ),
    )
    return difference, _needed_view(both, names, difference)


def segment_text(segment: Segment) -> tuple[str, str]:
    """The two ends of one segment of a number needed to treat, rounded outward."""
    ends = []
    for value, limit in ((segment.low, "low"), (segment.high, "high")):
        if math.isinf(value):
            ends.append(needed(math.inf, 0))
        else:
            rounded = rounded_needed(Fraction(value), segment.direction, limit=limit)  # type: ignore[arg-type]
            ends.append(needed(rounded.value, rounded.decimals))
    return ends[0], ends[1]


def needed_interval(segments: Sequence[Segment], direction: str) -> str:
    """An interval of the number needed to treat; through infinity where it runs across no difference."""
    if not segments:
        return UNDEFINED
    if len(segments) == 2:
        (benefit, _), (harm, _) = (segment_text(segment) for segment in segments)
        return f"{benefit} to benefit … ∞ … {harm} to harm"
    text = spread(segment_text(segments[0]))
    return text if segments[0].direction == direction else f"{text} to {segments[0].direction}"


def _needed_view(both: BothArms, names: Names, difference: MeasureView) -> MeasureView:
    result = both.needed
    against = f"against {names.comparator}{names.within}"
    if result.exact is None or result.rounded is None:
        value = "none" if result.direction == "none" else "either way"
        beside = f"{against}; " + (
            "there is no difference to invert" if value == "none" else "the tables that fit differ in direction"
        )
    else:
        value = f"{spread([needed(r.value, r.decimals) for r in result.rounded])} to {result.direction}"
        unrounded = spread([fixed(float(exact), 2 if exact < 10 else 1) for exact in result.exact])
        risk = _percent_spread(*both.comparator.estimate, 1)
        beside = f"{against}, from {risk}; {unrounded} before rounding {result.rounded[0].rule}"
    measure = both.measures["risk_difference"]
    low, high = hull(measure.default)
    interval = needed_interval(result.segments, result.direction)
    return MeasureView(
        key="number_needed_to_treat",
        name="Number needed to treat",
        value=value,
        interval=interval,
        method=f"{measure.intervals[0][0].name}, inverted",
        beside=beside,
        strip=strip(
            Marks(
                measure.estimate,
                low,
                high,
                0.0,
                False,
                lambda v: "∞" if abs(v) < 1e-12 else fixed(abs(1 / v), 0 if abs(v) <= 0.2 else 1),
                f"Number needed to treat {value}, interval {interval}, no effect at infinity",
            )
        ),
        naive=difference.naive,
        others=tuple(
            OtherInterval(method.name, needed_interval(segments, result.direction)) for method, segments in result.others
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


def _cannot_be_stated(estimate: Range) -> bool:
    return math.isnan(estimate.low) or math.isinf(estimate.high)


def _ratio_view(key: str, name: str, measure: MeasureAppraisal, beside: str, why_not: str) -> MeasureView:
    low, high = hull(measure.default)
    missing = _cannot_be_stated(measure.estimate)
    figures = [v for v in (*measure.estimate, low, high) if math.isfinite(v)]
    decimals = decimals_showing_sides(figures, ratio_decimals(figures), (1.0,))
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
                lambda v: f"{v:g}",
                f"{name} {value}, interval {interval}, no effect at 1",
            )
        ),
        others=tuple(
            OtherInterval(method.name, _ratio_text(*hull(other), decimals))
            for method, other in measure.intervals
            if not method.default
        ),
    )


def _reduction_text(values: Sequence[float], decimals: int) -> str:
    """1 - ratio (low and high ratio given) as "5 to 53% lower"."""
    low, high = values
    if math.isnan(low) or math.isnan(high):
        return "cannot be stated"
    if math.isinf(high):
        return "any change" if low == 0 else f"{fixed(100 * (low - 1), decimals)}% higher or more"
    changes = (low - 1.0, high - 1.0)
    return signed_spread(changes, [fixed(abs(100 * change), decimals) for change in changes], PER_CENT)


def _reduction_view(measure: MeasureAppraisal, names: Names, why_not: str) -> MeasureView:
    low, high = hull(measure.default)
    estimate = measure.estimate
    missing = _cannot_be_stated(estimate)
    changes = [100 * (v - 1) for v in (*estimate, low, high) if math.isfinite(v)]
    decimals = decimals_showing_sides(changes, 0, (0.0,))
    name = "Relative risk increase" if estimate.low > 1 else "Relative risk reduction"
    left = spread([fixed(100 * v, decimals) for v in estimate])
    value = "cannot be stated" if missing else _reduction_text(estimate, decimals)
    interval = _reduction_text((low, high), decimals)

    def tick(ratio: float) -> str:
        return f"{fixed(100 * (ratio - 1), 1 if 0.9 < ratio < 1.1 and ratio != 1 else 0)}%" if ratio != 1 else "0"

    return MeasureView(
        key="relative_risk_reduction",
        name=name,
        value=value,
        interval=interval,
        method=f"1 − ratio, {measure.intervals[0][0].name}",
        beside=why_not if missing else f"{left}% of the risk with {names.comparator}",
        strip=strip(Marks(estimate, low, high, 1.0, True, tick, f"{name} {value}, interval {interval}, no effect at 0")),
        others=tuple(
            OtherInterval(method.name, _reduction_text(hull(other), decimals))
            for method, other in measure.intervals
            if not method.default
        ),
    )


def _relative_views(both: BothArms, names: Names) -> tuple[MeasureView, ...]:
    ratio, odds = both.measures["risk_ratio"], both.measures["odds_ratio"]
    table = both.fits.tables
    why_not = "no events in the comparator" if table.events_intervention.any() else "no events in either arm"
    ratio_text = (
        "" if _cannot_be_stated(ratio.estimate) else spread([fixed(v, ratio_decimals(ratio.estimate)) for v in ratio.estimate])
    )
    risk = _percent_spread(*both.comparator.estimate, 1)
    return (
        _ratio_view(
            "risk_ratio", "Risk ratio", ratio, f"of {names.counted}, {names.intervention} over {names.comparator}", why_not
        ),
        _reduction_view(ratio, names, why_not),
        _ratio_view(
            "odds_ratio",
            "Odds ratio",
            odds,
            f"odds, not risk: at {risk} with {names.comparator} it is a risk ratio of {ratio_text}",
            why_not if not table.events_comparator.any() else "a cell is empty",
        ),
    )


def _p_values(both: BothArms) -> str:
    parts = []
    for test, found in both.tests:
        if math.isnan(found.low):
            parts.append(f"none by {test.name}")
        else:
            parts.append(f"P{spread([p_value(found.low), p_value(found.high)]).replace(' to =', ' to ')} by {test.name}")
    return "; ".join(parts)


def results_view(outcome: OutcomeAppraisal, names: Names) -> ResultsView:
    """All panels of one outcome."""
    notes = tuple(note_text(note, names) for note in outcome.notes)
    tables = _tables(outcome, names)
    both = outcome.both
    if both is None:
        return ResultsView(tables, (), (), "", None, notes)
    totals = (both.fits.tables.total_intervention, both.fits.tables.total_comparator)
    decimals = percent_decimals(int(min(total.min() for total in totals)))
    return ResultsView(
        tables=tables,
        absolute=_difference_views(both, names, decimals, NAIVE[outcome.input.follow_up]),
        relative=_relative_views(both, names),
        p_values=_p_values(both),
        people=people_view(both, names, outcome.input.confidence_level),
        notes=notes,
    )
