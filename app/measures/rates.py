"""Rate ratio and rate difference of two arms, with their intervals."""

from __future__ import annotations

import numpy as np

from app.measures import proportion
from app.measures.fourfold import Floats
from app.measures.interval import Interval, normal_quantile
from app.measures.persontime import PersonTime, garwood_exact, rate_score
from app.measures.roots import root_in_bracket


def rate_ratio(data: PersonTime) -> Floats:
    """Rate ratio; no events in the comparator gives inf, in neither arm nan."""
    e1, t1, e2, t2 = data.floats()
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.asarray(e1 * t2 / (e2 * t1))


def rate_difference(data: PersonTime) -> Floats:
    """Rate difference, per unit of person-time."""
    e1, t1, e2, t2 = data.floats()
    return np.asarray((e1 * t2 - e2 * t1) / (t1 * t2))


def _from_share(data: PersonTime, low: Floats, other_low: Floats) -> Interval:
    """Limits of the ratio from the lower limits of both arms' shares of the events."""
    _, t1, _, t2 = data.floats()
    with np.errstate(divide="ignore", invalid="ignore"):
        return Interval(low / (1.0 - low) * t2 / t1, (1.0 - other_low) / other_low * t2 / t1)


def _share_interval(data: PersonTime, method: proportion.Method, confidence_level: float) -> Interval:
    """A method for one proportion, used on the intervention arm's share of all events."""
    e1, _, e2, _ = data.floats()
    total = np.maximum(e1 + e2, 1.0)
    found = _from_share(data, method(e1, total, confidence_level).low, method(e2, total, confidence_level).low)
    some = e1 + e2 > 0
    return Interval(np.where(some, found.low, 0.0), np.where(some, found.high, np.inf))


def ratio_log_wald(data: PersonTime, confidence_level: float = 0.95) -> Interval:
    """Log interval of the rate ratio: exp(ln IRR -+ z sqrt(1/e1 + 1/e2)).

    Edge cases
    ----------
    No events in an arm: undefined (nan).

    References
    ----------
    rothman_2008.
    """
    e1, _, e2, _ = data.floats()
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
        half = normal_quantile(confidence_level) * np.sqrt(1.0 / e1 + 1.0 / e2)
        factor = np.where((e1 > 0) & (e2 > 0), np.exp(half), np.nan)
        return Interval(rate_ratio(data) / factor, rate_ratio(data) * factor)


def exact_cond(data: PersonTime, confidence_level: float = 0.95) -> Interval:
    """Exact conditional interval of the rate ratio, from the split of the events.

    Edge cases
    ----------
    No events in the intervention arm: low 0; in the comparator: high inf; in neither: (0, inf).

    References
    ----------
    clopper_pearson_1934; rothman_2008.
    """
    return _share_interval(data, proportion.clopper_pearson, confidence_level)


def ratio_mid_p(data: PersonTime, confidence_level: float = 0.95) -> Interval:
    """Conditional mid-P interval of the rate ratio. The default; edges as the exact one.

    References
    ----------
    berry_armitage_1995; rothman_2008.
    """
    return _share_interval(data, proportion.mid_p, confidence_level)


def ratio_score(data: PersonTime, confidence_level: float = 0.95) -> Interval:
    """Wilson interval of the split of the events, as a rate ratio; edges as the exact one.

    References
    ----------
    wilson_1927; rothman_2008.
    """
    return _share_interval(data, proportion.wilson, confidence_level)


def difference_wald(data: PersonTime, confidence_level: float = 0.95) -> Interval:
    """Plain interval of the rate difference: IRD -+ z sqrt(e1/t1^2 + e2/t2^2).

    Edge cases
    ----------
    No events at all: no width.

    References
    ----------
    rothman_2008.
    """
    e1, t1, e2, t2 = data.floats()
    half = normal_quantile(confidence_level) * np.sqrt(e1 / t1**2 + e2 / t2**2)
    difference = rate_difference(data)
    return Interval(difference - half, difference + half)


def _hybrid(data: PersonTime, first: Interval, second: Interval) -> Interval:
    """Two intervals of single rates combined by squares."""
    e1, t1, e2, t2 = data.floats()
    r1, r2 = e1 / t1, e2 / t2
    difference = rate_difference(data)
    low = difference - np.sqrt((r1 - first.low) ** 2 + (second.high - r2) ** 2)
    return Interval(low, difference + np.sqrt((first.high - r1) ** 2 + (r2 - second.low) ** 2))


def mover_score_limits(data: PersonTime, confidence_level: float = 0.95) -> Interval:
    """Rate difference recovered from the score intervals of both rates. The default.

    References
    ----------
    donner_zou_2012.
    """
    e1, t1, e2, t2 = data.floats()
    return _hybrid(data, rate_score(e1, t1, confidence_level), rate_score(e2, t2, confidence_level))


def mover_garwood_limits(data: PersonTime, confidence_level: float = 0.95) -> Interval:
    """Rate difference recovered from the exact intervals of both rates.

    References
    ----------
    donner_zou_2012; garwood_1936.
    """
    e1, t1, e2, t2 = data.floats()
    return _hybrid(data, garwood_exact(e1, t1, confidence_level), garwood_exact(e2, t2, confidence_level))


def _difference_equation(multiplier: Floats, terms: tuple[Floats, ...]) -> tuple[Floats, Floats]:
    """(multiplier^2 variance - z^2) times what is left to t2, where the restricted fit has its pole; and its slope.

    Both restricted rates are formulas in the multiplier: e1/(t1 + L) and e2/(t2 - L).
    """
    zz, e1, t1, e2, t2 = terms
    left = t2 - multiplier
    first = e1 / (t1 * (t1 + multiplier))
    square = multiplier * multiplier
    value = square * (first * left + e2 / t2) - zz * left
    slope = 2.0 * multiplier * (first * left + e2 / t2) - square * first * (1.0 + left / (t1 + multiplier)) + zz
    return value, slope


def _lower_difference(e1: Floats, t1: Floats, e2: Floats, t2: Floats, z: float) -> Floats:
    """Lower score limit of the rate difference: the estimate less z^2 over the multiplier, which is at most t2."""
    zz = np.full_like(e1, z * z)
    start = np.minimum(z / np.sqrt(e1 / t1**2 + e2 / t2**2 + 1.0 / (t1 * t2)), 0.9 * t2)
    multiplier = root_in_bracket(_difference_equation, start, np.zeros_like(t2), t2, (zz, e1, t1, e2, t2))
    return np.asarray((e1 * t2 - e2 * t1) / (t1 * t2) - z * z / multiplier)


def difference_score(data: PersonTime, confidence_level: float = 0.95) -> Interval:
    """Score interval of the rate difference, each rate fitted under the restriction.

    Edge cases
    ----------
    No events at all: finite about 0.

    References
    ----------
    miettinen_nurminen_1985.
    """
    z = normal_quantile(confidence_level)
    e1, t1, e2, t2 = (np.ravel(x) for x in data.floats())
    low, swapped = _lower_difference(e1, t1, e2, t2, z), _lower_difference(e2, t2, e1, t1, z)
    return Interval(low.reshape(data.shape), -swapped.reshape(data.shape))
