"""What print may hold by a known fault of a widely used routine. For checking print only, never a result."""

from __future__ import annotations

import numpy as np

from app.measures.difference import risk_difference
from app.measures.fourfold import Floats, Fourfold
from app.measures.interval import Interval, blockwise, normal_quantile

_HALVINGS = 60


def _statistic(difference: Floats, table: tuple[Floats, Floats, Floats, Floats]) -> Floats:
    """Squared score statistic from the cubic with `c D` where `n2 D` belongs; nan where it has no fit."""
    a, n1, c, n2 = table
    total, m = n1 + n2, a + c
    square = (n1 + 2.0 * n2) * difference - total - m
    linear = (c * difference - total - 2.0 * c) * difference + m
    constant = c * difference * (1.0 - difference)
    third = square / (3.0 * total)
    with np.errstate(all="ignore"):
        q = third**3 - linear * square / (6.0 * total**2) + constant / (2.0 * total)
        p = np.sign(q) * np.sqrt(third**2 - linear / (3.0 * total))
        angle = (np.pi + np.arccos(q / p**3)) / 3.0
        second = 2.0 * p * np.cos(angle) - third
        first = second + difference
        variance = (first * (1.0 - first) / n1 + second * (1.0 - second) / n2) * total / (total - 1.0)
        return np.asarray((a / n1 - c / n2 - difference) ** 2 / variance)


@blockwise
def score_known_fault(table: Fourfold, confidence_level: float = 0.95) -> Interval:
    """Score interval of the risk difference whose restricted fit has one wrong term.

    56/70 v 48/80 gives 0.0526 to 0.3440 instead of 0.0528 to 0.3382 (tests/checks/METHODS.md, trap 1).

    Edge cases
    ----------
    Undefined (nan) where the wrong cubic has no real fit along the way.

    References
    ----------
    miettinen_nurminen_1985.
    """
    cells = table.floats()
    goal = normal_quantile(confidence_level) ** 2
    estimate = risk_difference(table)
    ends = []
    for edge in (-1.0, 1.0):
        inside, outside = estimate.copy(), np.full_like(estimate, edge)
        sound = np.ones(estimate.shape, dtype=np.bool_)
        for _ in range(_HALVINGS):
            middle = (inside + outside) / 2.0
            value = _statistic(middle, cells)
            sound &= ~np.isnan(value) & (value >= 0.0)
            beyond = value > goal
            inside, outside = np.where(beyond, inside, middle), np.where(beyond, middle, outside)
        ends.append(np.where(sound, inside, np.nan))
    return Interval(ends[0], ends[1])
