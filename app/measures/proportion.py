"""Intervals for one risk: x events among n people."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from numpy.typing import ArrayLike
from scipy import special

from app.measures.fourfold import Floats
from app.measures.interval import Interval, normal_quantile
from app.measures.roots import root_in_bracket

Method = Callable[[ArrayLike, ArrayLike, float], Interval]
"""An interval for one risk: (events, total, confidence level) -> Interval."""


def _floats(events: ArrayLike, total: ArrayLike) -> tuple[Floats, Floats]:
    """Both counts as floats of one shape."""
    x, n = np.broadcast_arrays(np.asarray(events, dtype=np.float64), np.asarray(total, dtype=np.float64))
    return x, n


def _tail(confidence_level: float) -> float:
    """Probability of each tail outside a two-sided level."""
    normal_quantile(confidence_level)  # refuses a level outside 0 to 1
    return (1.0 - confidence_level) / 2.0


def _wilson_low(events: Floats, total: Floats, z: float) -> Floats:
    """Lower Wilson limit as (x^2/n) / (x + z^2/2 + s): exactly 0 at no events, no cancellation."""
    root = z * np.sqrt(events * (total - events) / total + z * z / 4.0)
    return (events * events / total) / (events + z * z / 2.0 + root)


def _wilson_high(events: Floats, total: Floats, z: float) -> Floats:
    """Upper Wilson limit: a plain sum where small, else the lower limit of the non-events, mirrored."""
    half = z * z / 2.0
    plain = (events + half + z * np.sqrt(events * (total - events) / total + half / 2.0)) / (total + 2.0 * half)
    return np.where(2.0 * events < total, plain, 1.0 - _wilson_low(total - events, total, z))


def wilson(events: ArrayLike, total: ArrayLike, confidence_level: float = 0.95) -> Interval:
    """Score interval for one risk: every t with (p - t)^2 <= z^2 t (1 - t) / n.

    Parameters
    ----------
    events, total : array of int or float
        People with the event and all people [0 <= events <= total, total > 0].
    confidence_level : float
        Two-sided level [0 to 1, both excluded].

    Returns
    -------
    Interval
        Limits of the risk [0 to 1], shape of the broadcast counts.

    Edge cases
    ----------
    No events: low is exactly 0. All events: high is exactly 1.

    References
    ----------
    wilson_1927; newcombe_1998_single, method 3.
    """
    x, n = _floats(events, total)
    z = normal_quantile(confidence_level)
    return Interval(_wilson_low(x, n, z), _wilson_high(x, n, z))


def clopper_pearson(events: ArrayLike, total: ArrayLike, confidence_level: float = 0.95) -> Interval:
    """Exact interval for one risk: each tail of the binomial at most half of 1 - level.

    Never below its level and often well above it: wide.

    Returns
    -------
    Interval
        Limits of the risk [0 to 1], shape of the broadcast counts.

    Edge cases
    ----------
    No events: low is 0 and high is 1 - (alpha/2)^(1/n). All events: high is 1.

    References
    ----------
    clopper_pearson_1934.
    """
    x, n = _floats(events, total)
    tail = _tail(confidence_level)
    low = np.where(x > 0, special.betaincinv(np.maximum(x, 1.0), n - x + 1.0, tail), 0.0)
    high = np.where(x < n, special.betainccinv(x + 1.0, np.maximum(n - x, 1.0), tail), 1.0)
    return Interval(low, high)


def wald(events: ArrayLike, total: ArrayLike, confidence_level: float = 0.95) -> Interval:
    """Plain interval p -+ z sqrt(pq/n): far below its level for rare events; for checking print.

    Edge cases
    ----------
    No events, or all events: no width. Limits may leave 0 to 1.

    References
    ----------
    newcombe_1998_single, method 1.
    """
    x, n = _floats(events, total)
    p = x / n
    half = normal_quantile(confidence_level) * np.sqrt(p * (1.0 - p) / n)
    return Interval(p - half, p + half)


def wilson_cc(events: ArrayLike, total: ArrayLike, confidence_level: float = 0.95) -> Interval:
    """Wilson's interval with continuity correction: half an event further out on each side.

    Edge cases
    ----------
    No events: low is 0. All events: high is 1.

    References
    ----------
    newcombe_1998_single, method 4.
    """
    x, n = _floats(events, total)
    z = normal_quantile(confidence_level)
    low = _wilson_low(np.maximum(x - 0.5, 0.0), n, z)
    high = np.where(x < n, _wilson_high(np.minimum(x + 0.5, n), n, z), 1.0)
    return Interval(low, high)


def agresti_coull(events: ArrayLike, total: ArrayLike, confidence_level: float = 0.95) -> Interval:
    """Plain interval after adding z^2/2 events and as many non-events.

    Edge cases
    ----------
    Limits may leave 0 to 1.

    References
    ----------
    agresti_coull_1998.
    """
    x, n = _floats(events, total)
    z = normal_quantile(confidence_level)
    wider = n + z * z
    p = (x + z * z / 2.0) / wider
    half = z * np.sqrt(p * (1.0 - p) / wider)
    return Interval(p - half, p + half)


def jeffreys_raw(events: ArrayLike, total: ArrayLike, confidence_level: float = 0.95) -> Interval:
    """Equal-tailed interval of the beta distribution with Jeffreys' prior (1/2, 1/2).

    Edge cases
    ----------
    No events or all events: the observed risk lies outside.

    References
    ----------
    brown_cai_dasgupta_2001.
    """
    x, n = _floats(events, total)
    tail = _tail(confidence_level)
    low = special.betaincinv(x + 0.5, n - x + 0.5, tail)
    return Interval(np.asarray(low), np.asarray(special.betainccinv(x + 0.5, n - x + 0.5, tail)))


def jeffreys_bcd(events: ArrayLike, total: ArrayLike, confidence_level: float = 0.95) -> Interval:
    """Jeffreys' interval with its ends moved to 0 at no events and to 1 at all events.

    References
    ----------
    brown_cai_dasgupta_2001.
    """
    x, n = _floats(events, total)
    low, high = jeffreys_raw(x, n, confidence_level)
    return Interval(np.where(x == 0, 0.0, low), np.where(x == n, 1.0, high))


def _logit(p: Floats) -> Floats:
    return np.asarray(np.log(p) - np.log1p(-p), dtype=np.float64)


def _expit(logit: Floats) -> Floats:
    return np.asarray(1.0 / (1.0 + np.exp(-logit)))


def _mid_p_equation(logit: Floats, terms: tuple[Floats, ...]) -> tuple[Floats, Floats]:
    """Ln of P(X > x) + P(X = x)/2 at the risk with this logit, less the tail's; and its slope."""
    x, n, log_tail = terms
    p = _expit(logit)
    above = special.betainc(x + 1.0, n - x, p)
    chance = 0.5 * (special.betainc(x, n - x + 1.0, p) + above)
    # d/dlogit of I_p(a, b) is p^a q^b / B(a, b); both terms share the binomial coefficient of x.
    log_point = special.xlogy(x, p) + special.xlogy(n - x, _expit(-logit)) - special.betaln(x + 1.0, n - x + 1.0)
    point = np.exp(log_point) / (n + 1.0)
    slope = 0.5 * point * (x * _expit(-logit) + (n - x) * p)
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.log(chance) - log_tail, slope / chance


def _mid_p_low(x: Floats, n: Floats, confidence_level: float) -> Floats:
    """Lower mid-P limit; 0 at no events, nan at all events (a closed form there)."""
    limit = np.where(x == 0, 0.0, np.nan)
    rows = (x > 0) & (x < n)
    if rows.any():
        a, b = x[rows], n[rows]
        exact = special.betaincinv(a, b - a + 1.0, _tail(confidence_level))
        low, high = _logit(np.asarray(exact, dtype=np.float64)), _logit(a / b)
        log_tail = np.full_like(a, np.log(_tail(confidence_level)))
        limit[rows] = _expit(root_in_bracket(_mid_p_equation, low, low, high, (a, b, log_tail)))
    return limit


def _mid_p_high(x: Floats, n: Floats, confidence_level: float) -> Floats:
    """Upper mid-P limit, as the lower limit of the non-events in the logit of the events."""
    limit = np.where(x == n, 1.0, np.nan)
    rows = (x > 0) & (x < n)
    if rows.any():
        b, total = n[rows] - x[rows], n[rows]
        exact = special.betainccinv(x[rows] + 1.0, b, _tail(confidence_level))
        low, high = -_logit(np.asarray(exact, dtype=np.float64)), _logit(b / total)
        log_tail = np.full_like(b, np.log(_tail(confidence_level)))
        # Minus the logit of the others: a small upper limit keeps its digits.
        limit[rows] = _expit(-root_in_bracket(_mid_p_equation, low, low, high, (b, total, log_tail)))
    return limit


def mid_p(events: ArrayLike, total: ArrayLike, confidence_level: float = 0.95) -> Interval:
    """Mid-P interval: the exact one with half weight on the observed count.

    Close to its level on average, at times a little below; shorter than the exact one.

    Edge cases
    ----------
    No events: low is 0 and high 1 - alpha^(1/n). All events: low alpha^(1/n) and high 1.

    References
    ----------
    berry_armitage_1995; newcombe_1998_single.
    """
    x, n = _floats(events, total)
    normal_quantile(confidence_level)
    log_alpha = np.log(1.0 - confidence_level)
    low = np.where(x == n, np.exp(log_alpha / n), _mid_p_low(x, n, confidence_level))
    high = np.where(x == 0, -np.expm1(log_alpha / n), _mid_p_high(x, n, confidence_level))
    return Interval(low, high)
