"""The crude value beside an estimate that does not fit: how far away, in its own standard errors."""

from __future__ import annotations

import math
from dataclasses import replace
from typing import NamedTuple

import numpy as np

from app.measures.backcalc import z_of_p
from app.measures.difference import risk_difference, wald
from app.measures.fourfold import Floats, Fourfold
from app.measures.interval import Interval, normal_quantile
from app.measures.odds import half_when_empty as odds_half_when_empty
from app.measures.odds import odds_ratio
from app.measures.ratio import half_when_empty as ratio_half_when_empty
from app.measures.ratio import risk_ratio
from app.printed.claims import Claim
from app.reconstruct.between import internal, log_width
from app.reconstruct.p_prints import AskedP, p_window
from app.reconstruct.prints import Asked, Timed, limits_of, matches, methods, shown_limits, turned, turned_time
from app.reconstruct.stated import Stated
from app.reconstruct.window import exact

_LIKELY_WIDTH = (0.70, 1.60)
"""An adjusted interval is this much narrower to wider than the crude one (common practice, no source)."""
_CLOSE = 0.06
"""Limits this share of a half-width away are those of a method not known here (common practice, no source)."""


SMALL = 5
"""Cells below this many people make exact intervals skewed (common practice)."""


_ROOM, _LITTLE_ROOM = 0.6, 0.15
"""Of a standard error: how far a p of unstated basis may lie from the tests on counts, and how far where an
estimate with its interval is the crude one (common practice, no source)."""


class Crude(NamedTuple):
    """The crude estimate on its scale (ln for ratios) and its standard error, of the middle table."""

    value: float
    error: float
    ratio: bool


def crude_value(claim: Claim, tables: Fourfold) -> Crude | None:
    """The crude measure that a claim speaks of; None where it has no value."""
    middle = tables.events_intervention.size // 2
    a, n1, c, n2 = (
        int(x[middle])
        for x in (tables.events_intervention, tables.total_intervention, tables.events_comparator, tables.total_comparator)
    )
    one = Fourfold([a], [n1], [c], [n2])
    ratio = claim.quantity not in ("risk_difference", "number_needed_to_treat", "rate_difference")
    limits: Interval
    if claim.quantity == "odds_ratio":
        estimate, limits = odds_ratio(one), odds_half_when_empty(one, 0.95)
    elif ratio:
        estimate, limits = risk_ratio(one), ratio_half_when_empty(one, 0.95)
    else:
        estimate, limits = risk_difference(one), wald(one, 0.95)
    with np.errstate(all="ignore"):
        value = float(np.log(estimate[0]) if ratio else estimate[0])
        low, high = (float(np.log(end[0]) if ratio else end[0]) for end in limits)
    if not (math.isfinite(low) and math.isfinite(high) and high > low):
        return None
    if not math.isfinite(value):
        value = (low + high) / 2.0
    return Crude(value, (high - low) / (2.0 * normal_quantile(0.95)), ratio)


def _printed(claim: Claim) -> float | None:
    """The printed estimate on the scale of the crude one."""
    if claim.number is None:
        return None
    value = float(claim.said.exact * claim.factor)
    if claim.quantity == "number_needed_to_treat":
        return 1.0 / value if value else None
    if claim.quantity == "relative_risk_reduction":
        value = 1.0 - value
    elif claim.quantity == "relative_risk_increase":
        value = 1.0 + value
    elif claim.quantity in ("risk_difference", "rate_difference"):
        return value
    return math.log(value) if value > 0.0 else None


def lies_near(claim: Claim, tables: Fourfold, *, own_width: bool = False) -> bool:
    """Whether the estimate lies within one standard error of the crude value on the same side of no effect.

    With `own_width` the standard error is that of the printed interval.
    """
    crude, printed = crude_value(claim, tables), _printed(claim)
    if crude is None or printed is None:
        return False
    width = log_width(claim)
    level = claim.interval.confidence_level if claim.interval is not None else 0.95
    error = crude.error
    if own_width:
        if width is None:
            return False
        error = width / (2.0 * normal_quantile(level))
    either_way = claim.quantity in ("risk_difference", "rate_difference", "number_needed_to_treat")
    candidates = (crude.value, -crude.value) if either_way and printed > 0 else (crude.value,)
    near = any(
        abs(printed - value) <= error and (printed * value >= 0.0 or abs(printed - value) <= error / 4) for value in candidates
    )
    if not near or own_width or width is None:
        return near
    share = width / (2.0 * normal_quantile(level) * crude.error)
    return _LIKELY_WIDTH[0] <= share <= _LIKELY_WIDTH[1]


def widens(claim: Claim, ways: tuple[Asked, ...], tables: Fourfold, timed: Timed | None, *, small: bool) -> bool:
    """Whether an interval that no known method prints is at least as wide as theirs on both sides, or all but theirs."""
    interval = claim.interval
    if interval is None or interval.low is None or interval.high is None:
        return False
    low, high = exact(interval.low, claim.factor), exact(interval.high, claim.factor)
    for way in ways:
        ends = []
        for method in methods(way.meant):
            if method.printed_use == "usual":
                limits = limits_of(method, turned(way, tables), turned_time(way, timed), interval.confidence_level)
                if limits is not None:
                    ends.append(shown_limits(way, limits))
        lows, highs = (np.concatenate([e[i] for e in ends]) for i in (0, 1))
        lows, highs = lows[np.isfinite(lows)], highs[np.isfinite(highs)]
        if not lows.size or not highs.size:
            continue
        if low.low <= lows.max() and high.high >= highs.min() and (small or _centred_width(claim, tables)):
            return True
        half = (highs.min() - lows.max()) / 2.0
        if _gap(low, lows) <= _CLOSE * half and _gap(high, highs) <= _CLOSE * half:
            return True
    return False


def _gap(window: tuple[float, float], values: Floats) -> float:
    """Distance from a window to the nearest of the values."""
    return float(np.min(np.maximum(0.0, np.maximum(window[0] - values, values - window[1]))))


def _centred_width(claim: Claim, tables: Fourfold) -> bool:
    """Whether the printed width is one that adjustment or clusters explain."""
    crude, width = crude_value(claim, tables), log_width(claim)
    if crude is None or width is None or claim.interval is None:
        return False
    return width <= 2.5 * 2.0 * normal_quantile(claim.interval.confidence_level) * crude.error


def excused(claim: Claim, of: Stated, tables: Fourfold) -> bool:
    """Whether an estimate of unstated basis that the tables do not print may be adjusted, or exact by another method.

    If the estimate fits, its interval must be at least as wide as the crude ones, or all but theirs; if not, it must
    lie near the crude value.
    """
    ways = of.ways(claim)
    if claim.basis != "unstated" or not ways:
        return False
    inner = internal(claim)
    a, n1, c, n2 = tables.floats()
    small = bool(min(x.min() for x in (a, n1 - a, c, n2 - c)) < SMALL)
    alone = [matches(replace(way, interval=None), tables, of.timed) for way in ways]
    near = any(bool(match.estimate_near.any()) for match in alone)
    if inner and not (small and inner == ("interval_off_centre",) and near):
        return False
    if near and widens(claim, ways, tables, of.timed, small=small):
        return True
    return not any(bool(match.estimate.any()) for match in alone) and lies_near(claim, tables)


def p_lies_near(question: AskedP, spread: tuple[float, float], *, closely: bool) -> bool:
    """Whether a printed p is as near the tests on counts as an adjusted or stratified test would be."""
    if question.operator != "=":
        return False
    room = _LITTLE_ROOM if closely else _ROOM
    window = p_window(question)
    ends = [z_of_p(min(max(p, 1e-300), 1.0)) for p in (*window, *spread)]
    return ends[0] >= ends[3] - room and ends[1] <= ends[2] + room
