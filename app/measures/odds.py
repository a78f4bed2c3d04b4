"""Odds ratio: odds in the intervention arm over odds in the comparator arm [0 to inf]. Never a risk."""

from __future__ import annotations

import numpy as np

from app.measures.fourfold import Floats, Fourfold
from app.measures.interval import Interval, normal_quantile
from app.measures.ratio import log_interval, log_ratio


def odds_ratio(table: Fourfold) -> Floats:
    """Odds ratio ad / bc; inf where only the denominator is empty, nan where both products are."""
    a, n1, c, n2 = table.floats()
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.asarray((a * (n2 - c)) / ((n1 - a) * c))


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
    a, n1, c, n2 = table.floats()
    b, d = n1 - a, n2 - c
    defined = np.asarray((a > 0) & (b > 0) & (c > 0) & (d > 0))
    # ad - bc is the same integer as a n2 - c n1.
    center = log_ratio(a * d, b * c, table.determinant)
    with np.errstate(divide="ignore", invalid="ignore"):
        error = np.sqrt(1.0 / a + 1.0 / b + 1.0 / c + 1.0 / d)
    return log_interval(center, normal_quantile(confidence_level) * error, defined)
