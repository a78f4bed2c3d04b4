"""Risk difference: risk in the intervention arm minus risk in the comparator arm [-1 to 1]."""

from __future__ import annotations

import numpy as np

from app.measures.fourfold import Floats, Fourfold
from app.measures.interval import Interval
from app.measures.proportion import wilson


def risk_difference(table: Fourfold) -> Floats:
    """Risk difference, from the exact integer cross product (no cancellation between near-equal risks)."""
    _, n1, _, n2 = table.floats()
    return table.determinant / (n1 * n2)


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
    p1, p2 = table.risk_intervention, table.risk_comparator
    l1, u1 = wilson(table.events_intervention, table.total_intervention, confidence_level)
    l2, u2 = wilson(table.events_comparator, table.total_comparator, confidence_level)
    difference = risk_difference(table)
    # Plain square roots: np.hypot costs half as much again and these squares cannot overflow.
    low = difference - np.sqrt((p1 - l1) ** 2 + (u2 - p2) ** 2)
    high = difference + np.sqrt((u1 - p1) ** 2 + (p2 - l2) ** 2)
    return Interval(low, high)
