"""Odds ratio: odds in the intervention arm over odds in the comparator arm [0 to inf]. Never a risk."""

from __future__ import annotations

import numpy as np

from app.measures.fourfold import Flags, Floats, Fourfold
from app.measures.interval import Interval, blockwise, normal_quantile
from app.measures.ratio import log_interval, log_ratio


def odds_ratio(table: Fourfold) -> Floats:
    """Odds ratio ad / bc; inf where only the denominator is empty, nan where both products are."""
    a, n1, c, n2 = table.floats()
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.asarray((a * (n2 - c)) / ((n1 - a) * c))


@blockwise
def woolf_logit(table: Fourfold, confidence_level: float = 0.95) -> Interval:
    """Logit interval for the odds ratio: exp(ln OR -+ z sqrt(1/a + 1/b + 1/c + 1/d)).

    Returns
    -------
    Interval
        Limits of the odds ratio, shape of the table.

    Edge cases
    ----------
    Any empty cell: undefined (nan).

    References
    ----------
    woolf_1955.
    """
    center, error, defined = _log_parts(table)
    return log_interval(center, normal_quantile(confidence_level) * error, defined)


def _log_parts(table: Fourfold) -> tuple[Floats, Floats, Flags]:
    """Log odds ratio, its standard error, and where both are defined."""
    a, n1, c, n2 = table.floats()
    b, d = n1 - a, n2 - c
    # ad - bc is the same integer as a n2 - c n1.
    center = log_ratio(a * d, b * c, table.determinant)
    with np.errstate(divide="ignore", invalid="ignore"):
        error = np.sqrt(1.0 / a + 1.0 / b + 1.0 / c + 1.0 / d)
    return center, error, np.asarray((a > 0) & (b > 0) & (c > 0) & (d > 0))


def _half_added(table: Fourfold) -> tuple[Floats, Floats]:
    """Log odds ratio and its standard error with 1/2 added to every cell."""
    a, n1, c, n2 = table.floats()
    a, b, c, d = a + 0.5, n1 - a + 0.5, c + 0.5, n2 - c + 0.5
    return np.log(a) - np.log(b) - np.log(c) + np.log(d), np.sqrt(1.0 / a + 1.0 / b + 1.0 / c + 1.0 / d)


@blockwise
def gart_half(table: Fourfold, confidence_level: float = 0.95) -> Interval:
    """Logit interval with 1/2 added to every cell, always; its estimate is the adjusted one.

    References
    ----------
    gart_1966.
    """
    center, error = _half_added(table)
    return log_interval(center, normal_quantile(confidence_level) * error, np.ones(table.shape, dtype=np.bool_))


def gart_half_estimate(table: Fourfold) -> Floats:
    """Odds ratio with 1/2 added to every cell."""
    return np.asarray(np.exp(_half_added(table)[0]))


@blockwise
def half_when_empty(table: Fourfold, confidence_level: float = 0.95) -> Interval:
    """The logit interval, with 1/2 added to every cell only where one is empty. For checking print.

    References
    ----------
    gart_1966.
    """
    plain, added = woolf_logit(table, confidence_level), gart_half(table, confidence_level)
    empty = np.isnan(plain.low)
    return Interval(np.where(empty, added.low, plain.low), np.where(empty, added.high, plain.high))


@blockwise
def inv_sinh(table: Fourfold, confidence_level: float = 0.95) -> Interval:
    """Inverse hyperbolic sine interval: exp(ln OR -+ 2 asinh(z SE/2)).

    Edge cases
    ----------
    Any empty cell: undefined (nan).

    References
    ----------
    newcombe_2001.
    """
    center, error, defined = _log_parts(table)
    return log_interval(center, 2.0 * np.arcsinh(normal_quantile(confidence_level) / 2.0 * error), defined)
