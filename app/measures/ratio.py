"""Risk ratio: risk in the intervention arm over risk in the comparator arm [0 to inf]."""

from __future__ import annotations

import numpy as np

from app.measures.fourfold import Flags, Floats, Fourfold
from app.measures.interval import Interval, normal_quantile


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
    a, n1, c, n2 = table.floats()
    defined = np.asarray((a > 0) & (c > 0))
    center = log_ratio(a * n2, c * n1, table.determinant)
    with np.errstate(divide="ignore", invalid="ignore"):
        error = np.sqrt((n1 - a) / (a * n1) + (n2 - c) / (c * n2))
    return log_interval(center, normal_quantile(confidence_level) * error, defined)
