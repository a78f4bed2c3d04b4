"""Intervals for one risk: x events among n people."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike
from scipy import special

from app.measures.fourfold import Floats
from app.measures.interval import Interval, normal_quantile


def _wilson_low(events: Floats, total: Floats, z: float) -> Floats:
    """Lower Wilson limit as (x^2/n) / (x + z^2/2 + s): exactly 0 at no events, no cancellation."""
    root = z * np.sqrt(events * (total - events) / total + z * z / 4.0)
    return (events * events / total) / (events + z * z / 2.0 + root)


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
    x, n = np.broadcast_arrays(np.asarray(events, dtype=np.float64), np.asarray(total, dtype=np.float64))
    z = normal_quantile(confidence_level)
    low = _wilson_low(x, n, z)
    # A small upper limit is a plain sum; a large one is the lower limit of the non-events, mirrored.
    half = z * z / 2.0
    plain = (x + half + z * np.sqrt(x * (n - x) / n + half / 2.0)) / (n + 2.0 * half)
    high = np.where(2.0 * x < n, plain, 1.0 - _wilson_low(n - x, n, z))
    return Interval(low, high)


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
    x, n = np.broadcast_arrays(np.asarray(events, dtype=np.float64), np.asarray(total, dtype=np.float64))
    normal_quantile(confidence_level)  # refuses a level outside 0 to 1
    tail = (1.0 - confidence_level) / 2.0
    low = np.where(x > 0, special.betaincinv(np.maximum(x, 1.0), n - x + 1.0, tail), 0.0)
    high = np.where(x < n, special.betainccinv(x + 1.0, np.maximum(n - x, 1.0), tail), 1.0)
    return Interval(low, high)
