"""Cluster-randomised counts: the design effect, and counts cut down to what they are worth."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from app.measures.fourfold import Floats, Fourfold
from app.measures.interval import Interval, normal_quantile


def design_effect(cluster_size: ArrayLike, intracluster_correlation: ArrayLike) -> Floats:
    """1 + (m - 1) ICC, an approximation for clusters of like size.

    Raises
    ------
    ValueError
        A size below 1, or a correlation outside 0 to 1.

    References
    ----------
    donner_klar_2000.
    """
    size, correlation = (np.asarray(x, dtype=np.float64) for x in (cluster_size, intracluster_correlation))
    if bool(np.any(size < 1.0)):
        raise ValueError("cluster_size must be at least 1")
    if bool(np.any((correlation < 0.0) | (correlation > 1.0))):
        raise ValueError("intracluster_correlation must lie between 0 and 1")
    return np.asarray(1.0 + (size - 1.0) * correlation)


def effective_counts(table: Fourfold, effect: ArrayLike) -> tuple[Floats, Floats, Floats, Floats]:
    """Events and totals of both arms over the design effect; not rounded.

    References
    ----------
    donner_klar_2000.
    """
    a, n1, c, n2 = (x / np.asarray(effect, dtype=np.float64) for x in table.floats())
    return a, n1, c, n2


def effective_risk_ratio(table: Fourfold, effect: ArrayLike, confidence_level: float = 0.95) -> Interval:
    """Log interval of the risk ratio with its standard error times the root of the design effect.

    The same as the log interval of the effective counts.

    References
    ----------
    katz_1978; donner_klar_2000.
    """
    a, n1, c, n2 = effective_counts(table, effect)
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
        half = normal_quantile(confidence_level) * np.sqrt((n1 - a) / (a * n1) + (n2 - c) / (c * n2))
        ratio = a * n2 / (c * n1)
        return Interval(ratio * np.exp(-half), ratio * np.exp(half))
