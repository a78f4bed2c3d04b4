"""Risk difference: risk in the intervention arm minus risk in the comparator arm [-1 to 1]."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from numpy.typing import ArrayLike

from app.measures.fourfold import Floats, Fourfold
from app.measures.interval import Interval, blockwise, normal_quantile
from app.measures.proportion import wilson, wilson_cc


def risk_difference(table: Fourfold) -> Floats:
    """Risk difference, from the exact integer cross product (no cancellation between near-equal risks)."""
    _, n1, _, n2 = table.floats()
    return table.determinant / (n1 * n2)


@blockwise
def newcombe(table: Fourfold, confidence_level: float = 0.95) -> Interval:
    """Hybrid score interval: the two Wilson intervals combined by squares.

    Sound in small samples and with empty cells; a closed form. Swapping the arms flips the signs exactly.

    Returns
    -------
    Interval
        Limits of the risk difference, raw, shape of the table.

    Edge cases
    ----------
    No events at all, or all events: a finite interval about 0.

    Notes
    -----
    low = RD - sqrt((p1 - l1)^2 + (u2 - p2)^2), high = RD + sqrt((u1 - p1)^2 + (p2 - l2)^2).

    References
    ----------
    newcombe_1998_difference, method 10.
    """
    return _hybrid(table, wilson, confidence_level)


@blockwise
def wald(table: Fourfold, confidence_level: float = 0.95) -> Interval:
    """Plain interval RD -+ z sqrt(p1 q1/n1 + p2 q2/n2): short of its level below about 200 people an arm.

    Edge cases
    ----------
    Both arms at 0 or all events: no width.

    References
    ----------
    newcombe_1998_difference, method 1.
    """
    half = normal_quantile(confidence_level) * _wald_error(table)
    return _about(risk_difference(table), half)


@blockwise
def wald_cc(table: Fourfold, confidence_level: float = 0.95) -> Interval:
    """The plain interval made wider by (1/n1 + 1/n2)/2 on each side. For checking print.

    References
    ----------
    newcombe_1998_difference, method 2.
    """
    _, n1, _, n2 = table.floats()
    half = normal_quantile(confidence_level) * _wald_error(table) + (1.0 / n1 + 1.0 / n2) / 2.0
    return _about(risk_difference(table), half)


@blockwise
def wald_pooled(table: Fourfold, confidence_level: float = 0.95) -> Interval:
    """The plain interval with the standard error of the test of no difference. For checking print.

    The pooled risk holds only if there is no difference, which an interval must not suppose.

    References
    ----------
    newcombe_1998_difference.
    """
    a, n1, c, n2 = table.floats()
    pooled = (a + c) / (n1 + n2)
    half = normal_quantile(confidence_level) * np.sqrt(pooled * (1.0 - pooled) * (1.0 / n1 + 1.0 / n2))
    return _about(risk_difference(table), half)


@blockwise
def agresti_caffo(table: Fourfold, confidence_level: float = 0.95) -> Interval:
    """Plain interval after adding one event and one non-event to each arm; the estimate stays raw.

    Edge cases
    ----------
    Limits may leave -1 to 1; never without width.

    References
    ----------
    agresti_caffo_2000.
    """
    a, n1, c, n2 = table.floats()
    p1, p2 = (a + 1.0) / (n1 + 2.0), (c + 1.0) / (n2 + 2.0)
    half = normal_quantile(confidence_level) * np.sqrt(p1 * (1.0 - p1) / (n1 + 2.0) + p2 * (1.0 - p2) / (n2 + 2.0))
    return _about(p1 - p2, half)


@blockwise
def newcombe_cc(table: Fourfold, confidence_level: float = 0.95) -> Interval:
    """The hybrid score interval from Wilson intervals with continuity correction.

    References
    ----------
    newcombe_1998_difference, method 11.
    """
    return _hybrid(table, wilson_cc, confidence_level)


def _about(center: Floats, half_width: Floats) -> Interval:
    return Interval(center - half_width, center + half_width)


def _wald_error(table: Fourfold) -> Floats:
    """Standard error from each arm's own risk, its variance written a b / n^3."""
    a, n1, c, n2 = table.floats()
    return np.asarray(np.sqrt(a * (n1 - a) / n1**3 + c * (n2 - c) / n2**3))


def _hybrid(table: Fourfold, limits: Callable[[ArrayLike, ArrayLike, float], Interval], confidence_level: float) -> Interval:
    """Two intervals of single risks combined by squares."""
    p1, p2 = table.risk_intervention, table.risk_comparator
    l1, u1 = limits(table.events_intervention, table.total_intervention, confidence_level)
    l2, u2 = limits(table.events_comparator, table.total_comparator, confidence_level)
    difference = risk_difference(table)
    # Plain square roots: np.hypot costs half as much again and these squares cannot overflow.
    low = difference - np.sqrt((p1 - l1) ** 2 + (u2 - p2) ** 2)
    high = difference + np.sqrt((u1 - p1) ** 2 + (p2 - l2) ** 2)
    return Interval(low, high)
