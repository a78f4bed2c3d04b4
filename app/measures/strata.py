"""Several fourfold tables of one comparison: Mantel-Haenszel estimates, and tests of effect and of likeness."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
from scipy import special

from app.measures.fourfold import Floats, Fourfold
from app.measures.interval import Interval, normal_quantile


class Pooled(NamedTuple):
    """Pooled estimate, the standard error on its scale (logarithms for ratios), and the interval."""

    estimate: float
    standard_error: float
    interval: Interval


class StrataTest(NamedTuple):
    """Chi-squared statistic, degrees of freedom, p; nan where no stratum informs."""

    statistic: float
    df: int
    p: float


def informative(strata: Fourfold) -> Fourfold:
    """The strata (1-d) in which somebody but not everybody has the event."""
    m = strata.events_intervention + strata.events_comparator
    keep = (m > 0) & (m < strata.total_intervention + strata.total_comparator)
    a, n1, c, n2 = (x[keep].astype(np.int64) for x in strata.floats())
    return Fourfold(a, n1, c, n2)


def _cells(strata: Fourfold) -> tuple[Floats, Floats, Floats, Floats, Floats]:
    a, n1, c, n2 = strata.floats()
    return a, n1, c, n2, n1 + n2


def _log_pooled(estimate: float, variance: float, confidence_level: float) -> Pooled:
    if not (estimate > 0.0 and np.isfinite(estimate)):
        nothing = np.asarray(np.nan)
        return Pooled(estimate, float("nan"), Interval(nothing, nothing))
    error = float(np.sqrt(variance))
    half = normal_quantile(confidence_level) * error
    with np.errstate(over="ignore"):
        return Pooled(estimate, error, Interval(np.asarray(estimate * np.exp(-half)), np.asarray(estimate * np.exp(half))))


def _quotient(above: float, below: float) -> float:
    with np.errstate(divide="ignore", invalid="ignore"):
        return float(np.float64(above) / np.float64(below))


def mh_rbg(strata: Fourfold, confidence_level: float = 0.95) -> Pooled:
    """Mantel-Haenszel odds ratio with the Robins-Breslow-Greenland variance of its logarithm.

    Edge cases
    ----------
    A Mantel-Haenszel sum of 0: no interval (nan).

    References
    ----------
    mantel_haenszel_1959; robins_breslow_greenland_1986.
    """
    a, n1, c, n2, total = _cells(strata)
    b, d = n1 - a, n2 - c
    r, s = a * d / total, b * c / total
    p, q = (a + d) / total, (b + c) / total
    big_r, big_s = float(r.sum()), float(s.sum())
    with np.errstate(divide="ignore", invalid="ignore"):
        variance = ((p * r).sum() / (2.0 * big_r**2) if big_r else np.inf) + (
            (p * s + q * r).sum() / (2.0 * big_r * big_s) + (q * s).sum() / (2.0 * big_s**2) if big_r and big_s else np.inf
        )
    return _log_pooled(_quotient(big_r, big_s), float(variance), confidence_level)


def mh_greenland_robins_ratio(strata: Fourfold, confidence_level: float = 0.95) -> Pooled:
    """Mantel-Haenszel risk ratio with the Greenland-Robins variance of its logarithm.

    References
    ----------
    mantel_haenszel_1959; greenland_robins_1985.
    """
    a, n1, c, n2, total = _cells(strata)
    first, second = float((a * n2 / total).sum()), float((c * n1 / total).sum())
    spread = float(((n1 * n2 * (a + c) - a * c * total) / total**2).sum())
    variance = spread / (first * second) if first and second else np.inf
    return _log_pooled(_quotient(first, second), variance, confidence_level)


def _difference(variance: float, estimate: float, confidence_level: float) -> Pooled:
    error = float(np.sqrt(max(variance, 0.0)))  # a variance of 0 may come out below it by rounding
    half = normal_quantile(confidence_level) * error
    return Pooled(estimate, error, Interval(np.asarray(estimate - half), np.asarray(estimate + half)))


def _mh_difference(strata: Fourfold) -> tuple[float, float]:
    """Mantel-Haenszel risk difference and the sum of its weights n1 n2 / N."""
    a, n1, c, n2, total = _cells(strata)
    weights = float((n1 * n2 / total).sum())
    return float(((a * n2 - c * n1) / total).sum()) / weights, weights


def mh_greenland_robins_difference(strata: Fourfold, confidence_level: float = 0.95) -> Pooled:
    """Mantel-Haenszel risk difference with the Greenland-Robins variance.

    References
    ----------
    greenland_robins_1985.
    """
    a, n1, c, n2, total = _cells(strata)
    estimate, weights = _mh_difference(strata)
    spread = (a * (n1 - a) * n2**3 + c * (n2 - c) * n1**3) / (n1 * n2 * total**2)
    return _difference(float(spread.sum()) / weights**2, estimate, confidence_level)


def mh_sato(strata: Fourfold, confidence_level: float = 0.95) -> Pooled:
    """Mantel-Haenszel risk difference with Sato's variance.

    References
    ----------
    sato_1989.
    """
    a, n1, c, n2, total = _cells(strata)
    estimate, weights = _mh_difference(strata)
    p = (n1**2 * c - n2**2 * a + n1 * n2 * (n2 - n1) / 2.0) / total**2
    q = (a * (n2 - c) + c * (n1 - a)) / (2.0 * total)
    return _difference((estimate * float(p.sum()) + float(q.sum())) / weights**2, estimate, confidence_level)


def _chi_squared(statistic: float, df: int) -> StrataTest:
    return StrataTest(statistic, df, float(special.gammaincc(df / 2.0, statistic / 2.0)))


_NONE = StrataTest(float("nan"), 0, float("nan"))


def _cmh(strata: Fourfold, correction: float) -> StrataTest:
    a, n1, c, n2, total = _cells(informative(strata))
    if not a.size:
        return _NONE
    m = a + c
    gap = max(0.0, abs(float((a - n1 * m / total).sum())) - correction)
    variance = float((n1 * n2 * m * (total - m) / (total**2 * (total - 1.0))).sum())
    return _chi_squared(gap * gap / variance, 1)


def cmh(strata: Fourfold) -> StrataTest:
    """Cochran-Mantel-Haenszel test of no effect in any stratum.

    References
    ----------
    mantel_haenszel_1959.
    """
    return _cmh(strata, 0.0)


def cmh_cc(strata: Fourfold) -> StrataTest:
    """The same with continuity correction, clipped at 0.

    References
    ----------
    mantel_haenszel_1959.
    """
    return _cmh(strata, 0.5)


def _fitted(strata: Fourfold, odds_ratio: float) -> Floats:
    """Events of the intervention arm expected in each stratum under a common odds ratio."""
    a, n1, c, n2, _ = _cells(strata)
    m = a + c
    linear = n2 - m + odds_ratio * (n1 + m)
    square = odds_ratio - 1.0
    root = np.sqrt(np.maximum(linear * linear - 4.0 * square * odds_ratio * n1 * m, 0.0))
    # The admissible root in the form that does not cancel, whatever the sign of the square term.
    return np.asarray(2.0 * odds_ratio * n1 * m / (linear + root))


def _breslow_day(strata: Fourfold, tarone: bool) -> StrataTest:
    useful = informative(strata)
    common = mh_rbg(strata).estimate
    df = useful.events_intervention.size - 1
    if df < 1 or not (0.0 < common < np.inf):
        return _NONE
    a, n1, c, n2, _ = _cells(useful)
    fit = _fitted(useful, common)
    m = a + c
    with np.errstate(divide="ignore"):
        variance = 1.0 / (1.0 / fit + 1.0 / (n1 - fit) + 1.0 / (m - fit) + 1.0 / (n2 - m + fit))
    statistic = float(((a - fit) ** 2 / variance).sum())
    if tarone:
        statistic = max(0.0, statistic - float((a - fit).sum()) ** 2 / float(variance.sum()))
    return _chi_squared(statistic, df)


def breslow_day(strata: Fourfold) -> StrataTest:
    """Breslow-Day test that the odds ratio is the same in all strata.

    References
    ----------
    breslow_day_1980.
    """
    return _breslow_day(strata, tarone=False)


def breslow_day_tarone(strata: Fourfold) -> StrataTest:
    """The same with Tarone's adjustment for the estimated common odds ratio.

    References
    ----------
    tarone_1985.
    """
    return _breslow_day(strata, tarone=True)
