"""Risk ratio: risk in the intervention arm over risk in the comparator arm [0 to inf]."""

from __future__ import annotations

import numpy as np

from app.measures.fourfold import Flags, Floats, Fourfold
from app.measures.interval import Interval, blockwise, normal_quantile
from app.measures.proportion import clopper_pearson, wilson
from app.measures.pvalues import pearson_statistic


def risk_ratio(table: Fourfold) -> Floats:
    """Risk ratio; no events in the comparator gives inf, in neither arm nan (it cannot be stated)."""
    a, n1, c, n2 = table.floats()
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.asarray((a * n2) / (c * n1))


def log_ratio(numerator: Floats, denominator: Floats, difference: Floats) -> Floats:
    """ln(numerator / denominator) to full precision, given their exact difference.

    Near 1 the logarithm of the quotient loses digits and log1p of the exact difference does not;
    far from 1 it is the other way round.
    """
    with np.errstate(divide="ignore", invalid="ignore"):
        excess = difference / denominator
        return np.where(np.abs(excess) < 0.5, np.log1p(excess), np.log(numerator / denominator))


def log_interval(log_estimate: Floats, half_width: Floats, defined: Flags) -> Interval:
    """exp(log estimate -+ half width), nan where the method is not defined."""
    with np.errstate(over="ignore", invalid="ignore"):
        low = np.where(defined, np.exp(log_estimate - half_width), np.nan)
        high = np.where(defined, np.exp(log_estimate + half_width), np.nan)
    return Interval(low, high)


@blockwise
def katz_log(table: Fourfold, confidence_level: float = 0.95) -> Interval:
    """Log (delta-method) interval for the risk ratio, the one papers print most.

    Returns
    -------
    Interval
        Limits of the risk ratio, shape of the table.

    Edge cases
    ----------
    No events in an arm: undefined (nan). All events in both arms: zero width at 1, which misleads.

    Notes
    -----
    exp(ln RR -+ z sqrt(b/(a n1) + d/(c n2))), b and d the non-events: the same as 1/a - 1/n1 + ...
    without the cancellation when nearly all have the event.

    References
    ----------
    katz_1978.
    """
    center, error, defined = _log_parts(table)
    return log_interval(center, normal_quantile(confidence_level) * error, defined)


def _log_parts(table: Fourfold) -> tuple[Floats, Floats, Flags]:
    """Log risk ratio, its standard error, and where both are defined."""
    a, n1, c, n2 = table.floats()
    center = log_ratio(a * n2, c * n1, table.determinant)
    with np.errstate(divide="ignore", invalid="ignore"):
        error = np.sqrt((n1 - a) / (a * n1) + (n2 - c) / (c * n2))
    return center, error, np.asarray((a > 0) & (c > 0))


def _added(table: Fourfold, events: float, totals: float) -> tuple[Floats, Floats, Floats, Floats]:
    """The counts with a constant added to events and to totals."""
    a, n1, c, n2 = table.floats()
    return a + events, n1 + totals, c + events, n2 + totals


def _log_interval_of(cells: tuple[Floats, Floats, Floats, Floats], confidence_level: float) -> Interval:
    """Log interval of counts that need not be whole, no cell of events empty."""
    a, n1, c, n2 = cells
    half = normal_quantile(confidence_level) * np.sqrt(1.0 / a - 1.0 / n1 + 1.0 / c - 1.0 / n2)
    return log_interval(np.log(a / n1) - np.log(c / n2), half, np.ones(a.shape, dtype=np.bool_))


@blockwise
def adj_log_half_half(table: Fourfold, confidence_level: float = 0.95) -> Interval:
    """Log interval with 1/2 added to events and to totals; its estimate is the adjusted one.

    References
    ----------
    walter_1975; pettigrew_1986.
    """
    return _log_interval_of(_added(table, 0.5, 0.5), confidence_level)


def adj_half_half_estimate(table: Fourfold) -> Floats:
    """Risk ratio with 1/2 added to events and to totals."""
    a, n1, c, n2 = _added(table, 0.5, 0.5)
    return a / n1 / (c / n2)


@blockwise
def log_half_all_cells(table: Fourfold, confidence_level: float = 0.95) -> Interval:
    """Log interval with 1/2 added to all four cells, totals by 1; its estimate is the adjusted one.

    References
    ----------
    pettigrew_1986.
    """
    return _log_interval_of(_added(table, 0.5, 1.0), confidence_level)


def half_all_cells_estimate(table: Fourfold) -> Floats:
    """Risk ratio with 1/2 added to all four cells."""
    a, n1, c, n2 = _added(table, 0.5, 1.0)
    return a / n1 / (c / n2)


@blockwise
def half_when_empty(table: Fourfold, confidence_level: float = 0.95) -> Interval:
    """The log interval, with 1/2 added to all four cells only where one is empty. For checking print.

    References
    ----------
    pettigrew_1986.
    """
    a, n1, c, n2 = table.floats()
    empty = (a == 0) | (a == n1) | (c == 0) | (c == n2)
    plain, added = katz_log(table, confidence_level), log_half_all_cells(table, confidence_level)
    return Interval(np.where(empty, added.low, plain.low), np.where(empty, added.high, plain.high))


@blockwise
def inv_sinh(table: Fourfold, confidence_level: float = 0.95) -> Interval:
    """Inverse hyperbolic sine interval: the log one drawn in a little, exp(ln RR -+ 2 asinh(z SE/2)).

    Edge cases
    ----------
    No events in an arm: undefined (nan).

    References
    ----------
    newcombe_2001.
    """
    center, error, defined = _log_parts(table)
    return log_interval(center, 2.0 * np.arcsinh(normal_quantile(confidence_level) / 2.0 * error), defined)


@blockwise
def mover_r_wilson(table: Fourfold, confidence_level: float = 0.95) -> Interval:
    """Ratio of two risks recovered from their Wilson intervals.

    Edge cases
    ----------
    No events in the comparator: high is inf, low sqrt(l1 (2 p1 - l1)) / u2.

    References
    ----------
    donner_zou_2012.
    """
    p1, p2 = table.risk_intervention, table.risk_comparator
    l1, u1 = wilson(table.events_intervention, table.total_intervention, confidence_level)
    l2, u2 = wilson(table.events_comparator, table.total_comparator, confidence_level)
    product = p1 * p2
    with np.errstate(divide="ignore", invalid="ignore"):
        below = np.sqrt(np.maximum(product**2 - l1 * u2 * (2.0 * p1 - l1) * (2.0 * p2 - u2), 0.0))
        # The lower root in the form that does not cancel: l1 (2 p1 - l1) / (p1 p2 + root).
        low = np.where(product + below > 0.0, l1 * (2.0 * p1 - l1) / (product + below), np.sqrt(l1 * (2.0 * p1 - l1)) / u2)
        above = np.sqrt(np.maximum(product**2 - u1 * l2 * (2.0 * p1 - u1) * (2.0 * p2 - l2), 0.0))
        high = np.where(p2 > 0.0, (product + above) / (l2 * (2.0 * p2 - l2)), np.inf)
    return Interval(np.where(p1 > 0.0, low, 0.0), high)


@blockwise
def poisson_model(table: Fourfold, confidence_level: float = 0.95) -> Interval:
    """Log interval with the standard error of counts of a rate, sqrt(1/a + 1/c). For checking print.

    References
    ----------
    rothman_2008.
    """
    a, _, c, _ = table.floats()
    center, _, defined = _log_parts(table)
    with np.errstate(divide="ignore"):
        return log_interval(center, normal_quantile(confidence_level) * np.sqrt(1.0 / a + 1.0 / c), defined)


@blockwise
def based_on_test(table: Fourfold, confidence_level: float = 0.95) -> Interval:
    """RR to the power 1 -+ z/chi, chi of Pearson's test. For checking print: wrong away from no effect.

    References
    ----------
    miettinen_1976.
    """
    center, _, defined = _log_parts(table)
    chi = np.sqrt(pearson_statistic(table))
    with np.errstate(divide="ignore", invalid="ignore"):
        half = np.abs(center) * normal_quantile(confidence_level) / chi
    return log_interval(center, half, defined & np.isfinite(half))


@blockwise
def efficacy_exact_split(table: Fourfold, confidence_level: float = 0.95) -> Interval:
    """Exact interval of the split of events between the arms, as a risk ratio. For checking print.

    Used for vaccine efficacy (1 - ratio) of rare events.

    References
    ----------
    clopper_pearson_1934.
    """
    a, n1, c, n2 = table.floats()
    total = np.maximum(a + c, 1.0)
    low, _ = clopper_pearson(a, total, confidence_level)
    other_low, _ = clopper_pearson(c, total, confidence_level)
    with np.errstate(divide="ignore", invalid="ignore"):
        lower, upper = low / (1.0 - low) * n2 / n1, (1.0 - other_low) / other_low * n2 / n1
    some = a + c > 0
    return Interval(np.where(some, lower, 0.0), np.where(some, upper, np.inf))
