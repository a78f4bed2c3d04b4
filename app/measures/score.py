"""Score intervals for the risk difference, the risk ratio and the odds ratio, as one scalar root each.

The textbook form fits the nuisance risk anew at every trial value of the parameter. Here the constrained
fit is written by its Lagrange multiplier, so that the nuisance is a formula and each limit is the single
root of a smooth function, found by Newton's method. Only lower limits are coded: the upper limit of a
difference is minus the lower one of the swapped arms, of a ratio its reciprocal.

With `zz` the squared normal quantile, times N/(N-1) for Miettinen-Nurminen. The three Miettinen-Nurminen
intervals exclude no effect for exactly the tables whose N-1 chi-squared exceeds z squared.

References: miettinen_nurminen_1985; mee_1984; koopman_1984; cornfield_1956.
"""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from app.measures.fourfold import Floats, Fourfold
from app.measures.interval import BLOCK, Interval, normal_quantile
from app.measures.roots import Equation, root_in_bracket

_Lower = Callable[[Floats, Floats, Floats, Floats, Floats], Floats]


def _difference_equation(multiplier: Floats, terms: tuple[Floats, ...]) -> tuple[Floats, Floats]:
    """Multiplier * sqrt(variance) - sqrt(zz), and its slope.

    In each arm the constrained risk r of the counted people m among n solves
    L r^2 + (n - L) r - m = 0, taken in the form that does not cancel.
    """
    goal, m1, n1, m2, n2 = terms
    variance = np.zeros_like(multiplier)
    growth = np.zeros_like(multiplier)
    for m, n in ((m1, n1), (m2, n2)):
        gap = multiplier - n
        root = np.sqrt(gap * gap + 4.0 * multiplier * m)
        half = 0.5 * (np.abs(gap) + root)
        risk = np.where(gap > 0.0, half, m) / np.where(gap > 0.0, multiplier, half)
        spread = risk * (2.0 * (n - m) / (multiplier + n + root))
        variance += spread / n
        growth += spread / root
    shift = multiplier * variance
    scale = np.sqrt(multiplier * shift)
    with np.errstate(divide="ignore", invalid="ignore"):  # nobody counted yet: no slope, so bisect
        return scale - goal, 0.5 * (shift + multiplier * growth) / scale


def _lower_difference(a: Floats, n1: Floats, c: Floats, n2: Floats, zz: Floats) -> Floats:
    reach = a / n1 + (n2 - c) / n2  # the difference plus 1: 0 means that the limit is -1
    limit = np.full_like(a, -1.0)
    rows = reach > 0.0
    if not rows.all():
        a, n1, c, n2, zz, reach = (x[rows] for x in (a, n1, c, n2, zz, reach))
    goal = np.sqrt(zz)
    low = goal / np.sqrt(0.25 / n1 + 0.25 / n2)
    high = np.maximum((zz + n1 + n2) / reach, low)
    p1, p2 = (a + 0.5) / (n1 + 1.0), (c + 0.5) / (n2 + 1.0)
    start = np.clip(goal / np.sqrt(p1 * (1.0 - p1) / n1 + p2 * (1.0 - p2) / n2), low, high)
    multiplier = root_in_bracket(_difference_equation, start, low, high, (goal, n1 - a, n1, c, n2))
    # The point estimate less zz / L, not the difference of two fitted risks: nothing cancels.
    limit[rows] = (a * n2 - c * n1) / (n1 * n2) - zz / multiplier
    return limit


def _ratio_equation(shift: Floats, terms: tuple[Floats, ...]) -> tuple[Floats, Floats]:
    """shift^2 - zz H(shift), H the parallel sum of two linear functions, and its slope."""
    zz, a, c, without1, without2 = terms
    x, y = a - shift, c + shift
    with np.errstate(divide="ignore", invalid="ignore"):
        weight = without1 * y + without2 * x
        harmonic = np.where(weight > 0.0, x * y / weight, 0.0)
        slope = np.where(weight > 0.0, (without2 * x * x - without1 * y * y) / (weight * weight), 0.0)
    return shift * shift - zz * harmonic, 2.0 * shift - zz * slope


def _lower_ratio(a: Floats, n1: Floats, c: Floats, n2: Floats, zz: Floats) -> Floats:
    limit = np.zeros_like(a)
    without2 = (n2 - c) / n2

    full = (a > 0.0) & (a == n1)
    if full.any():
        n, m, k, w, q = n1[full], c[full], n2[full], without2[full], zz[full]
        rest = q - n * n * w / (m + n)
        with np.errstate(divide="ignore", invalid="ignore"):
            ratio = q / w
            shift = 0.5 * (ratio + np.sqrt(ratio * ratio + 4.0 * ratio * m))
            limit[full] = np.where(rest > 0.0, n / (n + rest) * (n + k) / (m + n), (k + shift) / (m + shift))

    rows = (a > 0.0) & (a < n1)
    if rows.any():
        if not rows.all():
            a, n1, c, n2, zz, without2 = (x[rows] for x in (a, n1, c, n2, zz, without2))
        terms = (zz, a, c, (n1 - a) / n1, without2)
        near = _ratio_equation(np.zeros_like(a), (zz, a + 0.25, c + 0.25, (n1 - a + 0.25) / n1, (n2 - c + 0.25) / n2))
        shift = _from_the_right(_ratio_equation, near[0], zz, a, terms)
        limit[rows] = (a - shift) * (n2 + shift) / ((n1 - shift) * (c + shift))
    return limit


def _odds_equation(shift: Floats, terms: tuple[Floats, ...]) -> tuple[Floats, Floats]:
    """The same equation for the odds ratio: each arm's term is a product of its two moved cells."""
    zz, a, n1, c, n2 = terms
    b, d = n1 - a, n2 - c
    first = (a - shift) * (b + shift) / n1
    second = (c + shift) * (d - shift) / n2
    total = first + second
    with np.errstate(divide="ignore", invalid="ignore"):
        harmonic = np.where(total > 0.0, first * second / total, 0.0)
        slope = (a - b - 2.0 * shift) / n1 * second * second + (d - c - 2.0 * shift) / n2 * first * first
        slope = np.where(total > 0.0, slope / (total * total), 0.0)
    return shift * shift - zz * harmonic, 2.0 * shift - zz * slope


def _lower_odds(a: Floats, n1: Floats, c: Floats, n2: Floats, zz: Floats) -> Floats:
    limit = np.zeros_like(a)
    rows = np.minimum(a, n2 - c) > 0.0
    if rows.any():
        if not rows.all():
            a, n1, c, n2, zz = (x[rows] for x in (a, n1, c, n2, zz))
        terms = (zz, a, n1, c, n2)
        near = _odds_equation(np.zeros_like(a), (zz, a + 0.25, n1 + 0.5, c + 0.25, n2 + 0.5))
        end = np.minimum(a, n2 - c)
        shift = _from_the_right(_odds_equation, near[0], zz, end, terms)
        limit[rows] = (a - shift) * (n2 - c - shift) / ((n1 - a + shift) * (c + shift))
    return limit


def _from_the_right(function: Equation, at_zero: Floats, zz: Floats, end: Floats, terms: tuple[Floats, ...]) -> Floats:
    """The positive root of a convex function in (0, end], reached by Newton's method from its right.

    `at_zero` is minus zz H at the cells plus a quarter, which places the first guess. From a point left
    of the root Newton can fall into the trivial root 0, so such a start is replaced by `end`, where the
    function is positive.
    """
    start = np.sqrt(np.maximum(-at_zero, 0.0)) + 0.25 * zz
    start = np.where(start < end, start, end)
    value, _ = function(start, terms)
    start = np.where(value >= 0.0, start, end)
    return root_in_bracket(function, start, np.zeros_like(end), end, terms)


def _limits(table: Fourfold, confidence_level: float, corrected: bool, lower: _Lower) -> tuple[Floats, Floats]:
    """Lower limits of the tables and of the tables with swapped arms, block by block."""
    z = normal_quantile(confidence_level)
    a, n1, c, n2 = (np.ravel(x) for x in table.floats())
    low, high = np.empty_like(a), np.empty_like(a)
    for first in range(0, a.size, BLOCK):
        block = slice(first, first + BLOCK)
        cells = a[block], n1[block], c[block], n2[block]
        total = cells[1] + cells[3]
        zz = z * z * (total / (total - 1.0) if corrected else np.ones_like(total))
        low[block] = lower(*cells, zz)
        high[block] = lower(cells[2], cells[3], cells[0], cells[1], zz)
    return low.reshape(table.shape), high.reshape(table.shape)


def _ratio_interval(table: Fourfold, confidence_level: float, corrected: bool, lower: _Lower) -> Interval:
    low, swapped = _limits(table, confidence_level, corrected, lower)
    with np.errstate(divide="ignore"):
        return Interval(low, 1.0 / swapped)


def miettinen_nurminen_difference(table: Fourfold, confidence_level: float = 0.95) -> Interval:
    """Score interval for the risk difference, variance times N/(N-1). The default.

    Returns
    -------
    Interval
        Limits of the risk difference, shape of the table.

    Edge cases
    ----------
    No events at all, or all events: finite about 0. Difference of 1: high is exactly 1; of -1: low
    exactly -1.

    References
    ----------
    miettinen_nurminen_1985, equations 8 and 9.
    """
    low, swapped = _limits(table, confidence_level, True, _lower_difference)
    return Interval(low, -swapped)


def miettinen_nurminen_ratio(table: Fourfold, confidence_level: float = 0.95) -> Interval:
    """Score interval for the risk ratio, variance times N/(N-1). The default.

    Returns
    -------
    Interval
        Limits of the risk ratio, shape of the table.

    Edge cases
    ----------
    No events in the intervention arm: low 0; in the comparator: high inf; in neither: (0, inf).
    All events in both arms: a finite interval about 1.

    References
    ----------
    miettinen_nurminen_1985, equations 10 and 11.
    """
    return _ratio_interval(table, confidence_level, True, _lower_ratio)


def mee(table: Fourfold, confidence_level: float = 0.95) -> Interval:
    """Score interval for the risk difference without the factor N/(N-1); edge cases as for the corrected one.

    References
    ----------
    mee_1984; farrington_manning_1990.
    """
    low, swapped = _limits(table, confidence_level, False, _lower_difference)
    return Interval(low, -swapped)


def cornfield_score(table: Fourfold, confidence_level: float = 0.95) -> Interval:
    """Score interval for the odds ratio without the factor N/(N-1); edge cases as for the corrected one.

    References
    ----------
    cornfield_1956.
    """
    return _ratio_interval(table, confidence_level, False, _lower_odds)


def koopman(table: Fourfold, confidence_level: float = 0.95) -> Interval:
    """Score interval for the risk ratio without the factor N/(N-1); edge cases as for the corrected one.

    References
    ----------
    koopman_1984.
    """
    return _ratio_interval(table, confidence_level, False, _lower_ratio)


def miettinen_nurminen_odds(table: Fourfold, confidence_level: float = 0.95) -> Interval:
    """Score interval for the odds ratio, variance times N/(N-1). The default.

    Returns
    -------
    Interval
        Limits of the odds ratio, shape of the table.

    Edge cases
    ----------
    No events in the intervention arm or no non-events in the comparator: low 0. No events in the
    comparator or no non-events in the intervention arm: high inf.

    References
    ----------
    miettinen_nurminen_1985, section 4.
    """
    return _ratio_interval(table, confidence_level, True, _lower_odds)
