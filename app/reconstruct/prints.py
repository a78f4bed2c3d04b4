"""What tables print: whether a claim's estimate, interval or p is what each of many tables would print.

A claim is first resolved to an `Asked`: the measure meant, how it is shown, which way round. Another reading
of a claim is another `Asked`, so that the same code judges both (`app/reconstruct/readings.py`).
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace
from fractions import Fraction
from typing import Literal

import numpy as np

from app.measures.difference import risk_difference
from app.measures.fourfold import Flags, Floats, Fourfold
from app.measures.interval import Interval, normal_quantile
from app.measures.needed import number_needed
from app.measures.odds import odds_ratio
from app.measures.persontime import PersonTime
from app.measures.rates import rate_difference, rate_ratio
from app.measures.ratio import risk_ratio
from app.measures.registry import (
    EFFECT_METHODS,
    RATE_EFFECTS,
    EffectMethod,
    RateEffectMethod,
)
from app.printed.claims import Claim, PrintedInterval
from app.printed.number import PrintedNumber
from app.reconstruct.window import Window, exact, near, rounding, same_side, whole_unit

Meant = Literal["risk_difference", "risk_ratio", "odds_ratio", "rate_ratio", "rate_difference"]
Shown = Literal["plain", "reduction", "increase", "needed"]
Sign = Literal["as_printed", "opposite"]

_LEVEL_OF_196 = 1.0 - 2.0 * 0.0249978951482204  # two-sided level whose multiplier is 1.96 exactly
_LEVEL_OF_2 = 1.0 - 2.0 * 0.0227501319481792  # the same for 2


@dataclass(frozen=True, slots=True)
class Timed:
    """Person-time of both arms, where a paper prints it; one value for all tables."""

    intervention: float
    comparator: float

    def of(self, tables: Fourfold) -> PersonTime:
        """The events of the tables over the person-time."""
        return PersonTime(tables.events_intervention, self.intervention, tables.events_comparator, self.comparator)


@dataclass(frozen=True, slots=True)
class Asked:
    """What a claim is taken to say.

    `shown` is how the measure is written: plainly, as 1 less it, as it less 1, or as a number needed
    to treat. `sign` "opposite" mirrors a difference; `swapped` and `complement` change the tables.
    """

    meant: Meant
    shown: Shown
    number: PrintedNumber | None
    factor: Fraction
    interval: PrintedInterval | None
    sign: Sign = "as_printed"
    swapped: bool = False
    complement: bool = False

    @property
    def additive(self) -> bool:
        """Whether no effect is 0 on the scale shown."""
        return self.meant in ("risk_difference", "rate_difference") or self.shown in ("reduction", "increase")

    @property
    def no_effect(self) -> float:
        """The value of no effect on the scale shown; inf for a number needed to treat."""
        if self.shown == "needed":
            return float("inf")
        return 0.0 if self.additive else 1.0


@dataclass(frozen=True, slots=True)
class Match:
    """For each table, whether it prints the claim: exactly by a usual method, nearly, or exactly by a seldom one.

    `estimate` and `estimate_near` look at the estimate alone.
    """

    exact: Flags
    near: Flags
    seldom: Flags
    estimate: Flags
    estimate_near: Flags


_ESTIMATES: dict[Meant, Callable[[Fourfold], Floats]] = {
    "risk_difference": risk_difference,
    "risk_ratio": risk_ratio,
    "odds_ratio": odds_ratio,
}

AnyMethod = EffectMethod | RateEffectMethod


def asked(claim: Claim) -> Asked | None:
    """What the claim says at face value; None if it is no measure of two arms that counts give."""
    meant: dict[str, tuple[Meant, Shown]] = {
        "risk_difference": ("risk_difference", "plain"),
        "risk_ratio": ("risk_ratio", "plain"),
        "odds_ratio": ("odds_ratio", "plain"),
        "rate_ratio": ("rate_ratio", "plain"),
        "rate_difference": ("rate_difference", "plain"),
        "relative_risk_reduction": ("risk_ratio", "reduction"),
        "relative_risk_increase": ("risk_ratio", "increase"),
        "number_needed_to_treat": ("risk_difference", "needed"),
    }
    if claim.quantity not in meant or (claim.number is None and claim.interval is None):
        return None
    measure, shown = meant[claim.quantity]
    return Asked(measure, shown, claim.number, claim.factor, claim.interval)


def oriented(question: Asked, *, comparator_first: bool = False) -> tuple[Asked, ...]:
    """The ways round that agree with the label.

    A difference or reduction printed positive may be either way round. Where the arms are printed comparator
    first, ratio and difference may follow that order.
    """
    ways = [question]
    number = question.number
    if question.shown == "needed":
        return (question,)
    if question.additive and (number is None or number.exact > 0):
        ways.append(replace(question, sign="opposite"))
    if comparator_first:
        ways.append(replace(question, swapped=True))
    return tuple(ways)


def _estimate(question: Asked, tables: Fourfold, timed: Timed | None) -> Floats | None:
    if question.meant in _ESTIMATES:
        return _ESTIMATES[question.meant](tables)
    if timed is None:
        return None
    of = rate_ratio if question.meant == "rate_ratio" else rate_difference
    return of(timed.of(tables))


def _shown(question: Asked, values: Floats) -> Floats:
    """The measure as the claim writes it, and the way round."""
    if question.shown == "needed":
        with np.errstate(divide="ignore"):
            return np.asarray(np.abs(number_needed(values)))
    if question.shown == "reduction":
        values = 1.0 - values
    elif question.shown == "increase":
        values = values - 1.0
    return -values if question.sign == "opposite" else values


def shown_estimate(question: Asked, counted: Fourfold, timed: Timed | None) -> Floats | None:
    """The estimate as the claim writes it, from tables already turned its way."""
    raw = _estimate(question, counted, timed)
    return None if raw is None else _shown(question, raw)


def shown_limits(question: Asked, limits: Interval) -> tuple[Floats, Floats]:
    """Limits of the bare measure as the claim writes them, low first."""
    low, high = limits
    if question.shown == "needed":
        with np.errstate(divide="ignore", invalid="ignore"):
            ends = np.abs(1.0 / low), np.abs(1.0 / high)
        return np.minimum(*ends), np.maximum(*ends)
    ends = _shown(question, low), _shown(question, high)
    flipped = (question.shown == "reduction") != (question.sign == "opposite")
    return (ends[1], ends[0]) if flipped else ends


def methods(meant: Meant) -> tuple[AnyMethod, ...]:
    """The registered interval methods of a measure that papers print at all."""
    listed: tuple[AnyMethod, ...] = EFFECT_METHODS if meant in _ESTIMATES else RATE_EFFECTS
    return tuple(m for m in listed if m.measure == meant and m.printed_use != "never")


def levels(method: AnyMethod, interval: PrintedInterval) -> tuple[float, ...]:
    """The two-sided levels that a printed level may stand for.

    A one-sided bound may carry its one-sided level; 95% closed forms are also printed with 1.96.
    """
    level = interval.confidence_level
    found = [level]
    if None in interval.limits and level > 0.5:
        found.append(2.0 * level - 1.0)
    if abs(level - 0.95) < 1e-9 and method.key in _CLOSED:
        found.append(_LEVEL_OF_196)
    return tuple(found)


SLOW: frozenset[str] = frozenset(
    {"fisher_exact_cond", "midp_exact_cond", "fisher_irwin", "fisher_double", "fisher_midp_double"}
    | {"fisher_midp_irwin_halfobs", "fisher_midp_irwin_halfties", "efficacy_exact_split"}
)
"""Methods and tests that take microseconds a table: asked last."""

MOST_SLOW = 10_000
"""Of more tables than this the slow methods are not asked."""

_CLOSED = frozenset({"katz_log", "woolf_logit", "wald", "log_wald", "poisson_model", "wald_pooled", "gart_half"})


def limits_of(method: AnyMethod, tables: Fourfold, timed: Timed | None, level: float) -> Interval | None:
    """The limits by one method; None where person-time is needed and not printed."""
    if isinstance(method, EffectMethod):
        return method.interval(tables, level)
    return None if timed is None else method.interval(timed.of(tables), level)


def turned(question: Asked, tables: Fourfold) -> Fourfold:
    """The tables as the claim counts them."""
    tables = tables.complement() if question.complement else tables
    return tables.swapped() if question.swapped else tables


def turned_time(question: Asked, timed: Timed | None) -> Timed | None:
    """Person-time in the order in which the claim takes the arms."""
    return Timed(timed.comparator, timed.intervention) if timed is not None and question.swapped else timed


def take(tables: Fourfold, rows: Flags) -> Fourfold:
    """The tables where `rows` is true."""
    return Fourfold(
        tables.events_intervention[rows],
        tables.total_intervention[rows],
        tables.events_comparator[rows],
        tables.total_comparator[rows],
    )


def _windows(question: Asked, number: PrintedNumber) -> tuple[Window, Window]:
    """Exact and near window of a printed number; a number needed to treat may be rounded any way, never slips."""
    if question.shown == "needed":
        window = whole_unit(number, question.factor)
        return window, window
    return exact(number, question.factor), near(number, question.factor)


def _holds(question: Asked, number: PrintedNumber | None, values: Floats) -> tuple[Flags, Flags]:
    """Whether values print so exactly, and nearly without changing the side of no effect."""
    if number is None:
        sure = np.ones(values.shape, dtype=np.bool_)
        return sure, sure
    window, wider = _windows(question, number)
    printed = float(number.exact * question.factor)
    if question.shown == "needed":
        found = window.holds(np.abs(values))
        return found, found
    return window.holds(values), wider.holds(values) & same_side(values, printed, question.no_effect)


def _printed_as_needed(question: Asked) -> Asked:
    """A number needed to treat without its sign: which way it goes is said in words."""
    if question.shown != "needed" or question.number is None or question.number.exact >= 0:
        return question
    return replace(question, number=replace(question.number, value=-question.number.value))


def matches(
    question: Asked, tables: Fourfold, timed: Timed | None = None, *, seldom: bool = True, strict: bool = False
) -> Match:
    """Judge one way of taking a claim against many tables (1-d).

    Without `seldom`, by usual methods only; `strict` asks only for what is printed exactly.
    """
    question = _printed_as_needed(question)
    nothing = np.zeros(tables.events_intervention.shape, dtype=np.bool_)
    counted, timed = turned(question, tables), turned_time(question, timed)
    raw = _estimate(question, counted, timed)
    if raw is None:
        return Match(nothing, nothing, nothing, nothing, nothing)
    plain, plain_near = _holds(question, question.number, _shown(question, raw))
    if question.interval is None:
        return Match(plain, plain_near, nothing, plain, plain_near)
    sure, close, rare, estimate, estimate_near = nothing.copy(), nothing.copy(), nothing.copy(), plain.copy(), plain_near.copy()
    for method in _by_use(question.meant, seldom=seldom):
        usual = method.printed_use == "usual"
        rows = ~sure if usual else ~(sure | close | rare)
        if isinstance(method, EffectMethod) and method.estimate is not None:
            rows &= _within_reach(question, counted, raw)
            mine, mine_near = nothing.copy(), nothing.copy()
            rows = _askable(method, rows)
            if rows.any():
                own = _shown(question, method.estimate(take(counted, rows)))
                mine[rows], mine_near[rows] = _holds(question, question.number, own)
            estimate, estimate_near = estimate | mine, estimate_near | mine_near
        else:
            mine, mine_near = plain, plain_near
        rows = _askable(method, rows & (mine if strict else mine_near))
        if not rows.any():
            continue
        some = take(counted, rows)
        for level in levels(method, question.interval):
            limits = limits_of(method, some, timed, level)
            if limits is None:
                continue
            both, both_near = _interval_holds(question, limits)
            if usual:
                sure[rows] |= both & mine[rows]
                close[rows] |= both_near
            else:
                rare[rows] |= both & mine[rows]
    return Match(sure, close | sure, rare, estimate, estimate_near)


def _askable(method: AnyMethod, rows: Flags) -> Flags:
    """The tables to ask a method of: none where it is slow and they are very many."""
    return np.zeros_like(rows) if method.key in SLOW and np.count_nonzero(rows) > MOST_SLOW else rows


def _within_reach(question: Asked, counted: Fourfold, raw: Floats) -> Flags:
    """Of many tables, those whose raw estimate is so near the printed one that a method's own may print it."""
    if question.number is None or raw.size < 50 or question.meant in ("risk_difference", "rate_difference"):
        return np.ones(raw.shape, dtype=np.bool_)
    printed = rounding(question.number, question.factor, Fraction(3, 2))
    a, n1, c, n2 = counted.floats()
    with np.errstate(all="ignore"):
        reach = 2.0 / (1.0 + np.minimum(np.minimum(a, n1 - a), np.minimum(c, n2 - c)))
        ends = sorted(_bare(question, end) for end in printed)
        return np.asarray((raw >= ends[0] * np.exp(-reach)) & (raw <= ends[1] * np.exp(reach)))


def _bare(question: Asked, shown: float) -> float:
    """The ratio that is shown so."""
    value = -shown if question.sign == "opposite" else shown
    if question.shown == "reduction":
        return 1.0 - value
    return 1.0 + value if question.shown == "increase" else value


def interval_windows(question: Asked, *, slips: bool) -> tuple[Window, Window] | None:
    """Windows of the lower and upper limit of the bare measure; None where no interval is printed."""
    if question.interval is None or question.shown == "needed":
        return None
    window = near if slips else exact
    anything = Window(-np.inf, np.inf)
    ends = [anything if limit is None else window(limit, question.factor) for limit in question.interval.limits]
    if question.sign == "opposite":
        ends = [ends[1].mirrored(), ends[0].mirrored()]
    if question.shown == "reduction":
        ends = [Window(1.0 - ends[1].high, 1.0 - ends[1].low), Window(1.0 - ends[0].high, 1.0 - ends[0].low)]
    elif question.shown == "increase":
        ends = [Window(1.0 + end.low, 1.0 + end.high) for end in ends]
    return ends[0], ends[1]


def _by_use(meant: Meant, *, seldom: bool) -> list[AnyMethod]:
    """Methods, those that are printed most first, the slow ones last."""
    listed = [m for m in methods(meant) if seldom or m.printed_use == "usual"]
    return sorted(listed, key=lambda m: (m.printed_use != "usual", m.key in SLOW, m.key not in _CLOSED))


def _interval_holds(question: Asked, limits: Interval) -> tuple[Flags, Flags]:
    low, high = shown_limits(question, limits)
    interval = question.interval
    if interval is None:
        raise ValueError("no interval is asked for")
    low_exact, low_near = _holds(question, interval.low, low)
    high_exact, high_near = _holds(question, interval.high, high)
    return low_exact & high_exact, low_near & high_near


def normal_width(level: float) -> float:
    """Twice the normal quantile of a level: the width of an interval in standard errors."""
    return 2.0 * normal_quantile(level)
